//! Removal against closed forms.

use super::*;
use crate::front::Solid;
use crate::geom::Point;

const CONFORMAL: Character = Character {
    conformal: 1.0,
    directional: 0.0,
    exponent: None,
    tilt_rad: 0.0,
    neutral: 0.0,
    sticking: 1.0,
};
const BEAM: Character = Character { conformal: 0.0, directional: 1.0, ..CONFORMAL };
const FINE: Resolution = Resolution { facet_nm: 0.5, closure_width_nm: 0.5 };

fn block(x: [f64; 2], z: [f64; 2], rate: f64) -> Solid {
    Solid { region: Region::rectangle(x, z), rate }
}

fn scene(width: f64, solids: Vec<Solid>) -> Scene {
    Scene { walls: [0.0, width], solids }
}

fn run(scene: &Scene, character: &Character, depth: f64) -> Vec<Region> {
    let removed = erode(scene, character, depth, &FINE).unwrap().removed;
    for (solid, part) in scene.solids.iter().zip(&removed) {
        assert!(part.difference(&solid.region).is_empty(), "removed outside its solid");
    }
    removed
}

/// Two lines of metal that nothing attacks, a space of 32 nm between them filled with oxide.
fn recess() -> Scene {
    scene(
        64.0,
        vec![
            block([0.0, 16.0], [0.0, 96.0], 0.0),
            block([16.0, 48.0], [0.0, 96.0], 1.0),
            block([48.0, 64.0], [0.0, 96.0], 0.0),
        ],
    )
}

fn assert_near(value: f64, wanted: f64, within: f64) {
    assert!((value - wanted).abs() <= within, "{value} is not {wanted} within {within}");
}

fn bounds(region: &Region) -> [f64; 4] {
    let b = region.bounds().unwrap();
    [b.min.x, b.max.x, b.min.z, b.max.z]
}

#[test]
fn an_open_flat_loses_the_depth() {
    let flat = scene(20.0, vec![block([0.0, 20.0], [0.0, 30.0], 1.0)]);
    for character in [CONFORMAL, BEAM] {
        assert_near(run(&flat, &character, 7.0)[0].area(), 140.0, 1e-3);
    }
}

#[test]
fn nothing_is_removed_by_no_depth_or_no_rate() {
    let flat = scene(20.0, vec![block([0.0, 20.0], [0.0, 30.0], 0.0)]);
    assert!(run(&flat, &CONFORMAL, 7.0)[0].is_empty());
    assert!(run(&recess(), &BEAM, 0.0).iter().all(Region::is_empty));
}

#[test]
fn a_deep_recess_by_a_beam_keeps_its_walls_upright_and_its_floor_flat() {
    let removed = run(&recess(), &BEAM, 90.0);
    assert!(removed[0].is_empty() && removed[2].is_empty());
    assert_near(removed[1].area(), 32.0 * 90.0, 1e-2);
    let [left, right, floor, top] = bounds(&removed[1]);
    for (value, wanted) in [(left, 16.0), (right, 48.0), (floor, 6.0), (top, 96.0)] {
        assert_near(value, wanted, 1e-4);
    }
}

#[test]
fn a_beam_keeps_the_walls_it_cuts_under_a_mask_upright() {
    let masked = scene(
        40.0,
        vec![block([0.0, 40.0], [0.0, 60.0], 1.0), block([0.0, 20.0], [60.0, 65.0], 0.0)],
    );
    let [left, right, floor, _] = bounds(&run(&masked, &BEAM, 30.0)[0]);
    assert_near(left, 20.0, 1e-4);
    assert_near(right, 40.0, 1e-9);
    assert_near(floor, 30.0, 1e-4);
}

/// A disc about the mask's edge: the undercut is the depth (closed form).
#[test]
fn an_isotropic_etch_undercuts_a_mask_by_its_depth() {
    let masked = scene(
        60.0,
        vec![block([0.0, 60.0], [0.0, 60.0], 1.0), block([0.0, 30.0], [60.0, 70.0], 0.0)],
    );
    let removed = run(&masked, &CONFORMAL, 12.0);
    let [left, _, floor, top] = bounds(&removed[0]);
    assert_near(left, 18.0, 0.02);
    assert_near(floor, 48.0, 1e-6);
    assert_near(top, 60.0, 1e-9);
    let exact = 30.0 * 12.0 + std::f64::consts::PI * 144.0 / 4.0;
    assert_near(removed[0].area(), exact, 0.002 * exact);
}

#[test]
fn an_undercut_meets_under_a_narrow_mask() {
    let masked = scene(
        40.0,
        vec![block([0.0, 40.0], [0.0, 60.0], 1.0), block([15.0, 25.0], [60.0, 65.0], 0.0)],
    );
    let removed = run(&masked, &CONFORMAL, 10.0);
    // Between the two discs a ridge is left: its top is where they meet, below the mask's middle.
    let ridge = 60.0 - (100.0_f64 - 25.0).sqrt();
    assert!(!removed[0].contains(Point::new(20.0, ridge - 0.05)));
    assert!(removed[0].contains(Point::new(20.0, ridge + 0.1)));
}

#[test]
fn depth_goes_on_at_the_rate_of_the_layer_below() {
    let layers = scene(
        20.0,
        vec![block([0.0, 20.0], [0.0, 50.0], 0.1), block([0.0, 20.0], [50.0, 56.3], 1.0)],
    );
    for character in [CONFORMAL, BEAM] {
        let removed = run(&layers, &character, 10.0);
        assert_near(removed[1].area(), 20.0 * 6.3, 1e-3);
        assert_near(removed[0].area(), 20.0 * 0.37, 20.0 * 1e-3);
    }
}

#[test]
fn many_layers_thinner_than_a_step_take_their_time_each() {
    let rates = [1.0, 0.3, 2.0, 0.05, 1.0];
    let mut solids = vec![block([0.0, 8.0], [0.0, 20.0], 1.0)];
    let mut time = 0.0;
    for (i, rate) in rates.into_iter().enumerate() {
        let z = 20.0 + 0.2 * i as f64;
        solids.push(block([0.0, 8.0], [z, z + 0.2], rate));
        time += 0.2 / rate;
    }
    let removed = run(&scene(8.0, solids), &CONFORMAL, time + 1.0);
    assert_near(removed[0].area(), 8.0, 0.02);
}

#[test]
fn a_stop_layer_is_reached_where_it_is_and_stops() {
    let layers = scene(
        20.0,
        vec![
            block([0.0, 20.0], [0.0, 40.0], 1.0),
            block([0.0, 20.0], [40.0, 45.0], 0.0),
            block([0.0, 20.0], [45.0, 62.7], 0.5),
        ],
    );
    let reached = depth_to_reach(&layers, &BEAM, &[1], 100.0, &FINE).unwrap().unwrap();
    assert_near(reached, 35.4, 1e-3);
    assert_eq!(depth_to_reach(&layers, &BEAM, &[1], 35.0, &FINE).unwrap(), None);
    assert_eq!(depth_to_reach(&layers, &BEAM, &[2], 35.0, &FINE).unwrap(), Some(0.0));
    let removed = run(&layers, &CONFORMAL, 60.0);
    assert!(removed[0].is_empty() && removed[1].is_empty());
    assert_near(removed[2].area(), 20.0 * 17.7, 1e-3);
}

/// A fast layer between slow ones is emptied sideways, its flanks going at their own rate from
/// the moment they are bare.
#[test]
fn flanks_are_etched_from_when_they_are_bare() {
    let solids = vec![
        block([0.0, 40.0], [0.0, 30.0], 0.1),
        block([20.0, 40.0], [30.0, 60.0], 1.0),
        block([0.0, 20.0], [30.0, 60.0], 0.1),
    ];
    let removed = run(&scene(40.0, solids), &CONFORMAL, 20.0);
    // Half way down the flank was bare after 10 nm.
    let at = |x: f64, z: f64| removed[2].contains(Point::new(x, z));
    assert!(at(20.0 - 0.95, 50.0) && !at(20.0 - 1.05, 50.0));
}

#[test]
fn a_tilted_beam_reaches_as_deep_as_its_slope_allows() {
    let tilt = 30.0_f64.to_radians();
    let tilted = Character { tilt_rad: tilt, ..BEAM };
    let removed = run(&recess(), &tilted, 200.0);
    let [.., floor, _] = bounds(&removed[1]);
    assert_near(floor, 96.0 - 32.0 / tilt.tan(), 0.5);
}

#[test]
fn a_void_is_left_alone_until_it_is_opened() {
    let full = Region::rectangle([0.0, 40.0], [0.0, 60.0]);
    let void = Region::rectangle([10.0, 30.0], [20.0, 40.0]);
    let hollow = scene(40.0, vec![Solid { region: full.difference(&void), rate: 1.0 }]);
    assert_near(run(&hollow, &CONFORMAL, 19.0)[0].area(), 40.0 * 19.0, 1e-3);
    // Opened at 20 nm: after 25 nm the void is 5 nm larger, its corners round.
    let removed = run(&hollow, &CONFORMAL, 25.0);
    let [.., floor, _] = bounds(&removed[0]);
    assert_near(floor, 15.0, 1e-3);
    assert!(removed[0].contains(Point::new(5.1, 25.0)));
    assert!(!removed[0].contains(Point::new(4.9, 25.0)));
    assert!(!removed[0].contains(Point::new(6.0, 16.0)));
}

#[test]
fn what_hides_under_a_mask_is_not_seen() {
    let covered = scene(
        20.0,
        vec![block([0.0, 20.0], [0.0, 40.0], 1.0), block([0.0, 20.0], [40.0, 45.0], 0.0)],
    );
    assert!(run(&covered, &CONFORMAL, 30.0).iter().all(Region::is_empty));
}

#[test]
fn a_mirrored_scene_loses_the_mirror_image() {
    let solids = vec![
        block([0.0, 40.0], [0.0, 40.0], 1.0),
        block([0.0, 13.0], [40.0, 47.0], 0.2),
        block([30.0, 40.0], [40.0, 50.0], 0.0),
    ];
    let there = scene(40.0, solids);
    let mirrored = |s: &Solid| Solid { region: s.region.mirrored(20.0), rate: s.rate };
    let back = scene(40.0, there.solids.iter().map(mirrored).collect());
    let character = Character { conformal: 0.5, directional: 0.5, ..CONFORMAL };
    let [one, two] = [&there, &back].map(|s| run(s, &character, 8.0));
    for (a, b) in one.iter().zip(&two) {
        assert_near(a.area(), b.area(), 0.1);
    }
}

#[test]
fn a_front_converts_as_it_would_remove() {
    let fill = penetrate(&recess(), &BEAM, 1, 5.0, &FINE).unwrap();
    assert_near(fill.area(), 160.0, 1e-2);
}

/// The floor of a trench sees the sky between its edges: in its middle, at depth d under a space
/// s, an isotropic gas that sticks at once brings sin(atan(s / 2d)) (any radiation handbook).
#[test]
fn a_trench_deepens_as_its_floor_sees_the_sky() {
    let gas = Character { conformal: 0.0, neutral: 1.0, ..CONFORMAL };
    let at = |depth: f64| {
        let removed = run(&recess(), &gas, depth);
        96.0 - bounds(&removed[1])[2]
    };
    // From dz/dt = 1 / sqrt(1 + (2z/s)²), for a floor that stays nearly flat.
    let z = at(30.0);
    let u = 2.0 * z / 32.0;
    let time = 16.0 * (u * u.hypot(1.0) + u.asinh()) / 2.0;
    assert_near(time, 30.0, 0.6);
}

#[test]
fn finer_facets_converge() {
    let mixed = Character {
        conformal: 0.1,
        directional: 0.6,
        exponent: Some(20.0),
        neutral: 0.3,
        sticking: 0.3,
        ..CONFORMAL
    };
    let area = |facet_nm: f64| {
        let resolution = Resolution { facet_nm, ..FINE };
        erode(&recess(), &mixed, 25.0, &resolution).unwrap().removed[1].area()
    };
    let [coarse, middle, fine] = [4.0, 2.0, 1.0].map(area);
    assert_near(middle, fine, 0.004 * fine);
    assert_near(coarse, fine, 0.01 * fine);
}
