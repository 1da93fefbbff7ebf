//! Where the field lives: the insulating triangles, and what bounds them.
//!
//! A *contact* is a connected stretch of conductor surface that bounds one connected part of
//! the insulator. Fluxes run between contacts; the net charge of a conductor is the sum over
//! its contacts. Stretches that meet only at a point, where a conductor pinches, are two
//! contacts: each may carry its own flux.

use std::collections::BTreeMap;

use super::section::Section;
use super::triangulation::{NONE, Triangulation};
use super::{FieldError, Role};
use crate::geom::Point;

/// What a side of a triangle is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    /// Inside one zone: may be flipped.
    Free,
    /// Between two zones: may be split, not flipped.
    Outline,
    /// A mirror.
    Mirror,
    /// A far edge, by its conductor.
    Far(u32),
    /// A conductor's surface, by its contact.
    Contact(u32),
}

/// A mesh of the insulator. Side k of a triangle is opposite its vertex k.
#[derive(Debug, Clone)]
pub(super) struct Mesh {
    /// Vertices in nm from the lower left corner of the section.
    pub points: Vec<Point>,
    /// Vertices of each triangle, counter-clockwise.
    pub triangles: Vec<[u32; 3]>,
    /// The triangle across each side, or [`NONE`].
    pub neighbours: Vec<[u32; 3]>,
    /// What each side is.
    pub sides: Vec<[Side; 3]>,
    /// Zone of each triangle.
    pub zone: Vec<u32>,
    /// Connected part of the insulator that each triangle belongs to.
    pub part: Vec<u32>,
}

impl Mesh {
    /// Corners of a triangle.
    pub fn corners(&self, t: usize) -> [Point; 3] {
        self.triangles[t].map(|v| self.points[v as usize])
    }
}

/// A contact.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Contact {
    /// Its conductor.
    pub conductor: usize,
    /// The part of the insulator that it bounds.
    pub part: u32,
}

/// The insulator with its contacts.
pub(super) struct Domain {
    /// The coarsest mesh.
    pub mesh: Mesh,
    /// Contacts.
    pub contacts: Vec<Contact>,
    /// How many connected parts the insulator has.
    pub parts: usize,
    /// Conductors: electrodes first, floating ones, far edges last.
    pub conductors: usize,
    /// Re-entrant conductor corners, where the field has no limit, and at each the shorter of
    /// the conductor's edges, in nm.
    pub corners: Vec<(u32, f64)>,
}

/// A union of disjoint sets by their least members.
struct Sets(Vec<usize>);

impl Sets {
    fn new(n: usize) -> Self {
        Self((0..n).collect())
    }

    fn find(&mut self, mut a: usize) -> usize {
        while self.0[a] != a {
            self.0[a] = self.0[self.0[a]];
            a = self.0[a];
        }
        a
    }

    fn join(&mut self, a: usize, b: usize) {
        let (a, b) = (self.find(a), self.find(b));
        self.0[a.max(b)] = a.min(b);
    }
}

impl Domain {
    /// Takes the insulator out of a section; `roles` holds one role a zone.
    pub fn new(
        section: &Section,
        all: &Triangulation,
        roles: &[Role],
        electrodes: usize,
    ) -> Result<Self, FieldError> {
        let (conductor, named) = conductors(all, roles, electrodes, section.origin)?;
        let part = parts(all, &conductor);
        let parts = part.iter().filter(|p| **p != NONE).max().map_or(0, |p| *p as usize + 1);
        let far = [0, 1].map(|side| {
            section.far[side].then(|| (named + usize::from(side == 1 && section.far[0])) as u32)
        });
        let contact_of = surfaces(all, &conductor);

        let mut domain = Self {
            mesh: Mesh {
                points: all.points.clone(),
                triangles: Vec::new(),
                neighbours: Vec::new(),
                sides: Vec::new(),
                zone: Vec::new(),
                part: Vec::new(),
            },
            contacts: Vec::new(),
            parts,
            conductors: named + far.iter().flatten().count(),
            corners: reentrant_corners(all, &conductor),
        };
        let mut renumbered = vec![NONE; all.triangles.len()];
        for t in (0..all.triangles.len()).filter(|t| part[*t] != NONE) {
            renumbered[t] = domain.mesh.triangles.len() as u32;
            domain.mesh.triangles.push(all.triangles[t]);
            domain.mesh.zone.push(all.zone[t] as u32);
            domain.mesh.part.push(part[t]);
        }
        let mut known: BTreeMap<(u32, usize), u32> = BTreeMap::new();
        for t in (0..all.triangles.len()).filter(|t| part[*t] != NONE) {
            let mut sides = [Side::Free; 3];
            let mut neighbours = [NONE; 3];
            for k in 0..3 {
                let other = all.neighbours[t][k];
                sides[k] = if other == NONE {
                    match far[usize::from(is_top(all, t, k))] {
                        Some(conductor) if is_level(all, t, k) => Side::Far(conductor),
                        _ => Side::Mirror,
                    }
                } else if let Some(conductor) = conductor[other as usize] {
                    let root = contact_of[&edge(all, t, k)];
                    let contacts = &mut domain.contacts;
                    Side::Contact(*known.entry((part[t], root)).or_insert_with(|| {
                        contacts.push(Contact { conductor, part: part[t] });
                        contacts.len() as u32 - 1
                    }))
                } else {
                    neighbours[k] = renumbered[other as usize];
                    if all.outline[t][k] { Side::Outline } else { Side::Free }
                };
            }
            domain.mesh.sides.push(sides);
            domain.mesh.neighbours.push(neighbours);
        }
        Ok(domain)
    }
}

/// The two ends of side `k` of triangle `t`, in order.
fn edge(all: &Triangulation, t: usize, k: usize) -> [u32; 2] {
    let v = all.triangles[t];
    let (a, b) = (v[(k + 1) % 3], v[(k + 2) % 3]);
    [a.min(b), a.max(b)]
}

fn is_level(all: &Triangulation, t: usize, k: usize) -> bool {
    let [a, b] = edge(all, t, k).map(|v| all.points[v as usize]);
    a.z == b.z
}

/// Whether a side of the frame lies higher than its triangle.
fn is_top(all: &Triangulation, t: usize, k: usize) -> bool {
    let corners = all.corners(t);
    corners[(k + 1) % 3].z > corners[k].z
}

/// The conductor of each triangle, touching ones joined, and how many there are.
fn conductors(
    all: &Triangulation,
    roles: &[Role],
    electrodes: usize,
    origin: Point,
) -> Result<(Vec<Option<usize>>, usize), FieldError> {
    let mut floating: Vec<usize> = roles
        .iter()
        .filter_map(|role| if let Role::Floating(f) = role { Some(*f) } else { None })
        .collect();
    floating.sort_unstable();
    floating.dedup();
    let name = |zone: usize| match roles[zone] {
        Role::Dielectric(_) => None,
        Role::Electrode(e) => Some(e),
        Role::Floating(f) => floating.binary_search(&f).ok().map(|at| electrodes + at),
    };
    let mut sets = Sets::new(electrodes + floating.len());
    let mut present = vec![false; electrodes + floating.len()];
    let mut at_vertex = vec![None; all.points.len()];
    for (t, vertices) in all.triangles.iter().enumerate() {
        let Some(conductor) = name(all.zone[t]) else { continue };
        present[conductor] = true;
        for v in vertices {
            let other = *at_vertex[*v as usize].get_or_insert(conductor);
            let (a, b) = (sets.find(other), sets.find(conductor));
            if a != b && a.max(b) < electrodes {
                let p = all.points[*v as usize] + origin;
                let (first, second) = (a.min(b), a.max(b));
                return Err(FieldError::ElectrodesTouch { first, second, at_nm: [p.x, p.z] });
            }
            sets.join(a, b);
        }
    }
    if let Some(absent) = present[..electrodes].iter().position(|present| !present) {
        return Err(FieldError::ElectrodeAbsent(absent));
    }
    // Electrodes keep their indices; the floating conductors that are left close ranks.
    let mut number = vec![0; present.len()];
    let mut count = electrodes;
    for conductor in 0..present.len() {
        let root = sets.find(conductor);
        number[conductor] = if root != conductor {
            number[root]
        } else if conductor < electrodes {
            conductor
        } else if present[conductor] {
            count += 1;
            count - 1
        } else {
            continue;
        };
    }
    let of = all.zone.iter().map(|zone| name(*zone).map(|c| number[c])).collect();
    Ok((of, count))
}

/// Connected parts of the insulator, joined across sides.
fn parts(all: &Triangulation, conductor: &[Option<usize>]) -> Vec<u32> {
    let mut part = vec![NONE; all.triangles.len()];
    let mut count = 0;
    for start in 0..all.triangles.len() {
        if part[start] != NONE || conductor[start].is_some() {
            continue;
        }
        part[start] = count;
        let mut stack = vec![start];
        while let Some(t) = stack.pop() {
            for other in all.neighbours[t].into_iter().filter(|o| *o != NONE) {
                let other = other as usize;
                if part[other] == NONE && conductor[other].is_none() {
                    part[other] = count;
                    stack.push(other);
                }
            }
        }
        count += 1;
    }
    part
}

/// Conductor surfaces as sets of edges: two surface edges that share a vertex belong together
/// when nothing but conductor lies between them there, on one side.
fn surfaces(all: &Triangulation, conductor: &[Option<usize>]) -> BTreeMap<[u32; 2], usize> {
    // Every edge of a conducting triangle has two ends; triangles join ends at their vertices,
    // surface edges join their own two.
    let mut ends: BTreeMap<[u32; 2], usize> = BTreeMap::new();
    let conducting: Vec<usize> =
        (0..all.triangles.len()).filter(|t| conductor[*t].is_some()).collect();
    for t in &conducting {
        for k in 0..3 {
            let next = ends.len();
            ends.entry(edge(all, *t, k)).or_insert(next);
        }
    }
    let mut sets = Sets::new(2 * ends.len());
    let mut surface = Vec::new();
    for t in &conducting {
        let end = |k: usize, vertex: u32| {
            let edge = edge(all, *t, k);
            2 * ends[&edge] + usize::from(edge[1] == vertex)
        };
        for k in 0..3 {
            let vertex = all.triangles[*t][k];
            sets.join(end((k + 1) % 3, vertex), end((k + 2) % 3, vertex));
            let other = all.neighbours[*t][k];
            if other != NONE && conductor[other as usize].is_none() {
                let edge = edge(all, *t, k);
                sets.join(2 * ends[&edge], 2 * ends[&edge] + 1);
                surface.push(edge);
            }
        }
    }
    surface.into_iter().map(|edge| (edge, sets.find(2 * ends[&edge]))).collect()
}

/// Vertices of conductors around which the insulator takes more than 200 degrees.
fn reentrant_corners(all: &Triangulation, conductor: &[Option<usize>]) -> Vec<(u32, f64)> {
    let mut angle = vec![0.0; all.points.len()];
    let mut conducting = vec![false; all.points.len()];
    let mut shortest = vec![f64::INFINITY; all.points.len()];
    let mut mirrored = vec![false; all.points.len()];
    for (t, vertices) in all.triangles.iter().enumerate() {
        let corners = all.corners(t);
        for k in 0..3 {
            let v = vertices[k] as usize;
            if conductor[t].is_some() {
                conducting[v] = true;
            } else {
                let (a, b) = (corners[(k + 1) % 3] - corners[k], corners[(k + 2) % 3] - corners[k]);
                angle[v] += a.cross(b).atan2(a.dot(b));
            }
            let other = all.neighbours[t][k];
            if other == NONE {
                edge(all, t, k).iter().for_each(|end| mirrored[*end as usize] = true);
            } else if conductor[t].is_some() && conductor[other as usize].is_none() {
                for end in edge(all, t, k) {
                    let length = corners[(k + 1) % 3].distance(corners[(k + 2) % 3]);
                    shortest[end as usize] = shortest[end as usize].min(length);
                }
            }
        }
    }
    let whole = |v: usize| if mirrored[v] { 2.0 * angle[v] } else { angle[v] };
    (0..all.points.len())
        .filter(|v| conducting[*v] && whole(*v) > 200_f64.to_radians())
        .map(|v| (v as u32, shortest[v]))
        .collect()
}
