//! What a point of the surface sees: facets, their mirror images, and sky.
//!
//! Method: seen from a point with a normal, a direction is the sine of its angle from the
//! normal, so that an interval [s₀, s₁] of directions has the view factor ½ (s₁ − s₀) (Hottel's
//! crossed strings from a point; any radiation handbook). Facets that face the point are
//! entered into a sorted list of what is nearest in each direction; facets never cross, so
//! where two overlap one of them is nearer over the whole overlap. Entering them in the order of
//! the surface, outward from the point, nearly every facet falls behind the running extreme of
//! the angle (one look) or beyond it (append): linear in the facets, and exact for any outline,
//! re-entrant, stepped or in several pieces.
//!
//! The mirror walls are unfolded: copy k of the outline lies k widths to the right, reversed
//! when k is odd. Copies are entered outward until no direction that is still open passes below
//! the highest point of the outline before it reaches the next copy. Any point sees that highest
//! point or something before it within two copies, so [`COPIES`] to each side are exact; only a
//! tunnel from wall to wall could be seen through further, and what it leaves is shared out by the
//! rescaling in [`super::exchange`].
//!
//! Cost: facets in sight × points. It cannot fail.

use super::outline::Facet;
use crate::geom::Point;

/// Copies of the outline to each side of it.
const COPIES: i32 = 2;

/// Narrower intervals of direction are rounding.
const SLIVER: f64 = 1e-14;

/// Square of the distance within which a facet lies at the eye, in nm².
const AT_THE_EYE_NM2: f64 = 1e-12;

/// The outline unfolded at its mirror walls.
pub(super) struct Scenery {
    segments: Vec<Segment>,
    /// Facets of one copy.
    count: usize,
    walls: [f64; 2],
    top: f64,
}

#[derive(Clone, Copy)]
struct Segment {
    from: Point,
    to: Point,
}

/// One piece of a view: from direction `from` to direction `to`, as sines from the normal,
/// counter-clockwise.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Seen {
    pub(super) from: f64,
    pub(super) to: f64,
    /// Index of the facet, its mirror images counted as itself.
    pub(super) facet: usize,
    segment: usize,
}

/// A viewpoint on the surface.
#[derive(Clone, Copy)]
struct Eye {
    at: Point,
    normal: Point,
    left: Point,
}

impl Scenery {
    pub(super) fn unfold(facets: &[Facet], walls: [f64; 2]) -> Self {
        let width = walls[1] - walls[0];
        let mut segments = Vec::with_capacity(facets.len() * (2 * COPIES + 1) as usize);
        for copy in -COPIES..=COPIES {
            // Two mirrors make a shift by an even number of widths.
            let shift = f64::from(copy.div_euclid(2)) * 2.0 * width;
            if copy % 2 == 0 {
                let moved = |p: Point| Point::new(p.x + shift, p.z);
                segments.extend(
                    facets.iter().map(|f| Segment { from: moved(f.from), to: moved(f.to) }),
                );
            } else {
                let moved = |p: Point| Point::new(2.0 * walls[1] - p.x + shift, p.z);
                segments.extend(
                    facets.iter().rev().map(|f| Segment { from: moved(f.to), to: moved(f.from) }),
                );
            }
        }
        let top = facets.iter().flat_map(|f| [f.from.z, f.to.z]).fold(f64::NEG_INFINITY, f64::max);
        Self { segments, count: facets.len(), walls, top }
    }

    /// Enters into `seen` what facet `index` sees from `at`, in order of direction.
    pub(super) fn look(&self, index: usize, at: Point, normal: Point, seen: &mut Vec<Seen>) {
        seen.clear();
        let eye = Eye { at, normal, left: Point::new(-normal.z, normal.x) };
        let own = COPIES as usize * self.count;
        for j in own + index + 1..own + self.count {
            self.enter(&eye, j, index, seen);
        }
        for j in (own..own + index).rev() {
            self.enter(&eye, j, index, seen);
        }
        let width = self.walls[1] - self.walls[0];
        for copy in 1..=COPIES as usize {
            let distance = self.walls[1] - at.x + (copy - 1) as f64 * width;
            if self.is_closed(&eye, distance, seen) {
                break;
            }
            for j in own + copy * self.count..own + (copy + 1) * self.count {
                self.enter(&eye, j, index, seen);
            }
        }
        for copy in 1..=COPIES as usize {
            let distance = self.walls[0] - at.x - (copy - 1) as f64 * width;
            if self.is_closed(&eye, distance, seen) {
                break;
            }
            for j in (own - copy * self.count..own - (copy - 1) * self.count).rev() {
                self.enter(&eye, j, index, seen);
            }
        }
    }

    /// Whether no open direction passes below the top at `distance` (signed, sideways).
    fn is_closed(&self, eye: &Eye, distance: f64, seen: &[Seen]) -> bool {
        let side = distance.signum();
        // A gap is closed here when neither of its ends, nor anything between, points to this
        // side below the line of sight over the top.
        let rim = Point::new(distance, (self.top - eye.at.z).max(0.0));
        let rim = if rim.norm() > 0.0 { rim } else { Point::new(side, 0.0) };
        gaps(seen).all(|[from, to]| {
            let (a, b) = (eye.direction(from), eye.direction(to));
            // Directions of this side below the rim form a half-plane cut by the vertical down.
            let below = |d: Point| d.x * side > 0.0 && rim.cross(d) * side < -1e-12;
            let down = eye.sine_of(Point::new(0.0, -1.0));
            !(below(a) || below(b) || down.is_some_and(|s| s > from && s < to))
        })
    }

    fn enter(&self, eye: &Eye, segment: usize, own: usize, seen: &mut Vec<Seen>) {
        let Segment { from, to } = self.segments[segment];
        let (a, b) = (from - eye.at, to - eye.at);
        // Facing means counter-clockwise as seen from the eye.
        if a.cross(b) <= 0.0 {
            return;
        }
        // A facet without length at the eye itself (its fan) is no obstacle but rounding.
        if a.dot(a).max(b.dot(b)) < AT_THE_EYE_NM2 {
            return;
        }
        let (height_a, height_b) = (a.dot(eye.normal), b.dot(eye.normal));
        if height_a <= 0.0 && height_b <= 0.0 {
            return;
        }
        let from = if height_a <= 0.0 { -1.0 } else { a.dot(eye.left) / a.dot(a).sqrt() };
        let to = if height_b <= 0.0 { 1.0 } else { b.dot(eye.left) / b.dot(b).sqrt() };
        if to - from <= SLIVER {
            return;
        }
        let copy = segment / self.count;
        let place = segment % self.count;
        let facet = if (copy as i32 - COPIES) % 2 == 0 { place } else { self.count - 1 - place };
        debug_assert!(facet != own || copy as i32 != COPIES);
        self.insert(eye, Seen { from, to, facet, segment }, seen);
    }

    fn insert(&self, eye: &Eye, new: Seen, seen: &mut Vec<Seen>) {
        if seen.last().is_none_or(|last| last.to <= new.from) {
            seen.push(new);
            return;
        }
        let first = seen.partition_point(|old| old.to <= new.from);
        if seen[first].from >= new.to {
            seen.insert(first, new);
            return;
        }
        let mut pieces: Vec<Seen> = Vec::new();
        let mut cursor = new.from;
        let mut last = first;
        let mut changed = false;
        while last < seen.len() && seen[last].from < new.to {
            let old = seen[last];
            if old.from > cursor {
                pieces.push(Seen { from: cursor, to: old.from, ..new });
                changed = true;
            }
            let (begin, end) = (old.from.max(new.from), old.to.min(new.to));
            let middle = 0.5 * (begin + end);
            if end - begin > SLIVER
                && self.depth(eye, new.segment, middle) < self.depth(eye, old.segment, middle)
            {
                changed = true;
                if old.from < begin {
                    pieces.push(Seen { to: begin, ..old });
                }
                pieces.push(Seen { from: begin, to: end, ..new });
                if old.to > end {
                    pieces.push(Seen { from: end, ..old });
                }
            } else {
                pieces.push(old);
            }
            cursor = old.to;
            last += 1;
        }
        if cursor < new.to {
            pieces.push(Seen { from: cursor, ..new });
            changed = true;
        }
        if changed {
            pieces.retain(|piece| piece.to - piece.from > SLIVER);
            pieces.dedup_by(|next, piece| {
                let same = next.segment == piece.segment && next.from == piece.to;
                if same {
                    piece.to = next.to;
                }
                same
            });
            seen.splice(first..last, pieces);
        }
    }

    /// Distance to a segment's line in the direction of a sine.
    fn depth(&self, eye: &Eye, segment: usize, sine: f64) -> f64 {
        let Segment { from, to } = self.segments[segment];
        let along = to - from;
        (from - eye.at).cross(along) / eye.direction(sine).cross(along)
    }
}

impl Eye {
    fn direction(&self, sine: f64) -> Point {
        self.normal * (1.0 - sine * sine).max(0.0).sqrt() + self.left * sine
    }

    /// Sine of a direction, when it lies above the horizon.
    fn sine_of(&self, direction: Point) -> Option<f64> {
        (direction.dot(self.normal) > 0.0).then(|| direction.dot(self.left))
    }
}

/// The directions that nothing covers, in order.
pub(super) fn gaps(seen: &[Seen]) -> impl Iterator<Item = [f64; 2]> + '_ {
    let starts = std::iter::once(-1.0).chain(seen.iter().map(|piece| piece.to));
    let ends = seen.iter().map(|piece| piece.from).chain(std::iter::once(1.0));
    starts.zip(ends).map(|(from, to)| [from, to]).filter(|[from, to]| to - from > SLIVER)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn chain(points: &[(f64, f64)]) -> Vec<Facet> {
        points
            .windows(2)
            .map(|p| Facet::between(Point::new(p[0].0, p[0].1), Point::new(p[1].0, p[1].1), 0))
            .collect()
    }

    fn view(facets: &[Facet], walls: [f64; 2], index: usize) -> Vec<Seen> {
        let mut seen = Vec::new();
        let facet = facets[index];
        Scenery::unfold(facets, walls).look(index, facet.middle(), facet.normal, &mut seen);
        seen
    }

    #[test]
    fn a_flat_sees_only_sky() {
        let facets = chain(&[(0.0, 0.0), (5.0, 0.0), (10.0, 0.0)]);
        assert!(view(&facets, [0.0, 10.0], 0).is_empty());
    }

    #[test]
    fn the_floor_of_half_a_trench_sees_its_wall_and_the_walls_image() {
        // Wall of height 1 at x = 0, mirror at x = 1, floor facet from 0 to 1.
        let facets = chain(&[(-1.0, 1.0), (0.0, 1.0), (0.0, 0.0), (1.0, 0.0)]);
        let seen = view(&facets, [-1.0, 1.0], 2);
        assert_eq!(seen.iter().map(|s| s.facet).collect::<Vec<_>>(), [1, 1]);
        let sky: f64 = gaps(&seen).map(|[a, b]| 0.5 * (b - a)).sum();
        // Seen from x = 0.5: the left edge at (-0.5, 1), the mirrored right edge at (1.5, 1).
        let exact = 0.5 * (0.5_f64.hypot(1.0).recip() * 0.5 + 1.5 / 1.5_f64.hypot(1.0));
        assert!((sky - exact).abs() < 1e-14, "{sky} {exact}");
    }

    #[test]
    fn a_hanging_plate_hides_what_is_behind_it() {
        // Floor, and from the wall on the right a plate that comes down in front of it.
        let facets = chain(&[
            (0.0, 0.0),
            (1.0, 0.0),
            (9.0, 0.0),
            (9.0, 8.0),
            (4.0, 8.0),
            (4.0, 2.0),
            (3.0, 2.0),
            (3.0, 9.0),
            (10.0, 9.0),
        ]);
        let seen = view(&facets, [0.0, 10.0], 0);
        // To the right only: the wall at x = 0 shows the same again.
        let share = |facet: usize| -> f64 {
            let right = seen.iter().filter(|s| s.facet == facet && s.to <= 0.0);
            right.map(|s| 0.5 * (s.to - s.from)).sum()
        };
        // From (0.5, 0) the far wall is seen below the line through (4, 2), which meets it at 4.9.
        let exact = 0.5 * (1.0 - 3.5 / 3.5_f64.hypot(2.0));
        assert!((share(2) - exact).abs() < 1e-12, "{seen:?}");
        assert!(share(3) == 0.0 && share(4) == 0.0 && share(6) > 0.0);
        let under = 3.5 / 3.5_f64.hypot(2.0) - 2.5 / 2.5_f64.hypot(2.0);
        assert!((share(5) - 0.5 * under).abs() < 1e-12);
    }

    #[test]
    fn order_of_facets_does_not_matter() {
        let facets = chain(&[(0.0, 5.0), (3.0, 5.0), (3.5, 1.0), (6.0, 0.0), (7.0, 6.0)]);
        let mut shuffled = facets.clone();
        shuffled.swap(0, 3);
        shuffled.swap(1, 2);
        let a: f64 = gaps(&view(&facets, [0.0, 7.0], 2)).map(|[a, b]| b - a).sum();
        let b: f64 = gaps(&view(&shuffled, [0.0, 7.0], 1)).map(|[a, b]| b - a).sum();
        assert!((a - b).abs() < 1e-14);
    }
}
