//! `corner-fails`: what holds at nominal values breaks at the corner of the tolerances.
//!
//! It speaks about many runs: whoever grows the corners hands in what broke there, and the
//! words are found here.

use crate::diag::Severity;
use crate::flow::Dimension;
use crate::source::Span;
use super::Finding;
use super::frame::{Context, Found, Needs, Rule, settle};

pub static RULE: Rule = Rule {
    name: "corner-fails",
    severity: Severity::Warning,
    needs: Needs::Section,
    thresholds: &[],
    yields_to: &[],
    page: include_str!("../../docs/rules/corner-fails.md"),
    check: None,
};

/// A place within the tolerances: what moved, as the flow writes it, heaviest first.
///
/// `030 seal thickness − 5 nm`, `space 32 nm + 2 nm`.
pub type Corner = Vec<String>;

/// Something that holds at the nominal values and breaks at a corner.
#[derive(Debug, Clone)]
pub enum Broken {
    /// A limit on a quantity: the root-sum-square of what the tolerances take is more than its
    /// margin.
    Margin {
        /// The limit as written.
        limit: String,
        /// Where it stands.
        span: Span,
        /// Where it is judged.
        site: Option<String>,
        /// Its margin at the nominal values.
        margin: f64,
        /// What the tolerances take of it at three sigma.
        loss: f64,
        /// In which dimension both are.
        dimension: Dimension,
        /// The tolerance that takes most, and its share of the variance.
        most: (String, f64),
    },
    /// A limit that breaks at a corner without a margin to tell how near it is: a state, or a
    /// quantity that does not exist there.
    Limit {
        /// The limit as written.
        limit: String,
        /// Where it stands.
        span: Span,
        /// Where it is judged.
        site: Option<String>,
        /// Where in the tolerances.
        corner: Corner,
    },
    /// A rule that fires at a corner only.
    Rule {
        /// What it finds there, boxed for its size.
        finding: Box<Finding>,
        /// The sites at which it does not fire at the nominal values.
        site: Option<String>,
        /// Where in the tolerances.
        corner: Corner,
    },
    /// A corner that cannot be made.
    Flow {
        /// Why.
        message: String,
        /// What is to blame.
        span: Span,
        /// Where in the tolerances.
        corner: Corner,
    },
}

/// Findings for what broke at the corners of a variant.
pub fn corner_fails(context: &Context<'_>, broken: &[Broken]) -> Vec<Finding> {
    settle::told(&RULE, context, broken.iter().map(|broken| found(context, broken)).collect())
}

fn found(context: &Context<'_>, broken: &Broken) -> Found {
    match broken {
        Broken::Margin { limit, span, site, margin, loss, dimension, most: (most, share) } => {
            let amount = |value| words(value, *dimension);
            let message = format!(
                "`{limit}` holds by {}, of which the tolerances take {} at three sigma, {:.0} % of \
                 it {most}",
                amount(*margin),
                amount(*loss),
                100.0 * share,
            );
            let help = format!("tighten {most}, or move the nominal value away from the limit");
            Found::on(*span, message).at_label(site.as_deref()).help(help)
        }
        Broken::Limit { limit, span, site, corner } => {
            let message = format!("`{limit}` breaks at {}", corner.join(", "));
            let help = "tighten what moved, or move the nominal values away from there";
            Found::on(*span, message).at_label(site.as_deref()).help(help)
        }
        Broken::Rule { finding, site, corner } => {
            let message =
                format!("{} at {}: {}", finding.rule, corner.join(", "), finding.message);
            let found = match finding.step {
                Some(step) => Found::on_step(context, step, message),
                None => Found::on(finding.span, message),
            };
            let found = found.at_label(site.as_deref());
            let help = finding.help.as_deref().unwrap_or("tighten what moved");
            found.help(help)
        }
        Broken::Flow { message, span, corner } => {
            Found::on(*span, format!("at {} it cannot be made: {message}", corner.join(", ")))
                .help("tighten what moved")
        }
    }
}

/// An amount with its unit.
fn words(value: f64, dimension: Dimension) -> String {
    match dimension {
        Dimension::Length => format!("{value:.1} nm"),
        Dimension::Share => format!("{:.1} points", 100.0 * value),
        Dimension::One => format!("{value:.3}"),
        Dimension::CapacitancePerLength => format!("{value:.2} aF/um"),
        Dimension::ResistancePerLength => format!("{value:.2} ohm/um"),
        Dimension::Delay => format!("{value:.2} ps"),
        Dimension::Temperature => format!("{value:.0} C"),
    }
}
