//! Pictures: a snapshot of what no change of the growth moves, and what all pictures must hold.

use gapwright::field;
use gapwright::geom::Point;
use gapwright::measure::field_section;
use gapwright::report::drawing::{self, Panel};
use gapwright::report::geojson::{self, OutlinedSection};
use gapwright::report::html;

use super::small::{Small, small};

fn panels(small: &Small) -> Vec<Panel<'_>> {
    let run = &small.judged.runs[0];
    let variant = &small.flow.variants[run.variant];
    drawing::panels(&small.flow, variant, &small.judged.report, &run.fine[0])
}

/// The wafer as drawn, with marks set by hand.
fn wafer() -> Panel<'static> {
    let mut panel = panels(small()).swap_remove(0);
    panel.marks.plane_nm = Some(50.0);
    panel.marks.voids = vec![(Point::new(0.0, 20.0), 1)];
    panel.notes = vec!["void 1: top 27.2 ± 0.7 nm, share 48.9 ± 0.1 %".to_owned()];
    panel
}

#[test]
fn svg_of_a_wafer() {
    insta::assert_snapshot!(drawing::strip("A & B <c>", &[wafer()], 1, 300.0));
}

#[test]
fn characters_of_two_wafers() {
    insta::assert_snapshot!(drawing::characters(&[wafer(), wafer()], false));
}

#[test]
fn the_film_strip_shows_every_step_and_tells_the_void_below_the_last() {
    let panels = panels(small());
    assert_eq!(panels.len(), 1 + small().flow.variants[0].steps.len());
    let strip = drawing::strip("small", &panels, 4, 300.0);
    for op in ["wafer", "010 deposit", "020 seal", "030 polish"] {
        assert!(strip.contains(op), "{op}");
    }
    assert!(
        strip.contains("void: top ") && strip.contains("line top") && strip.contains(" nm</text>")
    );
    let svg = resvg::usvg::Tree::from_str(&strip, &resvg::usvg::Options::default());
    assert!(svg.is_ok(), "an independent reader takes it");
    let png = drawing::png(&strip, 1.0).unwrap();
    assert!(png.starts_with(b"\x89PNG"));
}

/// The very matrix of `check` comes back from its section through GeoJSON and `field`.
#[test]
fn a_section_goes_through_geojson_and_field_unharmed() {
    let Small { flow, judged } = small();
    let run = &judged.runs[0];
    let cell = &run.fine[0];
    let section = &cell.stages.last().unwrap().section;
    let variant = &flow.variants[run.variant];
    let seen = field_section(flow, variant, &cell.cell.sites[0], section, true).unwrap().unwrap();
    let outlined = OutlinedSection::of(&seen, &flow.library);
    let read = geojson::read(&geojson::write(&outlined)).unwrap();
    let named = read.problem(&flow.library).unwrap();
    let solved = field::solve(&named.problem, 0.005).unwrap();
    let expected = &judged.report.sites[0].electrical.as_ref().unwrap().matrix_af_per_um;
    let at = |name: &str| named.electrodes.iter().position(|known| known == name).unwrap();
    assert_eq!(named.electrodes.len(), expected.electrodes.len());
    for (i, row) in expected.electrodes.iter().enumerate() {
        for (j, column) in expected.electrodes.iter().enumerate() {
            let (a, b) = (at(row), at(column));
            let apart =
                solved.low[a][b] > expected.high[i][j] || solved.high[a][b] < expected.low[i][j];
            assert!(!apart, "{row} to {column}");
        }
    }
}

#[test]
fn the_report_is_one_small_page_that_fetches_nothing() {
    let page = html::page(&small().flow, &small().judged.report, &small().grown());
    assert!(page.len() < 3_000_000);
    for fetched in ["src=", "href=", "url(http", "@import", "http-equiv"] {
        assert!(!page.contains(fetched), "{fetched}");
    }
    assert!(page.contains("24 nm · thick"), "splits are sites of their own");
}
