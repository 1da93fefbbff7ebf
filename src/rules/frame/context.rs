//! What a check is given, and the ways through it that most checks take.

use std::cell::OnceCell;

use super::gaps::OpenGap;
use super::metal::BareContact;
use super::roofs::Roof;
use super::ways::Kept;
use crate::flow::{Action, Claim, Flow, Site, State, Step, Variant};
use crate::graph::Graph;
use crate::library::{Ambient, Material, MaterialId, Process};
use crate::measure::SiteFigures;
use crate::sim::{CellTrace, Exposure, Stage};

/// A bare spot at least this long, in nm, is exposed; less is what finite facets leave at
/// corners under a closed film, and no section can judge it.
pub const LEAST_EXPOSED_NM: f64 = 1.0;

/// One judged variant with everything that is known of it.
pub struct Context<'a> {
    /// The flow.
    pub flow: &'a Flow,
    /// The variant that is judged.
    pub variant: &'a Variant,
    /// Its step graph.
    pub graph: &'a Graph,
    /// Its cells, at the finer resolution.
    pub cells: &'a [CellTrace],
    /// Its figures.
    pub sites: &'a [SiteFigures],
    /// What several rules ask of the sections, found once.
    pub(super) shared: Shared<'a>,
}

/// What several rules ask of the sections, found when the first of them asks.
#[derive(Default)]
pub(super) struct Shared<'a> {
    pub bare_contacts: OnceCell<Vec<BareContact<'a>>>,
    pub kept: OnceCell<Vec<Kept<'a>>>,
    pub open_gaps: OnceCell<Vec<OpenGap<'a>>>,
    pub roofs: OnceCell<Vec<Roof<'a>>>,
}

/// One step in one cell: what was there before and after.
#[derive(Clone, Copy)]
pub struct Moment<'a> {
    /// The cell.
    pub cell: &'a CellTrace,
    /// Index of the step in the variant.
    pub index: usize,
    /// The step.
    pub step: &'a Step,
    /// The stage before the step.
    pub before: &'a Stage,
    /// The stage after it.
    pub after: &'a Stage,
}

impl<'a> Moment<'a> {
    /// The process of the step, its overrides applied.
    pub fn process(&self) -> &'a Process {
        &self.step.action.process().process
    }

    /// What the step found exposed to its ambient, longest first.
    pub fn exposed(&self) -> &'a [Exposure] {
        let exposed = &self.after.exposed_before;
        let tiny = exposed.iter().position(|exposure| exposure.length_nm < LEAST_EXPOSED_NM);
        &exposed[..tiny.unwrap_or(exposed.len())]
    }

    /// What the step met: what it found exposed, and what it uncovered (the next step finds it).
    pub fn met(&self) -> Vec<Exposure> {
        let mut met = self.exposed().to_vec();
        let next = self.cell.stages[self.index + 2..].iter().find(|stage| stage.acts);
        let found = next.iter().flat_map(|stage| &stage.exposed_before);
        for exposure in found.filter(|exposure| exposure.length_nm >= LEAST_EXPOSED_NM) {
            if met.iter().all(|known| known.material != exposure.material) {
                met.push(exposure.clone());
            }
        }
        met
    }

    /// Spaces of the cell, from 0.
    pub fn spaces(&self) -> std::ops::Range<usize> {
        0..self.after.states.len()
    }
}

impl<'a> Context<'a> {
    /// A variant with its graph, its cells and its figures.
    pub fn new(
        flow: &'a Flow,
        variant: &'a Variant,
        graph: &'a Graph,
        cells: &'a [CellTrace],
        sites: &'a [SiteFigures],
    ) -> Self {
        Self { flow, variant, graph, cells, sites, shared: Shared::default() }
    }

    /// The material of an id.
    pub fn material(&self, id: MaterialId) -> &'a Material {
        self.flow.library.material(id)
    }

    /// Name of a material.
    pub fn name(&self, id: MaterialId) -> &'a str {
        &self.material(id).name
    }

    /// Name of the process of a step.
    pub fn process_name(&self, step: usize) -> &'a str {
        &self.variant.steps[step].action.process().process.name
    }

    /// What to do about a step that stands in the wrong place: the need that is broken and the
    /// legal order that moves the fewest steps, else plain advice.
    pub fn order_help(&self, step: usize, advice: &str) -> String {
        let Some(need) = self.graph.broken_need_of(step) else { return advice.to_owned() };
        let broken = format!("{advice}; {}", self.graph.need_words(need));
        match self.graph.proposal(self.flow, self.variant) {
            Some(proposal) if !proposal.moved.is_empty() => {
                let ops: Vec<_> = proposal.order.iter().map(|&s| self.graph.op(s)).collect();
                format!("{broken}; a legal order that moves the fewest steps: {}", ops.join(" "))
            }
            _ => broken,
        }
    }

    /// The steps with their indices.
    pub fn steps(&self) -> impl Iterator<Item = (usize, &'a Step)> + use<'a> {
        self.variant.steps.iter().enumerate()
    }

    /// Every step in every cell on which it acts: step by step, cell by cell.
    pub fn moments(&self) -> impl Iterator<Item = Moment<'a>> + use<'a> {
        let cells = self.cells;
        self.steps().flat_map(move |(index, step)| {
            cells.iter().filter_map(move |cell| {
                let (before, after) = (&cell.stages[index], &cell.stages[index + 1]);
                after.acts.then_some(Moment { cell, index, step, before, after })
            })
        })
    }

    /// Whether a limit says, before or at the end, that a site may be open.
    pub fn open_by_limit(&self, site: &Site) -> bool {
        self.flow.limits.iter().any(|limit| {
            limit.claim == Claim::State(State::Open)
                && limit.at.as_ref().is_none_or(|at| at.iter().any(|s| s.label() == site.label()))
        })
    }

    /// Whether a limit says that a site is to be solid.
    pub fn solid_by_limit(&self, site: &Site) -> bool {
        self.flow.limits.iter().any(|limit| {
            limit.claim == Claim::State(State::Solid)
                && limit.at.as_ref().is_none_or(|at| at.iter().any(|s| s.label() == site.label()))
        })
    }

    /// Index of the first step from `from` on that judges a space: a polish, a wet step, or
    /// the number of steps for the end of the flow.
    pub fn next_judgement(&self, from: usize, cell: &CellTrace) -> usize {
        let judges = |&i: &usize| {
            let step = &self.variant.steps[i];
            cell.stages[i + 1].acts && (is_polish(step) || is_wet(step))
        };
        (from..self.variant.steps.len()).find(judges).unwrap_or(self.variant.steps.len())
    }
}

/// The site to which a space of a cell belongs.
pub fn site_of(cell: &CellTrace, space: usize) -> &Site {
    cell.cell.sites.get(space).unwrap_or(&cell.cell.sites[0])
}

/// The space of a cell that is nearest to a place x, in nm.
pub fn space_at(cell: &CellTrace, x: f64) -> usize {
    let drawn = &cell.stages[0].section.drawn;
    drawn.lines.iter().filter(|line| x > (line.top_x[0] + line.top_x[1]) / 2.0).count()
}

/// Whether a step is a polish.
pub fn is_polish(step: &Step) -> bool {
    matches!(step.action, Action::Polish { .. } | Action::PolishUntil { .. })
}

/// Whether a step brings the wafer into a liquid; a polish, wet as it is, is judged as one.
pub fn is_wet(step: &Step) -> bool {
    !is_polish(step) && step.action.process().process.meets(&[Ambient::Wet])
}

/// Whether a step removes material by its own chemistry.
pub fn is_removal(step: &Step) -> bool {
    matches!(
        step.action,
        Action::Etch { .. }
            | Action::EtchUntil { .. }
            | Action::Strip { .. }
            | Action::Release { .. }
            | Action::Convert { .. }
    )
}

/// What a step grows, spins on or flows: a film or a fill.
pub fn added(step: &Step) -> Option<MaterialId> {
    match step.action {
        Action::Deposit { material, .. } | Action::Fill { material, .. } => Some(material),
        _ => None,
    }
}

/// What a removing step is meant to take away or change.
pub fn target(step: &Step) -> Option<MaterialId> {
    match step.action {
        Action::Etch { material, .. }
        | Action::EtchUntil { material, .. }
        | Action::Strip { material, .. }
        | Action::Release { material, .. }
        | Action::Convert { from: material, .. } => Some(material),
        _ => None,
    }
}

/// The temperature of a step, °C: its own, else that of its process.
pub fn temperature_c(step: &Step) -> Option<f64> {
    match step.action {
        Action::Release { temperature, .. }
        | Action::Anneal { temperature, .. }
        | Action::Cure { temperature, .. } => Some(temperature.nominal.celsius()),
        _ => step.action.process().process.temperature_c.map(|t| t.value),
    }
}
