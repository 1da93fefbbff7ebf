//! `etch` and `convert`: a front moves into what is exposed.
//!
//! Each material is one solid of the front's scene, with its rate over that of the named one;
//! what `only at` spares is a solid that does not move. Bulk is deepened beforehand as far as
//! the etch could reach. What loses its hold is carried off.

use super::super::error::Fault;
use super::super::operation::Erode;
use super::super::{Origin, Section};
use super::{Bench, Change};
use crate::front::{self, Character, Scene, Solid};
use crate::geom::Region;
use crate::library::MaterialId;
use crate::num::tolerance::SLIVER_NM;

pub(super) fn erode(erode: &Erode, section: &Section, bench: &Bench) -> Result<Change, Fault> {
    let section = deepened(section, erode, erode.depth);
    let (scene, materials) = scene(&section, &erode.rates, bench);
    let erosion = front::erode(&scene, &erode.character, erode.depth, &bench.resolution)?;
    let mut change = Change::of(&section);
    for (material, removed) in materials.iter().zip(&erosion.removed) {
        change.remove(removed, |body| body.material == *material);
    }
    let bottom = section.bottom();
    let through = erosion.removed.iter().filter_map(Region::bounds);
    if through.map(|b| b.min.z).any(|z| z <= bottom + SLIVER_NM) {
        return Err(Fault::refused(
            "the etch goes through everything that the wafer draws",
            "draw what lies below, as `bulk` or `film`, or etch less",
        ));
    }
    change.drop_loose(bench)?;
    change.section.settle();
    Ok(change)
}

/// The depth at which the first body of a material is reached; `None` where it is not.
pub(in super::super) fn reach(
    erode: &Erode,
    stop: MaterialId,
    section: &Section,
    bench: &Bench,
) -> Result<Option<f64>, Fault> {
    let [left, right] = section.drawn.walls;
    let limit = 4.0 * (section.surface_top() - section.bottom() + right - left);
    let (scene, materials) = scene(section, &erode.rates, bench);
    let stops: Vec<_> = (0..materials.len()).filter(|&at| materials[at] == stop).collect();
    if stops.is_empty() {
        return Ok(None);
    }
    Ok(front::depth_to_reach(&scene, &erode.character, &stops, limit, &bench.resolution)?)
}

pub(super) fn convert(
    [from, to]: [MaterialId; 2],
    character: Character,
    depth: f64,
    section: &Section,
    bench: &Bench,
) -> Result<Change, Fault> {
    let mut rates = vec![0.0; bench.library.materials.len()];
    rates[from.0] = 1.0;
    let (scene, materials) = scene(section, &rates, bench);
    let erosion = front::erode(&scene, &character, depth, &bench.resolution)?;
    let mut change = Change::of(section);
    for (material, reached) in materials.iter().zip(&erosion.removed) {
        if *material != from || reached.is_empty() {
            continue;
        }
        let seams = change.section.seams.clone();
        change.remove(reached, |body| body.material == from);
        change.section.seams = seams;
        change.add(to, reached.clone(), bench.step);
    }
    change.section.settle();
    Ok(change)
}

/// The scene, and the materials of its first solids.
fn scene(section: &Section, rates: &[f64], bench: &Bench) -> (Scene, Vec<MaterialId>) {
    let mut materials: Vec<_> = section.bodies.iter().map(|body| body.material).collect();
    materials.sort_unstable();
    materials.dedup();
    let solid = |&material: &MaterialId| {
        let bodies = section.bodies.iter().filter(|body| body.material == material);
        Solid {
            region: Region::union_all(bodies.map(|body| &body.region)),
            rate: rates[material.0],
        }
    };
    let mut solids: Vec<_> = materials.iter().map(solid).collect();
    if !bench.blocked.is_empty() {
        solids.push(Solid { region: bench.blocked.clone(), rate: 0.0 });
    }
    (Scene { walls: section.drawn.walls, solids }, materials)
}

/// The section with its bulk as deep as an etch could need.
fn deepened(section: &Section, erode: &Erode, depth: f64) -> Section {
    let mut section = section.clone();
    let walls = section.drawn.walls;
    let open = section.ambient().bounds().map_or(0.0, |b| b.min.z);
    if let Some(bulk) = section.bodies.iter_mut().find(|body| body.origin == Origin::Bulk) {
        let reach = 2.0 * depth * erode.rates[bulk.material.0];
        let bottom = bulk.region.bounds().map_or(0.0, |b| b.min.z);
        let needed = open - reach - (walls[1] - walls[0]);
        if needed < bottom {
            let more = Region::rectangle(walls, [needed, bottom]);
            bulk.region = bulk.region.union(&more);
        }
    }
    section
}
