//! `void-top`, `void-bottom`, `void-width`, `void-height`, `void-share`: the shape of one void.

use super::film;
use super::view::View;
use crate::geom::{Point, Region};

/// One void as one trace shows it, lengths in nm.
#[derive(Debug, Clone)]
pub(super) struct VoidShape {
    /// Where it is, x from the middle of the space.
    pub region: Region,
    /// Top above the line top.
    pub top: f64,
    /// Bottom above the line bottom.
    pub bottom: f64,
    /// Greatest extent across.
    pub width: f64,
    /// Greatest extent upward.
    pub height: f64,
    /// Area, nm².
    pub area: f64,
    /// Length of its outline.
    pub perimeter: f64,
    /// Area between line bottom and line top over that of the drawn space there.
    pub share: f64,
    /// Least solid to a line side, level.
    pub side_film: Option<f64>,
    /// Solid below it at mid-space down to the floor.
    pub floor_film: Option<f64>,
    /// Shortest way to the surface.
    pub roof: Option<f64>,
}

impl VoidShape {
    /// Measures a void of a space; `drawn_area` in nm², `floor` as the last etch left it.
    pub fn of(region: &Region, space: &View, drawn_area: f64, floor: Option<f64>) -> Option<Self> {
        let bounds = region.bounds()?;
        let (low, high) = (bounds.min, bounds.max);
        let beside_lines = Region::rectangle([low.x, high.x], [0.0, space.line_top]);
        Some(Self {
            top: high.z - space.line_top,
            bottom: low.z,
            width: high.x - low.x,
            height: high.z - low.z,
            area: region.area(),
            perimeter: region.edges().map(|(a, b)| a.distance(b)).sum(),
            share: region.intersection(&beside_lines).area() / drawn_area,
            side_film: film::side(space, region),
            floor_film: floor.and_then(|floor| film::floor(space, region, floor)),
            roof: film::roof(space, region),
            region: region.clone(),
        })
    }

    /// What stands for this void in a trace that does not have it: a point in its middle.
    pub fn vanished(&self) -> Self {
        let half = self.height / 2.0;
        Self {
            region: Region::empty(),
            top: self.top - half,
            bottom: self.bottom + half,
            width: 0.0,
            height: 0.0,
            area: 0.0,
            perimeter: 0.0,
            share: 0.0,
            side_film: self.side_film.map(|film| film + self.width / 2.0),
            floor_film: self.floor_film.map(|film| film + half),
            roof: self.roof.map(|roof| roof + half),
        }
    }

    /// Outline points, x from the middle of the space, z above the line bottom, in nm.
    pub fn outline(&self) -> Vec<[f64; 2]> {
        let ring = self.region.rings().next();
        ring.map_or_else(Vec::new, |ring| ring.iter().map(|Point { x, z }| [*x, *z]).collect())
    }
}

/// Area of the drawn space between line bottom and line top, from the wafer as found, in nm².
///
/// What is not line (liner included) between the middles of the two lines, so that taper and
/// rounded corners count as drawn.
pub(super) fn drawn_area(wafer: &View) -> f64 {
    let between_axes = Region::rectangle(wafer.ends, [0.0, wafer.line_top]);
    between_axes.difference(&wafer.lines).area()
}
