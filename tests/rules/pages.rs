//! Both flows of every page, run.

use std::fs;
use std::path::Path;

use gapwright::diag::Severity;
use gapwright::pipeline::{Options, judge};
use gapwright::rules::REGISTRY;
use rayon::prelude::*;

use crate::harness::{findings, line, resolve};

/// The fenced blocks of a page in one language.
fn blocks<'a>(page: &'a str, language: &str) -> Vec<&'a str> {
    let fence = format!("```{language}\n");
    page.split(fence.as_str()).skip(1).filter_map(|rest| rest.split("```").next()).collect()
}

/// What is found in a flow: rule, severity and words.
type Said = (String, Severity, String);

fn said(name: &str, text: &str, library: Option<&str>) -> Result<Vec<Said>, String> {
    let flow = resolve(name, text, library);
    if name != "corner-fails" {
        let found = findings(&flow).map_err(|error| format!("{name}: {error}"))?;
        return Ok(found.iter().map(|f| (f.rule.into(), f.severity, line(&flow, f))).collect());
    }
    // Corners are grown at the coarser resolution whatever the accuracy.
    let options = Options { corners: true, accuracy: 0.1, ..Options::default() };
    let judged = judge(&flow, &options, &|_, _| ()).map_err(|error| format!("{name}: {error}"))?;
    let found = judged.report.findings.into_iter();
    Ok(found.map(|f| (f.rule, f.severity, f.message)).collect())
}

fn hold(name: &str) -> Result<(), String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("docs/rules");
    let page = fs::read_to_string(folder.join(format!("{name}.md"))).unwrap();
    let (flows, library) = (blocks(&page, "flow"), blocks(&page, "yaml"));
    let [breaks, passes] = flows[..] else {
        return Err(format!("{name}: {} flows on its page", flows.len()));
    };
    let library = library.first().copied();
    let found = said(name, breaks, library)?;
    if !found.iter().any(|(rule, ..)| rule == name) {
        return Err(format!("{name} does not fire: {found:#?}"));
    }
    let found = said(name, passes, library)?;
    if found.iter().any(|(rule, severity, _)| rule == name || *severity > Severity::Note) {
        return Err(format!("the passing flow of {name} does not: {found:#?}"));
    }
    Ok(())
}

#[test]
fn both_flows_of_every_page_do_as_it_says() {
    let wrong: Vec<_> = REGISTRY.par_iter().filter_map(|rule| hold(rule.name).err()).collect();
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
