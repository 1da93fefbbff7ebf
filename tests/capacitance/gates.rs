//! Gate stacks: what the material between the gates does to their coupling.

use gapwright::field::{Body, Edge, Problem, Role, solve};

use crate::sections::*;

/// Coupling of the middle floating gate to both its neighbours over its total; gates 25 nm
/// wide at a pitch of 50 nm on 8 nm of oxide over silicon, 30 nm of floating gate, 12 nm of
/// dielectric of k 5.5, 50 nm of control gate, fill up to 20 nm above (invented numbers).
pub fn gate_to_gate_share(fill: f64, void: bool) -> f64 {
    let x = [-75.0, 75.0];
    let mut bodies: Vec<Body> = vec![
        slab(x, [-20.0, 0.0], Role::Electrode(6)),
        slab(x, [0.0, 8.0], Role::Dielectric(3.9)),
        slab(x, [8.0, 120.0], Role::Dielectric(fill)),
    ];
    for (i, c) in [-50.0, 0.0, 50.0].into_iter().enumerate() {
        let gate = [c - 12.5, c + 12.5];
        bodies.push(slab(gate, [8.0, 38.0], Role::Electrode(i)));
        bodies.push(slab(gate, [38.0, 50.0], Role::Dielectric(5.5)));
        bodies.push(slab(gate, [50.0, 100.0], Role::Electrode(3 + i)));
    }
    if void {
        for c in [-75.0, -25.0, 25.0, 75.0] {
            bodies.push(body(teardrop(c, 10.0, 18.0, 95.0, 40), Role::Dielectric(1.0)));
        }
    }
    let problem = Problem {
        x,
        z: [-20.0, 140.0],
        top: Edge::Open,
        bottom: Edge::Mirror,
        bodies,
        electrodes: 7,
    };
    let solved = solve(&problem, 5e-3).unwrap();
    assert!(solved.converged);
    -(solved.value[1][0] + solved.value[1][2]) / solved.value[1][1]
}

/// Gate-to-gate coupling falls from nitride to oxide to air (common practice).
#[test]
fn coupling_falls_from_nitride_to_oxide_to_void_to_vacuum() {
    let shares = [(7.0, false), (3.9, false), (3.9, true), (1.0, false)]
        .map(|(fill, void)| gate_to_gate_share(fill, void));
    assert!(shares.windows(2).all(|pair| pair[0] > pair[1]), "{shares:?}");
    // The figures of docs/physics/capacitance.md.
    for (share, told) in shares.iter().zip(TOLD) {
        assert!((share - told).abs() < 6e-4, "{shares:?}");
    }
}

const TOLD: [f64; 4] = [0.2682, 0.1822, 0.0974, 0.0599];
