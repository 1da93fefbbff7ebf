//! The colour and pattern of every material.
//!
//! Families differ in hue, members of a family in lightness, and what a material is to the flow
//! in pattern: conductors are dark and plain, dielectrics light and plain, semiconductors ruled
//! upright, sacrificial materials dotted, resists ruled at a slant. Lightness alone tells a
//! conductor from a dielectric, so print and colour-blind readers lose nothing that matters.

use std::collections::BTreeMap;

use crate::library::{Kind, Library, MaterialId};

/// What is drawn over the colour.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Pattern {
    /// Nothing.
    Plain,
    /// Upright lines.
    Upright,
    /// Slanted lines.
    Slanted,
    /// Dots.
    Dotted,
}

/// How a material is filled.
#[derive(Debug, Clone, PartialEq)]
pub struct Fill {
    /// `#rrggbb`.
    pub color: String,
    /// Drawn over it.
    pub pattern: Pattern,
    /// `#rrggbb` of a label on it.
    pub ink: &'static str,
}

/// Hue (degrees), saturation and lightness of a family's first member.
const FAMILIES: &[(&str, [f64; 3])] = &[
    ("oxide", [208.0, 0.45, 0.84]),
    ("low-k", [44.0, 0.62, 0.83]),
    ("nitride", [160.0, 0.38, 0.62]),
    ("carbide", [96.0, 0.32, 0.66]),
    ("polymer", [336.0, 0.50, 0.86]),
    ("carbon", [20.0, 0.10, 0.56]),
    ("silicon", [262.0, 0.20, 0.66]),
    ("barrier", [290.0, 0.34, 0.34]),
    ("metal", [18.0, 0.52, 0.46]),
];

/// A family that the table does not know.
const OTHER: [f64; 3] = [0.0, 0.0, 0.75];

/// Hue, saturation and lightness of metals, which differ by hue: there are few, side by side.
const METALS: &[(&str, [f64; 3])] = &[
    ("Cu", [22.0, 0.58, 0.46]),
    ("Al", [205.0, 0.12, 0.58]),
    ("W", [226.0, 0.20, 0.38]),
    ("Co", [244.0, 0.40, 0.48]),
    ("Ru", [178.0, 0.34, 0.32]),
    ("Mo", [128.0, 0.16, 0.38]),
];

/// The fill of every material of a library: the same in every picture.
pub fn fills(library: &Library) -> BTreeMap<MaterialId, Fill> {
    let mut members: BTreeMap<&str, usize> = BTreeMap::new();
    let mut all = BTreeMap::new();
    for (at, material) in library.materials.iter().enumerate() {
        let rank = members.entry(&material.family).or_default();
        let [hue, saturation, lightness] = METALS
            .iter()
            .chain(FAMILIES.iter())
            .find(|(name, _)| *name == material.name || *name == material.family)
            .map_or(OTHER, |(_, hsl)| *hsl);
        let named = METALS.iter().any(|(name, _)| *name == material.name);
        let step = if named { 0.0 } else { lightness_step(*rank) };
        *rank += 1;
        let lightness = (lightness + step).clamp(0.18, 0.94);
        let pattern = match material.kind {
            Kind::Dielectric | Kind::Conductor => Pattern::Plain,
            Kind::Semiconductor => Pattern::Upright,
            Kind::Sacrificial => Pattern::Dotted,
            Kind::Resist => Pattern::Slanted,
        };
        let ink = if lightness > 0.55 { "#1b1b1b" } else { "#ffffff" };
        all.insert(MaterialId(at), Fill { color: hex(hue, saturation, lightness), pattern, ink });
    }
    all
}

/// Members of a family step away from its first: darker, lighter, darker still …
fn lightness_step(rank: usize) -> f64 {
    let size = rank.div_ceil(2) as f64 * 0.07;
    if rank % 2 == 1 { -size } else { size * 0.8 }
}

fn hex(hue_deg: f64, saturation: f64, lightness: f64) -> String {
    let chroma = (1.0 - (2.0 * lightness - 1.0).abs()) * saturation;
    let channel = |n: f64| {
        let k = (n + hue_deg / 30.0) % 12.0;
        let value = lightness - chroma / 2.0 * (k - 3.0).min(9.0 - k).clamp(-1.0, 1.0);
        (value * 255.0).round() as u8
    };
    format!("#{:02x}{:02x}{:02x}", channel(0.0), channel(8.0), channel(4.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn colours_are_those_of_the_colour_wheel() {
        assert_eq!(hex(0.0, 1.0, 0.5), "#ff0000");
        assert_eq!(hex(120.0, 1.0, 0.5), "#00ff00");
        assert_eq!(hex(240.0, 1.0, 0.5), "#0000ff");
        assert_eq!(hex(0.0, 0.0, 0.5), "#808080");
    }
}
