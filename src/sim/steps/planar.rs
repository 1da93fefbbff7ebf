//! `fill`, `mask` and `polish`: what is planar.
//!
//! A fill takes all that the ambient reaches up to its height, under overhangs too. How wide a
//! space is to it is the narrowest way into it, see [`super::super::spaces::throat`].

use super::super::error::Fault;
use super::super::{Event, Section, spaces};
use super::{Bench, Change, above};
use crate::geom::Region;
use crate::library::MaterialId;

pub(super) fn fill(
    material: MaterialId,
    z: f64,
    narrowest: Option<f64>,
    section: &Section,
    bench: &Bench,
) -> Result<Change, Fault> {
    let below = Region::rectangle(section.drawn.walls, [section.bottom(), z.max(section.bottom())]);
    pour(material, &open_up_to(z, &below, section, bench), narrowest, section, bench)
}

pub(super) fn mask(
    material: MaterialId,
    thickness: f64,
    over: &[usize],
    narrowest: Option<f64>,
    section: &Section,
    bench: &Bench,
) -> Result<Change, Fault> {
    let solid = section.solid();
    let strips = over.iter().map(|&at| {
        let x = section.drawn.space(at).x;
        Region::rectangle(x, [section.bottom(), section.surface_top() + 2.0 * thickness])
    });
    let strips = Region::union_all(&strips.collect::<Vec<_>>());
    let surface = solid.intersection(&strips).bounds().map_or(section.bottom(), |b| b.max.z);
    let z = surface + thickness;
    pour(material, &open_up_to(z, &strips, section, bench), narrowest, section, bench)
}

/// What the ambient reaches within `within`, up to a height that may be above the surface.
fn open_up_to(z: f64, within: &Region, section: &Section, bench: &Bench) -> Region {
    let top = section.surface_top();
    let free = Region::rectangle(section.drawn.walls, [top, z.max(top)]);
    bench.ambient.union(&free).difference(&above(z, section)).intersection(within)
}

fn pour(
    material: MaterialId,
    region: &Region,
    narrowest: Option<f64>,
    section: &Section,
    bench: &Bench,
) -> Result<Change, Fault> {
    if let Some(narrowest) = narrowest {
        for at in 0..section.drawn.space_count() {
            if spaces::reached(section, region, at).is_empty() {
                continue;
            }
            if let Some(width) = spaces::throat(section, &bench.ambient, at)
                && width < narrowest
            {
                let name = &bench.library.material(material).name;
                return Err(Fault::refused(
                    format!(
                        "{name} does not enter a space {width:.2} nm wide: its process fills down \
                         to {narrowest} nm"
                    ),
                    "widen the space, thin the films in it, or use a process that fills narrower \
                     spaces",
                ));
            }
        }
    }
    let mut change = Change::of(section);
    change.add(material, region.difference(&section.solid()), bench.step);
    change.section.settle();
    Ok(change)
}

pub(super) fn polish(z: f64, section: &Section) -> Change {
    let mut change = Change::of(section);
    change.events.push(Event::Planed { z_nm: z, surface_nm: section.surface_top() });
    change.remove(&above(z, section), |_| true);
    change.section.settle();
    change
}
