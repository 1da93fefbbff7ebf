//! Runs variants through their steps, all cells of one together, and keeps what they share.
//!
//! A cell is a path in a tree: its root is a blueprint at a grain, each edge an [`Operation`].
//! Variants that begin alike walk the same path, so that a common beginning is computed once.
//! `until` steps look at all cells of the variant before any of them moves; their depth or
//! plane then is part of the operation. Cells run in parallel. Every node is a pure function of
//! its path, so neither the number of threads nor the order of the variants changes a bit of it.

use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::{Arc, Mutex, PoisonError};

use rayon::prelude::*;

use super::blueprint::{self, Blueprint};
use super::error::{Fault, SimError};
use super::operation::{Deed, Operation, Resolved, resolve};
use super::steps::{self, Bench};
use super::{Cell, CellTrace, Event, Section, Stage, draw, fold, spaces, surface};
use crate::flow::{Flow, Step, Variant};
use crate::front::Resolution;
use crate::geom::Region;
use crate::library::{Library, MaterialId};
use crate::num::tolerance::SLIVER_NM;

/// How finely fronts are resolved, relative to the cell.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Grain {
    /// Facet length over the least of space, line height and twice the line width.
    pub facet: f64,
}

impl Default for Grain {
    fn default() -> Self {
        Self { facet: 1.0 / 10.0 }
    }
}

impl Grain {
    /// Half the facet.
    #[must_use]
    pub fn finer(self) -> Self {
        Self { facet: self.facet / 2.0 }
    }
}

/// Runs variants of flows with one library, and keeps what they share.
pub struct Simulator {
    library: Arc<Library>,
    roots: Mutex<Vec<(Blueprint, Grain, Arc<Node>)>>,
}

/// A cell after some steps.
struct Node {
    /// The section; the right half of a symmetric cell.
    section: Section,
    /// Its ambient.
    ambient: Region,
    symmetric: bool,
    resolution: Resolution,
    /// What the step did, and the whole section.
    stage: Stage,
    next: Mutex<Vec<(Operation, Arc<Node>)>>,
}

/// Runs one variant at one grain; `progress` gets the cell-steps done and their total.
///
/// # Errors
///
/// See [`SimError`]; of several cells' errors, the first cell's.
pub fn run(
    flow: &Flow,
    variant: &Variant,
    grain: &Grain,
    progress: &(dyn Fn(usize, usize) + Sync),
) -> Result<Vec<CellTrace>, SimError> {
    Simulator::new(Arc::clone(&flow.library)).run(variant, grain, progress)
}

impl Simulator {
    /// A simulator that has computed nothing yet.
    pub fn new(library: Arc<Library>) -> Self {
        Self { library, roots: Mutex::default() }
    }

    /// Runs one variant at one grain; `progress` gets the cell-steps done and their total.
    ///
    /// # Errors
    ///
    /// See [`SimError`]; of several cells' errors, the first cell's.
    pub fn run(
        &self,
        variant: &Variant,
        grain: &Grain,
        progress: &(dyn Fn(usize, usize) + Sync),
    ) -> Result<Vec<CellTrace>, SimError> {
        let cells = blueprint::cells(variant)?;
        let roots: Vec<_> =
            cells.par_iter().map(|(cell, blueprint)| self.root(cell, blueprint, grain)).collect();
        let mut nodes = roots.into_iter().collect::<Result<Vec<_>, _>>()?;
        let mut traces: Vec<_> = cells
            .iter()
            .zip(&nodes)
            .map(|((cell, _), node)| CellTrace {
                cell: cell.clone(),
                facet_nm: node.resolution.facet_nm,
                stages: vec![node.stage.clone()],
            })
            .collect();
        let done = AtomicUsize::new(0);
        let total = cells.len() * variant.steps.len();
        for (at, step) in variant.steps.iter().enumerate() {
            let operations = self.operations(at, step, &cells, &nodes)?;
            let results: Vec<_> = nodes
                .par_iter()
                .zip(&operations)
                .zip(&cells)
                .map(|((node, operation), (cell, _))| {
                    let next = match operation {
                        Some(operation) => self.next(node, operation).map(Some),
                        None => Ok(None),
                    };
                    progress(done.fetch_add(1, Ordering::Relaxed) + 1, total);
                    next.map_err(|fault| at_step(fault, step, cell))
                })
                .collect();
            for (cell, result) in results.into_iter().enumerate() {
                let stage = match result? {
                    Some(node) => {
                        nodes[cell] = node;
                        nodes[cell].stage.clone()
                    }
                    None => spared(at, &nodes[cell].stage),
                };
                traces[cell].stages.push(stage);
            }
        }
        Ok(traces)
    }

    fn root(
        &self,
        cell: &Cell,
        blueprint: &Blueprint,
        grain: &Grain,
    ) -> Result<Arc<Node>, SimError> {
        let known = |roots: &Vec<(Blueprint, Grain, Arc<Node>)>| {
            let mut alike = roots.iter().filter(|(own, at, _)| own == blueprint && at == grain);
            alike.next().map(|(_, _, node)| Arc::clone(node))
        };
        if let Some(node) = known(&lock(&self.roots)) {
            return Ok(node);
        }
        let section = draw::draw(blueprint);
        section.check().map_err(|message| SimError::Internal {
            place: format!("the drawing of {}", label(cell)),
            message,
        })?;
        let resolution = Resolution {
            facet_nm: grain.facet * blueprint.scale(),
            closure_width_nm: self.library.settings.closure_width_nm,
        };
        let node = self.node(section, blueprint.symmetric, resolution, None);
        let mut roots = lock(&self.roots);
        Ok(known(&roots).unwrap_or_else(|| {
            let node = Arc::new(node);
            roots.push((blueprint.clone(), *grain, Arc::clone(&node)));
            node
        }))
    }

    /// What the step is to each cell; `None` where it spares the cell.
    fn operations(
        &self,
        at: usize,
        step: &Step,
        cells: &[(Cell, Blueprint)],
        nodes: &[Arc<Node>],
    ) -> Result<Vec<Option<Operation>>, SimError> {
        let mut resolved = Vec::new();
        for (cell, blueprint) in cells {
            let one = resolve(at, step, cell, &blueprint.drawn, &self.library);
            resolved.push(one.map_err(|fault| at_step(fault, step, cell))?);
        }
        let reaches: Vec<_> = resolved
            .par_iter()
            .zip(nodes)
            .zip(cells)
            .map(|((resolved, node), (cell, _))| {
                self.goal(resolved, node).map_err(|fault| at_step(fault, step, cell))
            })
            .collect();
        let mut goals = Vec::new();
        for reach in reaches {
            goals.extend(reach?);
        }
        let first = goals.iter().copied().reduce(f64::min);
        let top = goals.iter().copied().reduce(f64::max);
        let operation = |resolved| match resolved {
            Resolved::Spared => Ok(None),
            Resolved::Ready(operation) => Ok(Some(operation)),
            Resolved::Until(mut operation, stop, overetch) => {
                let first = first.ok_or_else(|| self.never_reached(step, stop))?;
                if let Deed::Erode(erode) = &mut operation.deed {
                    erode.depth = first * (1.0 + overetch);
                }
                Ok(Some(operation))
            }
            Resolved::PlaneOf(mut operation, stop) => {
                let z = top.ok_or_else(|| self.never_reached(step, stop))?;
                operation.deed = Deed::Polish { z };
                Ok(Some(operation))
            }
        };
        resolved.into_iter().map(operation).collect()
    }

    /// The depth, or the height, at which one cell meets what the step waits for.
    fn goal(&self, resolved: &Resolved, node: &Node) -> Result<Option<f64>, Fault> {
        match resolved {
            Resolved::Until(operation, stop, _) => {
                let Deed::Erode(erode) = &operation.deed else { return Ok(None) };
                let bench = self.bench(operation, node);
                steps::reach(erode, *stop, &node.section, &bench)
            }
            Resolved::PlaneOf(_, stop) => {
                let of_it = node.section.bodies.iter().filter(|body| body.material == *stop);
                let tops = of_it.filter_map(|body| body.region.bounds()).map(|b| b.max.z);
                Ok(tops.reduce(f64::max))
            }
            Resolved::Spared | Resolved::Ready(_) => Ok(None),
        }
    }

    fn never_reached(&self, step: &Step, stop: MaterialId) -> SimError {
        let name = &self.library.material(stop).name;
        SimError::Step {
            op: step.op_text.clone(),
            site: "any site".to_owned(),
            message: format!("{} never reaches {name}", step.action.verb()),
            help: format!("{name} must lie in its way, or give an amount instead of `until`"),
            span: step.span,
        }
    }

    fn bench<'a>(&'a self, operation: &Operation, node: &Node) -> Bench<'a> {
        let blocked = blocked(&operation.spared, node);
        let ambient = if blocked.is_empty() {
            node.ambient.clone()
        } else {
            node.ambient.difference(&blocked)
        };
        let resolution = node.resolution;
        Bench { library: &self.library, resolution, ambient, blocked, step: operation.step }
    }

    /// The node after an operation, computed once.
    fn next(&self, node: &Node, operation: &Operation) -> Result<Arc<Node>, Fault> {
        let known = |next: &Vec<(Operation, Arc<Node>)>| {
            let mut alike = next.iter().filter(|(own, _)| own == operation);
            alike.next().map(|(_, node)| Arc::clone(node))
        };
        if let Some(node) = known(&lock(&node.next)) {
            return Ok(node);
        }
        let computed = self.advance(node, operation)?;
        let mut next = lock(&node.next);
        Ok(known(&next).unwrap_or_else(|| {
            let computed = Arc::new(computed);
            next.push((operation.clone(), Arc::clone(&computed)));
            computed
        }))
    }

    fn advance(&self, node: &Node, operation: &Operation) -> Result<Node, Fault> {
        let bench = self.bench(operation, node);
        let pieces = surface::pieces(&node.section, &bench.ambient);
        let exposed = surface::exposures(&node.section, &pieces, node.symmetric);
        let change = steps::apply(operation, &node.section, &bench)?;
        change.section.check().map_err(Fault::Internal)?;
        let effect = change.changed();
        let mut next = self.node(change.section, node.symmetric, node.resolution, Some(operation));
        let mut events = change.events;
        let voids = node.section.voids.iter();
        events.extend(voids.filter_map(|void| opened(void, &next.section, &next.ambient)));
        if node.symmetric {
            events = fold::unfold_events(events);
        }
        match &operation.deed {
            Deed::Via(via) => events.extend(steps::slots(via, &next.stage.section, operation.step)),
            Deed::Nothing | Deed::Shrink { .. } => {}
            _ if !effect => events.push(Event::NoEffect),
            _ => {}
        }
        next.stage.exposed_before = exposed;
        next.stage.events = events;
        Ok(next)
    }

    fn node(
        &self,
        section: Section,
        symmetric: bool,
        resolution: Resolution,
        operation: Option<&Operation>,
    ) -> Node {
        let ambient = section.ambient();
        let count = section.drawn.space_count();
        let spaces = if symmetric { vec![1; count] } else { (0..count).collect() };
        let mut states = Vec::new();
        let mut throats_nm = Vec::new();
        for (at, &space) in spaces.iter().enumerate() {
            if symmetric && at > 0 {
                states.push(states[0]);
                throats_nm.push(throats_nm[0]);
                continue;
            }
            let state = spaces::state(&section, &ambient, space, &self.library);
            let open = state == crate::flow::State::Open;
            throats_nm.push(if open { spaces::throat(&section, &ambient, space) } else { None });
            states.push(state);
        }
        let whole = if symmetric { fold::unfold(&section) } else { section.clone() };
        let stage = Stage {
            step: operation.map(|operation| operation.step),
            acts: true,
            exposed_before: Vec::new(),
            section: Arc::new(whole),
            events: Vec::new(),
            states,
            throats_nm,
        };
        Node { section, ambient, symmetric, resolution, stage, next: Mutex::default() }
    }
}

/// A poisoned lock holds whole entries all the same: they are pushed complete.
fn lock<T>(mutex: &Mutex<T>) -> std::sync::MutexGuard<'_, T> {
    mutex.lock().unwrap_or_else(PoisonError::into_inner)
}

/// The stage of a cell that a step spares.
fn spared(step: usize, before: &Stage) -> Stage {
    Stage {
        step: Some(step),
        acts: false,
        exposed_before: Vec::new(),
        events: Vec::new(),
        ..before.clone()
    }
}

/// What of the ambient lies in spared spaces, up to a closure width above the surface there: a
/// mask that costs nothing.
fn blocked(spared: &[usize], node: &Node) -> Region {
    let section = &node.section;
    let strips = spared.iter().map(|&space| {
        let x = section.drawn.space(space).x;
        let strip = Region::rectangle(x, [section.bottom(), section.sky()]);
        let surface = section.solid().intersection(&strip).bounds().map_or(0.0, |b| b.max.z);
        let top = (surface + node.resolution.closure_width_nm).min(section.sky());
        Region::rectangle(x, [section.bottom(), top])
    });
    Region::union_all(&strips.collect::<Vec<_>>()).intersection(&node.ambient)
}

/// The event of a void that the ambient reaches now.
fn opened(void: &Region, after: &Section, ambient: &Region) -> Option<Event> {
    let met = void.intersection(ambient);
    let bounds = void.bounds()?;
    let is_open = !met.is_empty() && !super::section::is_thinner_than(&met, SLIVER_NM);
    is_open.then(|| Event::Opened {
        space: after.drawn.space_at((bounds.min.x + bounds.max.x) / 2.0),
        void: void.clone(),
    })
}

fn label(cell: &Cell) -> String {
    let labels: Vec<_> = cell.sites.iter().map(crate::flow::Site::label).collect();
    labels.join(", ")
}

fn at_step(fault: Fault, step: &Step, cell: &Cell) -> SimError {
    let (op, site, span) = (step.op_text.clone(), label(cell), step.span);
    match fault {
        Fault::Refused { message, help } => SimError::Step { op, site, message, help, span },
        Fault::Front(error) => SimError::Front { op, site, error, span },
        Fault::Internal(message) => {
            SimError::Internal { place: format!("operation {op} at {site}"), message }
        }
    }
}
