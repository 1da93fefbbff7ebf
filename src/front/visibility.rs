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

/// An end of a facet as seen from an eye.
#[derive(Clone, Copy)]
struct Sight {
    point: Point,
    offset: Point,
    /// Sine of its direction; ±1 below the horizon is up to the caller.
    sine: f64,
    height: f64,
}

/// What is seen on the way along the surface to one side, nearest pieces by direction. On the way
/// back along the surface everything is mirrored, so that pieces are appended there too.
struct Side {
    /// 1 on the way on, −1 on the way back: sines are kept times this.
    sign: f64,
    seen: Vec<Seen>,
}

/// Lists that the looks of one scenery share.
pub(super) struct Views {
    on: Side,
    back: Side,
}

impl Views {
    pub(super) fn new() -> Self {
        let side = |sign| Side { sign, seen: Vec::new() };
        Self { on: side(1.0), back: side(-1.0) }
    }
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

    /// What facet `index` sees from `at`, in order of direction.
    pub(super) fn look<'a>(
        &self,
        index: usize,
        at: Point,
        normal: Point,
        views: &'a mut Views,
    ) -> &'a [Seen] {
        let Views { on, back } = views;
        on.seen.clear();
        back.seen.clear();
        let eye = Eye { at, normal, left: Point::new(-normal.z, normal.x) };
        let own = COPIES as usize * self.count;
        let width = self.walls[1] - self.walls[0];
        self.enter(&eye, own + index + 1..own + self.count, on);
        for copy in 1..=COPIES as usize {
            let distance = self.walls[1] - at.x + (copy - 1) as f64 * width;
            if self.is_closed(&eye, distance, on) {
                break;
            }
            self.enter(&eye, own + copy * self.count..own + (copy + 1) * self.count, on);
        }
        self.enter(&eye, own..own + index, back);
        for copy in 1..=COPIES as usize {
            let distance = self.walls[0] - at.x - (copy - 1) as f64 * width;
            if self.is_closed(&eye, distance, back) {
                break;
            }
            self.enter(&eye, own - copy * self.count..own - (copy - 1) * self.count, back);
        }
        for piece in back.seen.iter().rev() {
            self.insert(&eye, piece.mirrored(), on);
        }
        &on.seen
    }

    /// Whether no open direction passes below the top at `distance` (signed, sideways).
    fn is_closed(&self, eye: &Eye, distance: f64, view: &Side) -> bool {
        let side = distance.signum();
        // A gap is closed here when neither of its ends, nor anything between, points to this
        // side below the line of sight over the top.
        let rim = Point::new(distance, (self.top - eye.at.z).max(0.0));
        let rim = if rim.norm() > 0.0 { rim } else { Point::new(side, 0.0) };
        let down = eye.sine_of(Point::new(0.0, -1.0)).map(|sine| view.sign * sine);
        gaps(&view.seen).all(|[from, to]| {
            let (a, b) = (eye.direction(view.sign * from), eye.direction(view.sign * to));
            // Directions of this side below the rim form a half-plane cut by the vertical down.
            let below = |d: Point| d.x * side > 0.0 && rim.cross(d) * side < -1e-12;
            !(below(a) || below(b) || down.is_some_and(|s| s > from && s < to))
        })
    }

    /// Enters segments, outward from the eye.
    fn enter(&self, eye: &Eye, range: std::ops::Range<usize>, view: &mut Side) {
        let mut last = Sight {
            point: Point::new(f64::NAN, 0.0),
            offset: Point::default(),
            sine: 0.0,
            height: 0.0,
        };
        let onward = view.sign > 0.0;
        for k in range.clone() {
            let at = if onward { k } else { range.start + range.end - 1 - k };
            let Segment { from, to } = self.segments[at];
            let (a, b) = (from - eye.at, to - eye.at);
            // Facing means counter-clockwise as seen from the eye.
            if a.cross(b) <= 0.0 {
                continue;
            }
            let (near, far) = if onward { (from, to) } else { (to, from) };
            let first = if last.point == near { last } else { eye.sight(near) };
            let second = eye.sight(far);
            last = second;
            // A facet without length at the eye itself (its fan) is no obstacle but rounding.
            let reach = first.offset.dot(first.offset).max(second.offset.dot(second.offset));
            if reach < AT_THE_EYE_NM2 || (first.height <= 0.0 && second.height <= 0.0) {
                continue;
            }
            let begin = if first.height <= 0.0 { -1.0 } else { view.sign * first.sine };
            let end = if second.height <= 0.0 { 1.0 } else { view.sign * second.sine };
            if end - begin <= SLIVER {
                continue;
            }
            let (copy, place) = (at / self.count, at % self.count);
            let facet =
                if (copy as i32 - COPIES) % 2 == 0 { place } else { self.count - 1 - place };
            self.insert(eye, Seen { from: begin, to: end, facet, segment: at }, view);
        }
    }

    fn insert(&self, eye: &Eye, new: Seen, view: &mut Side) {
        let Side { sign, seen } = view;
        if seen.last().is_none_or(|last| last.to <= new.from) {
            seen.push(new);
            return;
        }
        let first = seen.partition_point(|old| old.to <= new.from);
        if seen[first].from >= new.to {
            seen.insert(first, new);
            return;
        }
        if self.is_behind(eye, &new, &seen[first..], *sign) {
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
            let middle = *sign * 0.5 * (begin + end);
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

    /// Whether pieces cover all of a new one, and are nearer: so it is with nearly all that is entered
    /// late.
    fn is_behind(&self, eye: &Eye, new: &Seen, seen: &[Seen], sign: f64) -> bool {
        let mut cursor = new.from;
        for old in seen.iter().take_while(|old| old.from < new.to) {
            let (begin, end) = (old.from.max(new.from), old.to.min(new.to));
            let middle = sign * 0.5 * (begin + end);
            let is_nearer = end - begin > SLIVER
                && self.depth(eye, new.segment, middle) < self.depth(eye, old.segment, middle);
            if old.from > cursor || is_nearer {
                return false;
            }
            cursor = old.to;
        }
        cursor >= new.to
    }

    /// Distance to a segment's line in the direction of a sine.
    fn depth(&self, eye: &Eye, segment: usize, sine: f64) -> f64 {
        let Segment { from, to } = self.segments[segment];
        let along = to - from;
        (from - eye.at).cross(along) / eye.direction(sine).cross(along)
    }
}

impl Seen {
    fn mirrored(self) -> Self {
        Self { from: -self.to, to: -self.from, ..self }
    }
}

impl Eye {
    fn sight(&self, point: Point) -> Sight {
        let offset = point - self.at;
        let sine = offset.dot(self.left) / offset.dot(offset).sqrt();
        Sight { point, offset, sine, height: offset.dot(self.normal) }
    }

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
        let facet = facets[index];
        let scenery = Scenery::unfold(facets, walls);
        scenery.look(index, facet.middle(), facet.normal, &mut Views::new()).to_vec()
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
