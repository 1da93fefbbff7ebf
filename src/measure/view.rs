//! One space of a section, whole, seen from its middle.
//!
//! A cell of n lines has n + 1 spaces; the outer two are halves that end at a mirror wall and are
//! completed here with their mirror image. x = 0 is the middle of the drawn space; the view
//! reaches from the middle of the line on the left to the middle of the line on the right.

use crate::geom::{Intervals, Point, Region};
use crate::sim::{Drawn, DrawnLine, Origin, Section};

/// How far the clip of a view reaches beyond what it clips, in nm.
const BEYOND_NM: f64 = 1.0;

/// Where a space lies in its section.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Window {
    /// Middle of the space, in nm of the section.
    middle: f64,
    /// From the middle of the line on the left to that on the right, in nm of the section.
    range: [f64; 2],
    /// Whether the space ends at a mirror in its middle.
    mirrored: bool,
}

impl Window {
    /// The `index`-th space of a drawn cell, from 0.
    pub fn of(drawn: &Drawn, index: usize) -> Self {
        let lines = &drawn.lines;
        let axis =
            |line: &DrawnLine| Point::new((line.top_x[0] + line.top_x[1]) / 2.0, 0.0).snapped().x;
        let middle_of = |x: f64| Point::new(x, 0.0).snapped().x;
        let (left, right) = (index.checked_sub(1), (index < lines.len()).then_some(index));
        match (left, right) {
            (Some(left), Some(right)) => Self {
                middle: middle_of((lines[left].top_x[1] + lines[right].top_x[0]) / 2.0),
                range: [axis(&lines[left]), axis(&lines[right])],
                mirrored: false,
            },
            (Some(left), None) => {
                let wall = middle_of(drawn.walls[1]);
                Self { middle: wall, range: [axis(&lines[left]), wall], mirrored: true }
            }
            (None, _) => {
                let wall = middle_of(drawn.walls[0]);
                Self { middle: wall, range: [wall, axis(&lines[0])], mirrored: true }
            }
        }
    }

    /// The part of a region of the section that lies in this space, completed and moved.
    pub fn view(&self, region: &Region) -> Region {
        let Some(bounds) = region.bounds() else { return Region::empty() };
        if bounds.max.x <= self.range[0] || bounds.min.x >= self.range[1] {
            return Region::empty();
        }
        let z = [bounds.min.z - BEYOND_NM, bounds.max.z + BEYOND_NM];
        let part = region
            .intersection(&Region::rectangle(self.range, z))
            .translated(Point::new(-self.middle, 0.0));
        if self.mirrored { part.union(&part.mirrored(0.0)) } else { part }
    }

    /// Whether a place of the section lies in this space.
    pub fn holds(&self, place: Point) -> bool {
        (self.range[0]..=self.range[1]).contains(&place.x)
    }

    /// Left and right end of the view, in its own x.
    pub fn ends(&self) -> [f64; 2] {
        let [left, right] = self.range.map(|x| x - self.middle);
        if self.mirrored {
            let reach = left.abs().max(right.abs());
            [-reach, reach]
        } else {
            [left, right]
        }
    }
}

/// One space of a section, from its middle.
#[derive(Debug, Clone)]
pub(super) struct View {
    /// Left and right end: the middles of the lines.
    pub ends: [f64; 2],
    /// Drawn x of the left and right line side at the line bottom.
    bottom_x: [f64; 2],
    /// Drawn x of the left and right line side at the sharp line top.
    top_x: [f64; 2],
    /// Line top above the line bottom.
    pub line_top: f64,
    /// Everything solid.
    pub solid: Region,
    /// The lines, liners included.
    pub lines: Region,
    /// Voids, lowest first.
    pub voids: Vec<Region>,
    /// What the ambient reaches.
    pub ambient: Region,
}

impl View {
    /// The `index`-th space of a section, from 0.
    pub fn of(section: &Section, index: usize) -> Self {
        let drawn = &section.drawn;
        let window = Window::of(drawn, index);
        let solid = Region::union_all(section.bodies.iter().map(|body| &body.region));
        let lines = section
            .bodies
            .iter()
            .filter(|body| matches!(body.origin, Origin::Line { .. } | Origin::Liner(_)))
            .map(|body| &body.region);
        let lines = Region::union_all(lines);
        let voids = Region::union_all(section.voids.iter());
        let mut parts: Vec<_> = window.view(&voids).parts().collect();
        let lowest = |void: &Region| void.bounds().map_or(0.0, |bounds| bounds.min.z);
        parts.sort_by(|a, b| lowest(a).total_cmp(&lowest(b)));
        Self {
            ends: window.ends(),
            bottom_x: sides(drawn, index, &window, |line| line.bottom_x),
            top_x: sides(drawn, index, &window, |line| line.top_x),
            line_top: drawn.line_top,
            solid: window.view(&solid),
            lines: window.view(&lines),
            voids: parts,
            ambient: window.view(&section.ambient()),
        }
    }

    /// Drawn x of the left and right line side at a height.
    pub fn drawn_sides(&self, z: f64) -> [f64; 2] {
        let share = z / self.line_top;
        std::array::from_fn(|side| {
            self.bottom_x[side] + (self.top_x[side] - self.bottom_x[side]) * share
        })
    }

    /// Drawn corners of the line on the left and on the right.
    pub fn corners(&self) -> [Point; 2] {
        self.top_x.map(|x| Point::new(x, self.line_top))
    }

    /// x of the left and right line side at a height: where line or liner begins, else as drawn.
    pub fn line_sides(&self, z: f64) -> [f64; 2] {
        let row: Intervals = self.lines.row(z);
        let drawn = self.drawn_sides(z);
        let left = row.iter().map(|piece| piece[1]).rfind(|x| *x < 0.0);
        let right = row.iter().map(|piece| piece[0]).find(|x| *x > 0.0);
        [left.unwrap_or(drawn[0]), right.unwrap_or(drawn[1])]
    }

    /// Voids and ambient together.
    pub fn empty(&self) -> Region {
        Region::union_all(self.voids.iter().chain([&self.ambient]))
    }
}

/// Drawn sides of the lines left and right of a space, in the view's x.
fn sides(drawn: &Drawn, index: usize, window: &Window, of: fn(&DrawnLine) -> [f64; 2]) -> [f64; 2] {
    let lines = &drawn.lines;
    let left = index.checked_sub(1).map(|line| of(&lines[line])[1] - window.middle);
    let right = lines.get(index).map(|line| of(line)[0] - window.middle);
    match (left, right) {
        (Some(left), Some(right)) => [left, right],
        (Some(left), None) => [left, -left],
        (None, Some(right)) => [-right, right],
        (None, None) => [0.0, 0.0],
    }
}
