//! Sections to step through: a site at a time, one picture a step.

use std::collections::BTreeMap;

use maud::{Markup, PreEscaped, html};

use super::Grown;
use crate::flow::Flow;
use crate::report::FlowReport;
use crate::report::drawing::{self, Panel};

const WIDTH_PX: f64 = 640.0;

/// One site of one variant: its pictures in order of steps.
struct Reel {
    name: String,
    legend: String,
    frames: Vec<Frame>,
}

struct Frame {
    picture: usize,
    title: String,
    caption: String,
}

/// The viewer, or nothing when nothing was grown.
pub(super) fn section(flow: &Flow, report: &FlowReport, grown: &[Grown]) -> Markup {
    let mut pictures = Pictures::default();
    let reels: Vec<_> = grown.iter().flat_map(|g| reels(flow, report, g, &mut pictures)).collect();
    if reels.is_empty() {
        return html! {};
    }
    html! {
        section #viewer aria-labelledby="sections" {
            h2 #sections { "Cross-sections" }
            div role="group" aria-label="Site" class="sites" {
                @for (at, reel) in reels.iter().enumerate() {
                    button type="button" data-reel=(at) aria-pressed=(at == 0) { (reel.name) }
                }
            }
            figure {
                div #picture {}
                figcaption {
                    strong #step-title {} " "
                    span #step-caption class="faint" {}
                }
            }
            div.stepping {
                button type="button" #back aria-label="Step back" { "◀" }
                input #step type="range" min="0" value="0" aria-label="Step";
                button type="button" #forward aria-label="Step forward" { "▶" }
            }
            p.faint { "Arrow keys step, digits 1 to 9 choose the site." }
            div #legend {}
            @for (at, picture) in pictures.all.iter().enumerate() {
                template id={ "picture-" (at) } { (PreEscaped(picture)) }
            }
            @for (at, reel) in reels.iter().enumerate() {
                template id={ "legend-" (at) } { (PreEscaped(&reel.legend)) }
                ol.reel id={ "reel-" (at) } hidden {
                    @for frame in &reel.frames {
                        li data-picture=(frame.picture) data-caption=(frame.caption) { (frame.title) }
                    }
                }
            }
        }
    }
}

/// Pictures by content, each kept once.
#[derive(Default)]
struct Pictures {
    all: Vec<String>,
    known: BTreeMap<String, usize>,
}

impl Pictures {
    fn keep(&mut self, picture: String) -> usize {
        let next = self.all.len();
        let at = *self.known.entry(picture.clone()).or_insert(next);
        if at == next {
            self.all.push(picture);
        }
        at
    }
}

fn reels(flow: &Flow, report: &FlowReport, grown: &Grown, pictures: &mut Pictures) -> Vec<Reel> {
    let variant = &flow.variants[grown.variant];
    let split = variant.split.as_ref().map(|split| split.value.as_str());
    let reel = |cell: &crate::sim::CellTrace| {
        let labels: Vec<_> = cell.cell.sites.iter().map(|site| site.label()).collect();
        let of_cell = report
            .sites
            .iter()
            .filter(|s| s.split.as_deref() == split && labels.contains(&s.site.as_str()));
        let figures: Vec<_> = of_cell.cloned().collect();
        let panels = drawing::panels(flow, variant, cell, &figures);
        let frames = drawing::frames(&panels, &flow.library, WIDTH_PX);
        let frame = |(panel, picture): (&Panel, String)| Frame {
            picture: pictures.keep(picture),
            title: panel.title.clone(),
            caption: panel.caption.clone(),
        };
        let name = match split {
            Some(split) => format!("{} · {split}", labels.join(", ")),
            None => labels.join(", "),
        };
        Reel {
            name,
            legend: drawing::legend_of(&panels, &flow.library, WIDTH_PX),
            frames: panels.iter().zip(frames).map(frame).collect(),
        }
    };
    grown.cells.iter().map(reel).collect()
}
