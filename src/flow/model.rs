//! The resolved flow. Every material and process exists in the library, every amount has its
//! unit as a type, every site is one of the wafer's.

use std::sync::Arc;

use super::{Quantity, Site, Step, Wafer};
use crate::library::{Library, MaterialId};
use crate::source::{Source, Span, Spanned};
use crate::units::{Amount, Capacitance, Length, Resistance, Share};

/// A resolved flow.
#[derive(Debug, Clone)]
pub struct Flow {
    /// Its name.
    pub name: String,
    /// Its title, when it has one.
    pub title: Option<String>,
    /// The text that it was read from.
    pub source: Arc<Source>,
    /// The library that its names were resolved in.
    pub library: Arc<Library>,
    /// The unsplit flow first, then the splits in the order of the text.
    pub variants: Vec<Variant>,
    /// Nets.
    pub nets: Vec<Net>,
    /// The conducting plane above the finished surface, for the electrical figures only.
    pub next_level: Option<NextLevel>,
    /// Limits, in the order of the text.
    pub limits: Vec<Limit>,
    /// Waivers, in the order of the text.
    pub waivers: Vec<Waiver>,
}

/// The wafer and the steps of the unsplit flow, or of one split.
#[derive(Debug, Clone)]
pub struct Variant {
    /// Name of the split; `None` for the unsplit flow.
    pub split: Option<Spanned<String>>,
    /// The wafer as the module finds it.
    pub wafer: Wafer,
    /// The steps, in process order.
    pub steps: Vec<Step>,
}

impl Variant {
    /// All sites of this variant's wafer: arrays in the order of the text, then rows.
    pub fn sites(&self) -> Vec<Site> {
        self.wafer.sites()
    }
}

/// A net.
#[derive(Debug, Clone)]
pub struct Net {
    /// Its name.
    pub name: String,
    /// Its length.
    pub length: Amount<Length>,
    /// Its spaces with their shares, which sum to one.
    pub at: Vec<(Site, Share)>,
    /// Resistance of its driver.
    pub driver: Amount<Resistance>,
    /// Capacitance of its load.
    pub load: Amount<Capacitance>,
    /// Where it stands.
    pub span: Span,
}

/// A conducting plane above the highest point of the finished surface.
#[derive(Debug, Clone)]
pub struct NextLevel {
    /// How far above.
    pub distance: Amount<Length>,
    /// The material between.
    pub material: MaterialId,
    /// Where it stands.
    pub span: Span,
}

/// State of a space.
#[derive(
    Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, serde::Serialize, schemars::JsonSchema,
)]
#[serde(rename_all = "lowercase")]
pub enum State {
    /// The ambient reaches below the line top.
    Open,
    /// A void under solid.
    Sealed,
    /// Sealed, and every way out of the void meets a hermetic film thick enough.
    Hermetic,
    /// Nothing but solid up to the line top.
    Solid,
}

impl State {
    /// As written in a flow.
    pub fn name(self) -> &'static str {
        match self {
            Self::Open => "open",
            Self::Sealed => "sealed",
            Self::Hermetic => "hermetic",
            Self::Solid => "solid",
        }
    }
}

/// A limit.
#[derive(Debug, Clone)]
pub struct Limit {
    /// What is limited.
    pub claim: Claim,
    /// Where; `None`: at every space where the quantity exists. A site that a variant lacks is
    /// not judged there.
    pub at: Option<Vec<Site>>,
    /// For which net, by its index in [`Flow::nets`].
    pub for_net: Option<usize>,
    /// Between the layers of which name.
    pub between: Option<String>,
    /// Against what a drop is taken.
    pub against: Option<Against>,
    /// After which operation; `None`: of the finished flow.
    pub after: Option<u32>,
    /// In which share of the spread.
    pub in_spread: Option<Share>,
    /// The limit in its standard layout.
    pub text: String,
    /// Where it stands.
    pub span: Span,
}

/// What a limit claims.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Claim {
    /// The space is in this state.
    State(State),
    /// A quantity stays on one side of an amount.
    Bound {
        /// The quantity.
        quantity: Quantity,
        /// Whether at most (`<=`) or at least (`>=`).
        at_most: bool,
        /// The amount in the unit of [`Quantity::dimension`]: nm, fraction of one, aF/µm, ohm/µm, ps, °C.
        amount: f64,
    },
}

/// What a drop is taken against.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Against {
    /// A split, by its index in [`Flow::variants`].
    Split(usize),
    /// The same section with everything between the lines made of this material.
    Material(MaterialId),
}

/// A waiver of findings.
#[derive(Debug, Clone)]
pub struct Waiver {
    /// The rule.
    pub rule: Spanned<String>,
    /// On which operation.
    pub on: Option<u32>,
    /// At which sites.
    pub at: Option<Vec<Site>>,
    /// In which split.
    pub in_split: Option<String>,
    /// Why.
    pub because: String,
    /// Where it stands.
    pub span: Span,
}
