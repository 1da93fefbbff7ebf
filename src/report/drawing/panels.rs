//! Panels of a traced cell: one a step, with what the figures say of its voids.

use super::panel::{Marks, Panel};
use crate::flow::{Dimension, Flow, Site, Variant};
use crate::geom::Point;
use crate::measure::{Side, SiteFigures, VoidFigures};
use crate::report::FlowReport;
use crate::report::figures::figure;
use crate::sim::{CellTrace, Event, Section, Stage};

/// What a cell is called: its spaces, and the split where it is one.
pub fn cell_name(variant: &Variant, cell: &CellTrace) -> String {
    let spaces: Vec<_> = cell.cell.sites.iter().map(Site::label).collect();
    let spaces = spaces.join(", ");
    match &variant.split {
        Some(split) => format!("{spaces} · {}", split.value),
        None => spaces,
    }
}

/// One panel a stage of a cell, the wafer first; the last one tells the figures of its voids.
pub fn panels<'a>(
    flow: &'a Flow,
    variant: &Variant,
    report: &FlowReport,
    trace: &'a CellTrace,
) -> Vec<Panel<'a>> {
    let last = trace.stages.len() - 1;
    let panel = |(at, stage): (usize, &'a Stage)| {
        let told = if at == last { told(stage, trace, variant, report) } else { Vec::new() };
        let numbered = told.len() > 1;
        let plane_nm = stage.events.iter().find_map(|event| match event {
            Event::Planed { z_nm, .. } => Some(*z_nm),
            _ => None,
        });
        let (title, caption) = words(flow, variant, stage);
        let note = |(at, void): (usize, &Told)| match numbered {
            true => format!("void {}: {}", at + 1, void.words),
            false => format!("void: {}", void.words),
        };
        let number = |(at, void): (usize, &Told)| Some((void.at?, at + 1));
        let voids = if numbered {
            told.iter().enumerate().filter_map(number).collect()
        } else {
            Vec::new()
        };
        Panel {
            title,
            caption,
            notes: told.iter().enumerate().map(note).collect(),
            section: &stage.section,
            library: &flow.library,
            marks: Marks { plane_nm, voids, lines: Vec::new() },
        }
    };
    trace.stages.iter().enumerate().map(panel).collect()
}

/// Operation and statement, or the wafer as found; states of the spaces.
fn words(flow: &Flow, variant: &Variant, stage: &Stage) -> (String, String) {
    let mut states: Vec<_> = stage.states.iter().map(|state| state.name()).collect();
    states.dedup();
    let caption = states.join(" | ");
    let Some(step) = stage.step.map(|at| &variant.steps[at]) else {
        return ("wafer".to_owned(), caption);
    };
    let statement = &flow.source.text[step.span.start..step.span.end];
    let statement = statement.split('#').next().unwrap_or_default();
    let words: Vec<_> = statement.split_whitespace().filter(|word| *word != "\\").collect();
    let spared = if stage.acts { "" } else { " (spares this space)" };
    (words.join(" "), format!("{caption}{spared}"))
}

/// A void that the figures speak of.
struct Told {
    words: String,
    /// A point inside it; `None` where the section does not show it.
    at: Option<Point>,
}

fn told(stage: &Stage, trace: &CellTrace, variant: &Variant, report: &FlowReport) -> Vec<Told> {
    let split = variant.split.as_ref().map(|split| split.value.as_str());
    let mut all = Vec::new();
    for site in &trace.cell.sites {
        let of_site = |figures: &&SiteFigures| {
            figures.split.as_deref() == split && figures.site == site.label()
        };
        for figures in report.sites.iter().filter(of_site) {
            let first = all.len();
            for (at, void) in figures.voids.iter().enumerate() {
                let before = figures.voids[..at].iter().filter(|v| v.side == void.side).count();
                let space = match (site, void.side) {
                    (Site::Row { space, .. }, _) => space - 1,
                    (Site::Array { .. }, Side::Left) => 0,
                    (Site::Array { .. }, Side::Right | Side::Both) => 1,
                };
                let at = inside(&stage.section, space, before);
                all.push(Told { words: void_words(void), at });
            }
            // The margin is the site's: that of its highest void.
            if let (Some(margin), Some(last)) = (figures.polish_margin_nm, all[first..].last_mut())
            {
                let of = if figures.voids.len() > 1 {
                    ", the higher one to plane"
                } else {
                    ", to plane"
                };
                last.words.push_str(&format!("{of} {}", figure(margin, Dimension::Length)));
            }
        }
    }
    all
}

fn void_words(void: &VoidFigures) -> String {
    let nm = |value| figure(value, Dimension::Length);
    let mut words = vec![
        format!("top {}", nm(void.top_nm)),
        format!("share {}", figure(void.share, Dimension::Share)),
    ];
    words.extend(void.roof_nm.map(|roof| format!("roof {}", nm(roof))));
    words.join(", ")
}

/// A point inside the n-th void of a space.
fn inside(section: &Section, space: usize, nth: usize) -> Option<Point> {
    let middle = |void: &crate::geom::Region| {
        let bounds = void.bounds()?;
        Some((bounds, (bounds.min.x + bounds.max.x) / 2.0))
    };
    let voids = section.voids.iter().filter_map(middle);
    let (bounds, x) = voids.filter(|(_, x)| section.drawn.space_at(*x) == space).nth(nth)?;
    // The void of an array is cut by the wall at mid-space: its middle is on the wall.
    let on = |wall: &f64| {
        (bounds.min.x - wall).abs() < ON_WALL_NM || (bounds.max.x - wall).abs() < ON_WALL_NM
    };
    let wall = section.drawn.walls.into_iter().find(on);
    Some(Point::new(wall.unwrap_or(x), (bounds.min.z + bounds.max.z) / 2.0))
}

/// What is nearer to a wall than this touches it, in nm; only where a number is put hangs on it.
const ON_WALL_NM: f64 = 1e-3;
