//! Ways of gas through a section: out of a void, out of a sacrificial region.

use super::context::Context;
use super::shape::top;
use crate::flow::{Action, Film};
use crate::geom::{Point, Region};
use crate::library::{Kind, MaterialId, Passes};
use crate::sim::{Body, CellTrace, Event, Origin, Section};

/// Upright lines of sight over a region that are tried for a way out.
const COLUMNS: usize = 9;

/// What keeps a sacrificial material where it is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Obstacle {
    /// A hermetic film.
    Hermetic {
        /// Of what.
        material: MaterialId,
        /// How thick it lies over the region.
        thickness_nm: f64,
    },
    /// A film of a class that lets too little pass.
    Tight {
        /// Of what.
        material: MaterialId,
    },
    /// A film that lets pass, but is too thick.
    Thick {
        /// Of what.
        material: MaterialId,
        /// How thick films that let pass lie over the region, together.
        thickness_nm: f64,
        /// How thick they may be.
        up_to_nm: f64,
    },
    /// A film of which the library does not say what it lets pass.
    Unknown {
        /// Of what.
        material: MaterialId,
    },
    /// Only metal, bulk, or films that should have let it pass.
    NoWay,
}

/// A sacrificial region that a release left behind.
pub struct Kept<'a> {
    /// The release.
    pub release: usize,
    /// The material.
    pub material: MaterialId,
    /// Where it stayed.
    pub cell: &'a CellTrace,
    /// A place in it.
    pub place: Point,
    /// How much of it, in nm².
    pub area_nm2: f64,
    /// Why.
    pub obstacle: Obstacle,
}

/// Regions that releases left behind, with what is in their way.
pub fn kept<'c, 'a>(context: &'c Context<'a>) -> &'c [Kept<'a>] {
    context.shared.kept.get_or_init(|| find_kept(context))
}

fn find_kept<'a>(context: &Context<'a>) -> Vec<Kept<'a>> {
    let mut all = Vec::new();
    for moment in context.moments() {
        let Action::Release { material, .. } = moment.step.action else { continue };
        for event in &moment.after.events {
            let Event::Trapped { region, share } = event else { continue };
            let Some(bounds) = region.bounds() else { continue };
            let section = &moment.after.section;
            all.push(Kept {
                release: moment.index,
                material,
                cell: moment.cell,
                place: (bounds.min + bounds.max) * 0.5,
                area_nm2: region.area(),
                obstacle: obstacle(context, section, region, material, *share),
            });
        }
    }
    all
}

/// What is in the way of a region: of the films straight above it, column by column, the least
/// obstacle. With a `share` there is a way, and it is too long.
fn obstacle(
    context: &Context<'_>,
    section: &Section,
    region: &Region,
    own: MaterialId,
    share: Option<f64>,
) -> Obstacle {
    let Some(bounds) = region.bounds() else { return Obstacle::NoWay };
    let width = bounds.max.x - bounds.min.x;
    let columns = (0..COLUMNS).map(|k| bounds.min.x + width * (k as f64 + 0.5) / COLUMNS as f64);
    let over = columns.map(|x| over_column(context, section, region, own, x));
    let rank = |obstacle: &Obstacle| match obstacle {
        Obstacle::Thick { .. } => 0,
        Obstacle::Unknown { .. } => 1,
        Obstacle::Tight { .. } => 2,
        Obstacle::Hermetic { .. } => 3,
        Obstacle::NoWay => 4,
    };
    let fits = |obstacle: &Obstacle| match obstacle {
        Obstacle::Thick { .. } => share.is_some(),
        _ => share.is_none(),
    };
    over.filter(fits).min_by_key(rank).unwrap_or(Obstacle::NoWay)
}

fn over_column(
    context: &Context<'_>,
    section: &Section,
    region: &Region,
    own: MaterialId,
    x: f64,
) -> Obstacle {
    let Some(from) = region.column(x).last().map(|interval| interval[1]) else {
        return Obstacle::NoWay;
    };
    let mut worst = Obstacle::NoWay;
    let mut budget: Option<(f64, f64, MaterialId)> = None;
    for body in section.bodies.iter().filter(|body| body.material != own) {
        let thickness: f64 =
            body.region.column(x).iter().map(|[low, high]| (high - low.max(from)).max(0.0)).sum();
        if thickness <= 0.0 {
            continue;
        }
        let material = context.material(body.material);
        if material.kind.conducts() {
            return Obstacle::NoWay;
        }
        let id = body.material;
        match (material.passes, material.passes_up_to_nm) {
            (None, _) => worst = Obstacle::Unknown { material: id },
            (Some(Passes::Hermetic), None) => {
                if material.hermetic_thickness_nm().is_some_and(|least| thickness >= least) {
                    return Obstacle::Hermetic { material: id, thickness_nm: thickness };
                }
                worst = Obstacle::Tight { material: id };
            }
            (Some(Passes::Low), None) => worst = Obstacle::Tight { material: id },
            (Some(Passes::Permeable | Passes::Open), None) => {}
            (Some(_), Some(limit)) => {
                let (sum, up_to, _) = budget.unwrap_or((0.0, limit.value, id));
                budget = Some((sum + thickness, up_to.min(limit.value), id));
            }
        }
    }
    match (worst, budget) {
        (Obstacle::NoWay, Some((thickness_nm, up_to_nm, material))) if thickness_nm > up_to_nm => {
            Obstacle::Thick { material, thickness_nm, up_to_nm }
        }
        (worst, _) => worst,
    }
}

/// Whether a void has a way to the ambient only through materials that pass `permeable` or
/// `open`, or through tight films too thin to be tight; the material next to the void on it.
pub fn breathes(context: &Context<'_>, section: &Section, void: &Region) -> Option<MaterialId> {
    let passable: Vec<&Body> =
        section.bodies.iter().filter(|body| lets_pass(context, body)).collect();
    let surface =
        section.bodies.iter().filter_map(|body| top(&body.region)).fold(f64::MIN, f64::max);
    // The way ends at the surface: what lets pass there is named.
    let height = |body: &&&Body| top(&body.region).unwrap_or(f64::MIN);
    let blamed = passable.iter().max_by(|a, b| height(a).total_cmp(&height(b)))?;
    let [left, right] = section.drawn.walls;
    let floor = void.bounds()?.min.z.min(0.0);
    let window = Region::rectangle([left, right], [floor, surface + 1.0]);
    let tight = section.bodies.iter().filter(|body| !lets_pass(context, body));
    let tight: Vec<&Region> = tight.map(|body| &body.region).collect();
    let free = window.difference(&Region::union_all(tight));
    let inside = void.rings().flatten().copied().next()?;
    let reached = free.parts().find(|part| holds(part, void, inside))?;
    (top(&reached)? > surface + 0.5).then_some(blamed.material)
}

/// Whether a part of what is free holds the void.
fn holds(part: &Region, void: &Region, corner: Point) -> bool {
    part.rings().flatten().any(|p| *p == corner) || part.intersection(void).area() > 0.0
}

fn lets_pass(context: &Context<'_>, body: &Body) -> bool {
    let material = context.material(body.material);
    if material.kind.conducts() || body.origin == Origin::Bulk {
        return false;
    }
    match material.passes {
        Some(Passes::Permeable | Passes::Open) => true,
        Some(Passes::Hermetic) => {
            let least = material.hermetic_thickness_nm();
            drawn_thickness(context, body).zip(least).is_some_and(|(nm, least)| nm < least)
        }
        Some(Passes::Low) => false,
        None => material.kind == Kind::Resist || material.kind == Kind::Sacrificial,
    }
}

/// Thickness with which a body was drawn or grown, in nm, where it is a film.
fn drawn_thickness(context: &Context<'_>, body: &Body) -> Option<f64> {
    let wafer = &context.variant.wafer;
    let nm = |film: &Film| film.thickness.nominal.nm();
    match body.origin {
        Origin::Step(step) => match context.variant.steps[step].action {
            Action::Deposit { thickness, .. } => Some(thickness.nominal.nm()),
            _ => None,
        },
        Origin::Liner(_) => wafer.liner.as_ref().map(nm),
        Origin::Over(at) => wafer.over.get(at).map(nm),
        _ => None,
    }
}
