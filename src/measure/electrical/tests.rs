//! Electrical figures of sections made by hand.

use super::*;
use crate::flow::{Flow, NextLevel, Site};
use crate::measure::hand::{Cell, SICOH, SIO2, Void, flow, nm};
use crate::sim::Stage;
use crate::source::Span;

const VOID: Void = Void { x: [-12.0, 12.0], z: [18.0, 70.0] };

/// Loose, for the tests only check what the bounds imply.
const ACCURACY: f64 = 0.02;

fn with_next_level(spaces: &[(f64, f64)]) -> Flow {
    let mut flow = flow(spaces);
    flow.next_level =
        Some(NextLevel { distance: nm(60.0), material: SICOH, span: Span::default() });
    flow
}

fn solved(flow: &Flow, coarse: &[Stage], fine: &[Stage], site: &Site) -> Electrical {
    let traced = Traced { flow, variant: &flow.variants[0], site, coarse, fine, facet_nm: 0.0 };
    Electrical::of(&traced, &[SIO2], ACCURACY).unwrap()
}

fn known(electrical: &Electrical, quantity: Quantity) -> Figure {
    let reading = electrical.reading(quantity, None, Reference::Default);
    reading.figure().unwrap_or_else(|| panic!("{}: {reading:?}", quantity.name()))
}

#[test]
fn a_void_lowers_coupling_and_everything_adds_up() {
    let flow = with_next_level(&[(40.0, 40.0)]);
    let site = &flow.variants[0].sites()[0];
    let cell = Cell { spaces: vec![40.0, 40.0] };
    let stages = cell.stages(&[(0, VOID), (1, VOID)]);
    let electrical = solved(&flow, &stages, &stages, site);
    let figures = electrical.figures(None).unwrap();
    let (left, right) = (figures.coupling_left_af_per_um, figures.coupling_right_af_per_um);
    assert!(left.low <= right.high && right.low <= left.high, "{left:?} {right:?}");
    let ground = figures.ground_af_per_um.unwrap();
    let total = figures.total_af_per_um;
    let coupling = figures.coupling_af_per_um;
    assert!(ground.low + coupling.low <= total.high);
    // Series and parallel bounds: between vacuum and the highest permittivity everywhere.
    assert!(figures.k_eff.low > 1.0 && figures.k_eff.high < 4.0, "{:?}", figures.k_eff);
    assert!(figures.k_eff_lateral.value < figures.k_eff.value, "the void lies between the lines");
    let gain = figures.void_gain.unwrap();
    assert!(gain.low > 0.2 && gain.high < 0.7, "{gain:?}");
    let filled = figures.coupling_filled_af_per_um.unwrap();
    let by_hand = 1.0 - coupling.value / filled.value;
    assert!((gain.value - by_hand).abs() < 1e-12);
    assert_eq!(figures.matrix_af_per_um.electrodes[..4], ["line", "left", "right", "ground"]);
    assert_eq!(figures.matrix_af_per_um.electrodes.len(), 8);
    assert!(!figures.open_top);
}

#[test]
fn between_facing_plates_a_void_is_a_capacitor_in_series() {
    // Lines ten spaces high: the middle of the space is a parallel-plate capacitor, 8 nm of oxide,
    // 24 nm of void, 8 nm of oxide, and the drop against solid oxide is that of the series formula
    // up to the ends of the void.
    let flow = with_next_level(&[(40.0, 40.0)]);
    let site = &flow.variants[0].sites()[0];
    let cell = Cell { spaces: vec![40.0, 40.0] };
    let void = Void { x: [-12.0, 12.0], z: [0.0, 80.0] };
    let mut stages = cell.stages(&[(0, void), (1, void)]);
    stages[3].section = std::sync::Arc::new(cell.section(0.0, 120.0, &[(0, void), (1, void)]));
    let electrical = solved(&flow, &stages, &stages, site);
    let drop = electrical.reading(Quantity::CouplingDrop, None, Reference::Material(SIO2));
    let drop = drop.figure().unwrap();
    let series = 1.0 - 40.0 / (16.0 + 24.0 * 4.0);
    assert!(drop.low < series && drop.high > series - 0.25, "{drop:?}, plates alone {series}");
    let default = known(&electrical, Quantity::CouplingDrop);
    assert!((default.value - drop.value).abs() < 1e-12, "without `between` the roof is meant");
}

#[test]
fn the_growth_moves_the_bounds_out() {
    let flow = with_next_level(&[(40.0, 40.0)]);
    let site = &flow.variants[0].sites()[0];
    let cell = Cell { spaces: vec![40.0, 40.0] };
    let fine = cell.stages(&[(0, VOID), (1, VOID)]);
    let smaller = Void { x: [-10.0, 10.0], z: [18.0, 70.0] };
    let coarse = cell.stages(&[(0, smaller), (1, smaller)]);
    let alone = known(&solved(&flow, &fine, &fine, site), Quantity::Coupling);
    let both = known(&solved(&flow, &coarse, &fine, site), Quantity::Coupling);
    assert_eq!(alone.value, both.value);
    assert!(both.high - both.low > 1.5 * (alone.high - alone.low), "{alone:?} {both:?}");
}

#[test]
fn an_end_of_a_row_has_one_neighbour() {
    let flow = with_next_level(&[(40.0, 40.0)]);
    let cell = Cell { spaces: vec![40.0, 30.0, 80.0] };
    let stages = cell.stages(&[]);
    let site = Site::Row { row: 0, space: 3, label: "edge:3".into() };
    let electrical = solved(&flow, &stages, &stages, &site);
    let figures = electrical.figures(None).unwrap();
    assert_eq!(figures.coupling_right_af_per_um.value, 0.0);
    assert!(figures.coupling_left_af_per_um.low > 0.0);
    assert_eq!(figures.matrix_af_per_um.electrodes, ["line", "left", "ground"]);
    assert!(figures.void_gain.is_none());
}

#[test]
fn a_line_shorted_to_its_neighbour_has_no_coupling() {
    let flow = flow(&[(40.0, 40.0)]);
    let site = &flow.variants[0].sites()[0];
    let cell = Cell { spaces: vec![40.0, 40.0] };
    let mut stages = cell.stages(&[]);
    let mut section = (*stages[3].section).clone();
    for body in &mut section.bodies {
        body.material = crate::measure::hand::CU;
    }
    stages[3].section = std::sync::Arc::new(section);
    let reading =
        solved(&flow, &stages, &stages, site).reading(Quantity::Coupling, None, Reference::Default);
    assert_eq!(reading, Reading::Missing(Missing::Shorted));
}

#[test]
fn without_plane_or_next_level_there_is_no_ground() {
    let flow = flow(&[(40.0, 40.0)]);
    let site = &flow.variants[0].sites()[0];
    let cell = Cell { spaces: vec![40.0, 40.0] };
    let stages = cell.stages(&[]);
    let electrical = solved(&flow, &stages, &stages, site);
    let ground = electrical.reading(Quantity::Ground, None, Reference::Default);
    assert_eq!(ground, Reading::Missing(Missing::NoGround));
    assert!(electrical.figures(None).unwrap().open_top);
    let gain = electrical.reading(Quantity::VoidGain, None, Reference::Default);
    assert_eq!(gain, Reading::Missing(Missing::NoVoid));
    let named = electrical.reading(Quantity::Coupling, Some("gate"), Reference::Default);
    assert_eq!(named, Reading::Missing(Missing::NoSuchElectrode));
}
