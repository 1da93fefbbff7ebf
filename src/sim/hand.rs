//! Wafers and steps made by hand, for tests: the built-in library, lengths in nm.

use std::sync::Arc;

use super::{CellTrace, Grain, SimError, run};
use crate::flow::{
    Action, Below, Between, Film, Flow, Height, Layer, Lines, Place, ProcessUse, Role, Row, Site,
    SpacePair, Step, Variant, Wafer,
};
use crate::library::{Arrival, Exponent, Library, MaterialId, Process, Ranged};
use crate::source::{Source, Span, Spanned};
use crate::units::{Amount, Angle, Duration, Length, Share, Temperature};

/// A length without tolerance.
pub fn nm(value: f64) -> Amount<Length> {
    Amount::exact(Length::from_nm(value))
}

pub fn height(offset: f64, place: Place) -> Height {
    Height { offset: nm(offset), place }
}

/// A flow in the making.
#[derive(Clone)]
pub struct Hand {
    pub library: Arc<Library>,
    pub variant: Variant,
}

impl Hand {
    /// Lines of Cu on a film of SiCN, 20 nm thick, between lines SiCOH.
    pub fn new(width: f64, tall: f64, spaces: &[f64]) -> Self {
        let library = Library::built_in();
        let id = |name: &str| library.material_id(name).unwrap();
        let span = Span::default();
        let film = |thickness, name| Film { thickness: nm(thickness), material: id(name), span };
        let wafer = Wafer {
            below: vec![Below::Film(film(20.0, "SiCN"))],
            lines: Lines {
                width: nm(width),
                spaces: spaces.iter().map(|&s| SpacePair::drawn(nm(s), nm(s))).collect(),
                by_pitch: false,
                taper: Amount::exact(Angle::from_degrees(0.0)),
                corner_radius: nm(0.0),
                span,
            },
            rows: Vec::new(),
            layers: vec![Layer { thickness: nm(tall), material: id("Cu"), name: None, span }],
            liner: None,
            between: Some(Between { material: id("SiCOH"), to: height(0.0, Place::Lines), span }),
            over: Vec::new(),
            span,
        };
        let variant = Variant { split: None, wafer, steps: Vec::new() };
        Self { library, variant }
    }

    pub fn id(&self, name: &str) -> MaterialId {
        self.library.material_id(name).unwrap_or_else(|| panic!("no material {name}"))
    }

    pub fn film(&self, thickness: f64, name: &str) -> Film {
        Film { thickness: nm(thickness), material: self.id(name), span: Span::default() }
    }

    pub fn wafer(mut self, change: impl FnOnce(&mut Wafer)) -> Self {
        change(&mut self.variant.wafer);
        self
    }

    pub fn bulk(self, name: &str) -> Self {
        let bulk = Below::Bulk(Spanned::new(self.id(name), Span::default()));
        self.wafer(|wafer| wafer.below.insert(0, bulk))
    }

    pub fn taper(self, degrees: f64) -> Self {
        self.wafer(|wafer| wafer.lines.taper = Amount::exact(Angle::from_degrees(degrees)))
    }

    pub fn liner(self, thickness: f64, name: &str) -> Self {
        let film = self.film(thickness, name);
        self.wafer(|wafer| wafer.liner = Some(film))
    }

    pub fn over(self, thickness: f64, name: &str) -> Self {
        let film = self.film(thickness, name);
        self.wafer(|wafer| wafer.over.push(film))
    }

    /// Nothing in the spaces.
    pub fn empty(self) -> Self {
        self.wafer(|wafer| wafer.between = None)
    }

    pub fn between(self, name: &str) -> Self {
        let material = self.id(name);
        self.wafer(|wafer| wafer.between.as_mut().unwrap().material = material)
    }

    pub fn row(self, widths: &[f64], spaces: &[f64]) -> Self {
        let row = Row {
            name: "edge".to_owned(),
            widths: widths.iter().copied().map(nm).collect(),
            spaces: spaces.iter().copied().map(nm).collect(),
            span: Span::default(),
        };
        self.wafer(|wafer| wafer.rows.push(row))
    }

    /// A step by a process of the library, changed as the test wants.
    pub fn step_with(
        mut self,
        process: &str,
        change: impl FnOnce(&mut Process),
        action: impl FnOnce(&Self, ProcessUse) -> Action,
    ) -> Self {
        let mut process = self.library.process(process).unwrap().clone();
        change(&mut process);
        let process = ProcessUse { process: Arc::new(process), overrides: Vec::new() };
        let op = 10 * (self.variant.steps.len() as u32 + 1);
        let step = Step {
            op,
            op_text: format!("{op:03}"),
            action: action(&self, process),
            only_at: None,
            after: Vec::new(),
            before: Vec::new(),
            note: None,
            span: Span::default(),
        };
        self.variant.steps.push(step);
        self
    }

    pub fn step(self, process: &str, action: impl FnOnce(&Self, ProcessUse) -> Action) -> Self {
        self.step_with(process, |_| {}, action)
    }

    pub fn polish(self, above_lines: f64) -> Self {
        let to = height(above_lines, Place::Lines);
        self.step("cmp", |_, process| Action::Polish { to, process })
    }

    pub fn fill(self, name: &str, above_lines: f64) -> Self {
        let to = height(above_lines, Place::Lines);
        self.step("spin-polymer", |hand, process| Action::Fill {
            material: hand.id(name),
            to,
            process,
        })
    }

    pub fn strip(self, name: &str) -> Self {
        self.step("oxygen-ash", |hand, process| Action::Strip { material: hand.id(name), process })
    }

    pub fn release(self, name: &str) -> Self {
        self.step("thermal-release", |hand, process| Action::Release {
            material: hand.id(name),
            temperature: Amount::exact(Temperature::from_celsius(425.0)),
            time: None,
            process,
        })
    }

    /// An etch straight down, or from all sides alike, that takes only the named material.
    pub fn etch(self, depth: f64, name: &str, conformal: f64) -> Self {
        self.step_with("fluorocarbon-rie", only(name, conformal), |hand, process| Action::Etch {
            depth: nm(depth),
            material: hand.id(name),
            process,
        })
    }

    pub fn convert(self, depth: f64, from: &str, to: &str) -> Self {
        self.step_with("oxygen-damage", only(from, 1.0), |hand, process| Action::Convert {
            depth: nm(depth),
            from: hand.id(from),
            to: hand.id(to),
            process,
        })
    }

    pub fn deposit(self, thickness: f64, name: &str, process: &str) -> Self {
        self.deposit_with(thickness, name, process, |_| {})
    }

    pub fn deposit_with(
        self,
        thickness: f64,
        name: &str,
        process: &str,
        change: impl FnOnce(&mut Process),
    ) -> Self {
        self.step_with(process, change, |hand, process| Action::Deposit {
            role: Role::Deposit,
            thickness: nm(thickness),
            material: hand.id(name),
            process,
        })
    }

    pub fn cure(self, shrinks: f64, name: &str) -> Self {
        let change = |process: &mut Process| {
            process.shrinks = Ranged::exact(shrinks);
            process.materials = vec![name.to_owned()];
        };
        self.step_with("uv-cure", change, |_, process| Action::Cure {
            temperature: Amount::exact(Temperature::from_celsius(300.0)),
            time: Amount::exact(Duration::from_min(1.0)),
            process,
        })
    }

    pub fn until(self, name: &str, stop: &str, overetch: f64) -> Self {
        self.step_with("fluorocarbon-rie", only(name, 0.0), |hand, process| Action::EtchUntil {
            material: hand.id(name),
            stop: hand.id(stop),
            overetch: Amount::exact(Share::from_fraction(overetch)),
            process,
        })
    }

    pub fn only_at(mut self, sites: &[usize]) -> Self {
        let all = self.variant.sites();
        let step = self.variant.steps.last_mut().unwrap();
        step.only_at = Some(sites.iter().map(|&at| all[at].clone()).collect::<Vec<Site>>());
        self
    }

    pub fn flow(&self) -> Flow {
        Flow {
            name: "by-hand".to_owned(),
            title: None,
            source: Arc::new(Source::new("by-hand.flow", "")),
            library: Arc::clone(&self.library),
            variants: vec![self.variant.clone()],
            nets: Vec::new(),
            next_level: None,
            limits: Vec::new(),
            waivers: Vec::new(),
        }
    }

    pub fn try_run(&self) -> Result<Vec<CellTrace>, SimError> {
        run(&self.flow(), &self.variant, &Grain::default(), &|_, _| {})
    }

    pub fn run(&self) -> Vec<CellTrace> {
        self.try_run().unwrap()
    }
}

/// A process that acts on one material only, as a beam but for a conformal share.
fn only(name: &str, conformal: f64) -> impl FnOnce(&mut Process) {
    let name = name.to_owned();
    move |process| {
        process.arrival = Some(Arrival {
            conformal: Ranged::exact(conformal),
            directional: Ranged::exact(1.0 - conformal),
            exponent: Exponent::Vertical,
            tilt_deg: Ranged::exact(0.0),
            sticking: Ranged::exact(1.0),
        });
        let families = ["metal", "barrier", "oxide", "nitride", "carbide", "low-k", "polymer"];
        process.rates =
            families.iter().map(|family| (family.to_string(), Ranged::exact(0.0))).collect();
        process.rates.insert(name, Ranged::exact(2.0));
    }
}
