//! The command line: one subcommand a file, the shared conventions beside them.

mod check;
mod compare;
mod disk;
mod draw;
mod exit;
mod explain;
mod field;
mod git;
mod input;
mod library;
mod order;
mod output;
mod progress;
mod report;
mod tidy;

use std::ffi::OsString;
use std::io::IsTerminal;

use clap::{Parser, Subcommand};

pub use exit::Exit;

/// Air-gap process flows as text: order, materials, void geometry and capacitance, checked
/// before a wafer lot is spent.
///
/// Exit status: 0 everything holds; 1 an error finding or a broken limit; 2 the input or the
/// command line cannot be used; 3 an internal check failed.
#[derive(Debug, Parser)]
#[command(name = "gapwright", version, arg_required_else_help = true)]
struct Cli {
    #[command(flatten)]
    shared: Shared,
    #[command(subcommand)]
    command: Command,
}

/// Options that every command takes.
#[derive(Debug, clap::Args)]
pub(crate) struct Shared {
    /// Colour in messages and text output; `auto` colours terminals and heeds NO_COLOR.
    #[arg(long, global = true, value_name = "WHEN", default_value = "auto")]
    color: clap::ColorChoice,
    /// Threads to use; never changes a result [default: all cores].
    #[arg(long, global = true, value_name = "N", value_parser = clap::value_parser!(u16).range(1..))]
    jobs: Option<u16>,
}

#[derive(Debug, Subcommand)]
enum Command {
    Check(check::Args),
    Compare(compare::Args),
    Draw(draw::Args),
    Explain(explain::Args),
    Field(field::Args),
    Library(library::Args),
    Order(order::Args),
    Report(report::Args),
    Tidy(tidy::Args),
}

impl Shared {
    /// Whether what goes to this stream is coloured.
    pub(crate) fn colored(&self, stream: &impl IsTerminal) -> bool {
        match self.color {
            clap::ColorChoice::Always => true,
            clap::ColorChoice::Never => false,
            clap::ColorChoice::Auto => {
                let refused = std::env::var_os("NO_COLOR").is_some_and(|value| !value.is_empty());
                stream.is_terminal() && !refused
            }
        }
    }
}

/// Runs the command line and says how it ended.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> Exit {
    let cli = match Cli::try_parse_from(arguments) {
        Ok(cli) => cli,
        Err(error) => {
            // Help and version are answers, not failures; clap knows the stream of each.
            let status = if error.use_stderr() { Exit::Unusable } else { Exit::Holds };
            return if error.print().is_ok() { status } else { Exit::Unusable };
        }
    };
    if let Some(jobs) = cli.shared.jobs {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(jobs.into()).build_global();
        if let Err(error) = pool {
            return output::fail(Exit::Internal, &error);
        }
    }
    let ended = match &cli.command {
        Command::Check(args) => check::run(args, &cli.shared),
        Command::Compare(args) => compare::run(args, &cli.shared),
        Command::Draw(args) => draw::run(args, &cli.shared),
        Command::Explain(args) => explain::run(args, &cli.shared),
        Command::Field(args) => field::run(args, &cli.shared),
        Command::Library(args) => library::run(args, &cli.shared),
        Command::Order(args) => order::run(args, &cli.shared),
        Command::Report(args) => report::run(args, &cli.shared),
        Command::Tidy(args) => tidy::run(args, &cli.shared),
    };
    ended.unwrap_or_else(|failure| output::fail(failure.exit, &failure.message))
}
