//! From outlines to text, one feature a line.

use serde_json::{Map, Value, json};

use super::{OutlinedRegion, OutlinedSection};
use crate::field::Edge;
use crate::geom::{Point, Polygon};

/// The section as a feature collection; [`super::read`] gives the same section back.
pub fn write(section: &OutlinedSection) -> String {
    let edge = |edge: Edge| match edge {
        Edge::Open => "open",
        Edge::Mirror => "mirror",
    };
    let extent = json!({
        "x": section.x, "y": section.z, "top": edge(section.top), "bottom": edge(section.bottom),
    });
    let features: Vec<String> =
        section.regions.iter().map(|region| format!("  {}", feature(region))).collect();
    format!(
        "{{\"type\": \"FeatureCollection\",\n\"section\": {extent},\n\"features\": [\n{}\n]}}\n",
        features.join(",\n")
    )
}

fn feature(region: &OutlinedRegion) -> Value {
    let mut properties = Map::new();
    for (name, text) in [("material", &region.material), ("electrode", &region.electrode)] {
        properties.extend(text.iter().map(|text| (name.to_owned(), json!(text))));
    }
    properties.extend(region.permittivity.map(|k| ("permittivity".to_owned(), json!(k))));
    let polygons: Vec<Value> = region.region.polygons().iter().map(polygon).collect();
    let geometry = match polygons.as_slice() {
        [one] => json!({"type": "Polygon", "coordinates": one}),
        _ => json!({"type": "MultiPolygon", "coordinates": polygons}),
    };
    json!({"type": "Feature", "properties": properties, "geometry": geometry})
}

/// Rings closed by their first position.
fn polygon(polygon: &Polygon) -> Value {
    let position = |p: &Point| [p.x, p.z];
    let ring = |ring: &Vec<Point>| -> Vec<[f64; 2]> {
        ring.iter().chain(ring.first()).map(position).collect()
    };
    json!(polygon.iter().map(ring).collect::<Vec<_>>())
}
