//! `compare`: two flows, or one flow and its earlier revision.

use std::io;
use std::path::PathBuf;

use clap::ValueEnum;

use super::disk::Disk;
use super::git::Revision;
use super::input;
use super::output::{self, Failure};
use super::progress::Progress;
use super::{Exit, Shared, check};
use crate::flow::Flow;
use crate::pipeline::{self, Judged, Options};
use crate::report::html::Grown;
use crate::report::schema;
use crate::study::compare::{self, Comparison};
use crate::world::World;

/// Two flows, or one flow and its earlier revision in git: what changed in the text, and what that
/// did to every figure, limit and finding.
///
/// A figure counts as changed only where the numerical errors of the two do not meet. The exit
/// status is that of `check` for the newer flow.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// The older flow; with `--since`, the only one.
    #[arg(value_name = "OLD", required_unless_present = "schema")]
    old: Option<String>,
    /// The newer flow.
    #[arg(value_name = "NEW", required_unless_present_any = ["since", "schema"])]
    new: Option<String>,
    /// The older one is this flow at a git revision, its library files too; nothing is checked out.
    #[arg(long, value_name = "REV", conflicts_with = "new")]
    since: Option<String>,
    /// Judge the splits too.
    #[arg(long)]
    splits: bool,
    /// Form of the result.
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// Add the sections that differ, drawn in characters, to the text.
    #[arg(long)]
    picture: bool,
    /// Write the result to a file, whole or not at all.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
    /// Print the JSON Schema of `--format json` and end.
    #[arg(long, conflicts_with_all = ["old", "since", "format"])]
    schema: bool,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For people at a terminal.
    Text,
    /// For a comment on a pull request.
    Markdown,
    /// One page, sections side by side.
    Html,
    /// Stable and versioned; `docs/compare.schema.json` describes it.
    Json,
}

/// A judged flow with its name and its text.
struct Loaded {
    name: String,
    flow: Flow,
    judged: Judged,
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    let (Some(first), false) = (&args.old, args.schema) else {
        output::emit(schema::<Comparison>().as_bytes(), args.output.as_deref())?;
        return Ok(Exit::Holds);
    };
    let (old, new) = match (&args.since, &args.new) {
        (Some(revision), _) => {
            let world = Revision::find(first, revision)?;
            let name = format!("{first} at {revision}");
            (load(&world, first, &name, args, shared)?, load(&Disk, first, first, args, shared)?)
        }
        (None, second) => {
            let second = second.as_deref().unwrap_or(first);
            (load(&Disk, first, first, args, shared)?, load(&Disk, second, second, args, shared)?)
        }
    };
    let comparison = compare::compare(old.side(), new.side());
    let (before, after) = (old.grown(args), new.grown(args));
    let sections = compare::sections((old.side(), &before), (new.side(), &after));
    let result = match args.format {
        Format::Text => {
            let shown = if args.picture { sections.as_slice() } else { &[] };
            comparison.text(shown, args.output.is_none() && shared.colored(&io::stdout()))
        }
        Format::Markdown => comparison.markdown(&sections),
        Format::Html => comparison.html(&sections),
        Format::Json => comparison.json(),
    };
    output::emit(result.as_bytes(), args.output.as_deref())?;
    Ok(check::exit(&new.judged.report, false))
}

fn load(
    world: &dyn World,
    path: &str,
    name: &str,
    args: &Args,
    shared: &Shared,
) -> Result<Loaded, Failure> {
    let flow = input::load_named(world, path, name, shared)?.flow;
    let progress = Progress::new(name);
    let options = Options { splits: args.splits, ..Options::default() };
    let judged = pipeline::judge(&flow, &options, &|done, of| progress.at(done, of))
        .map_err(|error| input::failure(error, &flow, shared))?;
    Ok(Loaded { name: name.to_owned(), flow, judged })
}

impl Loaded {
    fn side(&self) -> compare::Judged<'_> {
        compare::Judged { name: &self.name, flow: &self.flow, report: &self.judged.report }
    }

    /// The judged variants; those that limits merely refer to are not shown.
    fn grown(&self, args: &Args) -> Vec<Grown<'_>> {
        let shown = if args.splits { self.judged.runs.len() } else { 1 };
        let runs = self.judged.runs[..shown].iter();
        runs.map(|run| Grown { variant: run.variant, cells: &run.fine }).collect()
    }
}
