//! The reference page tells the truth: its flows resolve, its messages are what a user gets.

use super::read::{errors_of, resolved};

const PAGE: &str = include_str!("../../docs/language.md");

/// The fenced blocks of the page: what stands after the fence, and the text.
fn blocks() -> Vec<(&'static str, &'static str)> {
    let mut parts = PAGE.split("```");
    parts.next();
    let mut blocks = vec![];
    while let (Some(block), Some(_)) = (parts.next(), parts.next()) {
        blocks.push(block.split_once('\n').unwrap());
    }
    blocks
}

/// A flow with the statements of one section replaced, or with the section added.
fn with_section(flow: &str, section: &str, statements: &str) -> String {
    let mut out = String::new();
    let mut inside = false;
    for line in flow.lines() {
        let opens = !line.is_empty() && !line.starts_with(' ');
        inside = if opens { line == section } else { inside };
        if !inside {
            out += line;
            out.push('\n');
        }
    }
    format!("{out}{section}\n{statements}")
}

/// Sections that do not fit the spaces of another wafer are left out beside a new one.
fn bare(flow: &str) -> String {
    let small = "  010  seal  90 nm SiO2 by silane-pecvd\n";
    let flow = with_section(flow, "steps", small);
    let flow = with_section(&flow, "splits", "");
    with_section(&flow, "limits", "")
}

#[test]
fn every_flow_resolves() {
    let blocks = blocks();
    let base = blocks.iter().find(|(info, _)| *info == "flow").unwrap().1;
    let mut sections = vec![];
    for (info, text) in &blocks {
        match info.split_once(' ') {
            None if *info == "flow" => drop(resolved(text)),
            Some(("flow", "wafer")) => {
                drop(resolved(&with_section(&bare(base), "wafer", text)));
                sections.push("wafer");
            }
            Some(("flow", section)) if section != "broken" => {
                drop(resolved(&with_section(base, section, text)));
                sections.push(section);
            }
            _ => {}
        }
    }
    assert_eq!(sections, ["wafer", "wafer", "steps", "splits", "nets", "limits", "waivers"]);
}

#[test]
fn every_message_is_what_a_user_gets() {
    let blocks = blocks();
    let mut shown = 0;
    for pair in blocks.windows(2) {
        if let [("flow broken", flow), ("message", message)] = pair {
            assert_eq!(errors_of("flow.flow", flow), *message);
            shown += 1;
        }
    }
    assert_eq!(shown, 1);
}
