//! Every tolerance of the program, named, with its meaning and its default.

/// Cells per nanometre of the grid on which all polygon vertices lie.
///
/// A power of two, so that a coordinate on the grid is exact in `f64` and a boolean of two
/// regions meets shared edges exactly: 2⁻²⁰ nm, a millionth of a nanometre.
pub const GRID_PER_NM: f64 = 1_048_576.0;

/// Regions smaller than this are the dust of rounded intersections and are dropped, in nm².
pub const DUST_AREA_NM2: f64 = 1e-5;

/// Default width below which a throat is closed to precursor molecules, in nm
/// (`settings: closure_width_nm` in a library file).
pub const CLOSURE_WIDTH_NM: f64 = 0.5;

/// Default accuracy wanted of every figure (`--accuracy`): relative to the space for
/// positions, 0.25 nm or relative for films, absolute for shares, half of it relative for
/// capacitance.
pub const ACCURACY: f64 = 0.01;

/// A point nearer than this to an edge lies on it: a few cells of the grid, in nm.
pub const ON_EDGE_NM: f64 = 4.0 / GRID_PER_NM;

/// How far the ambient of a scene is carried above its highest point, in nm.
pub const SKY_MARGIN_NM: f64 = 1.0;

/// Relative residual at which the exchange of species counts as converged.
pub const EXCHANGE_RESIDUAL: f64 = 1e-9;

/// A line that lost more than this at its top corner has none left to measure from, in nm.
pub const CORNER_LOSS_NM: f64 = 5.0;

/// Error of a figure of the fine trace, as a multiple of its difference to the coarse one.
pub const GROWTH_SAFETY: f64 = 1.25;

/// Scatter of the thickness at closure, over the facet length.
pub const CLOSING_SCATTER: f64 = 0.14;

/// Scatter of the height at which a neck closes, over the facet length.
pub const TOP_SCATTER: f64 = 0.22;

/// Scatter of a void's outline, over the facet length.
pub const OUTLINE_SCATTER: f64 = 0.03;

/// Least error of a length that a grown front has, as a multiple of the closure width.
pub const GROWTH_FLOOR_CLOSURE_WIDTHS: f64 = 0.02;

/// How far beside an edge to look for what lies there, in nm: well above the rounding of the
/// grid, well below any layer.
pub const SIDE_STEP_NM: f64 = 2e-5;

/// Two outlines nearer than this are the same line, in nm: some cells of the grid.
pub const SAME_LINE_NM: f64 = 4e-6;

/// Vertices of a moving surface that lie within this of the chord are left out of its facets,
/// in nm.
pub const FACET_SLACK_NM: f64 = 2e-4;

/// The same as a share of the chord, where the flux is known no better.
pub const FACET_SLACK_SHARE: f64 = 0.01;

/// A removal is done when no surface has further than this to go, in nm.
pub const LAG_LEFT_NM: f64 = 1e-4;

/// Largest distance between a rounded corner and the polygon that stands for it, in nm.
pub const ARC_SAGITTA_NM: f64 = 0.01;

/// Angle of one chord of a rounded line corner: its polygon is short of the circle by 3.4e-4
/// of the radius at most.
pub const CORNER_STEP_RAD: f64 = 3.0 * std::f64::consts::PI / 180.0;

/// Enclosed empty regions thinner than this on average are cracks of rounding, not voids, in nm.
pub const SLIVER_NM: f64 = 16.0 / GRID_PER_NM;

/// Areas before and after a step balance to within this per length of outline, in nm: the
/// rounding of vertices to the polygon grid, a few cells.
pub const AREA_BALANCE_NM: f64 = 4.0 / GRID_PER_NM;

/// Thickness from which a hermetic material is, where the library says nothing, in nm (common
/// practice for nitrides).
pub const HERMETIC_FROM_NM: f64 = 10.0;

/// Relative slack when a grown film is held against the thickness from which it is hermetic.
pub const HERMETIC_SLACK: f64 = 0.01;

/// Cells of the field's noding grid across the longer side of a section: outlines move by
/// less than a cell, half a millionth of that side.
pub const FIELD_CELLS: f64 = 4_194_304.0;

/// Outlines are thinned for the field by at most this part of the section's shorter side, at
/// an accuracy of half a per cent or coarser; in proportion to the accuracy below that.
pub const FIELD_OUTLINE: f64 = 2e-5;

/// Triangles whose longest side is below this part of the section's shorter side may be as
/// slender as they are: the field's mesh runs into a cusp or a film only down to here.
pub const FIELD_FLOOR: f64 = 5e-4;

/// Triangles that a field mesh may have at most.
pub const FIELD_TRIANGLES: usize = 200_000;

/// Relative slack of an inequality that holds exactly but for rounding.
pub const FIELD_ROUNDING: f64 = 1e-9;

/// Rounding of an energy that minimising took from a larger one, relative to the larger one.
pub const FIELD_CANCELLATION: f64 = 1e-12;

/// How much looser than the fine section the coarse one is solved for its capacitance.
pub const COARSE_FIELD: f64 = 4.0;

/// Step of the search for the widest space that a seal closes, over that space, at which the
/// search ends.
pub const CLOSING_SPACE: f64 = 0.002;

/// Two figures that differ by less than this part of themselves are the same but for rounding.
pub const SAME_FIGURE: f64 = 1e-9;
