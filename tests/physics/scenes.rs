//! Scenes to grow in, and what the checks measure of them.

use gapwright::front::{Character, Growth, Resolution, Scene, Solid};
use gapwright::geom::{Point, Region};

/// Lines of width `w` at the top and height `h`, a space `s` apart at the top; a positive
/// taper in degrees widens the lines downward.
#[derive(Debug, Clone, Copy)]
pub struct Array {
    pub s: f64,
    pub w: f64,
    pub h: f64,
    pub taper_deg: f64,
}

impl Array {
    /// How far a line's foot stands out beyond its top edge.
    fn run(&self) -> f64 {
        self.h * self.taper_deg.to_radians().tan()
    }

    fn line(&self, centre: f64, clip: [f64; 2]) -> Region {
        let (top, foot) = (0.5 * self.w, 0.5 * self.w + self.run());
        let at = |x: f64, z: f64| Point::new(centre + x, z);
        let ring = vec![at(-foot, 0.0), at(foot, 0.0), at(top, self.h), at(-top, self.h)];
        Region::from_rings([ring]).intersection(&Region::rectangle(clip, [-1.0, self.h + 1.0]))
    }

    fn floor(&self, walls: [f64; 2]) -> Solid {
        Solid { region: Region::rectangle(walls, [-20.0, 0.0]), rate: 1.0 }
    }

    /// From mid-line to mid-space.
    pub fn half(&self) -> Scene {
        let walls = [0.0, 0.5 * (self.w + self.s)];
        let line = Solid { region: self.line(0.0, walls), rate: 1.0 };
        Scene { walls, solids: vec![self.floor(walls), line] }
    }

    /// One line and half a space to each side.
    pub fn cell(&self) -> Scene {
        let half = 0.5 * (self.w + self.s);
        let walls = [-half, half];
        let line = Solid { region: self.line(0.0, walls), rate: 1.0 };
        Scene { walls, solids: vec![self.floor(walls), line] }
    }

    /// Several lines, walls in the middle of the outer spaces.
    pub fn row(&self, lines: usize) -> Scene {
        let pitch = self.w + self.s;
        let walls = [0.0, pitch * lines as f64];
        let line = |k: usize| self.line((k as f64 + 0.5) * pitch, walls);
        let lines = (0..lines).map(|k| Solid { region: line(k), rate: 1.0 });
        Scene { walls, solids: std::iter::once(self.floor(walls)).chain(lines).collect() }
    }

    /// Area of the drawn space in half a cell.
    pub fn half_space_area(&self) -> f64 {
        self.h * 0.5 * (self.s - self.run())
    }
}

/// Conformal, directional with exponent, neutral with sticking.
pub fn mixture(conformal: f64, directional: f64, exponent: f64, sticking: f64) -> Character {
    Character {
        conformal,
        directional,
        exponent: Some(exponent),
        tilt_rad: 0.0,
        neutral: 1.0 - conformal - directional,
        sticking,
    }
}

pub fn resolution(facet_nm: f64) -> Resolution {
    Resolution { facet_nm, closure_width_nm: 0.5 }
}

/// What is measured of a half cell.
#[derive(Debug, Clone, Copy)]
pub struct Figures {
    pub thickness: f64,
    pub top: f64,
    pub share: f64,
    pub width: f64,
    pub bottom: f64,
    pub side: f64,
    pub floor: f64,
}

/// The figures of the first closure in a half cell.
pub fn figures(array: &Array, growth: &Growth) -> Option<Figures> {
    let closure = growth.closures.first()?;
    let bounds = closure.void.bounds()?;
    let inside = Region::rectangle([0.0, 0.5 * (array.w + array.s)], [0.0, array.h]);
    let film = film(array, growth);
    Some(Figures {
        thickness: closure.thickness_nm,
        top: bounds.max.z - array.h,
        share: closure.void.intersection(&inside).area() / array.half_space_area(),
        width: 2.0 * (bounds.max.x - bounds.min.x),
        bottom: bounds.min.z,
        side: film[0],
        floor: film[1],
    })
}

/// Side film at half of the line height and floor film at mid-space, in a half cell.
pub fn film(array: &Array, growth: &Growth) -> [f64; 2] {
    let x = 0.5 * array.w + 0.5 * array.run();
    let wall = 0.5 * (array.w + array.s);
    let across = growth.film.row(0.5 * array.h);
    let side = across.iter().find(|i| (i[0] - x).abs() < 1e-3).map_or(0.0, |i| i[1] - i[0]);
    let up = growth.film.column(wall - 1e-3);
    let floor = up.iter().find(|i| i[0].abs() < 1e-3).map_or(0.0, |i| i[1] - i[0]);
    [side, floor]
}
