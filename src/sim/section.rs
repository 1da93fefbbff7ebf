//! The cross-section of one cell: a partition of the plane into bodies.

use crate::geom::Region;
use crate::library::MaterialId;

/// Where a body came from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Origin {
    /// `bulk` of the wafer.
    Bulk,
    /// The n-th statement below the lines.
    Below(usize),
    /// Layer `layer` of line `line` (both from 0).
    Line {
        /// From 0, left to right.
        line: usize,
        /// Index in the wafer's layers.
        layer: usize,
    },
    /// The liner of a line.
    Liner(usize),
    /// The wafer's `between`.
    Between,
    /// The n-th film over the lines.
    Over(usize),
    /// Added or made by the step of this index in the variant.
    Step(usize),
}

/// One body of a section: one material of one origin.
#[derive(Debug, Clone, PartialEq)]
pub struct Body {
    /// Of what.
    pub material: MaterialId,
    /// Where it came from.
    pub origin: Origin,
    /// Where it is, in nm; bodies of a section do not overlap.
    pub region: Region,
}

/// A line as drawn, in nm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DrawnLine {
    /// Left and right edge at the sharp line top.
    pub top_x: [f64; 2],
    /// Left and right edge at the line bottom.
    pub bottom_x: [f64; 2],
}

/// What the wafer section drew, kept to measure against, in nm.
#[derive(Debug, Clone, PartialEq)]
pub struct Drawn {
    /// x of the mirror walls, left and right.
    pub walls: [f64; 2],
    /// Line bottom is z = 0; this is the line top H.
    pub line_top: f64,
    /// The lines, left to right: one in an array, all of them in a row.
    pub lines: Vec<DrawnLine>,
    /// Top of each layer, bottom to top; the last is `line_top`.
    pub layer_tops: Vec<f64>,
}

/// Where two fronts met: solid, of the sealing material, but a line to keep away from.
#[derive(Debug, Clone, PartialEq)]
pub struct Seam {
    /// From its lowest to its highest point, in nm.
    pub points: Vec<crate::geom::Point>,
    /// Index of the step that left it.
    pub step: usize,
}

/// The cross-section of one cell at one moment.
#[derive(Debug, Clone, PartialEq)]
pub struct Section {
    /// What was drawn.
    pub drawn: Drawn,
    /// The solid bodies, in order of origin; together a partition of what is solid.
    pub bodies: Vec<Body>,
    /// Seams.
    pub seams: Vec<Seam>,
    /// Enclosed empty regions that the ambient does not reach, one region a void.
    pub voids: Vec<Region>,
}
