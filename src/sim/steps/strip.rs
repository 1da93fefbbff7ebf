//! `strip`: all of a material that is exposed, and what that uncovers of the same.
//!
//! Connected parts go whole; a void that they bounded lies open then, and what of the material
//! lies in it is exposed in its turn. What stood on them and holds on to nothing else is
//! carried off.

use super::super::Section;
use super::super::error::Fault;
use super::super::surface::touch;
use super::{Bench, Change};
use crate::geom::Region;
use crate::library::MaterialId;

pub(super) fn strip(
    material: MaterialId,
    section: &Section,
    bench: &Bench,
) -> Result<Change, Fault> {
    let bodies = section.bodies.iter().filter(|body| body.material == material);
    let whole = Region::union_all(bodies.map(|body| &body.region));
    let mut hidden: Vec<_> = whole.parts().map(|part| (part, true)).collect();
    hidden.extend(section.voids.iter().map(|void| (void.clone(), false)));
    let mut open = vec![bench.ambient.clone()];
    let mut gone = Vec::new();
    let mut next = 0;
    while next < open.len() {
        let (met, rest): (Vec<_>, Vec<_>) =
            hidden.into_iter().partition(|(region, _)| touch(region, &open[next]));
        hidden = rest;
        for (region, solid) in met {
            if solid {
                gone.push(region.clone());
            }
            open.push(region);
        }
        next += 1;
    }
    let mut change = Change::of(section);
    change.remove(&Region::union_all(&gone), |body| body.material == material);
    change.drop_loose(bench)?;
    change.section.settle();
    Ok(change)
}
