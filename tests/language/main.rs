//! The flow language, from text to a resolved flow.

mod layout;
mod resolved;
