//! Flows, sections and traces made by hand, for tests: rectangles, so that every quantity is known.

use std::sync::Arc;

use crate::flow::{
    Action, Flow, Height, Layer, Lines, Place, ProcessUse, Role, SpacePair, State, Step, Variant,
    Wafer,
};
use crate::geom::{Point, Region};
use crate::library::{Library, MaterialId, Process, Verb};
use crate::sim::{Body, Drawn, DrawnLine, Event, Origin, Section, Stage};
use crate::source::{Source, Span};
use crate::units::{Amount, Angle, Length};

/// Names of the materials of [`library`], in order; the index is the id.
pub const MATERIALS: [&str; 5] = ["Cu", "SiCOH", "SiN", "SiO2", "TaN"];
/// The line.
pub const CU: MaterialId = MaterialId(0);
/// The dielectric between the lines.
pub const SICOH: MaterialId = MaterialId(1);
/// The seal.
pub const SIO2: MaterialId = MaterialId(3);

/// A length without tolerance.
pub fn nm(value: f64) -> Amount<Length> {
    Amount::exact(Length::from_nm(value))
}

/// Five materials with round numbers.
pub fn library() -> Library {
    let text = "materials:
  Cu: {kind: conductor, label: line, family: metal, resistivity_uohm_cm: 1.72, mean_free_path_nm: 39, grain_reflection: 0.3, surface_specularity: 0, source: made up}
  SiCOH: {kind: dielectric, label: between, family: low-k, permittivity: 3, source: made up}
  SiN: {kind: dielectric, label: film, family: nitride, permittivity: 7, source: made up}
  SiO2: {kind: dielectric, label: seal, family: oxide, permittivity: 4, source: made up}
  TaN: {kind: conductor, label: liner, family: barrier, source: made up}
";
    let source = Source::new("hand.yaml", text);
    let file = crate::library::parse(&source).expect("the hand-made library is well formed");
    let (library, _) = Library::default().with(file, &source);
    assert_eq!(library.materials.iter().map(|m| m.name.as_str()).collect::<Vec<_>>(), MATERIALS);
    library
}

/// A step by a process without numbers.
pub fn step(op: u32, action: impl FnOnce(ProcessUse) -> Action) -> Step {
    let process = Process {
        name: "by-hand".into(),
        verb: Verb::Deposit,
        default: false,
        materials: Vec::new(),
        temperature_c: None,
        pressure_torr: None,
        molecule_diameter_nm: None,
        ambient: Vec::new(),
        arrival: None,
        grows_on: Default::default(),
        rates: Default::default(),
        shrinks: crate::library::Ranged::exact(0.0),
        fills_down_to_nm: None,
        drawn_openings: false,
        dose_pa_s: None,
        saturation_per_m2: None,
        molecule_mass_u: None,
        hazards: Vec::new(),
        source: "made up".into(),
    };
    let process = ProcessUse { process: Arc::new(process), overrides: Vec::new() };
    Step {
        op,
        op_text: format!("{op:03}"),
        action: action(process),
        only_at: None,
        after: Vec::new(),
        before: Vec::new(),
        note: None,
        span: Span::default(),
    }
}

/// 010 etch, 020 seal of 60 nm, 030 polish: lines 20 nm wide and 80 nm high with these spaces.
pub fn flow(spaces: &[(f64, f64)]) -> Flow {
    let spaces = spaces.iter().map(|(l, r)| SpacePair::drawn(nm(*l), nm(*r))).collect();
    let wafer = Wafer {
        below: Vec::new(),
        lines: Lines {
            width: nm(20.0),
            spaces,
            by_pitch: false,
            taper: Amount::exact(Angle::from_degrees(0.0)),
            corner_radius: nm(0.0),
            span: Span::default(),
        },
        rows: Vec::new(),
        layers: vec![Layer {
            thickness: nm(80.0),
            material: CU,
            name: None,
            span: Span::default(),
        }],
        liner: None,
        between: None,
        over: Vec::new(),
        span: Span::default(),
    };
    let plane = Amount { nominal: Length::from_nm(40.0), three_sigma: Length::from_nm(6.0) };
    let to = Height { offset: plane, place: Place::Lines };
    let steps = vec![
        step(10, |process| Action::Etch { depth: nm(70.0), material: SICOH, process }),
        step(20, |process| Action::Deposit {
            role: Role::Seal,
            thickness: nm(60.0),
            material: SIO2,
            process,
        }),
        step(30, |process| Action::Polish { to, process }),
    ];
    Flow {
        name: "by-hand".into(),
        title: None,
        source: Arc::new(Source::new("by-hand.flow", "flow by-hand\n")),
        library: Arc::new(library()),
        variants: vec![Variant { split: None, wafer, steps }],
        nets: Vec::new(),
        next_level: None,
        limits: Vec::new(),
        waivers: Vec::new(),
    }
}

/// A rectangular void between the walls of a cell with the middle of its space, x from there.
#[derive(Debug, Clone, Copy)]
pub struct Void {
    /// Left and right end from mid-space.
    pub x: [f64; 2],
    /// Bottom and top above the line bottom.
    pub z: [f64; 2],
}

/// Lines 20 nm wide and 80 nm high at some spaces; a row where there are several lines.
#[derive(Debug, Clone)]
pub struct Cell {
    /// All spaces, the outer ones whole.
    pub spaces: Vec<f64>,
}

impl Cell {
    /// What the wafer draws: in an array the line is centred at x = 0.
    pub fn drawn(&self) -> Drawn {
        let lines = self.spaces.len() - 1;
        let start = if lines == 1 { -10.0 - self.spaces[0] / 2.0 } else { 0.0 };
        let mut x = start + self.spaces[0] / 2.0;
        let mut drawn = Vec::new();
        for space in &self.spaces[1..] {
            drawn.push(DrawnLine { top_x: [x, x + 20.0], bottom_x: [x, x + 20.0] });
            x += 20.0 + space;
        }
        let end = x - self.spaces[lines] / 2.0;
        Drawn { walls: [start, end], line_top: 80.0, lines: drawn, layer_tops: vec![80.0] }
    }

    /// Lines on 20 nm of dielectric, which also fills the spaces up to `floor`; from there up to
    /// `surface` it is oxide, with these voids in these spaces. No oxide where `surface` is `floor`.
    pub fn section(&self, floor: f64, surface: f64, voids: &[(usize, Void)]) -> Section {
        let drawn = self.drawn();
        let across = drawn.walls;
        let lines: Vec<_> =
            drawn.lines.iter().map(|line| Region::rectangle(line.top_x, [0.0, 80.0])).collect();
        let all_lines = Region::union_all(&lines);
        let voids: Vec<_> = voids.iter().map(|(space, void)| self.void(*space, *void)).collect();
        let body = |material, origin, region| Body { material, origin, region };
        let mut bodies: Vec<_> = lines
            .iter()
            .enumerate()
            .map(|(line, region)| body(CU, Origin::Line { line, layer: 0 }, region.clone()))
            .collect();
        let below = Region::rectangle(across, [-20.0, floor]).difference(&all_lines);
        bodies.push(body(SICOH, Origin::Between, below));
        if surface > floor {
            let oxide = Region::rectangle(across, [floor, surface])
                .difference(&all_lines)
                .difference(&Region::union_all(&voids));
            bodies.push(body(SIO2, Origin::Step(1), oxide));
        }
        Section { drawn, bodies, seams: Vec::new(), voids }
    }

    /// A void in the section's x, clipped at the walls.
    pub fn void(&self, space: usize, void: Void) -> Region {
        let drawn = self.drawn();
        let middle = match space {
            0 => drawn.walls[0],
            at if at == drawn.lines.len() => drawn.walls[1],
            at => (drawn.lines[at - 1].top_x[1] + drawn.lines[at].top_x[0]) / 2.0,
        };
        let [left, right] = void.x.map(|x| (x + middle).clamp(drawn.walls[0], drawn.walls[1]));
        Region::rectangle([left, right], void.z)
    }

    /// The stages of [`flow`]: as found, etched down to 10 nm, sealed with these voids at 50 nm of
    /// 60, polished to 120 nm.
    pub fn stages(&self, voids: &[(usize, Void)]) -> Vec<Stage> {
        let spaces = self.spaces.len();
        let stage = |step, section, events, state| Stage {
            step,
            acts: true,
            exposed_before: Vec::new(),
            section: Arc::new(section),
            events,
            states: vec![state; spaces],
            throats_nm: vec![None; spaces],
        };
        let closed = voids.iter().map(|&(space, void)| Event::Closed {
            space,
            thickness_nm: 50.0,
            throat: Point::new(0.0, void.z[1]),
            void: self.void(space, void),
        });
        let planed = vec![Event::Planed { z_nm: 120.0, surface_nm: 140.0 }];
        vec![
            stage(None, self.section(80.0, 80.0, &[]), Vec::new(), State::Solid),
            stage(Some(0), self.section(10.0, 10.0, &[]), Vec::new(), State::Open),
            stage(Some(1), self.section(10.0, 140.0, voids), closed.collect(), State::Sealed),
            stage(Some(2), self.section(10.0, 120.0, voids), planed, State::Sealed),
        ]
    }
}
