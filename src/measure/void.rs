//! `void-top`, `void-bottom`, `void-width`, `void-height`, `void-share`: the shape of one void.

use super::film;
use super::view::View;
use crate::geom::{Point, Region};
use crate::num::tolerance::GRID_PER_NM;

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

    /// How far the top would sink if all of the void were narrower by `error`, in nm: from where
    /// the closure width is first met, downward, to where `error` more is. A neck that is nearly
    /// parallel makes this far more than `error`.
    pub fn tip(&self, closure_width_nm: f64, error: f64) -> f64 {
        let mut heights: Vec<_> = self.region.rings().flatten().map(|p| p.z).collect();
        heights.sort_by(|a, b| b.total_cmp(a));
        heights.dedup();
        let cell = 1.0 / GRID_PER_NM;
        let width = |z: f64| {
            let row = self.region.row(z);
            row.first().zip(row.last()).map_or(0.0, |(first, last)| last[1] - first[0])
        };
        let widths: Vec<_> = heights.into_iter().map(|z| (z, width(z - cell))).collect();
        let met = |wanted: f64| {
            let at = widths.iter().position(|(_, width)| *width >= wanted)?;
            let (z, reached) = widths[at];
            let (above, narrower) = widths[at.checked_sub(1).unwrap_or(at)];
            let share =
                if reached > narrower { (wanted - narrower) / (reached - narrower) } else { 1.0 };
            Some(above + (z - above) * share)
        };
        let (top, sunk) = (met(closure_width_nm), met(closure_width_nm + error));
        top.zip(sunk).map_or(0.0, |(top, sunk)| top - sunk)
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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::measure::hand::Cell;

    #[test]
    fn a_nearly_parallel_neck_moves_the_top_by_more_than_its_width_errs() {
        // 20 nm wide up to 40 nm, then a neck that narrows from 0.9 to 0.5 nm over 10 nm.
        let outline = [(-10.0, 20.0), (10.0, 20.0), (10.0, 40.0), (0.45, 41.0), (0.25, 51.0)];
        let right = outline.into_iter().map(|(x, z)| Point::new(x, z));
        let left = [(-0.25, 51.0), (-0.45, 41.0), (-10.0, 40.0)].map(|(x, z)| Point::new(x, z));
        let void = Region::from_rings([right.chain(left).collect::<Vec<_>>()]);
        let space = View::of(&Cell { spaces: vec![40.0, 40.0] }.section(10.0, 120.0, &[]), 1);
        let shape = VoidShape::of(&void, &space, 3200.0, None).unwrap();
        let tip = shape.tip(0.5, 0.1);
        assert!((tip - 2.5).abs() < 1e-3, "0.1 nm more width is met 2.5 nm down, not {tip}");
        let blunt =
            VoidShape::of(&Region::rectangle([-10.0, 10.0], [20.0, 40.0]), &space, 3200.0, None);
        assert_eq!(blunt.unwrap().tip(0.5, 0.1), 0.0);
    }
}
