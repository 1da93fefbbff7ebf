//! A comparison as data: exactly the JSON that `compare --format json` prints.

use schemars::JsonSchema;
use serde::Serialize;

use crate::flow::{Dimension, State};
use crate::measure::Figure;
use crate::report::{FindingReport, LimitReport, Verdict};

/// Version of the JSON form.
pub const SCHEMA_VERSION: u32 = 1;

/// Everything that differs between two judged flows.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct Comparison {
    /// Version of this form.
    pub schema: u32,
    /// Name and version of the program.
    pub tool: String,
    /// The older one.
    pub before: Side,
    /// The newer one.
    pub after: Side,
    /// Statements that differ, section by section; layout and comments count nothing.
    pub statements: Vec<StatementChange>,
    /// Numbers and words of the library that differ.
    pub library: Vec<LibraryChange>,
    /// All limits of either.
    pub limits: Vec<LimitChange>,
    /// States of all spaces of either.
    pub states: Vec<StateChange>,
    /// All figures of either.
    pub figures: Vec<FigureChange>,
    /// All findings of either.
    pub findings: Vec<FindingChange>,
}

/// One of the two.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct Side {
    /// A file, or a file at a revision.
    pub name: String,
    /// Name of the flow.
    pub flow: String,
    /// Its verdict.
    pub verdict: Verdict,
    /// Its limits and findings, counted.
    pub summary: String,
}

/// How a statement changed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize, JsonSchema)]
#[serde(rename_all = "lowercase")]
pub enum Edit {
    /// It is new.
    Added,
    /// It is gone.
    Removed,
    /// It says something else.
    Changed,
    /// It stands elsewhere among the statements that both have.
    Moved,
    /// It says the same under another operation number.
    Renumbered,
}

/// A statement that changed.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct StatementChange {
    /// Section: `wafer`, `steps`, `splits`, `nets`, `limits`, `waivers`; `null` above all sections.
    pub section: Option<String>,
    /// What it is known by: operation number, name, or first word.
    pub key: String,
    /// How it changed.
    pub edit: Edit,
    /// As it was.
    pub before: Option<Written>,
    /// As it is.
    pub after: Option<Written>,
}

/// A statement in the standard layout.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, JsonSchema)]
pub struct Written {
    /// Its line in the file, from 1.
    pub line: usize,
    /// What it says.
    pub text: String,
}

/// A key of the library that says something else.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, JsonSchema)]
pub struct LibraryChange {
    /// Material, process, rule, or `settings`.
    pub entry: String,
    /// Its key.
    pub key: String,
    /// What it said.
    pub before: Option<String>,
    /// What it says.
    pub after: Option<String>,
}

/// How one thing of two reports compares.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum Change {
    /// Only the newer one has it.
    New,
    /// Only the older one has it.
    Gone,
    /// They differ by more than their numerical errors.
    Changed,
    /// They differ, but not by more than their numerical errors.
    WithinError,
    /// They are the same.
    Same,
}

/// A limit, before and after.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct LimitChange {
    /// `changed` where the verdict flipped.
    pub change: Change,
    /// As it was judged.
    pub before: Option<LimitReport>,
    /// As it is judged.
    pub after: Option<LimitReport>,
}

/// The state of a space, before and after.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct StateChange {
    /// Split; `null` for the unsplit flow.
    pub split: Option<String>,
    /// Site.
    pub site: String,
    /// How it compares.
    pub change: Change,
    /// As it was; `null` when it cannot be told or is not there.
    pub before: Option<State>,
    /// As it is.
    pub after: Option<State>,
}

/// A figure, before and after.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct FigureChange {
    /// Split; `null` for the unsplit flow.
    pub split: Option<String>,
    /// Site or net.
    pub place: String,
    /// Quantity.
    pub quantity: String,
    /// Unit of the three figures.
    pub unit: String,
    /// Dimension, for those that print it.
    #[serde(skip)]
    pub(super) dimension: Dimension,
    /// How it compares.
    pub change: Change,
    /// As it was.
    pub before: Option<Figure>,
    /// As it is.
    pub after: Option<Figure>,
    /// After less before, both numerical errors included.
    pub difference: Option<Figure>,
}

/// A finding, before and after.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct FindingChange {
    /// `changed` where it is now waived, or no longer, or graver, or less grave.
    pub change: Change,
    /// As it was.
    pub before: Option<FindingReport>,
    /// As it is.
    pub after: Option<FindingReport>,
}

impl Change {
    /// Whether one needs to look.
    pub fn is_news(self) -> bool {
        matches!(self, Self::New | Self::Gone | Self::Changed)
    }

    /// Of two that may be missing: `compare` is asked where both are there.
    pub(super) fn of<T>(
        before: Option<&T>,
        after: Option<&T>,
        compare: impl Fn(&T, &T) -> Self,
    ) -> Self {
        match (before, after) {
            (Some(before), Some(after)) => compare(before, after),
            (None, Some(_)) => Self::New,
            (Some(_), None) => Self::Gone,
            (None, None) => Self::Same,
        }
    }
}
