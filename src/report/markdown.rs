//! Markdown of `check`: what a pull request's comment or a pipeline's summary shows.

use std::fmt::Write as _;

use super::figures::figure;
use super::{FlowReport, LimitReport, Report};
use crate::flow::Dimension;
use crate::measure::{Figure, SiteFigures};

impl Report {
    /// One section a flow: verdict, spaces, nets, limits, findings, cautions.
    pub fn markdown(&self) -> String {
        self.runs.iter().map(flow).collect::<Vec<_>>().join("\n")
    }
}

fn flow(run: &FlowReport) -> String {
    let mut text = format!("## {}: {}\n\n", run.verdict.word(), cell(&run.flow));
    if let Some(title) = &run.title {
        let _ = writeln!(text, "{}\n", prose(title));
    }
    let _ = writeln!(text, "`{}`: {}\n", run.file, run.summary());
    if !run.unjudged_splits().is_empty() {
        let names = run.unjudged_splits().join(", ");
        let _ = writeln!(text, "Splits not judged (`--splits` judges them): {}\n", cell(&names));
    }
    sites(&mut text, &run.sites);
    nets(&mut text, run);
    limits(&mut text, &run.limits);
    findings(&mut text, run);
    cautions(&mut text, run);
    text
}

fn sites(text: &mut String, sites: &[SiteFigures]) {
    if sites.is_empty() {
        return;
    }
    let head = [
        "space",
        "split",
        "state",
        "closed by",
        "void top",
        "to plane",
        "share",
        "roof",
        "coupling",
        "drop",
        "total",
    ];
    let rows = sites.iter().map(|site| {
        let nm = |value| shown(value, Dimension::Length);
        let electrical = site.electrical.as_ref();
        vec![
            site.site.clone(),
            site.split.clone().unwrap_or_default(),
            site.state.map_or("cannot tell", |state| state.name()).to_owned(),
            site.sealed_by.clone().unwrap_or_default(),
            nm(site.highest_top_nm()),
            nm(site.polish_margin_nm),
            shown(site.void_share(), Dimension::Share),
            nm(site.thinnest_roof_nm()),
            shown(electrical.map(|e| e.coupling_af_per_um), Dimension::CapacitancePerLength),
            shown(electrical.and_then(|e| e.coupling_drop), Dimension::Share),
            shown(electrical.map(|e| e.total_af_per_um), Dimension::CapacitancePerLength),
        ]
    });
    text.push_str(&table(&head, rows));
}

fn nets(text: &mut String, run: &FlowReport) {
    if run.nets.is_empty() {
        return;
    }
    let ps = |value| shown(value, Dimension::Delay);
    let rows = run.nets.iter().map(|net| {
        let split = net.split.clone().unwrap_or_default();
        let delays = [net.delay_ps, net.delay_along_ps, net.delay_against_ps].map(ps);
        [net.name.clone(), split].into_iter().chain(delays).collect()
    });
    text.push_str(&table(&["net", "split", "delay", "along", "against"], rows));
}

/// Those that do not hold first.
fn limits(text: &mut String, limits: &[LimitReport]) {
    if limits.is_empty() {
        return;
    }
    let mut ordered: Vec<_> = limits.iter().collect();
    ordered.sort_by_key(|limit| limit.holds.map_or(1, |holds| if holds { 2 } else { 0 }));
    let rows = ordered.into_iter().map(|limit| {
        let word = limit.word();
        vec![
            if limit.holds == Some(true) { word.to_owned() } else { format!("**{word}**") },
            format!("`{}`", limit.text),
            limit.place(),
            limit.shown_value().unwrap_or_default(),
            limit.shown_margin().unwrap_or_default(),
            limit.note.as_deref().map(prose).unwrap_or_default(),
        ]
    });
    text.push_str("### Limits\n\n");
    text.push_str(&table(&["", "limit", "where", "figure", "margin", "note"], rows));
}

fn findings(text: &mut String, run: &FlowReport) {
    if run.findings.is_empty() {
        return;
    }
    text.push_str("### Findings\n\n");
    for finding in &run.findings {
        let place = finding.place();
        let gap = if place.is_empty() { "" } else { " " };
        let _ = writeln!(
            text,
            "- **{}** `{}`{gap}{} (line {}): {}",
            finding.word(),
            finding.rule,
            cell(&place),
            finding.line,
            prose(&finding.message)
        );
        if let Some(reason) = &finding.waived_because {
            let _ = writeln!(text, "  Waived: {}", prose(reason));
        } else if let Some(help) = &finding.help {
            let _ = writeln!(text, "  Help: {}", prose(help));
        }
    }
    text.push('\n');
}

fn cautions(text: &mut String, run: &FlowReport) {
    if run.cautions.is_empty() {
        return;
    }
    text.push_str("<details><summary>Cautions</summary>\n\n");
    for caution in &run.cautions {
        let _ = writeln!(text, "- {}", prose(caution));
    }
    text.push_str("\n</details>\n");
}

/// A figure, or nothing.
pub(crate) fn shown(value: Option<Figure>, dimension: Dimension) -> String {
    value.map(|value| figure(value, dimension)).unwrap_or_default()
}

/// A table and a blank line. Columns that are empty in every row are left out.
pub(crate) fn table(head: &[&str], rows: impl Iterator<Item = Vec<String>>) -> String {
    let rows: Vec<Vec<String>> = rows.collect();
    let used: Vec<usize> = (0..head.len())
        .filter(|&at| rows.iter().any(|row| row.get(at).is_some_and(|cell| !cell.is_empty())))
        .collect();
    let line = |cells: Vec<String>| format!("| {} |\n", cells.join(" | "));
    let mut text = line(used.iter().map(|&at| head[at].to_owned()).collect());
    text.push_str(&format!("|{}\n", "---|".repeat(used.len())));
    for row in &rows {
        text.push_str(&line(used.iter().map(|&at| cell(&row[at])).collect()));
    }
    text.push('\n');
    text
}

/// Text that cannot end a cell or a line.
pub(crate) fn cell(text: &str) -> String {
    text.replace('|', "\\|").replace(['\n', '\r'], " ")
}

/// Free text that cannot begin a tag either.
pub(crate) fn prose(text: &str) -> String {
    cell(text).replace('<', "&lt;")
}
