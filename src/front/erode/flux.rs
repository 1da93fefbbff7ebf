//! What arrives at the facets of an exposed surface.
//!
//! Beams are taken by [`super::beam`], with shadows that end where a facet ends; what comes from
//! all directions (gas, lobes) by [`crate::front::Transport`]. Apart, because a corner moves with
//! the vector of what it sees, and only a beam's direction is known beforehand.

use super::beam;
use super::surface::{Facet, Frame};
use super::sweep::Flux;
use crate::front::{Character, FrontError, Transport};

/// Lobes of a higher exponent are sharp.
const SHARP: f64 = 30.0;

/// A process, ready to be asked for the flux on any surface.
pub(super) struct Source {
    character: Character,
    /// What comes from all directions; `None` when nothing does.
    diffuse: Option<Transport>,
}

impl Source {
    pub(super) fn new(character: Character, frame: &Frame) -> Self {
        let directional = character.exponent.map_or(0.0, |_| character.directional);
        let spread = Character { conformal: 0.0, directional, ..character };
        let has_spread = spread.directional > 0.0 || spread.neutral > 0.0;
        let diffuse = has_spread.then(|| Transport::new(spread, frame.walls));
        Self { character, diffuse }
    }

    /// Whether every exposed surface gets the same.
    pub(super) fn is_conformal(&self) -> bool {
        self.character.directional == 0.0 && self.character.neutral == 0.0
    }

    /// Whether some of it comes from all directions: then the flux varies from place to place,
    /// and facets may be as rough as it is known.
    pub(super) fn is_diffuse(&self) -> bool {
        self.diffuse.is_some()
    }

    /// Whether lobes cast shadows about as sharp as a facet: the flux on one facet tells little
    /// of that on its neighbour then.
    pub(super) fn is_sharp(&self) -> bool {
        self.character.directional > 0.0 && self.character.exponent.is_some_and(|p| p > SHARP)
    }

    /// Flux on each facet. Errors: the gas did not converge.
    pub(super) fn on(&self, facets: &[Facet], frame: &Frame) -> Result<Vec<Flux>, FrontError> {
        let beams = beam::arrival(facets, &self.character, frame);
        let spread = match &self.diffuse {
            None => vec![0.0; facets.len()],
            Some(transport) => {
                let outline: Vec<_> = facets
                    .iter()
                    .map(|f| crate::front::Facet::between(f.a, f.b, f.owner.unwrap_or(0)))
                    .collect();
                transport.arrival(&outline, &[])?.rate
            }
        };
        let Character { conformal, directional, neutral, exponent, .. } = self.character;
        let diffuse_most = exponent.map_or(0.0, |_| directional) + neutral;
        let flux = beams.into_iter().zip(spread);
        Ok(flux.map(|(beam, diffuse)| Flux { conformal, beam, diffuse, diffuse_most }).collect())
    }
}
