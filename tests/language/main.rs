//! The flow language, from text to a resolved flow.

mod layout;
mod mistakes;
mod page;
mod read;
mod resolved;
