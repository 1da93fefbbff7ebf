//! Series and parallel bounds: what the fields of the same section without contrast give.
//!
//! The potential u0 of the section with ε = 1 everywhere is a trial for any ε: V·C·V is at
//! most ∫ ε |∇u0|², the dielectrics in parallel along its field lines' tubes; its flux σ0 is
//! one too: V·C·V is at least (V·Q0)² / ∫ |σ0|²/ε, the dielectrics in series. Between plates
//! these are the bounds of Wiener (1912) by volume share. They come from other fields than
//! the solution's own, so they check it at run time.

use faer::Mat;

use super::bounds::Bounds;
use super::domain::{Domain, Mesh};
use super::solve::Level;
use super::{FieldError, Role};
use crate::num::tolerance::FIELD_ROUNDING;

/// Bounds of each electrode's diagonal entry, over ε0.
pub(super) struct Mixture {
    /// Dielectrics in series.
    pub series: Vec<f64>,
    /// Dielectrics in parallel.
    pub parallel: Vec<f64>,
}

impl Mixture {
    /// Holds the bounds of the solution against these.
    pub fn check(&self, bounds: &Bounds) -> Result<(), FieldError> {
        for (i, (series, parallel)) in self.series.iter().zip(&self.parallel).enumerate() {
            let slack = FIELD_ROUNDING * parallel + bounds.rounding(i);
            let (low, high) = (bounds.lower[(i, i)], bounds.upper[(i, i)]);
            if high < series - slack || low > parallel + slack {
                return Err(FieldError::internal(format!(
                    "electrode {i}: {low} to {high} is not between the series bound {series} \
                     and the parallel bound {parallel}"
                )));
            }
        }
        Ok(())
    }
}

/// The series and parallel bounds of every variant, on the level of a (coarse) mesh.
pub(super) fn bounds(
    domain: &Domain,
    mesh: &Mesh,
    level: &Level,
    variants: &[Vec<Role>],
    electrodes: usize,
) -> Result<Vec<Mixture>, FieldError> {
    let vacuum = vec![1.0; mesh.triangles.len()];
    let (primal, dual, bounds) = level.solve(domain, &vacuum, electrodes)?;
    let potential = &primal.fields * &bounds.potentials;
    let stream = &dual.fields * &bounds.fluxes;
    let energy = |weights: &[f64], system: &super::assembly::System, fields, coefficients, i| {
        let mut energy = 0.0;
        for (t, weight) in weights.iter().enumerate() {
            let values = system.local(&level.nodes, t, fields, coefficients, i);
            let g = level.elements[t].gradient(&values);
            energy += weight * level.elements[t].integral(g.map(|[x, z]| x * x + z * z));
        }
        energy
    };
    let of = |roles: &Vec<Role>| {
        let permittivity = level.permittivity(mesh, roles);
        let inverse: Vec<f64> = permittivity.iter().map(|k| 1.0 / k).collect();
        let u = |i| {
            energy(&permittivity, &level.primal, &potential as &Mat<f64>, &bounds.potentials, i)
        };
        let s = |i| energy(&inverse, &level.dual, &stream as &Mat<f64>, &bounds.fluxes, i);
        let series = |i| {
            let charge = bounds.lower[(i, i)];
            if charge > 0.0 { charge * charge / s(i) } else { 0.0 }
        };
        Mixture {
            series: (0..electrodes).map(series).collect(),
            parallel: (0..electrodes).map(u).collect(),
        }
    };
    Ok(variants.iter().map(of).collect())
}
