//! What checks ask of a section: who touches whom, how thick, how far.

use std::cell::OnceCell;

use crate::geom::{Bounds, Inside, Point, Region};
use crate::sim::{Body, DrawnLine, Section};

/// How far outside an edge a neighbour is looked for, in nm: far above the grid and the
/// slivers of booleans, far below any film.
const PROBE_NM: f64 = 0.05;

/// How closely a boundary is sampled, in nm.
const SAMPLE_NM: f64 = 1.0;

/// What a sampled piece of a body's boundary touches.
#[derive(Debug, Clone, Copy)]
pub struct Contact<'a> {
    /// The body outside; `None`: nothing solid.
    pub body: Option<&'a Body>,
    /// Middle of the piece.
    pub place: Point,
    /// Outward direction, of length one.
    pub outward: Point,
    /// Length of the piece, in nm.
    pub length_nm: f64,
}

/// A section, for many questions about points.
pub struct Look<'a> {
    section: &'a Section,
    boxes: Vec<Option<Bounds>>,
    /// The bodies that were asked about, prepared.
    inside: Vec<OnceCell<Inside>>,
}

impl<'a> Look<'a> {
    /// Prepares a section.
    pub fn at(section: &'a Section) -> Self {
        let boxes = section.bodies.iter().map(|body| body.region.bounds()).collect();
        let inside = section.bodies.iter().map(|_| OnceCell::new()).collect();
        Self { section, boxes, inside }
    }

    /// The body at a point.
    pub fn body(&self, p: Point) -> Option<&'a Body> {
        let holds = |at: &usize| {
            let near = self.boxes[*at].is_some_and(|b| {
                (b.min.x..=b.max.x).contains(&p.x) && (b.min.z..=b.max.z).contains(&p.z)
            });
            let region = &self.section.bodies[*at].region;
            near && self.inside[*at].get_or_init(|| Inside::of(region)).contains(p)
        };
        let found = (0..self.section.bodies.len()).find(holds);
        found.map(|at| &self.section.bodies[at])
    }

    /// Whether a point lies in a void.
    pub fn in_void(&self, p: Point) -> bool {
        self.section.voids.iter().any(|void| void.contains(p))
    }

    /// What a region touches, piece by piece; the walls of the cell and what lies below the
    /// section are left out.
    pub fn contacts(&self, region: &Region) -> Vec<Contact<'a>> {
        let [left, right] = self.section.drawn.walls;
        let floor = self.boxes.iter().flatten().map(|b| b.min.z).fold(f64::MAX, f64::min);
        let mut contacts = Vec::new();
        for (a, b) in region.edges() {
            let length = a.distance(b);
            let pieces = (length / SAMPLE_NM).ceil().max(1.0);
            let along = (b - a) * (1.0 / length);
            let outward = Point::new(along.z, -along.x);
            for piece in 0..pieces as usize {
                let place = a + (b - a) * ((piece as f64 + 0.5) / pieces);
                let outside = place + outward * PROBE_NM;
                if outside.x > left && outside.x < right && outside.z > floor {
                    let body = self.body(outside);
                    contacts.push(Contact { body, place, outward, length_nm: length / pieces });
                }
            }
        }
        contacts
    }

    /// How far, in nm, a way from a boundary outward stays in bodies that `counts` holds for,
    /// up to `limit`, and the body where it ends.
    pub fn thickness(
        &self,
        contact: &Contact<'a>,
        limit_nm: f64,
        counts: impl Fn(&Body) -> bool,
    ) -> (f64, Option<&'a Body>) {
        let mut at = PROBE_NM;
        while at < limit_nm {
            let body = self.body(contact.place + contact.outward * at);
            if !body.is_some_and(&counts) {
                return (at - PROBE_NM, body);
            }
            at += PROBE_NM;
        }
        (limit_nm, None)
    }
}

/// Highest point of a region, in nm above the line bottom.
pub fn top(region: &Region) -> Option<f64> {
    region.bounds().map(|bounds| bounds.max.z)
}

/// Number of the space in which a region mostly lies.
pub fn space_of(section: &Section, region: &Region) -> usize {
    let middle = region.bounds().map_or(0.0, |b| (b.min.x + b.max.x) / 2.0);
    let lines = &section.drawn.lines;
    lines.iter().filter(|line| middle > (line.top_x[0] + line.top_x[1]) / 2.0).count()
}

/// Drawn width of a space at the line top, in nm; a half space ends at its mirror.
pub fn drawn_width(section: &Section, space: usize) -> f64 {
    let drawn = &section.drawn;
    let left = space.checked_sub(1).map(|line| drawn.lines[line].top_x[1]);
    let right = drawn.lines.get(space).map(|line| line.top_x[0]);
    match (left, right) {
        (Some(left), Some(right)) => right - left,
        (None, Some(right)) => 2.0 * (right - drawn.walls[0]),
        (Some(left), None) => 2.0 * (drawn.walls[1] - left),
        (None, None) => drawn.walls[1] - drawn.walls[0],
    }
}

/// How far inside a wall a column is taken, in nm.
const INSIDE_NM: f64 = 0.1;

/// x of the middle of a space, in nm: just inside the wall where it ends at a mirror.
pub fn middle_of(section: &Section, space: usize) -> f64 {
    let drawn = &section.drawn;
    if space == 0 {
        drawn.walls[0] + INSIDE_NM
    } else if space == drawn.lines.len() {
        drawn.walls[1] - INSIDE_NM
    } else {
        (drawn.lines[space - 1].top_x[1] + drawn.lines[space].top_x[0]) / 2.0
    }
}

/// Height of the surface over an x, in nm above the line bottom.
pub fn surface_height(section: &Section, x: f64) -> f64 {
    let tops = section.bodies.iter().filter_map(|body| body.region.column(x).last().map(|i| i[1]));
    tops.fold(f64::MIN, f64::max)
}

/// The voids of a space.
pub fn voids_of(section: &Section, space: usize) -> Vec<&Region> {
    section.voids.iter().filter(|void| space_of(section, void) == space).collect()
}

/// Void area between line bottom and line top over that of the drawn space, 1.
pub fn void_share(section: &Section, space: usize) -> f64 {
    let drawn = &section.drawn;
    let band = Region::rectangle(drawn.walls, [0.0, drawn.line_top]);
    let voids = voids_of(section, space);
    let void: f64 = voids.iter().map(|void| void.intersection(&band).area()).sum();
    let edge = |line: usize, side: usize| {
        (drawn.lines[line].top_x[side] + drawn.lines[line].bottom_x[side]) / 2.0
    };
    let left = space.checked_sub(1).map_or(drawn.walls[0], |line| edge(line, 1));
    let right = if space < drawn.lines.len() { edge(space, 0) } else { drawn.walls[1] };
    void / ((right - left) * drawn.line_top)
}

/// How far, in nm, nothing solid lies under a line, from its worse edge, and where.
pub fn undercut(look: &Look<'_>, line: &DrawnLine) -> (f64, Point) {
    const BELOW_NM: f64 = 0.5;
    const STEP_NM: f64 = 0.25;
    let [left, right] = line.bottom_x;
    let reach = |from: f64, inward: f64| {
        let most = ((right - left) / STEP_NM) as usize;
        let solid = |k: &usize| {
            look.body(Point::new(from + inward * STEP_NM * (*k as f64 + 0.5), -BELOW_NM)).is_some()
        };
        STEP_NM * (0..most).find(solid).unwrap_or(most) as f64
    };
    let (at_left, at_right) = (reach(left, 1.0), reach(right, -1.0));
    let x = if at_left >= at_right { left } else { right };
    (at_left.max(at_right), Point::new(x, -BELOW_NM))
}

/// How deep, in nm, the surface goes below the line bottom in the middle of any space, and where.
pub fn empty_below(section: &Section) -> (f64, Point) {
    let spaces = 0..=section.drawn.lines.len();
    let floors = spaces.map(|space| {
        let x = middle_of(section, space);
        Point::new(x, surface_height(section, x))
    });
    let deepest = floors.min_by(|a, b| a.z.total_cmp(&b.z)).unwrap_or_default();
    ((-deepest.z).max(0.0), deepest)
}

/// Height, in nm, over which a line stands free on both sides; `None` where it does not.
pub fn free_height(section: &Section, line: usize) -> Option<f64> {
    let floor = |space: usize| surface_height(section, middle_of(section, space));
    let height = section.drawn.line_top - floor(line).max(floor(line + 1));
    (height > 0.0).then_some(height)
}
