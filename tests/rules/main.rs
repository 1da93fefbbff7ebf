//! Rules held against whole flows: the flows of their pages, legitimate ones, ones with
//! mistakes, and shuffled ones.

#![allow(clippy::disallowed_methods, reason = "they read flows and pages from the repository")]

mod registry;
