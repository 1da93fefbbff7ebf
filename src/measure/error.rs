//! From two traces, coarse and fine, to figures with a numerical error: the whole error model of
//! growth is here.
//!
//! The fine trace has half the facet of the coarse one. Moving a front converges at first order
//! in the facet at worst (a corner cut by a facet, a throat met between two steps), so the error
//! of the fine value is about the difference of the two, and smaller where convergence is
//! faster. The value is that of the fine trace, not an extrapolated one: closures make the order
//! uneven. The error is the difference times the safety factor of Roache (J. Fluids Eng. 116,
//! 405 (1994); from memory), plus a floor for what both traces share: the width at which a throat
//! counts as closed is met to within a part of it.
//!
//! Two resolutions may agree by chance: which facets meet in a closing neck scatters the thickness at
//! closure and the height of the neck by a part of the facet. What that part is was read off the
//! table of `docs/physics/convergence.md`; it is added, and a third resolution is asked for by
//! the pipeline while the wanted accuracy is missed.

use super::Figure;
use super::gap::Gap;
use super::reading::{Missing, Reading, Unclear};
use super::void::VoidShape;
use crate::flow::{Quantity, State};
use crate::num::tolerance::{
    CLOSING_SCATTER, GROWTH_FLOOR_CLOSURE_WIDTHS, GROWTH_SAFETY, OUTLINE_SCATTER, TOP_SCATTER,
};

/// The error model of growth at one closure width.
#[derive(Debug, Clone, Copy)]
pub(super) struct GrowthError {
    closure_width_nm: f64,
    floor_nm: f64,
    facet_nm: f64,
}

impl GrowthError {
    /// The model at a closure width and the facet of the fine trace, both in nm.
    pub fn new(closure_width_nm: f64, facet_nm: f64) -> Self {
        let floor_nm = GROWTH_FLOOR_CLOSURE_WIDTHS * closure_width_nm;
        Self { closure_width_nm, floor_nm, facet_nm }
    }

    /// A length, in nm.
    pub fn length(&self, coarse: f64, fine: f64) -> Figure {
        Figure::within(fine, GROWTH_SAFETY * (coarse - fine).abs() + self.floor_nm)
    }

    /// An area, or a share of one: `perimeter_nm` of the outline, `whole` what the area is divided by.
    pub fn area(&self, coarse: f64, fine: f64, perimeter_nm: f64, whole: f64) -> Figure {
        let floor = (self.floor_nm + OUTLINE_SCATTER * self.facet_nm) * perimeter_nm / whole;
        Figure::within(fine, GROWTH_SAFETY * (coarse - fine).abs() + floor)
    }

    /// A length that one of the traces may lack.
    pub fn optional(&self, coarse: Option<f64>, fine: Option<f64>) -> Option<Figure> {
        Some(self.length(coarse?, fine?))
    }

    /// An open-field thickness at closure.
    pub fn closing(&self, coarse: Option<f64>, fine: Option<f64>) -> Option<Figure> {
        self.optional(coarse, fine).map(|figure| self.scattered(figure, CLOSING_SCATTER))
    }

    /// A length that moves with the top of a void.
    pub fn top(&self, coarse: f64, fine: f64) -> Figure {
        self.scattered(self.length(coarse, fine), TOP_SCATTER)
    }

    /// A figure with the scatter of this many facets beside its error.
    fn scattered(&self, figure: Figure, facets: f64) -> Figure {
        let scatter = facets * self.facet_nm;
        Figure { low: figure.low - scatter, high: figure.high + scatter, ..figure }
    }

    /// A geometric quantity of one space.
    pub fn reading(&self, coarse: &Gap, fine: &Gap, quantity: Quantity) -> Reading {
        match (coarse.value(quantity), fine.value(quantity)) {
            (Ok(c), Ok(f)) if quantity == Quantity::VoidShare => {
                Reading::Known(self.area(c, f, fine.perimeter(), fine.drawn_area))
            }
            (Ok(c), Ok(f)) if quantity == Quantity::SealMargin => {
                Reading::Known(self.scattered(self.length(c, f), CLOSING_SCATTER))
            }
            (Ok(c), Ok(f)) if hangs_on_the_top(quantity) => Reading::Known(self.top(c, f)),
            (Ok(c), Ok(f)) => Reading::Known(self.length(c, f)),
            (Err(Missing::Cut { .. }), Err(missing @ Missing::Cut { .. })) => {
                Reading::Missing(missing)
            }
            (Err(c), Err(f)) if c == f => Reading::Missing(f),
            _ => Reading::Unclear(Unclear::Topology),
        }
    }

    /// The states that a space may be in: what either trace shows, and the other side of closure
    /// where the film is thicker, or the throat wider, by no more than its error.
    pub fn states(&self, coarse: &Gap, fine: &Gap) -> Vec<State> {
        let mut states = vec![fine.state, coarse.state];
        let film = |gap: &Gap| gap.seal.and_then(|seal| seal.film);
        if let (Some(c), Some(f)) = (film(coarse), film(fine))
            && self.scattered(self.length(c.margin_nm, f.margin_nm), CLOSING_SCATTER).low <= 0.0
        {
            states.push(State::Open);
        }
        if fine.state == State::Open
            && let Some(throat) = self.optional(coarse.throat, fine.throat)
            && throat.low <= self.closure_width_nm
        {
            states.push(State::Sealed);
        }
        states.sort_unstable();
        states.dedup();
        states
    }

    /// The void of the coarse trace that a void of the fine one is to be set against: the one that
    /// shares most area with it, else a point in its middle, so that all of it is doubtful.
    pub fn counterpart(coarse: &Gap, void: &VoidShape) -> VoidShape {
        let shared = coarse
            .voids
            .iter()
            .map(|other| (other.region.intersection(&void.region).area(), other));
        let most = shared.max_by(|a, b| a.0.total_cmp(&b.0));
        most.filter(|(area, _)| *area > 0.0)
            .map_or_else(|| void.vanished(), |(_, other)| other.clone())
    }
}

/// Whether a quantity moves with the top of a void.
fn hangs_on_the_top(quantity: Quantity) -> bool {
    use Quantity::{PolishMargin, Roof, VoidHeight, VoidTop};
    matches!(quantity, VoidTop | VoidHeight | Roof | PolishMargin)
}
