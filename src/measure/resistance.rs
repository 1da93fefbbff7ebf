//! `resistance` of a line per length: its conductors as parallel paths.
//!
//! Core, liner and stacked layers carry their currents side by side: 1/R = Σ A/ρ. Each path has
//! the resistivity of its own width (at half of its height; for a liner the thickness of one
//! wall) and height. Contact resistance between the paths and current crowding are not in.

use super::Figure;
use super::geometry::Traced;
use super::reading::{Missing, Reading, Unclear};
use super::resistivity::{Metal, SizeEffect};
use crate::geom::Region;
use crate::library::{Kind, Library, Material};
use crate::sim::{Origin, Section, Stage};

/// One conductor of a line.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Path {
    /// Its metal.
    pub metal: Metal,
    /// Its width at half of its height, nm.
    pub width_nm: f64,
    /// Its height, nm.
    pub height_nm: f64,
    /// Its area, nm².
    pub area_nm2: f64,
}

impl Path {
    /// The conductor of a metal that fills a region; `None` where the region is empty.
    pub fn of(metal: Metal, region: &Region) -> Option<Self> {
        let bounds = region.bounds()?;
        let height_nm = bounds.max.z - bounds.min.z;
        let row = region.row(bounds.min.z + height_nm / 2.0);
        let width_nm = row.iter().map(|[left, right]| right - left).reduce(f64::min)?;
        Some(Self { metal, width_nm, height_nm, area_nm2: region.area() })
    }
}

impl Metal {
    /// The numbers of a material; `None` where it does not conduct or has no resistivity.
    pub fn of(material: &Material) -> Option<Self> {
        let bulk = material.resistivity_uohm_cm.filter(|_| material.kind == Kind::Conductor)?;
        let size_effect = material.mean_free_path_nm.map(|path| SizeEffect {
            mean_free_path_nm: path.value,
            specularity: material.surface_specularity.map_or(0.0, |p| p.value),
            reflection: material.grain_reflection.map_or(0.0, |r| r.value),
            grain_size_nm: material.grain_size_nm.map(|size| size.value),
        });
        Some(Self { bulk_uohm_cm: bulk.value, size_effect })
    }
}

/// Resistance of parallel paths in ohm/µm; `None` without any.
pub fn resistance_ohm_per_um(paths: &[Path]) -> Option<f64> {
    /// ohm/µm of one nm² of one µΩ cm.
    const OHM_PER_UM: f64 = 1e4;
    let conductance: f64 = paths
        .iter()
        .map(|path| path.area_nm2 / path.metal.resistivity_uohm_cm(path.width_nm, path.height_nm))
        .sum();
    (conductance > 0.0).then(|| OHM_PER_UM / conductance)
}

/// The resistance of a site's line, in ohm/µm; the two traces differ where a step ate into it.
pub(super) fn reading(traced: &Traced<'_>) -> Reading {
    let of = |stages: &[Stage]| {
        let section = &stages.last()?.section;
        Some(line_resistance_ohm_per_um(section, traced.line(), &traced.flow.library))
    };
    match (of(traced.coarse), of(traced.fine)) {
        (Some(Ok(coarse)), Some(Ok(fine))) => {
            Reading::Known(Figure::within(fine, (fine - coarse).abs()))
        }
        (Some(Err(missing)), _) | (_, Some(Err(missing))) => Reading::Missing(missing),
        _ => Reading::Unclear(Unclear::NotAsked),
    }
}

/// Resistance in ohm/µm of a line of a section (from 0, left to right): its layers and its liner.
///
/// # Errors
/// No conductor in the line, or one without resistivity.
pub fn line_resistance_ohm_per_um(
    section: &Section,
    line: usize,
    library: &Library,
) -> Result<f64, Missing> {
    let own = |origin: Origin| match origin {
        Origin::Line { line: of, .. } | Origin::Liner(of) => of == line,
        _ => false,
    };
    let mut paths = Vec::new();
    for body in section.bodies.iter().filter(|body| own(body.origin)) {
        let material = library.material(body.material);
        if material.kind == Kind::Conductor {
            let metal = Metal::of(material).ok_or(Missing::NoNumber)?;
            paths.extend(Path::of(metal, &body.region));
        }
    }
    resistance_ohm_per_um(&paths).ok_or(Missing::NoConductor)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::library::Library;

    fn bulk(resistivity: f64) -> Metal {
        Metal { bulk_uohm_cm: resistivity, size_effect: None }
    }

    /// Hand calculation: 2 µΩ cm over 1000 nm² is 2e-8 Ωm / 1e-15 m² = 20 ohm/µm.
    #[test]
    fn a_bar_has_resistivity_over_area() {
        let bar = Path::of(bulk(2.0), &Region::rectangle([0.0, 20.0], [0.0, 50.0])).unwrap();
        assert_eq!((bar.width_nm, bar.height_nm), (20.0, 50.0));
        assert!((resistance_ohm_per_um(&[bar]).unwrap() - 20.0).abs() < 1e-9);
        let half = Path::of(bulk(4.0), &Region::rectangle([0.0, 20.0], [50.0, 100.0])).unwrap();
        assert!((resistance_ohm_per_um(&[bar, half]).unwrap() - 40.0 / 3.0).abs() < 1e-9);
        assert_eq!(resistance_ohm_per_um(&[]), None);
    }

    #[test]
    fn a_liner_is_as_wide_as_one_wall() {
        let drawn = Region::rectangle([0.0, 32.0], [0.0, 96.0]);
        let liner = drawn.difference(&Region::rectangle([2.0, 30.0], [2.0, 96.0]));
        let path = Path::of(bulk(220.0), &liner).unwrap();
        assert!((path.width_nm - 2.0).abs() < 1e-5, "{}", path.width_nm);
        assert!((path.area_nm2 - (32.0 * 96.0 - 28.0 * 94.0)).abs() < 1e-2);
    }

    #[test]
    fn metals_of_the_library_have_their_numbers() {
        let library = Library::built_in();
        let metal = |name: &str| Metal::of(library.material(library.material_id(name).unwrap()));
        let copper = metal("Cu").unwrap();
        assert!(copper.resistivity_uohm_cm(28.0, 90.0) > 2.0 * copper.bulk_uohm_cm);
        assert_eq!(metal("TaN").unwrap().size_effect, None);
        assert_eq!(metal("SiCOH"), None);
        assert_eq!(metal("Si"), None);
    }
}
