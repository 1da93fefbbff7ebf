//! Removal: the exposed surface retreats into the solids.
//!
//! Method: the section stays a partition of polygons. A step takes the flux on the facets of the
//! exposed surface, sweeps every facet and every corner into the solid ([`sweep`]), and takes
//! from each solid what its own sweeps cover; what lies open then is the new ambient. By
//! Huygens' construction the sweep of a point is a convex body whose support function is the
//! rate against the normal (Osher and Merriman, Asian J. Math. 1, 560 (1997), from memory), so
//! that the union of the sweeps is the solution that keeps or rounds each corner as it should.
//! A sweep ends at the border of its solid; the part of the step that was left on the far side is
//! kept as the `lag` of the facets uncovered there and is spent in the next step, so no depth is
//! lost at an interface.
//!
//! Where the flux varies smoothly its change since the last step is carried half a step on, so
//! that the motion is of second order in time.
//!
//! Cost: per step one visibility pass and a handful of booleans on the outline. It fails only
//! where the flux does.

mod beam;
mod flux;
mod locate;
mod surface;
mod sweep;
#[cfg(test)]
mod tests;

use surface::{Facet, Frame};
use sweep::{Flux, Rounding};

use super::{Character, Erosion, FrontError, Resolution, Scene};
use crate::geom::{Point, Region};
use crate::num::tolerance::{LAG_LEFT_NM, SIDE_STEP_NM};
use flux::Source;
use locate::Locator;

/// Removes what `depth_nm` takes, measured on an open flat of a solid with rate 1.
///
/// Nothing but the solids of the scene is touched, and none of them beyond its own outline. An
/// enclosed void is left alone until the removal opens it.
///
/// # Errors
/// [`FrontError`] when the flux on the surface cannot be had, or the scene has no open sky.
pub fn erode(
    scene: &Scene,
    character: &Character,
    depth_nm: f64,
    resolution: &Resolution,
) -> Result<Erosion, FrontError> {
    let mut etch = Etch::start(scene, character, resolution)?;
    etch.advance(depth_nm, &[])?;
    Ok(Erosion { removed: etch.removed(scene) })
}

/// The depth, on an open flat of a solid with rate 1, at which the removal first reaches one of
/// the solids numbered in `stop`; `None` when `limit_nm` does not get there, zero when one
/// of them is exposed from the start.
///
/// # Errors
/// As [`erode`].
pub fn depth_to_reach(
    scene: &Scene,
    character: &Character,
    stop: &[usize],
    limit_nm: f64,
    resolution: &Resolution,
) -> Result<Option<f64>, FrontError> {
    Etch::start(scene, character, resolution)?.advance(limit_nm, stop)
}

/// The part of one solid that a reaction front enters from its exposed surface, everything
/// else standing still: the same motion as [`erode`] with the rate of solid `target` set to 1
/// and all others to 0.
///
/// # Errors
/// As [`erode`].
pub fn penetrate(
    scene: &Scene,
    character: &Character,
    target: usize,
    depth_nm: f64,
    resolution: &Resolution,
) -> Result<Region, FrontError> {
    let mut scene = scene.clone();
    for (i, solid) in scene.solids.iter_mut().enumerate() {
        solid.rate = if i == target { 1.0 } else { 0.0 };
    }
    let mut removed = erode(&scene, character, depth_nm, resolution)?.removed;
    Ok(removed.swap_remove(target))
}

/// Steps without flux change that spend the lag left at the end; more layers than that are
/// not crossed within one step.
const LAG_ROUNDS: usize = 64;

/// Solids by rate: those of one rate go as one.
struct Groups {
    /// Group of each solid.
    of: Vec<usize>,
    /// Rate of each group.
    rates: Vec<f64>,
}

impl Groups {
    fn by_rate(rates: impl Iterator<Item = f64>) -> Self {
        let mut groups = Self { of: Vec::new(), rates: Vec::new() };
        for rate in rates {
            let known = groups.rates.iter().position(|&r| r == rate);
            groups.of.push(known.unwrap_or(groups.rates.len()));
            if known.is_none() {
                groups.rates.push(rate);
            }
        }
        groups
    }

    /// Rate of a solid, zero below the scene.
    fn rate_of(&self, solid: Option<usize>) -> f64 {
        solid.map_or(0.0, |s| self.rates[self.of[s]])
    }
}

/// A removal under way.
struct Etch<'a> {
    character: &'a Character,
    source: Source,
    resolution: &'a Resolution,
    frame: Frame,
    groups: Groups,
    /// What is left of each solid.
    solids: Vec<Region>,
    ambient: Region,
    voids: Vec<Region>,
    facets: Vec<Facet>,
    /// Depth done, in nm.
    depth: f64,
    /// What arrived in the last step.
    before: Option<Arrived>,
}

/// What arrived from all directions in a step, to be carried on into the next (Adams and Bashforth).
struct Arrived {
    /// Depth of the step, in nm.
    by: f64,
    /// Middle, normal, owner and flux of the facets.
    facets: Vec<(Point, Point, Option<usize>, f64)>,
}

/// Step over the facet length where the flux varies from place to place.
const STEP_DIFFUSE: f64 = 0.5;
/// Most change of a flux that is carried on, relative.
const MOST_CARRIED: f64 = 0.2;
/// A facet is the same one a step later where it lies within this many facet lengths and steps, and
/// its normal within the angle of this cosine.
const SAME_PLACE: f64 = 1.5;
const SAME_NORMAL: f64 = 0.97;

impl Arrived {
    /// Carries the change since then half a step on.
    fn carry_on(&self, by: f64, facets: &[Facet], flux: &mut [Flux], facet_nm: f64) {
        let reach = SAME_PLACE * (facet_nm + self.by);
        for (facet, flux) in facets.iter().zip(flux) {
            let (middle, normal) = (facet.middle(), facet.normal());
            let alike = self
                .facets
                .iter()
                .filter(|(_, n, owner, _)| *owner == facet.owner && n.dot(normal) > SAME_NORMAL);
            let nearest = alike
                .map(|(place, _, _, before)| (place.distance(middle), *before))
                .min_by(|a, b| a.0.total_cmp(&b.0))
                .filter(|(distance, _)| *distance < reach);
            if let Some((_, before)) = nearest {
                let most = MOST_CARRIED * flux.diffuse;
                let change = 0.5 * by / self.by * (flux.diffuse - before);
                flux.diffuse += change.clamp(-most, most);
            }
        }
    }
}

impl<'a> Etch<'a> {
    fn start(
        scene: &Scene,
        character: &'a Character,
        resolution: &'a Resolution,
    ) -> Result<Self, FrontError> {
        let solids: Vec<_> = scene.solids.iter().map(|s| s.region.clone()).collect();
        let frame = Frame::around(scene.walls, &solids)?;
        let open = frame.region().difference(&Region::union_all(&solids));
        let (ambient, voids) = frame.split_open(&open)?;
        let mut etch = Self {
            character,
            source: Source::new(*character, &frame),
            resolution,
            frame,
            groups: Groups::by_rate(scene.solids.iter().map(|s| s.rate)),
            solids,
            ambient,
            voids,
            facets: Vec::new(),
            depth: 0.0,
            before: None,
        };
        etch.facets = etch.exposed();
        Ok(etch)
    }

    fn removed(&self, scene: &Scene) -> Vec<Region> {
        scene
            .solids
            .iter()
            .zip(&self.solids)
            .map(|(solid, left)| solid.region.difference(&left.without_hairs()))
            .collect()
    }

    /// Moves on to `depth_nm`, or until a solid of `stop` is reached: then the depth of that.
    fn advance(&mut self, depth_nm: f64, stop: &[usize]) -> Result<Option<f64>, FrontError> {
        if self.facets.iter().any(|f| f.owner.is_some_and(|o| stop.contains(&o))) {
            return Ok(Some(0.0));
        }
        let longest = self.step_nm();
        let steps = if depth_nm > 0.0 { (depth_nm / longest).ceil().max(1.0) as usize } else { 0 };
        let mut rounds = 0;
        for step in 0.. {
            let to_go = step < steps;
            let by = if to_go { depth_nm / steps as f64 } else { 0.0 };
            if !to_go {
                rounds += 1;
                if rounds > LAG_ROUNDS || !self.facets.iter().any(|f| self.reach(f) > LAG_LEFT_NM) {
                    break;
                }
            }
            self.step(by)?;
            let first = self
                .facets
                .iter()
                .filter(|f| f.owner.is_some_and(|o| stop.contains(&o)))
                .map(|f| self.depth - f.lag[0].max(f.lag[1]))
                .reduce(f64::min);
            if first.is_some() {
                return Ok(first);
            }
        }
        Ok(None)
    }

    /// How far a facet has still to go for its lag, were it on an open flat.
    fn reach(&self, facet: &Facet) -> f64 {
        self.groups.rate_of(facet.owner) * facet.lag[0].max(facet.lag[1])
    }

    /// Longest step, in nm of depth.
    fn step_nm(&self) -> f64 {
        if self.source.is_conformal() && self.groups.rates.len() == 1 {
            return f64::INFINITY;
        }
        let facets = if self.source.is_diffuse() { STEP_DIFFUSE } else { 1.0 };
        let fastest = self.groups.rates.iter().copied().fold(0.0, f64::max);
        facets * self.resolution.facet_nm / fastest.max(f64::MIN_POSITIVE)
    }

    /// One step: flux, sweep, cut, and the new surface with its lags.
    fn step(&mut self, by: f64) -> Result<(), FrontError> {
        let mut flux = self.source.on(&self.facets, &self.frame)?;
        let now = self.history(by, &flux);
        if let Some(before) = &self.before {
            before.carry_on(by, &self.facets, &mut flux, self.resolution.facet_nm);
        }
        self.before = now.or(self.before.take());
        let budget: Vec<_> = self.facets.iter().map(|f| f.lag.map(|lag| by + lag)).collect();
        let rounding = if self.source.is_diffuse() { Rounding::ROUGH } else { Rounding::FINE };
        let swept: Vec<_> = sweep::sweeps(&self.facets, &flux, &budget, &self.groups, rounding)
            .into_iter()
            .map(Region::from_rings)
            .collect();
        let mut taken: Vec<_> = self
            .solids
            .iter()
            .zip(&self.groups.of)
            .map(|(solid, &group)| solid.intersection(&swept[group]))
            .collect();
        let open = Region::union_all(taken.iter().chain([&self.ambient]).chain(&self.voids));
        let (ambient, enclosed) = self.frame.split_open(&open)?;
        if enclosed.len() != self.voids.len() {
            // Cut off from the ambient by a layer thinner than the step: not reached yet.
            for part in taken.iter_mut().filter(|part| !part.is_empty()) {
                *part = part.intersection(&ambient);
            }
        }
        let (opened, voids): (Vec<_>, Vec<_>) = std::mem::take(&mut self.voids)
            .into_iter()
            .partition(|void| enclosed.is_empty() || !void.intersection(&ambient).is_empty());
        self.voids = voids;
        for (solid, part) in self.solids.iter_mut().zip(&taken) {
            if !part.is_empty() {
                *solid = solid.difference(part);
            }
        }
        let before = std::mem::replace(&mut self.ambient, ambient);
        self.depth += by;
        let mut facets = self.exposed();
        let past = Past {
            places: Locator::new(std::iter::once(&before).chain(&taken).chain(&opened)),
            facets: &self.facets,
            speeds: self
                .facets
                .iter()
                .zip(&flux)
                .map(|(f, x)| self.groups.rate_of(f.owner) * x.total(f.normal()))
                .collect(),
            budget: &budget,
            groups: &self.groups,
            opened: Vec::new(),
        };
        let past = past.with_opened(&opened);
        for facet in &mut facets {
            facet.lag = past.lag(facet);
        }
        self.facets = facets;
        Ok(())
    }

    /// What arrives now, where it comes from all directions and the step goes on.
    fn history(&self, by: f64, flux: &[Flux]) -> Option<Arrived> {
        let facet = |(facet, flux): (&Facet, &Flux)| {
            (facet.middle(), facet.normal(), facet.owner, flux.diffuse)
        };
        let moves = self.source.is_diffuse() && !self.source.is_sharp() && by > 0.0;
        moves.then(|| Arrived { by, facets: self.facets.iter().zip(flux).map(facet).collect() })
    }

    fn exposed(&self) -> Vec<Facet> {
        let mut facets = surface::facets(
            &self.ambient,
            &self.frame,
            &self.solids,
            self.resolution.facet_nm,
            self.source.is_diffuse(),
        );
        beam::break_at_shadows(&mut facets, self.character, &self.frame);
        facets
    }
}

/// A step as it began, to tell when it reached a place.
struct Past<'a> {
    /// The ambient before the step, then what the step took from each solid, then the voids
    /// that it opened.
    places: Locator,
    facets: &'a [Facet],
    /// How fast each facet moved, in nm per nm of depth.
    speeds: Vec<f64>,
    budget: &'a [[f64; 2]],
    groups: &'a Groups,
    /// What was left of the step when each of the voids was opened.
    opened: Vec<f64>,
}

impl Past<'_> {
    fn with_opened(self, voids: &[Region]) -> Self {
        let opened = voids
            .iter()
            .map(|void| {
                let corners = void.rings().flatten().map(|&p| self.time_left(p, None));
                let ends = self.facets.iter().zip(&self.speeds).zip(self.budget);
                let sides = ends.flat_map(|((from, speed), budget)| {
                    void.edges().map(move |(a, b)| {
                        budget[0].max(budget[1]) - from.middle().distance_to_segment(a, b) / speed
                    })
                });
                corners.chain(sides).fold(0.0, f64::max)
            })
            .collect();
        Self { opened, ..self }
    }

    /// How long before the end of the step the ends of a facet of the new surface were
    /// uncovered, in nm of depth; zero where the surface was or moved by itself.
    fn lag(&self, facet: &Facet) -> [f64; 2] {
        let Some(owner) = facet.owner else { return [0.0; 2] };
        let solids = self.groups.of.len();
        // The ends themselves lie between two places.
        const NEAR_END: f64 = 0.05;
        [NEAR_END, 1.0 - NEAR_END].map(|t| {
            let p = facet.a + (facet.b - facet.a) * t;
            match self.places.find(p + facet.normal() * SIDE_STEP_NM) {
                None | Some(0) => 0.0,
                Some(place) if place > solids => self.opened[place - solids - 1],
                Some(place) => {
                    let group = self.groups.of[place - 1];
                    if group == self.groups.of[owner] {
                        0.0
                    } else {
                        self.time_left(p, Some(group))
                    }
                }
            }
        })
    }

    /// What is left of the budget of the facet that reached `p` first, the way going through the
    /// solids of a group.
    fn time_left(&self, p: Point, group: Option<usize>) -> f64 {
        let ends = self.facets.iter().zip(&self.speeds).zip(self.budget);
        ends.filter(|((from, speed), _)| {
            let own = from.owner.map(|o| self.groups.of[o]);
            **speed > 0.0 && (group.is_none() || own == group)
        })
        .map(|((from, speed), budget)| {
            let along = from.b - from.a;
            let nearest = ((p - from.a).dot(along) / along.dot(along)).clamp(0.0, 1.0);
            [0.0, nearest, 1.0]
                .map(|t| {
                    let start = from.a + along * t;
                    budget[0] + (budget[1] - budget[0]) * t - p.distance(start) / speed
                })
                .into_iter()
                .fold(0.0, f64::max)
        })
        .fold(0.0, f64::max)
    }
}
