//! Sections drawn in characters, for terminals and code blocks.

use std::collections::BTreeMap;
use std::fmt::Write as _;

use super::palette::{Fill, fills};
use super::panel::{Panel, Window};
use crate::flow::Dimension;
use crate::geom::Point;
use crate::library::Kind;
use crate::report::figures::amount;
use crate::sim::Section;

/// Characters across all panels, and lines down, at most.
const ACROSS: usize = 76;
const DOWN: f64 = 30.0;

/// A character is about twice as high as wide.
const ASPECT: f64 = 2.0;

/// Characters of what conducts, of what insulates, and of all else, in the order of use.
const CONDUCTORS: &str = "#@%&$";
const INSULATORS: &str = ".:-+*~^";
const OTHERS: &str = "=o/x?";

/// Draws panels side by side at one scale, with line top and legend; voids and the ambient are blank.
pub fn characters(panels: &[Panel], color: bool) -> String {
    if panels.is_empty() {
        return String::new();
    }
    let window = Window::around(panels);
    let gap = "   ";
    let columns = (ACROSS - gap.len() * (panels.len() - 1)) / panels.len();
    let step = (window.width() / columns as f64).max(window.height() / DOWN / ASPECT);
    let columns = (window.width() / step) as usize;
    let rows = (window.height() / step / ASPECT).ceil() as usize;
    let glyphs = glyphs(panels);
    let mut text = String::new();
    if panels.len() > 1 {
        let titles: Vec<_> =
            panels.iter().map(|panel| format!("{:columns$}", panel.title)).collect();
        let _ = writeln!(text, "  {}", titles.join(gap).trim_end());
    }
    for row in 0..rows {
        let z = window.z[1] - (row as f64 + 0.5) * step * ASPECT;
        let line = |panel: &Panel| -> String {
            let xs = (0..columns).map(|at| window.x[0] + (at as f64 + 0.5) * step);
            xs.map(|x| painted(panel, Point::new(x, z), &glyphs, color)).collect()
        };
        let lines: Vec<_> = panels.iter().map(line).collect();
        let top = panels[0].section.drawn.line_top;
        let mark = if (z - top).abs() <= step * ASPECT / 2.0 { " < line top" } else { "" };
        let _ = writeln!(text, "  {}{mark}", lines.join(gap));
    }
    let names =
        glyphs.iter().map(|(name, (glyph, fill))| format!("{} {name}", paint(*glyph, fill, color)));
    let width = amount(step, Dimension::Length);
    let names: Vec<_> = names.collect();
    let _ = writeln!(text, "  {}   (a character is {width} wide)", names.join("  "));
    for panel in panels {
        for note in &panel.notes {
            let title = if panels.len() > 1 { format!("{}, ", panel.title) } else { String::new() };
            let _ = writeln!(text, "  {title}{note}");
        }
    }
    text
}

type Glyphs<'a> = BTreeMap<&'a str, (char, Fill)>;

/// A character for every material in the pictures, by name.
fn glyphs<'a>(panels: &[Panel<'a>]) -> Glyphs<'a> {
    let mut kinds = BTreeMap::new();
    for panel in panels {
        let fills = fills(panel.library);
        for id in panel.section.bodies.iter().map(|body| body.material) {
            let material = panel.library.material(id);
            kinds.insert(material.name.as_str(), (material.kind, fills[&id].clone()));
        }
    }
    let mut sets = [CONDUCTORS, INSULATORS, OTHERS].map(str::chars);
    let mut glyph = |kind: Kind| {
        let set = match kind {
            Kind::Conductor => 0,
            Kind::Dielectric => 1,
            Kind::Semiconductor | Kind::Sacrificial | Kind::Resist => 2,
        };
        sets[set].next().unwrap_or('?')
    };
    kinds.into_iter().map(|(name, (kind, fill))| (name, (glyph(kind), fill))).collect()
}

fn painted(panel: &Panel, at: Point, glyphs: &Glyphs, color: bool) -> String {
    let body = panel.section.body_at(folded(panel.section, at));
    let known =
        body.and_then(|body| glyphs.get(panel.library.material(body.material).name.as_str()));
    known.map_or_else(|| " ".to_owned(), |(glyph, fill)| paint(*glyph, fill, color))
}

/// A character on the colour of its material.
fn paint(glyph: char, fill: &Fill, color: bool) -> String {
    let channel = |hex: &str, at: usize| u8::from_str_radix(&hex[at..at + 2], 16).unwrap_or(0);
    let rgb = |hex: &str| format!("{};{};{}", channel(hex, 1), channel(hex, 3), channel(hex, 5));
    if color {
        format!("\u{1b}[38;2;{};48;2;{}m{glyph}\u{1b}[0m", rgb(fill.ink), rgb(&fill.color))
    } else {
        glyph.to_string()
    }
}

/// The point of a cell that is seen at a point of its picture: an array goes on mirrored.
fn folded(section: &Section, at: Point) -> Point {
    let [left, right] = section.drawn.walls;
    if section.drawn.lines.len() > 1 {
        return at;
    }
    let mirrored = if at.x < left {
        2.0 * left - at.x
    } else if at.x > right {
        2.0 * right - at.x
    } else {
        at.x
    };
    Point::new(mirrored, at.z)
}
