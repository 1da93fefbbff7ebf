//! A symmetric cell is computed as its right half and unfolded for everyone else.
//!
//! The axis is x = 0, the middle of the line. What touches it becomes one with its mirror
//! image; what does not comes twice, left first. So a symmetric cell stays symmetric exactly.

use super::{Body, Event, Seam, Section};
use crate::geom::{Point, Region};
use crate::num::tolerance::SLIVER_NM;

/// The whole section of a right half.
pub(super) fn unfold(half: &Section) -> Section {
    let mut drawn = half.drawn.clone();
    drawn.walls[0] = -drawn.walls[1];
    let body = |body: &Body| {
        let region = body.region.union(&body.region.mirrored(0.0));
        Body { material: body.material, origin: body.origin, region }
    };
    let mirrored = |seam: &Seam| {
        let points = seam.points.iter().map(|p| Point::new(-p.x, p.z)).collect();
        Seam { points, step: seam.step }
    };
    let on_axis = |seam: &Seam| seam.points.iter().all(|p| p.x.abs() <= SLIVER_NM);
    let left = half.seams.iter().filter(|seam| !on_axis(seam)).map(mirrored);
    Section {
        drawn,
        bodies: half.bodies.iter().map(body).collect(),
        seams: left.chain(half.seams.iter().cloned()).collect(),
        voids: unfold_regions(&half.voids),
    }
}

/// Regions of the right half and their mirror images, left to right.
fn unfold_regions(right: &[Region]) -> Vec<Region> {
    let (on_axis, apart): (Vec<_>, Vec<_>) = right.iter().partition(|region| touches_axis(region));
    let left = apart.iter().rev().map(|region| region.mirrored(0.0));
    let middle = on_axis.iter().map(|region| region.union(&region.mirrored(0.0)));
    left.chain(middle).chain(apart.iter().map(|region| (*region).clone())).collect()
}

fn touches_axis(region: &Region) -> bool {
    region.bounds().is_some_and(|b| b.min.x <= SLIVER_NM)
}

/// The events of the whole cell.
pub(super) fn unfold_events(right: Vec<Event>) -> Vec<Event> {
    right.into_iter().flat_map(unfold_event).collect()
}

fn unfold_event(event: Event) -> Vec<Event> {
    let other = |region: &Region| region.mirrored(0.0);
    match event {
        Event::Closed { thickness_nm, throat, void, .. } => {
            let at = |space, throat, void| Event::Closed { space, thickness_nm, throat, void };
            vec![at(0, Point::new(-throat.x, throat.z), other(&void)), at(1, throat, void)]
        }
        Event::Opened { void, .. } => {
            let at = |space, void| Event::Opened { space, void };
            vec![at(0, other(&void)), at(1, void)]
        }
        Event::Trapped { region, share } if touches_axis(&region) => {
            vec![Event::Trapped { region: region.union(&other(&region)), share }]
        }
        Event::Trapped { region, share } => {
            vec![Event::Trapped { region: other(&region), share }, Event::Trapped { region, share }]
        }
        one @ (Event::Planed { .. } | Event::Via { .. } | Event::NoEffect) => vec![one],
    }
}
