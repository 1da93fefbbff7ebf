//! Both flows of every page, run.

use std::fs;
use std::path::Path;

use gapwright::diag::Severity;
use gapwright::rules::REGISTRY;

use crate::harness::{findings, line, resolve};

/// The fenced blocks of a page in one language.
fn blocks<'a>(page: &'a str, language: &str) -> Vec<&'a str> {
    let fence = format!("```{language}\n");
    page.split(fence.as_str()).skip(1).filter_map(|rest| rest.split("```").next()).collect()
}

/// Judged over a whole study, not by one run.
const JUDGED_ELSEWHERE: &[&str] = &["corner-fails"];

fn hold(name: &str) -> Result<(), String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/rules");
    let page = fs::read_to_string(folder.join(format!("{name}.md"))).unwrap();
    let (flows, library) = (blocks(&page, "flow"), blocks(&page, "yaml"));
    let [breaks, passes] = flows[..] else {
        return Err(format!("{name}: {} flows on its page", flows.len()));
    };
    let run = |text: &str| {
        let flow = resolve(name, text, library.first().copied());
        let found = findings(&flow).map_err(|error| format!("{name}: {error}"))?;
        let lines: Vec<_> = found.iter().map(|f| line(&flow, f)).collect();
        Ok::<_, String>((found, lines))
    };
    let (found, lines) = run(breaks)?;
    if !JUDGED_ELSEWHERE.contains(&name) && !found.iter().any(|f| f.rule == name) {
        return Err(format!("{name} does not fire: {lines:#?}"));
    }
    let (found, lines) = run(passes)?;
    if found.iter().any(|f| f.rule == name || f.severity > Severity::Note) {
        return Err(format!("the passing flow of {name} does not: {lines:#?}"));
    }
    Ok(())
}

#[test]
fn both_flows_of_every_page_do_as_it_says() {
    let wrong: Vec<_> = REGISTRY.iter().filter_map(|rule| hold(rule.name).err()).collect();
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
