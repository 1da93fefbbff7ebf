//! The wafer as the module finds it, and its sites.

use crate::library::MaterialId;
use crate::source::{Span, Spanned};
use crate::units::{Amount, Angle, Length};

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
    /// Both as drawn, which is what the text calls the site wherever a tolerance takes them.
    named: [Length; 2],
}

impl SpacePair {
    /// The spaces as the text draws them.
    pub fn drawn(left: Amount<Length>, right: Amount<Length>) -> Self {
        Self { left, right, named: [left.nominal, right.nominal] }
    }

    /// How the text names it: `32 nm`, `30 | 34 nm`.
    pub fn label(&self) -> String {
        let [left, right] = self.named.map(|length| trim(length.nm()));
        if left == right { format!("{left} nm") } else { format!("{left} | {right} nm") }
    }
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

impl Wafer {
    /// All sites: arrays in the order of the text, then rows.
    pub fn sites(&self) -> Vec<Site> {
        let arrays = self.lines.spaces.iter().enumerate();
        let arrays = arrays.map(|(array, pair)| Site::Array { array, label: pair.label() });
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
