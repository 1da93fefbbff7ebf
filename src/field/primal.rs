//! Upper bound: the Dirichlet energy ∫ ε |∇u|² of potentials that are continuous and constant
//! on every conductor and on a far edge. Mirrors are natural.
//!
//! One load a conductor: 1 on its nodes, 0 on all others.

use super::assembly::System;
use super::domain::{Domain, Mesh, Side};
use super::elements::{Local, Nodes, side_nodes};

/// The system of the potentials on a mesh.
pub(super) fn system(domain: &Domain, mesh: &Mesh, nodes: &Nodes) -> System {
    let free = usize::MAX;
    let mut conductor = vec![free; nodes.count];
    for (t, sides) in mesh.sides.iter().enumerate() {
        for (k, side) in sides.iter().enumerate() {
            let holds = match side {
                Side::Contact(contact) => domain.contacts[*contact as usize].conductor,
                Side::Far(conductor) => *conductor as usize,
                _ => continue,
            };
            for node in side_nodes(k) {
                conductor[nodes.of[t][node] as usize] = holds;
            }
        }
    }
    let mut loads: Vec<(u32, u32, Local)> = Vec::new();
    for (t, of) in nodes.of.iter().enumerate() {
        let first = loads.len();
        for (k, node) in of.iter().enumerate() {
            let column = conductor[*node as usize];
            if column == free {
                continue;
            }
            let known = loads[first..].iter().position(|(_, c, _)| *c as usize == column);
            let at = known.map_or_else(
                || {
                    loads.push((t as u32, column as u32, [0.0; 6]));
                    loads.len() - 1
                },
                |at| first + at,
            );
            loads[at].2[k] = 1.0;
        }
    }
    System::new(nodes, |node| conductor[node as usize] != free, loads, domain.conductors)
}
