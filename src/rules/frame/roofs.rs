//! Roofs of the voids of the finished flow.

use super::context::Context;
use super::shape::{Look, space_of, surface_height};
use crate::flow::Action;
use crate::geom::{Point, Region};
use crate::library::MaterialId;
use crate::sim::{CellTrace, Section};

/// The roof of one void.
pub struct Roof<'a> {
    /// The cell.
    pub cell: &'a CellTrace,
    /// The space of the void.
    pub space: usize,
    /// Shortest way from the void to the finished surface, in nm.
    pub thickness_nm: f64,
    /// Solid straight above the void's highest point, in nm.
    pub above_nm: f64,
    /// Greatest width of the void, in nm; whole where it ends at a mirror.
    pub width_nm: f64,
    /// The material over the void.
    pub material: Option<MaterialId>,
    /// The last step that shaped the surface.
    pub surface_step: Option<usize>,
}

/// The roofs of all voids.
pub fn roofs<'c, 'a>(context: &'c Context<'a>) -> &'c [Roof<'a>] {
    context.shared.roofs.get_or_init(|| find_roofs(context))
}

fn find_roofs<'a>(context: &Context<'a>) -> Vec<Roof<'a>> {
    let mut all = Vec::new();
    for cell in context.cells {
        let section = &cell.stages[cell.stages.len() - 1].section;
        if section.voids.is_empty() {
            continue;
        }
        let ambient = ambient(section);
        let surface_step = context
            .steps()
            .filter(|(index, step)| cell.stages[index + 1].acts && shapes(&step.action))
            .map(|(index, _)| index)
            .last();
        for void in &section.voids {
            let (Some(bounds), Some(thickness_nm)) = (void.bounds(), void.distance(&ambient))
            else {
                continue;
            };
            let highest = void.rings().flatten().copied().max_by(|a, b| a.z.total_cmp(&b.z));
            let highest = highest.unwrap_or(bounds.max);
            let [left, right] = section.drawn.walls;
            let x = highest.x.clamp(left + 0.1, right - 0.1);
            let at_wall = bounds.min.x <= left || bounds.max.x >= right;
            let width = bounds.max.x - bounds.min.x;
            let over = Look::at(section).body(Point::new(x, highest.z + 0.2));
            all.push(Roof {
                cell,
                space: space_of(section, void),
                thickness_nm,
                above_nm: surface_height(section, x) - highest.z,
                width_nm: if at_wall { 2.0 * width } else { width },
                material: over.map(|body| body.material),
                surface_step,
            });
        }
    }
    all
}

/// The empty region over the surface.
fn ambient(section: &Section) -> Region {
    let bounds = section.bodies.iter().filter_map(|body| body.region.bounds());
    let (low, high) =
        bounds.fold((f64::MAX, f64::MIN), |(low, high), b| (low.min(b.min.z), high.max(b.max.z)));
    let window = Region::rectangle(section.drawn.walls, [low, high + 1.0]);
    let filled = section.bodies.iter().map(|body| &body.region).chain(&section.voids);
    window.difference(&Region::union_all(filled))
}

fn shapes(action: &Action) -> bool {
    !matches!(
        action,
        Action::Anneal { .. } | Action::Cure { .. } | Action::Clean { .. } | Action::Via { .. }
    )
}
