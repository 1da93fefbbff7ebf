//! Rates of a frozen surface under a process: v = f_c + f_d g_d + f_n Γ.
//!
//! The physics is that of `docs/physics/growth.md`; visibility, view factors and the gas are
//! computed in [`super::visibility`] and [`super::exchange`], line-of-sight arrival in
//! [`super::directional`].

use super::directional::Lobes;
use super::exchange::{Exchange, normal_angle};
use super::outline::Facet;
use super::{Character, FrontError};

/// A process between mirror walls, ready to be asked for the rates of any surface.
#[derive(Debug, Clone)]
pub struct Transport {
    character: Character,
    walls: [f64; 2],
    lobes: Lobes,
}

/// How fast a surface moves under a process, relative to an open flat.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Arrival {
    /// Rate of each facet along its normal; the rate of its solid is not in it.
    pub rate: Vec<f64>,
    /// Γ, flux of the neutral part on each facet over that on an open flat; a first guess for
    /// a surface that differs little. Empty without a neutral part.
    pub neutral: Vec<f64>,
}

impl Transport {
    /// A process in a scene with mirror walls at these x, in nm.
    pub fn new(character: Character, walls: [f64; 2]) -> Self {
        let lobes = Lobes::new(character.exponent, character.tilt_rad);
        Self { character, walls, lobes }
    }

    /// Whether the rates are the same on every surface, whatever it sees.
    pub fn is_conformal(&self) -> bool {
        self.character.directional == 0.0 && self.character.neutral == 0.0
    }

    /// Rates of the facets of a surface. `guess` is Γ of each facet as far as it is known; any
    /// other length is taken as unknown. Errors: the gas did not converge.
    pub fn arrival(&self, facets: &[Facet], guess: &[f64]) -> Result<Arrival, FrontError> {
        let Character { conformal, directional, neutral, sticking, .. } = self.character;
        let mut rate = vec![conformal; facets.len()];
        if self.is_conformal() {
            return Ok(Arrival { rate, neutral: Vec::new() });
        }
        let exchange = Exchange::between(facets, self.walls);
        let mut gas = Vec::new();
        if neutral > 0.0 {
            gas =
                if guess.len() == facets.len() { guess.to_vec() } else { exchange.sky().to_vec() };
            exchange.gas(&vec![sticking; facets.len()], &mut gas)?;
            // In the deepest shade the flux is below the residual, which has either sign.
            gas.iter_mut().for_each(|flux| *flux = flux.max(0.0));
            rate.iter_mut().zip(&gas).for_each(|(rate, flux)| *rate += neutral * flux);
        }
        if directional > 0.0 {
            for (i, facet) in facets.iter().enumerate() {
                let normal = normal_angle(facet);
                let open = exchange.open_sky(i).iter();
                let arrival: f64 = open.map(|&sky| self.lobes.arrival(sky, normal)).sum();
                rate[i] += directional * arrival;
            }
        }
        if rate.iter().all(|rate| rate.is_finite()) {
            Ok(Arrival { rate, neutral: gas })
        } else {
            Err(FrontError::Inconsistent("a rate is not a number"))
        }
    }
}
