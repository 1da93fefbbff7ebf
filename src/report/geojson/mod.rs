//! A section as GeoJSON (RFC 7946): plane coordinates in nm, x across, y up.
//!
//! `read` and `write` are each other's inverse. [`OutlinedSection::problem`] looks the
//! materials up and hands the section to the field.

mod read;
mod section;
mod write;

use thiserror::Error;

use crate::field::{Body, Edge, FieldError, Problem, Role};
use crate::geom::Region;
use crate::library::Library;

pub use read::read;
pub use write::write;

/// Outlines with what they are, as the file gives them.
#[derive(Debug, Clone, PartialEq)]
pub struct OutlinedSection {
    /// Left and right edge, in nm: mirrors.
    pub x: [f64; 2],
    /// Bottom and top edge, in nm.
    pub z: [f64; 2],
    /// The upper edge.
    pub top: Edge,
    /// The lower edge.
    pub bottom: Edge,
    /// The regions, later ones over earlier ones.
    pub regions: Vec<OutlinedRegion>,
}

/// One region of the file.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct OutlinedRegion {
    /// Where it is.
    pub region: Region,
    /// Name of its material in the library.
    pub material: Option<String>,
    /// Relative permittivity; goes before that of the material.
    pub permittivity: Option<f64>,
    /// Name of the conductor that it belongs to.
    pub electrode: Option<String>,
}

/// A defect of the file, with its place.
#[derive(Debug, Clone, PartialEq, Error)]
#[error("{place}: {message}")]
pub struct GeoJsonError {
    /// Where: a line and column for what is not JSON, else the path of the member.
    pub place: String,
    /// What is wrong and what to do about it.
    pub message: String,
}

/// A problem with the names of its electrodes.
#[derive(Debug, Clone)]
pub struct NamedProblem {
    /// What to solve.
    pub problem: Problem,
    /// Names by index of electrode, in the order in which the file first names them.
    pub electrodes: Vec<String>,
}

impl OutlinedSection {
    /// The section as a problem of the field. Conductors that no electrode names float.
    ///
    /// # Errors
    /// Every region whose material is unknown or has no permittivity.
    pub fn problem(&self, library: &Library) -> Result<NamedProblem, Vec<GeoJsonError>> {
        let mut electrodes: Vec<String> = Vec::new();
        let mut bodies = Vec::with_capacity(self.regions.len());
        let mut errors = Vec::new();
        for (index, region) in self.regions.iter().enumerate() {
            let role = match &region.electrode {
                Some(name) => {
                    let known = electrodes.iter().position(|known| known == name);
                    Ok(Role::Electrode(known.unwrap_or_else(|| {
                        electrodes.push(name.clone());
                        electrodes.len() - 1
                    })))
                }
                None => insulator(region, index, library),
            };
            match role {
                Ok(role) => bodies.push(Body { region: region.region.clone(), role }),
                Err(message) => errors.push(GeoJsonError {
                    place: format!("features[{index}].properties.material"),
                    message,
                }),
            }
        }
        if !errors.is_empty() {
            return Err(errors);
        }
        let problem = Problem {
            x: self.x,
            z: self.z,
            top: self.top,
            bottom: self.bottom,
            bodies,
            electrodes: electrodes.len(),
        };
        Ok(NamedProblem { problem, electrodes })
    }
}

/// What a region without an electrode is to the field.
fn insulator(region: &OutlinedRegion, index: usize, library: &Library) -> Result<Role, String> {
    if let Some(permittivity) = region.permittivity {
        return Ok(Role::Dielectric(permittivity));
    }
    let name = region.material.as_deref().unwrap_or_default();
    let Some(id) = library.material_id(name) else {
        return Err(format!(
            "no material `{name}` in the library; name one of it, or give `permittivity`"
        ));
    };
    let material = library.material(id);
    if material.kind.conducts() {
        return Ok(Role::Floating(index));
    }
    material
        .permittivity
        .map(|k| Role::Dielectric(k.value))
        .ok_or_else(|| format!("the library has no permittivity for `{name}`; give `permittivity`"))
}

impl NamedProblem {
    /// The regions of an electrode, by their place in the file.
    fn features_of(&self, electrode: usize) -> String {
        let bodies = self.problem.bodies.iter().enumerate();
        let own = bodies.filter(|(_, body)| body.role == Role::Electrode(electrode));
        own.map(|(at, _)| format!("features[{at}]")).collect::<Vec<_>>().join(", ")
    }

    /// An error of the solver in the words of the file.
    pub fn explain(&self, error: &FieldError) -> String {
        let name = |index: &usize| self.electrodes.get(*index).map_or("?", String::as_str);
        match error {
            FieldError::NoElectrode => {
                "no region has the property `electrode`; name at least one conductor".into()
            }
            FieldError::ElectrodeAbsent(electrode) => format!(
                "{}: electrode `{}` has no area inside the section, or other regions cover it",
                self.features_of(*electrode),
                name(electrode)
            ),
            FieldError::ElectrodesTouch { first, second, at_nm: [x, z] } => format!(
                "{}, {}: electrode `{}` touches electrode `{}` at ({x:.3}, {z:.3}) nm; give them \
                 one name or a gap",
                self.features_of(*first),
                self.features_of(*second),
                name(first),
                name(second)
            ),
            other => other.to_string(),
        }
    }
}
