//! gapwright: air-gap process flows as text, judged before a wafer lot is spent.
//!
//! Two towers stand beside each other: the *language* (text to a resolved flow) and the
//! *numerics* (shapes and fields). They meet in [`sim`] and [`measure`]; verdicts, reports,
//! studies and the command line stand above. `DEVELOPERS.md` draws the house; a test holds
//! the `use crate::…` lines against that drawing.

pub mod diag;
pub mod source;
pub mod units;
pub mod world;

pub mod num;

pub mod geom;
pub mod syntax;

pub mod field;
pub mod flow;
pub mod front;
pub mod library;

pub mod graph;

pub mod sim;

pub mod measure;
pub mod report;
pub mod rules;
pub mod study;
pub mod verdict;

pub mod cli;
pub mod pipeline;
