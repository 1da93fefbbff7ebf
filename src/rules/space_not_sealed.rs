//! `space-not-sealed`: a space is still open where it is judged after a seal.

use crate::diag::Severity;
use crate::flow::Action;
use crate::num::tolerance::CLOSURE_WIDTH_NM;
use super::frame::gaps::{Judged, OpenGap, open_gaps};
use super::frame::{Context, Findings, Found, Needs, Rule};

pub static RULE: Rule = Rule {
    name: "space-not-sealed",
    severity: Severity::Error,
    needs: Needs::Section,
    thresholds: &[],
    yields_to: &["open-gap-polished"],
    page: include_str!("../../docs/rules/space-not-sealed.md"),
    check: Some(check),
};

/// A throat that narrows by less than this over a nanometre of film does not close.
const LEAST_CLOSING: f64 = 0.02;

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    for gap in open_gaps(context) {
        let Some(seal) = gap.sealed_by else { continue };
        let met = match gap.judged {
            Judged::Polished(step) | Judged::Wetted(step) => {
                format!("still open at {}", context.graph.label(step))
            }
            Judged::Left => "open when the flow ends".to_owned(),
        };
        let lacks = lacks(context, gap, seal);
        let message = format!("the seal does not close the space, which is {met}{lacks}");
        findings.add(
            Found::on_step(context, seal, message)
                .help("seal thicker, take a more conformal liner first, keep the etch out of wide spaces by a mask, or write a limit `open`")
                .in_space(gap.cell, gap.space),
        );
    }
}

/// How wide it still is and how much film that wants, at the rate at which the seal closed.
fn lacks(context: &Context<'_>, gap: &OpenGap<'_>, seal: usize) -> String {
    let throat = |stage: usize| gap.cell.stages[stage].throats_nm[gap.space];
    let Action::Deposit { thickness, .. } = &context.variant.steps[seal].action else {
        return String::new();
    };
    let Some(left) = throat(seal + 1) else { return String::new() };
    let drawn = super::frame::shape::drawn_width(&gap.cell.stages[seal].section, gap.space);
    let before = throat(seal).unwrap_or(drawn);
    let rate = (before - left) / thickness.nominal.nm();
    if rate < LEAST_CLOSING {
        format!("; {left:.1} nm are open and this film cannot close them")
    } else {
        let missing = (left - CLOSURE_WIDTH_NM) / rate;
        format!("; {left:.1} nm are open, some {missing:.0} nm of film are missing")
    }
}
