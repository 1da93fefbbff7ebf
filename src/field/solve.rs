//! The loop: mesh, solve above and below, stop or refine where the bounds differ most.

use super::assembly::{Condensed, System};
use super::bounds::Bounds;
use super::delaunay::{self, Wanted};
use super::domain::{Domain, Mesh};
use super::elements::{Element, Local, Nodes};
use super::section::{self, check_role};
use super::{Capacitance, FieldError, Problem, Role, dual, mixture, outline, primal, refinement};
use crate::num::tolerance::{FIELD_FLOOR, FIELD_OUTLINE, FIELD_TRIANGLES};

/// Share of the gap that the triangles marked in one round hold.
const MARKED: f64 = 0.7;

/// Rounds of refinement at most.
const ROUNDS: usize = 24;

/// Size of the first triangles at a re-entrant conductor corner over the shortest edge there,
/// at an accuracy of half a per cent.
const CORNER: f64 = 0.2;

/// Maxwell's matrix of a section, with proven bounds.
///
/// `accuracy` is the relative half-width wanted of the diagonal entries and of the couplings
/// that are at least half of their electrode's largest. The bounds are proofs for the outlines on the noding grid,
/// thinned within [`FIELD_OUTLINE`].
///
/// # Errors
/// See [`FieldError`]. What did not reach the accuracy comes back with `converged: false`.
pub fn solve(problem: &Problem, accuracy: f64) -> Result<Capacitance, FieldError> {
    let roles: Vec<Role> = problem.bodies.iter().map(|body| body.role).collect();
    let mut solved = solve_variants(problem, &[roles], accuracy)?;
    Ok(solved.remove(0))
}

/// The matrices of the same shapes with other permittivities, on one mesh: one list of roles
/// a variant, one role a body, conductors the same in all.
///
/// # Errors
/// As [`solve`]; also [`FieldError::VariantDiffers`].
pub fn solve_variants(
    problem: &Problem,
    variants: &[Vec<Role>],
    accuracy: f64,
) -> Result<Vec<Capacitance>, FieldError> {
    let section = section::prepare(problem, accuracy)?;
    let roles =
        variants.iter().map(|roles| zone_roles(problem, roles)).collect::<Result<Vec<_>, _>>()?;
    let Some(first) = roles.first() else { return Ok(Vec::new()) };
    let fine = (accuracy / 0.005).min(1.0);
    let thinning = FIELD_OUTLINE * fine * section.scale;
    let all = outline::triangulate(&section, &roles, thinning)?;
    let domain = Domain::new(&section, &all, first, problem.electrodes)?;
    let mut mesh = domain.mesh.clone();
    let mut wanted = Wanted {
        size: vec![f64::INFINITY; mesh.points.len()],
        tip: vec![f64::INFINITY; mesh.points.len()],
        floor: FIELD_FLOOR * section.scale,
        limit: FIELD_TRIANGLES,
    };
    let mut corners = vec![false; mesh.points.len()];
    for (vertex, edge) in &domain.corners {
        corners[*vertex as usize] = true;
        wanted.tip[*vertex as usize] = CORNER * fine.powf(0.75) * edge;
    }
    if !delaunay::refine(&mut mesh, &mut wanted) {
        return Err(FieldError::MeshTooLarge(FIELD_TRIANGLES));
    }
    let mut level = Level::new(&domain, &mesh);
    let mixtures = mixture::bounds(&domain, &mesh, &level, &roles, problem.electrodes)?;
    let mut round = 0;
    loop {
        let mut shares = vec![0.0; mesh.triangles.len()];
        let mut found = Vec::with_capacity(roles.len());
        for roles in &roles {
            let permittivity = level.permittivity(&mesh, roles);
            let (primal, dual, bounds) = level.solve(&domain, &permittivity, problem.electrodes)?;
            let excess = bounds.excess(accuracy);
            if excess > 1.0 {
                refinement::add_shares(
                    &level.nodes,
                    &level.elements,
                    &permittivity,
                    [(&level.primal, &primal), (&level.dual, &dual)],
                    &bounds,
                    &mut shares,
                );
            }
            found.push((bounds, excess));
        }
        let converged = found.iter().all(|(_, excess)| *excess <= 1.0);
        round += 1;
        let mut refined = !converged && round < ROUNDS;
        if refined {
            let before = mesh.clone();
            refinement::mark(&mesh, &corners, &shares, MARKED, &mut wanted);
            if !delaunay::refine(&mut mesh, &mut wanted) {
                mesh = before;
                refined = false;
            }
        }
        if !refined {
            for ((bounds, _), mixture) in found.iter().zip(&mixtures) {
                mixture.check(bounds)?;
            }
            return Ok(found
                .iter()
                .map(|(bounds, excess)| {
                    let [value, low, high] = bounds.matrices();
                    let triangles = mesh.triangles.len();
                    Capacitance { value, low, high, triangles, converged: *excess <= 1.0 }
                })
                .collect());
        }
        level = Level::new(&domain, &mesh);
    }
}

/// One role a zone: those of the bodies, and vacuum.
pub(super) fn zone_roles(problem: &Problem, roles: &[Role]) -> Result<Vec<Role>, FieldError> {
    let insulates = |role: &Role| matches!(role, Role::Dielectric(_));
    let alike = |(a, b): (&Role, &Role)| a == b || (insulates(a) && insulates(b));
    let own = problem.bodies.iter().map(|body| &body.role);
    if roles.len() != problem.bodies.len() || !own.zip(roles).all(alike) {
        return Err(FieldError::VariantDiffers);
    }
    roles.iter().try_for_each(|role| check_role(*role, problem.electrodes))?;
    Ok(roles.iter().copied().chain([Role::Dielectric(1.0)]).collect())
}

/// One mesh with its two systems.
pub(super) struct Level {
    pub nodes: Nodes,
    pub elements: Vec<Element>,
    pub stiffness: Vec<[Local; 6]>,
    pub primal: System,
    pub dual: System,
}

impl Level {
    /// Lays out both systems on a mesh.
    pub fn new(domain: &Domain, mesh: &Mesh) -> Self {
        let nodes = Nodes::new(mesh);
        let elements: Vec<_> = (0..mesh.triangles.len()).map(|t| Element::new(mesh, t)).collect();
        let stiffness = elements.iter().map(Element::stiffness).collect();
        let primal = primal::system(domain, mesh, &nodes);
        let dual = dual::system(domain, mesh, &nodes);
        Self { nodes, elements, stiffness, primal, dual }
    }

    /// Relative permittivity of each triangle.
    pub fn permittivity(&self, mesh: &Mesh, roles: &[Role]) -> Vec<f64> {
        let of = |zone: &u32| match roles[*zone as usize] {
            Role::Dielectric(k) => k,
            Role::Electrode(_) | Role::Floating(_) => f64::NAN,
        };
        mesh.zone.iter().map(of).collect()
    }

    /// Both energies and the bounds for one permittivity a triangle.
    pub fn solve(
        &self,
        domain: &Domain,
        permittivity: &[f64],
        electrodes: usize,
    ) -> Result<(Condensed, Condensed, Bounds), FieldError> {
        let inverse: Vec<f64> = permittivity.iter().map(|k| 1.0 / k).collect();
        let primal = self.primal.condense(&self.nodes, &self.stiffness, permittivity)?;
        let dual = self.dual.condense(&self.nodes, &self.stiffness, &inverse)?;
        let bounds = Bounds::new(domain, electrodes, &primal, &dual)?;
        Ok((primal, dual, bounds))
    }
}
