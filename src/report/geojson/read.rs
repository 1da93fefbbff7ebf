//! From text to outlines: every defect with its place, all of them at once.
//!
//! Foreign members are left alone, as RFC 7946 asks; `section` is the one that is read.

use serde_json::{Map, Value};

use super::{GeoJsonError, OutlinedRegion, OutlinedSection};
use crate::field::Edge;
use crate::geom::{Point, Region};

/// Coordinates beyond this are refused, in nm: a section of a millimetre is no cross-section.
const LARGEST_NM: f64 = 1e6;

/// Reads a section.
///
/// # Errors
/// All defects: not JSON, wrong types, missing members, rings that cross themselves, regions
/// without area.
pub fn read(text: &str) -> Result<OutlinedSection, Vec<GeoJsonError>> {
    let value: Value = serde_json::from_str(text).map_err(|error| {
        let place = format!("line {}, column {}", error.line(), error.column());
        let message = error.to_string();
        // The place stands in front already.
        let message = message.split(" at line ").next().unwrap_or_default();
        vec![GeoJsonError { place, message: format!("not JSON: {message}") }]
    })?;
    let mut reader = Reader { errors: Vec::new() };
    let section = reader.collection(&value);
    match section {
        Some(section) if reader.errors.is_empty() => Ok(section),
        _ => Err(reader.errors),
    }
}

struct Reader {
    errors: Vec<GeoJsonError>,
}

impl Reader {
    fn error<T>(&mut self, place: &str, message: impl Into<String>) -> Option<T> {
        self.errors.push(GeoJsonError { place: place.into(), message: message.into() });
        None
    }

    fn object<'v>(&mut self, value: &'v Value, place: &str) -> Option<&'v Map<String, Value>> {
        value.as_object().or_else(|| self.wrong(place, "an object", value))
    }

    fn array<'v>(&mut self, value: &'v Value, place: &str) -> Option<&'v Vec<Value>> {
        value.as_array().or_else(|| self.wrong(place, "an array", value))
    }

    fn wrong<T>(&mut self, place: &str, wanted: &str, found: &Value) -> Option<T> {
        let found = match found {
            Value::Null => "null",
            Value::Bool(_) => "true or false",
            Value::Number(_) => "a number",
            Value::String(_) => "a text",
            Value::Array(_) => "an array",
            Value::Object(_) => "an object",
        };
        self.error(place, format!("expected {wanted}, found {found}"))
    }

    fn collection(&mut self, value: &Value) -> Option<OutlinedSection> {
        let members = self.object(value, "top level")?;
        self.kind(members, "FeatureCollection", "type");
        let section = match members.get("section") {
            Some(section) => self.section(section),
            None => self.error(
                "section",
                "missing: give the extent, \"section\": {\"x\": [left, right], \"y\": [bottom, \
                 top]}",
            ),
        };
        let mut regions = Vec::new();
        match members.get("features") {
            Some(features) => {
                for (i, feature) in self.array(features, "features")?.iter().enumerate() {
                    regions.extend(self.feature(feature, &format!("features[{i}]")));
                }
            }
            None => return self.error("features", "missing: an array of features"),
        }
        section.map(|section| OutlinedSection { regions, ..section })
    }

    fn kind(&mut self, members: &Map<String, Value>, wanted: &str, place: &str) {
        match members.get("type") {
            Some(Value::String(found)) if found == wanted => {}
            Some(Value::String(found)) => {
                self.error::<()>(place, format!("expected \"{wanted}\", found \"{found}\""));
            }
            Some(other) => {
                self.wrong::<()>(place, &format!("\"{wanted}\""), other);
            }
            None => {
                self.error::<()>(place, format!("missing: \"type\": \"{wanted}\""));
            }
        }
    }

    fn section(&mut self, value: &Value) -> Option<OutlinedSection> {
        let members = self.object(value, "section")?;
        let (x, z) = (self.extent(members, "x"), self.extent(members, "y"));
        let (top, bottom) = (self.edge(members, "top"), self.edge(members, "bottom"));
        Some(OutlinedSection { x: x?, z: z?, top: top?, bottom: bottom?, regions: Vec::new() })
    }

    fn extent(&mut self, members: &Map<String, Value>, name: &str) -> Option<[f64; 2]> {
        let place = format!("section.{name}");
        let Some(value) = members.get(name) else {
            return self.error(&place, "missing: two numbers, in nm");
        };
        let [low, high] = self.array(value, &place)?.as_slice() else {
            return self.error(&place, "expected two numbers, in nm");
        };
        let (low, high) = (self.coordinate(low, &place)?, self.coordinate(high, &place)?);
        if low >= high {
            return self.error(&place, format!("{low} is not below {high}"));
        }
        Some([low, high])
    }

    fn edge(&mut self, members: &Map<String, Value>, name: &str) -> Option<Edge> {
        match members.get(name) {
            None => Some(Edge::Open),
            Some(Value::String(word)) if word == "open" => Some(Edge::Open),
            Some(Value::String(word)) if word == "mirror" => Some(Edge::Mirror),
            Some(other) => self.error(
                &format!("section.{name}"),
                format!("expected \"open\" or \"mirror\", found {other}"),
            ),
        }
    }

    fn feature(&mut self, value: &Value, place: &str) -> Option<OutlinedRegion> {
        let members = self.object(value, place)?;
        self.kind(members, "Feature", &format!("{place}.type"));
        let region = match members.get("geometry") {
            Some(geometry) => self.geometry(geometry, &format!("{place}.geometry")),
            None => self.error(&format!("{place}.geometry"), "missing: a polygon"),
        };
        let properties = match members.get("properties") {
            Some(properties) => self.properties(properties, &format!("{place}.properties")),
            None => self.error(
                &format!("{place}.properties"),
                "missing: give `material`, `permittivity` or `electrode`",
            ),
        };
        Some(OutlinedRegion { region: region?, ..properties? })
    }

    fn properties(&mut self, value: &Value, place: &str) -> Option<OutlinedRegion> {
        let members = self.object(value, place)?;
        let before = self.errors.len();
        let mut text = |name: &str| match members.get(name) {
            None | Some(Value::Null) => None,
            Some(Value::String(text)) if !text.is_empty() => Some(text.clone()),
            Some(Value::String(_)) => self.error(&format!("{place}.{name}"), "is empty"),
            Some(other) => self.wrong(&format!("{place}.{name}"), "a name", other),
        };
        let (material, electrode) = (text("material"), text("electrode"));
        let permittivity = match members.get("permittivity") {
            None | Some(Value::Null) => None,
            Some(value) => {
                let place = format!("{place}.permittivity");
                match value.as_f64() {
                    Some(k) if k > 0.0 => Some(k),
                    Some(k) => self.error(&place, format!("{k} is not positive")),
                    None => self.wrong(&place, "a number", value),
                }
            }
        };
        if self.errors.len() > before {
            return None;
        }
        if material.is_none() && permittivity.is_none() && electrode.is_none() {
            return self.error(place, "give `material`, `permittivity` or `electrode`");
        }
        Some(OutlinedRegion { region: Region::empty(), material, permittivity, electrode })
    }

    fn geometry(&mut self, value: &Value, place: &str) -> Option<Region> {
        let members = self.object(value, place)?;
        let at = format!("{place}.coordinates");
        let Some(coordinates) = members.get("coordinates") else {
            return self.error(&at, "missing");
        };
        let region = match members.get("type").and_then(Value::as_str) {
            Some("Polygon") => self.polygon(coordinates, &at)?,
            Some("MultiPolygon") => {
                let mut whole = Vec::new();
                for (i, polygon) in self.array(coordinates, &at)?.iter().enumerate() {
                    whole.push(self.polygon(polygon, &format!("{at}[{i}]"))?);
                }
                Region::union_all(&whole)
            }
            _ => {
                return self
                    .error(&format!("{place}.type"), "expected \"Polygon\" or \"MultiPolygon\"");
            }
        };
        if region.is_empty() {
            return self.error(&at, "has no area");
        }
        Some(region)
    }

    fn polygon(&mut self, value: &Value, place: &str) -> Option<Region> {
        let mut rings = Vec::new();
        for (i, ring) in self.array(value, place)?.iter().enumerate() {
            rings.push(self.ring(ring, &format!("{place}[{i}]"))?);
        }
        if let Some(p) = crossing(&rings) {
            return self
                .error(place, format!("its outline crosses itself near ({:.3}, {:.3})", p.x, p.z));
        }
        let mut rings = rings.into_iter().map(|ring| Region::from_rings_even_odd([ring]));
        let Some(outer) = rings.next() else {
            return self.error(place, "has no ring");
        };
        let holes: Vec<_> = rings.collect();
        Some(outer.difference(&Region::union_all(&holes)))
    }

    fn ring(&mut self, value: &Value, place: &str) -> Option<Vec<Point>> {
        let mut points = Vec::new();
        for (i, position) in self.array(value, place)?.iter().enumerate() {
            let place = format!("{place}[{i}]");
            match self.array(position, &place)?.as_slice() {
                [x, z, ..] => points
                    .push(Point::new(self.coordinate(x, &place)?, self.coordinate(z, &place)?)),
                _ => return self.error(&place, "expected a position [x, y], in nm"),
            }
        }
        if points.len() < 4 {
            return self.error(place, "a ring has at least four positions, the last its first");
        }
        if points.first() != points.last() {
            return self.error(place, "a ring ends where it starts: repeat its first position");
        }
        points.pop();
        Some(points)
    }

    fn coordinate(&mut self, value: &Value, place: &str) -> Option<f64> {
        match value.as_f64() {
            Some(v) if v.abs() <= LARGEST_NM => Some(v),
            Some(v) => self.error(place, format!("{v} nm is out of range (±{LARGEST_NM} nm)")),
            None => self.wrong(place, "a number, in nm", value),
        }
    }
}

/// Where two edges of a polygon's rings cross inside both; touching is no crossing.
fn crossing(rings: &[Vec<Point>]) -> Option<Point> {
    let mut edges: Vec<(Point, Point)> = rings
        .iter()
        .flat_map(|ring| ring.iter().copied().zip(ring.iter().copied().cycle().skip(1)))
        .map(|(a, b)| if a.x <= b.x { (a, b) } else { (b, a) })
        .collect();
    edges.sort_by(|e, f| e.0.x.total_cmp(&f.0.x));
    for (i, &(a, b)) in edges.iter().enumerate() {
        for &(c, d) in edges[i + 1..].iter().take_while(|(c, _)| c.x <= b.x) {
            let side = |p: Point, q: Point, r: Point| (q - p).cross(r - p);
            let (s, t) = (side(a, b, c), side(a, b, d));
            let (u, v) = (side(c, d, a), side(c, d, b));
            if s * t < 0.0 && u * v < 0.0 {
                return Some(a + (b - a) * (u / (u - v)));
            }
        }
    }
    None
}
