//! What each verb does to a section. A file a verb, or a few of one kind.
//!
//! A verb takes the section as it is and gives the section after, with the area that each
//! material gained or lost, which [`Change::balances`] holds against the sections themselves.

mod erode;
mod grow;
mod planar;
mod release;
mod shrink;
mod strip;
mod via;

pub(super) use erode::reach;
pub(super) use release::passes_up_to;
pub(super) use via::slots;

use super::error::Fault;
use super::operation::{Deed, Operation};
use super::section::is_thinner_than;
use super::{Body, Event, Origin, Section, seam};
use crate::front::Resolution;
use crate::geom::Region;
use crate::library::{Library, MaterialId};
use crate::num::tolerance::{AREA_BALANCE_NM, SLIVER_NM};

/// What a verb works with, besides the section.
pub(super) struct Bench<'a> {
    /// Materials by number, for messages and `passes`.
    pub library: &'a Library,
    /// How finely fronts move.
    pub resolution: Resolution,
    /// The ambient that the step finds, without what it spares.
    pub ambient: Region,
    /// Empty region that the step must leave alone.
    pub blocked: Region,
    /// Index of the step.
    pub step: usize,
}

/// What a verb did.
#[derive(Debug, Clone)]
pub(super) struct Change {
    /// The section after it.
    pub section: Section,
    /// What happened, but for what shows in the voids.
    pub events: Vec<Event>,
    /// Area of each material before, in nm².
    before: Vec<(MaterialId, f64)>,
    /// Area that materials gained, and lost (negative), in nm².
    ledger: Vec<(MaterialId, f64)>,
    /// Length of the outlines that the step made, for the rounding of areas, in nm.
    outline: f64,
}

/// Does an operation.
pub(super) fn apply(
    operation: &Operation,
    section: &Section,
    bench: &Bench,
) -> Result<Change, Fault> {
    let change = match &operation.deed {
        Deed::Nothing | Deed::Via(_) => Ok(Change::of(section)),
        Deed::Grow { .. } => grow::grow(&operation.deed, section, bench),
        Deed::Erode(erode) => erode::erode(erode, section, bench),
        Deed::Convert { from, to, character, depth } => {
            erode::convert([*from, *to], *character, *depth, section, bench)
        }
        Deed::Mask { material, thickness, over, narrowest } => {
            planar::mask(*material, *thickness, over, *narrowest, section, bench)
        }
        Deed::Fill { material, z, narrowest } => {
            planar::fill(*material, *z, *narrowest, section, bench)
        }
        Deed::Release { material, passes, drawn_openings } => {
            release::release(*material, passes, *drawn_openings, section, bench)
        }
        Deed::Strip { material } => strip::strip(*material, section, bench),
        Deed::Polish { z } => Ok(planar::polish(*z, section)),
        Deed::Shrink { materials, share } => Ok(shrink::shrink(materials, *share, section, bench)),
    }?;
    change.balances()?;
    Ok(change)
}

impl Change {
    /// No change yet.
    fn of(section: &Section) -> Self {
        let outline = outline(section.bodies.iter().map(|body| &body.region));
        let mut materials: Vec<_> = section.bodies.iter().map(|body| body.material).collect();
        materials.sort_unstable();
        materials.dedup();
        let before = materials.into_iter().map(|m| (m, section.area_of(m))).collect();
        let section = section.clone();
        Self { section, events: Vec::new(), before, ledger: Vec::new(), outline }
    }

    /// Takes what lies in `region` away from the bodies for which `from` holds, and from seams.
    fn remove(&mut self, region: &Region, from: impl Fn(&Body) -> bool) {
        self.outline += outline([region]);
        for body in self.section.bodies.iter_mut().filter(|body| from(body)) {
            let gone = body.region.intersection(region);
            if !gone.is_empty() {
                self.ledger.push((body.material, -gone.area()));
                body.region = body.region.difference(region);
            }
        }
        let walls = self.section.drawn.walls;
        self.section.seams = seam::cut(&self.section.seams, region, walls);
    }

    /// Adds a body of the step.
    fn add(&mut self, material: MaterialId, region: Region, step: usize) {
        if !region.is_empty() {
            self.outline += outline([&region]);
            self.ledger.push((material, region.area()));
            self.section.bodies.push(Body { material, origin: Origin::Step(step), region });
        }
    }

    /// Whether any area changed by more than rounding.
    pub(super) fn changed(&self) -> bool {
        self.ledger.iter().any(|(_, area)| area.abs() > AREA_BALANCE_NM * self.outline)
    }

    /// Takes away what lost its hold on the ground; a line that does is an error.
    ///
    /// Lines are held along their length in truth, but a section of a line in mid-air has no
    /// meaning for what follows.
    fn drop_loose(&mut self, bench: &Bench) -> Result<(), Fault> {
        let bottom = self.section.bottom();
        let loose: Vec<_> = self
            .section
            .solid()
            .parts()
            .filter(|part| part.bounds().is_some_and(|b| b.min.z > bottom + SLIVER_NM))
            .collect();
        for part in loose {
            let of_line = self.section.bodies.iter().find(|body| {
                matches!(body.origin, Origin::Line { .. } | Origin::Liner(_))
                    && !body.region.intersection(&part).is_empty()
            });
            if let (Some(body), false) = (of_line, is_thinner_than(&part, SLIVER_NM)) {
                let name = &bench.library.material(body.material).name;
                return Err(Fault::refused(
                    format!("nothing is left under a line of {name}"),
                    "remove less below the lines; what hangs on their ends is outside a section",
                ));
            }
            self.remove(&part, |_| true);
        }
        Ok(())
    }

    /// Nothing leaks: every material's area changed by what the step added and removed.
    fn balances(&self) -> Result<(), Fault> {
        let mut expected = self.before.clone();
        for &(material, area) in &self.ledger {
            match expected.iter_mut().find(|(of, _)| *of == material) {
                Some((_, sum)) => *sum += area,
                None => expected.push((material, area)),
            }
        }
        for (material, expected) in expected {
            let found = self.section.area_of(material);
            let error = (found - expected).abs();
            if error.is_nan() || error > AREA_BALANCE_NM * self.outline {
                return Err(Fault::Internal(format!(
                    "material {} takes {found:.6} nm² where {expected:.6} nm² are accounted for",
                    material.0
                )));
            }
        }
        Ok(())
    }
}

fn outline<'a>(regions: impl IntoIterator<Item = &'a Region>) -> f64 {
    regions.into_iter().flat_map(Region::edges).map(|(a, b)| a.distance(b)).sum()
}

/// The region above a height, to well over everything.
fn above(z: f64, section: &Section) -> Region {
    Region::rectangle(section.drawn.walls, [z, section.sky().max(z) + 1.0])
}
