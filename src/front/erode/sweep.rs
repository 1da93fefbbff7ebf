//! What a step sweeps: one polygon a facet, one a corner.
//!
//! In a step, the point x of the surface reaches the convex body K(x): a disc of the conformal
//! part, moved by the vector flux of what arrives along lines (of all species seen from one point
//! the flux on a facet is the scalar product of its normal with one vector, as long as the facet
//! faces all of them; in a corner of the ambient that is always so). A facet sweeps what lies
//! between it and its moved image. Where the ambient is convex the gap between two images is
//! filled by the body of the corner; where the solid is convex the images overlap and their
//! union keeps the corner sharp. Between facets at a small angle the common vertex moves to
//! where the two images meet.

use super::Groups;
use super::surface::{Facet, Link, slack_nm};
use crate::geom::Point;
use crate::num::tolerance::ARC_SAGITTA_NM;

/// What arrives at a facet, relative to the open flat.
#[derive(Debug, Clone, Copy)]
pub(super) struct Flux {
    /// The same on all that is exposed.
    pub(super) conformal: f64,
    /// Along a line: the vector flux, pointing down into the solid.
    pub(super) beam: Point,
    /// From all directions in view, through the facet.
    pub(super) diffuse: f64,
    /// The same on an open flat.
    pub(super) diffuse_most: f64,
}

impl Flux {
    /// Rate of a facet of this normal.
    pub(super) fn total(&self, normal: Point) -> f64 {
        self.conformal + self.along_lines(normal)
    }

    /// Without the conformal part.
    fn along_lines(&self, normal: Point) -> f64 {
        (-normal.dot(self.beam)).max(0.0) + self.diffuse
    }
}

/// How finely corners are rounded.
#[derive(Clone, Copy)]
pub(super) struct Rounding {
    /// Below this angle two facets are one smooth surface, in radians.
    smooth_rad: f64,
    /// Largest angle between the facets of a rounded corner, which must stay smooth, in radians.
    arc_rad: f64,
}

impl Rounding {
    /// Where the flux is exact.
    pub(super) const FINE: Self = Self { smooth_rad: 0.1, arc_rad: 0.08 };
    /// Where the flux is that of a facet's middle: finer facets than it can tell apart only add
    /// noise.
    pub(super) const ROUGH: Self = Self { smooth_rad: 0.35, arc_rad: 0.3 };
}

/// Smaller angles than this do not tell two speeds by direction from two speeds by place, in
/// radians.
const FLAT_RAD: f64 = 0.1;
/// Beams that differ by more than this are light and shadow.
const SHADOW: f64 = 0.1;

/// One side of a vertex: the end of a facet.
#[derive(Clone, Copy)]
struct Side {
    normal: Point,
    length: f64,
    flux: Flux,
    /// Removal by a flux of one, in nm.
    reach: f64,
    group: Option<usize>,
}

impl Side {
    fn mirrored(self) -> Self {
        let flip = |v: Point| Point::new(-v.x, v.z);
        let flux = Flux { beam: flip(self.flux.beam), ..self.flux };
        Self { normal: flip(self.normal), flux, ..self }
    }

    fn along(&self) -> Point {
        Point::new(self.normal.z, -self.normal.x)
    }

    /// Along the inward normal, without what the beam does.
    fn advance(&self) -> f64 {
        (self.flux.conformal + self.flux.diffuse) * self.reach
    }

    /// Where the vertex goes as the end of this facet alone.
    fn own_move(&self) -> Point {
        self.flux.beam * self.reach - self.normal * self.advance()
    }

    /// The body that the vertex reaches in this solid, given the vector of all that is not
    /// conformal.
    fn body(&self, vector: Point, rounding: Rounding) -> Option<(usize, Vec<Point>)> {
        let radius = self.flux.conformal * self.reach;
        let group = self.group.filter(|_| radius > 0.0)?;
        Some((group, capsule(vector * self.reach, radius, rounding)))
    }
}

/// What becomes of a vertex.
struct Corner {
    /// Move of the end of the first facet and of the start of the second.
    moves: [Point; 2],
    /// Swept from the vertex itself: group and polygon about it.
    bodies: Vec<(usize, Vec<Point>)>,
}

impl Corner {
    fn between(first: Side, second: Side, rounding: Rounding) -> Self {
        let Rounding { smooth_rad, .. } = rounding;
        let angle = first.normal.cross(second.normal).atan2(first.normal.dot(second.normal));
        let own_moves = [first.own_move(), second.own_move()];
        if first.group != second.group {
            let bodies = [first, second].into_iter().filter_map(|side| {
                let vector = if angle > smooth_rad {
                    vector_flux(&first, &second)
                } else {
                    side.flux.beam - side.normal * side.flux.diffuse
                };
                side.body(vector, rounding)
            });
            return Self { moves: own_moves, bodies: bodies.collect() };
        }
        if angle > smooth_rad {
            return Self::opened(&first, &second, angle, rounding);
        }
        if angle < 0.0 && first.advance() == second.advance() {
            return Self { moves: own_moves, bodies: Vec::new() };
        }
        if (first.flux.beam - second.flux.beam).norm() > SHADOW {
            let lit = if first.flux.beam.norm() > second.flux.beam.norm() { first } else { second };
            let body = lit.body(lit.flux.beam - lit.normal * lit.flux.diffuse, rounding);
            return Self { moves: own_moves, bodies: body.into_iter().collect() };
        }
        let beam = first.flux.beam * (first.reach / 2.0) + second.flux.beam * (second.reach / 2.0);
        let meeting = meeting(&first, &second, [first.advance(), second.advance()]);
        let overtakes = |side: &Side| side.along().dot(meeting).abs() > side.length / 2.0;
        let moves = if angle < -smooth_rad && (overtakes(&first) || overtakes(&second)) {
            own_moves
        } else {
            [beam + meeting; 2]
        };
        Self { moves, bodies: Vec::new() }
    }

    /// Where the ambient is convex: the images part, and the body of the corner lies between.
    fn opened(first: &Side, second: &Side, angle: f64, rounding: Rounding) -> Self {
        let reach = (first.reach + second.reach) / 2.0;
        let radius = first.flux.conformal * reach;
        let centre = vector_flux(first, second) * reach;
        let moves = [first, second].map(|side| centre - side.normal * radius);
        let mut body = vec![Point::default(), moves[0]];
        body.extend(arc(centre, radius, first.normal * -1.0, angle, rounding));
        body.push(moves[1]);
        let group = first.group.filter(|_| reach > 0.0);
        Self { moves, bodies: group.map(|g| (g, body)).into_iter().collect() }
    }
}

/// The vector flux in a corner of the ambient, from the fluxes through its two facets. In a
/// narrow corner these, taken at the middles of the facets, leave it badly known: it is never
/// more than an open flat gets.
fn vector_flux(first: &Side, second: &Side) -> Point {
    let beam = [first, second].map(|s| s.flux.beam);
    let beam = if beam[0].norm() >= beam[1].norm() { beam[0] } else { beam[1] };
    let spread = meeting(first, second, [first.flux.diffuse, second.flux.diffuse]);
    let most = first.flux.diffuse_most;
    let size = spread.norm();
    beam + if size > most { spread * (most / size) } else { spread }
}

/// The vector that advances `advance` along the inward normal of each facet. On a smooth surface,
/// where two speeds differ by place and not by direction, it has no part along the surface.
fn meeting(first: &Side, second: &Side, advance: [f64; 2]) -> Point {
    let sum = first.normal + second.normal;
    let length = sum.norm();
    if length < f64::EPSILON {
        return Point::default();
    }
    let middle = sum * (1.0 / length);
    let along = Point::new(middle.z, -middle.x);
    let (cos, sin) = (length / 2.0, first.normal.dot(along));
    let inward = (advance[0] + advance[1]) / (2.0 * cos);
    let aside = if sin.abs() > (FLAT_RAD / 2.0).sin() {
        let limit = advance[0].max(advance[1]);
        ((advance[1] - advance[0]) / (2.0 * sin)).clamp(-limit, limit)
    } else {
        0.0
    };
    middle * -inward + along * aside
}

/// Vertices of the polygon about an arc, its edges touching the circle: from the direction
/// `from` about `centre` through `angle`, both ends left out.
fn arc(
    centre: Point,
    radius: f64,
    from: Point,
    angle: f64,
    rounding: Rounding,
) -> impl Iterator<Item = Point> {
    let widest = rounding.arc_rad.min((8.0 * ARC_SAGITTA_NM / radius.max(ARC_SAGITTA_NM)).sqrt());
    let steps = (angle / widest).ceil().max(1.0);
    let step = angle / steps;
    let radius = radius / (step / 2.0).cos();
    (0..steps as usize).map(move |k| {
        let (sin, cos) = ((k as f64 + 0.5) * step).sin_cos();
        let turned = Point::new(from.x * cos - from.z * sin, from.x * sin + from.z * cos);
        centre + turned * radius
    })
}

/// All that lies within `radius` of the segment from the origin to `end`.
fn capsule(end: Point, radius: f64, rounding: Rounding) -> Vec<Point> {
    let length = end.norm();
    let along = if length > 0.0 { end * (1.0 / length) } else { Point::new(1.0, 0.0) };
    let right = Point::new(along.z, -along.x);
    let half = std::f64::consts::PI;
    let about_end = arc(end, radius, right, half, rounding);
    about_end.chain(arc(Point::default(), radius, right * -1.0, half, rounding)).collect()
}

/// Polygons swept in the solids of each group, to be cut with these.
///
/// `budget` is the depth to go at both ends of each facet; `group` and `rate` are those of the
/// solid behind it.
pub(super) fn sweeps(
    facets: &[Facet],
    flux: &[Flux],
    budget: &[[f64; 2]],
    groups: &Groups,
    rounding: Rounding,
) -> Vec<Vec<Vec<Point>>> {
    let side = |i: usize, end: usize| Side {
        normal: facets[i].normal(),
        length: facets[i].length(),
        flux: flux[i],
        reach: groups.rate_of(facets[i].owner) * budget[i][end],
        group: facets[i].owner.map(|o| groups.of[o]),
    };
    let mut rings = vec![Vec::new(); groups.rates.len()];
    let mut add_bodies = |at: Point, bodies: Vec<(usize, Vec<Point>)>| {
        for (group, body) in bodies {
            rings[group].push(body.into_iter().map(|v| at + v).collect());
        }
    };
    let mut moves: Vec<[Point; 2]> = Vec::with_capacity(facets.len());
    for (i, facet) in facets.iter().enumerate() {
        let (start, end) = (side(i, 0), side(i, 1));
        let first = match facet.before {
            Link::Facet(j) => Some(side(j, 1)),
            Link::Mirror => Some(start.mirrored()),
            Link::End => None,
        };
        let start_move = first.map_or(start.own_move(), |first| {
            let corner = Corner::between(first, start, rounding);
            add_bodies(facet.a, corner.bodies);
            corner.moves[1]
        });
        let end_move = match facet.after {
            Link::Facet(j) => Corner::between(end, side(j, 0), rounding).moves[0],
            Link::Mirror => {
                let corner = Corner::between(end, end.mirrored(), rounding);
                add_bodies(facet.b, corner.bodies);
                corner.moves[0]
            }
            Link::End => end.own_move(),
        };
        moves.push([start_move, end_move]);
    }
    for (facet, [start, end]) in facets.iter().zip(moves) {
        if let Some(owner) = facet.owner.filter(|&o| groups.rate_of(Some(o)) > 0.0) {
            rings[groups.of[owner]].push(image(facet, start, end));
        }
    }
    rings
}

/// What lies between a facet and its image, counter-clockwise as all that is swept (rings that
/// wind the other way would cancel it). It begins a little in the ambient, where left-out
/// vertices of the surface may be.
fn image(facet: &Facet, start: Point, end: Point) -> Vec<Point> {
    let back = facet.normal() * slack_nm(facet.length());
    let (a, b) = (facet.a, facet.b);
    let moved = [a + start, b + end];
    if (moved[1] - moved[0]).dot(b - a) <= 0.0 {
        return vec![a, (moved[0] + moved[1]) * 0.5, b];
    }
    vec![a, moved[0], moved[1], b, b + back, a + back]
}
