//! Spaces that were emptied and are still open where they are judged.

use super::context::{Context, is_polish, is_removal, is_wet, site_of};
use crate::flow::{Action, Role, State};
use crate::sim::CellTrace;

/// Where an open space is met.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Judged {
    /// By a polish of this index.
    Polished(usize),
    /// By a liquid, in a step of this index.
    Wetted(usize),
    /// By the end of the flow.
    Left,
}

/// A space of a cell that is open where it is judged.
pub struct OpenGap<'a> {
    /// The cell.
    pub cell: &'a CellTrace,
    /// The space.
    pub space: usize,
    /// What emptied it; `None`: it was open on the wafer as found, or a polish opened it.
    pub emptied_by: Option<usize>,
    /// The last seal since it opened.
    pub sealed_by: Option<usize>,
    /// Where it is met.
    pub judged: Judged,
}

/// Every opening of every space that is met open, each once, where it is first met; spaces
/// that a limit allows to be open are left out.
pub fn open_gaps<'c, 'a>(context: &'c Context<'a>) -> &'c [OpenGap<'a>] {
    context.shared.open_gaps.get_or_init(|| find_open_gaps(context))
}

fn find_open_gaps<'a>(context: &Context<'a>) -> Vec<OpenGap<'a>> {
    let mut gaps = Vec::new();
    for cell in context.cells {
        for space in 0..cell.stages[0].states.len() {
            if !context.open_by_limit(site_of(cell, space)) {
                walk(context, cell, space, &mut gaps);
            }
        }
    }
    gaps
}

fn walk<'a>(context: &Context<'a>, cell: &'a CellTrace, space: usize, gaps: &mut Vec<OpenGap<'a>>) {
    let state = |stage: usize| cell.stages[stage].states[space];
    let (mut emptied_by, mut sealed_by, mut told) = (None, None, false);
    for (index, step) in context.steps() {
        let acts = cell.stages[index + 1].acts;
        let open = state(index) == State::Open;
        if open && acts && !told {
            let judged = if is_polish(step) {
                Some(Judged::Polished(index))
            } else if is_wet(step) && !needs_it_open(context, cell, index) {
                Some(Judged::Wetted(index))
            } else {
                None
            };
            if let Some(judged) = judged {
                told = true;
                gaps.push(OpenGap { cell, space, emptied_by, sealed_by, judged });
            }
        }
        if matches!(step.action, Action::Deposit { role: Role::Seal, .. }) && acts {
            sealed_by = Some(index);
        }
        if state(index + 1) == State::Open && !open {
            emptied_by = is_removal(step).then_some(index);
            (sealed_by, told) = (None, false);
        }
        if state(index + 1) != State::Open {
            (sealed_by, told) = (None, false);
        }
    }
    if state(context.variant.steps.len()) == State::Open && !told {
        gaps.push(OpenGap { cell, space, emptied_by, sealed_by, judged: Judged::Left });
    }
}

/// A liquid that removes something must find it: the strip of a mask that limited the opening
/// etch, an etch that goes on where another ended.
fn needs_it_open(context: &Context<'_>, cell: &CellTrace, index: usize) -> bool {
    let unchanged = |cell: &CellTrace| {
        cell.stages[index + 1].events.iter().any(|e| matches!(e, crate::sim::Event::NoEffect))
    };
    match context.variant.steps[index].action {
        Action::Strip { .. } => !context.cells.iter().all(unchanged),
        Action::Etch { .. } | Action::EtchUntil { .. } | Action::Release { .. } => !unchanged(cell),
        _ => false,
    }
}
