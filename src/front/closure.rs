//! What happens when a throat closes: what is narrower than the closure width turns solid, and
//! the void behind it freezes.
//!
//! Method: a morphological opening of the ambient with a disc of the closure width. What the disc
//! does not reach is narrow; of that turns solid what lies at the throat, and what parts the
//! ambient in two. A part that does not reach the sky any more is a void. The surface of the rest is
//! read off its outline ([`super::rebuild`]), so that any number of throats may close at once. Cost:
//! some booleans on the outline.

use super::FrontError;
use super::rebuild::rebuilt;
use super::surface::Surface;
use crate::geom::{Point, Region};
use crate::num::tolerance::ON_EDGE_NM;

/// The disc of the opening over the closure width: parallel sides at just that width are narrow.
const OPENING_SHARE: f64 = 1.002;
/// Turn of the opening's arcs, in radians.
const OPENING_STEP: f64 = 0.4;
/// Narrow parts above this share of the squared closure width are tips, below it the rounding of corners.
const TIP: f64 = 0.25;
/// Smaller parts than this share are the rounding of the arcs.
const CRUMB: f64 = 1e-3;
/// Parts of the ambient smaller than this, in squared closure widths, are no voids.
const VOID: f64 = 2.0;
/// Regions nearer than this share of the closure width touch.
const TOUCH: f64 = 0.02;

/// A place that turned solid.
pub(super) struct Closed {
    /// Middle of the throat.
    pub(super) throat: Point,
    /// What it shut off; empty where nothing lay behind.
    pub(super) void: Region,
    /// What turned solid there.
    pub(super) plug: Region,
}

/// Closes what is narrower than `width` at a throat, and all that parts the ambient. Empty when
/// nothing did.
pub(super) fn close(
    surface: &mut Surface,
    throat: Point,
    sky: f64,
    width: f64,
) -> Result<Vec<Closed>, FrontError> {
    let ambient = surface.ambient(sky)?;
    let narrow = narrow_parts(&ambient, surface.walls, sky, width);
    let all = Region::union_all(&narrow);
    let wide: Vec<Region> = ambient.difference(&all).parts().collect();
    let reach = TOUCH * width;
    let near = |part: &Region| {
        part.edges().any(|(a, b)| throat.distance_to_segment(a, b) < 2.0 * width)
            || part.contains(throat)
    };
    let plugs: Vec<Region> = narrow
        .into_iter()
        .filter(|part| {
            let is_tip = part.area() > TIP * width * width && near(part);
            let grown = part.grown(reach, OPENING_STEP);
            is_tip || wide.iter().filter(|side| !side.intersection(&grown).is_empty()).count() > 1
        })
        .collect();
    if plugs.is_empty() {
        return Ok(Vec::new());
    }
    let rest = ambient.difference(&Region::union_all(&plugs));
    let (open, shut): (Vec<Region>, Vec<Region>) = rest
        .parts()
        .partition(|part| part.bounds().is_some_and(|b| b.max.z >= sky - ON_EDGE_NM));
    let [open] = &open[..] else {
        return Err(FrontError::Inconsistent("the sky is not one open space"));
    };
    let mut plugs: Vec<Option<Region>> = plugs.into_iter().map(Some).collect();
    let mut closed = Vec::new();
    for void in shut.into_iter().filter(|part| part.area() > VOID * width * width) {
        let grown = void.grown(reach, OPENING_STEP);
        let touching = |plug: &Option<Region>| {
            plug.as_ref().is_some_and(|plug| !plug.intersection(&grown).is_empty())
        };
        let highest = (0..plugs.len())
            .filter(|&k| touching(&plugs[k]))
            .max_by(|&a, &b| top(&plugs[a]).total_cmp(&top(&plugs[b])));
        let plug = highest.and_then(|k| plugs[k].take()).unwrap_or_default();
        let throat = middle(if plug.is_empty() { &void } else { &plug }, surface.walls);
        closed.push(Closed { throat, void, plug });
    }
    for plug in plugs.into_iter().flatten().filter(|plug| plug.area() > TIP * width * width) {
        closed.push(Closed { throat: middle(&plug, surface.walls), void: Region::empty(), plug });
    }
    *surface = rebuilt(open, sky, surface);
    Ok(closed)
}

/// Takes away parts of the ambient that the sky does not reach; they are voids where wide enough.
pub(super) fn shut_off(ambient: &Region, sky: f64, width: f64) -> (Region, Vec<Closed>) {
    let (open, shut): (Vec<Region>, Vec<Region>) = ambient
        .parts()
        .partition(|part| part.bounds().is_some_and(|b| b.max.z >= sky - ON_EDGE_NM));
    let voids = shut.into_iter().filter(|part| part.area() > VOID * width * width);
    let closed = voids.map(|void| {
        let throat = void.bounds().map_or(Point::default(), |b| {
            Point::new(0.5 * (b.min.x + b.max.x), b.max.z)
        });
        Closed { throat, void, plug: Region::empty() }
    });
    let closed = closed.collect();
    (Region::union_all(&open), closed)
}

/// The parts of the ambient that a disc of `width` does not reach.
fn narrow_parts(ambient: &Region, walls: [f64; 2], sky: f64, width: f64) -> Vec<Region> {
    let radius = 0.5 * OPENING_SHARE * width;
    let Some(bounds) = ambient.bounds() else { return Vec::new() };
    let margin = 4.0 * width;
    let (below, above) = (bounds.min.z - margin, sky + margin);
    // Beyond a wall the ambient goes on as its image, above the sky it is open.
    let images = walls.map(|wall| {
        let strip = Region::rectangle([wall - margin, wall + margin], [below, above]);
        ambient.mirrored(wall).intersection(&strip)
    });
    let [left, right] = [walls[0] - margin, walls[1] + margin];
    let space = Region::rectangle([left, right], [sky - margin.min(0.1), above]);
    let whole = Region::union_all(images.iter().chain([ambient, &space]));
    let frame = Region::rectangle([left, right], [below, above]);
    let eroded = whole.difference(&frame.difference(&whole).grown(radius, OPENING_STEP));
    let narrow = ambient.difference(&eroded.grown(radius, OPENING_STEP));
    narrow.parts().filter(|part| part.area() > CRUMB * width * width).collect()
}

fn top(region: &Option<Region>) -> f64 {
    region.as_ref().and_then(Region::bounds).map_or(f64::NEG_INFINITY, |b| b.max.z)
}

/// Middle of a plug, on the wall that it touches.
fn middle(region: &Region, walls: [f64; 2]) -> Point {
    let Some(b) = region.bounds() else { return Point::default() };
    let x = if b.min.x <= walls[0] + ON_EDGE_NM {
        walls[0]
    } else if b.max.x >= walls[1] - ON_EDGE_NM {
        walls[1]
    } else {
        0.5 * (b.min.x + b.max.x)
    };
    Point::new(x, 0.5 * (b.min.z + b.max.z))
}
