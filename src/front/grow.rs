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

use super::advance::advanced;
use super::closure::{cut, freeze};
use super::outline::Outline;
use super::remesh::Mesh;
use super::seam::{Track, follow, is_followed, rename};
use super::surface::Surface;
use super::throat::{Kind, Narrow, narrow_places};
use super::transport::Transport;
use super::{Character, Closure, FrontError, Growth, Resolution, Scene, Throat};
use crate::geom::Region;
use crate::num::tolerance::SKY_MARGIN_NM;

/// Largest share of a throat that one step closes.
const STEP_OF_THROAT: f64 = 0.06;
/// Largest step over the facet length.
const STEP_OF_FACET: f64 = 1.0;
/// More facets than this are refused.
const MOST_FACETS: usize = 20_000;
/// More steps than this are refused.
const MOST_STEPS: usize = 20_000;
/// Facet length in a closing throat over that on the open surface.
const THROAT_FACET: f64 = 0.125;
/// Relative closeness of a throat to the closure width when it closes.
const CLOSED_WITHIN: f64 = 1e-6;

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
        let mesh = Mesh {
            facet_nm: resolution.facet_nm,
            least_nm: resolution.facet_nm * THROAT_FACET,
            fan_rad: (6.0 * resolution.facet_nm / throat).clamp(0.05, 0.2),
        };
        Ok(Self {
            rates: scene.solids.iter().map(|solid| solid.rate).collect(),
            transport: Transport::new(*character, scene.walls),
            mesh,
            resolution,
            surface: start.clone(),
            start,
            narrow,
            grown: 0.0,
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
            self.solve_rates()?;
            self.step(thickness - self.grown);
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

    fn solve_rates(&mut self) -> Result<(), FrontError> {
        let guess: Vec<f64> = self.surface.pieces().map(|piece| piece.gas).collect();
        let arrival = self.transport.arrival(&self.surface.facets(), &guess)?;
        let rates = &self.rates;
        for (k, piece) in self.surface.pieces_mut().enumerate() {
            piece.rate = arrival.rate[k] * rates[piece.facet.solid];
            piece.gas = arrival.neutral.get(k).copied().unwrap_or(1.0);
        }
        Ok(())
    }

    /// Moves by one step of at most `remaining`, shortened to where a throat closes exactly.
    fn step(&mut self, remaining: f64) {
        let fastest = self.surface.pieces().map(|piece| piece.rate).fold(0.0, f64::max);
        if fastest == 0.0 {
            self.grown += remaining;
            return;
        }
        let closed = self.resolution.closure_width_nm;
        let mut thickness = remaining.min(STEP_OF_FACET * self.mesh.facet_nm / fastest);
        for throat in self.narrow.iter().filter(|throat| throat.kind != Kind::Taper) {
            let speed = if throat.speed > 0.0 { throat.speed } else { 2.0 * fastest };
            let share = STEP_OF_THROAT * throat.width / speed;
            // The last step is laid a little beyond the closure.
            let last = 1.05 * (throat.width - closed) / speed;
            thickness = thickness.min(if last < 1.5 * share { last } else { share });
        }
        let mut next = advanced(&self.surface, thickness);
        let mut narrow = narrow_places(&next);
        let widths = (narrowest(&self.narrow), narrowest(&narrow));
        if let (Some(before), Some(after)) = widths
            && before > closed
            && after < closed
        {
            // Regula falsi on the width; the bracket always holds the closure.
            let (mut open, mut shut) = (0.0, thickness);
            let (mut open_width, mut shut_width) = (before, after);
            for turn in 0..60 {
                let share = (open_width - closed) / (open_width - shut_width);
                let share = if turn % 4 == 3 { 0.5 } else { share.clamp(0.01, 0.99) };
                thickness = open + (shut - open) * share;
                next = advanced(&self.surface, thickness);
                narrow = narrow_places(&next);
                let width = narrowest(&narrow).unwrap_or(f64::INFINITY);
                if (width - closed).abs() < CLOSED_WITHIN * closed || shut - open < 1e-12 {
                    break;
                }
                if width > closed {
                    (open, open_width) = (thickness, width);
                } else {
                    (shut, shut_width) = (thickness, width);
                }
            }
        }
        self.surface = next;
        self.narrow = narrow;
        self.grown += thickness;
    }

    fn close_throats(&mut self) -> Result<(), FrontError> {
        let closed = self.resolution.closure_width_nm * (1.0 + 10.0 * CLOSED_WITHIN);
        loop {
            let closing = self.narrow.iter().filter(|n| n.kind != Kind::Taper && n.width <= closed);
            let Some(&throat) = closing.min_by(|a, b| a.width.total_cmp(&b.width)) else {
                return Ok(());
            };
            let closure = self.closures.len();
            cut(&mut self.surface, &throat, closure);
            let sky = self.surface.top() + SKY_MARGIN_NM;
            let voids = freeze(&mut self.surface, sky, self.resolution.closure_width_nm)?;
            let void = Region::union_all(&voids);
            let buried = self.tracks.iter().find(|track| !is_followed(track, &self.surface));
            match buried {
                // The notch over a closed throat has filled up to here: its seam goes on.
                Some(track) if void.is_empty() => rename(&mut self.surface, closure, track.closure),
                _ => {
                    let points = vec![throat.middle];
                    self.tracks.push(Track { closure, points: points.clone() });
                    self.closures.push(Closure {
                        thickness_nm: self.grown,
                        throat: throat.middle,
                        void,
                        seam: points,
                    });
                }
            }
            self.narrow = narrow_places(&self.surface);
        }
    }

    fn finish(self) -> Result<Growth, FrontError> {
        let sky = self.surface.top().max(self.start.top()) + SKY_MARGIN_NM;
        let between = self.start.ambient(sky)?.difference(&self.surface.ambient(sky)?);
        let voids = Region::union_all(self.closures.iter().map(|closure| &closure.void));
        let film = between.difference(&voids);
        let throats =
            self.narrow.iter().map(|n| Throat { middle: n.middle, width_nm: n.width }).collect();
        Ok(Growth { film, closures: self.closures, throats })
    }
}

fn narrowest(places: &[Narrow]) -> Option<f64> {
    let closing = places.iter().filter(|n| n.kind != Kind::Taper).map(|n| n.width);
    closing.min_by(f64::total_cmp)
}
