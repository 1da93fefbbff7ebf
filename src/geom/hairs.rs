//! Hairs: out and back on the same line, left by the rounding of edges that two regions share.

use super::{Point, Region};
use crate::num::tolerance::SAME_LINE_NM;

impl Region {
    /// The region without its hairs.
    pub fn without_hairs(&self) -> Self {
        let rings: Vec<_> = self.rings().map(|ring| shaved(ring)).collect();
        if rings.iter().zip(self.rings()).all(|(new, old)| new.len() == old.len()) {
            return self.clone();
        }
        Self::from_rings_even_odd(rings.into_iter().filter(|ring| ring.len() > 2))
    }
}

/// A ring without the points at which it turns back on itself.
pub fn shaved(ring: &[Point]) -> Vec<Point> {
    let is_tip = |a: Point, b: Point, c: Point| {
        (a - b).dot(c - b) > 0.0
            && (c.distance_to_segment(a, b) < SAME_LINE_NM
                || a.distance_to_segment(b, c) < SAME_LINE_NM)
    };
    let mut kept: Vec<Point> = Vec::with_capacity(ring.len());
    for &p in ring {
        while let [.., a, b] = kept[..]
            && is_tip(a, b, p)
        {
            kept.pop();
        }
        if kept.last() != Some(&p) {
            kept.push(p);
        }
    }
    while kept.len() > 2 {
        let n = kept.len();
        if kept[0] == kept[n - 1] || is_tip(kept[n - 2], kept[n - 1], kept[0]) {
            kept.pop();
        } else if is_tip(kept[n - 1], kept[0], kept[1]) {
            kept.remove(0);
        } else {
            break;
        }
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_hair_is_shaved_and_the_head_is_not() {
        let p = Point::new;
        let ring = [p(0.0, 0.0), p(4.0, 0.0), p(4.0, 9.0), p(4.0, 2.0), p(0.0, 2.0)];
        assert_eq!(shaved(&ring), [p(0.0, 0.0), p(4.0, 0.0), p(4.0, 2.0), p(0.0, 2.0)]);
        let square = Region::rectangle([0.0, 1.0], [0.0, 1.0]);
        assert_eq!(square.without_hairs(), square);
    }
}
