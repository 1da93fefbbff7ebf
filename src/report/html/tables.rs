//! Tables of the page: sites, nets, findings.

use maud::{Markup, html};

use crate::flow::{Dimension, Flow};
use crate::measure::{Figure, SiteFigures};
use crate::report::figures::figure;
use crate::report::{FindingReport, FlowReport};

fn shown(value: Option<Figure>, dimension: Dimension) -> String {
    value.map_or("–".to_owned(), |value| figure(value, dimension))
}

/// One row a site: what the terminal shows, and more.
pub(super) fn sites(report: &FlowReport) -> Markup {
    let split = report.sites.iter().any(|site| site.split.is_some());
    let names = [
        "state",
        "closed by",
        "void top",
        "to plane",
        "share",
        "roof",
        "side film",
        "coupling",
        "drop",
        "total",
        "k eff",
    ];
    html! {
        section aria-labelledby="spaces" {
            h2 #spaces { "Spaces" }
            div.scroll tabindex="0" role="group" aria-labelledby="spaces" {
                table {
                    thead {
                        tr {
                            th scope="col" { "space" }
                            @if split { th scope="col" { "split" } }
                            @for name in names { th scope="col" { (name) } }
                        }
                    }
                    tbody { @for site in &report.sites { (row(site, split)) } }
                }
            }
        }
    }
}

fn row(site: &SiteFigures, split: bool) -> Markup {
    let nm = |value| shown(value, Dimension::Length);
    let per_um = |value| shown(value, Dimension::CapacitancePerLength);
    let electrical = site.electrical.as_ref();
    html! {
        tr {
            th scope="row" { (site.site) }
            @if split { td { (site.split.as_deref().unwrap_or("–")) } }
            td { (site.state.map_or("cannot tell", |state| state.name())) }
            td { (site.sealed_by.as_deref().unwrap_or("–")) }
            td { (nm(site.highest_top_nm())) }
            td { (nm(site.polish_margin_nm)) }
            td { (shown(site.void_share(), Dimension::Share)) }
            td { (nm(site.thinnest_roof_nm())) }
            td { (nm(site.side_film_nm)) }
            td { (per_um(electrical.map(|e| e.coupling_af_per_um))) }
            td { (shown(electrical.and_then(|e| e.coupling_drop), Dimension::Share)) }
            td { (per_um(electrical.map(|e| e.total_af_per_um))) }
            td { (shown(electrical.map(|e| e.k_eff), Dimension::One)) }
        }
    }
}

/// One row a net, or nothing.
pub(super) fn nets(report: &FlowReport) -> Markup {
    let ps = |value| shown(value, Dimension::Delay);
    html! {
        @if !report.nets.is_empty() {
            section aria-labelledby="nets" {
                h2 #nets { "Nets" }
                div.scroll tabindex="0" role="group" aria-labelledby="nets" { table {
                    thead { tr { @for name in ["net", "split", "delay, neighbours quiet", "along", "against"] { th scope="col" { (name) } } } }
                    tbody {
                        @for net in &report.nets {
                            tr {
                                th scope="row" { (net.name) }
                                td { (net.split.as_deref().unwrap_or("–")) }
                                td { (ps(net.delay_ps)) }
                                td { (ps(net.delay_along_ps)) }
                                td { (ps(net.delay_against_ps)) }
                            }
                        }
                    }
                } }
            }
        }
    }
}

/// Findings, gravest first, each with the flow's line.
pub(super) fn findings(flow: &Flow, report: &FlowReport) -> Markup {
    let mut ordered: Vec<_> = report.findings.iter().collect();
    ordered.sort_by_key(|f| (f.waived, std::cmp::Reverse(f.severity), f.line));
    html! {
        section aria-labelledby="findings" {
            h2 #findings { "Findings" }
            @if ordered.is_empty() { p { "None." } }
            @for finding in ordered { (one(flow, finding)) }
        }
    }
}

fn one(flow: &Flow, finding: &FindingReport) -> Markup {
    let class = match finding.word() {
        "waived" => "waived",
        "error" => "bad",
        "warning" => "doubtful",
        _ => "note",
    };
    let count = 1 + finding.end_line.saturating_sub(finding.line);
    let lines = flow.source.text.lines().enumerate().skip(finding.line - 1).take(count);
    html! {
        article.finding.(class) {
            div {
                h3 { span.word { (finding.word()) } " " (finding.title()) }
                p { (finding.message) }
                @if let Some(reason) = &finding.waived_because { p { "Waived: " (reason) } }
                @else if let Some(help) = &finding.help { p.faint { (help) } }
            }
            pre {
                @for (at, line) in lines { span.number { (at + 1) } " " (line.trim()) "\n" }
            }
        }
    }
}
