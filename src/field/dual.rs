//! Lower bound: the energy ∫ |σ|²/ε of fluxes σ without sources, none through a mirror or a
//! far edge.
//!
//! σ = (∂ψ/∂z, −∂ψ/∂x) with a stream function ψ: the stiffness with 1/ε, ψ = 0 on mirrors,
//! natural on conductors. A single-valued ψ lets no net flux into any contact, so each
//! contact but one of every connected part gets a field that carries one unit from that one
//! along a path of triangles: in each triangle, ± the hat function of the vertex that the
//! sides of entry and exit share.

use super::assembly::System;
use super::domain::{Domain, Mesh, Side};
use super::elements::{Local, Nodes, hat, side_nodes};
use super::triangulation::NONE;

/// The system of the fluxes on a mesh.
pub(super) fn system(domain: &Domain, mesh: &Mesh, nodes: &Nodes) -> System {
    let mut held = vec![false; nodes.count];
    let mut pinned = vec![false; domain.parts];
    for (t, sides) in mesh.sides.iter().enumerate() {
        for (k, side) in sides.iter().enumerate() {
            if matches!(side, Side::Mirror | Side::Far(_)) {
                side_nodes(k).iter().for_each(|node| held[nodes.of[t][*node] as usize] = true);
                pinned[mesh.part[t] as usize] = true;
            }
        }
    }
    // ψ is known up to a constant in a part without mirrors.
    for (t, part) in mesh.part.iter().enumerate() {
        if !std::mem::replace(&mut pinned[*part as usize], true) {
            held[nodes.of[t][0] as usize] = true;
        }
    }
    let loads = paths(domain, mesh);
    System::new(nodes, |node| held[node as usize], loads, carriers(domain).len())
}

/// The contacts that get a flux of their own, each with the one that it comes from.
pub(super) fn carriers(domain: &Domain) -> Vec<(usize, usize)> {
    let sources = sources(domain);
    let of = |(k, contact): (usize, &super::domain::Contact)| {
        let source = sources[contact.part as usize]?;
        (k != source).then_some((k, source))
    };
    domain.contacts.iter().enumerate().filter_map(of).collect()
}

/// The contact of each part from which all others are fed: its first.
fn sources(domain: &Domain) -> Vec<Option<usize>> {
    (0..domain.parts)
        .map(|part| domain.contacts.iter().position(|contact| contact.part as usize == part))
        .collect()
}

/// The unit fluxes, sorted by triangle: triangle, column, stream function in it.
fn paths(domain: &Domain, mesh: &Mesh) -> Vec<(u32, u32, Local)> {
    let sources = sources(domain);
    // Breadth first from the sources: the side through which the flux enters each triangle.
    let mut entry = vec![usize::MAX; mesh.triangles.len()];
    let mut order = Vec::with_capacity(mesh.triangles.len());
    for (t, sides) in mesh.sides.iter().enumerate() {
        let source = sources[mesh.part[t] as usize];
        let feeds = |side: &Side| matches!(side, Side::Contact(c) if Some(*c as usize) == source);
        if let Some(side) = sides.iter().position(feeds) {
            entry[t] = side;
            order.push(t);
        }
    }
    let mut next = 0;
    while let Some(&t) = order.get(next) {
        next += 1;
        for other in mesh.neighbours[t].into_iter().filter(|o| *o != NONE) {
            let other = other as usize;
            if entry[other] == usize::MAX {
                let facing = mesh.neighbours[other].iter().position(|n| *n == t as u32);
                entry[other] = facing.expect("neighbours know each other");
                order.push(other);
            }
        }
    }
    let mut end = vec![None; domain.contacts.len()];
    for t in order {
        for (side, kind) in mesh.sides[t].iter().enumerate() {
            if let Side::Contact(contact) = kind {
                end[*contact as usize].get_or_insert((t, side));
            }
        }
    }
    let mut loads = Vec::new();
    for (column, (contact, _)) in carriers(domain).into_iter().enumerate() {
        let mut at = end[contact];
        while let Some((t, exit)) = at {
            let shared = 3 - entry[t] - exit;
            // Out of a side from a to b flows ψ(b) − ψ(a).
            let sign = if shared == (exit + 2) % 3 { 1.0 } else { -1.0 };
            loads.push((t as u32, column as u32, hat(shared).map(|v| sign * v)));
            let from = mesh.neighbours[t][entry[t]];
            at = (from != NONE).then(|| {
                let from = from as usize;
                let facing = mesh.neighbours[from].iter().position(|n| *n == t as u32);
                (from, facing.expect("neighbours know each other"))
            });
        }
    }
    loads.sort_by_key(|(t, column, _)| (*t, *column));
    loads
}
