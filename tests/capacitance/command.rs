//! The `field` command as a user runs it.

use assert_cmd::Command;
use serde_json::Value;

fn field(arguments: &[&str], input: &str) -> (i32, String, String) {
    let run = Command::cargo_bin("gapwright")
        .unwrap()
        .arg("field")
        .args(arguments)
        .arg("-")
        .write_stdin(input)
        .output()
        .unwrap();
    let text = |bytes| String::from_utf8(bytes).unwrap();
    (run.status.code().unwrap(), text(run.stdout), text(run.stderr))
}

/// Two plates 30 nm apart, half of the gap oxide; `gap` is where the upper plate begins.
fn plates(gap: f64) -> String {
    let feature = |low: f64, high: f64, properties: &str| {
        format!(
            r#"{{"type": "Feature", "properties": {properties}, "geometry": {{"type": "Polygon",
            "coordinates": [[[0,{low}],[10,{low}],[10,{high}],[0,{high}],[0,{low}]]]}}}}"#
        )
    };
    format!(
        r#"{{"type": "FeatureCollection", "section": {{"x": [0, 10], "y": [-10, 60]}},
        "features": [{}, {}, {}]}}"#,
        feature(-10.0, 0.0, r#"{"electrode": "below"}"#),
        feature(0.0, 15.0, r#"{"material": "SiO2-thermal"}"#),
        feature(gap, gap + 10.0, r#"{"electrode": "above", "material": "Cu"}"#)
    )
}

/// Series of 15 nm of k 3.9 and 15 nm of vacuum, 10 nm wide: ε0 · 10 / (15/3.9 + 15).
#[test]
fn answers_with_the_matrix_and_its_bounds() {
    let (status, out, err) = field(&[], &plates(30.0));
    assert_eq!((status, err.as_str()), (0, ""));
    let answer: Value = serde_json::from_str(&out).unwrap();
    assert_eq!(answer["schema"], 1);
    assert_eq!(answer["electrodes"], serde_json::json!(["below", "above"]));
    let exact = 8.854_187_812_8 * 10.0 / (15.0 / 3.9 + 15.0);
    let entry =
        |of: &str, i: usize, j: usize| answer["matrix_af_per_um"][of][i][j].as_f64().unwrap();
    assert!((entry("values", 0, 0) / exact - 1.0).abs() < 5e-4);
    assert!(entry("low", 0, 0) <= exact && exact <= entry("high", 0, 0));
    assert!(entry("low", 0, 1) <= -exact && -exact <= entry("high", 0, 1));
    assert_eq!(entry("values", 0, 1), entry("values", 1, 0));
}

#[test]
fn answers_as_a_table() {
    let (status, out, _) = field(&["--format", "text"], &plates(30.0));
    assert_eq!(status, 0);
    assert!(out.contains("below") && out.contains('±') && out.contains("aF/um"), "{out}");
}

#[test]
fn says_what_it_cannot_use() {
    let (status, out, err) = field(&[], &plates(0.0));
    assert_eq!((status, out.as_str()), (2, ""));
    assert!(err.contains("electrode `below` touches electrode `above`"), "{err}");
    let (status, _, err) = field(&[], &plates(30.0).replace("SiO2-thermal", "glass"));
    assert_eq!(status, 2);
    assert!(err.contains("features[1].properties.material: no material `glass`"), "{err}");
    let (status, _, err) = field(&[], &plates(100.0));
    assert_eq!(status, 2);
    assert!(err.contains("electrode `above` has no area"), "{err}");
}
