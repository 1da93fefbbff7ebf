//! `draw`: cross-sections as pictures.

use std::path::PathBuf;

use clap::ValueEnum;

use super::disk::Disk;
use super::input;
use super::output::{self, Failure};
use super::progress::Progress;
use super::{Exit, Shared};
use crate::flow::Variant;
use crate::pipeline::{self, Judged, Options};
use crate::report::drawing::{self, Panel};

/// Width of one panel of a strip, and of a picture alone, in pixels.
const PANEL_PX: f64 = 300.0;
const ALONE_PX: f64 = 640.0;

/// Panels in one row of a strip.
const COLUMNS: usize = 4;

/// Draw the cross-section after a step, or all of them as a film strip.
///
/// Materials are labelled, voids outlined with their figures, line top and polish plane marked.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// Flow file, or `-`.
    #[arg(value_name = "FLOW")]
    flow: String,
    /// Name of standard input in messages.
    #[arg(long, value_name = "NAME", default_value = "standard input")]
    name: String,
    /// The space, as the flow names it (`"32 nm"`, `edge:2`) [default: the first].
    #[arg(long, value_name = "SITE")]
    at: Option<String>,
    /// The split [default: the unsplit flow].
    #[arg(long = "in", value_name = "SPLIT")]
    split: Option<String>,
    /// After this operation only [default: all of them, as a film strip].
    #[arg(long, value_name = "OP")]
    after: Option<u32>,
    /// Form of the picture.
    #[arg(long, value_enum, default_value_t = Format::Svg)]
    format: Format,
    /// Pixels of a PNG for one of the SVG.
    #[arg(long, value_name = "N", default_value_t = 2, value_parser = clap::value_parser!(u8).range(1..=8))]
    zoom: u8,
    /// Write the picture to a file, whole or not at all.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Format {
    /// Scalable, with text.
    Svg,
    /// Pixels.
    Png,
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    let loaded = input::load(&Disk, &args.flow, &args.name, shared)?;
    let flow = &loaded.flow;
    let wanted = args.split.as_deref();
    let named = |variant: &Variant| variant.split.as_ref().map(|s| s.value.as_str()) == wanted;
    let index = flow.variants.iter().position(named).ok_or_else(|| {
        Failure::unusable(format_args!("the flow has no split `{}`", wanted.unwrap_or_default()))
    })?;
    let progress = Progress::new(&flow.name);
    let options = Options { splits: wanted.is_some(), ..Options::default() };
    let judged = pipeline::judge(flow, &options, &|done, of| progress.at(done, of))
        .map_err(|error| input::failure(error, flow, shared))?;
    drop(progress);
    let panels = panels(args, flow, index, &judged)?;
    let (columns, width_px) = if panels.len() == 1 { (1, ALONE_PX) } else { (COLUMNS, PANEL_PX) };
    let title = flow.title.as_deref().unwrap_or(&flow.name);
    let svg = drawing::strip(title, &panels, &flow.library, columns, width_px);
    let bytes = match args.format {
        Format::Svg => svg.into_bytes(),
        Format::Png => drawing::png(&svg, f32::from(args.zoom)).map_err(Failure::unusable)?,
    };
    output::emit(&bytes, args.output.as_deref())?;
    Ok(Exit::Holds)
}

/// The panels asked for.
fn panels<'a>(
    args: &Args,
    flow: &crate::flow::Flow,
    index: usize,
    judged: &'a Judged,
) -> Result<Vec<Panel<'a>>, Failure> {
    let variant = &flow.variants[index];
    let run = judged.runs.iter().find(|run| run.variant == index);
    let cells = run.map(|run| run.fine.as_slice()).unwrap_or_default();
    let labels = |cell: &crate::sim::CellTrace| -> Vec<String> {
        cell.cell.sites.iter().map(|site| site.label().to_owned()).collect()
    };
    let cell = match &args.at {
        None => cells.first(),
        Some(site) => cells.iter().find(|cell| labels(cell).contains(site)),
    };
    let Some(cell) = cell else {
        let known: Vec<_> = cells.iter().flat_map(labels).collect();
        return Err(Failure::unusable(format_args!(
            "the flow has no space `{}`; it has {}",
            args.at.as_deref().unwrap_or_default(),
            known.join(", ")
        )));
    };
    let split = variant.split.as_ref().map(|split| split.value.clone());
    let names = labels(cell);
    let of_cell =
        judged.report.sites.iter().filter(|s| s.split == split && names.contains(&s.site));
    let figures: Vec<_> = of_cell.cloned().collect();
    let mut panels = drawing::panels(flow, variant, cell, &figures);
    if let Some(op) = args.after {
        let stage = |step: Option<usize>| step.is_some_and(|at| variant.steps[at].op == op);
        let at = cell
            .stages
            .iter()
            .position(|s| stage(s.step))
            .ok_or_else(|| Failure::unusable(format_args!("the flow has no operation {op}")))?;
        panels = vec![panels.swap_remove(at)];
    }
    Ok(panels)
}
