//! The cross-section of one cell: a partition of the plane into bodies.

use crate::geom::{Point, Region, conform};
use crate::library::MaterialId;
use crate::num::tolerance::{AREA_BALANCE_NM, SLIVER_NM};

/// Where a body came from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Origin {
    /// `bulk` of the wafer.
    Bulk,
    /// The n-th statement below the lines.
    Below(usize),
    /// Layer `layer` of line `line` (both from 0).
    Line {
        /// From 0, left to right.
        line: usize,
        /// Index in the wafer's layers.
        layer: usize,
    },
    /// The liner of a line.
    Liner(usize),
    /// The wafer's `between`.
    Between,
    /// The n-th film over the lines.
    Over(usize),
    /// Added or made by the step of this index in the variant.
    Step(usize),
}

/// One body of a section: one material of one origin.
#[derive(Debug, Clone, PartialEq)]
pub struct Body {
    /// Of what.
    pub material: MaterialId,
    /// Where it came from.
    pub origin: Origin,
    /// Where it is, in nm; bodies of a section do not overlap.
    pub region: Region,
}

/// A line as drawn, in nm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DrawnLine {
    /// Left and right edge at the sharp line top.
    pub top_x: [f64; 2],
    /// Left and right edge at the line bottom.
    pub bottom_x: [f64; 2],
}

/// What the wafer section drew, kept to measure against, in nm.
#[derive(Debug, Clone, PartialEq)]
pub struct Drawn {
    /// x of the mirror walls, left and right.
    pub walls: [f64; 2],
    /// Line bottom is z = 0; this is the line top H.
    pub line_top: f64,
    /// The lines, left to right: one in an array, all of them in a row.
    pub lines: Vec<DrawnLine>,
    /// Top of each layer, bottom to top; the last is `line_top`.
    pub layer_tops: Vec<f64>,
}

/// Where two fronts met: solid, of the sealing material, but a line to keep away from.
#[derive(Debug, Clone, PartialEq)]
pub struct Seam {
    /// From its lowest to its highest point, in nm.
    pub points: Vec<Point>,
    /// Index of the step that left it.
    pub step: usize,
}

/// The cross-section of one cell at one moment.
#[derive(Debug, Clone, PartialEq)]
pub struct Section {
    /// What was drawn.
    pub drawn: Drawn,
    /// The solid bodies, in order of origin; together a partition of what is solid.
    pub bodies: Vec<Body>,
    /// Seams.
    pub seams: Vec<Seam>,
    /// Enclosed empty regions that the ambient does not reach, one region a void.
    pub voids: Vec<Region>,
}

/// A space of a cell, from mid-line (or wall) to mid-line (or wall).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Space {
    /// From where to where, in nm.
    pub x: [f64; 2],
    /// The line left of it, unless a wall bounds it there.
    pub left: Option<DrawnLine>,
    /// The line right of it, unless a wall bounds it there.
    pub right: Option<DrawnLine>,
}

impl Drawn {
    /// How many spaces the cell has: one more than lines.
    pub fn space_count(&self) -> usize {
        self.lines.len() + 1
    }

    /// Space number `at` from 0, left to right.
    pub fn space(&self, at: usize) -> Space {
        let middle = |line: &DrawnLine| (line.top_x[0] + line.top_x[1]) / 2.0;
        let left = at.checked_sub(1).and_then(|line| self.lines.get(line)).copied();
        let right = self.lines.get(at).copied();
        let x = [
            left.as_ref().map_or(self.walls[0], middle),
            right.as_ref().map_or(self.walls[1], middle),
        ];
        Space { x, left, right }
    }

    /// The space that holds an x, or the nearest.
    pub fn space_at(&self, x: f64) -> usize {
        self.lines.iter().filter(|line| (line.top_x[0] + line.top_x[1]) / 2.0 < x).count()
    }

    /// Whole width of a space at the sharp line top and at the line bottom, in nm; a space that
    /// ends at a mirror wall goes on as far behind it.
    pub fn space_widths(&self, at: usize) -> [f64; 2] {
        let space = self.space(at);
        let width = |edge: fn(&DrawnLine) -> [f64; 2]| {
            let left = space.left.as_ref().map(|line| edge(line)[1]);
            let right = space.right.as_ref().map(|line| edge(line)[0]);
            let width = right.unwrap_or(self.walls[1]) - left.unwrap_or(self.walls[0]);
            if left.is_none() || right.is_none() { 2.0 * width } else { width }
        };
        [width(|line| line.top_x), width(|line| line.bottom_x)]
    }

    /// The drawn space between line bottom and line top, clipped at a wall.
    pub fn space_region(&self, at: usize) -> Region {
        let space = self.space(at);
        let left = space.left.map_or([self.walls[0]; 2], |line| [line.bottom_x[1], line.top_x[1]]);
        let right =
            space.right.map_or([self.walls[1]; 2], |line| [line.bottom_x[0], line.top_x[0]]);
        Region::from_rings([vec![
            Point::new(left[0], 0.0),
            Point::new(right[0], 0.0),
            Point::new(right[1], self.line_top),
            Point::new(left[1], self.line_top),
        ]])
    }
}

impl Section {
    /// The section of some bodies: its partition closed, its bodies in order, its voids found.
    pub(super) fn of_bodies(drawn: Drawn, bodies: Vec<Body>) -> Self {
        let mut section = Self { drawn, bodies, seams: Vec::new(), voids: Vec::new() };
        section.settle();
        section
    }

    /// Puts the section in order after its bodies changed: shared edges conform, empty bodies
    /// go, voids are found anew.
    pub(super) fn settle(&mut self) {
        self.bodies.sort_by_key(|body| (body.origin, body.material));
        let mut regions: Vec<_> =
            self.bodies.iter_mut().map(|body| std::mem::take(&mut body.region)).collect();
        conform(&mut regions, self.drawn.walls);
        for (body, region) in self.bodies.iter_mut().zip(regions) {
            body.region = region;
        }
        self.bodies.retain(|body| !body.region.is_empty());
        self.voids = self.empty().1;
    }

    /// All that is solid.
    pub fn solid(&self) -> Region {
        Region::union_all(self.bodies.iter().map(|body| &body.region))
    }

    /// The empty region that the ambient reaches, up to somewhat above the surface.
    pub fn ambient(&self) -> Region {
        self.empty().0
    }

    /// The ambient and the enclosed empty regions, left to right.
    pub(super) fn empty(&self) -> (Region, Vec<Region>) {
        let top = self.sky();
        let window = Region::rectangle(self.drawn.walls, [self.bottom(), top]);
        let empty = window.difference(&self.solid());
        let open = |part: &Region| part.bounds().is_some_and(|b| b.max.z >= top);
        let (ambient, enclosed): (Vec<_>, Vec<_>) = empty.parts().partition(open);
        let mut enclosed: Vec<_> =
            enclosed.into_iter().filter(|part| !is_thinner_than(part, SLIVER_NM)).collect();
        enclosed.sort_by(|a, b| {
            let key = |part: &Region| part.bounds().map_or((0.0, 0.0), |b| (b.min.x, b.min.z));
            key(a).partial_cmp(&key(b)).unwrap_or(std::cmp::Ordering::Equal)
        });
        (Region::union_all(&ambient), enclosed)
    }

    /// The body at a point, if it is solid there.
    pub fn body_at(&self, p: Point) -> Option<&Body> {
        self.bodies.iter().find(|body| body.region.contains(p))
    }

    /// Highest point of the surface above the line bottom, in nm.
    pub fn surface_top(&self) -> f64 {
        self.extent(|bounds| bounds.max.z).fold(f64::MIN, f64::max)
    }

    /// Lowest point of the section, in nm; what lies there holds all others.
    pub fn bottom(&self) -> f64 {
        self.extent(|bounds| bounds.min.z).fold(f64::MAX, f64::min)
    }

    /// The line top, or the surface where a plane was cut below it.
    pub fn effective_line_top(&self) -> f64 {
        self.drawn.line_top.min(self.surface_top())
    }

    fn extent(&self, edge: impl Fn(crate::geom::Bounds) -> f64) -> impl Iterator<Item = f64> {
        self.bodies.iter().filter_map(move |body| body.region.bounds().map(&edge))
    }

    /// A height in the free ambient above everything, in nm.
    pub(super) fn sky(&self) -> f64 {
        let [left, right] = self.drawn.walls;
        Point::new(0.0, self.surface_top() + (right - left) / 8.0).snapped().z
    }

    /// Area of a material, in nm².
    pub fn area_of(&self, material: MaterialId) -> f64 {
        let of_it = self.bodies.iter().filter(|body| body.material == material);
        of_it.map(|body| body.region.area()).sum()
    }

    /// Checks that the section is a partition: bodies within the walls, no two over each other,
    /// voids apart from bodies.
    ///
    /// # Errors
    ///
    /// What does not hold, in words.
    pub fn check(&self) -> Result<(), String> {
        let [left, right] = self.drawn.walls;
        let parts = self.bodies.iter().map(|body| &body.region).chain(&self.voids);
        let areas: f64 = parts.clone().map(Region::area).sum();
        let length: f64 = parts.clone().flat_map(Region::edges).map(|(a, b)| a.distance(b)).sum();
        if !areas.is_finite() {
            return Err("an area is not a number".to_owned());
        }
        let overlap = areas - Region::union_all(parts.clone()).area();
        if overlap.abs() > AREA_BALANCE_NM * length {
            return Err(format!("bodies overlap by {overlap:.3e} nm²"));
        }
        let out = parts.filter_map(Region::bounds).any(|b| b.min.x < left || b.max.x > right);
        if out {
            return Err("a body reaches through a wall".to_owned());
        }
        Ok(())
    }
}

/// Whether a region is thinner than `width` on average (area over half of its outline).
pub(super) fn is_thinner_than(region: &Region, width: f64) -> bool {
    let outline: f64 = region.edges().map(|(a, b)| a.distance(b)).sum();
    2.0 * region.area() < width * outline
}
