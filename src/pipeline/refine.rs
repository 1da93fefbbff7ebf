//! Grows at two resolutions and halves the facets until the figures are as accurate as asked.
//!
//! The error of a figure is estimated from the two resolutions (`measure::error`). Each level halves
//! the facets, and the finer trace of one level is the coarser one of the next, so that a level more
//! costs one growth. After the last level a figure keeps the error it has: limits that it
//! straddles are then answered with "cannot tell".

use super::run::{Progress, Run, RunError};
use crate::flow::{Dimension, Flow, Quantity};
use crate::measure::{Reading, Traced};
use crate::sim::{CellTrace, Grain, SimError, Simulator};

/// Times that the facets may be halved beyond the first two resolutions; each costs some five times
/// what the one before it did.
const REFINEMENTS: usize = 1;

/// Positions are wanted to within this many accuracies of the space: the cusp at a void's tip
/// is the least certain place of a section.
const POSITION: f64 = 2.0;

/// Error of a film that is always good enough, in nm.
const FILM_ERROR_NM: f64 = 0.25;

/// The two resolutions that a flow was judged at.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Levels {
    pub coarse: Grain,
    pub fine: Grain,
}

/// Grows variants at two resolutions, finer ones until `accuracy` is met.
pub(super) fn refine(
    flow: &Flow,
    variants: &[usize],
    accuracy: f64,
    simulator: &Simulator,
    progress: &Progress,
) -> Result<(Vec<Run>, Levels), RunError> {
    let coarse = Grain::default();
    let mut levels = Levels { coarse, fine: coarse.finer() };
    let grow = |grain: &Grain| -> Result<Vec<Vec<CellTrace>>, SimError> {
        let one = |&at: &usize| simulator.run(&flow.variants[at], grain, progress);
        variants.iter().map(one).collect()
    };
    let (mut before, mut after) = (grow(&levels.coarse)?, grow(&levels.fine)?);
    for _ in 0..REFINEMENTS {
        if accurate(flow, variants, &before, &after, accuracy)? {
            break;
        }
        levels = Levels { coarse: levels.fine, fine: levels.fine.finer() };
        before = after;
        after = grow(&levels.fine)?;
    }
    let grown = variants.iter().zip(before).zip(after);
    let runs = grown.map(|((&variant, coarse), fine)| Run { variant, coarse, fine }).collect();
    Ok((runs, levels))
}

fn accurate(
    flow: &Flow,
    variants: &[usize],
    coarse: &[Vec<CellTrace>],
    fine: &[Vec<CellTrace>],
    accuracy: f64,
) -> Result<bool, RunError> {
    for (&variant, (coarse, fine)) in variants.iter().zip(coarse.iter().zip(fine)) {
        for (coarse, fine) in coarse.iter().zip(fine) {
            let sites = 0..fine.cell.sites.len();
            let traced =
                sites.filter_map(|at| Traced::new(flow, &flow.variants[variant], coarse, fine, at));
            for traced in traced {
                if !site_accurate(&traced, accuracy)? {
                    return Ok(false);
                }
            }
        }
    }
    Ok(true)
}

fn site_accurate(traced: &Traced, accuracy: f64) -> Result<bool, RunError> {
    const FILMS: &[Quantity] = &[Quantity::SideFilm, Quantity::FloorFilm, Quantity::CornerFilm];
    const PLACES: &[Quantity] = &[
        Quantity::VoidTop,
        Quantity::VoidBottom,
        Quantity::VoidWidth,
        Quantity::VoidShare,
        Quantity::Roof,
        Quantity::SealMargin,
    ];
    let geometry = traced.geometry()?;
    if geometry.states().iter().any(|states| states.len() != 1) {
        return Ok(false);
    }
    let spaces = traced.spaces();
    let space_nm = spaces.iter().map(|&(space, _)| width_nm(traced, space));
    let space_nm = space_nm.fold(f64::INFINITY, f64::min);
    let close = |quantity: Quantity| {
        geometry.readings(quantity).into_iter().all(|reading| match reading {
            Reading::Known(figure) => {
                let allowed = match quantity.dimension() {
                    Dimension::Share => accuracy,
                    _ if FILMS.contains(&quantity) => {
                        (accuracy * figure.value.abs()).max(FILM_ERROR_NM)
                    }
                    _ => POSITION * accuracy * space_nm,
                };
                (figure.high - figure.low) / 2.0 <= allowed
            }
            Reading::Missing(_) => true,
            Reading::Unclear(_) => false,
        })
    };
    Ok(FILMS.iter().chain(PLACES).all(|&quantity| close(quantity)))
}

fn width_nm(traced: &Traced, space: usize) -> f64 {
    let section = traced.fine.last().map(|stage| &stage.section);
    section.map_or(f64::INFINITY, |section| section.drawn.space_widths(space)[1])
}
