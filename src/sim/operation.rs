//! A step of a flow in plain numbers, as one cell meets it. Units and names end here.
//!
//! Two operations that are equal do the same to equal sections, which is what lets variants
//! share their common beginning.

use super::blueprint::height_nm;
use super::error::Fault;
use super::{Cell, Drawn};
use crate::flow::{Action, Site, Step};
use crate::front::Character;
use crate::library::{ASSUMED_RATE, Arrival, Exponent, Library, MaterialId, Process};

/// What one step does to one cell, in nm.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Operation {
    /// Index of the step in the variant.
    pub step: usize,
    /// What it does.
    pub deed: Deed,
    /// Spaces that `only at` spares, by number; empty: none.
    pub spared: Vec<usize>,
}

/// What a step does.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Deed {
    /// Heat and chemistry that change no shape.
    Nothing,
    /// A film grows.
    Grow {
        /// Of what.
        material: MaterialId,
        /// How species arrive.
        character: Character,
        /// Thickness on an open flat.
        thickness: f64,
        /// Relative growth by the material beneath; `None`: everywhere alike.
        growth_on: Option<Vec<f64>>,
        /// Least aspect, depth over twice the width, that the dose no longer reaches.
        dose_aspect: Option<f64>,
    },
    /// Exposed material goes.
    Erode(Erode),
    /// Exposed material becomes another.
    Convert {
        /// From what.
        from: MaterialId,
        /// To what.
        to: MaterialId,
        /// How species arrive.
        character: Character,
        /// How deep.
        depth: f64,
    },
    /// A planar block over some spaces.
    Mask {
        /// Of what.
        material: MaterialId,
        /// Above the highest surface there.
        thickness: f64,
        /// Spaces that it covers, by number.
        over: Vec<usize>,
        /// Narrowest space that it enters.
        narrowest: Option<f64>,
    },
    /// Planar up to a height.
    Fill {
        /// Of what.
        material: MaterialId,
        /// Up to where.
        z: f64,
        /// Narrowest space that it enters.
        narrowest: Option<f64>,
    },
    /// A material leaves through what lets it pass.
    Release {
        /// What leaves.
        material: MaterialId,
        /// Thickness through which each material lets it pass; zero: not at all.
        passes: Vec<f64>,
        /// Whether openings along the line are drawn.
        drawn_openings: bool,
    },
    /// All of an exposed material goes.
    Strip {
        /// What goes.
        material: MaterialId,
    },
    /// A plane is cut.
    Polish {
        /// Where.
        z: f64,
    },
    /// Slots down onto lines, off by the overlay, lined and filled flush.
    Via(Via),
    /// Materials lose height from their exposed tops.
    Shrink {
        /// Which.
        materials: Vec<MaterialId>,
        /// Share of the height that goes.
        share: f64,
    },
}

/// Exposed material goes.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Erode {
    /// How species arrive.
    pub character: Character,
    /// Depth on an open flat of a material of rate 1.
    pub depth: f64,
    /// Rate of each material over that of the named one.
    pub rates: Vec<f64>,
}

/// Slots down onto lines.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Via {
    /// Width of the slot.
    pub width: f64,
    /// Three standard deviations of the width.
    pub width_tolerance: f64,
    /// Of what.
    pub material: MaterialId,
    /// Thickness and material of its liner.
    pub liner: Option<(f64, MaterialId)>,
    /// Off its line by at most this.
    pub overlay: f64,
    /// Below the line top.
    pub overetch: f64,
    /// Lines that it lands on.
    pub lines: Vec<usize>,
}

/// What a step is to one cell.
pub(super) enum Resolved {
    /// The step spares the cell.
    Spared,
    /// All is known.
    Ready(Operation),
    /// `etch … until`: the depth depends on all cells.
    Until(Operation, MaterialId, f64),
    /// `polish until`: the plane depends on all cells.
    PlaneOf(Operation, MaterialId),
}

/// Resolves a step for a cell.
pub(super) fn resolve(
    at: usize,
    step: &Step,
    cell: &Cell,
    drawn: &Drawn,
    library: &Library,
) -> Result<Resolved, Fault> {
    let spared = match &step.only_at {
        Some(only) => {
            let inside = |site: &Site| only.iter().any(|other| same_site(site, other));
            if !cell.sites.iter().any(inside) {
                return Ok(Resolved::Spared);
            }
            spaces(cell, |site| !inside(site))
        }
        None => Vec::new(),
    };
    let whole = |deed| Operation { step: at, deed, spared: spared.clone() };
    let process = &step.action.process().process;
    let deed = match &step.action {
        Action::Deposit { thickness, material, .. } => Deed::Grow {
            material: *material,
            character: character(process)?,
            thickness: thickness.nominal.nm(),
            growth_on: (!process.grows_on.is_empty())
                .then(|| library.materials.iter().map(|m| process.growth_on(m)).collect()),
            dose_aspect: super::dose::aspect(process)?,
        },
        Action::Etch { depth, material, .. } => Deed::Erode(Erode {
            character: character(process)?,
            depth: depth.nominal.nm(),
            rates: rates(process, *material, library)?,
        }),
        Action::EtchUntil { material, stop, overetch, .. } => {
            let erode = Erode {
                character: character(process)?,
                depth: 0.0,
                rates: rates(process, *material, library)?,
            };
            let over = overetch.nominal.fraction();
            return Ok(Resolved::Until(whole(Deed::Erode(erode)), *stop, over));
        }
        Action::Convert { depth, from, to, .. } => Deed::Convert {
            from: *from,
            to: *to,
            character: character(process)?,
            depth: depth.nominal.nm(),
        },
        Action::Mask { thickness, material, over, .. } => {
            let inside = |site: &Site| over.iter().any(|other| same_site(site, other));
            if !cell.sites.iter().any(inside) {
                return Ok(Resolved::Spared);
            }
            let over = match &cell.sites[..] {
                [Site::Array { .. }] => (0..drawn.space_count()).collect(),
                _ => spaces(cell, inside),
            };
            Deed::Mask {
                material: *material,
                thickness: thickness.nominal.nm(),
                over,
                narrowest: process.fills_down_to_nm.map(|n| n.value),
            }
        }
        Action::Fill { material, to, .. } => Deed::Fill {
            material: *material,
            z: height_nm(to, drawn),
            narrowest: process.fills_down_to_nm.map(|n| n.value),
        },
        Action::Release { material, .. } => Deed::Release {
            material: *material,
            passes: library.materials.iter().map(super::steps::passes_up_to).collect(),
            drawn_openings: process.drawn_openings,
        },
        Action::Strip { material, .. } => Deed::Strip { material: *material },
        Action::Polish { to, .. } => Deed::Polish { z: height_nm(to, drawn) },
        Action::PolishUntil { stop, .. } => {
            return Ok(Resolved::PlaneOf(whole(Deed::Polish { z: 0.0 }), *stop));
        }
        Action::Anneal { .. } | Action::Clean { .. } => Deed::Nothing,
        Action::Cure { .. } => cure(process, library),
        Action::Via { width, material, liner, overlay, overetch, .. } => Deed::Via(Via {
            width: width.nominal.nm(),
            width_tolerance: width.three_sigma.nm(),
            material: *material,
            liner: liner.map(|(thickness, material)| (thickness.nominal.nm(), material)),
            overlay: overlay.nominal.nm(),
            overetch: overetch.nominal.nm(),
            lines: landing_lines(cell, drawn, &spared),
        }),
    };
    Ok(Resolved::Ready(whole(deed)))
}

/// Whether two sites are the same place, whatever a split calls it.
fn same_site(a: &Site, b: &Site) -> bool {
    match (a, b) {
        (Site::Array { array, .. }, Site::Array { array: other, .. }) => array == other,
        (Site::Row { row, space, .. }, Site::Row { row: other_row, space: other, .. }) => {
            row == other_row && space == other
        }
        _ => false,
    }
}

/// Numbers of the spaces of a row whose site is meant; an array is one site.
fn spaces(cell: &Cell, meant: impl Fn(&Site) -> bool) -> Vec<usize> {
    let row = cell.sites.iter().filter(|site| matches!(site, Site::Row { .. }));
    row.enumerate().filter(|(_, site)| meant(site)).map(|(at, _)| at).collect()
}

/// The line of each space that a via is asked for: the one right of it, at the last space the
/// last line.
fn landing_lines(cell: &Cell, drawn: &Drawn, spared: &[usize]) -> Vec<usize> {
    if let [Site::Array { .. }] = &cell.sites[..] {
        return vec![0];
    }
    let asked = (0..drawn.space_count()).filter(|space| !spared.contains(space));
    let mut lines: Vec<_> = asked.map(|space| space.min(drawn.lines.len() - 1)).collect();
    lines.dedup();
    lines
}

/// How the species of a process arrive.
fn character(process: &Process) -> Result<Character, Fault> {
    let Some(arrival) = &process.arrival else {
        return Err(Fault::refused(
            format!("the process {} does not say how its species arrive", process.name),
            "give it an `arrival` in a library file",
        ));
    };
    let Arrival { conformal, directional, exponent, tilt_deg, sticking } = arrival;
    Ok(Character {
        conformal: conformal.value,
        directional: directional.value,
        exponent: match exponent {
            Exponent::Cosine(p) => Some(p.value),
            Exponent::Vertical => None,
        },
        tilt_rad: tilt_deg.value.to_radians(),
        neutral: (1.0 - conformal.value - directional.value).max(0.0),
        sticking: sticking.value,
    })
}

/// Rate of each material over that of the named one.
fn rates(process: &Process, named: MaterialId, library: &Library) -> Result<Vec<f64>, Fault> {
    let rate = |material| process.rate_of(material).map_or(ASSUMED_RATE, |rate| rate.value);
    let named = library.material(named);
    let base = rate(named);
    if base > 0.0 {
        return Ok(library.materials.iter().map(|material| rate(material) / base).collect());
    }
    Err(Fault::refused(
        format!("{} does not remove {}: its rate is zero", process.name, named.name),
        "name the material that the process removes, or give it a rate in a library file",
    ))
}

fn cure(process: &Process, library: &Library) -> Deed {
    let share = process.shrinks.value;
    let materials: Vec<_> =
        process.materials.iter().filter_map(|name| library.material_id(name)).collect();
    if share > 0.0 && !materials.is_empty() {
        Deed::Shrink { materials, share }
    } else {
        Deed::Nothing
    }
}
