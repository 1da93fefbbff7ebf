//! From an array to a field problem, and the permittivities of its variants.

use super::array::{Array, Owner};
use super::conductors::{Conductors, Electrode, Held};
use crate::field::{Body, Edge, Problem, Role};
use crate::flow::Flow;
use crate::geom::Region;
use crate::library::{Library, MaterialId};
use crate::measure::reading::Missing;

/// Thickness of the next level's conductor in the section, in nm; nothing depends on it.
const NEXT_LEVEL_NM: f64 = 1.0;

/// What differs between the solutions of one section.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Filling {
    /// As the flow left it.
    Actual,
    /// Every dielectric is vacuum.
    Vacuum,
    /// Voids are filled by the material of their roof.
    Voids,
    /// Everything between the lines, from line bottom to line top, is this material.
    Between(MaterialId),
}

/// What an insulating body of the problem is.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Stuff {
    Material(MaterialId),
    /// With the material of its roof.
    Void(Option<MaterialId>),
    /// With the material below the next level.
    Ambient(Option<MaterialId>),
}

/// The conducting plane above, as plain numbers.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Above {
    /// Above the highest solid, in nm.
    pub distance_nm: f64,
    /// Between.
    pub material: MaterialId,
}

impl Above {
    /// The next level of a flow, where it has one.
    pub fn of(flow: &Flow) -> Option<Self> {
        let next = flow.next_level.as_ref()?;
        Some(Self { distance_nm: next.distance.nominal.nm(), material: next.material })
    }
}

/// A field problem whose insulators know what they are.
#[derive(Debug, Clone)]
pub(super) struct Posed {
    pub problem: Problem,
    /// What each insulating body is, and whether it lies between the lines; conductors follow.
    stuff: Vec<(Stuff, bool)>,
}

impl Posed {
    /// Poses the problem of an array; insulators first, then conductors.
    pub fn new(
        array: &Array,
        conductors: &Conductors,
        above: Option<Above>,
        library: &Library,
    ) -> Self {
        let top = array.z[1] + above.map_or(0.0, |above| above.distance_nm + NEXT_LEVEL_NM);
        let sky = Region::rectangle(array.x, [array.z[1], top.max(array.z[1] + NEXT_LEVEL_NM)]);
        let ambient = array.ambient.union(&sky);
        let stack = array
            .pieces
            .iter()
            .filter(|piece| matches!(piece.owner, Owner::Line { .. } | Owner::Liner { .. }))
            .map(|piece| &piece.region);
        let between =
            Region::rectangle(array.x, [0.0, array.line_top]).difference(&Region::union_all(stack));
        let solids = array
            .pieces
            .iter()
            .filter(|piece| !library.material(piece.material).kind.conducts())
            .map(|piece| (Stuff::Material(piece.material), &piece.region));
        let voids = array.voids.iter().map(|(region, roof)| (Stuff::Void(*roof), region));
        let open = (Stuff::Ambient(above.map(|above| above.material)), &ambient);
        let mut stuff = Vec::new();
        let mut bodies = Vec::new();
        for (what, region) in solids.chain(voids).chain([open]) {
            let halves =
                [(region.intersection(&between), true), (region.difference(&between), false)];
            for (region, inside) in halves {
                if !region.is_empty() {
                    bodies.push(Body { region, role: Role::Dielectric(1.0) });
                    stuff.push((what, inside));
                }
            }
        }
        bodies.extend(conductors.pieces.iter().map(|(region, held)| Body {
            region: region.clone(),
            role: match held {
                Held::Electrode(index) => Role::Electrode(*index),
                Held::Floating(index) => Role::Floating(*index),
            },
        }));
        let ground = conductors.electrodes.iter().position(|e| *e == Electrode::Ground);
        if let (Some(above), Some(ground)) = (above, ground) {
            let plane = array.z[1] + above.distance_nm;
            let region = Region::rectangle(array.x, [plane, plane + NEXT_LEVEL_NM]);
            bodies.push(Body { region, role: Role::Electrode(ground) });
        }
        let z = [array.z[0], if above.is_some() { top } else { array.z[1] + NEXT_LEVEL_NM }];
        let problem = Problem {
            x: array.x,
            z,
            top: Edge::Open,
            bottom: Edge::Open,
            bodies,
            electrodes: conductors.electrodes.len(),
        };
        Self { problem, stuff }
    }

    /// What each body is made of; `None` for what is empty, and for the next level.
    pub fn materials(&self, conductors: &Conductors) -> Vec<Option<MaterialId>> {
        let insulators = self.stuff.iter().map(|(what, _)| match what {
            Stuff::Material(material) => Some(*material),
            Stuff::Ambient(material) => *material,
            Stuff::Void(_) => None,
        });
        let metal = conductors.materials.iter().map(|material| Some(*material));
        let mut all: Vec<_> = insulators.chain(metal).collect();
        all.resize(self.problem.bodies.len(), None);
        all
    }

    /// The role of every body in one variant.
    pub fn roles(&self, filling: Filling, library: &Library) -> Result<Vec<Role>, Missing> {
        let permittivity = |material: MaterialId| {
            library.material(material).permittivity.map(|k| k.value).ok_or(Missing::NoNumber)
        };
        let mut roles: Vec<_> = self.problem.bodies.iter().map(|body| body.role).collect();
        for (role, (what, inside)) in roles.iter_mut().zip(&self.stuff) {
            let material = match (filling, what) {
                (Filling::Vacuum, _) => None,
                (Filling::Between(material), _) if *inside => Some(material),
                (Filling::Voids, Stuff::Void(roof)) => Some(roof.ok_or(Missing::NoReference)?),
                (_, Stuff::Material(material)) => Some(*material),
                (_, Stuff::Ambient(material)) => *material,
                (_, Stuff::Void(_)) => None,
            };
            *role = Role::Dielectric(material.map_or(Ok(1.0), permittivity)?);
        }
        Ok(roles)
    }
}
