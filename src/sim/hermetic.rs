//! Whether every way out of a void meets a hermetic film thick enough.
//!
//! What stops a gas: conductors, semiconductors, bulk, and the parts of hermetic films that a
//! disc of the film's least hermetic thickness fits into. What is left is cut into connected parts; a void
//! whose part reaches the ambient has a way out. Films of several hermetic materials on each
//! other count together, by the greater of their least thicknesses. The disc is a polygon and
//! films carry the error of growth, so the thickness is held to one per cent. Nothing leaves
//! through the lower edge of the section: the wafer lies there. Cost: one boolean where the
//! films would not do at any thickness, else a few more.

use super::morphology::opened;
use super::{Origin, Section};
use crate::geom::Region;
use crate::library::{Library, Material, Passes};
use crate::num::tolerance::{HERMETIC_FROM_NM, HERMETIC_SLACK};

/// Whether no way leads from the void to the ambient except through what is hermetic.
pub(super) fn is_shut_in(
    section: &Section,
    ambient: &Region,
    void: &Region,
    library: &Library,
) -> bool {
    let tight = |keep: &dyn Fn(&Material, Origin) -> bool| {
        let bodies = section.bodies.iter();
        let kept = bodies.filter(|body| keep(library.material(body.material), body.origin));
        Region::union_all(kept.map(|body| &body.region))
    };
    let walls = tight(&|material, origin| material.kind.conducts() || origin == Origin::Bulk);
    let mut thresholds: Vec<f64> = section
        .bodies
        .iter()
        .filter_map(|body| least_thickness(library.material(body.material)))
        .collect();
    thresholds.sort_by(f64::total_cmp);
    thresholds.dedup();
    let any = tight(&|material, _| least_thickness(material).is_some()).union(&walls);
    if leads_out(section, ambient, void, &any) {
        return false;
    }
    let mut barrier = walls.clone();
    for threshold in thresholds {
        let films =
            tight(&|material, _| least_thickness(material).is_some_and(|least| least <= threshold));
        let width = threshold * (1.0 - HERMETIC_SLACK);
        let thick = opened(&films.union(&walls), width, section.drawn.walls);
        barrier = barrier.union(&thick);
    }
    !leads_out(section, ambient, void, &barrier)
}

/// The thickness from which a material is hermetic, in nm, if it ever is.
fn least_thickness(material: &Material) -> Option<f64> {
    let hermetic = material.passes == Some(Passes::Hermetic) && !material.kind.conducts();
    hermetic.then(|| material.hermetic_from_nm.map_or(HERMETIC_FROM_NM, |from| from.value))
}

fn leads_out(section: &Section, ambient: &Region, void: &Region, barrier: &Region) -> bool {
    let window = Region::rectangle(section.drawn.walls, [section.bottom(), section.sky()]);
    let passable = window.difference(barrier);
    let reaches = |part: &Region, goal: &Region| !part.intersection(goal).is_empty();
    passable.parts().any(|part| reaches(&part, void) && reaches(&part, ambient))
}
