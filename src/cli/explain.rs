//! `explain`: a page on any rule, quantity, material or process.

use super::disk::Disk;
use super::output::{self, Failure};
use super::{Exit, Shared};
use crate::diag::nearest;
use crate::library::Library;
use crate::report::{explain, messages};
use crate::rules;
use crate::world::read_text;

/// A page on any rule, quantity, material or process: what, why, how it is computed, where the
/// numbers come from.
///
/// Without a name, all names are listed. Works offline.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// Name of a rule, quantity, material or process.
    name: Option<String>,
    /// Library files to load first; later ones win.
    #[arg(long, value_name = "FILE")]
    library: Vec<String>,
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    let mut library = (*Library::built_in()).clone();
    for path in &args.library {
        library = load(&library, path, shared)?;
    }
    let text = match &args.name {
        None => explain::list(&library),
        Some(name) => explain::page(name, &library).ok_or_else(|| {
            let near = nearest(name, explain::names(&library));
            let hint = near.map_or_else(
                || "`gapwright explain` lists all names".to_owned(),
                |near| format!("the nearest name is `{near}`"),
            );
            Failure::unusable(format_args!("nothing is called `{name}`; {hint}"))
        })?,
    };
    output::emit(text.as_bytes(), None)?;
    Ok(Exit::Holds)
}

fn load(onto: &Library, path: &str, shared: &Shared) -> Result<Library, Failure> {
    let source = read_text(&Disk, path, path).map_err(Failure::unusable)?;
    let colored = shared.colored(&std::io::stderr());
    let refuse = |diagnostics: &[_]| {
        Failure::unusable(messages::render(diagnostics, &source, colored).trim_end())
    };
    let (library, notes) = rules::lay_over(onto, &source).map_err(|wrong| refuse(&wrong))?;
    if !notes.is_empty() {
        output::tell(&messages::render(&notes, &source, colored));
    }
    Ok(library)
}
