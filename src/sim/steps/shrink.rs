//! A cure that shrinks: its material loses height from the top.
//!
//! Column by column, wherever the top of a piece of the material lies open to the ambient, its
//! height over whatever carries it shrinks by the same share; what is covered keeps its shape.
//! Exact for polygons: a column stands between neighbouring vertices, so that its top and
//! bottom are straight. Cost: a boolean a column.

use super::super::Section;
use super::{Bench, Change};
use crate::geom::{Point, Region};
use crate::library::MaterialId;
use crate::num::tolerance::SLIVER_NM;

pub(super) fn shrink(
    materials: &[MaterialId],
    share: f64,
    section: &Section,
    bench: &Bench,
) -> Change {
    let mut change = Change::of(section);
    for (at, body) in section.bodies.iter().enumerate() {
        if materials.contains(&body.material) {
            let lost = lost(&body.region, &bench.ambient, share);
            let origin = section.bodies[at].origin;
            change.remove(&lost, |b| b.origin == origin && b.material == body.material);
        }
    }
    change.section.settle();
    change
}

/// What a region loses.
fn lost(region: &Region, ambient: &Region, share: f64) -> Region {
    let Some(bounds) = region.bounds() else { return Region::empty() };
    let vertices = region.rings().chain(ambient.rings()).flatten().map(|p| p.x);
    let mut columns: Vec<f64> =
        vertices.filter(|x| (bounds.min.x..=bounds.max.x).contains(x)).collect();
    columns.sort_by(f64::total_cmp);
    columns.dedup();
    let mut lost = Vec::new();
    for x in columns.windows(2) {
        let column = Region::rectangle([x[0], x[1]], [bounds.min.z, bounds.max.z]);
        for piece in region.intersection(&column).parts() {
            let ends = |at: f64| {
                let there = piece.rings().flatten().filter(|p| (p.x - at).abs() <= SLIVER_NM);
                let z = there.map(|p| p.z);
                z.fold([f64::MAX, f64::MIN], |[low, high], z| [low.min(z), high.max(z)])
            };
            let ([low, high], [low_right, high_right]) = (ends(x[0]), ends(x[1]));
            let middle = Point::new((x[0] + x[1]) / 2.0, (high + high_right) / 2.0);
            if ambient.contains(middle + Point::new(0.0, 4.0 * SLIVER_NM)) {
                lost.push(Region::from_rings([vec![
                    Point::new(x[0], high - share * (high - low)),
                    Point::new(x[1], high_right - share * (high_right - low_right)),
                    Point::new(x[1], high_right),
                    Point::new(x[0], high),
                ]]));
            }
        }
    }
    Region::union_all(&lost)
}
