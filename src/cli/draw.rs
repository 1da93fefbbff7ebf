//! `draw`: cross-sections as pictures.

use std::path::PathBuf;

use clap::ValueEnum;

use super::disk::Disk;
use super::input;
use super::output::{self, Failure};
use super::progress::Progress;
use super::{Exit, Shared};
use crate::field;
use crate::flow::{Flow, Site, Variant};
use crate::geom::Point;
use crate::measure::{FieldSection, Reading, field_section};
use crate::pipeline::{self, Judged, Options};
use crate::report::{FlowReport, drawing, geojson};
use crate::sim::CellTrace;

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
    /// Add lines of equal potential to the last section, the line at one volt.
    #[arg(long)]
    potential: bool,
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
    /// The section as `field` reads it: outlines with materials and electrodes.
    Geojson,
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
    let chosen = Chosen::of(args, flow, index, &judged)?;
    let bytes = match args.format {
        Format::Svg => chosen.svg(&judged.report)?.into_bytes(),
        Format::Png => {
            let svg = chosen.svg(&judged.report)?;
            drawing::png(&svg, f32::from(args.zoom)).map_err(Failure::unusable)?
        }
        Format::Geojson => {
            let section = chosen.field_section()?;
            let outlined = geojson::OutlinedSection::of(&section, &flow.library);
            geojson::write(&outlined).into_bytes()
        }
    };
    output::emit(&bytes, args.output.as_deref())?;
    Ok(Exit::Holds)
}

/// What is to be drawn.
struct Chosen<'a> {
    args: &'a Args,
    flow: &'a Flow,
    variant: &'a Variant,
    cell: &'a CellTrace,
    site: &'a Site,
    /// The only stage to draw, by index; `None`: all of them.
    stage: Option<usize>,
}

impl<'a> Chosen<'a> {
    fn of(
        args: &'a Args,
        flow: &'a Flow,
        index: usize,
        judged: &'a Judged,
    ) -> Result<Self, Failure> {
        let variant = &flow.variants[index];
        let run = judged.runs.iter().find(|run| run.variant == index);
        let cells = run.map(|run| run.fine.as_slice()).unwrap_or_default();
        let all: Vec<(&CellTrace, &Site)> =
            cells.iter().flat_map(|cell| cell.cell.sites.iter().map(move |s| (cell, s))).collect();
        let site = match &args.at {
            None => all.first(),
            Some(wanted) => all.iter().find(|(_, site)| site.label() == wanted),
        };
        let Some((cell, site)) = site.copied() else {
            let known: Vec<_> = all.iter().map(|(_, site)| site.label()).collect();
            return Err(Failure::unusable(format_args!(
                "the flow has no space `{}`; it has {}",
                args.at.as_deref().unwrap_or_default(),
                known.join(", ")
            )));
        };
        let after = |op: u32| {
            let step = |at: usize| variant.steps[at].op == op;
            let stage = cell.stages.iter().position(|stage| stage.step.is_some_and(step));
            stage.ok_or_else(|| Failure::unusable(format_args!("the flow has no operation {op}")))
        };
        let stage = args.after.map(after).transpose()?;
        Ok(Self { args, flow, variant, cell, site, stage })
    }

    fn svg(&self, report: &FlowReport) -> Result<String, Failure> {
        let mut panels = drawing::panels(self.flow, self.variant, report, self.cell);
        if let Some(at) = self.stage {
            panels = vec![panels.swap_remove(at)];
        }
        if self.args.potential
            && let Some(panel) = panels.last_mut()
        {
            let section = self.field_section()?;
            panel.marks.lines = equipotentials(&section)?;
            panel.notes.push("potential: the line at 1, all others at 0".to_owned());
        }
        let (columns, width_px) =
            if panels.len() == 1 { (1, ALONE_PX) } else { (COLUMNS, PANEL_PX) };
        let title = self.flow.title.as_deref().unwrap_or(&self.flow.name);
        let title = format!("{title}: {}", drawing::cell_name(self.variant, self.cell));
        Ok(drawing::strip(&title, &panels, columns, width_px))
    }

    /// The chosen section, or the finished one, as the field sees it.
    fn field_section(&self) -> Result<FieldSection, Failure> {
        let last = self.cell.stages.len() - 1;
        let at = self.stage.unwrap_or(last);
        let section = &self.cell.stages[at].section;
        let posed = field_section(self.flow, self.variant, self.site, section, at == last);
        let posed = posed.map_err(|error| Failure::internal(&error))?;
        posed.map_err(|reading| {
            let why = match reading {
                Reading::Missing(missing) => missing.to_string(),
                Reading::Unclear(unclear) => unclear.to_string(),
                Reading::Known(_) => String::new(),
            };
            Failure::unusable(format_args!("the section has no field: {why}"))
        })
    }
}

fn equipotentials(section: &FieldSection) -> Result<Vec<Vec<Point>>, Failure> {
    let line =
        section.electrodes.iter().position(|name| name == "line" || name.starts_with("line/"));
    let levels: Vec<f64> = (1..10).map(|tenth| f64::from(tenth) / 10.0).collect();
    let lines = field::equipotentials(&section.problem, line.unwrap_or(0), &levels);
    lines.map_err(|error| Failure::internal(&error))
}
