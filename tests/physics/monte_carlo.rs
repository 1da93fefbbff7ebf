//! The flux solver against a ballistic tracer: particles one by one, re-emitted by chance.
//!
//! The tracer knows nothing of view factors: a particle starts from the sky, flies straight, is
//! mirrored at the walls, and where it hits it sticks or leaves again in a direction of
//! Lambert's law. Flux is hits per length over that of an open flat (the method of the
//! test-particle Monte Carlo of Davis, J. Appl. Phys. 31, 1169 (1960), from memory). Its
//! error is estimated from batches.

use gapwright::front::{Character, Facet, Transport};
use gapwright::geom::Point;

const BATCHES: usize = 25;
const PARTICLES_A_BATCH: usize = 3000;
/// Difference allowed in standard errors of the tracer, over some two hundred comparisons.
const SIGMAS: f64 = 4.5;
/// Error of the solver at this fineness, added to the tracer's.
const SOLVER_ERROR: f64 = 0.004;

/// SplitMix64 (Steele, Lea, Flood, OOPSLA 2014; constants from memory).
struct Random(u64);

impl Random {
    fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        ((z ^ (z >> 31)) >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// Sine of an angle from the normal by Lambert's law in the plane.
    fn lambert(&mut self) -> f64 {
        2.0 * self.next() - 1.0
    }
}

struct Shape {
    name: &'static str,
    walls: [f64; 2],
    points: Vec<Point>,
}

fn shape(name: &'static str, width: f64, points: &[(f64, f64)]) -> Shape {
    let points = points.iter().map(|&(x, z)| Point::new(x, z)).collect();
    Shape { name, walls: [0.0, width], points }
}

/// A trench with an arc of some radius at each lip (positive) or bulging walls (`bulge`).
fn curved(name: &'static str, radius: f64, bulge: f64) -> Shape {
    let mut left = vec![(0.0, 40.0)];
    for k in 0..=8 {
        let angle = std::f64::consts::FRAC_PI_2 * (1.0 - f64::from(k) / 8.0);
        left.push((10.0 - radius + radius * angle.cos(), 40.0 - radius + radius * angle.sin()));
    }
    for k in 1..=12 {
        let t = f64::from(k) / 12.0;
        let z = (40.0 - radius) * (1.0 - t);
        left.push((10.0 - bulge * (std::f64::consts::PI * t).sin(), z));
    }
    let right: Vec<_> = left.iter().rev().map(|&(x, z)| (40.0 - x, z)).collect();
    let mut points = left;
    points.extend(right);
    points.dedup();
    shape(name, 40.0, &points)
}

fn shapes() -> Vec<Shape> {
    vec![
        shape(
            "trench",
            40.0,
            &[(0., 40.), (10., 40.), (10., 0.), (30., 0.), (30., 40.), (40., 40.)],
        ),
        shape("deep half trench", 14.0, &[(0., 60.), (6., 60.), (6., 0.), (14., 0.)]),
        shape(
            "half-closed neck",
            40.0,
            &[
                (0., 46.),
                (8., 46.),
                (14., 42.),
                (17., 36.),
                (12., 28.),
                (11., 4.),
                (29., 4.),
                (28., 28.),
                (23., 36.),
                (26., 42.),
                (32., 46.),
                (40., 46.),
            ],
        ),
        shape(
            "re-entrant",
            60.0,
            &[(0., 40.), (20., 40.), (8., 0.), (52., 0.), (40., 40.), (60., 40.)],
        ),
        shape(
            "stepped",
            50.0,
            &[
                (0., 40.),
                (8., 40.),
                (8., 24.),
                (18., 24.),
                (18., 0.),
                (34., 0.),
                (34., 30.),
                (50., 30.),
            ],
        ),
        shape(
            "row of unequal spaces",
            120.0,
            &[
                (0., 0.),
                (8., 0.),
                (8., 40.),
                (24., 40.),
                (24., 0.),
                (48., 0.),
                (48., 40.),
                (60., 40.),
                (60., 0.),
                (105., 0.),
                (105., 40.),
                (120., 40.),
            ],
        ),
        shape(
            "tapered",
            40.0,
            &[(0., 40.), (8., 40.), (14., 0.), (26., 0.), (32., 40.), (40., 40.)],
        ),
        curved("rounded lips", 7.0, 0.0),
        curved("bulged walls", 2.0, 6.0),
        shape(
            "unequal heights",
            60.0,
            &[(0., 40.), (12., 40.), (12., 0.), (36., 0.), (36., 18.), (60., 18.)],
        ),
        shape(
            "hanging lip",
            50.0,
            &[
                (0., 40.),
                (22., 40.),
                (22., 34.),
                (10., 34.),
                (10., 0.),
                (40., 0.),
                (40., 40.),
                (50., 40.),
            ],
        ),
        shape(
            "notched floor",
            40.0,
            &[
                (0., 30.),
                (6., 30.),
                (6., 4.),
                (16., 4.),
                (20., -6.),
                (24., 4.),
                (34., 4.),
                (34., 30.),
                (40., 30.),
            ],
        ),
    ]
}

impl Shape {
    fn edges(&self) -> Vec<(Point, Point)> {
        self.points.windows(2).map(|p| (p[0], p[1])).collect()
    }

    /// Where a ray first meets an edge, mirrored at the walls on the way; `None` in the sky.
    fn trace(
        &self,
        edges: &[(Point, Point)],
        mut at: Point,
        mut to: Point,
        mut from: Option<usize>,
    ) -> Option<(usize, Point)> {
        let top = self.points.iter().map(|p| p.z).fold(f64::NEG_INFINITY, f64::max);
        loop {
            let wall = self.walls[usize::from(to.x > 0.0)];
            let to_wall = if to.x == 0.0 { f64::INFINITY } else { (wall - at.x) / to.x };
            let hit = edges
                .iter()
                .enumerate()
                .filter(|&(i, _)| Some(i) != from)
                .filter_map(|(i, &(a, b))| {
                    let (edge, way) = (b - a, a - at);
                    let det = edge.cross(to);
                    let (t, u) = (edge.cross(way) / det, to.cross(way) / det);
                    (det != 0.0 && t > 0.0 && (0.0..1.0).contains(&u)).then_some((t, i))
                })
                .min_by(|a, b| a.0.total_cmp(&b.0));
            match hit {
                Some((t, i)) if t <= to_wall => return Some((i, at + to * t)),
                _ if to_wall.is_infinite() => return None,
                _ => {}
            }
            at = Point::new(wall, at.z + to.z * to_wall);
            to.x = -to.x;
            from = None;
            if at.z > top && to.z >= 0.0 {
                return None;
            }
        }
    }

    /// Flux on each edge over that of an open flat, with its standard error.
    fn traced(&self, character: &Character, seed: u64) -> Vec<(f64, f64)> {
        let edges = self.edges();
        let width = self.walls[1] - self.walls[0];
        let sky = self.points.iter().map(|p| p.z).fold(f64::NEG_INFINITY, f64::max) + 1.0;
        let mut random = Random(seed);
        let mut sums = vec![(0.0, 0.0); edges.len()];
        for _ in 0..BATCHES {
            let mut hits = vec![0_u32; edges.len()];
            for _ in 0..PARTICLES_A_BATCH {
                let start = Point::new(self.walls[0] + width * random.next(), sky);
                let is_gas = random.next() < character.neutral;
                let angle =
                    if is_gas { random.lambert().asin() } else { lobe(character, &mut random) };
                let mut to = Point::new(angle.sin(), -angle.cos());
                let mut at = start;
                let mut from = None;
                while let Some((edge, place)) = self.trace(&edges, at, to, from) {
                    hits[edge] += 1;
                    if !is_gas || random.next() < character.sticking {
                        break;
                    }
                    let (a, b) = edges[edge];
                    let along = (b - a) * (1.0 / a.distance(b));
                    let sine = random.lambert();
                    let up = Point::new(-along.z, along.x) * (1.0 - sine * sine).sqrt();
                    (at, to, from) = (place, up + along * sine, Some(edge));
                }
            }
            for ((sum, hits), &(a, b)) in sums.iter_mut().zip(hits).zip(&edges) {
                let flux = f64::from(hits) / PARTICLES_A_BATCH as f64 * width / a.distance(b);
                sum.0 += flux;
                sum.1 += flux * flux;
            }
        }
        let n = BATCHES as f64;
        sums.iter()
            .map(|&(sum, squares)| {
                let mean = sum / n;
                (mean, ((squares / n - mean * mean).max(0.0) / (n - 1.0)).sqrt())
            })
            .collect()
    }

    /// Mean flux on each edge by the solver.
    fn solved(&self, character: &Character) -> Vec<f64> {
        const FACET_NM: f64 = 0.5;
        let mut facets = Vec::new();
        for (i, (a, b)) in self.edges().into_iter().enumerate() {
            let pieces = (a.distance(b) / FACET_NM).ceil() as usize;
            let cut = |k: usize| a + (b - a) * (k as f64 / pieces as f64);
            facets.extend((0..pieces).map(|k| Facet::between(cut(k), cut(k + 1), i)));
        }
        let rates = Transport::new(*character, self.walls).arrival(&facets, &[]).unwrap().rate;
        let mut sums = vec![(0.0, 0.0); self.points.len() - 1];
        for (facet, rate) in facets.iter().zip(rates) {
            sums[facet.solid].0 += rate * facet.length();
            sums[facet.solid].1 += facet.length();
        }
        sums.into_iter().map(|(flux, length)| flux / length).collect()
    }
}

/// Angle from the vertical of a particle of the directional part: through a flat they come as
/// cos^(p+1), about the tilt to either side, each as far as the sky reaches.
fn lobe(character: &Character, random: &mut Random) -> f64 {
    let side = if random.next() < 0.5 { 1.0 } else { -1.0 };
    let tilt = side * character.tilt_rad;
    let Some(exponent) = character.exponent else { return tilt };
    loop {
        let angle = std::f64::consts::PI * (random.next() - 0.5);
        let shifted = (angle - tilt).cos().max(0.0);
        if random.next() < shifted.powf(exponent) * angle.cos() {
            return angle;
        }
    }
}

fn compare(name: &str, character: Character) {
    for (i, shape) in shapes().iter().enumerate() {
        let traced = shape.traced(&character, 17 + i as u64);
        for (edge, (solved, (mean, error))) in
            shape.solved(&character).into_iter().zip(traced).enumerate()
        {
            assert!(
                (solved - mean).abs() <= SIGMAS * error + SOLVER_ERROR,
                "{name}, {} edge {edge}: solver {solved}, tracer {mean} ± {error}",
                shape.name
            );
        }
    }
}

const GAS: Character = Character {
    conformal: 0.0,
    directional: 0.0,
    exponent: None,
    tilt_rad: 0.0,
    neutral: 1.0,
    sticking: 0.3,
};

#[test]
fn a_gas_that_is_re_emitted() {
    compare("gas", GAS);
}

#[test]
fn a_gas_that_sticks_at_once() {
    compare("sticking gas", Character { sticking: 1.0, ..GAS });
}

#[test]
fn a_lobe_and_a_gas() {
    let mixed =
        Character { directional: 0.5, neutral: 0.5, exponent: Some(6.0), sticking: 0.2, ..GAS };
    compare("lobe and gas", mixed);
}

#[test]
fn a_tilted_lobe() {
    let tilted =
        Character { directional: 1.0, neutral: 0.0, exponent: Some(10.0), tilt_rad: 0.3, ..GAS };
    compare("tilted lobe", tilted);
}

#[test]
fn a_tilted_beam() {
    // A shadow's edge falls within a facet: the solver's error on an edge is a facet's share of it.
    let tilted = Character { directional: 1.0, neutral: 0.0, tilt_rad: 0.4, ..GAS };
    for (i, shape) in shapes().iter().enumerate() {
        let traced = shape.traced(&tilted, 101 + i as u64);
        let edges = shape.edges();
        for (edge, (solved, (mean, error))) in
            shape.solved(&tilted).into_iter().zip(traced).enumerate()
        {
            let (a, b) = edges[edge];
            let within = SIGMAS * error + SOLVER_ERROR + 1.0 / a.distance(b);
            assert!(
                (solved - mean).abs() <= within,
                "tilted beam, {} edge {edge}: solver {solved}, tracer {mean} ± {error}",
                shape.name
            );
        }
    }
}
