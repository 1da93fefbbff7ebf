//! Straight cuts through a region: the intervals that an upright or level line has inside.
//!
//! Even-odd crossings with half-open edges, so a vertex on the line counts once and the number
//! of crossings is even. Cost: linear in the edges, plus a sort of the crossings.

use super::{Point, Region};

/// Intervals on a line, ascending and disjoint.
pub type Intervals = Vec<[f64; 2]>;

impl Region {
    /// The intervals in x where the level line at `z` lies inside.
    pub fn row(&self, z: f64) -> Intervals {
        intervals(self.edges(), z)
    }

    /// The intervals in z where the upright line at `x` lies inside.
    pub fn column(&self, x: f64) -> Intervals {
        let turned = |p: Point| Point::new(p.z, p.x);
        intervals(self.edges().map(|(a, b)| (turned(a), turned(b))), x)
    }
}

/// Length of the part of some intervals between `from` and `to`.
pub fn covered(intervals: &[[f64; 2]], from: f64, to: f64) -> f64 {
    intervals.iter().map(|[a, b]| (b.min(to) - a.max(from)).max(0.0)).sum()
}

fn intervals(edges: impl Iterator<Item = (Point, Point)>, z: f64) -> Intervals {
    let mut crossings: Vec<f64> = edges
        .filter(|(a, b)| (a.z > z) != (b.z > z))
        .map(|(a, b)| a.x + (z - a.z) / (b.z - a.z) * (b.x - a.x))
        .collect();
    crossings.sort_by(f64::total_cmp);
    crossings.chunks_exact(2).map(|pair| [pair[0], pair[1]]).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_cut_through_a_frame_has_two_pieces() {
        let frame = Region::rectangle([0.0, 10.0], [0.0, 8.0])
            .difference(&Region::rectangle([2.0, 7.0], [3.0, 5.0]));
        assert_eq!(frame.row(4.0), [[0.0, 2.0], [7.0, 10.0]]);
        assert_eq!(frame.row(1.0), [[0.0, 10.0]]);
        assert_eq!(frame.column(3.0), [[0.0, 3.0], [5.0, 8.0]]);
        assert!(frame.row(9.0).is_empty());
    }

    #[test]
    fn a_vertex_on_the_line_counts_once() {
        let diamond = Region::from_rings([vec![
            Point::new(0.0, -2.0),
            Point::new(2.0, 0.0),
            Point::new(0.0, 2.0),
            Point::new(-2.0, 0.0),
        ]]);
        assert_eq!(diamond.row(0.0), [[-2.0, 2.0]]);
        assert_eq!(diamond.column(0.0), [[-2.0, 2.0]]);
    }

    #[test]
    fn covered_clips_to_the_range() {
        assert_eq!(covered(&[[0.0, 2.0], [3.0, 9.0]], 1.0, 4.0), 2.0);
        assert_eq!(covered(&[[0.0, 2.0]], 3.0, 4.0), 0.0);
    }
}
