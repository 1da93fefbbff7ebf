//! Legal flows, shuffled: the order that is offered is legal and moves no more than the shuffle.

use proptest::prelude::*;
use proptest::test_runner::{Config, RngAlgorithm, TestRng, TestRunner};

use gapwright::flow::{Flow, Variant};
use gapwright::graph::{Graph, reordered};

use crate::harness::resolve;

/// Ingredients of a random legal flow.
#[derive(Debug, Clone)]
struct Recipe {
    mask: bool,
    over: bool,
    before: bool,
    damage: bool,
    liner: bool,
    burn_out: bool,
    seals: usize,
    polish: bool,
    clean_after: bool,
    cap: bool,
    via: bool,
    anneal: bool,
    stated: bool,
}

impl Recipe {
    /// The flow, its steps in a legal order.
    fn text(&self) -> String {
        let between = if self.burn_out { "polycarbonate" } else { "SiCOH" };
        let mut steps: Vec<String> = Vec::new();
        let mut step = |on: bool, words: &str| {
            if on {
                steps.push(words.to_owned());
            }
        };
        step(self.before, "clean by wet-clean");
        if self.burn_out {
            step(true, "cap 12 nm SiCOH-porous by sicoh-pecvd with temperature 150 C");
            step(true, "release polycarbonate at 260 C for 2 h");
            step(true, "cap 20 nm SiN by nitride-pecvd");
        } else {
            step(self.mask, "mask 80 nm resist over 90 nm by spin-resist");
            step(true, "etch 50 nm SiCOH by fluorocarbon-rie");
            step(self.damage, "convert 3 nm SiCOH to damaged-SiCOH by oxygen-damage");
            step(self.damage, "etch 4 nm damaged-SiCOH by vapor-hf");
            step(self.mask, "strip resist by hydrogen-ash");
            step(self.liner, "deposit 3 nm SiN by ald-nitride");
            for _ in 0..self.seals {
                step(true, "seal 70 nm SiO2 by silane-pecvd");
            }
            step(self.polish, "polish to 60 nm above lines");
            step(self.clean_after, "clean by wet-clean");
            step(self.cap, "cap 20 nm SiN by nitride-pecvd");
        }
        step(self.anneal, "anneal at 350 C for 10 min");
        step(self.via, "via width 30 nm Cu in 3 nm TaN overlay 5 nm only at 90 nm");
        step(self.via, "cap 15 nm SiCN by carbonitride-pecvd");
        let last = steps.len() - 1;
        if self.stated && last > 0 {
            steps[last].push_str(&format!(" after {:03}", 10 * last));
        }
        let numbered: String = steps
            .iter()
            .enumerate()
            .map(|(at, words)| format!("  {:03} {words}\n", 10 * (at + 1)))
            .collect();
        let over = if self.over { "  over 5 nm SiN\n" } else { "" };
        format!(
            "flow random\n\nwafer\n  plane 50 nm W\n  film 60 nm SiN\n  lines 80 nm W width 30 nm \
             space 30, 90 nm\n  between {between}\n{over}\nsteps\n{numbered}"
        )
    }
}

fn recipe() -> impl Strategy<Value = Recipe> {
    let flags = proptest::collection::vec(any::<bool>(), 12);
    (flags, 1usize..3).prop_map(|(on, seals)| Recipe {
        mask: on[0],
        over: on[1],
        before: on[2],
        damage: on[3],
        liner: on[4],
        burn_out: on[5],
        seals,
        polish: on[6],
        clean_after: on[7],
        cap: on[8],
        via: on[9],
        anneal: on[10],
        stated: on[11],
    })
}

/// How many steps a shuffle moves: all but a longest run that kept its order.
fn moves(order: &[usize]) -> usize {
    let mut longest = vec![1; order.len()];
    for i in 0..order.len() {
        for j in 0..i {
            if order[j] < order[i] {
                longest[i] = longest[i].max(longest[j] + 1);
            }
        }
    }
    order.len() - longest.iter().max().unwrap_or(&0)
}

/// Independent of the graph's pairing: what no legal order of these flows can break.
fn is_legal(flow: &Flow, variant: &Variant) -> Result<(), String> {
    let graph = Graph::of(flow, variant);
    if let Some(need) = graph.broken().first() {
        return Err(graph.need_words(need));
    }
    let verbs: Vec<&str> = variant.steps.iter().map(|step| step.action.verb()).collect();
    let place = |verb: &str| verbs.iter().position(|v| *v == verb);
    if place("etch").zip(place("seal")).is_some_and(|(etch, seal)| seal < etch) {
        return Err("a seal before the first etch".to_owned());
    }
    if let (Some(mask), Some(strip)) = (place("mask"), place("strip")) {
        let limited = verbs.get(mask..strip).unwrap_or_default();
        if !limited.iter().any(|verb| matches!(*verb, "etch" | "convert")) {
            return Err("a mask that limits nothing".to_owned());
        }
    }
    Ok(())
}

#[test]
fn two_hundred_shuffled_flows_are_put_right() {
    let config = Config { cases: 200, failure_persistence: None, ..Config::default() };
    let rng = TestRng::deterministic_rng(RngAlgorithm::ChaCha);
    let mut runner = TestRunner::new_with_rng(config, rng);
    let cases = recipe().prop_flat_map(|recipe| {
        let text = recipe.text();
        let steps = text.split("\nsteps\n").nth(1).map_or(0, |steps| steps.lines().count());
        (Just(text), Just((0..steps).collect::<Vec<_>>()).prop_shuffle())
    });
    let outcome = runner.run(&cases, |(text, shuffle)| {
        let flow = resolve("random", &text, None);
        let legal = &flow.variants[0];
        prop_assert!(is_legal(&flow, legal).is_ok(), "{:?}\n{text}", is_legal(&flow, legal));
        let shuffled = reordered(legal, &shuffle);
        let graph = Graph::of(&flow, &shuffled);
        let proposal = graph.proposal(&flow, &shuffled);
        prop_assert!(proposal.is_some(), "no order offered for {shuffle:?} of\n{text}");
        let proposal = proposal.unwrap();
        prop_assert!(
            proposal.moved.len() <= moves(&shuffle),
            "{} moved, the shuffle {}: {shuffle:?} of\n{text}",
            proposal.moved.len(),
            moves(&shuffle)
        );
        let offered = reordered(&shuffled, &proposal.order);
        let legality = is_legal(&flow, &offered);
        prop_assert!(legality.is_ok(), "{legality:?}: {shuffle:?} of\n{text}");
        let ops = |variant: &Variant| {
            let mut ops: Vec<_> = variant.steps.iter().map(|s| (s.op, s.action.verb())).collect();
            ops.sort_unstable();
            ops
        };
        prop_assert_eq!(ops(&offered), ops(legal));
        Ok(())
    });
    outcome.unwrap();
}
