//! `via-clearance`: from a via's edge, overlay and half its width tolerance included, to the
//! nearest void. The step that opens the via measured it; here the least one is taken.

use crate::sim::{Event, Stage};

/// The least clearance of all vias onto the lines beside a space, in nm; `None` without via or void.
pub(super) fn clearance_nm(stages: &[Stage], index: usize) -> Option<f64> {
    let events = stages.iter().flat_map(|stage| &stage.events);
    let clearances = events.filter_map(|event| match event {
        Event::Via { line, clearance_nm, .. } if *line == index || line + 1 == index => {
            *clearance_nm
        }
        _ => None,
    });
    clearances.min_by(f64::total_cmp)
}
