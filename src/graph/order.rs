//! The legal order that moves the fewest steps.
//!
//! Keeping a set K of steps in place means that they keep the order of the text. With a partial
//! order P of needs that works exactly if no two steps of K stand in the text against P: then
//! every path of needs between two kept steps runs with the text, and needs and text order
//! together have no cycle. "Stands before in the text and must come after" is itself a partial
//! order (it is the intersection of two), so the largest K is a largest antichain of it, and by
//! Dilworth (Ann. Math. 51, 161 (1950)) and König it follows exactly from a maximum matching.
//! The moved steps then go as close to where they stood as the needs allow.
//!
//! Cost: n³ for the closure and the matching, n steps. It fails only where needs form a cycle.

use petgraph::algo::toposort;
use petgraph::graph::DiGraph;

use super::{Graph, Need};
use crate::flow::{Flow, Variant};

/// Rounds of reading the needs again in a proposed order.
const ROUNDS: usize = 8;

/// A legal order and what it costs.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Proposal {
    /// Indices of the steps, in the proposed order.
    pub order: Vec<usize>,
    /// Indices of the steps that leave their place, in the order of the text.
    pub moved: Vec<usize>,
}

impl Graph {
    /// The legal order that moves the fewest steps; the text's own order where it is legal.
    /// `None` where the needs contradict each other.
    ///
    /// In another order a step can need another step, so the needs are read again in the
    /// proposed one and added until nothing is broken.
    pub fn proposal(&self, flow: &Flow, variant: &Variant) -> Option<Proposal> {
        let mut needs: Vec<Need> = self.needs().into_iter().cloned().collect();
        for _ in 0..ROUNDS {
            let proposal = fewest_moves(self.steps(), &needs)?;
            let again = reordered(variant, &proposal.order);
            let graph = Self::of(flow, &again);
            let broken = graph.broken();
            if broken.is_empty() {
                return Some(proposal);
            }
            // Steps of the reordered variant are numbered by their new places.
            needs.extend(broken.into_iter().map(|need| Need {
                from: proposal.order[need.from],
                to: proposal.order[need.to],
                ..need.clone()
            }));
        }
        None
    }
}

/// The variant with its steps in another order; operation numbers stay with their steps.
pub fn reordered(variant: &Variant, order: &[usize]) -> Variant {
    let steps = order.iter().map(|&step| variant.steps[step].clone()).collect();
    Variant { steps, ..variant.clone() }
}

/// The order of `0..steps` that meets the needs and moves the fewest; `None` on a cycle.
fn fewest_moves(steps: usize, needs: &[Need]) -> Option<Proposal> {
    let reaches = closure(steps, needs)?;
    // An inverted pair: `early` stands before `late` in the text and must come after it.
    let inverted = |early: usize, late: usize| early < late && reaches[late][early];
    let kept = largest_antichain(steps, &inverted);
    let order = nearest_order(steps, needs, &kept);
    let moved = (0..steps).filter(|&step| !kept[step]).collect();
    Some(Proposal { order, moved })
}

/// Which step must come before which; `None` on a cycle.
fn closure(steps: usize, needs: &[Need]) -> Option<Vec<Vec<bool>>> {
    let mut graph = DiGraph::<(), ()>::new();
    let nodes: Vec<_> = (0..steps).map(|_| graph.add_node(())).collect();
    let mut reaches = vec![vec![false; steps]; steps];
    for need in needs {
        graph.add_edge(nodes[need.from], nodes[need.to], ());
        reaches[need.from][need.to] = true;
    }
    let sorted = toposort(&graph, None).ok()?;
    // From the last to the first, what a step reaches is complete before it is used.
    for node in sorted.iter().rev() {
        for next in graph.neighbors(*node).map(|n| n.index()).collect::<Vec<_>>() {
            let beyond = reaches[next].clone();
            let own = &mut reaches[node.index()];
            own.iter_mut().zip(beyond).for_each(|(mine, theirs)| *mine |= theirs);
        }
    }
    Some(reaches)
}

/// A largest set without an inverted pair: the complement of a minimum vertex cover in the
/// bipartite graph of "early" and "late" copies of the steps.
fn largest_antichain(steps: usize, inverted: &dyn Fn(usize, usize) -> bool) -> Vec<bool> {
    let mut late_of: Vec<Option<usize>> = vec![None; steps];
    let mut early_of: Vec<Option<usize>> = vec![None; steps];
    for early in 0..steps {
        let mut seen = vec![false; steps];
        augment(early, inverted, &mut seen, &mut early_of, &mut late_of);
    }
    // König: alternating paths from the unmatched early copies.
    let (mut early_seen, mut late_seen) = (vec![false; steps], vec![false; steps]);
    let mut open: Vec<usize> = (0..steps).filter(|&early| late_of[early].is_none()).collect();
    while let Some(early) = open.pop() {
        if std::mem::replace(&mut early_seen[early], true) {
            continue;
        }
        for late in (0..steps).filter(|&late| inverted(early, late)) {
            if !std::mem::replace(&mut late_seen[late], true) {
                open.extend(early_of[late]);
            }
        }
    }
    (0..steps).map(|step| early_seen[step] && !late_seen[step]).collect()
}

/// One augmenting path of the matching; `early_of` by late copy, `late_of` by early copy.
fn augment(
    early: usize,
    inverted: &dyn Fn(usize, usize) -> bool,
    seen: &mut [bool],
    early_of: &mut [Option<usize>],
    late_of: &mut [Option<usize>],
) -> bool {
    for late in 0..seen.len() {
        if !inverted(early, late) || std::mem::replace(&mut seen[late], true) {
            continue;
        }
        let free = match early_of[late] {
            None => true,
            Some(other) => augment(other, inverted, seen, early_of, late_of),
        };
        if free {
            early_of[late] = Some(early);
            late_of[early] = Some(late);
            return true;
        }
    }
    false
}

/// Kept steps in the order of the text, the others as near to their old place as the needs
/// allow: a moved step goes first among what is ready when it stood earlier in the text.
fn nearest_order(steps: usize, needs: &[Need], kept: &[bool]) -> Vec<usize> {
    let mut before: Vec<Vec<usize>> = vec![Vec::new(); steps];
    for need in needs {
        before[need.to].push(need.from);
    }
    let kept_steps: Vec<usize> = (0..steps).filter(|&step| kept[step]).collect();
    for pair in kept_steps.windows(2) {
        before[pair[1]].push(pair[0]);
    }
    let mut placed = vec![false; steps];
    let mut order = Vec::with_capacity(steps);
    while order.len() < steps {
        let ready = |&step: &usize| !placed[step] && before[step].iter().all(|&b| placed[b]);
        let next = (0..steps).find(ready).expect("an antichain of kept steps leaves no cycle");
        placed[next] = true;
        order.push(next);
    }
    order
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::graph::Reason;
    use proptest::prelude::*;

    fn need(from: usize, to: usize) -> Need {
        Need { from, to, reason: Reason::Covers, why: String::new() }
    }

    fn legal(order: &[usize], needs: &[Need]) -> bool {
        let place = |step| order.iter().position(|&s| s == step);
        needs.iter().all(|need| place(need.from) < place(need.to))
    }

    /// Fewest moves by trying every order: steps outside a longest increasing run have moved.
    fn by_trial(steps: usize, needs: &[Need]) -> Option<usize> {
        fn longest_rising(order: &[usize]) -> usize {
            let mut best = vec![1; order.len()];
            for i in 0..order.len() {
                for j in 0..i {
                    if order[j] < order[i] {
                        best[i] = best[i].max(best[j] + 1);
                    }
                }
            }
            best.into_iter().max().unwrap_or(0)
        }
        fn all(rest: &mut Vec<usize>, order: &mut Vec<usize>, out: &mut Vec<Vec<usize>>) {
            if rest.is_empty() {
                out.push(order.clone());
            }
            for i in 0..rest.len() {
                let step = rest.remove(i);
                order.push(step);
                all(rest, order, out);
                order.pop();
                rest.insert(i, step);
            }
        }
        let mut orders = Vec::new();
        all(&mut (0..steps).collect(), &mut Vec::new(), &mut orders);
        let legal = orders.iter().filter(|order| legal(order, needs));
        legal.map(|order| steps - longest_rising(order)).min()
    }

    proptest! {
        #[test]
        fn as_few_moves_as_any_order(
            pairs in proptest::collection::vec((0usize..6, 0usize..6), 0..9),
        ) {
            let needs: Vec<_> =
                pairs.into_iter().filter(|(a, b)| a != b).map(|(a, b)| need(a, b)).collect();
            let found = fewest_moves(6, &needs);
            prop_assert_eq!(found.as_ref().map(|p| p.moved.len()), by_trial(6, &needs));
            if let Some(proposal) = found {
                prop_assert!(legal(&proposal.order, &needs));
            }
        }
    }

    #[test]
    fn a_late_opening_moves_alone() {
        // 0 seal, 1 polish, 2 cap, 3 etch; the seal needs the etch.
        let needs = [need(3, 0), need(0, 1), need(1, 2)];
        let proposal = fewest_moves(4, &needs).unwrap();
        assert_eq!(proposal.order, [3, 0, 1, 2]);
        assert_eq!(proposal.moved, [3]);
    }
}
