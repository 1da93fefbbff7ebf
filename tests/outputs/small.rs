//! One small flow, judged once for all tests of this crate.

use std::collections::BTreeMap;
use std::sync::OnceLock;

use gapwright::flow::Flow;
use gapwright::pipeline::{self, Judged, Options};
use gapwright::report::Report;
use gapwright::report::html::Grown;
use gapwright::world::Memory;

/// The flow's text.
pub const TEXT: &str = include_str!("small.flow");

/// A judged flow.
pub struct Small {
    pub flow: Flow,
    pub judged: Judged,
}

/// The small flow with its split.
pub fn small() -> &'static Small {
    static SMALL: OnceLock<Small> = OnceLock::new();
    SMALL.get_or_init(|| judge(TEXT))
}

/// The same flow with a thicker liner and a wider limit, to compare with.
pub fn thicker() -> &'static Small {
    static THICKER: OnceLock<Small> = OnceLock::new();
    THICKER.get_or_init(|| {
        judge(
            &TEXT
                .replace("010  deposit  2 nm", "010  deposit  4 nm")
                .replace("<= 10 nm", "<= 30 nm"),
        )
    })
}

fn judge(text: &str) -> Small {
    let world = Memory(BTreeMap::from([("small.flow".to_owned(), text.as_bytes().to_vec())]));
    let flow = pipeline::load(&world, "small.flow", "flows/small.flow").unwrap().flow;
    let options = Options { splits: true, ..Options::default() };
    let judged = pipeline::judge(&flow, &options, &|_, _| ()).unwrap();
    Small { flow, judged }
}

impl Small {
    /// Its report, alone.
    pub fn report(&self) -> Report {
        Report::of(vec![self.judged.report.clone()])
    }

    /// Its grown variants.
    pub fn grown(&self) -> Vec<Grown<'_>> {
        let runs = self.judged.runs.iter();
        runs.map(|run| Grown { variant: run.variant, cells: &run.fine }).collect()
    }
}
