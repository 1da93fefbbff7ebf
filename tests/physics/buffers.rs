//! Conformal films and isotropic etches against polygon buffers: of shapely, on random shapes
//! (values of `tests/reference/values_buffers.py`), and of clipper2.

use clipper2_rust::{EndType, JoinType, PathD, PointD, inflate_paths_d};
use gapwright::front::{Character, Resolution, Scene, Solid, erode, grow};
use gapwright::geom::{Point, Region};
use serde::Deserialize;
use std::path::{Path, PathBuf};

const CONFORMAL: Character = Character {
    conformal: 1.0,
    directional: 0.0,
    exponent: None,
    tilt_rad: 0.0,
    neutral: 0.0,
    sticking: 1.0,
};
const RESOLUTION: Resolution = Resolution { facet_nm: 0.8, closure_width_nm: 0.1 };
/// Farthest that an outline may be from the buffer's, in nm.
const WITHIN_NM: f64 = 0.1;

#[derive(Deserialize, PartialEq, Debug)]
struct Reference {
    walls: [f64; 2],
    shapes: Vec<Shape>,
}

#[derive(Deserialize, PartialEq, Debug)]
struct Shape {
    solid: Rings,
    thickness_nm: f64,
    covered: Rings,
    standing: Rings,
}

type Rings = Vec<Vec<[f64; 2]>>;

fn region(rings: &Rings) -> Region {
    let ring = |ring: &Vec<[f64; 2]>| ring.iter().map(|&[x, z]| Point::new(x, z)).collect();
    Region::from_rings_even_odd(rings.iter().map(ring))
}

fn read(folder: &Path) -> Reference {
    let path = folder.join("buffers.json");
    let text = std::fs::read_to_string(&path)
        .unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    serde_json::from_str(&text).unwrap()
}

/// The values kept beside the tests, and those that were made anew, if there are such.
fn references() -> (Reference, Option<Reference>) {
    let kept = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/values");
    let made = std::env::var_os("GAPWRIGHT_REFERENCE").map(PathBuf::from);
    (read(&kept), made.map(|folder| read(&folder)))
}

fn scene(walls: [f64; 2], solid: Region) -> Scene {
    Scene { walls, solids: vec![Solid { region: solid, rate: 1.0 }] }
}

/// Farthest that one of two regions reaches beyond the other, up to `WITHIN_NM`.
fn assert_near(case: &str, ours: &Region, theirs: &Region) {
    for (what, a, b) in [("beyond", ours, theirs), ("short of", theirs, ours)] {
        let out = a.difference(&b.grown(WITHIN_NM, 0.2));
        assert!(out.is_empty(), "{case}: {what} the buffer at {:?}", out.bounds());
    }
}

#[test]
fn kept_values_are_those_made_anew() {
    let (kept, made) = references();
    assert!(made.is_none_or(|made| made == kept), "run tests/reference/values_buffers.py");
}

#[test]
fn conformal_films_are_buffers_of_the_solid() {
    let (Reference { walls, shapes }, _) = references();
    assert_eq!(shapes.len(), 20);
    for (i, shape) in shapes.iter().enumerate() {
        let solid = region(&shape.solid);
        let scene = scene(walls, solid.clone());
        let growth = grow(&scene, &CONFORMAL, shape.thickness_nm, &RESOLUTION).unwrap();
        assert_near(&format!("film {i}"), &solid.union(&growth.film), &region(&shape.covered));
    }
}

#[test]
fn isotropic_etches_are_buffers_of_the_ambient() {
    let (Reference { walls, shapes }, _) = references();
    for (i, shape) in shapes.iter().enumerate() {
        let solid = region(&shape.solid);
        let scene = scene(walls, solid.clone());
        let removed = erode(&scene, &CONFORMAL, shape.thickness_nm, &RESOLUTION).unwrap().removed;
        let standing = solid.difference(&removed[0]);
        assert_near(&format!("etch {i}"), &standing, &region(&shape.standing));
    }
}

/// The same in many small steps, as they are taken among solids of several rates.
#[test]
fn steps_add_up_to_the_buffer() {
    let (Reference { walls, shapes }, _) = references();
    for (i, shape) in shapes.iter().enumerate().step_by(5) {
        let solid = region(&shape.solid);
        let mut scene = scene(walls, solid.clone());
        // A solid of another rate, out of reach, makes the removal go step by step.
        let out_of_reach = Region::rectangle(walls, [-60.0, -40.0]);
        scene.solids.push(Solid { region: out_of_reach, rate: 0.5 });
        let removed = erode(&scene, &CONFORMAL, shape.thickness_nm, &RESOLUTION).unwrap().removed;
        let standing = solid.difference(&removed[0]);
        assert_near(&format!("steps {i}"), &standing, &region(&shape.standing));
    }
}

#[test]
fn a_trench_with_a_lip_etches_as_clipper_offsets_it() {
    let ambient = [
        (-40.0, 90.0),
        (-40.0, 30.0),
        (18.0, 30.0),
        (22.0, 24.0),
        (12.0, 10.0),
        (14.0, -8.0),
        (44.0, -12.0),
        (47.0, 9.0),
        (40.0, 22.0),
        (42.0, 30.0),
        (100.0, 30.0),
        (100.0, 90.0),
    ];
    let walls = [0.0, 60.0];
    let cell = Region::rectangle(walls, [-50.0, 31.0]);
    let path: PathD = ambient.iter().map(|&(x, y)| PointD { x, y }).collect();
    for depth in [2.0, 5.0, 11.0] {
        let grown = inflate_paths_d(
            &vec![path.clone()],
            depth,
            JoinType::Round,
            EndType::Polygon,
            2.0,
            6,
            1e-3,
        );
        let grown = Region::from_rings(
            grown.iter().map(|ring| ring.iter().map(|p| Point::new(p.x, p.y)).collect()),
        );
        let open = Region::from_rings([ambient.iter().map(|&(x, z)| Point::new(x, z)).collect()]);
        let solid = cell.difference(&open);
        let removed = erode(&scene(walls, solid.clone()), &CONFORMAL, depth, &RESOLUTION);
        let standing = solid.difference(&removed.unwrap().removed[0]);
        assert_near(&format!("{depth} nm"), &standing, &cell.difference(&grown));
    }
}
