//! What a rule is.

use super::{Context, Findings};
use crate::diag::Severity;

/// What a rule must know beside the flow and the library.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Needs {
    /// The order of the steps; the states of the spaces where it speaks of them.
    Order,
    /// What each step really meets, with the numbers of materials and processes.
    Material,
    /// The shapes of the grown section.
    Section,
}

impl Needs {
    /// As `explain` prints it.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Order => "order",
            Self::Material => "materials and processes",
            Self::Section => "section",
        }
    }
}

/// A number of a rule that a library file may set.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Threshold {
    /// Its key under the rule's name, unit included.
    pub key: &'static str,
    /// What holds when no library file says otherwise.
    pub default: f64,
    /// What it bounds.
    pub meaning: &'static str,
}

/// One rule: a line in the registry, a file, a page, a test.
pub struct Rule {
    /// It says the defect.
    pub name: &'static str,
    /// How grave its findings are by default; the gravest where it has several.
    pub severity: Severity,
    /// What it must know.
    pub needs: Needs,
    /// Its numbers.
    pub thresholds: &'static [Threshold],
    /// Rules that tell the same fact better: where one of them fires on the same step and
    /// site, this one is silent.
    pub yields_to: &'static [&'static str],
    /// Its page of the documentation.
    pub page: &'static str,
    /// The check of one variant; `None` where the rule speaks about a whole run.
    pub check: Option<fn(&Context<'_>, &mut Findings<'_>)>,
}

impl Rule {
    /// The first paragraph of its page, on one line.
    pub fn summary(&self) -> String {
        let mut paragraphs = self.page.split("\n\n").map(str::trim);
        let first = paragraphs.find(|text| !text.is_empty() && !text.starts_with('#'));
        first.unwrap_or_default().split_whitespace().collect::<Vec<_>>().join(" ")
    }
}
