//! From blueprint to section: the wafer as the module finds it.
//!
//! Everything is cut from half-planes and slabs by booleans, so that neighbours share their
//! edges. Rounded corners are inscribed polygons of [`CORNER_STEP_RAD`]; their area is short by
//! 5e-4 of the corner's. Bulk is drawn to a finite depth and deepened when an etch needs it.

use super::blueprint::{Blueprint, Sheet};
use super::{Body, Origin, Section};
use crate::geom::{Point, Region};
use crate::num::tolerance::CORNER_STEP_RAD;

/// The section of a blueprint; of a symmetric one the right half.
pub(super) fn draw(blueprint: &Blueprint) -> Section {
    let mut drawn = blueprint.drawn.clone();
    if blueprint.symmetric {
        drawn.walls[0] = 0.0;
    }
    let walls = drawn.walls;
    let cell = Region::rectangle(walls, [0.0, drawn.line_top]);
    let mut bodies = below(&blueprint.below, walls, drawn.line_top);
    let mut lines = Region::empty();
    for line in 0..drawn.lines.len() {
        let outline = outline(blueprint, line).intersection(&cell);
        bodies.extend(layers(blueprint, line, &outline));
        lines = lines.union(&outline);
    }
    let mut top = drawn.line_top;
    if let Some((to, material)) = blueprint.between {
        let region = Region::rectangle(walls, [0.0, to]).difference(&lines);
        bodies.push(Body { material, origin: Origin::Between, region });
        top = top.max(to);
    }
    for (at, &(thickness, material)) in blueprint.over.iter().enumerate() {
        let region = Region::rectangle(walls, [top, top + thickness]);
        bodies.push(Body { material, origin: Origin::Over(at), region });
        top += thickness;
    }
    Section::of_bodies(drawn, bodies)
}

fn below(sheets: &[Sheet], walls: [f64; 2], line_top: f64) -> Vec<Body> {
    let mut top = 0.0;
    let body = |sheet: &Sheet| {
        let bottom = top - sheet.thickness.unwrap_or(2.0 * (line_top + walls[1] - walls[0]));
        let region = Region::rectangle(walls, [bottom, top]);
        top = bottom;
        Body { material: sheet.material, origin: sheet.origin, region }
    };
    sheets.iter().map(body).collect()
}

/// The outline of a line, its top corners rounded.
fn outline(blueprint: &Blueprint, line: usize) -> Region {
    let drawn = &blueprint.drawn;
    let [left, right] = drawn.lines[line].top_x;
    let [foot_left, foot_right] = drawn.lines[line].bottom_x;
    let [reach, drop] = blueprint.corner_reach();
    let corner = |x: f64, side: f64| {
        let centre = Point::new(x - side * reach, drawn.line_top - drop);
        let turn = std::f64::consts::FRAC_PI_2 - blueprint.taper_rad;
        let steps = if drop > 0.0 { (turn / CORNER_STEP_RAD).ceil() as usize } else { 0 };
        (0..=steps).map(move |k| {
            let angle = blueprint.taper_rad + turn * k as f64 / steps.max(1) as f64;
            centre + Point::new(side * angle.cos(), angle.sin()) * drop
        })
    };
    let mut ring = vec![Point::new(foot_left, 0.0), Point::new(foot_right, 0.0)];
    ring.extend(corner(right, 1.0));
    ring.extend(corner(left, -1.0).rev());
    Region::from_rings([ring])
}

/// The layers and the liner of a line, cut from its outline.
fn layers(blueprint: &Blueprint, line: usize, outline: &Region) -> Vec<Body> {
    let drawn = &blueprint.drawn;
    let core = match blueprint.liner {
        Some((liner, _)) => {
            let sideways = liner / blueprint.taper_rad.cos();
            let lift = liner * blueprint.taper_rad.tan();
            let edge = drawn.lines[line];
            outline.intersection(&Region::from_rings([vec![
                Point::new(edge.bottom_x[0] + sideways + lift, liner),
                Point::new(edge.bottom_x[1] - sideways - lift, liner),
                Point::new(edge.top_x[1] - sideways, drawn.line_top),
                Point::new(edge.top_x[0] + sideways, drawn.line_top),
            ]]))
        }
        None => outline.clone(),
    };
    let mut bodies = Vec::new();
    let mut bottom = 0.0;
    for (layer, (&material, &top)) in blueprint.layers.iter().zip(&drawn.layer_tops).enumerate() {
        let slab = Region::rectangle(drawn.walls, [bottom, top]);
        let region = core.intersection(&slab);
        bodies.push(Body { material, origin: Origin::Line { line, layer }, region });
        bottom = top;
    }
    if let Some((_, material)) = blueprint.liner {
        let region = outline.difference(&core);
        bodies.push(Body { material, origin: Origin::Liner(line), region });
    }
    bodies
}
