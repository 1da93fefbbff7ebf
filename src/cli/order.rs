//! `order`: the step graph, and where the order is wrong a legal one.

use std::path::PathBuf;

use clap::ValueEnum;

use super::disk::Disk;
use super::input;
use super::output::{self, Failure};
use super::{Exit, Shared};
use crate::diag::Severity;
use crate::flow::{Flow, Variant};
use crate::graph::{Graph, Proposal, reordered};
use crate::rules::{self, Context, Needs};
use crate::sim::{self, Grain};

/// The step graph: which step needs which and why.
///
/// Where the order of the text breaks a need, a legal order that moves the fewest steps is
/// offered and held against the rules; operation numbers stay with their steps. Exit status 1
/// where a need is broken.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// Flow files; `-` is standard input.
    #[arg(required = true, value_name = "FLOW")]
    flows: Vec<String>,
    /// Name of standard input in messages.
    #[arg(long, value_name = "NAME", default_value = "standard input")]
    name: String,
    /// Order of a split instead of that of the unsplit flow.
    #[arg(long, value_name = "SPLIT")]
    split: Option<String>,
    /// Form of the result.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Write the result to a file, whole or not at all.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For people at a terminal.
    Text,
    /// The DOT language.
    Dot,
    /// A Mermaid flowchart.
    Mermaid,
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    let mut text = String::new();
    let mut exit = Exit::Holds;
    for path in &args.flows {
        let flow = input::load(&Disk, path, &args.name, shared)?.flow;
        let variant = variant(&flow, args.split.as_deref())?;
        let graph = Graph::of(&flow, variant);
        if !text.is_empty() {
            text.push('\n');
        }
        match args.format {
            Format::Text => {
                text.push_str(&format!("{}\n\n{}", flow.name, graph.to_text()));
                text.push_str(&verdict(&flow, variant, &graph));
            }
            Format::Dot => text.push_str(&graph.to_dot(&flow.name)),
            Format::Mermaid => text.push_str(&graph.to_mermaid()),
        }
        if !graph.broken().is_empty() {
            exit = Exit::Broken;
        }
    }
    output::emit(text.as_bytes(), args.output.as_deref())?;
    Ok(exit)
}

fn variant<'a>(flow: &'a Flow, split: Option<&str>) -> Result<&'a Variant, Failure> {
    let Some(wanted) = split else { return Ok(&flow.variants[0]) };
    let named = |variant: &&Variant| variant.split.as_ref().is_some_and(|s| s.value == wanted);
    flow.variants.iter().find(named).ok_or_else(|| {
        let names = flow.variants.iter().filter_map(|v| v.split.as_ref()).map(|s| s.value.as_str());
        let near = crate::diag::nearest(wanted, names);
        let hint = near.map_or_else(String::new, |near| format!("; nearest is `{near}`"));
        Failure::unusable(format_args!("{}: no split is called `{wanted}`{hint}", flow.name))
    })
}

/// What is said below the graph: that the order is legal, or where it breaks and what would not.
fn verdict(flow: &Flow, variant: &Variant, graph: &Graph) -> String {
    let broken = graph.broken();
    if broken.is_empty() {
        return "\nEvery need is met in the order of the text.\n".into();
    }
    let mut text = String::from("\nBroken:\n");
    for need in broken {
        let to = graph.label(need.to);
        text.push_str(&format!("  {to}: {}\n", graph.need_words(need)));
    }
    let cycles = graph.cycles();
    for cycle in &cycles {
        text.push_str(&format!("\nNeeds go in a circle: {}\n", graph.cycle_words(cycle)));
    }
    match graph.proposal(flow, variant) {
        Some(proposal) => text.push_str(&offer(flow, variant, graph, &proposal)),
        None if cycles.is_empty() => text.push_str("\nNo legal order was found.\n"),
        None => text.push_str("\nNo order is legal while they do.\n"),
    }
    text
}

/// The offered order, and what the order rules say to it.
fn offer(flow: &Flow, variant: &Variant, graph: &Graph, proposal: &Proposal) -> String {
    let count = proposal.moved.len();
    let steps = if count == 1 { "step" } else { "steps" };
    let mut text = format!("\nA legal order, moving {count} {steps}, the fewest possible:\n");
    for &step in &proposal.order {
        let mark = if proposal.moved.contains(&step) { "→" } else { " " };
        text.push_str(&format!("{mark} {}\n", graph.label(step)));
    }
    let offered = reordered(variant, &proposal.order);
    text.push_str(&held(flow, &offered));
    text
}

/// Holds an offered order against the order rules on its grown section.
fn held(flow: &Flow, offered: &Variant) -> String {
    let graph = Graph::of(flow, offered);
    let cells = match sim::run(flow, offered, &Grain::default(), &|_, _| ()) {
        Ok(cells) => cells,
        Err(error) => return format!("It could not be grown: {error}\n"),
    };
    let context = Context::new(flow, offered, &graph, &cells, &[]);
    let errors: Vec<String> = rules::check(&context)
        .into_iter()
        .filter(|finding| {
            let needs = rules::rule(finding.rule).map(|rule| rule.needs);
            finding.severity == Severity::Error && needs == Some(Needs::Order)
        })
        .map(|finding| format!("  {}: {}\n", finding.rule, finding.message))
        .collect();
    if errors.is_empty() {
        "No order rule finds an error in it.\n".into()
    } else {
        format!("What order rules still find in it:\n{}", errors.concat())
    }
}
