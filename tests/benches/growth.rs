//! Cost of a growth to closure: one site, over aspect ratio and resolution.
//!
//! Prints milliseconds, closing thickness and void top; nothing is asserted.

#[path = "../physics/scenes.rs"]
mod scenes;

use gapwright::front::grow;
use scenes::{Array, figures, mixture, resolution};
use std::time::Instant;

fn main() {
    println!("s 32 nm, w 32 nm, S 0.3, half a cell, to closure");
    println!("{:>4} {:>8} {:>9} {:>9} {:>9} {:>9}", "AR", "facet", "ms", "T", "top", "share");
    for ratio in [1.0, 3.0, 10.0] {
        for facet in [1.6, 0.8, 0.4] {
            let array = Array { s: 32.0, w: 32.0, h: 32.0 * ratio, taper_deg: 0.0 };
            let start = Instant::now();
            let growth =
                grow(&array.half(), &mixture(0.0, 0.0, 0.0, 0.3), 40.0, &resolution(facet));
            let time = start.elapsed().as_secs_f64() * 1e3;
            match growth.as_ref().map(|growth| figures(&array, growth)) {
                Ok(Some(f)) => println!(
                    "{ratio:>4} {facet:>8} {time:>9.1} {:>9.4} {:>9.3} {:>9.4}",
                    f.thickness, f.top, f.share
                ),
                other => println!("{ratio:>4} {facet:>8} {time:>9.1} {other:?}"),
            }
        }
    }
}
