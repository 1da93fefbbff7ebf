//! `library`: the loaded materials and processes with sources; `library check` for a file.

use std::path::PathBuf;

use super::disk::Disk;
use super::output::{self, Failure};
use super::{Exit, Shared};
use crate::library::Library;
use crate::report::library::{Listing, csv, entries, json, markdown, overview};
use crate::report::messages;
use crate::rules::lay_over;
use crate::source::Source;
use crate::world::read_text;

/// Show the materials and processes that flows may name, with ranges and sources.
///
/// Without NAME every entry in one line; with it the entry of that name, those of that family
/// or verb, or those whose name holds it, key by key.
#[derive(Debug, clap::Args)]
#[command(args_conflicts_with_subcommands = true)]
pub(crate) struct Args {
    #[command(subcommand)]
    check: Option<Check>,
    /// Entries to show: a name, a family, a verb, or part of a name.
    #[arg(value_name = "NAME")]
    names: Vec<String>,
    /// Library files to lay over the built-in one, in this order.
    #[arg(long = "use", value_name = "FILE")]
    files: Vec<String>,
    /// How to show them.
    #[arg(long, value_name = "FORMAT", default_value = "text")]
    format: Format,
    /// Write to a file, whole or not at all, instead of standard output.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

#[derive(Debug, clap::Subcommand)]
enum Check {
    /// Check library files: unknown and repeated keys, wrong kinds, numbers that cannot be.
    Check {
        /// Library files, or `-`; each is laid over the built-in library and those before it.
        #[arg(required = true, value_name = "FILE")]
        files: Vec<String>,
    },
}

#[derive(Debug, Clone, Copy, clap::ValueEnum)]
enum Format {
    Text,
    Json,
    Csv,
    Markdown,
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    if let Some(Check::Check { files }) = &args.check {
        return check(files, shared);
    }
    let mut library = Library::clone(&Library::built_in());
    let color = shared.colored(&std::io::stderr());
    for path in &args.files {
        let source = read(path)?;
        let (upper, told) = match lay_over(&library, &source) {
            Ok((upper, told)) => (Some(upper), told),
            Err(told) => (None, told),
        };
        if !told.is_empty() {
            output::tell(&messages::render(&told, &source, color));
        }
        match upper {
            Some(upper) => library = upper,
            None => return Ok(Exit::Unusable),
        }
    }
    let listing = Listing::of(&library, &args.names).map_err(Failure::unusable)?;
    let colored = args.output.is_none() && shared.colored(&std::io::stdout());
    let text = match args.format {
        Format::Text if args.names.is_empty() => overview(&listing, colored),
        Format::Text => entries(&listing, colored),
        Format::Json => json(&listing),
        Format::Csv => csv(&listing),
        Format::Markdown => markdown(&listing),
    };
    output::emit(text.as_bytes(), args.output.as_deref())?;
    Ok(Exit::Holds)
}

fn check(files: &[String], shared: &Shared) -> Result<Exit, Failure> {
    let mut library = Library::clone(&Library::built_in());
    let color = shared.colored(&std::io::stderr());
    let mut exit = Exit::Holds;
    let mut answers = String::new();
    for path in files {
        let source = read(path)?;
        let (answer, told) = match lay_over(&library, &source) {
            Ok((upper, told)) => {
                library = upper;
                ("can be used", told)
            }
            Err(told) => {
                exit = Exit::Unusable;
                ("cannot be used", told)
            }
        };
        if !told.is_empty() {
            output::tell(&messages::render(&told, &source, color));
        }
        answers.push_str(&format!("{}: {answer}\n", source.name));
    }
    output::emit(answers.as_bytes(), None)?;
    Ok(exit)
}

fn read(path: &str) -> Result<Source, Failure> {
    let name = if path == "-" { "standard input" } else { path };
    read_text(&Disk, path, name).map_err(Failure::unusable)
}
