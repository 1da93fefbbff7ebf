//! `report`: one self-contained page.

use std::path::PathBuf;

use super::disk::Disk;
use super::input;
use super::output::{self, Failure};
use super::progress::Progress;
use super::{Exit, Shared, check};
use crate::pipeline::{self, Options};
use crate::report::html::{self, Grown};

/// Write one HTML page: verdict, cross-sections to step through, limits, findings, sources.
///
/// The page needs no network. The exit status is that of `check`.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// Flow file, or `-`.
    #[arg(value_name = "FLOW")]
    flow: String,
    /// Name of standard input in messages.
    #[arg(long, value_name = "NAME", default_value = "standard input")]
    name: String,
    /// Judge and show the splits too.
    #[arg(long)]
    splits: bool,
    /// Write the page to a file, whole or not at all.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    let loaded = input::load(&Disk, &args.flow, &args.name, shared)?;
    let flow = &loaded.flow;
    let progress = Progress::new(&flow.name);
    let options = Options { splits: args.splits, ..Options::default() };
    let judged = pipeline::judge(flow, &options, &|done, of| progress.at(done, of))
        .map_err(|error| input::failure(error, flow, shared))?;
    drop(progress);
    let shown = if args.splits { judged.runs.len() } else { 1 };
    let grown: Vec<_> = judged.runs[..shown]
        .iter()
        .map(|run| Grown { variant: run.variant, cells: &run.fine })
        .collect();
    let page = html::page(flow, &judged.report, &grown);
    output::emit(page.as_bytes(), args.output.as_deref())?;
    Ok(check::exit(&judged.report, false))
}
