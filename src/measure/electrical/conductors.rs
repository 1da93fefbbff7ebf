//! Which pieces of metal are one electrode, and what it is called.
//!
//! Conductors and semiconductors that touch are one. Layers named by `as` are the electrode
//! `line/NAME` of their line, all others together `line`; a group with both takes the names.
//! Metal that touches no line, plane or bulk floats. Cost: the product of the edge counts of all
//! pairs of pieces, most skipped by their boxes.

use std::collections::BTreeMap;

use super::array::{Array, Owner};
use crate::flow::Variant;
use crate::geom::Region;
use crate::library::{Library, MaterialId};
use crate::measure::reading::Missing;
use crate::num::tolerance::ON_EDGE_NM;

/// What one connected piece of metal is to the field.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Held {
    /// This electrode.
    Electrode(usize),
    /// Not held; same index, same conductor.
    Floating(usize),
}

/// A place of an electrode: of a line, counted from the middle one, or ground.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Electrode {
    /// Of a line: how far from the middle one, negative to the left; `None` for what has no name.
    Line {
        /// From the middle line.
        offset: i64,
        /// Its name by `as`.
        name: Option<String>,
    },
    /// Planes, bulk and next level.
    Ground,
}

impl Electrode {
    /// As the matrix names it: `line`, `left/floating-gate`, `right2`, `ground`.
    pub fn label(&self) -> String {
        let Self::Line { offset, name } = self else { return "ground".into() };
        let place = match offset {
            0 => "line".to_owned(),
            -1 => "left".to_owned(),
            1 => "right".to_owned(),
            offset if *offset < 0 => format!("left{}", -offset),
            offset => format!("right{offset}"),
        };
        name.as_ref().map_or_else(|| place.clone(), |name| format!("{place}/{name}"))
    }

    /// Middle line first, then left and right, ground, and lines further out.
    fn rank(&self) -> (u64, i64) {
        match self {
            Self::Line { offset, .. } if offset.abs() <= 1 => (offset.unsigned_abs(), *offset),
            Self::Ground => (2, 0),
            Self::Line { offset, .. } => (1 + offset.unsigned_abs(), *offset),
        }
    }
}

/// All conductors of an array.
#[derive(Debug, Clone)]
pub(super) struct Conductors {
    /// Connected pieces of metal.
    pub pieces: Vec<(Region, Held)>,
    /// What each of them is made of.
    pub materials: Vec<MaterialId>,
    /// The electrodes, in the order of the matrix.
    pub electrodes: Vec<Electrode>,
    /// Names by `as` that an electrode answers to besides its own, with its index.
    pub aliases: BTreeMap<(i64, String), usize>,
}

impl Conductors {
    /// Finds the conductors of an array; `with_ground` where a next level is held besides.
    pub fn of(
        array: &Array,
        variant: &Variant,
        library: &Library,
        with_ground: bool,
    ) -> Result<Self, Missing> {
        let metal = array
            .pieces
            .iter()
            .filter(|piece| library.material(piece.material).kind.conducts())
            .flat_map(|piece| piece.region.parts().map(|part| (piece.material, piece.owner, part)));
        let (materials, parts): (Vec<_>, Vec<_>) =
            metal.map(|(material, owner, part)| (material, (owner, part))).unzip();
        let groups = groups(&parts);
        let mut found: BTreeMap<usize, Group> = BTreeMap::new();
        for ((owner, _), group) in parts.iter().zip(&groups) {
            found.entry(*group).or_default().add(*owner, array.middle, variant)?;
        }
        let mut electrodes: Vec<_> = found.values().filter_map(Group::electrode).collect();
        if with_ground {
            electrodes.push(Electrode::Ground);
        }
        electrodes.sort_by(|a, b| a.rank().cmp(&b.rank()).then(a.cmp(b)));
        electrodes.dedup();
        if !electrodes.iter().any(|e| matches!(e, Electrode::Line { offset: 0, .. })) {
            return Err(Missing::NoConductor);
        }
        let index = |electrode: &Electrode| electrodes.iter().position(|e| e == electrode);
        let mut aliases = BTreeMap::new();
        let mut held = BTreeMap::new();
        for (at, (group, found)) in found.iter().enumerate() {
            let Some(electrode) = found.electrode().and_then(|e| index(&e)) else {
                held.insert(*group, Held::Floating(at));
                continue;
            };
            held.insert(*group, Held::Electrode(electrode));
            if let Some(offset) = found.offset {
                aliases.extend(found.names.iter().map(|name| ((offset, name.clone()), electrode)));
            }
        }
        let pieces = parts.into_iter().zip(&groups).map(|((_, region), g)| (region, held[g]));
        Ok(Self { pieces: pieces.collect(), materials, electrodes, aliases })
    }
}

/// Who owns a group of touching metal.
#[derive(Debug, Clone, Default)]
struct Group {
    /// The line, from the middle one.
    offset: Option<i64>,
    /// Names of its layers, lowest first.
    names: Vec<String>,
    grounded: bool,
}

impl Group {
    fn add(&mut self, owner: Owner, middle: usize, variant: &Variant) -> Result<(), Missing> {
        let (line, layer) = match owner {
            Owner::Line { line, layer } => (line, Some(layer)),
            Owner::Liner { line } => (line, None),
            Owner::Held => {
                self.grounded = true;
                return if self.offset.is_some() { Err(Missing::Shorted) } else { Ok(()) };
            }
            Owner::Nobody => return Ok(()),
        };
        let offset = line as i64 - middle as i64;
        if self.grounded || self.offset.is_some_and(|other| other != offset) {
            return Err(Missing::Shorted);
        }
        self.offset = Some(offset);
        let name = layer.and_then(|layer| variant.wafer.layers.get(layer)?.name.clone());
        if let Some(name) = name.filter(|name| !self.names.contains(name)) {
            self.names.push(name);
        }
        Ok(())
    }

    fn electrode(&self) -> Option<Electrode> {
        if self.grounded {
            return Some(Electrode::Ground);
        }
        let offset = self.offset?;
        Some(Electrode::Line { offset, name: self.names.first().cloned() })
    }
}

/// The group of each part: the least index that it is joined with by touching.
fn groups(parts: &[(Owner, Region)]) -> Vec<usize> {
    let mut group: Vec<usize> = (0..parts.len()).collect();
    for a in 0..parts.len() {
        for b in a + 1..parts.len() {
            if group[a] != group[b] && touch(&parts[a].1, &parts[b].1) {
                let (keep, drop) = (group[a].min(group[b]), group[a].max(group[b]));
                group.iter_mut().filter(|g| **g == drop).for_each(|g| *g = keep);
            }
        }
    }
    group
}

fn touch(a: &Region, b: &Region) -> bool {
    let (Some(p), Some(q)) = (a.bounds(), b.bounds()) else { return false };
    let apart = |low: f64, high: f64| low - high > ON_EDGE_NM;
    let boxes_apart = apart(p.min.x, q.max.x)
        || apart(q.min.x, p.max.x)
        || apart(p.min.z, q.max.z)
        || apart(q.min.z, p.max.z);
    !boxes_apart && a.distance(b).is_some_and(|way| way <= ON_EDGE_NM)
}
