//! Cautions that a flow with hazardous steps carries, once a flow.
//!
//! The words are the usual ones (common practice); local codes and safety data sheets decide.

use std::collections::BTreeMap;

use crate::flow::{Action, Flow, Variant};
use crate::library::HAZARDS;

/// One hazard of a flow.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Caution {
    /// The hazard as the library names it.
    pub hazard: &'static str,
    /// Operation numbers of the steps that carry it, as written, in the order of the text.
    pub steps: Vec<String>,
    /// What to mind.
    pub text: &'static str,
}

/// The hazards of a variant's steps, by their process and by the materials that they bring or
/// take away; in the order of the library's list.
pub fn cautions(flow: &Flow, variant: &Variant) -> Vec<Caution> {
    let mut by_hazard: BTreeMap<usize, Vec<String>> = BTreeMap::new();
    for step in &variant.steps {
        let process = &step.action.process().process.hazards;
        let materials = materials(&step.action).into_iter().flat_map(|id| {
            let material = flow.library.material(id);
            // A metal is a hazard where chemistry takes it, which its rule says.
            material.hazards.iter().filter(|hazard| hazard.as_str() != "ruthenium-oxide")
        });
        for hazard in process.iter().chain(materials) {
            let Some(place) = HAZARDS.iter().position(|known| known.word == hazard) else {
                continue;
            };
            let steps = by_hazard.entry(place).or_default();
            if steps.last() != Some(&step.op_text) {
                steps.push(step.op_text.clone());
            }
        }
    }
    let told = |(place, steps): (usize, Vec<String>)| Caution {
        hazard: HAZARDS[place].word,
        steps,
        text: HAZARDS[place].caution,
    };
    by_hazard.into_iter().map(told).collect()
}

fn materials(action: &Action) -> Vec<crate::library::MaterialId> {
    match *action {
        Action::Deposit { material, .. }
        | Action::Etch { material, .. }
        | Action::EtchUntil { material, .. }
        | Action::Mask { material, .. }
        | Action::Fill { material, .. }
        | Action::Release { material, .. }
        | Action::Strip { material, .. }
        | Action::Via { material, .. } => vec![material],
        _ => Vec::new(),
    }
}
