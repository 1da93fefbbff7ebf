//! Growth against exact plane geometry.

use crate::scenes::{Array, mixture, resolution};
use gapwright::front::{Character, Growth, Resolution, Scene, Solid, grow};
use gapwright::geom::{Point, Region};

const CONFORMAL: Character = Character {
    conformal: 1.0,
    directional: 0.0,
    exponent: None,
    tilt_rad: 0.0,
    neutral: 0.0,
    sticking: 1.0,
};

fn beam(tilt_deg: f64) -> Character {
    Character {
        conformal: 0.0,
        directional: 1.0,
        exponent: None,
        tilt_rad: tilt_deg.to_radians(),
        ..CONFORMAL
    }
}

fn fine(facet_nm: f64) -> Resolution {
    Resolution { facet_nm, closure_width_nm: 0.01 }
}

fn solid(rings: &[&[(f64, f64)]]) -> Solid {
    let ring = |points: &&[(f64, f64)]| points.iter().map(|&(x, z)| Point::new(x, z)).collect();
    Solid { region: Region::from_rings(rings.iter().map(ring)), rate: 1.0 }
}

fn block(x: [f64; 2], z: [f64; 2], rate: f64) -> Solid {
    Solid { region: Region::rectangle(x, z), rate }
}

/// Area between two regions, in nm².
fn apart(a: &Region, b: &Region) -> f64 {
    a.difference(b).area() + b.difference(a).area()
}

/// What a polygon buffer of the solids adds within the walls, their images counted.
fn buffer(scene: &Scene, thickness: f64) -> Region {
    let solids = Region::union_all(scene.solids.iter().map(|s| &s.region));
    let [left, right] = scene.walls;
    let images = [solids.mirrored(left), solids.mirrored(right)];
    let whole = Region::union_all(images.iter().chain([&solids]));
    let lowest = solids.bounds().unwrap().min.z;
    let cell = Region::rectangle(scene.walls, [lowest, 1e4]);
    whole.grown(thickness, 0.005).intersection(&cell).difference(&solids)
}

/// Two fronts that approach at rate 1 each meet after half the space, everywhere at once.
#[test]
fn vertical_walls_close_at_half_the_space() {
    let array = Array { s: 32.0, w: 32.0, h: 64.0, taper_deg: 0.0 };
    for facet in [2.0, 0.5] {
        let growth = grow(&array.half(), &CONFORMAL, 20.0, &fine(facet)).unwrap();
        let [closure] = &growth.closures[..] else { panic!("{:?}", growth.closures) };
        assert!((closure.thickness_nm - 15.995).abs() < 1e-3, "{closure:?}");
        assert!(closure.void.is_empty() && growth.throats.is_empty(), "{growth:?}");
        let exact = buffer(&array.half(), 20.0);
        assert!(apart(&growth.film, &exact) < 0.5, "{}", apart(&growth.film, &exact));
    }
}

/// Upright walls see nothing of an upright beam.
#[test]
fn a_vertical_beam_never_closes() {
    let array = Array { s: 32.0, w: 32.0, h: 64.0, taper_deg: 0.0 };
    let growth = grow(&array.half(), &beam(0.0), 100.0, &resolution(0.8)).unwrap();
    assert!(growth.closures.is_empty());
    let exact = Region::rectangle([0.0, 16.0], [64.0, 164.0])
        .union(&Region::rectangle([16.0, 32.0], [0.0, 100.0]));
    assert!(apart(&growth.film, &exact) < 1e-3, "{}", apart(&growth.film, &exact));
}

/// Conformal film in a re-entrant trench, top 40, bottom 60, depth 100: closes at T = 20 at the
/// lip; void 624.17 of 5000; bottom half-width 7.900 (plane geometry).
#[test]
fn a_reentrant_trench_keeps_its_void() {
    let array =
        Array { s: 40.0, w: 80.0, h: 100.0, taper_deg: -(10.0_f64 / 100.0).atan().to_degrees() };
    let growth = grow(&array.half(), &CONFORMAL, 30.0, &fine(1.0)).unwrap();
    let [closure] = &growth.closures[..] else { panic!("{:?}", growth.closures) };
    assert!((closure.thickness_nm - 19.995).abs() < 2e-3, "{}", closure.thickness_nm);
    assert!((closure.throat.z - 100.0).abs() < 0.2, "{:?}", closure.throat);
    let void = closure.void.area() * 2.0;
    assert!((void - 624.17).abs() < 0.003 * 624.17, "{void}");
    let bounds = closure.void.bounds().unwrap();
    assert!((bounds.max.x - bounds.min.x - 7.9).abs() < 0.02, "{bounds:?}");
}

/// Isolated right-angle corner, S = 1, isotropic gas: the film around it is a circle of radius
/// T/2 centred T/2 above the corner.
#[test]
fn the_film_around_a_corner_is_a_circle() {
    let scene = Scene {
        walls: [-40.0, 600.0],
        solids: vec![
            block([-40.0, 600.0], [-420.0, -400.0], 1.0),
            block([-40.0, 0.0], [-400.0, 0.0], 1.0),
        ],
    };
    let character = mixture(0.0, 0.0, 0.0, 1.0);
    let growth = grow(&scene, &character, 20.0, &resolution(2.0)).unwrap();
    let centre = Point::new(0.0, 10.0);
    let corner = growth.film.rings().flatten().filter(|p| p.x > 0.5 && p.z > 10.0 && p.x < 20.0);
    let mut count = 0;
    for p in corner {
        count += 1;
        assert!((p.distance(centre) - 10.0).abs() < 0.1, "{p:?} {}", p.distance(centre));
    }
    assert!(count > 5);
}

/// Any conformal film equals a polygon buffer, overhangs and steps included.
#[test]
fn a_conformal_film_is_a_polygon_buffer() {
    let scene = Scene {
        walls: [0.0, 60.0],
        solids: vec![solid(&[&[
            (0.0, -10.0),
            (60.0, -10.0),
            (60.0, 4.0),
            (46.0, 0.0),
            (44.0, 22.0),
            (50.0, 25.0),
            (40.0, 36.0),
            (33.0, 28.0),
            (36.0, 2.0),
            (18.0, 0.0),
            (18.0, 6.0),
            (11.0, 6.0),
            (10.0, 30.0),
            (0.0, 30.0),
        ]])],
    };
    for thickness in [1.0, 2.0, 5.0] {
        let growth = grow(&scene, &CONFORMAL, thickness, &resolution(0.5)).unwrap();
        let exact = buffer(&scene, thickness);
        let error = apart(&growth.film, &exact);
        assert!(error < 2e-3 * exact.area(), "{thickness}: {error} of {}", exact.area());
    }
}

/// Sides that draw together toward the bottom fill from there: no void, no seam.
#[test]
fn a_tapered_space_fills_from_the_bottom() {
    let array = Array { s: 32.0, w: 32.0, h: 64.0, taper_deg: 8.0 };
    let growth = grow(&array.half(), &CONFORMAL, 30.0, &resolution(0.8)).unwrap();
    assert!(growth.closures.is_empty(), "{:?}", growth.closures);
    let exact = buffer(&array.half(), 30.0);
    assert!(apart(&growth.film, &exact) < 1e-3 * exact.area());
}

/// A whole cell is two half cells, a row of equal spaces as many.
#[test]
fn cells_and_rows_repeat_the_half_cell() {
    let array = Array { s: 32.0, w: 32.0, h: 64.0, taper_deg: 0.0 };
    let character = mixture(0.1, 0.2, 3.0, 0.3);
    let half = grow(&array.half(), &character, 50.0, &resolution(1.6)).unwrap();
    let cell = grow(&array.cell(), &character, 50.0, &resolution(1.6)).unwrap();
    let row = grow(&array.row(2), &character, 50.0, &resolution(1.6)).unwrap();
    let first = |growth: &Growth| growth.closures[0].thickness_nm;
    assert_eq!([half.closures.len(), cell.closures.len(), row.closures.len()], [1, 2, 3]);
    for growth in [&cell, &row] {
        for closure in &growth.closures {
            assert!((closure.thickness_nm - first(&half)).abs() < 0.01 * first(&half));
        }
    }
    let void = half.closures[0].void.area();
    let voids = |growth: &Growth| growth.closures.iter().map(|c| c.void.area()).sum::<f64>();
    assert!((voids(&cell) - 2.0 * void).abs() < 0.02 * void, "{} {void}", voids(&cell));
    assert!((voids(&row) - 4.0 * void).abs() < 0.06 * void, "{} {void}", voids(&row));
    let mirrored = cell.film.mirrored(0.0);
    assert!(apart(&cell.film, &mirrored) < 1e-3 * cell.film.area());
}

/// A chamber above a chamber: the lower neck closes first, then the upper one (T = half of each).
#[test]
fn one_space_may_keep_two_voids() {
    let scene = Scene {
        walls: [0.0, 40.0],
        solids: vec![solid(&[&[
            (0.0, -10.0),
            (40.0, -10.0),
            (40.0, 0.0),
            (10.0, 0.0),
            (10.0, 40.0),
            (34.0, 40.0),
            (34.0, 44.0),
            (10.0, 44.0),
            (10.0, 90.0),
            (30.0, 90.0),
            (30.0, 94.0),
            (0.0, 94.0),
        ]])],
    };
    let growth = grow(&scene, &CONFORMAL, 14.0, &fine(0.5)).unwrap();
    let times: Vec<f64> = growth.closures.iter().map(|c| c.thickness_nm).collect();
    assert_eq!(times.len(), 2, "{times:?}");
    assert!((times[0] - 5.995).abs() < 1e-3 && (times[1] - 9.995).abs() < 1e-3, "{times:?}");
    assert!(growth.closures.iter().all(|c| c.void.area() > 100.0));
}

/// A slot in a cap held from the wall closes between two chains of the surface.
#[test]
fn a_cap_with_a_slot_closes_over_its_cavity() {
    let scene = Scene {
        walls: [0.0, 100.0],
        solids: vec![
            block([0.0, 100.0], [-10.0, 0.0], 1.0),
            block([0.0, 45.0], [0.0, 60.0], 1.0),
            block([55.0, 100.0], [50.0, 60.0], 1.0),
        ],
    };
    let growth = grow(&scene, &CONFORMAL, 8.0, &fine(0.5)).unwrap();
    let [closure] = &growth.closures[..] else { panic!("{:?}", growth.closures) };
    assert!((closure.thickness_nm - 4.995).abs() < 2e-3, "{}", closure.thickness_nm);
    // The cavity of 55 × 50 less 5 all around, 10 more of it under the slot's side wall.
    assert!((closure.void.bounds().unwrap().min.z - 5.0).abs() < 0.01);
    assert!((closure.void.bounds().unwrap().max.x - 100.0).abs() < 1e-6);
}

/// A film that grows on one of two materials ends in a quarter circle over the other.
#[test]
fn selective_growth_ends_in_a_quarter_circle() {
    let scene = Scene {
        walls: [0.0, 60.0],
        solids: vec![block([0.0, 30.0], [-10.0, 0.0], 1.0), block([30.0, 60.0], [-10.0, 0.0], 0.0)],
    };
    let growth = grow(&scene, &CONFORMAL, 10.0, &resolution(0.5)).unwrap();
    let exact = 300.0 + 25.0 * std::f64::consts::PI;
    assert!((growth.film.area() - exact).abs() < 1e-3 * exact, "{} {exact}", growth.film.area());
}

/// Liners of 2 nm and 1 nm are exact.
#[test]
fn thin_liners_are_exact() {
    let array = Array { s: 32.0, w: 32.0, h: 96.0, taper_deg: -2.0 };
    for thickness in [1.0, 2.0] {
        let growth = grow(&array.half(), &CONFORMAL, thickness, &resolution(0.8)).unwrap();
        let exact = buffer(&array.half(), thickness);
        assert!(apart(&growth.film, &exact) < 1e-4 * exact.area(), "{thickness}");
    }
}

/// Nothing reaches a void that the scene already encloses.
#[test]
fn enclosed_voids_do_not_grow() {
    let body = Region::rectangle([0.0, 40.0], [-20.0, 0.0])
        .difference(&Region::rectangle([10.0, 20.0], [-15.0, -5.0]));
    let scene = Scene { walls: [0.0, 40.0], solids: vec![Solid { region: body, rate: 1.0 }] };
    let growth = grow(&scene, &CONFORMAL, 5.0, &resolution(1.0)).unwrap();
    assert!((growth.film.area() - 200.0).abs() < 1e-6, "{}", growth.film.area());
}

/// Above a closed throat the fronts go on meeting in a notch: the seam runs up from the throat, in the middle
/// of the space, and ends below the film's surface where the notch opens.
#[test]
fn a_seam_runs_up_from_the_throat() {
    let array = Array { s: 32.0, w: 32.0, h: 96.0, taper_deg: 0.0 };
    let growth = grow(&array.half(), &mixture(0.0, 0.0, 1.0, 0.3), 60.0, &resolution(1.6)).unwrap();
    let [closure] = &growth.closures[..] else { panic!("{:?}", growth.closures) };
    let (first, last) = (closure.seam[0], closure.seam[closure.seam.len() - 1]);
    assert!(last.z > first.z + 5.0 && last.z < 96.0 + 60.0, "{:?}", closure.seam);
    assert!(closure.seam.iter().all(|p| (p.x - 32.0).abs() < 0.1), "{:?}", closure.seam);
}
