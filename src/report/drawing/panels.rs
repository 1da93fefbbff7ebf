//! Panels of a traced cell: one a step, with what the figures say of its voids.

use super::panel::{Marks, Panel, VoidMark};
use crate::flow::{Dimension, Flow, Variant};
use crate::measure::{SiteFigures, VoidFigures};
use crate::report::figures::figure;
use crate::sim::{CellTrace, Event, Stage};

/// One panel a stage of a cell, the wafer first.
pub fn panels<'a>(
    flow: &Flow,
    variant: &Variant,
    trace: &'a CellTrace,
    sites: &[SiteFigures],
) -> Vec<Panel<'a>> {
    let last = trace.stages.len() - 1;
    let panel = |(at, stage): (usize, &'a Stage)| {
        let voids = if at == last { void_marks(stage, sites) } else { Vec::new() };
        let plane_nm = stage.events.iter().find_map(|event| match event {
            Event::Planed { z_nm, .. } => Some(*z_nm),
            _ => None,
        });
        let (title, caption) = words(flow, variant, stage);
        Panel { title, caption, section: &stage.section, marks: Marks { plane_nm, voids } }
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

fn void_marks(stage: &Stage, sites: &[SiteFigures]) -> Vec<VoidMark> {
    let figures: Vec<&VoidFigures> = sites.iter().flat_map(|site| &site.voids).collect();
    let [void] = figures.as_slice() else { return Vec::new() };
    let nm = |value| figure(value, Dimension::Length);
    let mut words = vec![
        format!("top {}", nm(void.top_nm)),
        format!("share {}", figure(void.share, Dimension::Share)),
    ];
    words.extend(void.roof_nm.map(|roof| format!("roof {}", nm(roof))));
    let margin = sites.iter().find_map(|site| site.polish_margin_nm);
    words.extend(margin.map(|margin| format!("to plane {}", nm(margin))));
    let right = stage.section.voids.iter().filter_map(|void| void.bounds());
    let bounds = right.reduce(|a, b| if b.max.x > a.max.x { b } else { a });
    let mark = bounds.map(|bounds| {
        // The void of an array is cut by the wall at mid-space: its middle is on the wall.
        let wall = stage.section.drawn.walls[1];
        let touches = (bounds.max.x - wall).abs() < 1e-3;
        let x = if touches { wall } else { (bounds.min.x + bounds.max.x) / 2.0 };
        let at = crate::geom::Point::new(x, (bounds.min.z + bounds.max.z) / 2.0);
        VoidMark { at, words }
    });
    mark.into_iter().collect()
}
