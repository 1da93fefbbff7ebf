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
    ("polymer", [350.0, 0.50, 0.84]),
    ("carbon", [20.0, 0.10, 0.56]),
    ("silicon", [262.0, 0.30, 0.70]),
    ("barrier", [290.0, 0.34, 0.26]),
    ("metal", [18.0, 0.52, 0.46]),
];

/// A family that the table does not know.
const OTHER: [f64; 3] = [0.0, 0.0, 0.75];

/// Hue, saturation and lightness of metals, which differ by hue: there are few, side by side.
const METALS: &[(&str, [f64; 3])] = &[
    ("Cu", [22.0, 0.58, 0.46]),
    ("Al", [205.0, 0.10, 0.52]),
    ("W", [226.0, 0.20, 0.44]),
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

    /// Linear red, green, blue to what a reader sees: all, without the long and without the middle
    /// cones (Viénot, Brettel and Mollon, Color Res. Appl. 24, 243 (1999); from memory).
    const SIGHTS: [[[f64; 3]; 3]; 3] = [
        [[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]],
        [[0.11238, 0.88762, 0.0], [0.11238, 0.88762, 0.0], [0.00401, -0.00401, 1.0]],
        [[0.29275, 0.70725, 0.0], [0.29275, 0.70725, 0.0], [-0.02234, 0.02234, 1.0]],
    ];

    /// `#rrggbb` as seen, in CIE L*a*b* (D65).
    fn seen(color: &str, sight: &[[f64; 3]; 3]) -> [f64; 3] {
        let times = |m: &[[f64; 3]; 3], v: [f64; 3]| -> [f64; 3] {
            std::array::from_fn(|i| m[i].iter().zip(v).map(|(a, b)| a * b).sum())
        };
        let linear: [f64; 3] = std::array::from_fn(|i| {
            let c =
                f64::from(u8::from_str_radix(&color[1 + 2 * i..3 + 2 * i], 16).unwrap()) / 255.0;
            if c <= 0.04045 { c / 12.92 } else { ((c + 0.055) / 1.055).powf(2.4) }
        });
        const XYZ: [[f64; 3]; 3] =
            [[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]];
        let [x, y, z] = times(&XYZ, times(sight, linear).map(|c| c.max(0.0)));
        let f = |t: f64| if t > 0.008856 { t.cbrt() } else { 7.787 * t + 16.0 / 116.0 };
        let [x, y, z] = [f(x / 0.9505), f(y), f(z / 1.089)];
        [116.0 * y - 16.0, 500.0 * (x - y), 200.0 * (y - z)]
    }

    /// A difference of 2 is just noticed; 10 is seen at a glance (common practice).
    #[test]
    fn families_and_metals_are_told_apart_by_colour_blind_readers_too() {
        let families = FAMILIES.iter().filter(|(name, _)| *name != "metal");
        let named: Vec<_> = families.chain(METALS).collect();
        for sight in &SIGHTS {
            for (at, (a, [h, s, l])) in named.iter().enumerate() {
                let one = seen(&hex(*h, *s, *l), sight);
                for (b, [h, s, l]) in &named[at + 1..] {
                    let other = seen(&hex(*h, *s, *l), sight);
                    let apart: f64 = one.iter().zip(other).map(|(a, b)| (a - b).powi(2)).sum();
                    assert!(apart.sqrt() >= 10.0, "{a} and {b}: {:.1}", apart.sqrt());
                }
            }
        }
    }
}
