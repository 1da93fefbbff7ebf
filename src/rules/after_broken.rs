//! `after-broken`: an `after` or `before` of the text does not hold.

use crate::diag::Severity;
use crate::graph::{Need, Reason};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "after-broken",
    severity: Severity::Error,
    needs: Needs::Order,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/after-broken.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let graph = context.graph;
    let mut circled: Vec<&Need> = Vec::new();
    for cycle in graph.cycles() {
        let Some(stated) = cycle.iter().find(|need| is_stated(need)) else { continue };
        let message = format!("the needs go in a circle: {}", graph.cycle_words(&cycle));
        findings.add(
            Found::on_step(context, stating_step(stated), message)
                .help("one of them must go; those in the text are the first to doubt"),
        );
        circled.extend(cycle);
    }
    for need in graph.broken() {
        if !is_stated(need) || circled.contains(&need) {
            continue;
        }
        let message = format!(
            "the text says that {} comes before {}, and it does not",
            graph.label(need.from),
            graph.label(need.to),
        );
        let step = stating_step(need);
        findings.add(
            Found::on_step(context, step, message)
                .help(context.order_help(step, "move the step, or take the clause out")),
        );
    }
}

fn is_stated(need: &Need) -> bool {
    matches!(need.reason, Reason::After | Reason::Before)
}

/// The step whose statement carries the clause.
fn stating_step(need: &Need) -> usize {
    if need.reason == Reason::After { need.to } else { need.from }
}
