//! `check`: the main job.

use std::io;
use std::path::PathBuf;

use clap::ValueEnum;

use super::disk::Disk;
use super::input;
use super::output::{self, Failure};
use super::progress::Progress;
use super::{Exit, Shared};
use crate::diag::Severity;
use crate::flow::Flow;
use crate::num::tolerance::ACCURACY;
use crate::pipeline::{self, Judged, Options};
use crate::report::{FlowReport, Report, Verdict, drawing, text};

/// Read flows, check order and materials, grow the cross-section at every space, measure voids and
/// capacitance, hold the limits against them.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// Flow files; `-` is standard input.
    #[arg(required_unless_present = "schema", value_name = "FLOW")]
    flows: Vec<String>,
    /// Name of standard input in messages.
    #[arg(long, value_name = "NAME", default_value = "standard input")]
    name: String,
    /// Judge the splits too.
    #[arg(long)]
    splits: bool,
    /// Judge the corners of the tolerances too: what holds at the nominal values and breaks at
    /// three sigma of their root-sum-square.
    #[arg(long)]
    corners: bool,
    /// Accuracy wanted: of positions relative to the space, of films relative or 0.25 nm, of
    /// shares absolute, of capacitance half of it relative.
    #[arg(long, value_name = "A", default_value_t = ACCURACY, value_parser = accuracy)]
    accuracy: f64,
    /// Add the finished section at every space, drawn in characters, to the text.
    #[arg(long)]
    picture: bool,
    /// Form of the result.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Write the result to a file, whole or not at all.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
    /// Print the JSON Schema of `--format json` and end.
    #[arg(long, conflicts_with_all = ["flows", "format"])]
    schema: bool,
    /// What else fails: `warnings`.
    #[arg(long, value_enum, value_name = "WHAT")]
    deny: Option<Deny>,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For people at a terminal.
    Text,
    /// Stable and versioned; `docs/check.schema.json` describes it.
    Json,
    /// SARIF 2.1.0: findings on their lines, for code hosts.
    Sarif,
    /// JUnit XML: a case a limit and a finding, for build servers.
    Junit,
    /// For pull requests and job summaries.
    Markdown,
    /// One line a figure.
    Csv,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Deny {
    /// Warnings change the exit status to 1.
    Warnings,
}

/// Reads an accuracy: 0.1 % to 10 %, as a fraction or in percent.
fn accuracy(text: &str) -> Result<f64, String> {
    let (number, scale) = match text.strip_suffix('%') {
        Some(percent) => (percent.trim(), 0.01),
        None => (text, 1.0),
    };
    match number.parse::<f64>() {
        Ok(value) if (0.001..=0.1).contains(&(value * scale)) => Ok(value * scale),
        _ => Err("wants 0.001 to 0.1, or 0.1% to 10%".to_owned()),
    }
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    if args.schema {
        output::emit(Report::json_schema().as_bytes(), args.output.as_deref())?;
        return Ok(Exit::Holds);
    }
    let options = Options { accuracy: args.accuracy, splits: args.splits, corners: args.corners };
    if args.picture && args.format != Format::Text {
        return Err(Failure::unusable("--picture goes with the text; `draw` makes pictures"));
    }
    let color = args.output.is_none() && shared.colored(&io::stdout());
    let mut runs = Vec::new();
    let mut pictures = String::new();
    for path in &args.flows {
        let loaded = input::load(&Disk, path, &args.name, shared)?;
        let progress = Progress::new(&loaded.flow.name);
        let judged = pipeline::judge(&loaded.flow, &options, &|done, of| progress.at(done, of));
        drop(progress);
        let judged = judged.map_err(|error| input::failure(error, &loaded.flow, shared))?;
        if args.picture {
            pictures.push_str(&drawn(&loaded.flow, &judged, args.splits, color));
        }
        runs.push(judged.report);
    }
    let exit = runs
        .iter()
        .map(|run| exit(run, args.deny == Some(Deny::Warnings)))
        .max()
        .unwrap_or(Exit::Holds);
    let report = Report::of(runs);
    let result = match args.format {
        Format::Text => text::render(&report, color) + &pictures,
        Format::Json => report.json(),
        Format::Sarif => report.sarif(),
        Format::Junit => report.junit(),
        Format::Markdown => report.markdown(),
        Format::Csv => report.csv(),
    };
    output::emit(result.as_bytes(), args.output.as_deref())?;
    Ok(exit)
}

/// The finished sections, drawn in characters.
fn drawn(flow: &Flow, judged: &Judged, splits: bool, color: bool) -> String {
    let shown = if splits { judged.runs.len() } else { 1 };
    let mut text = String::new();
    for run in &judged.runs[..shown] {
        let variant = &flow.variants[run.variant];
        for cell in &run.fine {
            let panels = drawing::panels(flow, variant, &judged.report, cell);
            let name = drawing::cell_name(variant, cell);
            let last = &panels[panels.len() - 1..];
            text.push_str(&format!("\n  {name}\n{}", drawing::characters(last, color)));
        }
    }
    text
}

/// Exit status of a judged flow.
pub(super) fn exit(run: &FlowReport, deny_warnings: bool) -> Exit {
    let warned = run.findings.iter().any(|f| f.severity == Severity::Warning && !f.waived);
    match run.verdict {
        Verdict::Pass if deny_warnings && warned => Exit::Broken,
        Verdict::Pass => Exit::Holds,
        Verdict::Fail | Verdict::Undecided => Exit::Broken,
    }
}
