//! What holding a flow against all rules costs beside growing it.
//!
//! Prints both times and their ratio for a flow with three spaces; nothing is asserted.

#![allow(clippy::disallowed_types, clippy::print_stdout, reason = "a bench measures and prints")]

use std::hint::black_box;
use std::sync::Arc;
use std::time::Instant;

use gapwright::flow;
use gapwright::graph::Graph;
use gapwright::library::Library;
use gapwright::rules::{self, Context};
use gapwright::sim::{self, Grain};
use gapwright::source::Source;
use gapwright::syntax;

const FLOW: &str = include_str!("../../flows/etch-back/dense-copper-gap.flow");
const TURNS: u32 = 20;

fn main() {
    let source = Arc::new(Source::new("dense-copper-gap.flow", FLOW));
    let (tree, _) = syntax::parse(&source);
    let (flow, _) =
        flow::resolve(&tree, source, Library::built_in()).expect("the example resolves");
    let variant = &flow.variants[0];
    let start = Instant::now();
    let cells = sim::run(&flow, variant, &Grain::default().finer(), &|_, _| ()).expect("it grows");
    let grown = start.elapsed();
    let start = Instant::now();
    for _ in 0..TURNS {
        let graph = Graph::of(&flow, variant);
        let context = Context { flow: &flow, variant, graph: &graph, cells: &cells, sites: &[] };
        black_box(rules::check(&context));
    }
    let held = start.elapsed() / TURNS;
    let ratio = held.as_secs_f64() / grown.as_secs_f64();
    println!("growing {grown:.2?}, holding against the rules {held:.2?}, {:.3} of it", ratio);
}
