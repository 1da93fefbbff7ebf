//! Which of several disjoint regions a point lies in.
//!
//! Edges are binned by rows of z; a horizontal ray then meets only those of its own row. Cost: a
//! look-up a row's edges, some tens on an outline of a thousand.

use crate::geom::{Bounds, Point, Region};

const ROWS: usize = 256;

/// Edges of regions by rows of z.
pub(super) struct Locator {
    bottom: f64,
    rows_per_nm: f64,
    rows: Vec<Vec<(usize, Point, Point)>>,
}

impl Locator {
    pub(super) fn new<'a>(regions: impl IntoIterator<Item = &'a Region> + Clone) -> Self {
        let corners = regions
            .clone()
            .into_iter()
            .filter_map(Region::bounds)
            .flat_map(|Bounds { min, max }| [min, max]);
        let (bottom, top) = Bounds::around(corners).map_or((0.0, 1.0), |b| (b.min.z, b.max.z));
        let rows_per_nm = ROWS as f64 / (top - bottom).max(f64::MIN_POSITIVE);
        let mut locator = Self { bottom, rows_per_nm, rows: vec![Vec::new(); ROWS] };
        for (index, region) in regions.into_iter().enumerate() {
            for (a, b) in region.edges().filter(|(a, b)| a.z != b.z) {
                let [low, high] = [a.z.min(b.z), a.z.max(b.z)].map(|z| locator.row(z));
                for row in &mut locator.rows[low..=high] {
                    row.push((index, a, b));
                }
            }
        }
        locator
    }

    fn row(&self, z: f64) -> usize {
        (((z - self.bottom) * self.rows_per_nm).max(0.0) as usize).min(ROWS - 1)
    }

    /// The region that holds `p`; the lowest numbered where rounding makes two overlap.
    pub(super) fn find(&self, p: Point) -> Option<usize> {
        let mut inside: Vec<usize> = Vec::new();
        for &(index, a, b) in &self.rows[self.row(p.z)] {
            if (a.z > p.z) != (b.z > p.z) && p.x < a.x + (p.z - a.z) / (b.z - a.z) * (b.x - a.x) {
                match inside.iter().position(|&i| i == index) {
                    Some(at) => {
                        inside.swap_remove(at);
                    }
                    None => inside.push(index),
                }
            }
        }
        inside.into_iter().min()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn points_are_found_in_their_region() {
        let left = Region::rectangle([0.0, 2.0], [0.0, 5.0]);
        let right = Region::rectangle([2.0, 4.0], [0.0, 3.0]);
        let locator = Locator::new([&left, &right]);
        assert_eq!(locator.find(Point::new(1.0, 4.9)), Some(0));
        assert_eq!(locator.find(Point::new(3.0, 1.0)), Some(1));
        assert_eq!(locator.find(Point::new(3.0, 4.0)), None);
    }
}
