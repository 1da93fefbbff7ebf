//! Needs that contradict each other: a shortest cycle of each knot of steps, whole.

use std::collections::VecDeque;

use petgraph::algo::tarjan_scc;
use petgraph::graph::NodeIndex;
use petgraph::visit::EdgeRef;

use super::{Graph, Need};

impl Graph {
    /// One shortest cycle for each set of steps that need each other in a circle, by its
    /// first step; every need ends at the step where the next begins.
    pub fn cycles(&self) -> Vec<Vec<&Need>> {
        let mut cycles: Vec<_> = tarjan_scc(&self.graph)
            .iter()
            .filter_map(|knot| {
                let first = *knot.iter().min()?;
                let shortest = knot.iter().filter_map(|&node| self.circle_from(node));
                let cycle = shortest.min_by_key(|cycle| (cycle.len(), cycle[0].from))?;
                Some((first, cycle))
            })
            .collect();
        cycles.sort_by_key(|(first, _)| *first);
        cycles.into_iter().map(|(_, cycle)| cycle).collect()
    }

    /// A shortest way from a step back to itself.
    fn circle_from(&self, start: NodeIndex) -> Option<Vec<&Need>> {
        let mut reached_by: Vec<Option<&Need>> = vec![None; self.steps()];
        let mut open = VecDeque::from([start]);
        while let Some(node) = open.pop_front() {
            let mut onward: Vec<_> = self.graph.edges(node).collect();
            onward.sort_by_key(|edge| (edge.target(), edge.weight().reason));
            for edge in onward {
                let target = edge.target();
                if reached_by[target.index()].is_some() {
                    continue;
                }
                reached_by[target.index()] = Some(edge.weight());
                if target == start {
                    return Some(walk_back(start.index(), &reached_by));
                }
                open.push_back(target);
            }
        }
        None
    }
}

fn walk_back<'a>(start: usize, reached_by: &[Option<&'a Need>]) -> Vec<&'a Need> {
    let mut cycle = Vec::new();
    let mut at = start;
    while let Some(need) = reached_by[at] {
        cycle.push(need);
        at = need.from;
        if at == start {
            break;
        }
    }
    cycle.reverse();
    cycle
}
