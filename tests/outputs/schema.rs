//! Our own JSON against its schema: the one in docs is the code's, and real output is valid under
//! it (jsonschema, an independent validator), with nothing that the schema does not know.

use std::fs;
use std::path::Path;

use gapwright::report::{Report, schema};
use gapwright::study::compare::{self, Comparison, Judged};
use serde_json::{Value, json};

use super::small::{Small, small, thicker};

fn in_docs(name: &str) -> String {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs").join(name);
    fs::read_to_string(path).unwrap()
}

/// The schema with every object closed: what it does not name is then an error.
fn closed(mut schema: Value) -> Value {
    fn close(value: &mut Value) {
        match value {
            Value::Object(map) => {
                map.values_mut().for_each(close);
                if map.contains_key("properties") {
                    map.insert("additionalProperties".to_owned(), json!(false));
                }
            }
            Value::Array(items) => items.iter_mut().for_each(close),
            _ => {}
        }
    }
    close(&mut schema);
    schema
}

fn assert_valid(schema: &str, output: &str) {
    let schema: Value = serde_json::from_str(schema).unwrap();
    let output: Value = serde_json::from_str(output).unwrap();
    for schema in [schema.clone(), closed(schema)] {
        let validator = jsonschema::validator_for(&schema).unwrap();
        let errors: Vec<_> = validator
            .iter_errors(&output)
            .map(|error| format!("{} at {}", error, error.instance_path()))
            .collect();
        assert!(errors.is_empty(), "{errors:#?}");
    }
}

#[test]
fn the_schemas_in_docs_are_those_of_the_code() {
    let hint = "write it anew: gapwright check --schema --output docs/check.schema.json";
    assert_eq!(in_docs("check.schema.json"), Report::json_schema(), "{hint}");
    let hint = "write it anew: gapwright compare --schema --output docs/compare.schema.json";
    assert_eq!(in_docs("compare.schema.json"), schema::<Comparison>(), "{hint}");
}

#[test]
fn real_output_is_valid() {
    assert_valid(&in_docs("check.schema.json"), &small().report().json());
}

#[test]
fn a_real_comparison_is_valid() {
    let side = |small: &'static Small, name| Judged {
        name,
        flow: &small.flow,
        report: &small.judged.report,
    };
    let comparison = compare::compare(side(small(), "old"), side(thicker(), "new"));
    assert_valid(&in_docs("compare.schema.json"), &comparison.json());
}

#[test]
fn the_closed_schema_refuses_what_it_does_not_know() {
    let schema = closed(serde_json::from_str(&in_docs("check.schema.json")).unwrap());
    let mut output: Value = serde_json::from_str(&small().report().json()).unwrap();
    output["runs"][0]["sites"][0]["unknown"] = json!(1);
    assert!(!jsonschema::validator_for(&schema).unwrap().is_valid(&output));
}
