//! Sections as GeoJSON: there and back, and what is said of bad ones.

use gapwright::field::Edge;
use gapwright::geom::Region;
use gapwright::library::Library;
use gapwright::report::geojson::{OutlinedRegion, OutlinedSection, read, write};

use crate::sections::ellipse;

fn section() -> OutlinedSection {
    let region = |region| OutlinedRegion { region, ..OutlinedRegion::default() };
    let square = |x: f64, z: f64| Region::rectangle([x, x + 10.0], [z, z + 10.0]);
    OutlinedSection {
        x: [0.0, 100.0],
        z: [-20.0, 80.5],
        top: Edge::Open,
        bottom: Edge::Mirror,
        regions: vec![
            OutlinedRegion { material: Some("SiO2".into()), ..region(square(0.0, 0.0)) },
            OutlinedRegion {
                permittivity: Some(2.7),
                ..region(ellipse([50.0, 30.0], [20.0, 10.0], 64).difference(&square(45.0, 25.0)))
            },
            OutlinedRegion {
                electrode: Some("line".into()),
                material: Some("Cu".into()),
                ..region(square(70.0, 0.0).union(&square(0.0, 60.0)))
            },
        ],
    }
}

#[test]
fn written_and_read_again_it_is_the_same() {
    let section = section();
    let text = write(&section);
    assert_eq!(read(&text).unwrap(), section);
    assert_eq!(write(&read(&text).unwrap()), text);
}

#[test]
fn materials_come_from_the_library() {
    let named = section().problem(&Library::built_in()).unwrap();
    assert_eq!(named.electrodes, ["line"]);
    let mut unknown = section();
    unknown.regions[0].material = Some("unobtainium".into());
    let errors = unknown.problem(&Library::built_in()).unwrap_err();
    assert_eq!(errors.len(), 1);
    let said = errors[0].to_string();
    assert!(said.contains("features[0]") && said.contains("unobtainium"), "{said}");
}

/// One feature with these coordinates and properties in a section of 100 × 100.
fn with(coordinates: &str, properties: &str) -> String {
    format!(
        r#"{{"type": "FeatureCollection", "section": {{"x": [0, 100], "y": [0, 100]}}, "features": [
        {{"type": "Feature", "properties": {properties},
          "geometry": {{"type": "Polygon", "coordinates": {coordinates}}}}}]}}"#
    )
}

const SQUARE: &str = "[[[0,0],[10,0],[10,10],[0,10],[0,0]]]";

#[test]
fn bad_sections_are_told_with_their_place() {
    let k = r#"{"permittivity": 2}"#;
    let cases = [
        (with("[[[0,0],[10,10],[10,0],[0,10],[0,0]]]", k), "coordinates: its outline crosses"),
        (with("[[[0,0],[10,0],[20,0],[0,0]]]", k), "coordinates: has no area"),
        (with("[[[0,0],[10,0],[10,10]]]", k), "coordinates[0]: a ring has at least four"),
        (with("[[[0,0],[10,0],[10,10],[0,10]]]", k), "coordinates[0]: a ring ends where"),
        (with("[[[0,0],[10,null],[10,10],[0,0]]]", k), "coordinates[0][1]: expected a number"),
        (with("[[[0,0],[NaN,0],[10,10],[0,0]]]", k), "line 3, column"),
        (with("[[[0,0],[1e999,0],[10,10],[0,0]]]", k), "line 3, column"),
        (with("[[[0,0],[1e99,0],[10,10],[0,0]]]", k), "coordinates[0][1]: "),
        (with(SQUARE, "{}"), "features[0].properties: give `material`"),
        (with(SQUARE, r#"{"permittivity": "two"}"#), "permittivity: expected a number"),
        (with(SQUARE, r#"{"permittivity": -1}"#), "permittivity: -1 is not positive"),
        (with(SQUARE, r#"{"electrode": 3}"#), "electrode: expected a name, found a number"),
        (with(SQUARE, k).replace("\"section\"", "\"extent\""), "section: missing"),
        (with(SQUARE, k).replace("[0, 100]}", "[100, 0]}"), "section.y: 100 is not below 0"),
        (with(SQUARE, k).replace("FeatureCollection", "Feature"), "type: expected"),
        (with(SQUARE, k).replace("\"Polygon\"", "\"Point\""), "geometry.type: expected"),
        ("[]".into(), "top level: expected an object, found an array"),
        (String::new(), "line 1, column 0: not JSON"),
    ];
    for (text, expected) in cases {
        let errors = read(&text).unwrap_err();
        let said: Vec<String> = errors.iter().map(ToString::to_string).collect();
        assert!(said.iter().any(|said| said.contains(expected)), "{expected}: {said:?}");
    }
}

#[test]
fn holes_repeated_points_and_touching_parts_are_fine() {
    let ring = "[[[0,0],[40,0],[40,0],[40,40],[0,40],[0,0]],[[0,0],[10,5],[5,10],[0,0]]]";
    let read = read(&with(ring, r#"{"electrode": "a"}"#)).unwrap();
    assert!((read.regions[0].region.area() - (1600.0 - 37.5)).abs() < 1e-6);
}
