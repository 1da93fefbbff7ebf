//! The step graph: which step needs which, and why.
//!
//! Nodes are the steps of one variant. An edge from A to B says that B needs A, or that the
//! text says so. It is read from the text and the library alone: [`needs`] walks the steps and
//! asks of each what it needs; where nothing before a step provides it, the first later step
//! that would is taken, and the edge points against the text: it is broken.
//!
//! Where the text breaks an edge and the operation numbers do not rise, the numbers may still
//! tell what was meant: if needs read in the order of the numbers are all met in that order,
//! they are taken.

mod cycles;
mod needs;
mod order;
mod render;

use petgraph::graph::{DiGraph, NodeIndex};

pub use needs::is_hermetic;
pub use order::{Proposal, reordered};

use crate::flow::{Flow, Variant};
use crate::library::Library;

/// Why one step needs another, from the needed step's side.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Reason {
    /// It empties the space that the other closes.
    Opens,
    /// It closes, bridges or covers what the other must find closed or covered.
    Covers,
    /// It brings the material that the other works on.
    Fills,
    /// It keeps the other's chemistry from what must stay.
    Protects,
    /// Gas must leave by it before the other shuts the way.
    ReleasesThrough,
    /// It brings the material on which the other stops.
    StopsOn,
    /// It makes the ground on which the other lands.
    LandsOn,
    /// The text says `after`.
    After,
    /// The text says `before`.
    Before,
}

impl Reason {
    /// In words, as in `010 opens 030`.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Opens => "opens",
            Self::Covers => "covers",
            Self::Fills => "fills",
            Self::Protects => "protects",
            Self::ReleasesThrough => "releases through",
            Self::StopsOn => "stops on",
            Self::LandsOn => "lands on",
            Self::After => "after",
            Self::Before => "before",
        }
    }
}

/// That `to` needs `from`; both are indices of steps in the variant.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Need {
    /// The step that must come first.
    pub from: usize,
    /// The step that needs it.
    pub to: usize,
    /// What kind of need it is.
    pub reason: Reason,
    /// The need in words, from the needing step's side: `needs a space that is open`.
    pub why: String,
}

/// The steps of one variant with their needs.
#[derive(Debug, Clone)]
pub struct Graph {
    graph: DiGraph<usize, Need>,
    labels: Vec<Label>,
}

/// How a step is named in texts.
#[derive(Debug, Clone)]
struct Label {
    op: String,
    words: String,
}

impl Graph {
    /// The graph of one variant of a flow.
    pub fn of(flow: &Flow, variant: &Variant) -> Self {
        Self::build(&flow.library, variant)
    }

    fn build(library: &Library, variant: &Variant) -> Self {
        let text_order: Vec<usize> = (0..variant.steps.len()).collect();
        let mut number_order = text_order.clone();
        number_order.sort_by_key(|&step| variant.steps[step].op);
        let read = |order: &[usize]| needs::read(library, variant, order);
        let mut needs = read(&text_order);
        if number_order != text_order && !met_in(&needs, &text_order) {
            let meant = read(&number_order);
            if met_in(&meant, &number_order) {
                needs = meant;
            }
        }
        Self::from_needs(library, variant, needs)
    }

    fn from_needs(library: &Library, variant: &Variant, needs: Vec<Need>) -> Self {
        let mut graph = DiGraph::new();
        let nodes: Vec<NodeIndex> = (0..variant.steps.len()).map(|s| graph.add_node(s)).collect();
        for need in needs {
            graph.add_edge(nodes[need.from], nodes[need.to], need);
        }
        let labels = variant
            .steps
            .iter()
            .map(|step| Label {
                op: step.op_text.clone(),
                words: format!("{} {}", step.op_text, render::words(library, step)),
            })
            .collect();
        Self { graph, labels }
    }

    /// Number of steps.
    pub fn steps(&self) -> usize {
        self.graph.node_count()
    }

    /// All needs, by the needing step, then by the needed one.
    pub fn needs(&self) -> Vec<&Need> {
        let mut needs: Vec<_> = self.graph.edge_weights().collect();
        needs.sort_by_key(|need| (need.to, need.from, need.reason));
        needs
    }

    /// The needs that the order of the text breaks.
    pub fn broken(&self) -> Vec<&Need> {
        self.needs().into_iter().filter(|need| need.from >= need.to).collect()
    }

    /// The broken need of a step, the needs of the process before those of the text.
    pub fn broken_need_of(&self, step: usize) -> Option<&Need> {
        let of_step = self.broken().into_iter().filter(|need| need.to == step || need.from == step);
        of_step.min_by_key(|need| (need.to != step, need.reason))
    }

    /// How a step is named: its operation number and what it does.
    pub fn label(&self, step: usize) -> &str {
        &self.labels[step].words
    }

    /// Operation number of a step as written.
    pub fn op(&self, step: usize) -> &str {
        &self.labels[step].op
    }
}

/// Whether an order of the steps meets all needs.
fn met_in(needs: &[Need], order: &[usize]) -> bool {
    let mut place = vec![0; order.len()];
    for (at, &step) in order.iter().enumerate() {
        place[step] = at;
    }
    needs.iter().all(|need| place[need.from] < place[need.to])
}
