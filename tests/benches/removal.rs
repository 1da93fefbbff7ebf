//! Cost of a recess of 90 nm in a space of 32 nm, over the character of the etch and the facets.
//!
//! Prints milliseconds, the area removed and the lowest point of the floor; nothing is asserted.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "a bench reads, measures and prints"
)]

use gapwright::front::{Character, Resolution, Scene, Solid, erode};
use gapwright::geom::Region;
use std::time::Instant;

const BEAM: Character = Character {
    conformal: 0.0,
    directional: 1.0,
    exponent: None,
    tilt_rad: 0.0,
    neutral: 0.0,
    sticking: 0.3,
};

fn main() {
    let block = |x: [f64; 2], z: [f64; 2], rate| Solid { region: Region::rectangle(x, z), rate };
    let scene = Scene {
        walls: [0.0, 64.0],
        solids: vec![
            block([0.0, 16.0], [0.0, 96.0], 0.01),
            block([16.0, 48.0], [0.0, 96.0], 1.0),
            block([48.0, 64.0], [0.0, 96.0], 0.01),
            block([0.0, 64.0], [-20.0, 0.0], 0.3),
        ],
    };
    let characters = [
        ("beam", BEAM),
        ("conformal", Character { conformal: 1.0, directional: 0.0, ..BEAM }),
        ("beam and gas", Character { directional: 0.8, neutral: 0.2, ..BEAM }),
        (
            "lobe and gas",
            Character { exponent: Some(40.0), directional: 0.8, neutral: 0.2, ..BEAM },
        ),
    ];
    println!("{:<14} {:>6} {:>9} {:>10} {:>8}", "etch", "facet", "ms", "nm²", "floor");
    for (name, character) in characters {
        for facet_nm in [1.6, 0.8] {
            let resolution = Resolution { facet_nm, closure_width_nm: 0.5 };
            let start = Instant::now();
            let removed = erode(&scene, &character, 90.0, &resolution).map(|e| e.removed);
            let time = start.elapsed().as_secs_f64() * 1e3;
            match removed.as_ref().map(|r| (r[1].area(), r[1].bounds())) {
                Ok((area, Some(bounds))) => println!(
                    "{name:<14} {facet_nm:>6} {time:>9.1} {area:>10.2} {:>8.3}",
                    bounds.min.z
                ),
                other => println!("{name:<14} {facet_nm:>6} {time:>9.1} {other:?}"),
            }
        }
    }
}
