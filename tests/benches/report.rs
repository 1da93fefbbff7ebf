//! What the page of the largest example costs beside its computation: milliseconds and bytes.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    reason = "a bench reads files, times and prints"
)]

use std::collections::BTreeMap;
use std::time::Instant;

use gapwright::pipeline::{self, Options};
use gapwright::report::html::{self, Grown};
use gapwright::world::Memory;

const EXAMPLE: &str = include_str!("../../flows/etch-back/dense-copper-gap.flow");

fn main() {
    let world = Memory(BTreeMap::from([("a.flow".to_owned(), EXAMPLE.as_bytes().to_vec())]));
    let flow = pipeline::load(&world, "a.flow", "a.flow").expect("an example loads").flow;
    let options = Options { splits: true, ..Options::default() };
    let start = Instant::now();
    let judged = pipeline::judge(&flow, &options, &|_, _| ()).expect("an example runs");
    println!("computation   {:8.1} ms", start.elapsed().as_secs_f64() * 1e3);
    let grown: Vec<_> =
        judged.runs.iter().map(|run| Grown { variant: run.variant, cells: &run.fine }).collect();
    let start = Instant::now();
    let page = html::page(&flow, &judged.report, &grown);
    println!("its page      {:8.1} ms, {} bytes", start.elapsed().as_secs_f64() * 1e3, page.len());
}
