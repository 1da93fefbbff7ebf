//! What happens when a throat closes: the ambient is cut there, and the void behind it freezes.
//!
//! Method: morphological openings of the ambient around the throat with a disc. What a disc a
//! little wider than the closure width does not reach is the neck. Where the neck parts the
//! ambient in two it is cut across at its middle: a neck about to close is nearly parallel, and
//! which place of it is narrowest is chance, while its middle is well determined. Toward the sky
//! the neck turns solid at once, and a slit with nothing behind it does. A part that does not reach
//! the sky any more is a void, less what is narrower than the closure width. The surface of the rest is read off its outline ([`super::rebuild`]), so
//! that any number of throats may close at once. Cost: some booleans on the outline.

use super::FrontError;
use super::rebuild::rebuilt;
use super::surface::Surface;
use crate::geom::{Point, Region};
use crate::num::tolerance::{ON_EDGE_NM, SKY_MARGIN_NM};

/// Widths up to this, in closure widths, belong to the neck of a throat that closes.
const NECK: f64 = 1.15;
/// What a void loses, in closure widths: parallel sides at just the closure width go too.
const SEAM: f64 = 1.002;
/// Thickness of a cut, in closure widths.
const CUT: f64 = 0.1;
/// Turn of the arcs of a disc, in radians.
const ARC_RAD: f64 = 0.4;
/// Narrow parts above this area are tips, below it the rounding of corners; squared closure widths.
const TIP: f64 = 0.25;
/// Smaller parts are the rounding of the arcs, in squared closure widths.
const CRUMB: f64 = 1e-3;
/// Parts of the ambient smaller than this are no voids, in squared closure widths.
const VOID: f64 = 2.0;
/// Regions nearer than this touch, in closure widths.
const TOUCH: f64 = 0.02;
/// Vertices nearer than this to the chord of their neighbours are left out, in closure widths.
const THINNED: f64 = 1e-3;
/// How far around a throat its neck is looked for, in closure widths and as a share of the
/// ambient's height; and how much further the disc is moved there, in closure widths.
const REACH: f64 = 16.0;
const REACH_OF_HEIGHT: f64 = 0.05;
const MARGIN: f64 = 4.0;

/// A place that closed.
pub(super) struct Closed {
    /// Middle of the throat.
    pub(super) throat: Point,
    /// What it shut off; empty where nothing lay behind.
    pub(super) void: Region,
    /// What turned solid there.
    pub(super) plug: Region,
}

/// Closes the throat around a point, of the closure width `width`. Empty when nothing closed.
pub(super) fn close(
    surface: &mut Surface,
    throat: Point,
    sky: f64,
    width: f64,
) -> Result<Vec<Closed>, FrontError> {
    let ambient = surface.ambient(sky)?;
    let at = Place { ambient: &ambient, walls: surface.walls, throat, sky, width };
    let narrow = at.narrower_than(NECK * width);
    let necks: Vec<&Region> = at.parting(&narrow);
    let cuts: Vec<Region> = necks.iter().map(|neck| at.cut(neck)).collect();
    let (open, shut) = by_sky(&ambient.difference(&Region::union_all(&cuts)), sky);
    // Toward the sky a closed neck fills up at once, and so does a slit with nothing behind it.
    let tips = narrow.iter().filter(|part| necks.is_empty() && at.is_tip(part));
    // A little more of it, so that no crack stays beside.
    let plug = |part: &Region| part.grown(THINNED * width, ARC_RAD);
    let mut plugs: Vec<Region> = necks.iter().copied().chain(tips).map(plug).collect();
    if plugs.is_empty() {
        return Ok(Vec::new());
    }
    let filled = Region::union_all(&plugs);
    let (open, cut_off) = by_sky(&Region::union_all(&open).difference(&filled), sky);
    let mut closed = Vec::new();
    for part in shut.into_iter().chain(cut_off) {
        let void = without_seams(&part, &filled, surface.walls, width);
        if !void.is_empty() {
            let touches = |plug: &Region| at.touches(plug, &part);
            let cut = cuts.iter().chain(&plugs).find(|solid| touches(solid));
            let throat = middle(cut.unwrap_or(&void), surface.walls);
            let plug = plugs.iter().position(touches).map(|k| plugs.remove(k));
            closed.push(Closed { throat, void, plug: plug.unwrap_or_default() });
        }
    }
    for plug in plugs {
        closed.push(Closed { throat: middle(&plug, surface.walls), void: Region::empty(), plug });
    }
    let [open] = &open[..] else {
        return Err(FrontError::Inconsistent("the sky is not one open space"));
    };
    *surface = rebuilt(open, sky, surface, THINNED * width);
    Ok(closed)
}

/// Takes away parts of the ambient that the sky does not reach; they are voids where wide enough.
pub(super) fn shut_off(
    ambient: &Region,
    walls: [f64; 2],
    sky: f64,
    width: f64,
) -> (Region, Vec<Closed>) {
    let (open, shut) = by_sky(ambient, sky);
    let voids = shut.iter().map(|part| without_seams(part, &Region::empty(), walls, width));
    let closed = voids.filter(|void| !void.is_empty()).map(|void| {
        let Point { x, .. } = middle(&void, walls);
        let z = void.bounds().map_or(0.0, |b| b.max.z);
        Closed { throat: Point::new(x, z), void, plug: Region::empty() }
    });
    let closed = closed.collect();
    (Region::union_all(&open), closed)
}

/// The parts that reach the sky, and those that do not.
fn by_sky(ambient: &Region, sky: f64) -> (Vec<Region>, Vec<Region>) {
    ambient.parts().partition(|part| part.bounds().is_some_and(|b| b.max.z >= sky - ON_EDGE_NM))
}

/// The surroundings of a throat.
struct Place<'a> {
    ambient: &'a Region,
    walls: [f64; 2],
    throat: Point,
    sky: f64,
    width: f64,
}

impl Place<'_> {
    /// Those of the narrow parts that part the ambient.
    fn parting<'r>(&self, narrow: &'r [Region]) -> Vec<&'r Region> {
        let wide: Vec<Region> =
            self.ambient.difference(&Region::union_all(narrow)).parts().collect();
        let parts =
            |neck: &&Region| wide.iter().filter(|side| self.touches(neck, side)).count() > 1;
        narrow.iter().filter(parts).collect()
    }

    fn touches(&self, a: &Region, b: &Region) -> bool {
        a.distance(b).is_some_and(|gap| gap < TOUCH * self.width)
    }

    /// A thin part of a neck across it, at its middle.
    fn cut(&self, neck: &Region) -> Region {
        let beyond = |wall: f64| {
            neck.bounds().is_some_and(|b| (b.min.x..=b.max.x).contains(&wall))
                || neck.edges().any(|(a, _)| (a.x - wall).abs() < ON_EDGE_NM)
        };
        let images = self.walls.into_iter().filter(|&wall| beyond(wall));
        let images: Vec<Region> = images.map(|wall| neck.mirrored(wall)).collect();
        let whole = Region::union_all(images.iter().chain([neck]));
        let (centre, along) = axis(&whole);
        let across = Point::new(-along.z, along.x);
        let (thick, long) = (along * (0.5 * CUT * self.width), across * (2.0 * self.width));
        let slab = vec![
            centre - thick - long,
            centre + thick - long,
            centre + thick + long,
            centre - thick + long,
        ];
        // The slab may meet other narrow parts beside: only the neck is cut, and a little of
        // what lies beside it, so that no crack stays.
        Region::from_rings([slab]).intersection(&neck.grown(TOUCH * self.width, ARC_RAD))
    }

    /// Whether a narrow part lies at the throat and is more than a rounded corner.
    fn is_tip(&self, part: &Region) -> bool {
        let (near, least) = (2.0 * self.width, TIP * self.width * self.width);
        let mut edges = part.edges();
        part.area() > least
            && (part.contains(self.throat)
                || edges.any(|(a, b)| self.throat.distance_to_segment(a, b) < near))
    }

    /// The parts of the ambient around the throat that a disc of `diameter` does not reach.
    fn narrower_than(&self, diameter: f64) -> Vec<Region> {
        let Some(bounds) = self.ambient.bounds() else { return Vec::new() };
        let height = bounds.max.z - bounds.min.z;
        let reach = (REACH * self.width).max(REACH_OF_HEIGHT * height);
        let Point { x, z } = self.throat;
        let around = |r: f64| Region::rectangle([x - r, x + r], [z - r, z + r]);
        let (window, frame) = (around(reach), around(reach + MARGIN * self.width));
        // Beyond a wall the ambient goes on as its image, above the sky it is open.
        let images =
            self.walls.map(|wall| self.ambient.intersection(&frame.mirrored(wall)).mirrored(wall));
        let far = reach + 2.0 * MARGIN * self.width;
        let above = [self.sky - SKY_MARGIN_NM.min(self.width), self.sky.max(z) + far];
        let above = Region::rectangle([x - far, x + far], above);
        let own = self.ambient.intersection(&frame);
        let whole = Region::union_all(images.iter().chain([&own, &above])).intersection(&frame);
        let opened = opened(&whole, &frame, 0.5 * diameter);
        let narrow = own.intersection(&window).difference(&opened);
        let least = CRUMB * self.width * self.width;
        narrow.parts().filter(|part| part.area() > least).collect()
    }
}

/// What a disc reaches of a region in a frame; beyond the frame it is free.
fn opened(region: &Region, frame: &Region, radius: f64) -> Region {
    let solid = frame.difference(region);
    region.difference(&solid.grown(radius, ARC_RAD)).grown(radius, ARC_RAD)
}

/// A part of the ambient without what is narrower than the closure width, necks that were cut
/// excepted; empty where nothing wider than these is left.
fn without_seams(region: &Region, necks: &Region, walls: [f64; 2], width: f64) -> Region {
    // Beyond a wall the region goes on as its image.
    let touches = |wall: f64| region.rings().flatten().any(|p| (p.x - wall).abs() < ON_EDGE_NM);
    let images = walls.into_iter().filter(|&wall| touches(wall));
    let images: Vec<Region> = images.map(|wall| region.mirrored(wall)).collect();
    let whole = Region::union_all(images.iter().chain([region]));
    let Some(bounds) = whole.bounds() else { return Region::empty() };
    let margin = 2.0 * width;
    let frame = Region::rectangle(
        [bounds.min.x - margin, bounds.max.x + margin],
        [bounds.min.z - margin, bounds.max.z + margin],
    );
    let seams = region.difference(&opened(&whole, &frame, 0.5 * SEAM * width)).difference(necks);
    // What an opening rounds off in corners is no seam.
    let is_seam = |part: &Region| part.area() > TIP * width * width;
    let seams: Vec<Region> = seams.parts().filter(is_seam).collect();
    let rest = region.difference(&Region::union_all(&seams));
    let is_void = |part: &Region| part.difference(necks).area() > VOID * width * width;
    let voids: Vec<Region> = rest.parts().filter(is_void).collect();
    Region::union_all(&voids)
}

/// Centre of gravity of a region and the direction in which it is longest.
fn axis(region: &Region) -> (Point, Point) {
    let origin = region.rings().flatten().next().copied().unwrap_or_default();
    let (mut area, mut first, mut second) = (0.0, Point::default(), [0.0; 3]);
    for (a, b) in region.edges() {
        let (a, b) = (a - origin, b - origin);
        let twice = a.cross(b);
        area += twice / 2.0;
        first = first + (a + b) * (twice / 6.0);
        second[0] += twice * (a.x * a.x + a.x * b.x + b.x * b.x) / 12.0;
        second[1] += twice * (a.z * a.z + a.z * b.z + b.z * b.z) / 12.0;
        second[2] += twice * (2.0 * (a.x * a.z + b.x * b.z) + a.x * b.z + b.x * a.z) / 24.0;
    }
    let centre = first * (1.0 / area);
    let xx = second[0] / area - centre.x * centre.x;
    let zz = second[1] / area - centre.z * centre.z;
    let xz = second[2] / area - centre.x * centre.z;
    let angle = 0.5 * (2.0 * xz).atan2(xx - zz);
    (origin + centre, Point::new(angle.cos(), angle.sin()))
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_axis_of_a_slanted_strip() {
        let at = |x: f64, z: f64| Point::new(x, z);
        let strip = vec![at(0.0, 0.0), at(0.1, 0.0), at(3.1, 6.0), at(3.0, 6.0)];
        let (centre, along) = axis(&Region::from_rings([strip]));
        assert!(centre.distance(at(1.55, 3.0)) < 1e-6);
        assert!((along.z / along.x - 2.0).abs() < 0.01);
    }
}
