//! A film strip: panels in rows at one scale, a scale bar, a legend.

use std::collections::BTreeMap;

use super::canvas::{Anchor, Canvas, FAINT, INK};
use super::palette::{Fill, fills};
use super::panel::{Panel, Window, draw};

const MARGIN: f64 = 16.0;
const TITLE: f64 = 36.0;
const NOTE_ROW: f64 = 13.0;
/// Width of a character of a note, generously.
const NOTE_PX: f64 = 5.4;
const LEGEND_ROW: f64 = 18.0;

/// One picture of the same size for every section, without words around it: frames to step
/// through, at most so many pixels wide and high.
pub fn frames(panels: &[Panel], [width_px, height_px]: [f64; 2]) -> Vec<String> {
    let window = Window::around(panels);
    let scale = (width_px / window.width()).min(height_px / window.height());
    let [width, height] = [window.width() * scale, window.height() * scale];
    let frame = |panel: &Panel| {
        let mut canvas = Canvas::default();
        draw(&mut canvas, panel, &window, [0.0, 0.0], scale);
        scale_bar(&mut canvas, [8.0, height - 10.0], scale, width);
        canvas.finish(width, height, &panel.title)
    };
    panels.iter().map(frame).collect()
}

/// The legend of some sections as a picture of its own.
pub fn legend_of(panels: &[Panel], width_px: f64) -> String {
    let mut canvas = Canvas::default();
    let height = legend(&mut canvas, panels, [0.0, 4.0], width_px);
    canvas.finish(width_px, height + 4.0, "legend")
}

/// Draws panels at one scale, `columns` a row, each `width_px` wide, as SVG: title and caption
/// above each, its notes below it.
pub fn strip(title: &str, panels: &[Panel], columns: usize, width_px: f64) -> String {
    let columns = columns.clamp(1, panels.len().max(1));
    let window = Window::around(panels);
    let scale = width_px / window.width();
    let size = [width_px, window.height() * scale];
    let mut canvas = Canvas::default();
    canvas.words([MARGIN, 22.0], 14.0, Anchor::Start, INK, false, title);
    let mut y = 30.0;
    for row in panels.chunks(columns) {
        for (at, panel) in row.iter().enumerate() {
            let x = MARGIN + at as f64 * (size[0] + MARGIN);
            let fits = (width_px / 6.2) as usize;
            let title = shortened(&panel.title, fits);
            canvas.words([x, y + 14.0], 11.0, Anchor::Start, INK, false, &title);
            canvas.words([x, y + 28.0], 9.0, Anchor::Start, FAINT, false, &panel.caption);
            draw(&mut canvas, panel, &window, [x, y + TITLE], scale);
            for (line, note) in notes(panel, width_px).iter().enumerate() {
                let baseline = y + TITLE + size[1] + NOTE_ROW * (line as f64 + 1.0);
                canvas.words([x, baseline], 9.0, Anchor::Start, INK, false, note);
            }
        }
        let lines = row.iter().map(|panel| notes(panel, width_px).len()).max().unwrap_or(0);
        y += TITLE + size[1] + NOTE_ROW * lines as f64 + MARGIN;
    }
    let width = (2.0 * MARGIN + columns as f64 * (size[0] + MARGIN) - MARGIN).max(320.0);
    scale_bar(&mut canvas, [MARGIN, y + 4.0], scale, width_px);
    let height = legend(&mut canvas, panels, [MARGIN, y + 30.0], width);
    canvas.finish(width, y + 30.0 + height + MARGIN, title)
}

/// The notes of a panel in lines that fit below it, broken after commas.
fn notes(panel: &Panel, width_px: f64) -> Vec<String> {
    let fits = (width_px / NOTE_PX) as usize;
    let mut lines: Vec<String> = Vec::new();
    for note in &panel.notes {
        let mut line = String::new();
        for part in note.split_inclusive(", ") {
            if !line.is_empty() && line.chars().count() + part.trim_end().chars().count() > fits {
                lines.push(std::mem::take(&mut line));
            }
            line.push_str(part);
        }
        lines.push(line);
    }
    lines
}

/// Words that fit in so many characters, the rest told by an ellipsis.
fn shortened(words: &str, fits: usize) -> String {
    if words.chars().count() <= fits {
        return words.to_owned();
    }
    words.chars().take(fits.saturating_sub(1)).chain(['…']).collect()
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

/// The materials of some sections with their fills, by name.
fn used<'a>(panels: &[Panel<'a>]) -> BTreeMap<&'a str, Fill> {
    let mut used = BTreeMap::new();
    for panel in panels {
        let fills = fills(panel.library);
        let bodies = panel.section.bodies.iter().map(|body| body.material);
        used.extend(
            bodies.map(|id| (panel.library.material(id).name.as_str(), fills[&id].clone())),
        );
    }
    used
}

/// Materials, then the lines drawn on them; the height that it takes.
fn legend(canvas: &mut Canvas, panels: &[Panel], [left, top]: [f64; 2], width: f64) -> f64 {
    let [mut x, mut y] = [left, top];
    let mut next = |name: &str| {
        let wide = 30.0 + 7.0 * name.chars().count() as f64;
        if x + wide > width - MARGIN && x > left {
            x = left;
            y += LEGEND_ROW;
        }
        let at = [x, y];
        x += wide;
        at
    };
    for (name, fill) in used(panels) {
        let [x, y] = next(name);
        canvas.rectangle([x, y, 14.0, 11.0], &fill);
        canvas.words([x + 19.0, y + 9.5], 10.0, Anchor::Start, INK, false, name);
    }
    let mut lines: Vec<_> = panels.iter().flat_map(Panel::lines).collect();
    lines.sort_by_key(|line| line.name);
    lines.dedup_by_key(|line| line.name);
    for line in lines {
        let [x, y] = next(line.name);
        canvas.line(&[[x, y + 5.5], [x + 16.0, y + 5.5]], line.ink, line.width, line.dashes);
        canvas.words([x + 19.0, y + 9.5], 10.0, Anchor::Start, INK, false, line.name);
    }
    y + LEGEND_ROW - top
}
