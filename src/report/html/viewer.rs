//! Sections to step through: a site at a time, one picture a step.

use std::collections::BTreeMap;

use maud::{Markup, PreEscaped, html};

use super::Grown;
use crate::flow::Flow;
use crate::report::FlowReport;
use crate::report::drawing::{self, Panel};
use crate::sim::CellTrace;

/// Largest width and height of a picture, and width of the legend beside it, in pixels.
const PICTURE_PX: [f64; 2] = [640.0, 620.0];
const LEGEND_PX: f64 = 320.0;

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
    notes: String,
}

/// The viewer, or nothing when nothing was grown. Without script it shows the finished section of the
/// first site; in print, the finished sections of all.
pub(super) fn section(flow: &Flow, report: &FlowReport, grown: &[Grown]) -> Markup {
    let mut pictures = Pictures::default();
    let reels: Vec<_> = grown.iter().flat_map(|g| reels(flow, report, g, &mut pictures)).collect();
    let Some((first, last)) = reels.first().and_then(|reel| Some((reel, reel.frames.last()?)))
    else {
        return html! {};
    };
    html! {
        section #viewer aria-labelledby="sections" {
            h2 #sections { "Cross-sections" }
            div.sites role="group" aria-label="Site" {
                @for (at, reel) in reels.iter().enumerate() {
                    button type="button" data-reel=(at) aria-pressed=(at == 0) { (reel.name) }
                }
            }
            div.stage {
                figure {
                    div #picture { (PreEscaped(&pictures.all[last.picture])) }
                    figcaption {
                        strong #step-title { (last.title) } " "
                        span #step-caption class="faint" { (last.caption) }
                        p #step-notes { (last.notes) }
                    }
                }
                div.controls {
                    div.stepping {
                        button type="button" #back aria-label="Step back" { "◀" }
                        input #step type="range" min="0" value="0" aria-label="Step";
                        button type="button" #forward aria-label="Step forward" { "▶" }
                    }
                    p.faint.hint { "Left and right step, up and down choose the site." }
                    ol #steps {}
                    div.legend #legend { (PreEscaped(&first.legend)) }
                }
            }
            div.finished {
                @for reel in &reels {
                    @if let Some(last) = reel.frames.last() {
                        figure {
                            figcaption { strong { (reel.name) } " " (last.caption) }
                            (PreEscaped(&pictures.all[last.picture]))
                            p { (last.notes) }
                        }
                    }
                }
                div.legend { (PreEscaped(&first.legend)) }
            }
            @for (at, picture) in pictures.all.iter().enumerate() {
                template id={ "picture-" (at) } { (PreEscaped(picture)) }
            }
            @for (at, reel) in reels.iter().enumerate() {
                template id={ "legend-" (at) } { (PreEscaped(&reel.legend)) }
                ol id={ "reel-" (at) } hidden {
                    @for frame in &reel.frames {
                        li data-picture=(frame.picture) data-caption=(frame.caption)
                            data-notes=(frame.notes) { (frame.title) }
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
    let reel = |cell: &CellTrace| {
        let panels = drawing::panels(flow, variant, report, cell);
        let frames = drawing::frames(&panels, PICTURE_PX);
        let frame = |(panel, picture): (&Panel, String)| Frame {
            picture: pictures.keep(picture),
            title: panel.title.clone(),
            caption: panel.caption.clone(),
            notes: panel.notes.join("; "),
        };
        Reel {
            name: drawing::cell_name(variant, cell),
            legend: drawing::legend_of(&panels, LEGEND_PX),
            frames: panels.iter().zip(frames).map(frame).collect(),
        }
    };
    grown.cells.iter().map(reel).collect()
}
