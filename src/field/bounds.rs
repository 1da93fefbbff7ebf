//! From minimised energies to matrices: V·C·V lies between V·L·V and V·U·V for all V.
//!
//! Upper: the primal energies of unit potentials, floating conductors at the potentials that
//! minimise. Lower: V·C·V is the maximum over all fluxes f of 2 V·Bf − f·Ef, with E the
//! minimised dual energies and Bf the net charges, so L = B E⁻¹ Bᵀ; floating conductors, whose
//! net charge is zero, minimise over their potentials as above. G = U − L is positive
//! semidefinite, so |C − (U + L)/2| in an entry is at most ½ √(G_ii G_jj).

use faer::linalg::solvers::Solve;
use faer::{Mat, Side};

use super::assembly::Condensed;
use super::domain::Domain;
use super::dual::carriers;
use super::{EPSILON_0_AF_PER_UM, FieldError, Matrix};
use crate::num::tolerance::{FIELD_CANCELLATION, FIELD_ROUNDING};

/// Both bounds over ε0, and the fields that attain them.
pub(super) struct Bounds {
    /// Upper bound as a quadratic form in the electrodes' potentials.
    pub upper: Mat<f64>,
    /// Lower bound.
    pub lower: Mat<f64>,
    /// Potentials of all conductors for one volt on each electrode, one electrode a column.
    pub potentials: Mat<f64>,
    /// Fluxes of all carriers for the same.
    pub fluxes: Mat<f64>,
    /// What rounding may have changed of each electrode's diagonal.
    rounding: Vec<f64>,
}

impl Bounds {
    /// Bounds from the minimised energies of primal and dual.
    pub fn new(
        domain: &Domain,
        electrodes: usize,
        primal: &Condensed,
        dual: &Condensed,
    ) -> Result<Self, FieldError> {
        let (upper, potentials) = float(&primal.energies, electrodes)?;
        let named = carriers(domain)
            .iter()
            .flat_map(|(to, from)| [*to, *from])
            .map(|contact| domain.contacts[contact].conductor + 1)
            .fold(electrodes, usize::max);
        let mut charges = Mat::<f64>::zeros(dual.energies.nrows(), named);
        for (flux, (to, from)) in carriers(domain).into_iter().enumerate() {
            charges[(flux, domain.contacts[to].conductor)] += 1.0;
            charges[(flux, domain.contacts[from].conductor)] -= 1.0;
        }
        let fluxes = solve(&dual.energies, &charges)?;
        let (lower, floated) = float(&(charges.transpose() * &fluxes), electrodes)?;
        let rounding = (0..electrodes)
            .map(|i| {
                FIELD_ROUNDING * upper[(i, i)].abs() + FIELD_CANCELLATION * primal.unminimised[i]
            })
            .collect();
        let fluxes = &fluxes * &floated;
        let bounds = Self { upper, lower, potentials, fluxes, rounding };
        for i in 0..electrodes {
            let (high, low) = (bounds.upper[(i, i)], bounds.lower[(i, i)]);
            if !(high.is_finite() && low.is_finite() && low <= high + bounds.rounding[i]) {
                return Err(FieldError::internal(format!(
                    "electrode {i}: lower bound {low} above upper bound {high}"
                )));
            }
        }
        Ok(bounds)
    }

    /// Gap of the diagonal entry of an electrode, rounding included.
    pub fn gap(&self, i: usize) -> f64 {
        let (high, low) = (self.upper[(i, i)], self.lower[(i, i)]);
        (high - low).max(0.0) + self.rounding[i]
    }

    /// What rounding may have changed of the diagonal entry of an electrode.
    pub fn rounding(&self, i: usize) -> f64 {
        self.rounding[i]
    }

    /// Largest half-width over what is wanted of it, relative to the entry: of the diagonal and
    /// of the couplings that are at least half of their electrode's largest. What is no more than
    /// its rounding, an electrode that nothing takes a field from, is as accurate as can be.
    pub fn excess(&self, accuracy: f64) -> f64 {
        let n = self.upper.nrows();
        let mut excess = 0.0_f64;
        for i in 0..n {
            let mean = |j: usize| 0.5 * (self.upper[(i, j)] + self.lower[(i, j)]).abs();
            let largest = (0..n).filter(|j| *j != i).map(mean).fold(0.0, f64::max);
            let told = |j: &usize| mean(*j) > self.rounding[i] && mean(*j) >= 0.5 * largest;
            for j in (0..n).filter(told) {
                let half = 0.5 * (self.gap(i) * self.gap(j)).sqrt();
                excess = excess.max(half / (accuracy * mean(j)));
            }
        }
        excess
    }

    /// Mean, low and high matrices in aF/µm.
    pub fn matrices(&self) -> [Matrix; 3] {
        let n = self.upper.nrows();
        let matrix = |sign: f64| -> Matrix {
            let entry = |i: usize, j: usize| {
                // Both orders of a pair give the same bits.
                let (i, j) = (i.min(j), i.max(j));
                let mean = 0.5 * (self.upper[(i, j)] + self.lower[(i, j)]);
                let half = 0.5 * (self.gap(i) * self.gap(j)).sqrt();
                EPSILON_0_AF_PER_UM * (mean + sign * half)
            };
            (0..n).map(|i| (0..n).map(|j| entry(i, j)).collect()).collect()
        };
        [matrix(0.0), matrix(-1.0), matrix(1.0)]
    }
}

/// Minimises a quadratic form over all potentials but those of the first `electrodes`; the
/// form that is left, and all potentials for one volt on each electrode.
fn float(full: &Mat<f64>, electrodes: usize) -> Result<(Mat<f64>, Mat<f64>), FieldError> {
    let n = full.nrows();
    let free = n - electrodes;
    let inner = Mat::from_fn(free, free, |i, j| full[(electrodes + i, electrodes + j)]);
    let outer = Mat::from_fn(free, electrodes, |i, j| full[(electrodes + i, j)]);
    let floated = solve(&inner, &outer)?;
    let rest = Mat::from_fn(electrodes, electrodes, |i, j| full[(i, j)]);
    let form = rest - outer.transpose() * &floated;
    let potentials = Mat::from_fn(n, electrodes, |i, j| {
        if i < electrodes { f64::from(u8::from(i == j)) } else { -floated[(i - electrodes, j)] }
    });
    Ok((form, potentials))
}

/// Solves a small symmetric positive definite system.
fn solve(matrix: &Mat<f64>, right: &Mat<f64>) -> Result<Mat<f64>, FieldError> {
    if matrix.nrows() == 0 {
        return Ok(Mat::zeros(0, right.ncols()));
    }
    let factor = matrix
        .llt(Side::Lower)
        .map_err(|e| FieldError::internal(format!("conductors do not see each other: {e:?}")))?;
    Ok(factor.solve(right))
}
