//! A region of the section: a set of polygons with holes, and its booleans.
//!
//! Booleans run on 64-bit integers (i_overlay), one unit a cell of the polygon grid. Region
//! vertices lie on that grid, so edges shared by neighbours stay shared and only a vertex made
//! by an intersection is rounded, by at most half a cell (5e-7 nm). Cost: n log n in the
//! number of edges. It cannot fail on finite input.

use i_overlay::core::fill_rule::FillRule;
use i_overlay::core::overlay::Overlay;
use i_overlay::core::overlay_rule::OverlayRule;
use i_overlay::i_float::int::point::IntPoint;

use super::{Bounds, Point};
use crate::num::tolerance::{DUST_AREA_NM2, GRID_PER_NM};

/// An outer ring, counter-clockwise, followed by its holes, clockwise; rings are closed
/// without repeating their first point.
pub type Polygon = Vec<Vec<Point>>;

/// A set of disjoint polygons with holes, vertices in nm on the polygon grid.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Region {
    pub(super) polygons: Vec<Polygon>,
}

impl Region {
    /// The region without points.
    pub fn empty() -> Self {
        Self::default()
    }

    /// The upright rectangle between two opposite corners, in nm.
    pub fn rectangle(x: [f64; 2], z: [f64; 2]) -> Self {
        Self::from_rings([vec![
            Point::new(x[0], z[0]),
            Point::new(x[1], z[0]),
            Point::new(x[1], z[1]),
            Point::new(x[0], z[1]),
        ]])
    }

    /// All points about which the rings together wind at least once (non-zero rule).
    pub fn from_rings(rings: impl IntoIterator<Item = Vec<Point>>) -> Self {
        let rings: Vec<_> = rings.into_iter().collect();
        Self::overlay(&to_grid(rings.iter()), &[], OverlayRule::Subject)
    }

    /// All points inside an odd number of the rings (even-odd rule).
    pub fn from_rings_even_odd(rings: impl IntoIterator<Item = Vec<Point>>) -> Self {
        let rings: Vec<_> = rings.into_iter().collect();
        let mut overlay =
            Overlay::<i64>::from_subj_and_clip(&to_grid(rings.iter())[..], &[] as &[Path]);
        Self::from_grid(overlay.overlay(OverlayRule::Subject, FillRule::EvenOdd))
    }

    /// All points about which the rings together wind at least once counter-clockwise: what a
    /// ring that crosses itself encloses the wrong way round is left out (positive rule).
    pub fn from_rings_positive(rings: impl IntoIterator<Item = Vec<Point>>) -> Self {
        let rings: Vec<_> = rings.into_iter().collect();
        let mut overlay =
            Overlay::<i64>::from_subj_and_clip(&to_grid(rings.iter())[..], &[] as &[Path]);
        Self::from_grid(overlay.overlay(OverlayRule::Subject, FillRule::Positive))
    }

    /// Points in this region, in the other, or in both.
    pub fn union(&self, other: &Self) -> Self {
        self.boolean(other, OverlayRule::Union)
    }

    /// Points in both regions.
    pub fn intersection(&self, other: &Self) -> Self {
        self.boolean(other, OverlayRule::Intersect)
    }

    /// Points in this region and not in the other.
    pub fn difference(&self, other: &Self) -> Self {
        self.boolean(other, OverlayRule::Difference)
    }

    /// Union of many regions in one pass.
    pub fn union_all<'a>(regions: impl IntoIterator<Item = &'a Self>) -> Self {
        let paths = to_grid(regions.into_iter().flat_map(Self::rings));
        Self::overlay(&paths, &[], OverlayRule::Subject)
    }

    /// The polygons of the region, each outer ring first, then its holes.
    pub fn polygons(&self) -> &[Polygon] {
        &self.polygons
    }

    /// All rings, outer ones counter-clockwise, holes clockwise.
    pub fn rings(&self) -> impl Iterator<Item = &Vec<Point>> {
        self.polygons.iter().flatten()
    }

    /// The connected parts, one region each, in the order of the polygons.
    pub fn parts(&self) -> impl Iterator<Item = Self> + '_ {
        self.polygons.iter().map(|polygon| Self { polygons: vec![polygon.clone()] })
    }

    /// Every edge, from its first to its second point, the region on its left.
    pub fn edges(&self) -> impl Iterator<Item = (Point, Point)> + '_ {
        self.rings().flat_map(|ring| {
            let next = ring.iter().cycle().skip(1);
            ring.iter().copied().zip(next.copied())
        })
    }

    /// Whether the region has no points.
    pub fn is_empty(&self) -> bool {
        self.polygons.is_empty()
    }

    /// Area, in nm².
    pub fn area(&self) -> f64 {
        self.edges().map(|(a, b)| a.cross(b)).sum::<f64>() / 2.0
    }

    /// Box around the region; `None` when it is empty.
    pub fn bounds(&self) -> Option<Bounds> {
        Bounds::around(self.rings().flatten().copied())
    }

    /// Whether a point lies inside (even-odd rule; on the edge, either answer).
    pub fn contains(&self, p: Point) -> bool {
        let crossings = self.edges().filter(|&(a, b)| {
            (a.z > p.z) != (b.z > p.z) && p.x < a.x + (p.z - a.z) / (b.z - a.z) * (b.x - a.x)
        });
        crossings.count() % 2 == 1
    }

    /// The mirror image at the upright line x = `axis`.
    pub fn mirrored(&self, axis: f64) -> Self {
        self.mapped(|p| Point::new(2.0 * axis - p.x, p.z), true)
    }

    /// The region moved by `by`, in nm.
    pub fn translated(&self, by: Point) -> Self {
        self.mapped(|p| p + by, false)
    }

    /// Grows the region by `distance` in all directions, as far as its edges (mitred corners
    /// are not used: convex corners are rounded in steps of at most `step_rad`).
    pub fn grown(&self, distance: f64, step_rad: f64) -> Self {
        let mut rings: Vec<_> = self.rings().cloned().collect();
        for (a, b) in self.edges() {
            rings.push(capsule(a, b, distance, step_rad));
        }
        Self::from_rings(rings)
    }

    fn mapped(&self, map: impl Fn(Point) -> Point, reverses: bool) -> Self {
        let ring = |ring: &Vec<Point>| {
            let mut points: Vec<_> = ring.iter().map(|&p| map(p).snapped()).collect();
            if reverses {
                points.reverse();
            }
            points
        };
        let polygons = self.polygons.iter().map(|p| p.iter().map(ring).collect()).collect();
        Self { polygons }
    }

    fn boolean(&self, other: &Self, rule: OverlayRule) -> Self {
        Self::overlay(&to_grid(self.rings()), &to_grid(other.rings()), rule)
    }

    fn overlay(subject: &[Path], clip: &[Path], rule: OverlayRule) -> Self {
        let mut overlay = Overlay::<i64>::from_subj_and_clip(subject, clip);
        Self::from_grid(overlay.overlay(rule, FillRule::NonZero))
    }

    fn from_grid(shapes: Vec<Vec<Path>>) -> Self {
        let point =
            |p: &IntPoint<i64>| Point::new(p.x as f64 / GRID_PER_NM, p.y as f64 / GRID_PER_NM);
        let polygons = shapes
            .iter()
            .map(|shape| shape.iter().map(|path| path.iter().map(point).collect()).collect())
            .filter(|polygon: &Polygon| ring_area(&polygon[0]) > DUST_AREA_NM2)
            .map(|mut polygon: Polygon| {
                let mut first = true;
                polygon
                    .retain(|ring| std::mem::take(&mut first) || -ring_area(ring) > DUST_AREA_NM2);
                polygon
            })
            .collect();
        Self { polygons }
    }
}

type Path = Vec<IntPoint<i64>>;

fn to_grid<'a>(rings: impl Iterator<Item = &'a Vec<Point>>) -> Vec<Path> {
    let coordinate = |v: f64| (v * GRID_PER_NM).round() as i64;
    rings
        .map(|ring| ring.iter().map(|p| IntPoint::new(coordinate(p.x), coordinate(p.z))).collect())
        .collect()
}

/// Signed area of a ring, positive when counter-clockwise, in nm².
fn ring_area(ring: &[Point]) -> f64 {
    let next = ring.iter().cycle().skip(1);
    ring.iter().zip(next).map(|(a, b)| a.cross(*b)).sum::<f64>() / 2.0
}

/// All points within `radius` of a segment, as a counter-clockwise ring.
fn capsule(a: Point, b: Point, radius: f64, step_rad: f64) -> Vec<Point> {
    let steps = (std::f64::consts::PI / step_rad).ceil().max(2.0) as usize;
    let along = (b - a) * (1.0 / a.distance(b));
    let start = along.z.atan2(along.x) - std::f64::consts::FRAC_PI_2;
    let half = |centre: Point, from: f64| {
        (0..=steps).map(move |k| {
            let angle = from + std::f64::consts::PI * k as f64 / steps as f64;
            centre + Point::new(angle.cos(), angle.sin()) * radius
        })
    };
    half(b, start).chain(half(a, start + std::f64::consts::PI)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn booleans_of_squares() {
        let a = Region::rectangle([0.0, 2.0], [0.0, 2.0]);
        let b = Region::rectangle([1.0, 3.0], [1.0, 3.0]);
        assert_eq!(a.union(&b).area(), 7.0);
        assert_eq!(a.intersection(&b).area(), 1.0);
        assert_eq!(a.difference(&b).area(), 3.0);
        assert!(a.difference(&a).is_empty());
    }

    #[test]
    fn a_hole_counts_against_the_area_and_is_not_inside() {
        let ring = Region::rectangle([0.0, 4.0], [0.0, 4.0])
            .difference(&Region::rectangle([1.0, 3.0], [1.0, 3.0]));
        assert_eq!(ring.area(), 12.0);
        assert_eq!(ring.polygons()[0].len(), 2);
        assert!(ring.contains(Point::new(0.5, 2.0)) && !ring.contains(Point::new(2.0, 2.0)));
    }

    #[test]
    fn growing_a_square_adds_sides_and_quarter_circles() {
        let grown = Region::rectangle([0.0, 10.0], [0.0, 10.0]).grown(3.0, 0.01);
        let exact = 100.0 + 4.0 * 30.0 + std::f64::consts::PI * 9.0;
        assert!((grown.area() - exact).abs() < 1e-3, "{}", grown.area());
    }

    #[test]
    fn mirroring_keeps_orientation() {
        let region = Region::rectangle([1.0, 4.0], [0.0, 2.0]);
        assert_eq!(region.mirrored(0.0).area(), 6.0);
        assert_eq!(region.mirrored(0.0).bounds().unwrap().min.x, -4.0);
    }
}
