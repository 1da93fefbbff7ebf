//! The `gapwright` command.

fn main() {}
