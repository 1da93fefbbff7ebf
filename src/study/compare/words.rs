//! Words that text, Markdown and HTML of a comparison share.

use super::{Change, Comparison, Edit, FigureChange, FindingChange, LimitChange, StatementChange};
use crate::flow::Dimension;
use crate::measure::Figure;
use crate::report::figures::figure;
use crate::report::{FindingReport, LimitReport};

impl Edit {
    pub(super) fn word(self) -> &'static str {
        match self {
            Self::Added => "added",
            Self::Removed => "removed",
            Self::Changed => "changed",
            Self::Moved => "moved",
            Self::Renumbered => "renumbered",
        }
    }
}

impl Change {
    pub(super) fn word(self) -> &'static str {
        match self {
            Self::New => "new",
            Self::Gone => "gone",
            Self::Changed => "changed",
            Self::WithinError => "within error",
            Self::Same => "same",
        }
    }
}

impl StatementChange {
    /// Section and key: `steps 030`.
    pub(super) fn place(&self) -> String {
        match &self.section {
            Some(section) => format!("{section} {}", self.key),
            None => self.key.clone(),
        }
    }
}

impl FigureChange {
    /// Site or net, and split.
    pub(super) fn place(&self) -> String {
        place(&self.place, self.split.as_deref())
    }

    /// Before, after, change; an empty text where one is missing.
    pub(super) fn cells(&self) -> [String; 3] {
        let shown = |value: Option<Figure>| {
            value.map(|value| figure(value, self.dimension)).unwrap_or_default()
        };
        let difference = match self.difference {
            // A difference of shares is in points; a sign tells a change from a value.
            Some(difference) => {
                let text = shown(Some(difference)).replace('%', "points");
                let rises = difference.value > 0.0;
                if rises { format!("+{text}") } else { text }
            }
            None => self.change.word().to_owned(),
        };
        [shown(self.before), shown(self.after), difference]
    }

    /// Shares fall and rise in points; all else also in percent of what it was.
    pub(super) fn relative(&self) -> Option<String> {
        let (before, difference) = (self.before?, self.difference?);
        let of = 100.0 * difference.value / before.value.abs();
        (self.dimension != Dimension::Share && of.is_finite()).then(|| format!("{of:+.1} %"))
    }
}

impl LimitChange {
    /// The limit as it is, or as it was.
    pub(super) fn limit(&self) -> Option<&LimitReport> {
        self.after.as_ref().or(self.before.as_ref())
    }

    /// Verdict and value, before and after: `holds, 48.9 ± 0.1 %`.
    pub(super) fn cells(&self) -> [String; 2] {
        let told = |limit: &Option<LimitReport>| {
            let limit = limit.as_ref()?;
            let value = limit.shown_value().map(|value| format!(", {value}"));
            Some(format!("{}{}", limit.word(), value.unwrap_or_default()))
        };
        [&self.before, &self.after].map(|limit| told(limit).unwrap_or_else(|| "–".to_owned()))
    }
}

impl FindingChange {
    /// The finding as it is, or as it was.
    pub(super) fn finding(&self) -> Option<&FindingReport> {
        self.after.as_ref().or(self.before.as_ref())
    }

    /// What happened to it: `new`, `gone`, `waived, was error`.
    pub(super) fn word(&self) -> String {
        match (&self.before, &self.after) {
            (Some(before), Some(after)) if before.word() != after.word() => {
                format!("{}, was {}", after.word(), before.word())
            }
            _ => self.change.word().to_owned(),
        }
    }
}

impl Comparison {
    /// How many figures changed, differ within their error, and are the same.
    pub(super) fn counts(&self) -> String {
        let count = |change| self.figures.iter().filter(|f| f.change == change).count();
        let all = [
            (Change::Changed, "changed"),
            (Change::WithinError, "within the numerical error"),
            (Change::Same, "the same"),
            (Change::New, "new"),
            (Change::Gone, "gone"),
        ];
        let told = all.into_iter().map(|(change, word)| (count(change), word));
        let told = told.filter(|(count, _)| *count > 0).map(|(n, word)| format!("{n} {word}"));
        let told: Vec<_> = told.collect();
        format!("{} figures: {}.", self.figures.len(), told.join(", "))
    }

    /// `PASS`, or `PASS → FAIL`.
    pub(super) fn verdicts(&self) -> String {
        let (before, after) = (self.before.verdict.word(), self.after.verdict.word());
        if before == after { after.to_owned() } else { format!("{before} → {after}") }
    }

    /// Whether nothing differs that one needs to look at.
    pub(super) fn is_quiet(&self) -> bool {
        self.statements.is_empty()
            && self.library.is_empty()
            && !self.limits.iter().any(|change| change.change.is_news())
            && !self.states.iter().any(|change| change.change.is_news())
            && !self.figures.iter().any(|change| change.change.is_news())
            && !self.findings.iter().any(|change| change.change.is_news())
    }
}

/// A site with its split.
pub(super) fn place(site: &str, split: Option<&str>) -> String {
    split.map_or_else(|| site.to_owned(), |split| format!("{site} in {split}"))
}
