//! Metals that drift: what they touch, where they are bare; and which materials are masks.

use std::collections::BTreeSet;

use super::context::{Context, Moment};
use super::shape::{Contact, Look};
use crate::flow::Action;
use crate::geom::Point;
use crate::library::MaterialId;
use crate::sim::{Body, CellTrace, Event, Exposure, Origin, Section};

/// A metal that drifts beside something that does not hold it.
pub struct BareContact<'a> {
    /// The cell.
    pub cell: &'a CellTrace,
    /// The step that brought them together; `None`: so found.
    pub step: Option<usize>,
    /// The metal.
    pub metal: MaterialId,
    /// What it drifts into.
    pub other: MaterialId,
    /// The conductor between them that is no barrier, if any.
    pub through: Option<MaterialId>,
    /// Length of the contact, in nm.
    pub length_nm: f64,
    /// Middle of a piece of it.
    pub place: Point,
}

/// Whether a body is a drifting metal of the lines. A plane below stands for a level with its
/// own barrier.
pub fn drifts(context: &Context<'_>, body: &Body) -> bool {
    let below = matches!(body.origin, Origin::Below(_) | Origin::Bulk);
    context.material(body.material).needs_barrier && !below
}

/// Contacts of drifting metals with dielectrics and semiconductors that are no barrier, at the
/// first stage that has them.
pub fn bare_contacts<'c, 'a>(context: &'c Context<'a>) -> &'c [BareContact<'a>] {
    context.shared.bare_contacts.get_or_init(|| find_bare_contacts(context))
}

fn find_bare_contacts<'a>(context: &Context<'a>) -> Vec<BareContact<'a>> {
    let mut all: Vec<BareContact<'a>> = Vec::new();
    let present = |cell: &CellTrace| {
        cell.stages.iter().any(|s| s.section.bodies.iter().any(|b| drifts(context, b)))
    };
    for cell in context.cells.iter().filter(|cell| present(cell)) {
        let mut known = BTreeSet::new();
        for stage in &cell.stages {
            let adds = stage.step.is_none_or(|step| {
                matches!(
                    context.variant.steps[step].action,
                    Action::Deposit { .. } | Action::Fill { .. } | Action::Convert { .. }
                )
            });
            if !adds {
                continue;
            }
            for contact in contacts_of(context, &stage.section) {
                if known.insert((contact.metal, contact.other, contact.through)) {
                    all.push(BareContact { cell, step: stage.step, ..contact.in_cell(cell) });
                }
            }
        }
    }
    all
}

struct Touch {
    metal: MaterialId,
    other: MaterialId,
    through: Option<MaterialId>,
    length_nm: f64,
    place: Point,
}

impl Touch {
    fn in_cell(self, cell: &CellTrace) -> BareContact<'_> {
        let Self { metal, other, through, length_nm, place } = self;
        BareContact { cell, step: None, metal, other, through, length_nm, place }
    }
}

fn contacts_of(context: &Context<'_>, section: &Section) -> Vec<Touch> {
    let look = Look::at(section);
    let mut touches: Vec<Touch> = Vec::new();
    for metal in section.bodies.iter().filter(|body| drifts(context, body)) {
        let mut open = vec![(metal, None)];
        let mut seen: Vec<Origin> = vec![metal.origin];
        while let Some((body, through)) = open.pop() {
            for contact in look.contacts(&body.region) {
                let Some(other) = contact.body else { continue };
                let material = context.material(other.material);
                if material.copper_barrier.counts() || material.needs_barrier {
                    continue;
                }
                if material.kind == crate::library::Kind::Conductor {
                    if !seen.contains(&other.origin) && !matches!(other.origin, Origin::Below(_)) {
                        seen.push(other.origin);
                        open.push((other, Some(other.material)));
                    }
                } else {
                    add(&mut touches, metal.material, other.material, through, &contact);
                }
            }
        }
    }
    touches
}

fn add(
    touches: &mut Vec<Touch>,
    metal: MaterialId,
    other: MaterialId,
    through: Option<MaterialId>,
    contact: &Contact<'_>,
) {
    let same = |t: &&mut Touch| t.metal == metal && t.other == other && t.through == through;
    match touches.iter_mut().find(same) {
        Some(touch) => touch.length_nm += contact.length_nm,
        None => touches.push(Touch {
            metal,
            other,
            through,
            length_nm: contact.length_nm,
            place: contact.place,
        }),
    }
}

/// Drifting metals that nothing covers in the finished section, and where.
pub fn bare_at_end(context: &Context<'_>, cell: &CellTrace) -> Vec<(MaterialId, Point)> {
    let section = &cell.stages[cell.stages.len() - 1].section;
    let look = Look::at(section);
    let mut bare: Vec<(MaterialId, Point)> = Vec::new();
    for metal in section.bodies.iter().filter(|body| drifts(context, body)) {
        let open = look.contacts(&metal.region).into_iter().find(|contact| {
            let outside = contact.place + contact.outward * 0.1;
            contact.body.is_none() && !look.in_void(outside)
        });
        if let Some(contact) = open {
            bare.push((metal.material, contact.place));
        }
    }
    bare
}

/// Materials that the flow uses as block masks.
pub fn masks(context: &Context<'_>) -> Vec<MaterialId> {
    let masks = context.steps().filter_map(|(_, step)| match step.action {
        Action::Mask { material, .. } => Some(material),
        _ => None,
    });
    masks.collect()
}

/// What a step finds exposed, with the metal of vias that nothing covers yet: a via is judged
/// beside the section, not in it.
pub fn exposed_with_vias(context: &Context<'_>, moment: &Moment<'_>) -> Vec<Exposure> {
    let mut exposed = moment.exposed().to_vec();
    let earlier = context.steps().take(moment.index).collect::<Vec<_>>();
    for (index, step) in earlier.into_iter().rev() {
        let stage = &moment.cell.stages[index + 1];
        if !stage.acts {
            continue;
        }
        if super::context::added(step).is_some() {
            break;
        }
        let Action::Via { material, .. } = step.action else { continue };
        for event in &stage.events {
            let Event::Via { slot, .. } = event else { continue };
            if let Some(bounds) = slot.bounds() {
                let place = Point::new((bounds.min.x + bounds.max.x) / 2.0, bounds.max.z);
                let length_nm = bounds.max.x - bounds.min.x;
                exposed.push(Exposure { material, length_nm, place });
            }
        }
    }
    exposed
}
