//! The wafer of one cell in plain numbers, and whether it can be drawn at all.
//!
//! An array is one line centred at x = 0 with its walls at mid-space; a row holds all of its
//! lines, its left wall at x = 0. A blueprint knows nothing of names or units: two cells with
//! equal blueprints are the same cell.

use super::error::SimError;
use super::{Cell, Drawn, DrawnLine, Origin};
use crate::flow::{Below, Height, Place, Site, Variant, Wafer};
use crate::geom::Point;
use crate::library::MaterialId;
use crate::source::Span;

/// A layer below the lines.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Sheet {
    /// Where it comes from.
    pub origin: Origin,
    /// Of what.
    pub material: MaterialId,
    /// Its thickness, in nm; `None` goes down without end.
    pub thickness: Option<f64>,
}

/// The wafer of one cell, in nm and radians.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Blueprint {
    /// What was drawn, to measure against.
    pub drawn: Drawn,
    /// Whether it is its own mirror image at x = 0, so that its right half is all of it.
    pub symmetric: bool,
    /// Below the lines, top to bottom.
    pub below: Vec<Sheet>,
    /// Materials of the line's layers, bottom to top; their tops are in `drawn`.
    pub layers: Vec<MaterialId>,
    /// Thickness and material of the liner.
    pub liner: Option<(f64, MaterialId)>,
    /// Top and material of what fills the spaces.
    pub between: Option<(f64, MaterialId)>,
    /// Thickness and material of the films above, bottom to top.
    pub over: Vec<(f64, MaterialId)>,
    /// Positive widens the lines downward.
    pub taper_rad: f64,
    /// Radius of the top corners.
    pub corner_radius: f64,
}

/// The cells of a wafer: arrays in the order of the text, then rows.
pub(super) fn cells(variant: &Variant) -> Result<Vec<(Cell, Blueprint)>, SimError> {
    let wafer = &variant.wafer;
    let width = wafer.lines.width.nominal.nm();
    let mut cells = Vec::new();
    for pair in &wafer.lines.spaces {
        let spaces = [pair.left.nominal.nm(), pair.right.nominal.nm()];
        let walls = on_grid([-(width + spaces[0]) / 2.0, (width + spaces[1]) / 2.0]);
        let place = Placed { walls, centres: vec![0.0], widths: vec![width] };
        cells.push(blueprint(wafer, &place, spaces[0] == spaces[1], wafer.lines.span)?);
    }
    for row in &wafer.rows {
        let widths: Vec<_> = row.widths.iter().map(|w| w.nominal.nm()).collect();
        let spaces: Vec<_> = row.spaces.iter().map(|s| s.nominal.nm()).collect();
        let mut edge = spaces[0] / 2.0;
        let mut centres = Vec::new();
        for (width, space) in widths.iter().zip(&spaces[1..]) {
            centres.push(edge + width / 2.0);
            edge += width + space;
        }
        let walls = on_grid([0.0, edge - spaces[spaces.len() - 1] / 2.0]);
        cells.push(blueprint(wafer, &Placed { walls, centres, widths }, false, row.span)?);
    }
    Ok(sites_of(variant).into_iter().zip(cells).collect())
}

/// Walls stand on the polygon grid, as all that touches them.
fn on_grid(x: [f64; 2]) -> [f64; 2] {
    x.map(|x| Point::new(x, 0.0).snapped().x)
}

/// The sites of each cell, in the order of [`cells`].
fn sites_of(variant: &Variant) -> Vec<Cell> {
    let mut cells: Vec<Cell> = Vec::new();
    let mut last_row = None;
    for site in variant.sites() {
        match (&site, cells.last_mut()) {
            (Site::Row { row, .. }, Some(cell)) if last_row == Some(*row) => cell.sites.push(site),
            (Site::Row { row, .. }, _) => {
                last_row = Some(*row);
                cells.push(Cell { sites: vec![site] });
            }
            (Site::Array { .. }, _) => cells.push(Cell { sites: vec![site] }),
        }
    }
    cells
}

/// Where the lines of a cell stand, in nm.
struct Placed {
    walls: [f64; 2],
    centres: Vec<f64>,
    widths: Vec<f64>,
}

fn blueprint(
    wafer: &Wafer,
    place: &Placed,
    symmetric: bool,
    span: Span,
) -> Result<Blueprint, SimError> {
    let mut layer_tops = Vec::new();
    let mut top = 0.0;
    for layer in &wafer.layers {
        top += layer.thickness.nominal.nm();
        layer_tops.push(top);
    }
    let taper_rad = wafer.lines.taper.nominal.degrees().to_radians();
    let drift = top * taper_rad.tan();
    let lines = place.centres.iter().zip(&place.widths).map(|(centre, width)| DrawnLine {
        top_x: [centre - width / 2.0, centre + width / 2.0],
        bottom_x: [centre - width / 2.0 - drift, centre + width / 2.0 + drift],
    });
    let drawn = Drawn { walls: place.walls, line_top: top, lines: lines.collect(), layer_tops };
    let between = match &wafer.between {
        Some(between) => {
            let to = height_nm(&between.to, &drawn);
            Some((to, between.material, between.span))
        }
        None => None,
    };
    let blueprint = Blueprint {
        symmetric,
        below: below(wafer),
        layers: wafer.layers.iter().map(|layer| layer.material).collect(),
        liner: wafer.liner.as_ref().map(|film| (film.thickness.nominal.nm(), film.material)),
        between: between.map(|(to, material, _)| (to, material)),
        over: wafer.over.iter().map(|film| (film.thickness.nominal.nm(), film.material)).collect(),
        taper_rad,
        corner_radius: wafer.lines.corner_radius.nominal.nm(),
        drawn,
    };
    blueprint.can_be_drawn(wafer, span)?;
    Ok(blueprint)
}

/// Sheets below the lines, top to bottom; bulk lies below everything wherever it is written.
fn below(wafer: &Wafer) -> Vec<Sheet> {
    let sheet = |(at, below): (usize, &Below)| match below {
        Below::Bulk(material) => {
            Sheet { origin: Origin::Bulk, material: material.value, thickness: None }
        }
        Below::Plane(film) | Below::Film(film) => Sheet {
            origin: Origin::Below(at),
            material: film.material,
            thickness: Some(film.thickness.nominal.nm()),
        },
    };
    let mut sheets: Vec<_> = wafer.below.iter().enumerate().rev().map(sheet).collect();
    sheets.sort_by_key(|sheet| sheet.thickness.is_none());
    sheets
}

/// A height of the flow above the line bottom, in nm.
pub(super) fn height_nm(height: &Height, drawn: &Drawn) -> f64 {
    let place = match height.place {
        Place::Lines => drawn.line_top,
        Place::Floor => 0.0,
        Place::Layer(layer) => drawn.layer_tops[layer],
    };
    place + height.offset.nominal.nm()
}

impl Blueprint {
    /// Finds what cannot be drawn, at the statement that is to blame.
    fn can_be_drawn(&self, wafer: &Wafer, span: Span) -> Result<(), SimError> {
        let refuse = |span: Span, message: String, help: &str| {
            Err(SimError::Drawing { message, help: help.to_owned(), span })
        };
        let drawn = &self.drawn;
        let edges = |line: &DrawnLine| [line.top_x, line.bottom_x];
        for line in &drawn.lines {
            let [top, bottom] = edges(line).map(|x| x[1] - x[0]);
            if !(top > 0.0 && bottom > 0.0) {
                return refuse(
                    wafer.lines.span,
                    format!(
                        "the line has no width left at its bottom: {top:.4} nm at the top, taper \
                         {:.4} deg over {:.4} nm",
                        self.taper_rad.to_degrees(),
                        drawn.line_top
                    ),
                    "a negative taper narrows the line downward: use a smaller one or a wider line",
                );
            }
            if let Some((liner, _)) = self.liner {
                self.liner_fits(liner, [top, bottom], wafer)?;
            }
        }
        for space in 0..=drawn.lines.len() {
            let [top, bottom] = drawn.space_widths(space);
            if !(top > 0.0 && bottom > 0.0) {
                return refuse(
                    span,
                    format!(
                        "neighbouring lines overlap: the space of {top:.4} nm is {bottom:.4} nm \
                         wide at the line bottom"
                    ),
                    "a positive taper widens lines downward: use a smaller one or a wider space",
                );
            }
        }
        self.corner_fits(wafer)?;
        if let (Some((to, _)), Some(between)) = (self.between, &wafer.between)
            && to <= 0.0
        {
            return refuse(
                between.span,
                format!("what fills the spaces ends {:.4} nm below the line bottom", -to),
                "leave `between` out for empty spaces",
            );
        }
        if self.below.is_empty() && self.between.is_none() {
            return refuse(
                wafer.span,
                "nothing lies under the spaces".to_owned(),
                "add a `bulk`, `plane` or `film` below the lines, or a `between`",
            );
        }
        Ok(())
    }

    fn liner_fits(&self, liner: f64, widths: [f64; 2], wafer: &Wafer) -> Result<(), SimError> {
        let span = wafer.liner.as_ref().map_or(wafer.span, |film| film.span);
        let refuse = |message: String, help: &str| {
            Err(SimError::Drawing { message, help: help.to_owned(), span })
        };
        let narrowest = widths[0].min(widths[1]);
        let sideways = liner / self.taper_rad.cos();
        if 2.0 * sideways >= narrowest {
            return refuse(
                format!(
                    "the liner of {liner:.4} nm leaves no core in a line {narrowest:.4} nm wide"
                ),
                "a liner lies inside the drawn line, on both sides: it must be thinner than half",
            );
        }
        if liner >= self.drawn.layer_tops[0] {
            return refuse(
                format!(
                    "the liner of {liner:.4} nm at the line bottom leaves nothing of the lowest \
                     layer, {:.4} nm",
                    self.drawn.layer_tops[0]
                ),
                "draw the lowest layer thicker than the liner, or leave the liner out",
            );
        }
        Ok(())
    }

    fn corner_fits(&self, wafer: &Wafer) -> Result<(), SimError> {
        let [along_top, _] = self.corner_reach();
        let narrowest =
            self.drawn.lines.iter().map(|l| l.top_x[1] - l.top_x[0]).fold(f64::MAX, f64::min);
        let slope = self.drawn.line_top / self.taper_rad.cos();
        if 2.0 * along_top <= narrowest && along_top <= slope {
            return Ok(());
        }
        Err(SimError::Drawing {
            message: format!(
                "a corner radius of {:.4} nm does not fit a line {narrowest:.4} nm wide and {:.4} \
                 nm high",
                self.corner_radius, self.drawn.line_top
            ),
            help: "both rounded corners must find room on the line top, and each on its side"
                .to_owned(),
            span: wafer.lines.span,
        })
    }

    /// The length that facets are to be short against, in nm: the least of space, line height
    /// and twice the line width, or 1/1500 of the outline where that is more.
    pub(super) fn scale(&self) -> f64 {
        let drawn = &self.drawn;
        let spaces = (0..drawn.space_count()).flat_map(|space| drawn.space_widths(space));
        let widths = drawn.lines.iter().map(|line| 2.0 * (line.top_x[1] - line.top_x[0]));
        let least = spaces.chain(widths).fold(drawn.line_top, f64::min);
        let lines = drawn.lines.len() as f64;
        let outline = drawn.walls[1] - drawn.walls[0] + 2.0 * drawn.line_top * lines;
        least.max(outline / 1500.0)
    }

    /// How far a rounded corner reaches from the sharp one, along top and side alike, and how
    /// far its centre lies below the line top, in nm.
    pub(super) fn corner_reach(&self) -> [f64; 2] {
        let turn = std::f64::consts::FRAC_PI_2 - self.taper_rad;
        [self.corner_radius * (turn / 2.0).tan(), self.corner_radius]
    }
}
