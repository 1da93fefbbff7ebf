//! `tidy`: the flow in its one standard layout.

use std::path::Path;

use super::disk::Disk;
use super::output::{self, Failure};
use super::{Exit, Shared};
use crate::syntax;
use crate::world::read_text;

/// Lay flows out in their one standard layout, comments kept.
///
/// Files are rewritten in place, whole or not at all; `-` reads standard input and writes
/// standard output. Running it twice changes nothing.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// Flow files, or `-`.
    #[arg(required = true, value_name = "FLOW")]
    flows: Vec<String>,
    /// Only tell which files are not tidy; exit 1 when there is one.
    #[arg(long)]
    check: bool,
}

pub(crate) fn run(args: &Args, _: &Shared) -> Result<Exit, Failure> {
    let mut untidy = false;
    for path in &args.flows {
        let name = if path == "-" { "standard input" } else { path };
        let source = read_text(&Disk, path, name).map_err(Failure::unusable)?;
        let laid_out = syntax::tidy(&source.text);
        if args.check {
            if laid_out != source.text {
                untidy = true;
                output::tell(&format!("{name}: not tidy"));
            }
        } else if path == "-" {
            output::emit(laid_out.as_bytes(), None)?;
        } else if laid_out != source.text {
            output::emit(laid_out.as_bytes(), Some(Path::new(path)))?;
        }
    }
    Ok(if untidy { Exit::Broken } else { Exit::Holds })
}
