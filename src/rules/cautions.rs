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
    pub hazard: String,
    /// Operation numbers of the steps that carry it, as written, in the order of the text.
    pub steps: Vec<String>,
    /// What to mind.
    pub text: &'static str,
}

/// Said once, above all cautions.
pub const FRAME: &str = "Planning aid, not a recipe or a qualification. Hazards need trained, \
    licensed staff and site-approved equipment; local codes and safety data sheets decide.";

/// What to mind of a hazard; in the order of [`HAZARDS`].
const TEXTS: &[(&str, &str)] = &[
    ("hf", "HF: deep, delayed, possibly fatal burns; calcium gluconate at hand, never work alone"),
    ("silane", "silanes ignite in air and may explode after a delay; ventilated, monitored lines"),
    ("ozone", "ozone and N2O: toxic, strong oxidisers; monitor, destroy the exhaust"),
    ("fluorine", "XeF2, WF6, NF3 and fluorine plasmas: toxic, give HF with moisture; abate"),
    ("chlorine", "chlorine and its plasma products: toxic, corrosive; monitor, purge, abate"),
    (
        "decomposition",
        "decomposing polymers and photoacids: CO, aldehydes, fluorinated acids; vent and abate",
    ),
    (
        "ruthenium-oxide",
        "RuO4: volatile, toxic, a strong oxidiser; keep Ru from oxygen plasma and ozone",
    ),
    ("solvent", "solvents: flammable, harmful vapours; ventilation, no ignition"),
    ("slurry", "slurries: corrosive or oxidising, abrasive; eye and skin protection, waste apart"),
    ("vacuum", "vacuum: implosion, trapped gas; vent slowly, guard windows"),
    ("heat", "heat: burns, thermal runaway; interlocks, cool before opening"),
];

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
            let Some(place) = HAZARDS.iter().position(|known| known == hazard) else { continue };
            let steps = by_hazard.entry(place).or_default();
            if steps.last() != Some(&step.op_text) {
                steps.push(step.op_text.clone());
            }
        }
    }
    by_hazard
        .into_iter()
        .filter_map(|(place, steps)| {
            let (hazard, text) = TEXTS.iter().find(|(hazard, _)| *hazard == HAZARDS[place])?;
            Some(Caution { hazard: (*hazard).to_owned(), steps, text })
        })
        .collect()
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_hazard_of_the_library_has_its_words_in_order() {
        let known: Vec<_> = TEXTS.iter().map(|(hazard, _)| *hazard).collect();
        assert_eq!(known, HAZARDS);
    }
}
