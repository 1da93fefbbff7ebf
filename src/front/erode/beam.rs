//! Light and shadow of a beam: which facets it reaches, and where its shadows end.
//!
//! Method: a ray from the middle of the facet towards the beam, mirrored at the walls, against
//! all facets. The surface is broken where a shadow ends, so a facet is wholly lit or wholly
//! dark. Cost: the square of the number of facets.

use super::surface::{Facet, Frame, Link};
use crate::front::Character;
use crate::geom::Point;
use crate::num::tolerance::SIDE_STEP_NM;

/// Unit vectors towards the beams of a character; empty when it has none.
fn directions(character: &Character) -> Vec<Point> {
    if character.directional == 0.0 || character.exponent.is_some() {
        return Vec::new();
    }
    let (sin, cos) = character.tilt_rad.sin_cos();
    if sin == 0.0 {
        vec![Point::new(0.0, 1.0)]
    } else {
        vec![Point::new(sin, cos), Point::new(-sin, cos)]
    }
}

/// Vector flux of the beams on each facet, zero where it lies in shadow or along them.
pub(super) fn arrival(facets: &[Facet], character: &Character, frame: &Frame) -> Vec<Point> {
    let directions = directions(character);
    let share = character.directional / directions.len().max(1) as f64;
    facets
        .iter()
        .map(|facet| {
            directions
                .iter()
                .filter(|d| facet.normal().dot(**d) > GRAZING && is_lit(facet, **d, facets, frame))
                .fold(Point::default(), |sum, &d| sum + d * (-share / d.z))
        })
        .collect()
}

/// Facets steeper than this, as a cosine to the beam, are along it.
const GRAZING: f64 = 1e-9;

fn is_lit(facet: &Facet, towards: Point, facets: &[Facet], frame: &Frame) -> bool {
    first_hit(facet.middle() + facet.normal() * SIDE_STEP_NM, towards, facets, frame).is_none()
}

/// The facet that a ray meets first, and where.
fn first_hit(
    from: Point,
    towards: Point,
    facets: &[Facet],
    frame: &Frame,
) -> Option<(usize, Point)> {
    let highest = facets.iter().map(|f| f.a.z.max(f.b.z)).fold(f64::NEG_INFINITY, f64::max);
    let lowest = facets.iter().map(|f| f.a.z.min(f.b.z)).fold(f64::INFINITY, f64::min);
    let (mut from, mut towards) = (from, towards);
    loop {
        let hit = facets
            .iter()
            .enumerate()
            .filter_map(|(i, f)| {
                let edge = f.b - f.a;
                let det = edge.cross(towards);
                let t = edge.cross(f.a - from) / det;
                let u = towards.cross(f.a - from) / det;
                (det != 0.0 && t > 0.0 && (0.0..=1.0).contains(&u)).then_some((t, i))
            })
            .min_by(|a, b| a.0.total_cmp(&b.0));
        let wall = frame.walls[usize::from(towards.x > 0.0)];
        let to_wall = if towards.x == 0.0 { f64::INFINITY } else { (wall - from.x) / towards.x };
        if let Some((t, i)) = hit
            && t <= to_wall
        {
            return Some((i, from + towards * t));
        }
        if to_wall.is_infinite() {
            return None;
        }
        from = Point::new(wall, from.z + towards.z * to_wall);
        towards.x = -towards.x;
        if from.z > highest && towards.z > 0.0 || from.z < lowest {
            return None;
        }
    }
}

/// Breaks facets where the shadow of an edge falls on them.
pub(super) fn break_at_shadows(facets: &mut Vec<Facet>, character: &Character, frame: &Frame) {
    let mut breaks: Vec<(usize, f64)> = Vec::new();
    for towards in directions(character) {
        let faces = |f: &Facet| f.normal().dot(towards) > GRAZING;
        for facet in facets.iter() {
            let Link::Facet(before) = facet.before else { continue };
            if faces(facet) == faces(&facets[before]) {
                continue;
            }
            // A little aside, into the ambient, so that the ray clears its own edge.
            let outward = facet.normal() + facets[before].normal();
            let from = facet.a + outward * SIDE_STEP_NM;
            if let Some((i, p)) = first_hit(from, towards * -1.0, facets, frame) {
                let (a, b) = (facets[i].a, facets[i].b);
                breaks.push((i, (p - a).norm() / (b - a).norm()));
            }
        }
    }
    if breaks.is_empty() {
        return;
    }
    breaks.sort_by(|x, y| x.0.cmp(&y.0).then(x.1.total_cmp(&y.1)));
    split(facets, &breaks);
}

/// Splits facets at fractions of their length, given in order.
fn split(facets: &mut Vec<Facet>, breaks: &[(usize, f64)]) {
    let mut pieces: Vec<Vec<Point>> = facets.iter().map(|f| vec![f.a]).collect();
    for &(i, t) in breaks {
        let p = facets[i].a + (facets[i].b - facets[i].a) * t;
        let clear = 10.0 * SIDE_STEP_NM;
        if p.distance(pieces[i][pieces[i].len() - 1]) > clear && p.distance(facets[i].b) > clear {
            pieces[i].push(p);
        }
    }
    let mut first = Vec::with_capacity(facets.len());
    let mut count = 0;
    for piece in &pieces {
        first.push(count);
        count += piece.len();
    }
    let mut all = Vec::with_capacity(count);
    for (i, facet) in facets.iter().enumerate() {
        let last = pieces[i].len() - 1;
        for k in 0..=last {
            let here = first[i] + k;
            let before = match facet.before {
                Link::Facet(j) if k == 0 => Link::Facet(first[j] + pieces[j].len() - 1),
                other if k == 0 => other,
                _ => Link::Facet(here - 1),
            };
            let after = match facet.after {
                Link::Facet(j) if k == last => Link::Facet(first[j]),
                other if k == last => other,
                _ => Link::Facet(here + 1),
            };
            let b = if k == last { facet.b } else { pieces[i][k + 1] };
            all.push(Facet { a: pieces[i][k], b, before, after, ..facet.clone() });
        }
    }
    *facets = all;
}
