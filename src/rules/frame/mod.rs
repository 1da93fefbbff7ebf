//! What all rules stand on: the rule as data, what a check is given, what it hands in.

pub mod barriers;
pub mod context;
mod findings;
pub mod gaps;
pub mod metal;
pub mod roofs;
mod rule;
pub(super) mod settle;
pub mod shape;
pub mod ways;

pub use context::{Context, Moment};
pub use findings::{Findings, Found};
pub use rule::{Needs, Rule, Threshold};
