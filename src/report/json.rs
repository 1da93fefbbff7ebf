//! JSON of `check`, and its JSON Schema.

use super::Report;

impl Report {
    /// The report as JSON, two blanks a level, with a final newline.
    pub fn json(&self) -> String {
        // Every number in the model is finite and every key a string: nothing here can fail.
        let text = serde_json::to_string_pretty(self).expect("a report is always JSON");
        text + "\n"
    }

    /// The JSON Schema of [`Self::json`].
    pub fn json_schema() -> String {
        let schema = schemars::schema_for!(Report);
        serde_json::to_string_pretty(&schema).expect("a schema is always JSON") + "\n"
    }
}
