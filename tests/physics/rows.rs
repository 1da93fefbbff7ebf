//! Rows of unequal lines, recesses and slants: growth ends with a film, whatever meets in it.
//!
//! The scenes are drawn from a fixed seed. What is asked of each holds for any growth: the film lies
//! between the solids and what a conformal film of the same thickness reaches, voids lie in
//! spaces and are shut off before the end, and the area of film, voids and what stays open adds up.

use crate::scenes::resolution;
use gapwright::front::{Character, Scene, Solid, grow};
use gapwright::geom::{Point, Region};

/// A multiplicative congruential generator modulo 2³¹ − 1 (Park and Miller, Commun. ACM 31, 1192
/// (1988), from memory).
struct Draw(u64);

impl Draw {
    fn share(&mut self) -> f64 {
        self.0 = self.0 * 48_271 % 0x7fff_ffff;
        self.0 as f64 / 2_147_483_647.0
    }

    fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.share()
    }

    fn of(&mut self, values: &[f64]) -> f64 {
        values[(self.share() * values.len() as f64) as usize % values.len()]
    }
}

struct Row {
    scene: Scene,
    character: Character,
    thickness: f64,
    least_space: f64,
}

fn row(draw: &mut Draw) -> Row {
    let lines = 1 + (draw.share() * 3.0) as usize;
    let height = draw.between(30.0, 140.0);
    let slope = draw.between(-0.05, 0.08);
    let spaces: Vec<f64> =
        (0..=lines).map(|_| draw.of(&[14.0, 20.0, 26.0, 26.0, 32.0, 48.0, 90.0])).collect();
    let recess = draw.of(&[1.0, 1.0, 0.5, 0.8]);
    let mut x = spaces[0] / 2.0;
    let mut rings = Vec::new();
    for right in &spaces[1..] {
        let width = draw.between(16.0, 40.0);
        let run = (slope * height).clamp(-0.4 * width, 0.4 * right);
        let at = Point::new;
        rings.push(vec![
            at(x - run, 0.0),
            at(x + width + run, 0.0),
            at(x + width, height),
            at(x, height),
        ]);
        x += width + right;
    }
    let walls = [0.0, x - spaces[lines] / 2.0];
    let lines = Region::from_rings(rings).intersection(&Region::rectangle(walls, [0.0, height]));
    let fill = Region::rectangle(walls, [-20.0, height * (1.0 - recess)]);
    let solids = Region::union_all(&[lines, fill, Region::rectangle(walls, [-20.0, 0.0])]);
    let [conformal, directional] =
        [[0.0, 0.0], [0.2, 0.0], [0.0, 0.4], [0.1, 0.5]][(draw.share() * 4.0) as usize % 4];
    let character = Character {
        conformal,
        directional,
        exponent: Some(draw.of(&[1.0, 5.0, 40.0, 200.0])),
        tilt_rad: draw.of(&[0.0, 0.0, 0.3]),
        neutral: 1.0 - conformal - directional,
        sticking: draw.of(&[0.01, 0.05, 0.2, 0.5, 1.0]),
    };
    let least_space = spaces.iter().copied().fold(f64::INFINITY, f64::min);
    let thickness = least_space * draw.between(0.3, 2.5);
    Row {
        scene: Scene { walls, solids: vec![Solid { region: solids, rate: 1.0 }] },
        character,
        thickness,
        least_space,
    }
}

#[test]
fn rows_of_any_lines_grow() {
    let mut draw = Draw(20_261);
    let mut closed = 0;
    for case in 0..24 {
        let Row { scene, character, thickness, least_space } = row(&mut draw);
        let growth = grow(&scene, &character, thickness, &resolution(least_space / 8.0));
        let growth = growth.unwrap_or_else(|error| panic!("row {case}: {error}"));
        let solids = &scene.solids[0].region;
        let dust = 1e-3 * growth.film.area();
        assert!(growth.film.intersection(solids).area() < 1e-6 * dust, "row {case}");
        // No facet is faster than an open flat by more than a tilted lobe brings to a slanted one.
        let whole =
            solids.union(&solids.mirrored(scene.walls[0])).union(&solids.mirrored(scene.walls[1]));
        let most = whole.grown(1.1 * thickness, 0.1);
        assert!(growth.film.difference(&most).area() < dust, "row {case}");
        for closure in &growth.closures {
            assert!((0.0..=thickness).contains(&closure.thickness_nm), "row {case}");
            assert!(closure.void.intersection(&growth.film).area() < dust, "row {case}");
            assert!(closure.void.intersection(solids).area() < dust, "row {case}");
            closed += usize::from(!closure.void.is_empty());
        }
        let voids = Region::union_all(growth.closures.iter().map(|closure| &closure.void));
        let filled = Region::union_all(&[solids.clone(), growth.film.clone(), voids]);
        let open = Region::rectangle(scene.walls, [-20.0, 400.0]).difference(&filled);
        let cut_off: f64 = open.parts().skip(1).map(|part| part.area()).sum();
        assert!(open.parts().count() == 1 || cut_off < 1.0, "row {case}: {cut_off} nm2 lost");
    }
    assert!(closed > 10, "{closed} voids");
}
