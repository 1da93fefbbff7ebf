//! Flow text to a tree that keeps every word, and back to text in the standard layout.
//!
//! [`parse`] cannot fail: each statement is read on its own, and what cannot be read becomes
//! a broken line of the tree with one [`Diagnostic`](crate::diag::Diagnostic) beside it.
//! Names are only shapes here; `flow` gives them meaning.

mod amount;
mod cursor;
mod lex;
mod parse;
mod place;
mod sections;
mod sizes;
mod step;
mod tidy;
mod tree;
mod wafer;
mod words;

pub use lex::{Token, TokenKind};
pub use parse::parse;
pub use sizes::*;
pub use tidy::{line_text, tidy};
pub use tree::*;
pub use words::{RESERVED, SELECTIVE_VERBS, STEP_VERBS, Section, is_name, is_reserved};
