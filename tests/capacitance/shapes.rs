//! Shapes in the wild: what a polygon from a trace or a simulation may do.

use gapwright::field::{Body, Capacitance, Edge, FieldError, Problem, Role, solve, solve_variants};
use gapwright::geom::{Point, Region};

use crate::sections::*;

/// Plates 0 and 1 at the bottom and top of a box of 100 × 100, mirrors left and right.
fn between_plates(inside: Vec<Body>) -> Problem {
    let x = [0.0, 100.0];
    let mut bodies = inside;
    bodies.push(slab(x, [-5.0, 0.0], Role::Electrode(0)));
    bodies.push(slab(x, [100.0, 105.0], Role::Electrode(1)));
    closed(x, [-5.0, 105.0], 2, bodies)
}

fn coupling(solved: &Capacitance) -> [f64; 3] {
    assert!(solved.converged);
    let [value, low, high] = entry(solved, 0, 1).map(|v| -v);
    assert!(high <= value && value <= low);
    [value, high, low]
}

/// A floating plate of thickness t between plates leaves s − t of gap: exactly 1/(s − t).
#[test]
fn a_floating_plate_shortens_the_gap() {
    let plate = slab([0.0, 100.0], [30.0, 50.0], Role::Floating(7));
    let [value, low, high] = coupling(&solve(&between_plates(vec![plate]), 5e-3).unwrap());
    assert!((value - 100.0 / 80.0).abs() < 1e-9 && low <= 1.25 && 1.25 <= high);
}

/// Two floating halves with one name are one conductor, with two names they are not; joined
/// across the gap they carry charge from one field to the other.
#[test]
fn pieces_with_one_name_are_one_conductor() {
    let pieces = |a: usize, b: usize| {
        let low = slab([10.0, 90.0], [10.0, 20.0], Role::Floating(a));
        let high = slab([10.0, 90.0], [80.0, 90.0], Role::Floating(b));
        coupling(&solve(&between_plates(vec![low, high]), 5e-3).unwrap())
    };
    let (one, two) = (pieces(0, 0), pieces(0, 1));
    assert!(one[1] > 2.0 * two[2], "{one:?} {two:?}");
}

/// An electrode of two pieces draws the sum of what the pieces draw held alike.
#[test]
fn an_electrode_of_two_pieces_is_their_sum() {
    let pieces = |b: usize| {
        let mut problem = between_plates(vec![
            slab([10.0, 30.0], [40.0, 60.0], Role::Electrode(2)),
            slab([60.0, 90.0], [30.0, 70.0], Role::Electrode(b)),
        ]);
        problem.electrodes = b + 1;
        solve(&problem, 1e-3).unwrap()
    };
    let (apart, one) = (pieces(3), pieces(2));
    let sum: f64 = [(2, 2), (2, 3), (3, 2), (3, 3)].iter().map(|(i, j)| apart.value[*i][*j]).sum();
    assert!((one.value[2][2] / sum - 1.0).abs() < 1e-4, "{} {sum}", one.value[2][2]);
}

/// With nothing but mirrors and an open edge around it, no field leaves an electrode: exactly 0.
#[test]
fn an_electrode_alone_has_no_capacitance() {
    for (top, floating) in [(Edge::Open, false), (Edge::Mirror, false), (Edge::Open, true)] {
        let x = [0.0, 100.0];
        let mut bodies = vec![slab([10.0, 30.0], [20.0, 60.0], Role::Electrode(0))];
        if floating {
            bodies.push(slab([60.0, 80.0], [20.0, 60.0], Role::Floating(0)));
        }
        let problem = Problem { x, z: [0.0, 100.0], top, bottom: top, bodies, electrodes: 1 };
        let solved = solve(&problem, 5e-3).unwrap();
        let [value, low, high] = entry(&solved, 0, 0);
        assert!(solved.converged && low <= 0.0 && 0.0 <= high, "{low} to {high}");
        assert!(value.abs() < 1e-9 && high - low < 1e-6, "{value}: {low} to {high}");
    }
}

/// A conductor that pinches at a point carries charge on both lobes.
#[test]
fn a_pinched_conductor_converges() {
    let lobes = Region::rectangle([30.0, 50.0], [30.0, 50.0])
        .union(&Region::rectangle([50.0, 70.0], [50.0, 70.0]));
    let solved = solve(&between_plates(vec![body(lobes, Role::Floating(0))]), 5e-3).unwrap();
    coupling(&solved);
}

/// A conducting ring shuts its inside off: an electrode in there sees only the ring.
#[test]
fn a_ring_shields_its_inside() {
    let ring = Region::rectangle([20.0, 80.0], [20.0, 80.0])
        .difference(&Region::rectangle([30.0, 70.0], [30.0, 70.0]));
    let mut problem = between_plates(vec![
        body(ring, Role::Electrode(2)),
        slab([40.0, 60.0], [40.0, 60.0], Role::Electrode(3)),
    ]);
    problem.electrodes = 4;
    let solved = solve(&problem, 1e-3).unwrap();
    // Square in a square of twice its side: 10.2341.
    let [value, low, high] = entry(&solved, 3, 3);
    assert!((value / 10.2341 - 1.0).abs() < 5e-4 && low <= 10.2341 && 10.2341 <= high);
    assert_eq!(entry(&solved, 3, 0)[0], 0.0);
}

#[test]
fn later_bodies_win_and_hidden_edges_do_not_matter() {
    let plain = between_plates(vec![slab([0.0, 100.0], [0.0, 40.0], Role::Dielectric(4.0))]);
    let layered = between_plates(vec![
        slab([-10.0, 60.0], [0.0, 55.5], Role::Dielectric(9.0)),
        slab([13.3, 130.0], [-20.0, 80.0], Role::Dielectric(1.0)),
        slab([0.0, 50.0], [40.0, 100.0], Role::Dielectric(1.0)),
        slab([0.0, 37.7], [0.0, 40.0], Role::Dielectric(4.0)),
        slab([37.7, 100.0], [0.0, 40.0], Role::Dielectric(4.0)),
    ]);
    let [a, b] = [plain, layered].map(|problem| coupling(&solve(&problem, 1e-3).unwrap())[0]);
    assert!((a / b - 1.0).abs() < 1e-9, "{a} {b}");
}

/// Repeated points, collinear points, slits, a hair of a film, a cusp.
#[test]
fn awkward_outlines_are_solved() {
    let p = |x: f64, z: f64| Point::new(x, z);
    let repeated = Region::from_rings([vec![
        p(20.0, 20.0),
        p(40.0, 20.0),
        p(40.0, 20.0),
        p(60.0, 20.0),
        p(60.0, 60.0),
        p(20.0, 60.0),
        p(20.0, 40.0),
    ]]);
    let cusp: Vec<Point> = (0..=40)
        .map(|k| k as f64 / 40.0)
        .map(|t| p(50.0 + 20.0 * (1.0 - t) * (1.0 - t), 30.0 + 50.0 * t))
        .collect();
    let mirrored = cusp.iter().rev().map(|q| p(100.0 - q.x, q.z));
    let cusp = Region::from_rings([cusp.iter().copied().chain(mirrored).collect()]);
    let needle = Region::from_rings([vec![p(10.0, 50.0), p(90.0, 49.99), p(90.0, 50.01)]]);
    let film = Region::rectangle([0.0, 100.0], [10.0, 10.1]);
    for (name, region) in
        [("repeated", repeated), ("cusp", cusp), ("needle", needle), ("film", film)]
    {
        for role in [Role::Dielectric(7.0), Role::Floating(0)] {
            let solved = solve(&between_plates(vec![body(region.clone(), role)]), 5e-3);
            let solved = solved.unwrap_or_else(|error| panic!("{name}: {error}"));
            assert!(coupling(&solved)[0] > 1.0, "{name}");
            assert!(solved.triangles < 30_000, "{name}: {} triangles", solved.triangles);
        }
    }
}

#[test]
fn a_conductor_under_an_open_edge_is_no_wall() {
    let mut problem = between_plates(vec![]);
    problem.top = Edge::Open;
    problem.bottom = Edge::Open;
    assert!((coupling(&solve(&problem, 1e-3).unwrap())[0] - 1.0).abs() < 1e-9);
}

#[test]
fn variants_share_a_mesh_and_agree_with_single_runs() {
    let problem = Array { void: 0.4, ..ARRAY }.problem();
    let own: Vec<Role> = problem.bodies.iter().map(|body| body.role).collect();
    let vacuum = |role: &Role| match role {
        Role::Dielectric(_) => Role::Dielectric(1.0),
        other => *other,
    };
    let variants = [own.clone(), own.iter().map(vacuum).collect()];
    let solved = solve_variants(&problem, &variants, 5e-3).unwrap();
    assert_eq!(solved[0].triangles, solved[1].triangles);
    let alone = solve(&problem, 5e-3).unwrap();
    let [value, low, high] = entry(&alone, 3, 3);
    assert!((entry(&solved[0], 3, 3)[0] / value - 1.0).abs() < 1e-3 && low < high);
    assert!(solved[1].high[3][3] < solved[0].low[3][3]);
    assert_eq!(solved, solve_variants(&problem, &variants, 5e-3).unwrap());
}

#[test]
fn what_cannot_be_solved_says_why() {
    let good = between_plates(vec![]);
    let with = |change: &dyn Fn(&mut Problem)| {
        let mut problem = good.clone();
        change(&mut problem);
        solve(&problem, 5e-3).unwrap_err()
    };
    assert!(matches!(with(&|p| p.x[1] = f64::NAN), FieldError::NonFinite(_)));
    assert_eq!(with(&|p| p.x[1] = 0.0), FieldError::EmptySection);
    assert_eq!(with(&|p| p.electrodes = 0), FieldError::NoElectrode);
    assert_eq!(with(&|p| p.electrodes = 3), FieldError::ElectrodeAbsent(2));
    assert_eq!(with(&|p| p.electrodes = 1), FieldError::ElectrodeUnknown(1));
    let touching = slab([0.0, 10.0], [0.0, 100.0], Role::Floating(0));
    assert!(matches!(
        with(&|p| p.bodies.push(touching.clone())),
        FieldError::ElectrodesTouch { first: 0, second: 1, .. }
    ));
    let bad = slab([0.0, 10.0], [0.0, 100.0], Role::Dielectric(-1.0));
    assert_eq!(with(&|p| p.bodies.push(bad.clone())), FieldError::Permittivity(-1.0));
    assert_eq!(solve(&good, 0.0).unwrap_err(), FieldError::Accuracy(0.0));
    assert_eq!(
        solve_variants(&good, &[vec![Role::Electrode(1), Role::Electrode(0)]], 0.01).unwrap_err(),
        FieldError::VariantDiffers
    );
}
