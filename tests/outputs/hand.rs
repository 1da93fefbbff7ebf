//! A report made by hand: every kind of verdict and finding, figures that no change of the physics
//! moves.

use gapwright::diag::Severity;
use gapwright::flow::State;
use gapwright::measure::{Figure, NetReport, Side, SiteFigures, VoidFigures};
use gapwright::report::{FindingReport, FlowReport, LimitReport, Report, Verdict};

fn limit(text: &str, line: usize, holds: Option<bool>) -> LimitReport {
    LimitReport {
        text: text.to_owned(),
        line,
        site: Some("32 nm".to_owned()),
        split: None,
        value: None,
        unit: "1".to_owned(),
        state: None,
        holds,
        margin: None,
        note: None,
    }
}

fn finding(rule: &str, severity: Severity, step: &str, line: usize) -> FindingReport {
    FindingReport {
        rule: rule.to_owned(),
        severity,
        step: Some(step.to_owned()),
        split: None,
        site: Some("32 nm".to_owned()),
        message: "bare Cu meets an \"oxidising\" plasma at 400 °C, 5 nm < 10 nm & more".to_owned(),
        help: Some("cover Cu first".to_owned()),
        waived: false,
        waived_because: None,
        place_nm: Some([0.0, 92.0]),
        exposed_nm: Some(12.5),
        line,
        column: 3,
        end_line: line,
        end_column: 40,
    }
}

/// A void under a roof.
fn void() -> VoidFigures {
    VoidFigures {
        side: Side::Both,
        top_nm: Figure::within(27.2, 0.7),
        bottom_nm: Figure::within(9.5, 0.2),
        width_nm: Figure::within(14.9, 0.2),
        height_nm: Figure::within(113.7, 0.7),
        area_nm2: Figure::within(1502.0, 3.0),
        share: Figure::within(0.489, 0.001),
        side_film_nm: Some(Figure::within(5.27, 0.02)),
        floor_film_nm: Some(Figure::within(9.5, 0.2)),
        roof_nm: Some(Figure::within(67.8, 0.7)),
        outline_nm: vec![[0.0, 9.5], [7.4, 50.0], [0.0, 119.2]],
    }
}

/// Figures of one space with a void.
pub fn site(name: &str, split: Option<&str>) -> SiteFigures {
    SiteFigures {
        split: split.map(str::to_owned),
        site: name.to_owned(),
        space_nm: 32.0,
        space_right_nm: None,
        aspect_ratio: 3.0,
        state: Some(State::Hermetic),
        sealed: Some(true),
        sealed_by: Some("030".to_owned()),
        seal_thickness_nm: Some(Figure::within(31.5, 0.1)),
        throat_nm: None,
        voids: vec![void()],
        seams: Vec::new(),
        side_film_nm: Some(Figure::within(5.27, 0.02)),
        floor_film_nm: Some(Figure::within(9.5, 0.2)),
        corner_film_nm: None,
        polish_margin_nm: Some(Figure::within(42.8, 0.7)),
        polish_margin_sigmas: Some(9.1),
        seal_margin_nm: None,
        closing_space_nm: None,
        via_clearance_nm: None,
        electrical: None,
        steps: Vec::new(),
    }
}

/// The same after a change: less void, one limit flipped, one finding gone, one waived since.
pub fn changed() -> Report {
    let mut report = report();
    let run = &mut report.runs[0];
    run.findings.remove(1);
    run.findings[0].waived = true;
    let void = &mut run.sites[0].voids[0];
    void.share = Figure::within(0.621, 0.002);
    void.top_nm = Figure::within(27.9, 0.6);
    run.limits[1].holds = Some(true);
    run.limits[1].value = Some(Figure::within(0.621, 0.002));
    run.verdict = Verdict::Pass;
    report
}

/// One flow of which nearly everything can be said.
pub fn report() -> Report {
    let mut broken = limit("void-share >= 60 % at 32 nm", 20, Some(false));
    broken.value = Some(Figure::within(0.489, 0.001));
    broken.margin = Some(-0.111);
    let mut untold = limit("void-top <= 27 nm at 32 nm", 21, None);
    untold.value = Some(Figure::within(27.2, 0.7));
    untold.margin = Some(-0.2);
    untold.note = Some("the limit lies within the numerical error".to_owned());
    let mut holding = limit("hermetic", 19, Some(true));
    holding.state = Some(State::Hermetic);
    let mut waived = finding("polish-opens-void", Severity::Warning, "040", 10);
    waived.waived = true;
    waived.waived_because = Some("a trial | lot <1>".to_owned());
    let net = NetReport {
        name: "bus".to_owned(),
        split: None,
        delay_ps: Some(Figure::within(42.3, 0.1)),
        delay_along_ps: Some(Figure::exact(11.3)),
        delay_against_ps: Some(Figure::within(70.3, 0.2)),
    };
    let run = FlowReport {
        flow: "by-hand".to_owned(),
        title: Some("Figures <made> by hand".to_owned()),
        file: "flows/by hand.flow".to_owned(),
        verdict: Verdict::Fail,
        splits: vec!["thin".to_owned()],
        findings: vec![finding("bare-metal-in-oxidizer", Severity::Error, "030", 9), waived],
        sites: vec![site("32 nm", None)],
        nets: vec![net],
        limits: vec![holding, broken, untold],
        cautions: vec!["030: silanes ignite in air".to_owned()],
    };
    Report::of(vec![run])
}
