//! The flux on a frozen surface against closed forms and converged integral equations.

use gapwright::front::{Character, Exchange, Facet, Transport};
use gapwright::geom::Point;

/// The facets of half a trench between a wall at x = −`line` and a mirror at mid-space: top,
/// side wall, floor; mouth at z = `depth`. Facets shrink toward the edges of wall and floor.
fn half_trench(width: f64, depth: f64, line: f64, count: usize) -> Vec<Facet> {
    let at = |x: f64, z: f64| Point::new(x, z);
    let mut points = vec![at(-line, depth), at(0.0, depth)];
    for k in 1..=count {
        let t = 0.5 * (1.0 - (std::f64::consts::PI * k as f64 / count as f64).cos());
        points.push(at(0.0, depth * (1.0 - t)));
    }
    for k in 1..=count / 2 {
        // Mirrored at mid-space: shrink toward the corner only.
        let t = 1.0 - (std::f64::consts::FRAC_PI_2 * k as f64 / (count / 2) as f64).cos();
        points.push(at(0.5 * width * t, 0.0));
    }
    points.windows(2).map(|p| Facet::between(p[0], p[1], 0)).collect()
}

fn gas(sticking: f64) -> Character {
    Character {
        conformal: 0.0,
        directional: 0.0,
        exponent: None,
        tilt_rad: 0.0,
        neutral: 1.0,
        sticking,
    }
}

/// Clausing, Ann. Phys. 12, 961 (1932); Berman, J. Appl. Phys. 36, 3356 (1965): transmission of
/// a slot with diffuse walls. A floor that keeps all, under walls that keep nothing, receives it.
#[test]
fn transmission_of_a_slot() {
    let table = [
        (0.1, 0.952452),
        (0.5, 0.804724),
        (1.0, 0.684381),
        (2.0, 0.542058),
        (3.0, 0.457151),
        (5.0, 0.356409),
        (10.0, 0.240557),
        (20.0, 0.153888),
    ];
    for (ratio, exact) in table {
        let facets = half_trench(1.0, ratio, 1.0, 240);
        let exchange = Exchange::between(&facets, [-1.0, 0.5]);
        let on_floor = |f: &Facet| f.normal.z > 0.5 && f.middle().z == 0.0;
        let sticking: Vec<f64> =
            facets.iter().map(|f| if on_floor(f) { 1.0 } else { 0.0 }).collect();
        let mut flux = vec![0.0; facets.len()];
        exchange.gas(&sticking, &mut flux).unwrap();
        let through: f64 = facets
            .iter()
            .zip(&flux)
            .filter(|(f, _)| on_floor(f))
            .map(|(f, flux)| 2.0 * f.length() * flux)
            .sum();
        assert!((through - exact).abs() < 1e-4, "L/d {ratio}: {through} {exact}");
    }
}

/// Point factors of a trench (any radiation handbook).
#[test]
fn sky_seen_from_wall_and_floor() {
    let (width, depth) = (2.0_f64, 3.0_f64);
    let facets = half_trench(width, depth, 1.0, 60);
    let exchange = Exchange::between(&facets, [-1.0, 0.5 * width]);
    for (facet, sky) in facets.iter().zip(exchange.sky()) {
        let (x, y) = (facet.middle().x, depth - facet.middle().z);
        let exact = if y == 0.0 {
            1.0
        } else if facet.normal.z > 0.5 {
            0.5 * (x / x.hypot(depth) + (width - x) / (width - x).hypot(depth))
        } else {
            0.5 * (1.0 - y / y.hypot(width))
        };
        assert!((sky - exact).abs() < 1e-12, "{facet:?}: {sky} {exact}");
    }
}

/// Facing and perpendicular strips, by Hottel's crossed strings (any radiation handbook).
#[test]
fn view_factors_of_strips() {
    for (ratio, exact) in [(0.5, 0.618034), (1.0, 0.414214), (2.0, 0.236068)] {
        // Facing: the floor sees the mouth of a trench as deep as the gap.
        let facets = half_trench(1.0, ratio, 1.0, 400);
        let exchange = Exchange::between(&facets, [-1.0, 0.5]);
        let mean: f64 = facets
            .iter()
            .zip(exchange.sky())
            .filter(|(f, _)| f.middle().z == 0.0)
            .map(|(f, sky)| 2.0 * f.length() * sky)
            .sum();
        assert!((mean - exact).abs() < 2e-5, "gap/width {ratio}: {mean} {exact}");
    }
    for (ratio, exact) in [(0.5, 0.190983), (1.0, 0.292893), (2.0, 0.381966)] {
        // Perpendicular: a floor of width 1 at the foot of a wall of height `ratio`, mirror far off.
        let facets = half_trench(200.0, ratio, 1.0, 400);
        let floor: Vec<Facet> = (0..400)
            .map(|k| {
                let x = |k: i32| Point::new(f64::from(k) / 400.0, 0.0);
                Facet::between(x(k), x(k + 1), 0)
            })
            .collect();
        let wall = facets.iter().filter(|f| f.normal.z < 0.5).count();
        let mut all: Vec<Facet> = facets.into_iter().take(1 + wall).collect();
        all.extend(&floor);
        all.push(Facet::between(Point::new(1.0, 0.0), Point::new(100.0, 0.0), 0));
        let exchange = Exchange::between(&all, [-1.0, 100.0]);
        let mean: f64 = (1 + wall..1 + wall + 400)
            .map(|i| {
                let row = exchange.row(i).iter();
                row.filter(|e| (e.0 as usize) < 1 + wall).map(|e| e.1 / 400.0).sum::<f64>()
            })
            .sum();
        let far = 1e-4;
        assert!((mean - exact).abs() < far, "h/w {ratio}: {mean} {exact}");
    }
}

/// Trench of aspect ratio AR, isotropic source, sticking S (converged integral equations): wall
/// middle, floor centre, floor mean, share of the mouth's flux that is captured.
#[test]
fn flux_in_a_trench() {
    let table = [
        (1.0, 1.0, 0.2764, 0.4472, 0.4142, 1.000),
        (1.0, 0.5, 0.457, 0.576, 0.544, 0.741),
        (1.0, 0.1, 0.817, 0.855, 0.842, 0.248),
        (2.0, 1.0, 0.1465, 0.2425, 0.2361, 1.000),
        (2.0, 0.5, 0.281, 0.344, 0.334, 0.808),
        (2.0, 0.3, 0.404, 0.449, 0.439, 0.657),
        (2.0, 0.1, 0.678, 0.698, 0.691, 0.347),
        (2.0, 0.01, 0.955, 0.958, 0.957, 0.0479),
        (3.0, 0.3, 0.286, 0.316, 0.312, 0.699),
        (5.0, 0.3, 0.158, 0.181, 0.181, 0.730),
        (5.0, 0.1, 0.389, 0.382, 0.382, 0.479),
        (10.0, 0.1, 0.178, 0.168, 0.169, 0.526),
    ];
    for (depth, sticking, wall_mid, floor_centre, floor_mean, captured) in table {
        let facets = half_trench(1.0, depth, 1.0, 121);
        let walls = [-1.0, 0.5];
        let flux = Transport::new(gas(sticking), walls).arrival(&facets, &[]).unwrap().neutral;
        let exchange = Exchange::between(&facets, walls);
        let inside = |f: &Facet| f.middle().z < depth;
        let on_floor = |f: &Facet| f.middle().z == 0.0;
        let sum = |which: &dyn Fn(&Facet) -> bool, weight: &dyn Fn(usize) -> f64| -> f64 {
            let chosen = facets.iter().enumerate().filter(|(_, f)| which(f));
            chosen.map(|(i, f)| 2.0 * f.length() * weight(i)).sum()
        };
        let middle = facets
            .iter()
            .position(|f| f.normal.z < 0.5 && (f.middle().z - 0.5 * depth).abs() < 1e-9)
            .unwrap();
        let mean = sum(&on_floor, &|i| flux[i]);
        let kept = sum(&inside, &|i| sticking * flux[i]);
        let escaped = sum(&inside, &|i| (1.0 - sticking) * flux[i] * exchange.sky()[i]);
        let near = |what: &str, value: f64, exact: f64| {
            let case = format!("AR {depth}, S {sticking}, {what}: {value} {exact}");
            assert!((value - exact).abs() < 2e-3, "{case}");
        };
        near("wall middle", flux[middle], wall_mid);
        near("floor centre", *flux.last().unwrap(), floor_centre);
        near("floor mean", mean, floor_mean);
        near("captured", kept, captured);
        // The invariant: what is kept is what came in through the mouth less what left it.
        near("balance", kept, 1.0 - escaped);
    }
}

/// A beam reaches depth s / tan θ (geometry); above, a wall gets tan θ / 2 from one of two lobes.
#[test]
fn a_tilted_beam_reaches_its_depth() {
    let tilt = 20.0_f64.to_radians();
    let beam = Character { neutral: 0.0, directional: 1.0, tilt_rad: tilt, ..gas(1.0) };
    let facets = half_trench(1.0, 6.0, 1.0, 200);
    let rate = Transport::new(beam, [-1.0, 0.5]).arrival(&facets, &[]).unwrap().rate;
    let reach = 1.0 / tilt.tan();
    for (facet, rate) in facets.iter().zip(rate).filter(|(f, _)| f.normal.x > 0.5) {
        let lit = 6.0 - facet.middle().z < reach;
        let exact = if lit { 0.5 * tilt.tan() } else { 0.0 };
        assert!((rate - exact).abs() < 1e-12, "{facet:?}: {rate} {exact}");
    }
}
