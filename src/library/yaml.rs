//! The only place that knows YAML: a text to a tree that keeps order, repeated keys and places.
//!
//! `serde_yaml` tells the place of an error but not of a value, and lets the last of repeated
//! keys win. So the tree is built by a visitor of our own, which numbers its nodes in the order
//! of the text; [`locate`] reads the text once more and stops with an error at the node of a
//! number. Cost: one reading of the text for the tree, one more for each place asked for.
//! Reading costs the square of the depth of brackets, so their depth is counted beforehand.

use std::cell::Cell;

use serde::de::{DeserializeSeed, EnumAccess, Error, IgnoredAny, MapAccess, SeqAccess, Visitor};
use serde::{Deserializer, de::VariantAccess};

use crate::diag::{Diagnostic, Severity};
use crate::source::{Source, Span};

/// Largest library file that is read, in bytes.
pub const MAX_BYTES: usize = 1 << 20;
/// Most values (aliases expanded) that a library file may hold.
pub const MAX_NODES: u32 = 200_000;
/// Deepest nesting that is read; a library needs five.
pub const MAX_DEPTH: u32 = 16;
/// Deepest nesting of brackets that is handed to the reader at all.
const MAX_BRACKETS: usize = 100;

const TOO_DEEP: &str = "nested more than 16 deep";
const TOO_MANY: &str = "more than 200,000 values, aliases expanded";

/// A node by its number in the order of the text.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct Place(u32);

/// A value and its place.
#[derive(Debug, Clone)]
pub(super) struct Node {
    pub place: Place,
    pub value: Value,
}

/// What a node holds.
#[derive(Debug, Clone)]
pub(super) enum Value {
    Null,
    Flag(bool),
    Number(f64),
    Text(String),
    List(Vec<Node>),
    Map(Vec<(Node, Node)>),
    Tagged,
}

impl Value {
    /// The kind in words, for messages.
    pub fn kind(&self) -> &'static str {
        match self {
            Self::Null => "nothing",
            Self::Flag(_) => "true or false",
            Self::Number(_) => "a number",
            Self::Text(_) => "a text",
            Self::List(_) => "a list",
            Self::Map(_) => "a table of keys",
            Self::Tagged => "a tagged value",
        }
    }
}

/// Reads a text; an error names its place.
pub(super) fn read(source: &Source) -> Result<Node, Diagnostic> {
    if source.text.len() > MAX_BYTES {
        let message = format!(
            "the file has {} bytes, a library file at most {MAX_BYTES} (1 MiB)",
            source.text.len()
        );
        return Err(Diagnostic::new(Severity::Error, None, message));
    }
    if let Some(at) = too_many_brackets(&source.text) {
        return Err(Diagnostic::error(Span::new(at, at + 1), TOO_DEEP));
    }
    let walk = Walk::default();
    walk.run(&source.text).map_err(|error| {
        let message = walk.excess.get().map_or_else(|| in_plain_words(&error), str::to_owned);
        Diagnostic::new(Severity::Error, span_of(source, &error), message)
    })
}

fn in_plain_words(error: &serde_yaml::Error) -> String {
    match error.to_string().as_str() {
        "repetition limit exceeded" => TOO_MANY.to_owned(),
        said if said.contains("more than one document") => "more than one YAML document".to_owned(),
        said => format!("not YAML: {said}"),
    }
}

/// The bracket that exceeds [`MAX_BRACKETS`]; quoted text and comments are passed over.
fn too_many_brackets(text: &str) -> Option<usize> {
    let mut depth = 0_usize;
    // A quote opens only where a value begins, a comment only after a blank.
    let (mut before, mut blank) = ('\n', true);
    let mut rest = text.char_indices();
    while let Some((at, c)) = rest.next() {
        match c {
            '#' if blank => {
                rest.find(|(_, c)| *c == '\n');
                before = '\n';
                continue;
            }
            '"' if "{[,:-?\n".contains(before) => {
                while let Some((_, c)) = rest.next().filter(|(_, c)| *c != '"') {
                    if c == '\\' {
                        rest.next();
                    }
                }
                continue;
            }
            // A doubled quote stands for one; `before` is kept, so the second opens again.
            '\'' if "{[,:-?\n".contains(before) => {
                rest.find(|(_, c)| *c == '\'');
                continue;
            }
            '{' | '[' => depth += 1,
            '}' | ']' => depth = depth.saturating_sub(1),
            _ => {}
        }
        if depth > MAX_BRACKETS {
            return Some(at);
        }
        blank = c.is_whitespace();
        if !blank || c == '\n' {
            before = c;
        }
    }
    None
}

/// Where a node of a text stands.
pub(super) fn locate(source: &Source, place: Place) -> Option<Span> {
    let walk = Walk { stop: Some(place), ..Walk::default() };
    walk.run(&source.text).err().and_then(|error| span_of(source, &error))
}

fn span_of(source: &Source, error: &serde_yaml::Error) -> Option<Span> {
    let (bom, text) = without_bom(&source.text);
    let mut start = error.location()?.index().min(text.len());
    while !text.is_char_boundary(start) {
        start -= 1;
    }
    Some(Span::new(bom + start, bom + start + token_length(&text[start..])))
}

fn without_bom(text: &str) -> (usize, &str) {
    text.strip_prefix('\u{feff}').map_or((0, text), |rest| (text.len() - rest.len(), rest))
}

/// Length in bytes of the word, quoted text or bracket that a text begins with.
fn token_length(text: &str) -> usize {
    let line = text.lines().next().unwrap_or("");
    match line.chars().next() {
        None => 0,
        Some('{' | '[') => 1,
        Some(quote @ ('"' | '\'')) => line[1..].find(quote).map_or(line.len(), |at| at + 2),
        Some(_) => {
            let ends = [": ", ",", "}", "]", " #"];
            let end = ends.iter().filter_map(|end| line.find(end)).min().unwrap_or(line.len());
            line[..end].trim_end().trim_end_matches(':').len()
        }
    }
}

/// One reading of a text: numbers its nodes and may stop at one of them.
#[derive(Default)]
struct Walk {
    count: Cell<u32>,
    stop: Option<Place>,
    excess: Cell<Option<&'static str>>,
}

impl Walk {
    fn run(&self, text: &str) -> Result<Node, serde_yaml::Error> {
        let (_, text) = without_bom(text);
        Next { walk: self, depth: 0 }.deserialize(serde_yaml::Deserializer::from_str(text))
    }

    fn too_much<E: Error>(&self, what: &'static str) -> E {
        self.excess.set(Some(what));
        E::custom(what)
    }
}

/// The next node, `depth` levels deep.
struct Next<'w> {
    walk: &'w Walk,
    depth: u32,
}

impl<'de> DeserializeSeed<'de> for Next<'_> {
    type Value = Node;

    fn deserialize<D: Deserializer<'de>>(self, deserializer: D) -> Result<Node, D::Error> {
        let place = Place(self.walk.count.get());
        self.walk.count.set(place.0 + 1);
        deserializer.deserialize_any(Reader { walk: self.walk, depth: self.depth, place })
    }
}

struct Reader<'w> {
    walk: &'w Walk,
    depth: u32,
    place: Place,
}

impl Reader<'_> {
    fn check<E: Error>(&self) -> Result<(), E> {
        if self.walk.stop == Some(self.place) {
            return Err(E::custom("here"));
        }
        if self.place.0 >= MAX_NODES {
            return Err(self.walk.too_much(TOO_MANY));
        }
        if self.depth > MAX_DEPTH {
            return Err(self.walk.too_much(TOO_DEEP));
        }
        Ok(())
    }

    fn node<E: Error>(self, value: Value) -> Result<Node, E> {
        self.check()?;
        Ok(Node { place: self.place, value })
    }

    fn below(&self) -> Next<'_> {
        Next { walk: self.walk, depth: self.depth + 1 }
    }
}

impl<'de> Visitor<'de> for Reader<'_> {
    type Value = Node;

    fn expecting(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter.write_str("a value")
    }

    fn visit_unit<E: Error>(self) -> Result<Node, E> {
        self.node(Value::Null)
    }

    fn visit_none<E: Error>(self) -> Result<Node, E> {
        self.node(Value::Null)
    }

    fn visit_bool<E: Error>(self, flag: bool) -> Result<Node, E> {
        self.node(Value::Flag(flag))
    }

    fn visit_i64<E: Error>(self, number: i64) -> Result<Node, E> {
        self.node(Value::Number(number as f64))
    }

    fn visit_u64<E: Error>(self, number: u64) -> Result<Node, E> {
        self.node(Value::Number(number as f64))
    }

    fn visit_i128<E: Error>(self, number: i128) -> Result<Node, E> {
        self.node(Value::Number(number as f64))
    }

    fn visit_u128<E: Error>(self, number: u128) -> Result<Node, E> {
        self.node(Value::Number(number as f64))
    }

    fn visit_f64<E: Error>(self, number: f64) -> Result<Node, E> {
        self.node(Value::Number(number))
    }

    fn visit_str<E: Error>(self, text: &str) -> Result<Node, E> {
        self.node(Value::Text(text.to_owned()))
    }

    fn visit_seq<A: SeqAccess<'de>>(self, mut list: A) -> Result<Node, A::Error> {
        self.check()?;
        let mut nodes = Vec::new();
        while let Some(node) = list.next_element_seed(self.below())? {
            nodes.push(node);
        }
        Ok(Node { place: self.place, value: Value::List(nodes) })
    }

    fn visit_map<A: MapAccess<'de>>(self, mut map: A) -> Result<Node, A::Error> {
        self.check()?;
        let mut entries = Vec::new();
        while let Some(key) = map.next_key_seed(self.below())? {
            let value = map.next_value_seed(self.below())?;
            entries.push((key, value));
        }
        Ok(Node { place: self.place, value: Value::Map(entries) })
    }

    fn visit_enum<A: EnumAccess<'de>>(self, tagged: A) -> Result<Node, A::Error> {
        self.check()?;
        let (IgnoredAny, content) = tagged.variant()?;
        content.newtype_variant::<IgnoredAny>()?;
        Ok(Node { place: self.place, value: Value::Tagged })
    }
}
