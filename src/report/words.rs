//! Words that every format shares: verdicts, places, values, what a reader counts first.

use super::figures::{amount, figure};
use super::{FindingReport, FlowReport, LimitReport, Verdict};
use crate::diag::Severity;
use crate::flow::{Dimension, Quantity};

impl Verdict {
    /// In capitals, as headlines say it.
    pub fn word(self) -> &'static str {
        match self {
            Self::Pass => "PASS",
            Self::Fail => "FAIL",
            Self::Undecided => "UNDECIDED",
        }
    }
}

impl LimitReport {
    /// The verdict on it in a word.
    pub fn word(&self) -> &'static str {
        match self.holds {
            Some(true) => "holds",
            Some(false) => "broken",
            None => "cannot tell",
        }
    }

    /// The dimension of value and margin: that of the quantity it names.
    pub fn dimension(&self) -> Dimension {
        let name = self.text.split_whitespace().next().unwrap_or_default();
        let quantity = Quantity::ALL.iter().find(|quantity| quantity.name() == name);
        quantity.map_or(Dimension::One, |quantity| quantity.dimension())
    }

    /// Site and split: `32 nm in thin`; empty for a limit of the whole unsplit flow.
    pub fn place(&self) -> String {
        let site = self.site.as_deref().unwrap_or_default();
        match &self.split {
            Some(split) => format!("{site} in {split}").trim().to_owned(),
            None => site.to_owned(),
        }
    }

    /// The state or the figure that was held against it.
    pub fn shown_value(&self) -> Option<String> {
        let state = self.state.map(|state| state.name().to_owned());
        state.or_else(|| self.value.map(|value| figure(value, self.dimension())))
    }

    /// The margin with its unit, positive inside the limit.
    pub fn shown_margin(&self) -> Option<String> {
        self.margin.map(|margin| amount(margin, self.dimension()))
    }

    /// The limit, where the text alone does not say where: `delay <= 60 ps for bus (in thin)`.
    pub fn title(&self) -> String {
        let place = self.place();
        if place.is_empty() { self.text.clone() } else { format!("{} ({place})", self.text) }
    }
}

impl FindingReport {
    /// How grave in a word; a waived one is that first.
    pub fn word(&self) -> &'static str {
        match (self.waived, self.severity) {
            (true, _) => "waived",
            (false, Severity::Error) => "error",
            (false, Severity::Warning) => "warning",
            (false, Severity::Note) => "note",
        }
    }

    /// Where in the flow: `on 030 at 32 nm in thin`; empty when it is about the flow.
    pub fn place(&self) -> String {
        let words = [("on", &self.step), ("at", &self.site), ("in", &self.split)];
        let said = words.iter().filter_map(|(word, at)| Some(format!("{word} {}", at.as_ref()?)));
        said.collect::<Vec<_>>().join(" ")
    }

    /// The rule and where it fired.
    pub fn title(&self) -> String {
        format!("{} {}", self.rule, self.place()).trim_end().to_owned()
    }
}

impl FlowReport {
    /// What a reader counts first: limits, then findings by gravity.
    pub fn summary(&self) -> String {
        let limits = self.limits.len();
        let broken = self.limits.iter().filter(|limit| limit.holds == Some(false)).count();
        let untold = self.limits.iter().filter(|limit| limit.holds.is_none()).count();
        let mut parts = vec![match (broken, untold) {
            (0, 0) => format!("{limits} limits hold"),
            (_, 0) => format!("{broken} of {limits} limits broken"),
            _ => format!("{broken} of {limits} limits broken, {untold} cannot be told"),
        }];
        let count = |word| self.findings.iter().filter(|f| f.word() == word).count();
        let kinds = ["error", "warning", "note"].map(|word| counted(count(word), word));
        parts.extend(kinds.into_iter().flatten());
        parts.extend(counted(count("waived"), "waived finding"));
        parts.join(", ")
    }

    /// Names of the splits that were not judged; empty once any of them was.
    pub fn unjudged_splits(&self) -> &[String] {
        let judged = |split: &String| self.sites.iter().any(|s| s.split.as_ref() == Some(split));
        if self.splits.iter().any(judged) { &[] } else { &self.splits }
    }
}

/// `1 note`, `3 notes`; nothing for none.
pub(super) fn counted(count: usize, what: &str) -> Option<String> {
    match count {
        0 => None,
        1 => Some(format!("1 {what}")),
        _ => Some(format!("{count} {what}s")),
    }
}
