//! Shortest distance between two regions.
//!
//! Least distance over all pairs of edges (of two segments that do not cross it is taken at an
//! end point); zero where the regions meet. Cost: product of the edge counts over [`RUN`], with
//! box tests that skip most runs of edges, and most pairs of the others.

use super::{Point, Region};

/// Edges that follow each other in an outline are skipped together, this many.
const RUN: usize = 16;

impl Region {
    /// The shortest straight way to another region, in nm; 0 where they touch or overlap, `None` where
    /// one is empty.
    pub fn distance(&self, other: &Self) -> Option<f64> {
        let first = |region: &Self| region.rings().next().map(|ring| ring[0]);
        let (mine, theirs) = (first(self)?, first(other)?);
        if self.contains(theirs) || other.contains(mine) {
            return Some(0.0);
        }
        let others: Vec<_> = other.edges().collect();
        let runs: Vec<_> = others.chunks(RUN).map(|run| (corners_of(run), run)).collect();
        let mut least = f64::INFINITY;
        for (a, b) in self.edges() {
            for (corners, run) in &runs {
                if box_gap(a, b, corners[0], corners[1]) >= least {
                    continue;
                }
                for &(c, d) in *run {
                    if box_gap(a, b, c, d) < least {
                        least = least.min(segment_distance(a, b, c, d));
                    }
                }
            }
        }
        Some(least)
    }

    /// The point of the outline that lies nearest to `p`; `None` where the region is empty.
    pub fn nearest(&self, p: Point) -> Option<Point> {
        let feet = self.edges().map(|(a, b)| foot(p, a, b));
        feet.min_by(|a, b| p.distance(*a).total_cmp(&p.distance(*b)))
    }
}

/// The point of the segment from `a` to `b` nearest to `p`.
fn foot(p: Point, a: Point, b: Point) -> Point {
    let along = b - a;
    let length2 = along.dot(along);
    if length2 == 0.0 {
        return a;
    }
    a + along * ((p - a).dot(along) / length2).clamp(0.0, 1.0)
}

/// Lower left and upper right corner of the box around some edges.
fn corners_of(edges: &[(Point, Point)]) -> [Point; 2] {
    edges.iter().flat_map(|(a, b)| [a, b]).fold(
        [Point::new(f64::MAX, f64::MAX), Point::new(f64::MIN, f64::MIN)],
        |[low, high], p| {
            [
                Point::new(low.x.min(p.x), low.z.min(p.z)),
                Point::new(high.x.max(p.x), high.z.max(p.z)),
            ]
        },
    )
}

/// A lower bound of the distance of two segments: that of their boxes along one axis.
fn box_gap(a: Point, b: Point, c: Point, d: Point) -> f64 {
    let gap = |a: f64, b: f64, c: f64, d: f64| (c.min(d) - a.max(b)).max(a.min(b) - c.max(d));
    gap(a.x, b.x, c.x, d.x).max(gap(a.z, b.z, c.z, d.z))
}

fn segment_distance(a: Point, b: Point, c: Point, d: Point) -> f64 {
    let side = |p: Point, q: Point, r: Point| (q - p).cross(r - p);
    let crosses = side(a, b, c) * side(a, b, d) < 0.0 && side(c, d, a) * side(c, d, b) < 0.0;
    if crosses {
        return 0.0;
    }
    let of_ends = a.distance_to_segment(c, d).min(b.distance_to_segment(c, d));
    of_ends.min(c.distance_to_segment(a, b)).min(d.distance_to_segment(a, b))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn squares_apart_touching_and_inside() {
        let square = Region::rectangle([0.0, 2.0], [0.0, 2.0]);
        let corner = Region::rectangle([5.0, 6.0], [6.0, 7.0]);
        assert_eq!(square.distance(&corner), Some(5.0));
        assert_eq!(square.distance(&square.translated(Point::new(2.0, 0.0))), Some(0.0));
        assert_eq!(square.distance(&Region::rectangle([0.5, 1.0], [0.5, 1.0])), Some(0.0));
        assert_eq!(square.distance(&Region::empty()), None);
    }

    #[test]
    fn edges_skipped_together_change_nothing() {
        let ring = |centre: Point, radius: f64, sides: usize| {
            let point = |k: usize| {
                let (sin, cos) = (std::f64::consts::TAU * k as f64 / sides as f64).sin_cos();
                centre + Point::new(cos, sin) * (radius * (1.0 + 0.2 * (k % 3) as f64))
            };
            Region::from_rings([(0..sides).map(point).collect()])
        };
        let (one, other) = (ring(Point::default(), 5.0, 90), ring(Point::new(17.0, 6.0), 7.0, 70));
        let mut least = f64::INFINITY;
        for (a, b) in one.edges() {
            for (c, d) in other.edges() {
                least = least.min(segment_distance(a, b, c, d));
            }
        }
        assert_eq!(one.distance(&other), Some(least));
    }

    #[test]
    fn the_nearest_point_of_a_square_is_a_foot_or_a_corner() {
        let square = Region::rectangle([0.0, 2.0], [0.0, 2.0]);
        assert_eq!(square.nearest(Point::new(1.0, 5.0)), Some(Point::new(1.0, 2.0)));
        assert_eq!(square.nearest(Point::new(3.0, 5.0)), Some(Point::new(2.0, 2.0)));
        assert_eq!(Region::empty().nearest(Point::default()), None);
    }

    #[test]
    fn crossing_bars_meet() {
        let bar = Region::rectangle([0.0, 9.0], [4.0, 5.0]);
        assert_eq!(bar.distance(&Region::rectangle([4.0, 5.0], [0.0, 9.0])), Some(0.0));
    }
}
