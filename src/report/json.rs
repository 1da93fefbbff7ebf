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
        schema::<Self>()
    }
}

/// The JSON Schema (2020-12) of what a type is written as.
pub fn schema<T: schemars::JsonSchema>() -> String {
    let settings = schemars::generate::SchemaSettings::draft2020_12().for_serialize();
    let schema = settings.into_generator().into_root_schema_for::<T>();
    serde_json::to_string_pretty(&schema).expect("a schema is always JSON") + "\n"
}
