//! From the section that the field sees to outlines.

use super::{OutlinedRegion, OutlinedSection};
use crate::field::Role;
use crate::geom::Region;
use crate::library::Library;
use crate::measure::FieldSection;

impl OutlinedSection {
    /// The section with its materials, permittivities and electrodes by name, so that `field`
    /// answers with the very matrix that `check` found, whatever library it loads.
    pub fn of(section: &FieldSection, library: &Library) -> Self {
        let problem = &section.problem;
        let mut regions: Vec<OutlinedRegion> = Vec::with_capacity(problem.bodies.len());
        let mut floating: Vec<(usize, usize)> = Vec::new();
        for (body, material) in problem.bodies.iter().zip(&section.materials) {
            let name = material.map(|id| library.material(id).name.clone());
            let region = body.region.clone();
            let outlined = match body.role {
                // What no region covers is vacuum.
                Role::Dielectric(_) if name.is_none() => continue,
                Role::Dielectric(k) => OutlinedRegion {
                    region,
                    material: name,
                    permittivity: Some(k),
                    electrode: None,
                },
                Role::Electrode(at) => OutlinedRegion {
                    region,
                    material: name,
                    permittivity: None,
                    electrode: Some(section.electrodes[at].clone()),
                },
                Role::Floating(conductor) => {
                    // One conductor is one feature: the file has no other name for it.
                    if let Some((_, at)) = floating.iter().find(|(known, _)| *known == conductor) {
                        let joined = Region::union_all([&regions[*at].region, &region]);
                        regions[*at].region = joined;
                        continue;
                    }
                    floating.push((conductor, regions.len()));
                    OutlinedRegion { region, material: name, permittivity: None, electrode: None }
                }
            };
            regions.push(outlined);
        }
        Self { x: problem.x, z: problem.z, top: problem.top, bottom: problem.bottom, regions }
    }
}
