//! How long the language layer takes over the largest flow that it reads. Prints; judges nothing.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "a bench reads, measures and prints"
)]

use std::sync::Arc;
use std::time::{Duration, Instant};

use gapwright::flow;
use gapwright::library::Library;
use gapwright::source::Source;
use gapwright::syntax::{MAX_STATEMENTS, parse, tidy};

/// A flow of as many statements as a file may have: steps, and splits that replace one each.
fn largest() -> String {
    let splits = 100;
    let steps = MAX_STATEMENTS - splits - 7;
    let mut text =
        String::from("flow large\nwafer\n  lines 90 nm W width 32 nm space 32 nm\nsteps\n");
    for op in 1..=steps {
        text += &format!("  {op:05} deposit 3 ± 0.1 nm SiCN by ald-carbonitride # step {op}\n");
    }
    text += "splits\n";
    for at in 1..=splits {
        text += &format!("  split-{at} {at} skip\n");
    }
    text + "limits\n  sealed at 32 nm\n"
}

fn time<T>(what: &str, run: impl Fn() -> T) {
    let best = (0..5)
        .map(|_| {
            let start = Instant::now();
            std::hint::black_box(run());
            start.elapsed()
        })
        .min()
        .unwrap_or(Duration::ZERO);
    println!("{what:<24} {:9.2} ms", best.as_secs_f64() * 1e3);
}

fn main() {
    let text = largest();
    println!("{} statements, {} bytes", MAX_STATEMENTS, text.len());
    let source = Arc::new(Source::new("large.flow", text));
    let library = Library::built_in();
    let (tree, messages) = parse(&source);
    assert!(messages.is_empty(), "{messages:?}");
    time("parse", || parse(&source));
    time("tidy", || tidy(&source.text));
    time("resolve, 101 variants", || {
        flow::resolve(&tree, source.clone(), library.clone()).map(|(flow, _)| flow.variants.len())
    });
    let broken = source.text.replace("SiCN", "SiNC");
    let broken = Arc::new(Source::new("broken.flow", broken));
    let (tree, _) = parse(&broken);
    let messages = flow::resolve(&tree, broken.clone(), library.clone()).err().unwrap_or_default();
    println!("{} messages", messages.len());
    time("resolve with messages", || {
        flow::resolve(&tree, broken.clone(), library.clone()).is_err()
    });
    time("render messages", || {
        gapwright::report::messages::render(&messages, &broken, false).len()
    });
}
