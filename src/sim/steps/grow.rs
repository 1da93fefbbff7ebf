//! `deposit`, `seal` and `cap`: a film grows on all that the ambient reaches.
//!
//! The front moves in the filled solid (voids are no surface). Where growth depends on what
//! lies beneath, each rate is a solid of its own. A film whose dose is limited grows at its full
//! rate down to the depth that the dose reaches, counted from the mouth of the space (the
//! surface over its lines) by the width of its throat, and not at all below. Enclosed regions
//! that no disc of the closure width fits into are seams, solid film.

use super::super::error::Fault;
use super::super::morphology::holds_disc;
use super::super::operation::Deed;
use super::super::{Event, Seam, Section, spaces};
use super::{Bench, Change};
use crate::front::{self, Scene, Solid};
use crate::geom::Region;

pub(super) fn grow(deed: &Deed, section: &Section, bench: &Bench) -> Result<Change, Fault> {
    let Deed::Grow { material, character, thickness, growth_on, dose_aspect } = deed else {
        return Err(Fault::Internal("grow was asked for something else".to_owned()));
    };
    let mut solids = match growth_on {
        None => {
            let window = Region::rectangle(section.drawn.walls, [section.bottom(), section.sky()]);
            vec![Solid { region: window.difference(&bench.ambient), rate: 1.0 }]
        }
        Some(rates) => by_rate(section, rates),
    };
    if let Some(aspect) = dose_aspect {
        solids = within_reach(solids, *aspect, section, &bench.ambient);
    }
    let scene = Scene { walls: section.drawn.walls, solids };
    let growth = front::grow(&scene, character, *thickness, &bench.resolution)?;
    let filled = Region::union_all(scene.solids.iter().map(|solid| &solid.region));
    let mut film = growth.film.difference(&filled);

    let mut after = section.clone();
    let mut change = Change::of(section);
    after.bodies.push(super::Body {
        material: *material,
        origin: super::Origin::Step(bench.step),
        region: film.clone(),
    });
    let closure = bench.resolution.closure_width_nm;
    let seams: Vec<_> = after
        .empty()
        .1
        .into_iter()
        .filter(|part| part.intersection(&filled).is_empty())
        .filter(|part| !holds_disc(part, closure, section.drawn.walls))
        .collect();
    if !seams.is_empty() {
        film = Region::union_all(seams.iter().chain([&film]));
    }
    change.add(*material, film, bench.step);
    for closed in growth.closures {
        if closed.seam.len() > 1 {
            change.section.seams.push(Seam { points: closed.seam, step: bench.step });
        }
        change.events.push(Event::Closed {
            space: section.drawn.space_at(closed.throat.x),
            thickness_nm: closed.thickness_nm,
            throat: closed.throat,
            void: closed.void,
        });
    }
    change.section.settle();
    Ok(change)
}

/// One solid for each rate of growth, and one for the voids, which no species reach.
fn by_rate(section: &Section, rates: &[f64]) -> Vec<Solid> {
    let rate_of = |body: &super::Body| rates[body.material.0];
    let mut distinct: Vec<_> = section.bodies.iter().map(rate_of).collect();
    distinct.sort_by(f64::total_cmp);
    distinct.dedup();
    let mut solids: Vec<_> = distinct
        .into_iter()
        .map(|rate| {
            let bodies = section.bodies.iter().filter(|body| rate_of(body) == rate);
            Solid { region: Region::union_all(bodies.map(|body| &body.region)), rate }
        })
        .collect();
    if !section.voids.is_empty() {
        solids.push(Solid { region: Region::union_all(&section.voids), rate: 0.0 });
    }
    solids
}

/// The solids with all below the reach of the dose at rate zero.
fn within_reach(
    solids: Vec<Solid>,
    aspect: f64,
    section: &Section,
    ambient: &Region,
) -> Vec<Solid> {
    let mouth = section.surface_top();
    let shadows = (0..section.drawn.space_count()).filter_map(|at| {
        let width = spaces::throat(section, ambient, at).filter(|width| width.is_finite())?;
        let floor = mouth - 2.0 * aspect * width;
        let x = section.drawn.space(at).x;
        (floor > section.bottom()).then(|| Region::rectangle(x, [section.bottom(), floor]))
    });
    let shadow = Region::union_all(&shadows.collect::<Vec<_>>());
    if shadow.is_empty() {
        return solids;
    }
    let mut split: Vec<_> = solids
        .iter()
        .map(|solid| Solid { region: solid.region.difference(&shadow), rate: solid.rate })
        .collect();
    let whole = Region::union_all(solids.iter().map(|solid| &solid.region));
    split.push(Solid { region: whole.intersection(&shadow), rate: 0.0 });
    split.retain(|solid| !solid.region.is_empty());
    split
}
