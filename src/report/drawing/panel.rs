//! One cross-section: materials, voids, marks.
//!
//! An array cell is drawn with its mirrored neighbours, from mid-line to mid-line, so that a
//! space is seen whole; a row as it is.

use std::collections::BTreeMap;

use super::canvas::{Anchor, Canvas, FIELD, INK, MARK};
use super::palette::fills;
use crate::geom::{Point, Region};
use crate::library::{Library, MaterialId};
use crate::sim::Section;

/// One picture of a section.
#[derive(Debug, Clone)]
pub struct Panel<'a> {
    /// Above the picture.
    pub title: String,
    /// Below the title, smaller.
    pub caption: String,
    /// Below the picture: figures of the voids, one line each.
    pub notes: Vec<String>,
    /// What is drawn.
    pub section: &'a Section,
    /// Where the materials of the section are.
    pub library: &'a Library,
    /// What is marked on it.
    pub marks: Marks,
}

/// Marks on a section.
#[derive(Debug, Clone, Default)]
pub struct Marks {
    /// Polish plane, nm above the line bottom.
    pub plane_nm: Option<f64>,
    /// Numbers of the voids that the notes speak of, each at a point inside its void.
    pub voids: Vec<(Point, usize)>,
    /// Lines of equal potential or of the field, in the section's coordinates, nm.
    pub lines: Vec<Vec<Point>>,
}

/// How a line on a section is drawn; the legend names it.
#[derive(Debug)]
pub(super) struct LineMark {
    pub name: &'static str,
    pub ink: &'static str,
    pub width: f64,
    pub dashes: &'static str,
}

pub(super) const LINE_TOP: LineMark =
    LineMark { name: "line top", ink: INK, width: 1.0, dashes: "1 3" };
pub(super) const POLISH_PLANE: LineMark =
    LineMark { name: "polish plane", ink: MARK, width: 1.2, dashes: "7 3" };
pub(super) const SEAM: LineMark = LineMark { name: "seam", ink: MARK, width: 0.8, dashes: "2 2" };
pub(super) const VOID: LineMark =
    LineMark { name: "void outline", ink: MARK, width: 1.6, dashes: "" };
pub(super) const POTENTIAL: LineMark =
    LineMark { name: "equal potential, 10 % apart", ink: FIELD, width: 0.9, dashes: "" };

impl Panel<'_> {
    /// The lines that are drawn on it.
    pub(super) fn lines(&self) -> Vec<&'static LineMark> {
        let mut lines = vec![&LINE_TOP];
        lines.extend(self.marks.plane_nm.map(|_| &POLISH_PLANE));
        lines.extend((!self.section.voids.is_empty()).then_some(&VOID));
        lines.extend((!self.section.seams.is_empty()).then_some(&SEAM));
        lines.extend((!self.marks.lines.is_empty()).then_some(&POTENTIAL));
        lines
    }
}

/// How much of a section is seen, in nm.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Window {
    pub x: [f64; 2],
    pub z: [f64; 2],
}

impl Window {
    /// A window that shows all panels: lines, films, a little of what lies below.
    pub(super) fn around(panels: &[Panel]) -> Self {
        let mut window = Self { x: [f64::MAX, f64::MIN], z: [f64::MAX, f64::MIN] };
        for panel in panels {
            let [left, right] = across(panel.section);
            let top = panel.marks.plane_nm.unwrap_or(0.0).max(panel.section.surface_top());
            let depth = 0.35 * panel.section.drawn.line_top;
            window.x = [window.x[0].min(left), window.x[1].max(right)];
            let bottom = panel.section.bottom().max(-depth);
            window.z = [window.z[0].min(bottom), window.z[1].max(top)];
        }
        let air = 0.08 * (window.z[1] - window.z[0]);
        window.z[1] += air;
        window
    }

    pub(super) fn width(&self) -> f64 {
        self.x[1] - self.x[0]
    }

    pub(super) fn height(&self) -> f64 {
        self.z[1] - self.z[0]
    }

    /// The stretches of a line that lie in the window (Liang and Barsky, ACM Trans. Graph. 3, 1
    /// (1984), edge by edge).
    fn within(&self, line: &[Point]) -> Vec<Vec<Point>> {
        let mut stretches: Vec<Vec<Point>> = Vec::new();
        for edge in line.windows(2) {
            let (from, way) = (edge[0], edge[1] - edge[0]);
            let mut seen = [0.0_f64, 1.0];
            let sides = [
                (-way.x, from.x - self.x[0]),
                (way.x, self.x[1] - from.x),
                (-way.z, from.z - self.z[0]),
                (way.z, self.z[1] - from.z),
            ];
            for (outward, room) in sides {
                if outward < 0.0 {
                    seen[0] = seen[0].max(room / outward);
                } else if outward > 0.0 {
                    seen[1] = seen[1].min(room / outward);
                } else if room < 0.0 {
                    seen[1] = -1.0;
                }
            }
            if seen[0] > seen[1] {
                continue;
            }
            let [start, end] = seen.map(|share| from + way * share);
            match stretches.last_mut() {
                Some(stretch) if seen[0] == 0.0 && stretch.last() == Some(&start) => {
                    stretch.push(end)
                }
                _ => stretches.push(vec![start, end]),
            }
        }
        stretches
    }
}

/// From the middle of the left neighbour to the middle of the right one; a row from wall to wall.
fn across(section: &Section) -> [f64; 2] {
    let [left, right] = section.drawn.walls;
    match section.drawn.lines.as_slice() {
        [line] => {
            let middle = (line.top_x[0] + line.top_x[1]) / 2.0;
            [2.0 * left - middle, 2.0 * right - middle]
        }
        _ => [left, right],
    }
}

/// A region with its images in the mirror walls of an array cell, clipped to the window.
fn unfolded(region: &Region, section: &Section, window: &Window) -> Region {
    let frame = Region::rectangle(window.x, window.z);
    let [left, right] = section.drawn.walls;
    if section.drawn.lines.len() > 1 {
        return region.intersection(&frame);
    }
    let images = [region.clone(), region.mirrored(left), region.mirrored(right)];
    Region::union_all(&images).intersection(&frame)
}

/// Draws a panel with its window's upper left corner at `origin`, `scale` pixels a nanometre.
pub(super) fn draw(
    canvas: &mut Canvas,
    panel: &Panel,
    window: &Window,
    origin: [f64; 2],
    scale: f64,
) {
    let library = panel.library;
    let fills = fills(library);
    let place = |p: Point| {
        [origin[0] + (p.x - window.x[0]) * scale, origin[1] + (window.z[1] - p.z) * scale]
    };
    let pixels = |region: &Region| -> Vec<Vec<[f64; 2]>> {
        let ring =
            |ring: &Vec<Point>| simplified(&ring.iter().map(|&p| place(p)).collect::<Vec<_>>());
        region.rings().map(ring).collect()
    };
    for (material, region) in by_material(panel.section) {
        let shown = unfolded(&region, panel.section, window);
        canvas.rings(&pixels(&shown), &fills[&material], &library.material(material).name);
        label(canvas, &shown, &library.material(material).name, fills[&material].ink, scale, place);
    }
    for void in &panel.section.voids {
        canvas.outlined(&pixels(&unfolded(void, panel.section, window)), VOID.ink);
    }
    for line in panel.marks.lines.iter().flat_map(|line| window.within(line)) {
        let points: Vec<_> = line.into_iter().map(place).collect();
        canvas.line(&points, POTENTIAL.ink, POTENTIAL.width, POTENTIAL.dashes);
    }
    for seam in &panel.section.seams {
        let points: Vec<_> = seam.points.iter().map(|&p| place(p)).collect();
        canvas.line(&points, SEAM.ink, SEAM.width, SEAM.dashes);
    }
    marks(canvas, panel, window, place);
}

/// A ring without the points that no eye would miss: those within a tenth of a pixel of the chord
/// between the points kept (Douglas and Peucker, Cartographica 10, 112 (1973)).
fn simplified(ring: &[[f64; 2]]) -> Vec<[f64; 2]> {
    const UNSEEN_PX: f64 = 0.1;
    if ring.len() < 4 {
        return ring.to_vec();
    }
    let opposite = ring.len() / 2;
    let mut keep = vec![false; ring.len()];
    let mut chords = vec![(0, opposite), (opposite, ring.len())];
    while let Some((from, to)) = chords.pop() {
        keep[from] = true;
        let at =
            |index: usize| Point::new(ring[index % ring.len()][0], ring[index % ring.len()][1]);
        let away = |index: &usize| at(*index).distance_to_segment(at(from), at(to));
        let farthest = (from + 1..to).max_by(|a, b| away(a).total_cmp(&away(b)));
        if let Some(middle) = farthest.filter(|middle| away(middle) > UNSEEN_PX) {
            chords.extend([(from, middle), (middle, to)]);
        }
    }
    ring.iter().zip(keep).filter_map(|(&point, kept)| kept.then_some(point)).collect()
}

/// The solid of each material, bodies joined, in order of material.
fn by_material(section: &Section) -> BTreeMap<MaterialId, Region> {
    let mut bodies: BTreeMap<MaterialId, Vec<&Region>> = BTreeMap::new();
    for body in &section.bodies {
        bodies.entry(body.material).or_default().push(&body.region);
    }
    bodies.into_iter().map(|(m, regions)| (m, Region::union_all(regions))).collect()
}

/// Names a material inside its largest part, where the words fit.
fn label(
    canvas: &mut Canvas,
    region: &Region,
    name: &str,
    ink: &str,
    scale: f64,
    place: impl Fn(Point) -> [f64; 2],
) {
    const SIZE: f64 = 10.0;
    let room = [0.62 * SIZE * name.chars().count() as f64 + 4.0, 1.3 * SIZE];
    let spot = region
        .parts()
        .filter_map(|part| Some((roomiest(&part, room, scale)?.0, part.area())))
        .reduce(|a, b| if b.1 > a.1 { b } else { a });
    if let Some((middle, _)) = spot {
        let [x, y] = place(middle);
        canvas.words([x, y + 0.35 * SIZE], SIZE, Anchor::Middle, ink, false, name);
    }
}

/// The middle of the tallest upright span at which a box of `room` pixels fits, and its height.
fn roomiest(part: &Region, room: [f64; 2], scale: f64) -> Option<(Point, f64)> {
    const TRIES: usize = 24;
    let bounds = part.bounds()?;
    let half = [room[0] / scale / 2.0, room[1] / scale / 2.0];
    let fits = |p: Point| {
        (0..=4).all(|i| {
            [-1.0, 0.0, 1.0].iter().all(|v| {
                part.contains(p + Point::new(half[0] * (f64::from(i) / 2.0 - 1.0), half[1] * v))
            })
        })
    };
    let step =
        |low: f64, high: f64, at: usize| low + (high - low) * (at as f64 + 0.5) / TRIES as f64;
    let mut best: Option<(Point, f64)> = None;
    for column in 0..TRIES {
        let x = step(bounds.min.x, bounds.max.x, column);
        let rows: Vec<_> = (0..TRIES)
            .map(|row| Point::new(x, step(bounds.min.z, bounds.max.z, row)))
            .filter(|&p| fits(p))
            .collect();
        let central = 1.0 - (2.0 * column as f64 / TRIES as f64 - 1.0).abs();
        if let (Some(low), Some(high)) = (rows.first(), rows.last()) {
            let middle = rows[rows.len() / 2];
            let score = high.z - low.z + central;
            if best.is_none_or(|(_, height)| score > height) {
                best = Some((middle, score));
            }
        }
    }
    best
}

fn marks(canvas: &mut Canvas, panel: &Panel, window: &Window, place: impl Fn(Point) -> [f64; 2]) {
    let mut level = |z: f64, line: &LineMark| {
        let ends = window.x.map(|x| place(Point::new(x, z)));
        canvas.line(&ends, line.ink, line.width, line.dashes);
    };
    level(panel.section.drawn.line_top, &LINE_TOP);
    if let Some(plane) = panel.marks.plane_nm {
        level(plane, &POLISH_PLANE);
    }
    for (at, number) in &panel.marks.voids {
        canvas.disc(place(*at), 7.0, &number.to_string());
    }
}
