//! The resolved flow. Every material and process exists in the library, every amount has its
//! unit as a type, every site is one of the wafer's.

use std::sync::Arc;

use super::Quantity;
use crate::library::{Library, MaterialId, Process};
use crate::source::{Source, Span, Spanned};
use crate::units::{Amount, Angle, Capacitance, Duration, Length, Resistance, Share, Temperature};

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

/// The wafer as the module finds it.
#[derive(Debug, Clone)]
pub struct Wafer {
    /// What lies below the lines, bottom to top.
    pub below: Vec<Below>,
    /// The lines and their spaces.
    pub lines: Lines,
    /// Rows besides the lines, of the same layers.
    pub rows: Vec<Row>,
    /// The stack of one line, bottom to top; never empty.
    pub layers: Vec<Layer>,
    /// Inside the drawn line, on its sides and its bottom.
    pub liner: Option<Film>,
    /// What fills the spaces.
    pub between: Option<Between>,
    /// Unpatterned films above lines and spaces, bottom to top.
    pub over: Vec<Film>,
    /// Where the wafer section stands.
    pub span: Span,
}

/// An unpatterned layer below the lines.
#[derive(Debug, Clone)]
pub enum Below {
    /// Below everything, without end.
    Bulk(Spanned<MaterialId>),
    /// A conductor at zero.
    Plane(Film),
    /// A film.
    Film(Film),
}

impl Below {
    /// Its material.
    pub fn material(&self) -> MaterialId {
        match self {
            Self::Bulk(material) => material.value,
            Self::Plane(film) | Self::Film(film) => film.material,
        }
    }
}

/// A thickness of a material.
#[derive(Debug, Clone)]
pub struct Film {
    /// How thick.
    pub thickness: Amount<Length>,
    /// Of what.
    pub material: MaterialId,
    /// Where it stands.
    pub span: Span,
}

/// A layer of the line stack.
#[derive(Debug, Clone)]
pub struct Layer {
    /// How thick.
    pub thickness: Amount<Length>,
    /// Of what.
    pub material: MaterialId,
    /// Its name: the name of an electrode where it conducts, and a place for heights.
    pub name: Option<String>,
    /// Where it stands.
    pub span: Span,
}

/// The lines of the wafer; width and spaces are measured at the sharp line top.
#[derive(Debug, Clone)]
pub struct Lines {
    /// Width of a line.
    pub width: Amount<Length>,
    /// The drawn spaces, one array a space.
    pub spaces: Vec<SpacePair>,
    /// Whether the spaces were given by `pitch`, so that a width error takes from the space.
    pub by_pitch: bool,
    /// Taper; positive widens the line downward.
    pub taper: Amount<Angle>,
    /// Radius of the top corners.
    pub corner_radius: Amount<Length>,
    /// Where the statement stands.
    pub span: Span,
}

/// The space left and right of each line of an array; alternating where they differ.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SpacePair {
    /// Left of the line.
    pub left: Amount<Length>,
    /// Right of the line; the same for a dense array.
    pub right: Amount<Length>,
}

/// A row: lines one by one, one space more than lines, mirrors at the middle of the outer spaces.
#[derive(Debug, Clone)]
pub struct Row {
    /// Its name.
    pub name: String,
    /// Widths, left to right.
    pub widths: Vec<Amount<Length>>,
    /// Spaces, left to right, one more than widths.
    pub spaces: Vec<Amount<Length>>,
    /// Where it stands.
    pub span: Span,
}

/// What fills the spaces.
#[derive(Debug, Clone)]
pub struct Between {
    /// Of what.
    pub material: MaterialId,
    /// Up to where.
    pub to: Height,
    /// Where it stands.
    pub span: Span,
}

/// A height relative to a place of the lines.
#[derive(Debug, Clone, PartialEq)]
pub struct Height {
    /// Above the place; negative below.
    pub offset: Amount<Length>,
    /// The place.
    pub place: Place,
}

/// A place of the lines.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Place {
    /// The line top.
    Lines,
    /// The line bottom.
    Floor,
    /// The top of a layer, by its index in [`Wafer::layers`].
    Layer(usize),
}

/// One space of the wafer at which figures are taken.
///
/// A site keeps its label in every variant that has it; across variants sites are compared by
/// their labels, since the numbers behind them may differ.
#[derive(Debug, Clone, PartialEq)]
pub enum Site {
    /// Array number `array` of [`Lines::spaces`].
    Array {
        /// Index in [`Lines::spaces`].
        array: usize,
        /// How the text names it: `32 nm`, `30 | 34 nm`.
        label: String,
    },
    /// The `space`-th space (from 1) of a row.
    Row {
        /// Index in [`Wafer::rows`].
        row: usize,
        /// From 1.
        space: usize,
        /// How the text names it: `edge:2`.
        label: String,
    },
}

impl Site {
    /// How the text names it: `32 nm`, `30 | 34 nm`, `edge:2`.
    pub fn label(&self) -> &str {
        match self {
            Self::Array { label, .. } | Self::Row { label, .. } => label,
        }
    }
}

impl Variant {
    /// All sites of this variant's wafer: arrays in the order of the text, then rows.
    pub fn sites(&self) -> Vec<Site> {
        self.wafer.sites()
    }
}

impl Wafer {
    /// All sites: arrays in the order of the text, then rows.
    pub fn sites(&self) -> Vec<Site> {
        let nm = |length: Amount<Length>| trim(length.nominal.nm());
        let arrays = self.lines.spaces.iter().enumerate().map(|(array, pair)| {
            let label = if pair.left == pair.right {
                format!("{} nm", nm(pair.left))
            } else {
                format!("{} | {} nm", nm(pair.left), nm(pair.right))
            };
            Site::Array { array, label }
        });
        let rows = self.rows.iter().enumerate().flat_map(|(row, drawn)| {
            (1..=drawn.spaces.len()).map(move |space| Site::Row {
                row,
                space,
                label: format!("{}:{space}", drawn.name),
            })
        });
        arrays.chain(rows).collect()
    }
}

/// A length in nm without the noise of binary fractions.
fn trim(nm: f64) -> f64 {
    (nm * 1e6).round() / 1e6
}

/// One step of a flow.
#[derive(Debug, Clone)]
pub struct Step {
    /// Operation number.
    pub op: u32,
    /// The number as written (`010`).
    pub op_text: String,
    /// What is done.
    pub action: Action,
    /// The sites to which `only at` limits it; `None`: everywhere; empty where this variant has
    /// none of them: nowhere.
    pub only_at: Option<Vec<Site>>,
    /// Operations that must come before, by `after`.
    pub after: Vec<Spanned<u32>>,
    /// Operations that must come after, by `before`.
    pub before: Vec<Spanned<u32>>,
    /// The note in quotes.
    pub note: Option<String>,
    /// The whole statement.
    pub span: Span,
}

/// What a deposit is for; rules ask more of a seal or a cap.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    /// A film.
    Deposit,
    /// It is to close the spaces.
    Seal,
    /// It is to cover what is closed, or to bridge a sacrificial fill.
    Cap,
}

/// What a step does.
#[derive(Debug, Clone)]
pub enum Action {
    /// `deposit`, `seal`, `cap`.
    Deposit {
        /// What it is for.
        role: Role,
        /// Thickness on an open flat.
        thickness: Amount<Length>,
        /// What grows.
        material: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `etch LENGTH MATERIAL`: depth as on open, flat material.
    Etch {
        /// Depth.
        depth: Amount<Length>,
        /// The material whose rate the depth is of.
        material: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `etch MATERIAL until MATERIAL`.
    EtchUntil {
        /// The material whose rate is the base.
        material: MaterialId,
        /// The material that ends it when first reached at any site.
        stop: MaterialId,
        /// More of the time to the stop.
        overetch: Amount<Share>,
        /// By what.
        process: ProcessUse,
    },
    /// `convert`: exposed material becomes another.
    Convert {
        /// How deep.
        depth: Amount<Length>,
        /// From what.
        from: MaterialId,
        /// To what.
        to: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `mask`: a planar block mask on some sites until it is stripped.
    Mask {
        /// Thickness above the surface.
        thickness: Amount<Length>,
        /// Of what.
        material: MaterialId,
        /// Where.
        over: Vec<Site>,
        /// By what.
        process: ProcessUse,
    },
    /// `fill`: planar, spun on or flowed.
    Fill {
        /// Of what.
        material: MaterialId,
        /// Up to where.
        to: Height,
        /// By what.
        process: ProcessUse,
    },
    /// `release`: a sacrificial material leaves through what lets it pass.
    Release {
        /// What leaves.
        material: MaterialId,
        /// At what temperature.
        temperature: Amount<Temperature>,
        /// For how long.
        time: Option<Amount<Duration>>,
        /// By what.
        process: ProcessUse,
    },
    /// `strip`: all of a material that is exposed.
    Strip {
        /// What goes.
        material: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `polish to HEIGHT`.
    Polish {
        /// The plane.
        to: Height,
        /// By what.
        process: ProcessUse,
    },
    /// `polish until MATERIAL`.
    PolishUntil {
        /// The material whose topmost occurrence at any site gives the plane.
        stop: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `anneal`.
    Anneal {
        /// At what temperature.
        temperature: Amount<Temperature>,
        /// For how long.
        time: Amount<Duration>,
        /// By what.
        process: ProcessUse,
    },
    /// `cure`.
    Cure {
        /// At what temperature.
        temperature: Amount<Temperature>,
        /// For how long.
        time: Amount<Duration>,
        /// By what.
        process: ProcessUse,
    },
    /// `clean`.
    Clean {
        /// By what.
        process: ProcessUse,
    },
    /// `via`: opened down onto a line, lined and filled flush.
    Via {
        /// Its width.
        width: Amount<Length>,
        /// Its core.
        material: MaterialId,
        /// Its liner.
        liner: Option<(Amount<Length>, MaterialId)>,
        /// Off its line by at most this.
        overlay: Amount<Length>,
        /// Below the line top.
        overetch: Amount<Length>,
        /// By what.
        process: ProcessUse,
    },
}

impl Action {
    /// The process of the step.
    pub fn process(&self) -> &ProcessUse {
        match self {
            Self::Deposit { process, .. }
            | Self::Etch { process, .. }
            | Self::EtchUntil { process, .. }
            | Self::Convert { process, .. }
            | Self::Mask { process, .. }
            | Self::Fill { process, .. }
            | Self::Release { process, .. }
            | Self::Strip { process, .. }
            | Self::Polish { process, .. }
            | Self::PolishUntil { process, .. }
            | Self::Anneal { process, .. }
            | Self::Cure { process, .. }
            | Self::Clean { process }
            | Self::Via { process, .. } => process,
        }
    }

    /// The verb as written in a flow.
    pub fn verb(&self) -> &'static str {
        match self {
            Self::Deposit { role: Role::Deposit, .. } => "deposit",
            Self::Deposit { role: Role::Seal, .. } => "seal",
            Self::Deposit { role: Role::Cap, .. } => "cap",
            Self::Etch { .. } | Self::EtchUntil { .. } => "etch",
            Self::Convert { .. } => "convert",
            Self::Mask { .. } => "mask",
            Self::Fill { .. } => "fill",
            Self::Release { .. } => "release",
            Self::Strip { .. } => "strip",
            Self::Polish { .. } | Self::PolishUntil { .. } => "polish",
            Self::Anneal { .. } => "anneal",
            Self::Cure { .. } => "cure",
            Self::Clean { .. } => "clean",
            Self::Via { .. } => "via",
        }
    }
}

/// A process as one step uses it: the library's numbers with the step's `with` applied.
#[derive(Debug, Clone)]
pub struct ProcessUse {
    /// The process, overrides applied.
    pub process: Arc<Process>,
    /// What `with` replaced, by key of the library, in library units.
    pub overrides: Vec<Override>,
}

/// One `with NAME AMOUNT`.
#[derive(Debug, Clone, PartialEq)]
pub struct Override {
    /// The key of the library file that it replaces, unit included: `temperature_c`, `sticking`.
    pub key: String,
    /// The value, in the unit of the key.
    pub nominal: f64,
    /// Three standard deviations, same unit.
    pub three_sigma: f64,
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
