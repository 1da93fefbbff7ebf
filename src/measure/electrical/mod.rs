//! `coupling`, `ground`, `total`, the drops, `void-gain`, `k-eff`, `k-eff-lateral`,
//! `coupling-share`: the field around one line of a finished section.
//!
//! The fine section is solved once for all variants of its insulators, on one mesh, with proven
//! bounds. The coarse section is solved as it is, loosely: the mean of its bounds is far closer
//! than either, and its difference to the fine one, times the safety factor of growth, is what the
//! growth adds to the bounds of everything that has the real void in it. Vacuum, filled and
//! reference variants have no void or no contrast and hardly feel the growth; they keep the field's
//! own bounds.

mod array;
mod conductors;
mod matrix;
mod problem;
mod section;
#[cfg(test)]
mod tests;

use std::collections::BTreeMap;

use self::array::Array;
use self::conductors::Conductors;
use self::matrix::{Terminals, loss, matrix, ratio, widened};
use self::problem::{Above, Filling, Posed};
pub use self::section::{FieldSection, field_section};
use super::reading::{Missing, Reading, Unclear};
use super::{ElectricalFigures, Figure, MeasureError, Traced};
use crate::field::{self, Capacitance, FieldError};
use crate::flow::{Quantity, Site, Variant};
use crate::library::{Library, MaterialId};
use crate::num::tolerance::{COARSE_FIELD, GROWTH_SAFETY};
use crate::sim::Section;

/// Why there are no electrical figures.
#[derive(Debug, Clone, PartialEq)]
enum Stop {
    /// They do not exist, or cannot be told.
    Without(Reading),
    /// Something is wrong inside.
    Failed(MeasureError),
}

impl From<Missing> for Stop {
    fn from(missing: Missing) -> Self {
        Self::Without(Reading::Missing(missing))
    }
}

impl From<FieldError> for Stop {
    fn from(error: FieldError) -> Self {
        match error {
            FieldError::MeshTooLarge(_) => Self::Without(Reading::Unclear(Unclear::NotConverged)),
            FieldError::ElectrodesTouch { .. } => Missing::Shorted.into(),
            error => Self::Failed(MeasureError::Field(error)),
        }
    }
}

/// The field around the line of one site, or why there is none.
#[derive(Debug, Clone)]
pub struct Electrical {
    found: Result<Solved, Reading>,
}

/// What a drop is taken against.
#[derive(Debug, Clone, Copy)]
pub enum Reference<'a> {
    /// What the wafer has between its lines, else the material of the void's roof.
    Default,
    /// The same section with everything between the lines made of this.
    Material(MaterialId),
    /// The section of another variant at the same site.
    Section(&'a Electrical),
}

#[derive(Debug, Clone)]
struct Solved {
    conductors: Conductors,
    fine: BTreeMap<Filling, Capacitance>,
    /// Of the coarse section as it is; `None` where it is the same as the fine one.
    coarse: Option<Capacitance>,
    /// The default reference of a drop.
    default: Option<MaterialId>,
    has_void: bool,
    open_top: bool,
}

impl Electrical {
    /// Solves the field of a site's last stage.
    ///
    /// `accuracy` is the relative half-width wanted of total and coupling; `references` are
    /// materials that a drop is asked against besides the default one.
    pub fn of(
        traced: &Traced,
        references: &[MaterialId],
        accuracy: f64,
    ) -> Result<Self, MeasureError> {
        let last = |stages: &[crate::sim::Stage]| stages.last().map(|stage| stage.section.clone());
        let (Some(fine), Some(coarse)) = (last(traced.fine), last(traced.coarse)) else {
            return Err(MeasureError::Inconsistent("a trace without stages"));
        };
        let (found, coarse) = rayon::join(
            || solve(traced, &fine, Some(references), accuracy),
            || (fine != coarse).then(|| solve(traced, &coarse, None, COARSE_FIELD * accuracy)),
        );
        match with_growth(found, coarse) {
            Ok(solved) => Ok(Self { found: Ok(solved) }),
            Err(Stop::Without(reading)) => Ok(Self { found: Err(reading) }),
            Err(Stop::Failed(error)) => Err(error),
        }
    }

    /// What is known of an electrical quantity, between the electrodes of one name where one is
    /// given, a drop against a reference.
    pub fn reading(
        &self,
        quantity: Quantity,
        between: Option<&str>,
        against: Reference,
    ) -> Reading {
        let figure = self
            .found
            .as_ref()
            .map_err(|reading| *reading)
            .and_then(|solved| solved.figure(quantity, between, against));
        figure.map_or_else(|reading| reading, Reading::Known)
    }

    /// All figures for the report, drops against the default reference; `None` where the line has no
    /// field of its own.
    pub fn figures(&self, resistance: Option<Figure>) -> Option<ElectricalFigures> {
        let solved = self.found.as_ref().ok()?;
        let terminals = Terminals::of(&solved.conductors, None).ok()?;
        let figure = |quantity| solved.figure(quantity, None, Reference::Default).ok();
        let side = |of: fn(&Terminals, &Capacitance) -> Figure| solved.grown(|c| of(&terminals, c));
        let actual = solved.fine.get(&Filling::Actual)?;
        let filled = solved.fine.get(&Filling::Voids);
        let growth = |i: usize, j: usize| solved.growth(|c| c.value[i][j]);
        Some(ElectricalFigures {
            coupling_af_per_um: figure(Quantity::Coupling)?,
            coupling_left_af_per_um: side(Terminals::left)?,
            coupling_right_af_per_um: side(Terminals::right)?,
            ground_af_per_um: figure(Quantity::Ground),
            total_af_per_um: figure(Quantity::Total)?,
            coupling_filled_af_per_um: filled.map(|filled| terminals.coupling(filled)),
            void_gain: figure(Quantity::VoidGain),
            coupling_drop: figure(Quantity::CouplingDrop),
            total_drop: figure(Quantity::TotalDrop),
            k_eff: figure(Quantity::KEff)?,
            k_eff_lateral: figure(Quantity::KEffLateral)?,
            coupling_share: figure(Quantity::CouplingShare)?,
            matrix_af_per_um: matrix(&solved.conductors, actual, growth),
            resistance_ohm_per_um: resistance,
            open_top: solved.open_top,
        })
    }
}

impl Solved {
    fn figure(
        &self,
        quantity: Quantity,
        between: Option<&str>,
        against: Reference,
    ) -> Result<Figure, Reading> {
        let missing = Reading::Missing;
        let terminals = Terminals::of(&self.conductors, between).map_err(missing)?;
        let of = |what: fn(&Terminals, &Capacitance) -> Figure, filling| {
            self.fine.get(&filling).map(|c| what(&terminals, c))
        };
        let actual = |what: fn(&Terminals, &Capacitance) -> Figure| {
            self.grown(|c| what(&terminals, c)).ok_or(Reading::Unclear(Unclear::NotAsked))
        };
        let against_filling = |what, filling| {
            let reference = of(what, filling).ok_or(missing(Missing::NoReference))?;
            Ok((actual(what)?, reference))
        };
        let drop = |what: fn(&Terminals, &Capacitance) -> Figure| match against {
            Reference::Section(other) => {
                let other = other.found.as_ref().map_err(|reading| *reading)?;
                let terminals = Terminals::of(&other.conductors, between).map_err(missing)?;
                let reference = other.grown(|c| what(&terminals, c));
                Ok(loss(actual(what)?, reference.ok_or(Reading::Unclear(Unclear::NotAsked))?))
            }
            Reference::Default => {
                let material = self.default.ok_or(missing(Missing::NoReference))?;
                let (a, b) = against_filling(what, Filling::Between(material))?;
                Ok(loss(a, b))
            }
            Reference::Material(material) => {
                let (a, b) = against_filling(what, Filling::Between(material))?;
                Ok(loss(a, b))
            }
        };
        match quantity {
            Quantity::Coupling => actual(Terminals::coupling),
            Quantity::Total => actual(Terminals::total),
            Quantity::Ground => {
                let ground = self.grown_optional(|c| terminals.ground(c));
                ground.ok_or(missing(Missing::NoGround))
            }
            Quantity::CouplingDrop => drop(Terminals::coupling),
            Quantity::TotalDrop => drop(Terminals::total),
            Quantity::VoidGain if !self.has_void => Err(missing(Missing::NoVoid)),
            Quantity::VoidGain => {
                against_filling(Terminals::coupling, Filling::Voids).map(|(a, b)| loss(a, b))
            }
            Quantity::KEff => {
                against_filling(Terminals::total, Filling::Vacuum).map(|(a, b)| ratio(a, b))
            }
            Quantity::KEffLateral => {
                against_filling(Terminals::coupling, Filling::Vacuum).map(|(a, b)| ratio(a, b))
            }
            Quantity::CouplingShare => {
                Ok(ratio(actual(Terminals::coupling)?, actual(Terminals::total)?))
            }
            _ => Err(Reading::Unclear(Unclear::NotAsked)),
        }
    }

    /// What the growth adds to the error of a figure of the actual section.
    fn growth(&self, of: impl Fn(&Capacitance) -> f64) -> f64 {
        match (&self.coarse, self.fine.get(&Filling::Actual)) {
            (Some(coarse), Some(fine)) => GROWTH_SAFETY * (of(coarse) - of(fine)).abs(),
            _ => 0.0,
        }
    }

    /// A figure of the actual section, the growth's error included.
    fn grown(&self, of: impl Fn(&Capacitance) -> Figure) -> Option<Figure> {
        let figure = of(self.fine.get(&Filling::Actual)?);
        Some(widened(figure, self.growth(|c| of(c).value)))
    }

    fn grown_optional(&self, of: impl Fn(&Capacitance) -> Option<Figure>) -> Option<Figure> {
        let figure = of(self.fine.get(&Filling::Actual)?)?;
        Some(widened(figure, self.growth(|c| of(c).map_or(figure.value, |coarse| coarse.value))))
    }
}

/// Sets the coarse section's matrix beside the fine one's.
fn with_growth(
    fine: Result<Solved, Stop>,
    coarse: Option<Result<Solved, Stop>>,
) -> Result<Solved, Stop> {
    let mut solved = fine?;
    if let Some(mut coarse) = coarse.transpose()? {
        if coarse.conductors.electrodes != solved.conductors.electrodes {
            return Err(Stop::Without(Reading::Unclear(Unclear::Topology)));
        }
        solved.coarse = coarse.fine.remove(&Filling::Actual);
    }
    Ok(solved)
}

/// Solves one section: as it is, and with `references` all the other fillings too.
fn solve(
    traced: &Traced,
    section: &Section,
    references: Option<&[MaterialId]>,
    accuracy: f64,
) -> Result<Solved, Stop> {
    let library = &traced.flow.library;
    let above = Above::of(traced.flow);
    let (array, conductors, posed) = pose(section, traced.variant, traced.site, library, above)?;
    let has_void = !array.voids.is_empty();
    let between = traced.variant.wafer.between.as_ref().map(|between| between.material);
    let default = between.or_else(|| array.voids.iter().find_map(|(_, roof)| *roof));
    let mut fillings = vec![Filling::Actual];
    if let Some(references) = references {
        fillings.push(Filling::Vacuum);
        if has_void && array.voids.iter().all(|(_, roof)| roof.is_some()) {
            fillings.push(Filling::Voids);
        }
        fillings.extend(default.iter().chain(references).map(|m| Filling::Between(*m)));
    }
    fillings.sort_unstable();
    fillings.dedup();
    let roles = fillings.iter().map(|filling| posed.roles(*filling, library));
    let roles: Vec<_> = roles.collect::<Result<_, _>>()?;
    let solved = field::solve_variants(&posed.problem, &roles, accuracy)?;
    let fine = fillings.into_iter().zip(solved).collect();
    let open_top = above.is_none();
    Ok(Solved { conductors, fine, coarse: None, default, has_void, open_top })
}

/// The lines around a site as a field problem.
fn pose(
    section: &Section,
    variant: &Variant,
    site: &Site,
    library: &Library,
    above: Option<Above>,
) -> Result<(Array, Conductors, Posed), Stop> {
    let array = Array::of(section, variant, site, library)
        .ok_or(Stop::Failed(MeasureError::Inconsistent("a section without solid")))?;
    let conductors = Conductors::of(&array, variant, library, above.is_some())?;
    let posed = Posed::new(&array, &conductors, above, library);
    Ok((array, conductors, posed))
}
