//! Thirty sections as flows make them: the bounds are as narrow as asked, the value moves
//! little against a much finer run, and the finer bounds lie within the wider ones' reach.

use gapwright::field::solve;

use crate::sections::*;

/// Lines, spaces, liners, voids, tapers, planes: every combination differs in several.
fn thirty() -> Vec<Array> {
    (0..30)
        .map(|i| {
            let pick = |values: &[f64], stride: usize| values[(i / stride + i) % values.len()];
            let s = pick(&[20.0, 32.0, 48.0], 1);
            Array {
                w: s * pick(&[0.6, 1.0, 1.6], 3),
                s,
                h: s * pick(&[1.2, 2.0, 3.0], 2),
                liner: s * pick(&[0.0, 0.1, 0.05], 5),
                k_liner: pick(&[4.8, 7.0], 1),
                k: pick(&[2.5, 2.7, 4.2], 4),
                void: pick(&[0.0, 0.3, 0.5, 0.7], 7),
                k_below: pick(&[2.7, 3.9], 6),
                below: s * pick(&[1.0, 2.0, 4.0], 9),
                above: s * pick(&[0.0, 2.0], 3),
                taper: s * pick(&[0.0, 0.1, -0.1], 10),
                points: 40,
            }
        })
        .collect()
}

#[test]
fn thirty_sections_keep_their_word() {
    for (n, array) in thirty().iter().enumerate() {
        let problem = array.problem();
        let coarse = solve(&problem, 5e-3).unwrap();
        let fine = solve(&problem, 1e-3).unwrap();
        assert!(coarse.converged && fine.converged, "section {n}");
        for j in [3, 4] {
            let [value, low, high] = entry(&coarse, 3, j);
            let [exact, least, most] = entry(&fine, 3, j);
            assert!(0.5 * (high - low) <= 5e-3 * value.abs(), "section {n}: {low} to {high}");
            assert!((value / exact - 1.0).abs() <= 1e-3, "section {n}: {value}, then {exact}");
            assert!(low <= most && least <= high, "section {n}: {low} {high}, {least} {most}");
        }
    }
}
