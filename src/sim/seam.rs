//! Seams in a section that loses material: what is cut away takes its part of a seam with it.

use super::Seam;
use crate::geom::{Point, Region};
use crate::num::tolerance::SLIVER_NM;

/// The seams without what lies in `removed`; a seam cut through the middle becomes two.
pub(super) fn cut(seams: &[Seam], removed: &Region, walls: [f64; 2]) -> Vec<Seam> {
    let kept = |seam: &Seam| -> Vec<Seam> {
        let mut runs: Vec<Vec<Point>> = Vec::new();
        for ends in seam.points.windows(2) {
            for (a, b) in outside(ends[0], ends[1], removed, walls) {
                match runs.last_mut() {
                    Some(run) if run.last().is_some_and(|p| p.distance(a) <= SLIVER_NM) => {
                        run.push(b);
                    }
                    _ => runs.push(vec![a, b]),
                }
            }
        }
        runs.into_iter().map(|points| Seam { points, step: seam.step }).collect()
    };
    seams.iter().flat_map(kept).collect()
}

/// The parts of a segment outside a region, in order.
fn outside(from: Point, to: Point, region: &Region, walls: [f64; 2]) -> Vec<(Point, Point)> {
    let along = to - from;
    let mut cuts = vec![0.0, 1.0];
    for (a, b) in region.edges() {
        let edge = b - a;
        let turn = along.cross(edge);
        if turn != 0.0 {
            let here = (a - from).cross(edge) / turn;
            let there = (a - from).cross(along) / turn;
            if (0.0..=1.0).contains(&here) && (0.0..=1.0).contains(&there) {
                cuts.push(here);
            }
        }
    }
    cuts.sort_by(f64::total_cmp);
    let at = |share: f64| from + along * share;
    // A seam on a wall runs along the outline of regions that end there: ask a little inside.
    let asked = |share: f64| {
        let p = at(share);
        Point::new(p.x.clamp(walls[0] + SLIVER_NM, walls[1] - SLIVER_NM), p.z)
    };
    cuts.windows(2)
        .filter(|pair| (pair[1] - pair[0]) * along.norm() > SLIVER_NM)
        .filter(|pair| !region.contains(asked((pair[0] + pair[1]) / 2.0)))
        .map(|pair| (at(pair[0]), at(pair[1])))
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_plane_and_a_slot_cut_a_seam_on_the_wall() {
        let seam = Seam { points: vec![Point::new(10.0, 0.0), Point::new(10.0, 50.0)], step: 3 };
        let above = Region::rectangle([0.0, 10.0], [30.0, 60.0]);
        let cut_once = cut(std::slice::from_ref(&seam), &above, [0.0, 10.0]);
        assert_eq!(cut_once.len(), 1);
        assert_eq!(cut_once[0].points[1], Point::new(10.0, 30.0));
        let slot = Region::rectangle([0.0, 10.0], [10.0, 20.0]);
        let twice = cut(&cut_once, &slot, [0.0, 10.0]);
        let ends: Vec<_> = twice.iter().map(|s| (s.points[0].z, s.points[1].z)).collect();
        assert_eq!(ends, [(0.0, 10.0), (20.0, 30.0)]);
    }
}
