//! Takes a table of keys apart, key by key, and remembers every defect with its place.

use std::collections::BTreeMap;

use super::Ranged;
use super::file::MAX_SHOWN;
use super::numbers::Bounds;
use super::yaml::{Node, Place, Value};
use crate::diag::{Severity, nearest};

/// What is wrong with a file, before its place is known.
pub(super) struct Defect {
    pub severity: Severity,
    pub place: Place,
    pub message: String,
    pub label: String,
    pub help: Option<String>,
}

/// The defects of a file, in the order in which they were found.
#[derive(Default)]
pub(super) struct Defects(pub Vec<Defect>);

impl Defects {
    pub fn error(&mut self, place: Place, message: impl Into<String>, label: impl Into<String>) {
        self.push(Severity::Error, place, message, label, None);
    }

    /// A known word near a misspelt one, as a question; none once more is found than is shown.
    pub fn hint<'a>(&self, word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<String> {
        if self.0.len() >= MAX_SHOWN {
            return None;
        }
        nearest(word, known).map(|near| format!("did you mean `{near}`?"))
    }

    pub fn push(
        &mut self,
        severity: Severity,
        place: Place,
        message: impl Into<String>,
        label: impl Into<String>,
        help: Option<String>,
    ) {
        let (message, label) = (message.into(), label.into());
        self.0.push(Defect { severity, place, message, label, help });
    }
}

/// A table of keys. Each key is taken once; what is left at [`Fields::close`] is unknown.
pub(super) struct Fields<'n> {
    /// Where the table stands.
    pub place: Place,
    what: String,
    entries: Vec<Entry<'n>>,
    asked: Vec<&'static str>,
}

struct Entry<'n> {
    key: &'n str,
    key_place: Place,
    value: &'n Node,
    taken: bool,
}

impl<'n> Fields<'n> {
    /// Opens a table; `what` names it in messages (`material Cu`). Nothing counts as no keys.
    pub fn open(node: &'n Node, what: impl Into<String>, defects: &mut Defects) -> Option<Self> {
        let what = what.into();
        let written: &[(Node, Node)] = match &node.value {
            Value::Map(entries) => entries,
            Value::Null => &[],
            other => {
                let message = format!("{what} must be a table of keys, not {}", other.kind());
                defects.error(node.place, message, "a table of keys belongs here");
                return None;
            }
        };
        let mut seen = BTreeMap::new();
        let mut entries = Vec::new();
        for (key, value) in written {
            let Value::Text(name) = &key.value else {
                let message = format!("a key of {what} is {}, not a name", key.value.kind());
                defects.error(key.place, message, "quote it if it is a name");
                continue;
            };
            if seen.insert(name.as_str(), ()).is_some() {
                let message = format!("`{name}` is given twice in {what}");
                defects.error(key.place, message, "given before");
                continue;
            }
            entries.push(Entry { key: name, key_place: key.place, value, taken: false });
        }
        Some(Self { place: node.place, what, entries, asked: Vec::new() })
    }

    /// All entries, for a table whose keys are names of the writer's own.
    pub fn names(self) -> impl Iterator<Item = (&'n str, Place, &'n Node)> {
        self.entries.into_iter().map(|entry| (entry.key, entry.key_place, entry.value))
    }

    /// The value of a key; nothing (`~`) counts as not given.
    pub fn take(&mut self, key: &'static str) -> Option<&'n Node> {
        self.asked.push(key);
        let entry = self.entries.iter_mut().find(|entry| entry.key == key)?;
        entry.taken = true;
        (!matches!(entry.value.value, Value::Null)).then_some(entry.value)
    }

    /// Where a key stands, if it does.
    pub fn place_of(&self, key: &str) -> Option<Place> {
        self.entries.iter().find(|entry| entry.key == key).map(|entry| entry.key_place)
    }

    /// A text; empty text is none.
    pub fn text(&mut self, key: &'static str, defects: &mut Defects) -> Option<String> {
        let node = self.take(key)?;
        match &node.value {
            Value::Text(text) => Some(text.clone()),
            other => self.wrong_kind(key, "a text", node.place, other, defects),
        }
    }

    /// `true` or `false`.
    pub fn flag(&mut self, key: &'static str, defects: &mut Defects) -> Option<bool> {
        let node = self.take(key)?;
        match &node.value {
            Value::Flag(flag) => Some(*flag),
            other => self.wrong_kind(key, "true or false", node.place, other, defects),
        }
    }

    /// A list of texts.
    pub fn texts(&mut self, key: &'static str, defects: &mut Defects) -> Vec<(String, Place)> {
        let Some(node) = self.take(key) else { return Vec::new() };
        let Value::List(items) = &node.value else {
            self.wrong_kind::<()>(key, "a list of names", node.place, &node.value, defects);
            return Vec::new();
        };
        let mut texts = Vec::new();
        for item in items {
            match &item.value {
                Value::Text(text) => texts.push((text.clone(), item.place)),
                other => {
                    self.wrong_kind::<()>(key, "a list of names", item.place, other, defects);
                }
            }
        }
        texts
    }

    /// One of the words of a list.
    pub fn choice<T: Copy>(
        &mut self,
        key: &'static str,
        words: &[(&'static str, T)],
        defects: &mut Defects,
    ) -> Option<T> {
        let place = self.take(key)?.place;
        let word = self.text(key, defects)?;
        choose(&word, place, key, words, defects)
    }

    /// A number or `{value, low, high}`.
    pub fn number(
        &mut self,
        key: &'static str,
        bounds: Bounds,
        defects: &mut Defects,
    ) -> Option<Ranged> {
        let node = self.take(key)?;
        number(node, key, &self.what, bounds, defects)
    }

    /// A table of numbers under names of the writer's own.
    pub fn numbers(
        &mut self,
        key: &'static str,
        bounds: Bounds,
        defects: &mut Defects,
    ) -> Vec<(String, Place, Ranged)> {
        let Some(node) = self.take(key) else { return Vec::new() };
        let what = format!("`{key}` of {}", self.what);
        let Some(table) = Fields::open(node, what.clone(), defects) else { return Vec::new() };
        table
            .names()
            .filter_map(|(name, place, node)| {
                Some((name.to_owned(), place, number(node, name, &what, bounds, defects)?))
            })
            .collect()
    }

    /// Says that a key is missing.
    pub fn missing(&self, key: &str, why: &str, defects: &mut Defects) {
        defects.error(self.place, format!("{} has no `{key}`: {why}", self.what), "");
    }

    /// Says which keys nobody took.
    pub fn close(self, defects: &mut Defects) {
        for entry in self.entries.iter().filter(|entry| !entry.taken) {
            let help = defects.hint(entry.key, self.asked.iter().copied());
            let message = format!("{} has no key `{}`", self.what, entry.key);
            defects.push(Severity::Error, entry.key_place, message, "unknown key", help);
        }
    }

    fn wrong_kind<T>(
        &self,
        key: &str,
        wanted: &str,
        place: Place,
        found: &Value,
        defects: &mut Defects,
    ) -> Option<T> {
        let message = format!("`{key}` of {} must be {wanted}, not {}", self.what, found.kind());
        defects.error(place, message, format!("{wanted} belongs here"));
        None
    }
}

/// One of the words of a list; anything else is a defect.
pub(super) fn choose<T: Copy>(
    word: &str,
    place: Place,
    key: &str,
    words: &[(&'static str, T)],
    defects: &mut Defects,
) -> Option<T> {
    let found = words.iter().find(|(known, _)| *known == word).map(|(_, value)| *value);
    if found.is_none() {
        let known: Vec<&str> = words.iter().map(|(known, _)| *known).collect();
        let help = defects.hint(word, known.iter().copied());
        let message = format!("`{key}` cannot be `{word}`: one of {}", known.join(", "));
        defects.push(Severity::Error, place, message, "unknown word", help);
    }
    found
}

fn number(
    node: &Node,
    key: &str,
    what: &str,
    bounds: Bounds,
    defects: &mut Defects,
) -> Option<Ranged> {
    if !matches!(node.value, Value::Map(_)) {
        return plain(node, key, what, bounds, defects).map(Ranged::exact);
    }
    let mut fields = Fields::open(node, format!("`{key}` of {what}"), defects)?;
    let mut part = |part: &'static str| {
        fields
            .take(part)
            .map(|node| plain(node, part, &format!("`{key}` of {what}"), bounds, defects))
    };
    let (value, low, high) = (part("value"), part("low"), part("high"));
    if value.is_none() {
        fields.missing("value", "a range stands around a value", defects);
    }
    let place = fields.place;
    fields.close(defects);
    let value = value??;
    let (low, high) = (low.unwrap_or(Some(value))?, high.unwrap_or(Some(value))?);
    if !(low <= value && value <= high) {
        let message = format!("`{key}` of {what}: {value} is outside its range {low} to {high}");
        defects.error(place, message, "low <= value <= high must hold");
        return None;
    }
    Some(Ranged { value, low, high })
}

fn plain(node: &Node, key: &str, what: &str, bounds: Bounds, defects: &mut Defects) -> Option<f64> {
    let Value::Number(number) = node.value else {
        let message = format!("`{key}` of {what} must be a number, not {}", node.value.kind());
        defects.error(node.place, message, "a number belongs here");
        return None;
    };
    if !number.is_finite() {
        defects.error(node.place, format!("`{key}` of {what} is not finite"), "no number");
        return None;
    }
    if !bounds.allow(number) {
        let message = format!("`{key}` of {what} cannot be {number}");
        defects.error(node.place, message, format!("must be {}", bounds.words()));
        return None;
    }
    Some(number)
}
