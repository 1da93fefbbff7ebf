//! Growth of a film: the surface moves, throats close, voids stay.
//!
//! Method: explicit front tracking. Each step cuts the surface into facets of the wanted size,
//! solves the flux on it ([`super::transport`]), and moves it ([`super::advance`]) by a thickness that takes
//! at most [`STEP_OF_THROAT`] of any throat and about a facet elsewhere. When a throat falls below the closure
//! width, the step is shortened until it has that width exactly; the surface is cut there and the
//! part without sky freezes. The film is what lies between the surface at the beginning and at the end,
//! less the voids. Order: first in time, second in space. Cost: steps (logarithmic in the
//! throat) times facets squared. It fails honestly: too many facets or steps, a flux that did not
//! converge.

use super::advance::{advanced, images};
use super::closure::{Closed, close, shut_off};
use super::fair::faired;
use super::outline::Outline;
use super::passing::{is_sound, swept};
use super::rebuild::rebuilt;
use super::remesh::Mesh;
use super::seam::{Track, follow, notches, plant};
use super::surface::Surface;
use super::throat::{Kind, Narrow, narrow_places};
use super::transport::Transport;
use super::{Character, Closure, FrontError, Growth, Resolution, Scene, Throat};
use crate::geom::{Point, Region};
use crate::num::tolerance::SKY_MARGIN_NM;

/// Largest share of a throat that one step closes.
const STEP_OF_THROAT: f64 = 0.12;
/// Largest step over the facet length.
const STEP_OF_FACET: f64 = 1.0;
/// Turn between neighbours of a fan: in proportion to facet over throat, within bounds, radians.
const FAN_OF_FACET: f64 = 2.0;
const FAN_RAD: [f64; 2] = [0.05, 0.2];
/// The same where all grows at one rate and facets cost nothing: arcs within 5e-5 of their radius.
const CONFORMAL_FAN_RAD: f64 = 0.02;
/// Most change of a rate that is extrapolated, relative.
const MOST_EXTRAPOLATION: f64 = 0.2;
/// More facets than this are refused.
const MOST_FACETS: usize = 20_000;
/// Vertices of a surface set right are left out this near to a chord, over the finest facet.
const THINNED: f64 = 0.4;
/// Closures of one step; what is left is taken up in the next.
const MOST_CLOSURES: usize = 1000;
/// Trials for the thickness at which a throat closes.
const MOST_TRIALS: usize = 24;
/// Least step, over the finest facet and the closure width: what comes closer than that may pass, and is set right.
const LEAST_STEP: f64 = 0.1;
/// More steps than this are refused.
const MOST_STEPS: usize = 20_000;
/// Facet length in a closing throat over that on the open surface.
const THROAT_FACET: f64 = 0.125;
/// Relative closeness of a throat to the closure width when it closes.
const CLOSED_WITHIN: f64 = 1e-4;
const CLOSED: f64 = 1.0 + 2.0 * CLOSED_WITHIN;

/// Grows a film of `thickness_nm` on an open flat over all surfaces that the ambient of a scene
/// reaches.
///
/// Lengths in nm. Voids that the scene already encloses stay as they are. Errors: the scene is
/// not a ground between walls, the flux did not converge, or the growth needs more facets or
/// steps than the limits.
pub fn grow(
    scene: &Scene,
    character: &Character,
    thickness_nm: f64,
    resolution: &Resolution,
) -> Result<Growth, FrontError> {
    Run::new(scene, character, resolution)?.to(thickness_nm)
}

struct Run<'a> {
    rates: Vec<f64>,
    transport: Transport,
    mesh: Mesh,
    resolution: &'a Resolution,
    start: Surface,
    surface: Surface,
    narrow: Vec<Narrow>,
    grown: f64,
    last_step: f64,
    closures: Vec<Closure>,
    tracks: Vec<Track>,
}

impl<'a> Run<'a> {
    fn new(
        scene: &Scene,
        character: &Character,
        resolution: &'a Resolution,
    ) -> Result<Self, FrontError> {
        let outline = Outline::exposed(scene)?;
        let start = Surface::of(&outline, scene);
        let narrow = narrow_places(&start);
        let widest = scene.walls[1] - scene.walls[0];
        let throat = narrow.iter().map(|n| n.width).fold(widest, f64::min);
        let transport = Transport::new(*character, scene.walls);
        let fan_rad = if transport.is_conformal() {
            CONFORMAL_FAN_RAD
        } else {
            (FAN_OF_FACET * resolution.facet_nm / throat).clamp(FAN_RAD[0], FAN_RAD[1])
        };
        let mesh = Mesh {
            facet_nm: resolution.facet_nm,
            least_nm: resolution.facet_nm * THROAT_FACET,
            fan_rad,
        };
        Ok(Self {
            rates: scene.solids.iter().map(|solid| solid.rate).collect(),
            transport,
            mesh,
            resolution,
            surface: start.clone(),
            start,
            narrow,
            grown: 0.0,
            last_step: 0.0,
            closures: Vec::new(),
            tracks: Vec::new(),
        })
    }

    fn to(mut self, thickness: f64) -> Result<Growth, FrontError> {
        self.close_throats()?;
        let mut steps = 0;
        while self.grown < thickness {
            steps += 1;
            if steps > MOST_STEPS {
                return Err(FrontError::Inconsistent("too many steps"));
            }
            self.mesh.open_corners(&mut self.surface, &self.rates);
            self.mesh.refine(&mut self.surface, &self.narrow);
            if self.surface.len() > MOST_FACETS {
                let facets = self.surface.len();
                return Err(FrontError::TooFine { facets, limit: MOST_FACETS });
            }
            let before = self.solve_rates()?;
            self.step(thickness - self.grown, &before)?;
            self.close_throats()?;
            let (surface, width) = (&self.surface, self.resolution.closure_width_nm);
            let closures = &mut self.closures;
            self.tracks.retain_mut(|track| {
                let goes_on = follow(track, surface, width);
                closures[track.closure].seam.clone_from(&track.points);
                goes_on
            });
        }
        self.finish()
    }

    /// Solves the flux; what each piece had before is returned.
    fn solve_rates(&mut self) -> Result<Vec<Option<f64>>, FrontError> {
        let guess: Vec<f64> = self.surface.pieces().map(|piece| piece.gas).collect();
        let arrival = self.transport.arrival(&self.surface.facets(), &guess)?;
        let before = self.surface.pieces().map(|piece| piece.solved).collect();
        let rates = &self.rates;
        for (k, piece) in self.surface.pieces_mut().enumerate() {
            piece.rate = arrival.rate[k] * rates[piece.facet.solid];
            piece.solved = Some(piece.rate);
            piece.gas = arrival.neutral.get(k).copied().unwrap_or(1.0);
        }
        Ok(before)
    }

    /// Carries the change of the rates since the last step half a step on (Adams and Bashforth).
    fn extrapolate(&mut self, before: &[Option<f64>], thickness: f64) {
        if self.last_step > 0.0 {
            let ahead = 0.5 * thickness / self.last_step;
            for (piece, before) in self.surface.pieces_mut().zip(before) {
                if let Some(before) = before {
                    let most = MOST_EXTRAPOLATION * piece.rate;
                    piece.rate += (ahead * (piece.rate - before)).clamp(-most, most);
                }
            }
        }
    }

    /// Moves by one step of at most `remaining`, shortened to where a throat closes exactly.
    fn step(&mut self, remaining: f64, rates_before: &[Option<f64>]) -> Result<(), FrontError> {
        let fastest = self.surface.pieces().map(|piece| piece.rate).fold(0.0, f64::max);
        if fastest == 0.0 {
            self.grown += remaining;
            return Ok(());
        }
        let closed = self.resolution.closure_width_nm;
        let mut thickness = remaining.min(STEP_OF_FACET * self.mesh.facet_nm / fastest);
        let closing = |throat: &&Narrow| throat.kind != Kind::Taper && throat.width > closed;
        for throat in self.narrow.iter().filter(closing) {
            let speed = if throat.speed > 0.0 { throat.speed } else { 2.0 * fastest };
            let share = STEP_OF_THROAT * throat.width / speed;
            // The last step is laid a little beyond the closure.
            let last = 1.05 * (throat.width - closed) / speed;
            thickness = thickness.min(if last < 1.5 * share { last } else { share });
        }
        let least = LEAST_STEP * self.mesh.least_nm.min(closed) / fastest;
        thickness = thickness.max(least.min(remaining));
        self.extrapolate(rates_before, thickness);
        let mut next = self.moved(thickness);
        let mut narrow = narrow_places(&next);
        let width_of = |places: &[Narrow]| narrowest(places).map(|throat| throat.width);
        if let (Some(before), Some(after)) = (width_of(&self.narrow), width_of(&narrow))
            && before > closed
            && after < closed
        {
            // Regula falsi on the width; the bracket always holds the closure.
            let (mut open, mut shut) = (0.0, thickness);
            let (mut open_width, mut shut_width) = (before, after);
            for turn in 0..MOST_TRIALS {
                let share = (open_width - closed) / (open_width - shut_width);
                let share =
                    if turn % 4 == 3 || !share.is_finite() { 0.5 } else { share.clamp(0.01, 0.99) };
                thickness = open + (shut - open) * share;
                next = self.moved(thickness);
                narrow = narrow_places(&next);
                let width = width_of(&narrow).unwrap_or(f64::INFINITY);
                if (width - closed).abs() < CLOSED_WITHIN * closed {
                    break;
                }
                if width > closed {
                    (open, open_width) = (thickness, width);
                } else {
                    (shut, shut_width) = (thickness, width);
                }
            }
        }
        self.grown += thickness;
        self.last_step = thickness;
        if is_sound(&next) {
            self.surface = next;
            self.narrow = narrow;
            return Ok(());
        }
        let sky = self.surface.top() + thickness * fastest + SKY_MARGIN_NM;
        let images = images(&self.surface, thickness);
        let left = swept(&self.surface.ambient(sky)?, &self.surface, &images);
        let (open, closed) = shut_off(&left, self.surface.walls, sky, closed);
        let notches = notches(&self.surface);
        let set_right = rebuilt(&open, sky, &self.surface, THINNED * self.mesh.least_nm);
        self.surface = if self.transport.is_conformal() { set_right } else { faired(set_right) };
        self.record(closed, &notches);
        self.narrow = narrow_places(&self.surface);
        Ok(())
    }

    /// The surface a step on; smooth stretches stay so where the rates vary.
    fn moved(&self, thickness: f64) -> Surface {
        let next = advanced(&self.surface, thickness);
        if self.transport.is_conformal() { next } else { faired(next) }
    }

    /// Closes every throat that is no wider than the closure width.
    fn close_throats(&mut self) -> Result<(), FrontError> {
        let width = self.resolution.closure_width_nm;
        for _ in 0..MOST_CLOSURES {
            let narrowest = narrowest(&self.narrow).filter(|throat| throat.width <= width * CLOSED);
            let Some(&throat) = narrowest else { return Ok(()) };
            let notches = notches(&self.surface);
            let sky = self.surface.top() + SKY_MARGIN_NM;
            let closed = close(&mut self.surface, throat.middle, sky, width)?;
            if closed.is_empty() {
                return Ok(());
            }
            self.record(closed, &notches);
            self.narrow = narrow_places(&self.surface);
        }
        Ok(())
    }

    /// Enters what closed; a notch that has filled up without a void goes on as the same seam.
    fn record(&mut self, closed: Vec<Closed>, notches: &[(usize, Point)]) {
        let reach = self.resolution.closure_width_nm;
        for Closed { throat, void, plug } in closed {
            let is_near = |p: Point| {
                plug.contains(p) || plug.edges().any(|(a, b)| p.distance_to_segment(a, b) < reach)
            };
            let buried = notches.iter().find(|(_, at)| void.is_empty() && is_near(*at));
            let seam = buried.map_or(self.closures.len(), |&(seam, _)| seam);
            if buried.is_none() {
                self.tracks.push(Track { closure: seam, points: vec![throat] });
                let thickness_nm = self.grown;
                self.closures.push(Closure { thickness_nm, throat, void, seam: vec![throat] });
            }
            plant(&mut self.surface, &plug, seam);
        }
    }

    fn finish(self) -> Result<Growth, FrontError> {
        let sky = self.surface.top().max(self.start.top()) + SKY_MARGIN_NM;
        let between = self.start.ambient(sky)?.difference(&self.surface.ambient(sky)?);
        let voids = Region::union_all(self.closures.iter().map(|closure| &closure.void));
        let film = between.difference(&voids);
        // A throat between two chains is seen from both.
        let mut throats: Vec<Throat> = Vec::new();
        for place in &self.narrow {
            let same = |t: &Throat| t.middle.distance(place.middle) < 0.5 * place.width;
            if !throats.iter().any(same) {
                throats.push(Throat { middle: place.middle, width_nm: place.width });
            }
        }
        Ok(Growth { film, closures: self.closures, throats })
    }
}

fn narrowest(places: &[Narrow]) -> Option<&Narrow> {
    let closing = places.iter().filter(|n| n.kind != Kind::Taper);
    closing.min_by(|a, b| a.width.total_cmp(&b.width))
}
