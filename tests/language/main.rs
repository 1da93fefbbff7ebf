//! The flow language, from text to a resolved flow.

mod layout;
mod mistakes;
mod read;
mod resolved;
