//! The step graph as arcs beside the steps: which step needs which.

use maud::{Markup, html};

use crate::flow::Flow;
use crate::graph::Graph;

const ROW_PX: usize = 24;

/// Steps one below the other, an arc for every need of the unsplit flow.
pub(super) fn section(flow: &Flow) -> Markup {
    let graph = Graph::of(flow, &flow.variants[0]);
    let needs = graph.needs();
    let y = |step: usize| step * ROW_PX + ROW_PX / 2;
    let height = graph.steps() * ROW_PX;
    let arcs = 60 + 6 * graph.steps().min(30);
    html! {
        section aria-labelledby="order" {
            h2 #order { "Order" }
            svg.order viewBox={ "0 0 760 " (height) } width="760" height=(height) role="img"
                aria-label="Steps in order; arcs lead from a step to those that need it" {
                @for need in &needs {
                    @let (from, to) = (need.from, need.to);
                    @let bulge = arcs - 10 - (10 * from.abs_diff(to)).min(arcs - 20);
                    path.(if from > to { "broken" } else { "kept" })
                        d={ "M" (arcs) " " (y(from)) "C" (bulge) " " (y(from)) " " (bulge) " " (y(to)) " " (arcs) " " (y(to)) } {
                        title { (graph.need_words(need)) }
                    }
                }
                @for step in 0..graph.steps() {
                    text x=(arcs + 8) y=(y(step) + 5) font-size="14" { (graph.label(step)) }
                }
            }
            details {
                summary { "Why each step stands where it does" }
                ul { @for need in &needs { li { (graph.need_words(need)) } } }
            }
        }
    }
}
