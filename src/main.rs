//! The `gapwright` command.

use gapwright::cli::{self, Exit};

fn main() -> Exit {
    cli::run(std::env::args_os())
}
