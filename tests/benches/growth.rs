//! Cost of a growth to closure: one site, over aspect ratio and resolution.
//!
//! Prints milliseconds and the figures that they buy; nothing is asserted.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "a bench reads, measures and prints"
)]

#[allow(dead_code, reason = "shared with the tests")]
#[path = "../physics/scenes.rs"]
mod scenes;

use gapwright::front::grow;
use scenes::{Array, figures, mixture, resolution};
use std::time::Instant;

fn main() {
    println!("s 32 nm, w 32 nm, S 0.3, half a cell, to closure");
    println!("  AR   facet        ms        T      top   share   width  bottom    side   floor");
    for ratio in [1.0, 3.0, 10.0] {
        for facet in [3.2, 1.6, 0.8, 0.4] {
            let array = Array { s: 32.0, w: 32.0, h: 32.0 * ratio, taper_deg: 0.0 };
            let gas = mixture(0.0, 0.0, 0.0, 0.3);
            let start = Instant::now();
            let growth = grow(&array.half(), &gas, 36.0, &resolution(facet));
            let time = start.elapsed().as_secs_f64() * 1e3;
            match growth.as_ref().map(|growth| figures(&array, growth)) {
                Ok(Some(f)) => println!(
                    "{ratio:>4} {facet:>7} {time:>9.1} {:>8.4} {:>8.3} {:>7.4} {:>7.3} {:>7.3} {:>7.3} {:>7.3}",
                    f.thickness, f.top, f.share, f.width, f.bottom, f.side, f.floor
                ),
                other => println!("{ratio:>4} {facet:>7} {time:>9.1} {other:?}"),
            }
        }
    }
    let rows = array_of_all();
    println!("a whole cell and a row of four lines, AR 2: {rows:?} ms");
}

fn array_of_all() -> [f64; 2] {
    let array = Array { s: 32.0, w: 32.0, h: 64.0, taper_deg: 0.0 };
    [array.cell(), array.row(4)].map(|scene| {
        let start = Instant::now();
        let growth = grow(&scene, &mixture(0.0, 0.0, 0.0, 0.3), 36.0, &resolution(1.6));
        std::hint::black_box(growth.is_ok());
        start.elapsed().as_secs_f64() * 1e3
    })
}
