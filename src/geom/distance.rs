//! Shortest distance between two regions.
//!
//! Least distance over all pairs of edges (of two segments that do not cross it is taken at an
//! end point); zero where the regions meet. Cost: product of the edge counts, with a box test
//! that skips most pairs.

use super::{Point, Region};

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
        let mut least = f64::INFINITY;
        for (a, b) in self.edges() {
            for &(c, d) in &others {
                if box_gap(a, b, c, d) < least {
                    least = least.min(segment_distance(a, b, c, d));
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
