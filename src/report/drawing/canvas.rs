//! A small SVG writer: shapes and words in pixels, escaped.

use std::collections::BTreeSet;
use std::fmt::Write;

use super::{Fill, Pattern};

/// Ink of lines and words.
pub(super) const INK: &str = "#1b1b1b";
/// Ink of what matters less.
pub(super) const FAINT: &str = "#6a6a6a";
/// Ink of marks that are to be seen first.
pub(super) const MARK: &str = "#b3004b";
/// Ink of field lines and of lines of equal potential.
pub(super) const FIELD: &str = "#00429d";
/// Paper.
pub(super) const PAPER: &str = "#ffffff";

/// An SVG being written.
#[derive(Debug, Default)]
pub(super) struct Canvas {
    body: String,
    patterns: BTreeSet<(String, Pattern)>,
}

/// Where words hang on their point.
#[derive(Debug, Clone, Copy)]
pub(super) enum Anchor {
    Start,
    Middle,
}

impl Canvas {
    /// A filled path of closed rings (even-odd), in pixels.
    pub(super) fn rings(&mut self, rings: &[Vec<[f64; 2]>], fill: &Fill, title: &str) {
        let data = path_data(rings);
        let _ = writeln!(
            self.body,
            "<path d=\"{data}\" fill=\"{}\" fill-rule=\"evenodd\" stroke=\"{INK}\" \
             stroke-width=\"0.5\"><title>{}</title></path>",
            fill.color,
            escape(title)
        );
        if fill.pattern != Pattern::Plain {
            self.patterns.insert((fill.ink.to_owned(), fill.pattern));
            let _ = writeln!(
                self.body,
                "<path d=\"{data}\" fill=\"url(#{})\" fill-rule=\"evenodd\"/>",
                pattern_id(fill.ink, fill.pattern)
            );
        }
    }

    /// Closed rings outlined and filled with paper: a void.
    pub(super) fn outlined(&mut self, rings: &[Vec<[f64; 2]>], ink: &str) {
        let _ = writeln!(
            self.body,
            "<path d=\"{}\" fill=\"{PAPER}\" fill-rule=\"evenodd\" stroke=\"{ink}\" \
             stroke-width=\"1.6\"/>",
            path_data(rings)
        );
    }

    /// A line through points.
    pub(super) fn line(&mut self, points: &[[f64; 2]], ink: &str, width: f64, dashes: &str) {
        let points: Vec<_> = points.iter().map(|p| format!("{},{}", px(p[0]), px(p[1]))).collect();
        let dashes = if dashes.is_empty() {
            String::new()
        } else {
            format!(" stroke-dasharray=\"{dashes}\"")
        };
        let _ = writeln!(
            self.body,
            "<polyline points=\"{}\" fill=\"none\" stroke=\"{ink}\" \
             stroke-width=\"{width}\"{dashes}/>",
            points.join(" ")
        );
    }

    /// An upright rectangle: x, y of its upper left corner, width, height.
    pub(super) fn rectangle(&mut self, [x, y, width, height]: [f64; 4], fill: &Fill) {
        let ring = vec![[x, y], [x + width, y], [x + width, y + height], [x, y + height]];
        self.rings(&[ring], fill, "");
    }

    /// Words on a baseline; with `halo`, on a band of paper that keeps them legible.
    pub(super) fn words(
        &mut self,
        [x, y]: [f64; 2],
        size: f64,
        anchor: Anchor,
        ink: &str,
        halo: bool,
        words: &str,
    ) {
        let anchor = match anchor {
            Anchor::Start => "start",
            Anchor::Middle => "middle",
        };
        let halo = if halo {
            format!(
                " stroke=\"{PAPER}\" stroke-width=\"3\" paint-order=\"stroke\" stroke-linejoin=\"round\""
            )
        } else {
            String::new()
        };
        let _ = writeln!(
            self.body,
            "<text x=\"{}\" y=\"{}\" font-size=\"{size}\" text-anchor=\"{anchor}\" \
             fill=\"{ink}\"{halo}>{}</text>",
            px(x),
            px(y),
            escape(words)
        );
    }

    /// A small number on paper, to be spoken of elsewhere.
    pub(super) fn disc(&mut self, [x, y]: [f64; 2], radius: f64, number: &str) {
        let _ = writeln!(
            self.body,
            "<circle cx=\"{}\" cy=\"{}\" r=\"{radius}\" fill=\"{PAPER}\" stroke=\"{INK}\" \
             stroke-width=\"0.8\"/>",
            px(x),
            px(y)
        );
        self.words([x, y + 0.36 * 1.4 * radius], 1.4 * radius, Anchor::Middle, INK, false, number);
    }

    /// The finished SVG of a size in pixels.
    pub(super) fn finish(self, width: f64, height: f64, title: &str) -> String {
        let patterns: String = self.patterns.iter().map(|(ink, p)| pattern(ink, *p)).collect();
        format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {w} {h}\" width=\"{w}\" \
             height=\"{h}\" role=\"img\" font-family=\"DejaVu Sans, Verdana, sans-serif\">\n\
             <title>{}</title>\n<defs>{patterns}</defs>\n\
             <rect width=\"{w}\" height=\"{h}\" fill=\"{PAPER}\"/>\n{}</svg>\n",
            escape(title),
            self.body,
            w = px(width),
            h = px(height)
        )
    }
}

fn path_data(rings: &[Vec<[f64; 2]>]) -> String {
    let mut data = String::new();
    for ring in rings {
        for (at, point) in ring.iter().enumerate() {
            let command = if at == 0 { 'M' } else { 'L' };
            let _ = write!(data, "{command}{} {}", px(point[0]), px(point[1]));
        }
        data.push('Z');
    }
    data
}

fn pattern_id(ink: &str, pattern: Pattern) -> String {
    let name = match pattern {
        Pattern::Plain => "plain",
        Pattern::Upright => "upright",
        Pattern::Slanted => "slanted",
        Pattern::Dotted => "dotted",
    };
    format!("{name}-{}", ink.trim_start_matches('#'))
}

fn pattern(ink: &str, pattern: Pattern) -> String {
    let drawing = match pattern {
        Pattern::Plain => String::new(),
        Pattern::Upright => format!("<path d=\"M3 0V6\" stroke=\"{ink}\" stroke-width=\"0.7\"/>"),
        Pattern::Slanted => {
            format!("<path d=\"M0 6L6 0\" stroke=\"{ink}\" stroke-width=\"0.7\"/>")
        }
        Pattern::Dotted => format!("<circle cx=\"3\" cy=\"3\" r=\"0.9\" fill=\"{ink}\"/>"),
    };
    format!(
        "<pattern id=\"{}\" width=\"6\" height=\"6\" patternUnits=\"userSpaceOnUse\">{drawing}</pattern>",
        pattern_id(ink, pattern)
    )
}

/// A coordinate with at most two decimals.
fn px(value: f64) -> String {
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

fn escape(words: &str) -> String {
    words.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;")
}
