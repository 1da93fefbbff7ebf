//! Why a flow could not be computed.

use crate::diag::Diagnostic;
use crate::front::FrontError;
use crate::source::Span;

/// Why a flow could not be computed.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum SimError {
    /// The wafer cannot be drawn as it is written.
    #[error("{message}")]
    Drawing {
        /// What cannot be.
        message: String,
        /// What to do about it.
        help: String,
        /// Where it stands.
        span: Span,
    },
    /// A step cannot be done on the section that it finds.
    #[error("operation {op} at {site}: {message}")]
    Step {
        /// Operation number as written.
        op: String,
        /// The sites of the cell.
        site: String,
        /// What cannot be.
        message: String,
        /// What to do about it.
        help: String,
        /// Where it stands.
        span: Span,
    },
    /// The front could not be moved.
    #[error("operation {op} at {site}: {error}")]
    Front {
        /// Operation number as written.
        op: String,
        /// The sites of the cell.
        site: String,
        /// Why.
        error: FrontError,
        /// Where it stands.
        span: Span,
    },
    /// A check of the program on itself failed; no figure of this run can be trusted.
    #[error("internal check failed after {place}: {message}")]
    Internal {
        /// After which step, and where.
        place: String,
        /// What does not hold.
        message: String,
    },
}

impl SimError {
    /// The error as a message about the flow; `None` where the flow is not to blame.
    pub fn diagnostic(&self) -> Option<Diagnostic> {
        match self {
            Self::Drawing { message, help, span } => {
                Some(Diagnostic::error(*span, message.clone()).help(help.clone()))
            }
            Self::Step { site, message, help, span, .. } => {
                Some(Diagnostic::error(*span, format!("{message} at {site}")).help(help.clone()))
            }
            Self::Front { .. } | Self::Internal { .. } => None,
        }
    }
}

/// Why one step could not be done, before its place in the flow is known.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Fault {
    /// The section that the step finds does not allow it.
    Refused {
        /// What cannot be.
        message: String,
        /// What to do about it.
        help: String,
    },
    /// The front could not be moved.
    Front(FrontError),
    /// A check of the program on itself failed.
    Internal(String),
}

impl Fault {
    /// A step that the section does not allow.
    pub(super) fn refused(message: impl Into<String>, help: impl Into<String>) -> Self {
        Self::Refused { message: message.into(), help: help.into() }
    }
}

impl From<FrontError> for Fault {
    fn from(error: FrontError) -> Self {
        match error {
            FrontError::Inconsistent(what) => Self::Internal(format!("inconsistent front: {what}")),
            other => Self::Front(other),
        }
    }
}
