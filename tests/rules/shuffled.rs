//! Legal flows, shuffled: the order that is offered is legal and moves no more than the shuffle.

use proptest::prelude::*;
use proptest::test_runner::{Config, RngAlgorithm, TestRng, TestRunner};

use gapwright::flow::{Action, Flow, Variant};
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

/// Steps of a variant as words: verb, and the material it is about.
fn words(flow: &Flow, variant: &Variant) -> Vec<String> {
    let material = |action: &Action| match *action {
        Action::Deposit { material, .. }
        | Action::Etch { material, .. }
        | Action::Convert { from: material, .. } => flow.library.material(material).name.clone(),
        _ => String::new(),
    };
    let word = |action: &Action| format!("{} {}", action.verb(), material(action));
    variant.steps.iter().map(|step| word(&step.action).trim_end().to_owned()).collect()
}

/// What no legal order of these flows can break: the needs of the graph, and, independent of how
/// the graph pairs them, what an engineer would say of the whole order.
fn is_legal(flow: &Flow, variant: &Variant) -> Result<(), String> {
    let graph = Graph::of(flow, variant);
    if let Some(need) = graph.broken().first() {
        return Err(graph.need_words(need));
    }
    let words = words(flow, variant);
    let first = |word: &str| words.iter().position(|w| w.starts_with(word));
    let in_order = |early: Option<usize>, late: Option<usize>, wrong: &str| {
        let broken = early.zip(late).is_some_and(|(early, late)| early > late);
        if broken { Err(format!("{wrong}: {words:?}")) } else { Ok(()) }
    };
    let (etch, seal, release) = (first("etch SiCOH"), first("seal"), first("release"));
    in_order(etch, seal, "a seal before the first etch")?;
    in_order(first("convert"), first("etch damaged-SiCOH"), "damage gone before it is there")?;
    in_order(first("etch damaged-SiCOH"), seal, "damage sealed in")?;
    in_order(seal, first("polish"), "a polish before the seal")?;
    if variant.wafer.over.is_empty() {
        in_order(first("cap SiCOH-porous"), release, "a release before its roof")?;
    }
    in_order(release, first("cap SiN"), "a hermetic cap before the release")?;
    in_order(seal, first("cap SiN"), "a cap before the seal")?;
    in_order(seal, first("via"), "a via before its level is closed")?;
    if let (Some(etch), Some(seal)) = (etch, seal)
        && words[etch..seal].iter().any(|word| word.starts_with("clean"))
    {
        return Err(format!("a liquid in open spaces: {words:?}"));
    }
    let film = |word: &String| ["deposit", "seal", "cap"].iter().any(|v| word.starts_with(v));
    if let Some(via) = first("via")
        && !words[via..].iter().any(film)
    {
        return Err(format!("the via's metal stays bare: {words:?}"));
    }
    if let (Some(mask), Some(strip)) = (first("mask"), first("strip")) {
        let limited = words.get(mask..strip).unwrap_or_default();
        let limits = |word: &String| word.starts_with("etch") || word.starts_with("convert");
        if !limited.iter().any(limits) {
            return Err(format!("a mask that limits nothing: {words:?}"));
        }
        if limited.iter().any(film) {
            return Err(format!("a buried mask: {words:?}"));
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
        prop_assert_eq!(
            moves(&proposal.order),
            proposal.moved.len(),
            "what is said to have moved is not what did: {:?}",
            proposal
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
