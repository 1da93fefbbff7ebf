//! The graph as text, DOT and Mermaid.

use super::{Graph, Need};
use crate::flow::{Action, Step};
use crate::library::Library;

/// What a step does, in the words of the language without its clauses.
pub(super) fn words(library: &Library, step: &Step) -> String {
    let name = |id| library.material(id).name.as_str();
    let verb = step.action.verb();
    match &step.action {
        Action::Deposit { material, .. }
        | Action::Etch { material, .. }
        | Action::Mask { material, .. }
        | Action::Fill { material, .. }
        | Action::Release { material, .. }
        | Action::Strip { material, .. }
        | Action::Via { material, .. } => format!("{verb} {}", name(*material)),
        Action::EtchUntil { material, stop, .. } => {
            format!("{verb} {} until {}", name(*material), name(*stop))
        }
        Action::Convert { from, to, .. } => format!("{verb} {} to {}", name(*from), name(*to)),
        Action::PolishUntil { stop, .. } => format!("{verb} until {}", name(*stop)),
        Action::Polish { .. } => verb.into(),
        Action::Anneal { .. } | Action::Cure { .. } | Action::Clean { .. } => {
            format!("{verb} by {}", step.action.process().process.name)
        }
    }
}

impl Graph {
    /// One paragraph a step: what it does, what it needs and why.
    pub fn to_text(&self) -> String {
        let mut text = String::new();
        for step in 0..self.steps() {
            text.push_str(self.label(step));
            text.push('\n');
            for need in self.needs().into_iter().filter(|need| need.to == step) {
                let mark = if need.from >= need.to { "  BROKEN" } else { "" };
                text.push_str(&format!("  {}{mark}\n", self.need_words(need)));
            }
        }
        text
    }

    /// `010 etch SiCOH opens it: closes a space that something must have opened`.
    pub fn need_words(&self, need: &Need) -> String {
        format!("{} {} it: {}", self.label(need.from), need.reason.name(), need.why)
    }

    /// A cycle as `010 seal SiO2 → 020 etch SiCOH (opens) → …`, back to its start.
    pub fn cycle_words(&self, cycle: &[&Need]) -> String {
        let mut text = cycle.first().map_or_else(String::new, |n| self.label(n.from).to_owned());
        for need in cycle {
            text.push_str(&format!(" → {} ({})", self.label(need.to), need.reason.name()));
        }
        text
    }

    /// The graph in the DOT language; broken needs are red.
    pub fn to_dot(&self, name: &str) -> String {
        let mut text = format!("digraph {} {{\n  rankdir=LR;\n  node [shape=box];\n", quoted(name));
        for step in 0..self.steps() {
            text.push_str(&format!("  s{step} [label={}];\n", quoted(self.label(step))));
        }
        for need in self.needs() {
            let color = if need.from >= need.to { ", color=red, fontcolor=red" } else { "" };
            text.push_str(&format!(
                "  s{} -> s{} [label={}{color}];\n",
                need.from,
                need.to,
                quoted(need.reason.name()),
            ));
        }
        text.push_str("}\n");
        text
    }

    /// The graph as a Mermaid flowchart; broken needs are dotted.
    pub fn to_mermaid(&self) -> String {
        let mut text = String::from("flowchart LR\n");
        for step in 0..self.steps() {
            text.push_str(&format!("  s{step}[{}]\n", quoted(self.label(step))));
        }
        for need in self.needs() {
            let arrow = if need.from >= need.to { "-.->" } else { "-->" };
            text.push_str(&format!(
                "  s{} {arrow}|{}| s{}\n",
                need.from,
                need.reason.name(),
                need.to
            ));
        }
        text
    }
}

/// In double quotes; names of the language hold no quote, titles may.
fn quoted(text: &str) -> String {
    format!("\"{}\"", text.replace('\\', "\\\\").replace('"', "\\\""))
}
