//! Line-of-sight arrival: g_d of a facet from the sky that it sees.
//!
//! With φ the angle from the vertical, a lobe cos^p about the tilt θ brings a surface whose
//! normal stands at ν from one interval of sky ∫ cos^p(φ − θ) cos(φ − ν) dφ. Written with
//! ψ = φ − θ this is cos(ν − θ) ∫ cos^(p+1) ψ dψ − sin(ν − θ) cos^(p+1) ψ / (p + 1): the
//! second part is closed, the first is read from a table of its running integral. The table is
//! filled once a process by Gauss–Legendre quadrature of five points a panel and read by cubic
//! Hermite interpolation; with [`PANELS`] panels both stay below 1e-10 for p up to 1000. Cost: two
//! readings an interval. Beams are the limit of large p: a direction, seen or not.

use std::f64::consts::FRAC_PI_2;

/// Panels of the table over 0..π/2.
const PANELS: usize = 2048;

/// The directional part of an arrival, scaled to 1 on an open flat.
#[derive(Debug, Clone)]
pub(super) struct Lobes {
    tilts: Vec<f64>,
    shape: Shape,
    flat: f64,
}

#[derive(Debug, Clone)]
enum Shape {
    Beam,
    Cosine { exponent: f64, integral: Vec<f64> },
}

impl Lobes {
    /// `exponent` p of cos^p φ, `None` for a beam; half of it at each side when tilted.
    pub(super) fn new(exponent: Option<f64>, tilt_rad: f64) -> Self {
        let tilts = if tilt_rad == 0.0 { vec![0.0] } else { vec![tilt_rad, -tilt_rad] };
        let shape = match exponent {
            None => Shape::Beam,
            Some(exponent) => Shape::Cosine { exponent, integral: table(exponent + 1.0) },
        };
        let mut lobes = Self { tilts, shape, flat: 1.0 };
        lobes.flat = lobes.arrival([-FRAC_PI_2, FRAC_PI_2], 0.0);
        lobes
    }

    /// g_d of one interval of sky, angles from the vertical counted counter-clockwise, on a
    /// surface whose normal stands at `normal`.
    pub(super) fn arrival(&self, sky: [f64; 2], normal: f64) -> f64 {
        let share = 1.0 / (self.tilts.len() as f64 * self.flat);
        let lobe = |tilt: f64| match &self.shape {
            Shape::Beam if sky[0] <= tilt && tilt < sky[1] => (tilt - normal).cos().max(0.0),
            Shape::Beam => 0.0,
            Shape::Cosine { exponent, integral } => {
                let clip = |angle: f64| (angle - tilt).clamp(-FRAC_PI_2, FRAC_PI_2);
                let (from, to) = (clip(sky[0]), clip(sky[1]));
                let q = exponent + 1.0;
                let along = running(integral, q, to) - running(integral, q, from);
                let across = (to.cos().max(0.0).powf(q) - from.cos().max(0.0).powf(q)) / q;
                (normal - tilt).cos() * along - (normal - tilt).sin() * across
            }
        };
        self.tilts.iter().map(|&tilt| lobe(tilt) * share).sum()
    }
}

/// ∫₀^ψ cos^q at the panel ends of 0..π/2.
fn table(q: f64) -> Vec<f64> {
    // Nodes and weights of five-point Gauss–Legendre on [−1, 1] (Abramowitz and Stegun, 25.4.30).
    const NODES: [f64; 3] = [0.0, 0.538_469_310_105_683_1, 0.906_179_845_938_664];
    const WEIGHTS: [f64; 3] =
        [0.568_888_888_888_888_9, 0.478_628_670_499_366_5, 0.236_926_885_056_189_1];
    let half = 0.5 * FRAC_PI_2 / PANELS as f64;
    let power = |angle: f64| angle.cos().max(0.0).powf(q);
    let mut sum = 0.0;
    let mut ends = Vec::with_capacity(PANELS + 1);
    ends.push(0.0);
    for panel in 0..PANELS {
        let middle = (2 * panel + 1) as f64 * half;
        sum += half * WEIGHTS[0] * power(middle);
        for k in 1..3 {
            let (below, above) = (middle - half * NODES[k], middle + half * NODES[k]);
            sum += half * WEIGHTS[k] * (power(below) + power(above));
        }
        ends.push(sum);
    }
    ends
}

fn running(ends: &[f64], q: f64, angle: f64) -> f64 {
    let width = FRAC_PI_2 / PANELS as f64;
    let place = (angle.abs() / width).min(PANELS as f64);
    let panel = (place as usize).min(PANELS - 1);
    let t = place - panel as f64;
    let slope = |k: usize| width * (k as f64 * width).cos().max(0.0).powf(q);
    let (a, b) = (ends[panel], ends[panel + 1]);
    let (da, db) = (slope(panel), slope(panel + 1));
    let value = a + t * (da + t * (3.0 * (b - a) - 2.0 * da - db + t * (2.0 * (a - b) + da + db)));
    value * angle.signum()
}

#[cfg(test)]
mod tests {
    use super::*;

    const SKY: [f64; 2] = [-FRAC_PI_2, FRAC_PI_2];

    #[test]
    fn an_open_flat_gets_one() {
        for exponent in [None, Some(0.0), Some(3.0), Some(1000.0)] {
            for tilt in [0.0, 0.3] {
                let lobes = Lobes::new(exponent, tilt);
                assert!((lobes.arrival(SKY, 0.0) - 1.0).abs() < 1e-14);
            }
        }
    }

    #[test]
    fn the_isotropic_lobe_is_the_view_factor() {
        // p = 0 brings ½ (sin φ₂ − sin φ₁) to a flat (physics of an isotropic gas).
        let lobes = Lobes::new(Some(0.0), 0.0);
        let exact = 0.5 * (0.7_f64.sin() + 0.2_f64.sin());
        assert!((lobes.arrival([-0.2, 0.7], 0.0) - exact).abs() < 1e-12);
    }

    #[test]
    fn a_sharp_lobe_agrees_with_quadrature() {
        let lobes = Lobes::new(Some(80.0), 0.2);
        let [from, to, normal] = [-0.1_f64, 0.35, 0.6];
        let steps = 20_000;
        let integrate = |range: [f64; 2], nu: f64| {
            let h = (range[1] - range[0]) / f64::from(steps);
            (0..steps)
                .map(|k| {
                    let phi = range[0] + (f64::from(k) + 0.5) * h;
                    let lobe = |t: f64| (phi - t).cos().max(0.0).powf(80.0);
                    h * 0.5 * (lobe(0.2) + lobe(-0.2)) * (phi - nu).cos()
                })
                .sum::<f64>()
        };
        let exact = integrate([from, to], normal) / integrate(SKY, 0.0);
        assert!((lobes.arrival([from, to], normal) - exact).abs() < 1e-7);
    }

    #[test]
    fn a_tilted_beam_lights_a_wall_by_the_tangent_of_its_tilt() {
        // One lobe of two, each of cosine on the flat: wall over flat is tan θ / 2.
        let lobes = Lobes::new(None, 0.3);
        assert!((lobes.arrival([0.0, FRAC_PI_2], FRAC_PI_2) - 0.5 * 0.3_f64.tan()).abs() < 1e-14);
    }
}
