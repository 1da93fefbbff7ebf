//! Whether many points lie inside one region.
//!
//! Method: even-odd crossings of the level ray to the right, as [`Region::contains`] counts them,
//! over the edges of the point's row alone: the height of the region is cut into rows of equal
//! height, each with the edges that reach into it. Cost: linear in the edges to prepare, the
//! edges of a row for a question; an outline with many long upright edges gains little.

use super::{Bounds, Point, Region};

/// Edges per row that are aimed at.
const EDGES_PER_ROW: usize = 4;

/// A region prepared for many questions.
#[derive(Debug)]
pub struct Inside {
    bounds: Option<Bounds>,
    /// Edges of each row, bottom to top.
    rows: Vec<Vec<(Point, Point)>>,
}

impl Inside {
    /// Prepares a region.
    pub fn of(region: &Region) -> Self {
        let bounds = region.bounds();
        let edges: Vec<_> = region.edges().collect();
        let mut rows = vec![Vec::new(); (edges.len() / EDGES_PER_ROW).max(1)];
        if let Some(bounds) = &bounds {
            let row = |z: f64| row_of(z, bounds, rows.len());
            let ranges: Vec<_> =
                edges.iter().map(|(a, b)| row(a.z.min(b.z))..=row(a.z.max(b.z))).collect();
            for (edge, range) in edges.into_iter().zip(ranges) {
                range.for_each(|row| rows[row].push(edge));
            }
        }
        Self { bounds, rows }
    }

    /// Whether a point lies inside (even-odd rule; on the edge, either answer).
    pub fn contains(&self, p: Point) -> bool {
        let Some(bounds) = &self.bounds else { return false };
        let within = (bounds.min.x..=bounds.max.x).contains(&p.x)
            && (bounds.min.z..=bounds.max.z).contains(&p.z);
        if !within {
            return false;
        }
        let crossings = self.rows[row_of(p.z, bounds, self.rows.len())].iter().filter(|(a, b)| {
            (a.z > p.z) != (b.z > p.z) && p.x < a.x + (p.z - a.z) / (b.z - a.z) * (b.x - a.x)
        });
        crossings.count() % 2 == 1
    }
}

/// The row of a height, monotonic in it.
fn row_of(z: f64, bounds: &Bounds, rows: usize) -> usize {
    let part = (z - bounds.min.z) / (bounds.max.z - bounds.min.z);
    ((part * rows as f64) as usize).min(rows - 1)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rows_give_the_answer_of_all_edges() {
        let ring = |radius: f64| {
            let point = |k: usize| {
                let (sin, cos) = (0.1 * k as f64).sin_cos();
                Point::new(radius * cos, radius * (1.0 + 0.3 * (k % 7) as f64) * sin)
            };
            Region::from_rings([(0..62).map(point).collect()])
        };
        let region = ring(10.0).difference(&ring(4.0));
        let inside = Inside::of(&region);
        for i in -40..=40 {
            for j in -40..=40 {
                let p = Point::new(0.531 * f64::from(i), 0.497 * f64::from(j));
                assert_eq!(inside.contains(p), region.contains(p), "{p:?}");
            }
        }
        assert!(!Inside::of(&Region::empty()).contains(Point::default()));
    }
}
