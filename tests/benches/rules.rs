//! What holding a flow against all rules costs beside growing it.
//!
//! Prints both times for a flow with three spaces; nothing is asserted.

#![allow(clippy::disallowed_types, clippy::print_stdout, reason = "a bench measures and prints")]

use std::hint::black_box;
use std::sync::Arc;
use std::time::{Duration, Instant};

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
    let turn = |_| {
        let start = Instant::now();
        let graph = Graph::of(&flow, variant);
        let context = Context::new(&flow, variant, &graph, &cells, &[]);
        black_box(rules::check(&context));
        start.elapsed()
    };
    let turns: Vec<Duration> = (0..TURNS).map(turn).collect();
    let best = turns.iter().min().copied().unwrap_or_default();
    let mean = turns.iter().sum::<Duration>() / TURNS;
    println!(
        "growing {grown:.2?}, holding against the rules {best:.2?} at best, {mean:.2?} on average of \
         {TURNS} turns"
    );
}
