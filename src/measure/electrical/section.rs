//! The section that the field sees, named: what a reader may take elsewhere.

use super::problem::{Above, Filling};
use super::{Stop, pose};
use crate::field::{Body, Problem, Role};
use crate::flow::{Flow, Site, Variant};
use crate::library::MaterialId;
use crate::measure::MeasureError;
use crate::measure::reading::Reading;
use crate::sim::Section;

/// A field problem with the names of its electrodes and the materials of its bodies.
#[derive(Debug, Clone)]
pub struct FieldSection {
    /// What is solved.
    pub problem: Problem,
    /// Names by index of electrode: those of the capacitance matrix.
    pub electrodes: Vec<String>,
    /// What each body is made of; `None` for what is empty, and for the next level.
    pub materials: Vec<Option<MaterialId>>,
}

/// The lines around a site as the electrical figures see them: seven of an array, a row as drawn.
/// The next level belongs to the `finished` section only.
///
/// # Errors
/// The first error is of the program; the second says why the section has no field.
pub fn field_section(
    flow: &Flow,
    variant: &Variant,
    site: &Site,
    section: &Section,
    finished: bool,
) -> Result<Result<FieldSection, Reading>, MeasureError> {
    let above = if finished { Above::of(flow) } else { None };
    let posed = pose(section, variant, site, &flow.library, above).and_then(|(_, metal, posed)| {
        let roles = posed.roles(Filling::Actual, &flow.library)?;
        let materials = posed.materials(&metal);
        let bodies = posed.problem.bodies.iter().zip(roles);
        let body = |(body, role): (&Body, Role)| Body { role, ..body.clone() };
        let problem = Problem { bodies: bodies.map(body).collect(), ..posed.problem.clone() };
        let electrodes = metal.electrodes.iter().map(|electrode| electrode.label()).collect();
        Ok(FieldSection { problem, electrodes, materials })
    });
    match posed {
        Ok(section) => Ok(Ok(section)),
        Err(Stop::Without(reading)) => Ok(Err(reading)),
        Err(Stop::Failed(error)) => Err(error),
    }
}
