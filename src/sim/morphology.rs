//! Discs that fit into regions (openings; Serra, Image Analysis and Mathematical Morphology,
//! 1982), with what lies behind the mirror walls counted in.
//!
//! The disc is a polygon of 24 corners, at most one per cent narrower than its circle, and
//! outlines are thinned to 1/500 of it first. Cost: a boolean over the capsules of all edges.

use crate::geom::{Point, Region};

const STEP_RAD: f64 = std::f64::consts::PI / 12.0;

/// What of a region a disc of a diameter fits into.
pub(super) fn opened(region: &Region, diameter: f64, walls: [f64; 2]) -> Region {
    let shrunk = shrunk(region, diameter, walls);
    let Some(bounds) = region.bounds() else { return Region::empty() };
    let strip = Region::rectangle(walls, [bounds.min.z - diameter, bounds.max.z + diameter]);
    shrunk.grown(diameter / 2.0, STEP_RAD).intersection(&strip)
}

/// Whether a disc of a diameter fits into a region.
pub(super) fn holds_disc(region: &Region, diameter: f64, walls: [f64; 2]) -> bool {
    !shrunk(region, diameter, walls).is_empty()
}

/// Where the centre of the disc can be.
fn shrunk(region: &Region, diameter: f64, walls: [f64; 2]) -> Region {
    let Some(bounds) = region.bounds() else { return Region::empty() };
    let [left, right] = walls;
    let z = |margin: f64| [bounds.min.z - margin, bounds.max.z + margin];
    let margin = 2.0 * diameter;
    let strip = |x: [f64; 2]| region.intersection(&Region::rectangle(x, z(margin)));
    let behind_left = strip([left, left + margin]).mirrored(left);
    let behind_right = strip([right - margin, right]).mirrored(right);
    let continued = Region::union_all([region, &behind_left, &behind_right]);
    let frame = Region::rectangle([left - 2.0 * margin, right + 2.0 * margin], z(2.0 * margin));
    let outside = frame.difference(&simplified(&continued, diameter / 500.0));
    frame.difference(&outside.grown(diameter / 2.0, STEP_RAD))
}

/// The region with vertices left out that stand off the chord of those kept by less than
/// `tolerance`.
fn simplified(region: &Region, tolerance: f64) -> Region {
    let ring = |ring: &Vec<Point>| -> Vec<Point> {
        let mut kept: Vec<Point> = vec![ring[0]];
        let mut first = 0;
        for last in 1..ring.len() {
            let next = ring[(last + 1) % ring.len()];
            let chord_holds = ring[first + 1..=last]
                .iter()
                .all(|p| p.distance_to_segment(ring[first], next) <= tolerance);
            if !chord_holds {
                kept.push(ring[last]);
                first = last;
            }
        }
        kept
    };
    Region::from_rings(region.rings().map(ring))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_disc_fits_up_to_the_width_of_a_slab_and_through_its_mirror_image() {
        let slab = Region::rectangle([0.0, 100.0], [0.0, 10.0]);
        assert!(holds_disc(&slab, 9.9, [0.0, 100.0]));
        assert!(!holds_disc(&slab, 10.2, [0.0, 100.0]));
        let half = Region::rectangle([95.0, 100.0], [0.0, 40.0]);
        assert!(holds_disc(&half, 9.9, [0.0, 100.0]));
        assert!(!holds_disc(&half, 9.9, [0.0, 200.0]));
    }

    #[test]
    fn an_opening_takes_a_thin_neck_away() {
        let dumbbell = Region::rectangle([0.0, 20.0], [0.0, 20.0])
            .union(&Region::rectangle([20.0, 40.0], [9.0, 11.0]))
            .union(&Region::rectangle([40.0, 60.0], [0.0, 20.0]));
        assert_eq!(opened(&dumbbell, 4.0, [0.0, 60.0]).polygons().len(), 2);
    }
}
