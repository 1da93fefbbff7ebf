//! What an engineer wants to see first, as text for a terminal: the verdict, one line a
//! space, the limits with their margins, the findings with their place in the flow.

use super::columns::{Cell, columns};
use super::figures;
use super::paint::Paint;
use super::{FindingReport, FlowReport, LimitReport, NetReport, Report, Verdict};
use crate::diag::Severity;
use crate::flow::{Dimension, State};
use crate::measure::{Figure, SiteFigures};

/// The whole report as text.
pub fn render(report: &Report, color: bool) -> String {
    let paint = Paint { on: color };
    report.runs.iter().map(|run| flow(run, paint)).collect::<Vec<_>>().join("\n")
}

fn flow(run: &FlowReport, paint: Paint) -> String {
    let mut text = headline(run, paint);
    text.push_str(&sites(run, paint));
    text.push_str(&nets(&run.nets, paint));
    text.push_str(&limits(&run.limits, paint));
    text.push_str(&findings(run, paint));
    text.push_str(&cautions(run, paint));
    text
}

fn cautions(run: &FlowReport, paint: Paint) -> String {
    if run.cautions.is_empty() {
        return String::new();
    }
    let lines: String = run.cautions.iter().map(|caution| format!("    {caution}\n")).collect();
    format!("\n  {}\n{}", paint.heading("cautions"), paint.faint(&lines))
}

fn headline(run: &FlowReport, paint: Paint) -> String {
    let verdict = match run.verdict {
        Verdict::Pass => paint.good("PASS"),
        Verdict::Fail => paint.bad("FAIL"),
        Verdict::Undecided => paint.doubtful("UNDECIDED"),
    };
    let broken = run.limits.iter().filter(|limit| limit.holds == Some(false)).count();
    let open = run.limits.iter().filter(|limit| limit.holds.is_none()).count();
    let count =
        |severity| run.findings.iter().filter(|f| f.severity == severity && !f.waived).count();
    let mut parts = vec![match (broken, open) {
        (0, 0) => format!("{} limits hold", run.limits.len()),
        (_, 0) => format!("{broken} of {} limits broken", run.limits.len()),
        _ => format!("{broken} of {} limits broken, {open} cannot be told", run.limits.len()),
    }];
    parts.extend(counted(count(Severity::Error), "error"));
    parts.extend(counted(count(Severity::Warning), "warning"));
    parts.extend(counted(count(Severity::Note), "note"));
    parts.extend(counted(run.findings.iter().filter(|f| f.waived).count(), "waived finding"));
    let mut text = format!(
        "{verdict}  {}  {}\n      {}\n",
        paint.heading(&run.flow),
        paint.faint(&run.file),
        parts.join(", ")
    );
    let judged = |split: &String| run.sites.iter().any(|s| s.split.as_ref() == Some(split));
    if !run.splits.is_empty() && !run.splits.iter().any(judged) {
        text.push_str(&format!(
            "      {} not judged (--splits judges them): {}\n",
            counted(run.splits.len(), "split").unwrap_or_default(),
            run.splits.join(", ")
        ));
    }
    text
}

fn counted(count: usize, what: &str) -> Option<String> {
    match count {
        0 => None,
        1 => Some(format!("1 {what}")),
        _ => Some(format!("{count} {what}s")),
    }
}

fn sites(run: &FlowReport, paint: Paint) -> String {
    if run.sites.is_empty() {
        return String::new();
    }
    let split = run.sites.iter().any(|site| site.split.is_some());
    let mut rows = vec![header(split, paint)];
    rows.extend(run.sites.iter().map(|site| site_row(site, split, paint)));
    format!("\n{}", columns(&rows, 2))
}

fn header(split: bool, paint: Paint) -> Vec<Cell> {
    let names = [
        "space",
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
    let lead = split.then_some("split");
    lead.into_iter().chain(names).map(|n| Cell::painted(n, |t| paint.faint(t))).collect()
}

fn site_row(site: &SiteFigures, split: bool, paint: Paint) -> Vec<Cell> {
    let nm = |value: Option<Figure>| shown(value, Dimension::Length);
    let electrical = site.electrical.as_ref();
    let mut row = vec![
        Cell::plain(&site.site),
        state_cell(site.state, paint),
        Cell::plain(site.sealed_by.as_deref().unwrap_or("-")),
        nm(site.highest_top_nm()),
        nm(site.polish_margin_nm),
        shown(site.void_share(), Dimension::Share),
        nm(site.thinnest_roof_nm()),
        shown(electrical.map(|e| e.coupling_af_per_um), Dimension::CapacitancePerLength),
        shown(electrical.and_then(|e| e.coupling_drop), Dimension::Share),
        shown(electrical.map(|e| e.total_af_per_um), Dimension::CapacitancePerLength),
    ];
    if split {
        row.insert(0, Cell::plain(site.split.as_deref().unwrap_or("-")));
    }
    row
}

fn state_cell(state: Option<State>, paint: Paint) -> Cell {
    match state {
        Some(State::Open) => Cell::painted("open", |t| paint.doubtful(t)),
        Some(state) => Cell::plain(state.name()),
        None => Cell::painted("cannot tell", |t| paint.doubtful(t)),
    }
}

fn shown(value: Option<Figure>, dimension: Dimension) -> Cell {
    Cell::plain(value.map_or("-".to_owned(), |figure| figures::figure(figure, dimension)))
}

fn nets(nets: &[NetReport], paint: Paint) -> String {
    if nets.is_empty() {
        return String::new();
    }
    let names = ["net", "delay", "along", "against"];
    let mut rows = vec![names.map(|n| Cell::painted(n, |t| paint.faint(t))).to_vec()];
    for net in nets {
        let name = match &net.split {
            Some(split) => format!("{} ({split})", net.name),
            None => net.name.clone(),
        };
        rows.push(vec![
            Cell::plain(name),
            shown(net.delay_ps, Dimension::Delay),
            shown(net.delay_along_ps, Dimension::Delay),
            shown(net.delay_against_ps, Dimension::Delay),
        ]);
    }
    format!("\n{}", columns(&rows, 2))
}

fn limits(limits: &[LimitReport], paint: Paint) -> String {
    if limits.is_empty() {
        return String::new();
    }
    let rows: Vec<_> = limits.iter().map(|limit| limit_row(limit, paint)).collect();
    format!("\n  {}\n{}", paint.heading("limits"), columns(&rows, 4))
}

fn limit_row(limit: &LimitReport, paint: Paint) -> Vec<Cell> {
    let verdict = match limit.holds {
        Some(true) => Cell::painted("holds", |t| paint.good(t)),
        Some(false) => Cell::painted("BROKEN", |t| paint.bad(t)),
        None => Cell::painted("cannot tell", |t| paint.doubtful(t)),
    };
    let site = limit.site.clone().unwrap_or_default();
    let place = match &limit.split {
        Some(split) => format!("{site} in {split}").trim().to_owned(),
        None => site,
    };
    let dimension = dimension(limit);
    let value = match (limit.state, limit.value) {
        (Some(state), _) => state.name().to_owned(),
        (None, Some(value)) => figures::figure(value, dimension),
        (None, None) => "-".to_owned(),
    };
    let margin =
        limit.margin.map(|margin| format!("margin {}", figures::amount(margin, dimension)));
    vec![
        verdict,
        Cell::plain(&limit.text),
        Cell::plain(place),
        Cell::plain(value),
        Cell::plain(margin.unwrap_or_default()),
        Cell::painted(limit.note.as_deref().unwrap_or(""), |t| paint.faint(t)),
    ]
}

/// The dimension in which a limit's value is shown: that of the quantity it names.
fn dimension(limit: &LimitReport) -> Dimension {
    let name = limit.text.split_whitespace().next().unwrap_or_default();
    crate::flow::Quantity::ALL
        .iter()
        .find(|quantity| quantity.name() == name)
        .map_or(Dimension::One, |quantity| quantity.dimension())
}

fn findings(run: &FlowReport, paint: Paint) -> String {
    if run.findings.is_empty() {
        return String::new();
    }
    let mut text = format!("\n  {}\n", paint.heading("findings"));
    for finding in &run.findings {
        text.push_str(&finding_text(run, finding, paint));
    }
    text
}

fn finding_text(run: &FlowReport, finding: &FindingReport, paint: Paint) -> String {
    let severity = match (finding.waived, finding.severity) {
        (true, _) => paint.faint("waived"),
        (false, Severity::Error) => paint.bad("error"),
        (false, Severity::Warning) => paint.doubtful("warning"),
        (false, Severity::Note) => paint.faint("note"),
    };
    let mut place = String::new();
    for (word, value) in [("on", &finding.step), ("at", &finding.site), ("in", &finding.split)] {
        if let Some(value) = value {
            place.push_str(&format!(" {word} {value}"));
        }
    }
    let at = format!("{}:{}:{}", run.file, finding.line, finding.column);
    let mut text = format!(
        "    {severity}  {}{place}  {}\n        {}\n",
        paint.heading(&finding.rule),
        paint.faint(&at),
        finding.message
    );
    if let Some(reason) = &finding.waived_because {
        text.push_str(&format!("        waived: {reason}\n"));
    } else if let Some(help) = &finding.help {
        text.push_str(&format!("        help: {help}\n"));
    }
    text
}
