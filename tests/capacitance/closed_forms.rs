//! Closed forms, C′/ε0.

use gapwright::field::{Role, solve};
use gapwright::geom::Region;

use crate::sections::*;

/// Within 0.05 % of a value and inside the bounds.
fn hold([value, low, high]: [f64; 3], exact: f64) {
    assert!((value / exact - 1.0).abs() < 5e-4, "{value}, expected {exact}");
    assert!(low <= exact && exact <= high, "{exact} is not within {low} and {high}");
}

/// Layers in series, s / Σ(d/k): 5 + 22 + 5 nm, k 4 / 1 / 4 gives k 1.3061.
#[test]
fn layers_between_plates() {
    let x = [0.0, 10.0];
    let problem = closed(
        x,
        [0.0, 34.0],
        2,
        vec![
            slab(x, [0.0, 1.0], Role::Electrode(0)),
            slab(x, [1.0, 33.0], Role::Dielectric(4.0)),
            slab(x, [6.0, 28.0], Role::Dielectric(1.0)),
            slab(x, [33.0, 34.0], Role::Electrode(1)),
        ],
    );
    let solved = solve(&problem, 1e-3).unwrap();
    hold(entry(&solved, 0, 0), 10.0 / (10.0 / 4.0 + 22.0));
}

/// Square in a square of twice its side: 10.2341 (conformal mapping; agrees with the tables
/// of square coaxial lines, from memory).
#[test]
fn square_coaxial_line() {
    let outer = Region::rectangle([0.0, 60.0], [0.0, 60.0])
        .difference(&Region::rectangle([10.0, 50.0], [10.0, 50.0]));
    let problem = closed(
        [0.0, 60.0],
        [0.0, 60.0],
        2,
        vec![body(outer, Role::Electrode(0)), slab([20.0, 40.0], [20.0, 40.0], Role::Electrode(1))],
    );
    for accuracy in [5e-3, 1e-4] {
        hold(entry(&solve(&problem, accuracy).unwrap(), 0, 0), 10.2341);
    }
}

/// Circles of radius 1 and 2, coaxial: 2π / ln 2 = 9.064720. Polygons of n sides have the
/// capacitance of circles of their conformal radius; with the vertices of the inner one on the
/// circle it is smaller by at most the sagitta, with the sides of the outer one on the circle
/// larger, so the polygons give less.
#[test]
fn coaxial_circles() {
    let (n, r) = (720, 50.0);
    let around = 2.0 * r / (std::f64::consts::PI / f64::from(n)).cos();
    let outer = Region::rectangle([-110.0, 110.0], [-110.0, 110.0]).difference(&ellipse(
        [0.0, 0.0],
        [around; 2],
        n as usize,
    ));
    let problem = closed(
        [-110.0, 110.0],
        [-110.0, 110.0],
        2,
        vec![
            body(outer, Role::Electrode(0)),
            body(ellipse([0.0, 0.0], [r; 2], n as usize), Role::Electrode(1)),
        ],
    );
    hold(entry(&solve(&problem, 1e-3).unwrap(), 0, 0), 9.064720);
}

/// A section of seven lines with liners and voids under an open top has a proof of 0.5 %.
#[test]
fn seven_lines_with_voids_converge() {
    let solved = solve(&ARRAY.problem(), 5e-3).unwrap();
    assert!(solved.converged);
    for (i, j) in [(3, 3), (3, 4)] {
        let [value, low, high] = entry(&solved, i, j);
        assert!(low < value && value < high && high - low <= 0.01 * value.abs());
    }
}
