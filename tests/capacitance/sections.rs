//! Sections to solve.

use std::f64::consts::{PI, TAU};

use gapwright::field::{Body, Capacitance, EPSILON_0_AF_PER_UM, Edge, Problem, Role};
use gapwright::geom::{Point, Region};

/// A body of one region.
pub fn body(region: Region, role: Role) -> Body {
    Body { region, role }
}

/// A rectangle.
pub fn slab(x: [f64; 2], z: [f64; 2], role: Role) -> Body {
    body(Region::rectangle(x, z), role)
}

/// A section with mirrors all around.
pub fn closed(x: [f64; 2], z: [f64; 2], electrodes: usize, bodies: Vec<Body>) -> Problem {
    Problem { x, z, top: Edge::Mirror, bottom: Edge::Mirror, bodies, electrodes }
}

/// An ellipse as a polygon whose vertices lie on it.
pub fn ellipse(centre: [f64; 2], radii: [f64; 2], sides: usize) -> Region {
    let point = |k: usize| {
        let (sin, cos) = (TAU * k as f64 / sides as f64).sin_cos();
        Point::new(centre[0] + radii[0] * cos, centre[1] + radii[1] * sin)
    };
    Region::from_rings([(0..sides).map(point).collect()])
}

/// A void as a seal leaves it: round below, coming to a tip above.
pub fn teardrop(centre: f64, foot: f64, width: f64, height: f64, sides: usize) -> Region {
    let half = |k: usize| {
        let t = k as f64 / sides as f64;
        // Half-width over height: a circle's start, a line's end.
        0.5 * width * (PI * t).sin().max(0.0).sqrt() * (1.0 - t).powf(0.35) * 1.18
    };
    let side = |sign: f64| {
        move |k: usize| Point::new(centre + sign * half(k), foot + height * k as f64 / sides as f64)
    };
    let right: Vec<Point> = (0..=sides).map(side(1.0)).collect();
    let left = (1..sides).rev().map(side(-1.0));
    Region::from_rings([right.into_iter().chain(left).collect()])
}

/// Seven lines with voids and liners over a plane: numbers in nm.
#[derive(Clone, Copy)]
pub struct Array {
    /// Line width.
    pub w: f64,
    /// Space.
    pub s: f64,
    /// Line height.
    pub h: f64,
    /// Liner thickness; none at 0.
    pub liner: f64,
    /// Relative permittivity of the liner.
    pub k_liner: f64,
    /// Relative permittivity of what lies between and around the lines.
    pub k: f64,
    /// Share of the space that a void is wide; none at 0.
    pub void: f64,
    /// Relative permittivity of what lies under the lines.
    pub k_below: f64,
    /// Distance of the plane below.
    pub below: f64,
    /// Distance of the plane above; an open top at 0.
    pub above: f64,
    /// Taper: how much narrower a line is at its bottom than at its top.
    pub taper: f64,
    /// Points on each side of a void's outline.
    pub points: usize,
}

/// Width 32, space 32, height 64: a 3 nm liner, voids, a plane below, open top.
pub const ARRAY: Array = Array {
    w: 32.0,
    s: 32.0,
    h: 64.0,
    liner: 3.0,
    k_liner: 4.8,
    k: 2.7,
    void: 0.5,
    k_below: 2.7,
    below: 64.0,
    above: 0.0,
    taper: 0.0,
    points: 40,
};

impl Array {
    /// The section: electrodes 0 to 6 are the lines, 7 the plane below, 8 the plane above.
    pub fn problem(&self) -> Problem {
        let Array { w, s, h, liner, .. } = *self;
        let pitch = w + s;
        let x = [-0.5 * pitch, 6.5 * pitch];
        let cover = if self.above > 0.0 { h + self.above } else { 2.0 * h };
        let line = |i: usize, grown: f64| {
            let (c, top, foot) = (i as f64 * pitch, 0.5 * w, 0.5 * (w - self.taper));
            let (top, foot) = (top + grown, foot + grown);
            Region::from_rings([vec![
                Point::new(c - foot, 0.0),
                Point::new(c + foot, 0.0),
                Point::new(c + top, h + grown),
                Point::new(c - top, h + grown),
            ]])
        };
        let mut bodies = vec![
            slab(x, [-self.below, 0.0], Role::Dielectric(self.k_below)),
            slab(x, [0.0, cover], Role::Dielectric(self.k)),
        ];
        if liner > 0.0 {
            bodies.extend((0..7).map(|i| body(line(i, liner), Role::Dielectric(self.k_liner))));
        }
        if self.void > 0.0 {
            for i in 0..8 {
                let c = (i as f64 - 0.5) * pitch;
                let region = teardrop(c, 0.1 * h, self.void * s, 1.1 * h, self.points);
                bodies.push(body(region, Role::Dielectric(1.0)));
            }
        }
        bodies.extend((0..7).map(|i| body(line(i, 0.0), Role::Electrode(i))));
        bodies.push(slab(x, [-self.below - 10.0, -self.below], Role::Electrode(7)));
        let mut top = 3.0 * h;
        if self.above > 0.0 {
            top = h + self.above + 10.0;
            bodies.push(slab(x, [h + self.above, top], Role::Electrode(8)));
        }
        Problem {
            x,
            z: [-self.below - 10.0, top],
            top: if self.above > 0.0 { Edge::Mirror } else { Edge::Open },
            bottom: Edge::Mirror,
            bodies,
            electrodes: if self.above > 0.0 { 9 } else { 8 },
        }
    }
}

/// An entry over ε0: value, low, high.
pub fn entry(solved: &Capacitance, i: usize, j: usize) -> [f64; 3] {
    [&solved.value, &solved.low, &solved.high].map(|m| m[i][j] / EPSILON_0_AF_PER_UM)
}
