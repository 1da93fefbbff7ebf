//! `release`: a sacrificial material leaves through open space and what lets it pass.
//!
//! A connected part goes when a way leads from it to the ambient on which no more is to be
//! passed than the layers allow, see [`super::super::passage`]; the material itself and voids
//! are free to cross. With drawn openings along the line it always goes. What remains is a
//! void, or open where the material was exposed. A part that must stay is reported.

use super::super::error::Fault;
use super::super::passage::{Layer, least_share};
use super::super::{Event, Section};
use super::{Bench, Change};
use crate::geom::Region;
use crate::library::{Material, MaterialId, Passes};

pub(super) fn release(
    material: MaterialId,
    passes: &[f64],
    drawn_openings: bool,
    section: &Section,
    bench: &Bench,
) -> Result<Change, Fault> {
    let leaving = section.bodies.iter().filter(|body| body.material == material);
    let parts: Vec<_> = Region::union_all(leaving.map(|body| &body.region)).parts().collect();
    let mut change = Change::of(section);
    let mut gone = Vec::new();
    let layers = layers(material, passes, section);
    for (at, part) in parts.iter().enumerate() {
        let others = parts.iter().enumerate().filter(|&(other, _)| other != at);
        let free: Vec<_> = others.map(|(_, other)| other).chain(&section.voids).collect();
        let share = if drawn_openings {
            Some(0.0)
        } else {
            least_share(part, &bench.ambient, &free, &layers)
        };
        if share.is_some_and(|share| share <= 1.0) {
            gone.push(part.clone());
        } else {
            change.events.push(Event::Trapped { region: part.clone(), share });
        }
    }
    change.remove(&Region::union_all(&gone), |body| body.material == material);
    change.drop_loose(bench)?;
    change.section.settle();
    Ok(change)
}

/// Thickness of a material through which a decomposed one leaves, in nm; zero: none.
pub(in super::super) fn passes_up_to(material: &Material) -> f64 {
    let open_ended = match material.passes {
        Some(Passes::Permeable | Passes::Open) => f64::INFINITY,
        Some(Passes::Low | Passes::Hermetic) | None => 0.0,
    };
    material.passes_up_to_nm.map_or(open_ended, |limit| limit.value)
}

/// What lets the material pass, joined where it allows the same thickness.
fn layers(leaving: MaterialId, passes: &[f64], section: &Section) -> Vec<Layer> {
    let others = || section.bodies.iter().filter(|body| body.material != leaving);
    let mut limits: Vec<_> = others().map(|body| passes[body.material.0]).collect();
    limits.retain(|limit| *limit > 0.0);
    limits.sort_by(f64::total_cmp);
    limits.dedup();
    let regions = limits.into_iter().flat_map(|limit| {
        let bodies = others().filter(|body| passes[body.material.0] == limit);
        let whole = Region::union_all(bodies.map(|body| &body.region));
        whole.parts().map(|region| Layer { region, limit }).collect::<Vec<_>>()
    });
    regions.collect()
}
