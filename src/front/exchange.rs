//! The exchange of species between facets, and the neutral gas in it.
//!
//! A row of the exchange holds the view factors from the middle of a facet to all facets,
//! exact for what is seen of each (see [`super::visibility`]), and to the sky. Rows are rescaled
//! so that sky and facets sum to one (it matters in tunnels from wall to wall only). Neutral species obey
//! Γ = Γ_sky + (1 − S) K Γ (Cale and Raupp, J. Vac. Sci. Technol. B 8, 1242 (1990); the
//! diffuse radiosity of Hottel), solved by the stabilised bi-conjugate gradients of van der Vorst
//! (SIAM J. Sci. Stat. Comput. 13, 631 (1992)) from a first guess, sums in fixed order. Cost:
//! pairs in sight × iterations; the latter grow like the aspect ratio for small S. A residual
//! that stays above [`EXCHANGE_RESIDUAL`] is an error, never a result.

use super::FrontError;
use super::outline::Facet;
use super::visibility::{Scenery, Seen, Views, gaps};
use crate::num::tolerance::EXCHANGE_RESIDUAL;
use std::f64::consts::FRAC_PI_2;

/// Iterations after which the exchange counts as not converging.
const MOST_ITERATIONS: usize = 2000;

/// Who sees whom, and how much sky.
#[derive(Debug, Clone, Default)]
pub struct Exchange {
    sky: Vec<f64>,
    /// End of each row in `entries`.
    ends: Vec<usize>,
    entries: Vec<(u32, f64)>,
    /// End of each facet's intervals in `open`.
    open_ends: Vec<usize>,
    /// Sky that is seen: angles from the vertical, counter-clockwise.
    open: Vec<[f64; 2]>,
}

impl Exchange {
    /// The exchange between the facets of a surface between mirror walls, x in nm.
    pub fn between(facets: &[Facet], walls: [f64; 2]) -> Self {
        let scenery = Scenery::unfold(facets, walls);
        let mut exchange = Self::default();
        let mut views = Views::new();
        for (index, facet) in facets.iter().enumerate() {
            let seen = scenery.look(index, facet.middle(), facet.normal, &mut views);
            exchange.push_row(normal_angle(facet), seen);
        }
        exchange
    }

    fn push_row(&mut self, normal: f64, seen: &[Seen]) {
        let mut sky = 0.0;
        for [from, to] in gaps(seen) {
            let open = [from, to].map(|s| (normal + s.asin()).clamp(-FRAC_PI_2, FRAC_PI_2));
            if open[1] > open[0] {
                sky += 0.5 * ((open[1] - normal).sin() - (open[0] - normal).sin());
                self.open.push(open);
            }
        }
        let facing: f64 = seen.iter().map(|piece| 0.5 * (piece.to - piece.from)).sum();
        let scale = if sky + facing > 0.0 { 1.0 / (sky + facing) } else { 0.0 };
        let entry = |piece: &Seen| (piece.facet as u32, 0.5 * (piece.to - piece.from) * scale);
        self.entries.extend(seen.iter().map(entry));
        self.sky.push(sky * scale);
        self.ends.push(self.entries.len());
        self.open_ends.push(self.open.len());
    }

    /// View factor from the middle of each facet to the sky.
    pub fn sky(&self) -> &[f64] {
        &self.sky
    }

    /// View factors from the middle of a facet to the facets it sees, images counted as
    /// themselves; a facet may occur more than once.
    pub fn row(&self, facet: usize) -> &[(u32, f64)] {
        &self.entries[range(&self.ends, facet)]
    }

    /// The sky that a facet sees: angles from the vertical, counter-clockwise, in radians.
    pub fn open_sky(&self, facet: usize) -> &[[f64; 2]] {
        &self.open[range(&self.open_ends, facet)]
    }

    /// Flux of an isotropic gas of flux 1 on an open flat that sticks with probability
    /// `sticking` of each facet and is otherwise re-emitted diffusely. `flux` is the first guess and the result.
    pub fn gas(&self, sticking: &[f64], flux: &mut [f64]) -> Result<(), FrontError> {
        // What a facet sends back is gathered once a product, not once a pair.
        let mut sent = vec![0.0; flux.len()];
        let apply = |x: &[f64], y: &mut [f64]| {
            for (sent, (x, sticking)) in sent.iter_mut().zip(x.iter().zip(sticking)) {
                *sent = (1.0 - sticking) * x;
            }
            let mut start = 0;
            for (i, &end) in self.ends.iter().enumerate() {
                let row = &self.entries[start..end];
                y[i] = x[i] - row.iter().map(|&(j, share)| share * sent[j as usize]).sum::<f64>();
                start = end;
            }
        };
        solve(apply, &self.sky, flux)
    }
}

fn range(ends: &[usize], at: usize) -> std::ops::Range<usize> {
    (if at == 0 { 0 } else { ends[at - 1] })..ends[at]
}

/// Angle of the normal from the vertical, counter-clockwise, in radians.
pub(super) fn normal_angle(facet: &Facet) -> f64 {
    (-facet.normal.x).atan2(facet.normal.z)
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

/// Solves A x = b by stabilised bi-conjugate gradients from the guess in `x`.
fn solve(
    mut apply: impl FnMut(&[f64], &mut [f64]),
    b: &[f64],
    x: &mut [f64],
) -> Result<(), FrontError> {
    let n = b.len();
    let scale = dot(b, b).sqrt();
    if scale == 0.0 {
        x.fill(0.0);
        return Ok(());
    }
    let goal = EXCHANGE_RESIDUAL * scale;
    let (mut r, mut v, mut t) = (vec![0.0; n], vec![0.0; n], vec![0.0; n]);
    let mut p = vec![0.0; n];
    let mut shadow = vec![0.0; n];
    let (mut rho, mut alpha, mut omega) = (1.0, 1.0, 1.0);
    let mut restart = true;
    let mut size = f64::INFINITY;
    for _ in 0..MOST_ITERATIONS {
        if restart {
            apply(x, &mut r);
            r.iter_mut().zip(b).for_each(|(r, b)| *r = b - *r);
            size = dot(&r, &r).sqrt();
            if size <= goal {
                return Ok(());
            }
            shadow.copy_from_slice(&r);
            p.fill(0.0);
            v.fill(0.0);
            (rho, alpha, omega) = (1.0, 1.0, 1.0);
        }
        let next = dot(&shadow, &r);
        let beta = next / rho * (alpha / omega);
        rho = next;
        for i in 0..n {
            p[i] = r[i] + beta * (p[i] - omega * v[i]);
        }
        apply(&p, &mut v);
        alpha = rho / dot(&shadow, &v);
        if !alpha.is_finite() {
            restart = true;
            continue;
        }
        for i in 0..n {
            r[i] -= alpha * v[i];
        }
        apply(&r, &mut t);
        let square = dot(&t, &t);
        omega = if square > 0.0 { dot(&t, &r) / square } else { 0.0 };
        for i in 0..n {
            x[i] += alpha * p[i] + omega * r[i];
            r[i] -= omega * t[i];
        }
        size = dot(&r, &r).sqrt();
        // The recurrence drifts from the true residual: believe only the latter.
        restart = size <= goal || omega == 0.0;
    }
    Err(FrontError::NotConverged { residual: size / scale, iterations: MOST_ITERATIONS })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::geom::Point;

    #[test]
    fn rows_of_a_trench_sum_to_one() {
        let points = [(0.0, 5.0), (3.0, 5.0), (3.0, 1.0), (5.0, 0.0), (6.0, 0.0)];
        let facets: Vec<_> = points
            .windows(2)
            .map(|p| Facet::between(Point::new(p[0].0, p[0].1), Point::new(p[1].0, p[1].1), 0))
            .collect();
        let exchange = Exchange::between(&facets, [0.0, 6.0]);
        for i in 0..facets.len() {
            let sum: f64 = exchange.row(i).iter().map(|e| e.1).sum::<f64>() + exchange.sky()[i];
            assert!((sum - 1.0).abs() < 1e-12);
        }
    }

    #[test]
    fn gas_that_never_sticks_is_everywhere_the_same() {
        // Equilibrium: with S = 0 the flux is that of the open flat on every surface.
        let points = [(0.0, 5.0), (3.0, 5.0), (3.0, 1.0), (5.0, 0.0), (6.0, 0.0)];
        let facets: Vec<_> = points
            .windows(2)
            .map(|p| Facet::between(Point::new(p[0].0, p[0].1), Point::new(p[1].0, p[1].1), 0))
            .collect();
        let mut flux = vec![0.0; facets.len()];
        Exchange::between(&facets, [0.0, 6.0]).gas(&vec![0.0; facets.len()], &mut flux).unwrap();
        assert!(flux.iter().all(|f| (f - 1.0).abs() < 1e-8), "{flux:?}");
    }
}
