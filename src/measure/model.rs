//! The figures of a site as data, with the names and units of the JSON output.

use schemars::JsonSchema;
use serde::Serialize;

use crate::flow::State;

/// A figure with its numerical error, which is not the spread of the process.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, JsonSchema)]
pub struct Figure {
    /// Best value.
    pub value: f64,
    /// The true value of the model is hardly lower.
    pub low: f64,
    /// The true value of the model is hardly higher.
    pub high: f64,
}

impl Figure {
    /// A figure without numerical error.
    pub const fn exact(value: f64) -> Self {
        Self { value, low: value, high: value }
    }

    /// A figure known to within `error` either way.
    pub fn within(value: f64, error: f64) -> Self {
        Self { value, low: value - error, high: value + error }
    }

    /// Applies a monotone function to value and bounds.
    pub fn map(self, f: impl Fn(f64) -> f64) -> Self {
        let (a, b) = (f(self.low), f(self.high));
        Self { value: f(self.value), low: a.min(b), high: a.max(b) }
    }
}

/// On which side of the line a void lies.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, JsonSchema)]
#[serde(rename_all = "lowercase")]
pub enum Side {
    /// Left.
    Left,
    /// Right.
    Right,
    /// The same on both sides.
    Both,
}

/// One void.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct VoidFigures {
    /// Side of the line.
    pub side: Side,
    /// Top above the line top, nm; negative below.
    pub top_nm: Figure,
    /// Bottom above the line bottom, nm.
    pub bottom_nm: Figure,
    /// Greatest width, nm.
    pub width_nm: Figure,
    /// Greatest height, nm.
    pub height_nm: Figure,
    /// Area, nm².
    pub area_nm2: Figure,
    /// Area between line bottom and top over that of the drawn space there, 1.
    pub share: Figure,
    /// Solid between void and line side, horizontally, nm.
    pub side_film_nm: Option<Figure>,
    /// Solid below the void at mid-space, nm.
    pub floor_film_nm: Option<Figure>,
    /// Shortest way from the void to the finished surface, nm.
    pub roof_nm: Option<Figure>,
    /// Outline: x across from the middle of the space, z above the line bottom, nm.
    pub outline_nm: Vec<[f64; 2]>,
}

/// One seam.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct SeamFigures {
    /// Its highest point above the line top, nm.
    pub top_nm: f64,
    /// Its lowest point above the line top, nm.
    pub bottom_nm: f64,
}

/// What one step found and left at a site.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct StepFigures {
    /// Operation number as written.
    pub op: String,
    /// Verb as written.
    pub verb: String,
    /// Materials that the step found exposed, longest first.
    pub exposed_before: Vec<String>,
    /// Highest point of the surface after the step, above the line top, nm.
    pub surface_top_nm: f64,
}

/// Maxwell's matrix per length of line.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct MatrixFigures {
    /// Names of the electrodes, in the order of rows and columns.
    pub electrodes: Vec<String>,
    /// Values, aF/µm.
    pub values: Vec<Vec<f64>>,
    /// Lower bounds, aF/µm.
    pub low: Vec<Vec<f64>>,
    /// Upper bounds, aF/µm.
    pub high: Vec<Vec<f64>>,
}

/// The electrical figures of a site.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct ElectricalFigures {
    /// Line to both nearest neighbours, aF/µm.
    pub coupling_af_per_um: Figure,
    /// Line to its left neighbour, aF/µm.
    pub coupling_left_af_per_um: Figure,
    /// Line to its right neighbour, aF/µm.
    pub coupling_right_af_per_um: Figure,
    /// Line to planes, bulk and next level, aF/µm.
    pub ground_af_per_um: Option<Figure>,
    /// Line to everything, aF/µm.
    pub total_af_per_um: Figure,
    /// Coupling with the void filled by the material of its roof, aF/µm.
    pub coupling_filled_af_per_um: Option<Figure>,
    /// Coupling lost by the void alone, 1.
    pub void_gain: Option<Figure>,
    /// Coupling lost against the default reference, 1.
    pub coupling_drop: Option<Figure>,
    /// Total lost against the default reference, 1.
    pub total_drop: Option<Figure>,
    /// Total over the same in vacuum, 1.
    pub k_eff: Figure,
    /// Coupling over the same in vacuum, 1.
    pub k_eff_lateral: Figure,
    /// Coupling over total, 1.
    pub coupling_share: Figure,
    /// The whole matrix.
    pub matrix_af_per_um: MatrixFigures,
    /// Resistance of the line, size effect included, ohm/µm.
    pub resistance_ohm_per_um: Option<Figure>,
    /// Whether the top is open because no next level was given.
    pub open_top: bool,
}

/// All figures of one site of one variant.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct SiteFigures {
    /// Split; `null` for the unsplit flow.
    pub split: Option<String>,
    /// The site as the text names it.
    pub site: String,
    /// The space, or the left one of a pair, nm.
    pub space_nm: f64,
    /// The right space of a pair, nm.
    pub space_right_nm: Option<f64>,
    /// Line height over space.
    pub aspect_ratio: f64,
    /// State of the finished space; `null` when it cannot be told.
    pub state: Option<State>,
    /// Whether sealed or hermetic; `null` when it cannot be told.
    pub sealed: Option<bool>,
    /// Operation that closed the space, as written.
    pub sealed_by: Option<String>,
    /// Open-field thickness of that deposit at closure, nm.
    pub seal_thickness_nm: Option<Figure>,
    /// Width of the throat still open, nm.
    pub throat_nm: Option<Figure>,
    /// Voids, left to right.
    pub voids: Vec<VoidFigures>,
    /// Seams.
    pub seams: Vec<SeamFigures>,
    /// Solid between space and line side at half of the line height, nm; open spaces too.
    pub side_film_nm: Option<Figure>,
    /// Solid on the floor at mid-space, nm; open spaces too.
    pub floor_film_nm: Option<Figure>,
    /// Least film around the line's top corner, nm.
    pub corner_film_nm: Option<Figure>,
    /// Lowest polish plane after the void closed, above its top, nm.
    pub polish_margin_nm: Option<Figure>,
    /// The same in standard deviations of plane and void top; `null` without tolerances.
    pub polish_margin_sigmas: Option<f64>,
    /// Seal thickness beyond closure, nm.
    pub seal_margin_nm: Option<Figure>,
    /// Widest space of these lines that the seal still closes, nm.
    pub closing_space_nm: Option<Figure>,
    /// From the via's edge to the nearest void, nm.
    pub via_clearance_nm: Option<Figure>,
    /// Electrical figures; `null` where they were not asked for or a line has no conductor.
    pub electrical: Option<ElectricalFigures>,
    /// Step by step.
    pub steps: Vec<StepFigures>,
}

/// The figures of one net.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct NetReport {
    /// Its name.
    pub name: String,
    /// Split; `null` for the unsplit flow.
    pub split: Option<String>,
    /// Neighbours quiet, ps.
    pub delay_ps: Option<Figure>,
    /// Neighbours switching along, ps.
    pub delay_along_ps: Option<Figure>,
    /// Neighbours switching against, ps.
    pub delay_against_ps: Option<Figure>,
}

impl SiteFigures {
    /// Top of the highest void above the line top, nm.
    pub fn highest_top_nm(&self) -> Option<Figure> {
        self.voids.iter().map(|v| v.top_nm).reduce(|a, b| if b.value > a.value { b } else { a })
    }

    /// Thinnest roof over a void, nm.
    pub fn thinnest_roof_nm(&self) -> Option<Figure> {
        let roofs = self.voids.iter().filter_map(|v| v.roof_nm);
        roofs.reduce(|a, b| if b.value < a.value { b } else { a })
    }

    /// Share of the space that its voids take, summed on each side; of a pair, the lesser side.
    pub fn void_share(&self) -> Option<Figure> {
        let side = |side: Side| {
            let shares = self.voids.iter().filter(|v| v.side == side).map(|v| v.share);
            shares.reduce(|a, b| Figure {
                value: a.value + b.value,
                low: a.low + b.low,
                high: a.high + b.high,
            })
        };
        let sides = [Side::Left, Side::Right, Side::Both].into_iter().filter_map(side);
        sides.reduce(|a, b| if b.value < a.value { b } else { a })
    }
}
