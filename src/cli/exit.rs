//! How a command ends.

use std::process::{ExitCode, Termination};

/// Exit status of the program, worst last.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Exit {
    /// Everything holds.
    Holds = 0,
    /// An error finding or a broken limit.
    Broken = 1,
    /// The input or the command line cannot be used.
    Unusable = 2,
    /// An internal check failed.
    Internal = 3,
}

impl Termination for Exit {
    fn report(self) -> ExitCode {
        ExitCode::from(self as u8)
    }
}
