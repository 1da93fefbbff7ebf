//! The problem as the mesh sees it: checked, cut to the section, continued beyond open edges.
//!
//! Beyond an open edge the materials along the edge go on as upright columns. A conductor that
//! reaches the edge ends there; beyond it lies what lies beside it along the edge. The
//! continuation ends at a *far edge* after a height at which the slowest mode of the strip
//! between the mirrors (half a wave in the width) has died out for the wanted accuracy; there
//! the proof is kept by a floating potential above and no flux below, both of which extend
//! to the half-plane.

use super::{Body, Edge, FieldError, Problem, Role};
use crate::geom::{Point, Region};
use crate::num::tolerance::{FIELD_CELLS, GRID_PER_NM};

/// One body of the section, by its place in [`Problem::bodies`].
pub(super) struct Shape {
    /// Where it is.
    pub region: Region,
    /// Its zone: index of the body, the number of bodies for vacuum.
    pub zone: usize,
}

/// A section with closed edges all around.
pub(super) struct Section {
    /// Lower left corner, in nm.
    pub origin: Point,
    /// Width and height, continuations included, in nm.
    pub size: [f64; 2],
    /// The smaller side of the section as given, in nm.
    pub scale: f64,
    /// Cell of the grid on which outlines are noded, in nm.
    pub cell: f64,
    /// Bodies and their continuations, later ones over earlier ones.
    pub shapes: Vec<Shape>,
    /// Whether the bottom edge and the top edge are far edges.
    pub far: [bool; 2],
    /// How many zones there are, vacuum included.
    pub zones: usize,
}

/// Checks a problem and its variants, cuts its bodies to the section and continues them.
pub(super) fn prepare(problem: &Problem, accuracy: f64) -> Result<Section, FieldError> {
    check(problem, accuracy)?;
    let [x, z] = [problem.x, problem.z].map(|v| v.map(snapped));
    let mut shapes: Vec<Shape> = Vec::new();
    let frame = Region::rectangle(x, z);
    for (zone, body) in problem.bodies.iter().enumerate() {
        let region = body.region.intersection(&frame);
        if !region.is_empty() {
            shapes.push(Shape { region, zone });
        }
    }
    let reach = snapped((x[1] - x[0]) * decay_lengths(accuracy));
    let mut extent = z;
    let mut far = [false; 2];
    for (side, edge) in [problem.bottom, problem.top].into_iter().enumerate() {
        let at = z[side];
        let beyond = if side == 0 { [at - reach, at] } else { [at, at + reach] };
        if edge == Edge::Open
            && let Some(columns) = columns(&shapes, &problem.bodies, at, x)
        {
            extent[side] = beyond[side];
            far[side] = true;
            shapes.extend(
                columns
                    .into_iter()
                    .map(|(span, zone)| Shape { region: Region::rectangle(span, beyond), zone }),
            );
        }
    }
    let size = [x[1] - x[0], extent[1] - extent[0]];
    Ok(Section {
        origin: Point::new(x[0], extent[0]),
        size,
        scale: (x[1] - x[0]).min(z[1] - z[0]),
        cell: (size[0].max(size[1]) / FIELD_CELLS).log2().floor().exp2().max(1.0 / GRID_PER_NM),
        shapes,
        far,
        zones: problem.bodies.len() + 1,
    })
}

/// Height of a continuation over the width: what a field that falls as exp(−2πz/width), the
/// energy of half a wave in the width, needs to fall to a tenth of the accuracy.
fn decay_lengths(accuracy: f64) -> f64 {
    (10.0 / accuracy.min(0.1)).ln() / std::f64::consts::TAU
}

fn snapped(v: f64) -> f64 {
    Point::new(v, 0.0).snapped().x
}

fn check(problem: &Problem, accuracy: f64) -> Result<(), FieldError> {
    if !accuracy.is_finite() {
        return Err(FieldError::NonFinite("the wanted accuracy".into()));
    }
    if accuracy <= 0.0 {
        return Err(FieldError::Accuracy(accuracy));
    }
    let edges = [problem.x, problem.z];
    if edges.iter().flatten().any(|v| !v.is_finite()) {
        return Err(FieldError::NonFinite("an edge of the section".into()));
    }
    if edges.iter().any(|[low, high]| snapped(*low) >= snapped(*high)) {
        return Err(FieldError::EmptySection);
    }
    if problem.electrodes == 0 {
        return Err(FieldError::NoElectrode);
    }
    for body in &problem.bodies {
        if body.region.rings().flatten().any(|p| !(p.x.is_finite() && p.z.is_finite())) {
            return Err(FieldError::NonFinite("a vertex of a body".into()));
        }
        check_role(body.role, problem.electrodes)?;
    }
    Ok(())
}

/// Checks the numbers of one role.
pub(super) fn check_role(role: Role, electrodes: usize) -> Result<(), FieldError> {
    match role {
        Role::Dielectric(k) if !k.is_finite() => {
            Err(FieldError::NonFinite("a relative permittivity".into()))
        }
        Role::Dielectric(k) if k <= 0.0 => Err(FieldError::Permittivity(k)),
        Role::Electrode(e) if e >= electrodes => Err(FieldError::ElectrodeUnknown(e)),
        _ => Ok(()),
    }
}

/// What lies along the edge z = `at`, as spans of x with their zones, conductors replaced by
/// what lies beside them; spans of vacuum are left out. `None` when conductors cover the edge.
fn columns(
    shapes: &[Shape],
    bodies: &[Body],
    at: f64,
    x: [f64; 2],
) -> Option<Vec<([f64; 2], usize)>> {
    let vacuum = bodies.len();
    let spans: Vec<([f64; 2], usize)> = shapes
        .iter()
        .flat_map(|shape| shape.region.edges().map(move |edge| (edge, shape.zone)))
        .filter(|((a, b), _)| a.z == at && b.z == at)
        .map(|((a, b), zone)| ([a.x.min(b.x), a.x.max(b.x)], zone))
        .collect();
    let mut cuts: Vec<f64> = spans.iter().flat_map(|(span, _)| *span).chain(x).collect();
    cuts.sort_by(f64::total_cmp);
    cuts.dedup();
    let mut columns: Vec<([f64; 2], Option<usize>)> = cuts
        .windows(2)
        .map(|cut| {
            let covers = |span: &[f64; 2]| span[0] <= cut[0] && cut[1] <= span[1];
            let zone =
                spans.iter().rev().find(|(span, _)| covers(span)).map_or(vacuum, |(_, z)| *z);
            let insulates = zone == vacuum || matches!(bodies[zone].role, Role::Dielectric(_));
            ([cut[0], cut[1]], insulates.then_some(zone))
        })
        .collect();
    let mut beside = columns.iter().find_map(|(_, zone)| *zone)?;
    for (_, zone) in &mut columns {
        beside = zone.unwrap_or(beside);
        *zone = Some(beside);
    }
    let dielectric = |(span, zone): ([f64; 2], Option<usize>)| Some((span, zone?));
    Some(columns.into_iter().filter_map(dielectric).filter(|(_, z)| *z != vacuum).collect())
}
