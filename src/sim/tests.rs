//! Sections that can be worked out by hand, step by step.

use proptest::prelude::*;

use super::hand::{Hand, height, nm};
use super::*;
use crate::flow::{Action, Place, State};
use crate::geom::Point;

fn last(traces: &[CellTrace]) -> &Stage {
    traces[0].stages.last().unwrap()
}

fn area(section: &Section, hand: &Hand, name: &str) -> f64 {
    section.area_of(hand.id(name))
}

#[test]
fn a_tapered_lined_line_with_an_over_film() {
    let hand = Hand::new(40.0, 100.0, &[60.0]).taper(5.0).liner(2.0, "TaN").over(10.0, "SiN");
    let traces = hand.run();
    let section = &traces[0].stages[0].section;
    let drift = 100.0 * 5f64.to_radians().tan();
    let line = 100.0 * (40.0 + drift);
    let sideways = 2.0 / 5f64.to_radians().cos();
    let core_top = 40.0 - 2.0 * sideways;
    let core_foot = core_top + 2.0 * 98.0 * 5f64.to_radians().tan();
    let core = 98.0 * (core_top + core_foot) / 2.0;
    assert!((area(section, &hand, "Cu") - core).abs() < 1e-3);
    assert!((area(section, &hand, "TaN") - (line - core)).abs() < 1e-3);
    assert!((area(section, &hand, "SiCOH") - (100.0 * 100.0 - line)).abs() < 1e-3);
    assert!((area(section, &hand, "SiN") - 1000.0).abs() < 1e-3);
    assert!((area(section, &hand, "SiCN") - 2000.0).abs() < 1e-3);
    assert_eq!(section.drawn.walls, [-50.0, 50.0]);
    assert_eq!(traces[0].stages[0].states, [State::Solid, State::Solid]);
    section.check().unwrap();
}

#[test]
fn rounded_corners_lose_a_square_less_a_quarter_circle() {
    let hand = Hand::new(40.0, 100.0, &[60.0]).wafer(|wafer| wafer.lines.corner_radius = nm(10.0));
    let traces = hand.run();
    let lost = 4000.0 - area(&traces[0].stages[0].section, &hand, "Cu");
    let exact = 2.0 * 100.0 * (1.0 - std::f64::consts::PI / 4.0);
    assert!((lost - exact).abs() < 0.2, "{lost} {exact}");
}

#[test]
fn the_same_wafer_from_a_hundredth_of_a_nanometre_to_a_hundred_micrometres() {
    for scale in [1e-3, 1.0, 1e4] {
        let hand = Hand::new(10.0 * scale, 10.0 * scale, &[10.0 * scale]).taper(3.0);
        let traces = hand.polish(-2.0 * scale).run();
        let section = &last(&traces).section;
        let hand = Hand::new(1.0, 1.0, &[1.0]);
        let foot = 10.0 + 2.0 * 10.0 * 3f64.to_radians().tan();
        let cut = 10.0 + 2.0 * 2.0 * 3f64.to_radians().tan();
        let exact = 8.0 * (foot + cut) / 2.0;
        let found = area(section, &hand, "Cu") / (scale * scale);
        assert!((found - exact).abs() < 1e-3 * exact, "{scale}: {found} {exact}");
    }
}

#[test]
fn a_row_stands_between_mirrors_in_its_outer_spaces() {
    let hand = Hand::new(20.0, 50.0, &[20.0]).row(&[26.0, 100.0], &[26.0, 60.0, 180.0]);
    let traces = hand.run();
    assert_eq!(traces.len(), 2);
    let drawn = &traces[1].stages[0].section.drawn;
    assert_eq!(drawn.walls, [0.0, 13.0 + 26.0 + 60.0 + 100.0 + 90.0]);
    assert_eq!(drawn.lines[1].top_x, [99.0, 199.0]);
    let widths: Vec<_> = (0..3).map(|at| drawn.space_widths(at)[0]).collect();
    assert_eq!(widths, [26.0, 60.0, 180.0]);
    assert_eq!(traces[1].cell.sites.len(), 3);
    assert_eq!(traces[1].stages[0].states, [State::Solid; 3]);
}

fn drawing_error(hand: &Hand) -> String {
    match hand.try_run() {
        Err(SimError::Drawing { message, .. }) => message,
        other => panic!("{other:?}"),
    }
}

#[test]
fn what_cannot_be_drawn_is_said() {
    let base = || Hand::new(20.0, 100.0, &[30.0]);
    assert!(drawing_error(&base().liner(10.0, "TaN")).contains("no core"));
    assert!(drawing_error(&base().taper(9.0)).contains("overlap"));
    assert!(drawing_error(&base().taper(-6.0)).contains("no width left"));
    let round = base().wafer(|wafer| wafer.lines.corner_radius = nm(10.5));
    assert!(drawing_error(&round).contains("corner radius"));
    let bare = base().wafer(|wafer| {
        wafer.below.clear();
        wafer.between = None;
    });
    assert!(drawing_error(&bare).contains("nothing lies under"));
}

#[test]
fn polish_is_a_plane_and_says_so() {
    let hand =
        Hand::new(20.0, 100.0, &[30.0]).over(30.0, "SiO2").polish(10.0).polish(-5.0).polish(0.0);
    let traces = hand.run();
    let stages = &traces[0].stages;
    assert_eq!(stages[1].section.surface_top(), 110.0);
    assert_eq!(stages[1].exposed_before[0].length_nm, 50.0);
    assert_eq!(stages[1].events, [Event::Planed { z_nm: 110.0, surface_nm: 130.0 }]);
    assert_eq!(stages[2].section.surface_top(), 95.0);
    assert_eq!(stages[2].states, [State::Solid; 2]);
    let exposed: Vec<_> =
        stages[3].exposed_before.iter().map(|e| (e.material, e.length_nm)).collect();
    assert_eq!(exposed, [(hand.id("SiCOH"), 30.0), (hand.id("Cu"), 20.0)]);
    assert!(stages[3].events.contains(&Event::NoEffect));
}

#[test]
fn polish_until_takes_the_highest_stop_of_all_sites() {
    let hand = Hand::new(20.0, 100.0, &[30.0, 90.0])
        .over(30.0, "SiO2")
        .over(5.0, "SiN")
        .step("cmp", |hand, process| Action::PolishUntil { stop: hand.id("SiO2"), process });
    for trace in hand.run() {
        assert_eq!(trace.stages[1].section.surface_top(), 130.0);
    }
    let lost = Hand::new(20.0, 100.0, &[30.0])
        .step("cmp", |hand, process| Action::PolishUntil { stop: hand.id("SiN"), process });
    assert!(matches!(lost.try_run(), Err(SimError::Step { .. })));
}

/// Spaces filled with a sacrificial polymer, capped by 20 nm of a permeable film.
fn capped(cap: &str) -> Hand {
    Hand::new(20.0, 100.0, &[30.0]).between("polynorbornene").over(20.0, cap)
}

#[test]
fn a_release_through_what_lets_pass_leaves_a_void() {
    let hand = capped("SiCOH").release("polynorbornene").polish(10.0).polish(-10.0);
    let traces = hand.run();
    let stages = &traces[0].stages;
    assert_eq!(stages[1].states, [State::Sealed; 2]);
    assert_eq!(stages[1].section.voids.len(), 2);
    let void: f64 = stages[1].section.voids.iter().map(|void| void.area()).sum();
    assert!((void - 3000.0).abs() < 1e-6);
    assert_eq!(stages[2].states, [State::Sealed; 2]);
    assert_eq!(stages[3].states, [State::Open; 2]);
    assert_eq!(stages[3].throats_nm, [Some(30.0); 2]);
    let opened = stages[3].events.iter().filter(|e| matches!(e, Event::Opened { .. })).count();
    assert_eq!(opened, 2);
}

#[test]
fn a_hermetic_cap_traps_and_says_so() {
    let traces = capped("SiN").release("polynorbornene").run();
    let stage = last(&traces);
    assert_eq!(stage.states, [State::Solid; 2]);
    assert!(stage.events.contains(&Event::NoEffect));
    let trapped = |event: &&Event| matches!(event, Event::Trapped { share: None, .. });
    assert_eq!(stage.events.iter().filter(trapped).count(), 2);
}

#[test]
fn a_sealed_void_is_hermetic_under_a_thick_enough_film() {
    for (thickness, state) in
        [(12.0, State::Hermetic), (10.0, State::Hermetic), (8.0, State::Sealed)]
    {
        let mut hand = capped("SiCOH").release("polynorbornene");
        hand = hand.fill("SiN", 20.0 + thickness);
        assert_eq!(last(&hand.run()).states, [state; 2], "{thickness}");
    }
}

#[test]
fn a_strip_takes_what_it_uncovers_and_carries_off_what_it_bore() {
    let hand =
        Hand::new(20.0, 100.0, &[30.0]).over(10.0, "resist").over(5.0, "SiO2").strip("resist");
    let traces = hand.run();
    assert_eq!(last(&traces).section.surface_top(), 115.0, "nothing of it is exposed");
    let hand = Hand::new(20.0, 100.0, &[30.0]).fill("resist", 10.0).strip("resist");
    assert_eq!(last(&hand.run()).section.surface_top(), 100.0);
}

#[test]
fn a_mask_covers_its_sites_only() {
    let hand = Hand::new(20.0, 100.0, &[30.0, 60.0]).row(&[20.0, 20.0], &[30.0, 40.0, 50.0]);
    let sites = hand.variant.sites();
    let over = vec![sites[1].clone(), sites[3].clone()];
    let hand = hand.step("spin-resist", |hand, process| Action::Mask {
        thickness: nm(50.0),
        material: hand.id("resist"),
        over,
        process,
    });
    let traces = hand.run();
    let resist: Vec<_> =
        traces.iter().map(|trace| area(&trace.stages[1].section, &hand, "resist")).collect();
    assert!(!traces[0].stages[1].acts && traces[1].stages[1].acts);
    assert_eq!(resist[0], 0.0);
    assert!((resist[1] - 80.0 * 50.0).abs() < 1e-6);
    assert!((resist[2] - 60.0 * 50.0).abs() < 1e-6, "from mid-line to mid-line");
}

#[test]
fn a_cure_shrinks_what_is_open_from_its_top() {
    let hand = Hand::new(20.0, 100.0, &[30.0]).fill("SiCOH", 20.0).cure(0.1, "SiCOH");
    let traces = hand.run();
    // Over the lines the fill is 20 high. In the spaces the body under it keeps its shape.
    assert!((last(&traces).section.surface_top() - 118.0).abs() < 1e-6);
}

#[test]
fn a_fill_that_is_too_wide_for_a_space_is_an_error() {
    let hand = capped("SiCOH").release("polynorbornene").polish(-10.0);
    let to = height(0.0, Place::Lines);
    let fill = hand.step_with(
        "spin-polymer",
        |process| process.fills_down_to_nm = Some(crate::library::Ranged::exact(35.0)),
        |hand, process| Action::Fill { material: hand.id("BCB"), to, process },
    );
    let Err(SimError::Step { message, site, .. }) = fill.try_run() else { panic!() };
    assert!(message.contains("30.00 nm wide") && site == "30 nm", "{message}");
}

#[test]
fn a_via_reports_its_slot_and_leaves_the_section() {
    let hand =
        capped("SiCOH").release("polynorbornene").step("via-fill", |hand, process| Action::Via {
            width: nm(16.0),
            material: hand.id("Cu"),
            liner: Some((nm(2.0), hand.id("TaN"))),
            overlay: nm(1.0),
            overetch: nm(5.0),
            process,
        });
    let traces = hand.run();
    let stages = &traces[0].stages;
    assert_eq!(stages[2].section, stages[1].section);
    let Event::Via { slot, bodies, line: 0, clearance_nm: Some(clearance) } = &stages[2].events[0]
    else {
        panic!("{:?}", stages[2].events)
    };
    // From 1 − 8 to 1 + 8 over a line that ends at 10; the void begins there, under the cap.
    let bounds = slot.bounds().unwrap();
    assert_eq!((bounds.min, bounds.max), (Point::new(-7.0, 100.0), Point::new(9.0, 120.0)));
    assert!((clearance - 1.0).abs() < 1e-6, "{clearance}");
    assert!((bodies[1].region.area() - 12.0 * 18.0).abs() < 0.1);
}

#[test]
fn variants_share_their_common_beginning() {
    let first = capped("SiCOH").release("polynorbornene").polish(10.0);
    let mut second = first.clone();
    second.variant.steps.pop();
    let second = second.polish(5.0);
    let simulator = Simulator::new(std::sync::Arc::clone(&first.library));
    let run = |hand: &Hand| simulator.run(&hand.variant, &Grain::default(), &|_, _| {}).unwrap();
    let (a, b) = (run(&first), run(&second));
    let same =
        |at: usize| std::sync::Arc::ptr_eq(&a[0].stages[at].section, &b[0].stages[at].section);
    assert!(same(0) && same(1) && !same(2));
    assert_eq!(b[0].stages[2].section, second.run()[0].stages[2].section);
}

#[test]
fn only_at_spares_the_other_spaces_of_a_row() {
    let hand = Hand::new(20.0, 100.0, &[30.0])
        .row(&[20.0, 20.0], &[30.0, 40.0, 50.0])
        .between("polynorbornene")
        .strip("polynorbornene")
        .only_at(&[2]);
    let traces = hand.run();
    assert!(!traces[0].stages[1].acts);
    assert_eq!(traces[1].stages[1].states, [State::Solid, State::Open, State::Solid]);
}

#[test]
fn a_beam_etch_takes_what_its_rates_allow_and_leaves_the_rest() {
    let hand = Hand::new(20.0, 100.0, &[30.0]).etch(40.0, "SiCOH", 0.0);
    let traces = hand.run();
    let stage = last(&traces);
    assert!((area(&stage.section, &hand, "SiCOH") - 30.0 * 60.0).abs() < 0.1);
    assert!((area(&stage.section, &hand, "Cu") - 2000.0).abs() < 1e-3);
    assert_eq!(stage.states, [State::Open; 2]);
    assert!((stage.throats_nm[0].unwrap() - 30.0).abs() < 1e-3, "{:?}", stage.throats_nm);
}

#[test]
fn an_etch_until_stops_everywhere_when_one_site_is_there() {
    let hand = Hand::new(20.0, 100.0, &[30.0, 60.0]).until("SiCOH", "SiCN", 0.0);
    for trace in hand.run() {
        let left = area(&trace.stages[1].section, &hand, "SiCOH");
        assert!(left < 1.0, "{left}");
    }
    let half = Hand::new(20.0, 100.0, &[30.0]).wafer(|wafer| wafer.below.clear());
    assert!(matches!(half.until("SiCOH", "SiCN", 0.0).try_run(), Err(SimError::Step { .. })));
}

#[test]
fn an_etch_through_all_that_is_drawn_is_an_error_and_bulk_is_deep_enough() {
    let through = Hand::new(20.0, 100.0, &[30.0]).wafer(|wafer| wafer.below.clear());
    let Err(SimError::Step { message, .. }) = through.etch(120.0, "SiCOH", 0.0).try_run() else {
        panic!()
    };
    assert!(message.contains("everything"), "{message}");
    let hand = Hand::new(20.0, 100.0, &[30.0]).between("SiO2").bulk("SiO2").wafer(|wafer| {
        wafer.below.pop();
    });
    let deep = hand.etch(2000.0, "SiO2", 0.0);
    let traces = deep.run();
    let floor = last(&traces).section.ambient().bounds().unwrap().min.z;
    assert!((floor + 1900.0).abs() < 0.5, "{floor}");
}

#[test]
fn a_conversion_turns_as_much_as_it_takes() {
    let hand = Hand::new(20.0, 100.0, &[30.0]).convert(5.0, "SiCOH", "damaged-SiCOH");
    let traces = hand.run();
    let section = &last(&traces).section;
    let (left, made) = (area(section, &hand, "SiCOH"), area(section, &hand, "damaged-SiCOH"));
    assert!((left + made - 3000.0).abs() < 1e-3);
    assert!((made - 150.0).abs() < 0.1, "{made}");
}

#[test]
fn an_etch_at_one_space_of_a_row_spares_the_others() {
    let hand = Hand::new(20.0, 100.0, &[30.0])
        .row(&[20.0, 20.0], &[30.0, 40.0, 50.0])
        .etch(40.0, "SiCOH", 0.0)
        .only_at(&[2]);
    let traces = hand.run();
    assert_eq!(traces[1].stages[1].states, [State::Solid, State::Open, State::Solid]);
    let left = area(&traces[1].stages[1].section, &hand, "SiCOH");
    assert!((left - (15.0 + 40.0 + 25.0) * 100.0 + 40.0 * 40.0).abs() < 0.5, "{left}");
}

#[test]
fn a_conformal_film_is_as_thick_everywhere() {
    let hand = Hand::new(20.0, 100.0, &[30.0]).empty().deposit(5.0, "SiO2", "ald-oxide");
    let traces = hand.run();
    let stage = last(&traces);
    let exact = 5.0 * 20.0 + std::f64::consts::PI * 25.0 / 2.0 + 5.0 * 30.0 + 2.0 * 5.0 * 95.0;
    let found = area(&stage.section, &hand, "SiO2");
    assert!((found - exact).abs() < 0.002 * exact, "{found} {exact}");
    assert_eq!(stage.states, [State::Open; 2]);
    assert!((stage.throats_nm[1].unwrap() - 20.0).abs() < 0.1, "{:?}", stage.throats_nm);
    let exposed: Vec<_> = stage.exposed_before.iter().map(|e| e.length_nm).collect();
    assert_eq!(exposed, [220.0, 30.0], "Cu on three sides, SiCN on the floor");
}

#[test]
fn a_seal_closes_both_spaces_of_a_line_alike() {
    let hand = Hand::new(32.0, 64.0, &[32.0]).empty().deposit(60.0, "SiO2", "silane-pecvd");
    let traces = hand.run();
    let stage = last(&traces);
    let closed: Vec<_> = stage
        .events
        .iter()
        .filter_map(|event| match event {
            Event::Closed { space, thickness_nm, void, .. } => {
                Some((*space, *thickness_nm, void.area()))
            }
            _ => None,
        })
        .collect();
    assert_eq!(closed.len(), 2, "{:?}", stage.events);
    assert_eq!((closed[0].0, closed[1].0), (0, 1));
    assert_eq!((closed[0].1, closed[0].2), (closed[1].1, closed[1].2));
    assert_eq!(stage.section.voids.len(), 2);
    assert_eq!(stage.section.voids[0].area(), stage.section.voids[1].area());
    assert!((stage.section.voids[1].area() - closed[1].2).abs() < 0.01 * closed[1].2);
    assert_eq!(stage.states, [State::Sealed; 2]);
}

#[test]
fn a_film_that_is_choosy_grows_on_metal_only() {
    let hand = Hand::new(20.0, 100.0, &[30.0]).deposit(2.0, "Co", "selective-cobalt");
    let found = area(&last(&hand.run()).section, &hand, "Co");
    assert!((found - 40.0).abs() < 8.0, "{found}");
}

#[test]
fn a_dose_reaches_down_as_far_as_its_formula_says() {
    // Bracket 1 + 19 a/4 + 3 a²/2 at a = 1 (Gordon et al. 2003): down to twice the width of 30.
    let (saturation, mass, celsius) = (1e19, 100.0, 200.0);
    let flat = saturation
        * (2.0 * std::f64::consts::PI * mass * 1.66054e-27 * 1.380649e-23 * (celsius + 273.15))
            .sqrt();
    let exact = crate::library::Ranged::exact;
    let hand =
        Hand::new(20.0, 100.0, &[30.0]).empty().deposit_with(3.0, "SiO2", "ald-oxide", |p| {
            p.dose_pa_s = Some(exact(7.25 * flat));
            p.saturation_per_m2 = Some(exact(saturation));
            p.molecule_mass_u = Some(exact(mass));
            p.temperature_c = Some(exact(celsius));
        });
    let traces = hand.run();
    let section = &last(&traces).section;
    let film = section.bodies.iter().find(|body| body.material == hand.id("SiO2")).unwrap();
    let lowest = film.region.bounds().unwrap().min.z;
    // Where the film ends it is round.
    assert!((36.9..=40.0).contains(&lowest), "{lowest}");
    let starved = Hand::new(20.0, 100.0, &[30.0]).deposit_with(3.0, "SiO2", "ald-oxide", |p| {
        p.dose_pa_s = Some(exact(0.5 * flat));
        p.saturation_per_m2 = Some(exact(saturation));
        p.molecule_mass_u = Some(exact(mass));
        p.temperature_c = Some(exact(celsius));
    });
    assert!(matches!(starved.try_run(), Err(SimError::Step { .. })));
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(24))]

    /// Whatever is drawn and filled, released and cut: the partition holds, the walls hold, and
    /// areas balance (the simulator checks both after every step).
    #[test]
    fn planar_steps_keep_the_partition(
        width in 5.0..80.0f64,
        tall in 5.0..150.0f64,
        spaces in proptest::collection::vec(25.0..120.0f64, 1..4),
        taper in -1.5..1.5f64,
        plane in -4.0..40.0f64,
        row in proptest::bool::ANY,
    ) {
        let mut hand = Hand::new(width, tall, &spaces)
            .taper(taper)
            .between("polynorbornene")
            .over(10.0, "SiCOH");
        if row {
            hand = hand.row(&[width, 2.0 * width], &[spaces[0], 33.3, 77.7]);
        }
        let hand = hand.release("polynorbornene").fill("SiO2", 30.0).polish(plane)
            .fill("SiN", 50.0).polish(plane + 1.0).cure(0.2, "SiN");
        for trace in hand.run() {
            for stage in &trace.stages {
                stage.section.check().unwrap();
            }
        }
    }
}
