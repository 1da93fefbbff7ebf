//! What an engineer wants to see first, as text for a terminal: the verdict, one line a
//! space, the limits with their margins, the findings with their place in the flow.

use super::columns::{Cell, columns};
use super::figures;
use super::paint::Paint;
use super::words::counted;
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
    let word = run.verdict.word();
    let verdict = match run.verdict {
        Verdict::Pass => paint.good(word),
        Verdict::Fail => paint.bad(word),
        Verdict::Undecided => paint.doubtful(word),
    };
    let mut text = format!(
        "{verdict}  {}  {}\n      {}\n",
        paint.heading(&run.flow),
        paint.faint(&run.file),
        run.summary()
    );
    let splits = run.unjudged_splits();
    if let Some(count) = counted(splits.len(), "split") {
        let names = splits.join(", ");
        text.push_str(&format!("      {count} not judged (--splits judges them): {names}\n"));
    }
    text
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
    let margin = limit.shown_margin().map(|margin| format!("margin {margin}"));
    vec![
        verdict,
        Cell::plain(&limit.text),
        Cell::plain(limit.place()),
        Cell::plain(limit.shown_value().unwrap_or_else(|| "-".to_owned())),
        Cell::plain(margin.unwrap_or_default()),
        Cell::painted(limit.note.as_deref().unwrap_or(""), |t| paint.faint(t)),
    ]
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
    let place = match finding.place().as_str() {
        "" => String::new(),
        place => format!(" {place}"),
    };
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
