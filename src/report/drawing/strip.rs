//! A film strip: panels in rows at one scale, a scale bar, a legend.

use std::collections::BTreeMap;

use super::canvas::{Anchor, Canvas, FAINT, INK};
use super::palette::{Fill, fills};
use super::panel::{Panel, Window, draw};
use crate::library::{Library, MaterialId};

const MARGIN: f64 = 16.0;
const TITLE: f64 = 36.0;
const LEGEND_ROW: f64 = 18.0;

/// One picture of the same size for every section, without title and legend: frames to step through.
pub fn frames(panels: &[Panel], library: &Library, width_px: f64) -> Vec<String> {
    let window = Window::around(panels);
    let scale = width_px / window.width();
    let fills = fills(library);
    let frame = |panel: &Panel| {
        let mut canvas = Canvas::default();
        draw(&mut canvas, panel, library, &fills, &window, [0.0, 0.0], scale);
        let height = window.height() * scale;
        scale_bar(&mut canvas, [8.0, height - 10.0], scale, width_px);
        canvas.finish(width_px, height, &panel.title)
    };
    panels.iter().map(frame).collect()
}

/// The legend of some sections as a picture of its own.
pub fn legend_of(panels: &[Panel], library: &Library, width_px: f64) -> String {
    let mut canvas = Canvas::default();
    let used = used_materials(panels);
    let height = legend(&mut canvas, &used, library, &fills(library), [0.0, 4.0], width_px);
    canvas.finish(width_px, height + 4.0, "legend")
}

/// Draws panels at one scale, `columns` a row, each `width_px` wide, as SVG.
pub fn strip(
    title: &str,
    panels: &[Panel],
    library: &Library,
    columns: usize,
    width_px: f64,
) -> String {
    let columns = columns.clamp(1, panels.len().max(1));
    let window = Window::around(panels);
    let scale = width_px / window.width();
    let size = [width_px, window.height() * scale];
    let fills = fills(library);
    let mut canvas = Canvas::default();
    canvas.words([MARGIN, 22.0], 14.0, Anchor::Start, INK, false, title);
    let rows = panels.len().div_ceil(columns);
    for (at, panel) in panels.iter().enumerate() {
        let x = MARGIN + (at % columns) as f64 * (size[0] + MARGIN);
        let y = 30.0 + (at / columns) as f64 * (size[1] + TITLE + MARGIN);
        canvas.words([x, y + 14.0], 11.0, Anchor::Start, INK, false, &panel.title);
        canvas.words([x, y + 28.0], 9.0, Anchor::Start, FAINT, false, &panel.caption);
        draw(&mut canvas, panel, library, &fills, &window, [x, y + TITLE], scale);
    }
    let width = (2.0 * MARGIN + columns as f64 * (size[0] + MARGIN) - MARGIN).max(320.0);
    let below = 30.0 + rows as f64 * (size[1] + TITLE + MARGIN);
    scale_bar(&mut canvas, [MARGIN, below + 4.0], scale, width_px);
    let used = used_materials(panels);
    let height = legend(&mut canvas, &used, library, &fills, [MARGIN, below + 30.0], width);
    canvas.finish(width, below + 30.0 + height + MARGIN, title)
}

/// A bar of a round length, at most a third of a panel.
fn scale_bar(canvas: &mut Canvas, [x, y]: [f64; 2], scale: f64, width_px: f64) {
    let most = width_px / 3.0 / scale;
    let decade = 10f64.powf(most.log10().floor());
    let length = [5.0, 2.0, 1.0].map(|k| k * decade).into_iter().find(|l| *l <= most);
    let length = length.unwrap_or(decade);
    let end = x + length * scale;
    canvas.line(&[[x, y], [end, y]], INK, 2.0, "");
    for tick in [x, end] {
        canvas.line(&[[tick, y - 4.0], [tick, y + 4.0]], INK, 1.2, "");
    }
    canvas.words([end + 6.0, y + 4.0], 10.0, Anchor::Start, INK, false, &format!("{length} nm"));
}

fn used_materials(panels: &[Panel]) -> Vec<MaterialId> {
    let bodies = panels.iter().flat_map(|panel| &panel.section.bodies);
    let mut used: Vec<_> = bodies.map(|body| body.material).collect();
    used.sort_unstable();
    used.dedup();
    used
}

fn legend(
    canvas: &mut Canvas,
    used: &[MaterialId],
    library: &Library,
    fills: &BTreeMap<MaterialId, Fill>,
    [left, top]: [f64; 2],
    width: f64,
) -> f64 {
    let [mut x, mut y] = [left, top];
    for id in used {
        let name = &library.material(*id).name;
        let wide = 30.0 + 7.0 * name.chars().count() as f64;
        if x + wide > width - MARGIN && x > left {
            x = left;
            y += LEGEND_ROW;
        }
        canvas.rectangle([x, y, 14.0, 11.0], &fills[id]);
        canvas.words([x + 19.0, y + 9.5], 10.0, Anchor::Start, INK, false, name);
        x += wide;
    }
    y + LEGEND_ROW - top
}
