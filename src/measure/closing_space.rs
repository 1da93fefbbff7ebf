//! `closing-space`: the widest space of these lines that this seal still closes.
//!
//! An array of these lines alone is grown at trial spaces, with a seal thicker than drawn so that
//! every trial closes, and the thickness at which it closed is brought to the drawn one by the
//! secant method (it grows with the space, nearly in proportion). The coarse root is then corrected by
//! one fine trial with the coarse slope. `until` steps, which are wafer-wide, see this array
//! only. Cost: some four coarse growths and a fine one. It fails where a seal never closes.

use super::MeasureError;
use super::error::GrowthError;
use super::geometry::Traced;
use super::reading::{Missing, Reading, Unclear};
use super::seal::{self, Seal};
use crate::flow::{Action, Role, Site, SpacePair, Variant};
use crate::num::tolerance::CLOSING_SPACE;
use crate::sim::{CellTrace, SimError};
use crate::units::{Amount, Length};

/// At which of the two resolutions something is grown.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Fineness {
    /// The coarse one.
    Coarse,
    /// Half its facet.
    Fine,
}

/// Grows all cells of a variant.
pub type Grow<'a> = dyn Fn(&Variant, Fineness) -> Result<Vec<CellTrace>, SimError> + Sync + 'a;

/// The drawn seal times this is grown at every trial.
const OVERSIZE: f64 = 1.5;

/// Trials at most.
const TRIALS: usize = 12;

/// Searches the widest space that the seal of a site still closes.
pub(super) fn closing_space(traced: &Traced, grow: &Grow) -> Result<Reading, MeasureError> {
    let Some(step) = sealing_step(traced) else { return Ok(Reading::Missing(Missing::NotClosed)) };
    let Action::Deposit { thickness, .. } = &traced.variant.steps[step].action else {
        return Ok(Reading::Missing(Missing::NotClosed));
    };
    let wanted_nm = thickness.nominal.nm();
    let closure = |space_nm: f64, fineness| -> Result<Option<f64>, MeasureError> {
        let trial = trial(traced, step, space_nm);
        let cells = match grow(&trial, fineness) {
            Err(error @ SimError::Internal { .. }) => return Err(error.into()),
            Err(_) => return Ok(None),
            Ok(cells) => cells,
        };
        let seal = cells.first().and_then(|cell| seal::seal(&trial, &cell.stages, 1));
        let closed = seal.filter(|seal: &Seal| seal.step == step).and_then(|seal| seal.film);
        Ok(closed.map(|film| film.at_closure_nm - wanted_nm))
    };
    let mut known: Vec<(f64, f64)> = Vec::new();
    let mut space_nm = first_trial(traced);
    for _ in 0..TRIALS {
        let Some(excess) = closure(space_nm, Fineness::Coarse)? else {
            if !known.is_empty() {
                return Ok(Reading::Unclear(Unclear::NotConverged));
            }
            space_nm *= 0.6;
            continue;
        };
        known.push((space_nm, excess));
        let slope = match known[..] {
            [.., (a, fa), (b, fb)] if b != a && (fb - fa) / (b - a) > 0.0 => (fb - fa) / (b - a),
            _ => (excess + wanted_nm) / space_nm,
        };
        let step_nm = (-excess / slope).clamp(-0.4 * space_nm, 0.4 * space_nm);
        if step_nm.abs() <= CLOSING_SPACE * space_nm {
            let coarse = space_nm + step_nm;
            let Some(excess) = closure(coarse, Fineness::Fine)? else {
                return Ok(Reading::Unclear(Unclear::Topology));
            };
            let fine = coarse - excess / slope;
            let error =
                GrowthError::new(traced.flow.library.settings.closure_width_nm, traced.facet_nm);
            return Ok(Reading::Known(error.length(coarse, fine)));
        }
        space_nm += step_nm;
    }
    Ok(match known[..] {
        [] => Reading::Missing(Missing::NotClosed),
        _ => Reading::Unclear(Unclear::NotConverged),
    })
}

/// The step that closed the site, else the last seal of the flow.
fn sealing_step(traced: &Traced) -> Option<usize> {
    let closed = traced.spaces().into_iter().find_map(|(index, _)| {
        let seal = seal::seal(traced.variant, traced.fine, index)?;
        seal.film.map(|_| seal.step)
    });
    let is_seal = |action: &Action| matches!(action, Action::Deposit { role: Role::Seal, .. });
    closed.or_else(|| traced.variant.steps.iter().rposition(|step| is_seal(&step.action)))
}

/// The narrower space of the site.
fn first_trial(traced: &Traced) -> f64 {
    let wafer = &traced.variant.wafer;
    match traced.site {
        Site::Array { array, .. } => {
            let pair = &wafer.lines.spaces[*array];
            pair.left.nominal.nm().min(pair.right.nominal.nm())
        }
        Site::Row { row, space, .. } => wafer.rows[*row].spaces[space - 1].nominal.nm(),
    }
}

/// The variant with one dense array of the site's lines at this space, up to its seal, which is
/// grown thicker; steps limited to sites act as they do at this one.
fn trial(traced: &Traced, step: usize, space_nm: f64) -> Variant {
    let mut variant = traced.variant.clone();
    if let Site::Row { row, space, .. } = traced.site {
        let widths = &variant.wafer.rows[*row].widths;
        variant.wafer.lines.width = widths[(space - 1).min(widths.len() - 1)];
    }
    let space = Amount::exact(Length::from_nm(space_nm));
    variant.wafer.lines.spaces = vec![SpacePair::drawn(space, space)];
    variant.wafer.rows.clear();
    variant.steps.truncate(step + 1);
    let sites = variant.sites();
    let here = |limited: &[Site]| limited.iter().any(|site| site.label() == traced.site.label());
    for step in &mut variant.steps {
        if let Some(limited) = &step.only_at {
            step.only_at = if here(limited) { None } else { Some(Vec::new()) };
        }
        if let Action::Mask { over, .. } = &mut step.action {
            *over = if here(over) { sites.clone() } else { Vec::new() };
        }
    }
    if let Some(Action::Deposit { thickness, .. }) =
        variant.steps.last_mut().map(|step| &mut step.action)
    {
        thickness.nominal = thickness.nominal * OVERSIZE;
    }
    variant
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::flow::State;
    use crate::measure::hand::{self, Void, flow};
    use crate::sim::{self, Event};

    /// A seal that closes at this thickness over the space, and leaves a void.
    fn growth(
        ratio: impl Fn(Fineness) -> f64 + Sync,
    ) -> impl Fn(&Variant, Fineness) -> Result<Vec<CellTrace>, SimError> + Sync {
        move |variant, fineness| {
            let space_nm = variant.wafer.lines.spaces[0].left.nominal.nm();
            let quarter = space_nm / 4.0;
            let void = Void { x: [-quarter, quarter], z: [20.0, 60.0] };
            let cell = hand::Cell { spaces: vec![space_nm, space_nm] };
            let mut stages = cell.stages(&[(0, void), (1, void)]);
            stages.truncate(3);
            let closes_nm = ratio(fineness) * space_nm;
            let Action::Deposit { thickness, .. } = &variant.steps[1].action else {
                panic!("the second step is the seal")
            };
            if closes_nm > thickness.nominal.nm() {
                stages[2].events.clear();
                stages[2].states = vec![State::Open; 2];
            }
            for event in &mut stages[2].events {
                if let Event::Closed { thickness_nm, .. } = event {
                    *thickness_nm = closes_nm;
                }
            }
            let cell = sim::Cell { sites: variant.sites() };
            Ok(vec![CellTrace { cell, facet_nm: 0.0, stages }])
        }
    }

    fn search(spaces: &[(f64, f64)], grow: &Grow) -> Reading {
        let flow = flow(spaces);
        let cell = hand::Cell { spaces: vec![spaces[0].0, spaces[0].1] };
        let stages = cell.stages(&[]);
        let traced = Traced {
            flow: &flow,
            variant: &flow.variants[0],
            site: &flow.variants[0].sites()[0],
            coarse: &stages,
            fine: &stages,
            facet_nm: 0.0,
        };
        closing_space(&traced, grow).unwrap()
    }

    #[test]
    fn a_seal_of_60_nm_closes_what_its_ratio_says() {
        for start in [20.0, 40.0, 400.0] {
            let found = search(&[(start, start)], &growth(|_| 0.6)).figure().unwrap();
            assert!((found.value - 100.0).abs() < 0.05, "from {start}: {found:?}");
        }
    }

    #[test]
    fn two_resolutions_give_its_error() {
        let ratio = |fineness| if fineness == Fineness::Fine { 0.6 } else { 0.588 };
        let found = search(&[(40.0, 40.0)], &growth(ratio)).figure().unwrap();
        assert!((found.value - 100.0).abs() < 0.1, "{found:?}");
        assert!(found.high - found.value > 2.0 && found.high - found.value < 3.0, "{found:?}");
    }

    #[test]
    fn a_seal_that_never_closes_has_none() {
        let found = search(&[(40.0, 40.0)], &growth(|_| f64::INFINITY));
        assert_eq!(found, Reading::Missing(Missing::NotClosed));
    }
}
