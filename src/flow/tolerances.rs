//! Every tolerance of a flow, and the flow with its amounts moved within them.
//!
//! One list of amounts serves both: it is walked in one order, each amount under a key that
//! says what it is (`030 seal thickness`, `space 32 nm`). The same key in several variants is
//! one source of error: a split that takes over a step takes over its error too.

use std::sync::Arc;

use super::{Action, Below, Film, Flow, ProcessUse, SpacePair, Step, Wafer};
use crate::source::Span;
use crate::units::{Amount, Angle, Capacitance, Duration, Length, Resistance, Share, Temperature};

/// One amount with a tolerance.
#[derive(Debug, Clone, PartialEq)]
pub struct Tolerance {
    /// What it is, as a message names it: `030 seal thickness`, `line width`.
    pub key: String,
    /// The tolerance as a flow writes it: `± 5 nm`.
    pub written: String,
    /// The statement that it stands in.
    pub span: Span,
}

impl Flow {
    /// The tolerances of a variant, nets included, in the order wafer, steps, nets.
    pub fn tolerances(&self, variant: usize) -> Vec<Tolerance> {
        let mut all: Vec<Tolerance> = Vec::new();
        let mut flow = self.clone();
        flow.visit(Some(variant), &mut |key, span, amount| {
            if amount.three_sigma() > 0.0 && all.iter().all(|known| known.key != key) {
                let written = format!("± {}", amount.written());
                all.push(Tolerance { key: key.to_owned(), written, span });
            }
        });
        all
    }

    /// The flow with amounts moved: `shifts` gives keys of [`Flow::tolerances`] and by how much of
    /// its three standard deviations each moves. What moved has no tolerance left: it is where
    /// that tolerance took it. Sites keep their names.
    #[must_use]
    pub fn shifted(&self, shifts: &[(&str, f64)]) -> Self {
        let mut flow = self.clone();
        flow.visit(None, &mut |key, _, amount| {
            if let Some((_, part)) = shifts.iter().find(|(of, part)| *of == key && *part != 0.0) {
                amount.shift(*part);
            }
        });
        flow
    }

    /// Every amount that can carry a tolerance, of one variant or of all.
    fn visit(&mut self, only: Option<usize>, visit: &mut Visit<'_>) {
        for (at, variant) in self.variants.iter_mut().enumerate() {
            if only.is_none_or(|only| only == at) {
                wafer(&mut variant.wafer, visit);
                variant.steps.iter_mut().for_each(|of| step(of, visit));
            }
        }
        if let Some(next) = &mut self.next_level {
            visit("next-level distance", next.span, &mut next.distance);
        }
        for net in &mut self.nets {
            let name = &net.name;
            visit(&format!("net {name} length"), net.span, &mut net.length);
            visit(&format!("net {name} driver"), net.span, &mut net.driver);
            visit(&format!("net {name} load"), net.span, &mut net.load);
        }
    }
}

/// Called with the key of an amount, its statement and itself.
type Visit<'v> = dyn FnMut(&str, Span, &mut dyn Movable) + 'v;

fn wafer(wafer: &mut Wafer, visit: &mut Visit<'_>) {
    let film = |key: &str, film: &mut Film, visit: &mut Visit<'_>| {
        visit(key, film.span, &mut film.thickness);
    };
    for (at, below) in wafer.below.iter_mut().enumerate() {
        match below {
            Below::Bulk(_) => {}
            Below::Plane(of) => film(&format!("thickness of plane {}", at + 1), of, visit),
            Below::Film(of) => film(&format!("thickness of film {}", at + 1), of, visit),
        }
    }
    let lines = &mut wafer.lines;
    let span = lines.span;
    let width = lines.width.nominal;
    visit("line width", span, &mut lines.width);
    let wider = lines.width.nominal - width;
    for pair in &mut lines.spaces {
        spaces(pair, span, visit);
        if lines.by_pitch {
            pair.left.nominal = pair.left.nominal - wider;
            pair.right.nominal = pair.right.nominal - wider;
        }
    }
    visit("taper", span, &mut lines.taper);
    visit("corner radius", span, &mut lines.corner_radius);
    for row in &mut wafer.rows {
        let name = &row.name;
        for (at, width) in row.widths.iter_mut().enumerate() {
            visit(&format!("width {} of row {name}", at + 1), row.span, width);
        }
        for (at, space) in row.spaces.iter_mut().enumerate() {
            visit(&format!("space {} of row {name}", at + 1), row.span, space);
        }
    }
    for (at, layer) in wafer.layers.iter_mut().enumerate() {
        visit(&format!("thickness of layer {}", at + 1), layer.span, &mut layer.thickness);
    }
    if let Some(of) = &mut wafer.liner {
        film("liner thickness", of, visit);
    }
    if let Some(between) = &mut wafer.between {
        visit("height of `between`", between.span, &mut between.to.offset);
    }
    for (at, of) in wafer.over.iter_mut().enumerate() {
        film(&format!("thickness of `over` {}", at + 1), of, visit);
    }
}

/// A dense array has one space, drawn once; a pair has two.
fn spaces(pair: &mut SpacePair, span: Span, visit: &mut Visit<'_>) {
    let label = pair.label();
    if pair.left == pair.right {
        visit(&format!("space {label}"), span, &mut pair.left);
        pair.right = pair.left;
    } else {
        visit(&format!("left space of {label}"), span, &mut pair.left);
        visit(&format!("right space of {label}"), span, &mut pair.right);
    }
}

fn step(step: &mut Step, visit: &mut Visit<'_>) {
    let name = format!("{} {}", step.op_text, step.action.verb());
    let span = step.span;
    let mut of = |what: &str, amount: &mut dyn Movable| {
        visit(&format!("{name} {what}"), span, amount);
    };
    match &mut step.action {
        Action::Deposit { thickness, .. } | Action::Mask { thickness, .. } => {
            of("thickness", thickness);
        }
        Action::Etch { depth, .. } | Action::Convert { depth, .. } => of("depth", depth),
        Action::EtchUntil { overetch, .. } => of("overetch", overetch),
        Action::Fill { to, .. } | Action::Polish { to, .. } => of("height", &mut to.offset),
        Action::Release { temperature, time, .. } => {
            of("temperature", temperature);
            if let Some(time) = time {
                of("time", time);
            }
        }
        Action::Anneal { temperature, time, .. } | Action::Cure { temperature, time, .. } => {
            of("temperature", temperature);
            of("time", time);
        }
        Action::Via { width, liner, overlay, overetch, .. } => {
            of("width", width);
            if let Some((thickness, _)) = liner {
                of("liner", thickness);
            }
            of("overlay", overlay);
            of("overetch", overetch);
        }
        Action::Strip { .. } | Action::PolishUntil { .. } | Action::Clean { .. } => {}
    }
    let used = step.action.process_mut();
    for at in 0..used.overrides.len() {
        let key = used.overrides[at].key.clone();
        of(&key, &mut Overridden { used, at });
    }
}

/// An amount that can be moved by part of its tolerance.
trait Movable {
    /// Three standard deviations, in the base unit of its kind.
    fn three_sigma(&self) -> f64;
    /// Three standard deviations, as a flow writes them.
    fn written(&self) -> String;
    /// Moves the nominal value by a part of three standard deviations, which then are none.
    fn shift(&mut self, part: f64);
}

macro_rules! movable {
    ($($quantity:ident $from:ident $to:ident $unit:literal)+) => {
        $(impl Movable for Amount<$quantity> {
            fn three_sigma(&self) -> f64 {
                self.three_sigma.$to()
            }

            fn written(&self) -> String {
                let number = self.three_sigma.$to();
                format!("{} {}", (number * 1e6).round() / 1e6, $unit)
            }

            fn shift(&mut self, part: f64) {
                let moved = self.nominal.$to() + part * self.three_sigma.$to();
                *self = Amount::exact($quantity::$from(moved));
            }
        })+
    };
}

movable! {
    Length from_nm nm "nm"
    Angle from_degrees degrees "deg"
    Share from_percent percent "%"
    Duration from_s s "s"
    Temperature from_celsius celsius "C"
    Resistance from_ohm ohm "ohm"
    Capacitance from_af af "aF"
}

/// One `with` of a step.
struct Overridden<'a> {
    used: &'a mut ProcessUse,
    at: usize,
}

impl Movable for Overridden<'_> {
    fn three_sigma(&self) -> f64 {
        self.used.overrides[self.at].three_sigma
    }

    fn written(&self) -> String {
        format!("{}", (self.three_sigma() * 1e6).round() / 1e6)
    }

    fn shift(&mut self, part: f64) {
        let given = &mut self.used.overrides[self.at];
        let moved = given.nominal + part * given.three_sigma;
        let process = Arc::make_mut(&mut self.used.process);
        given.nominal = process.move_number(&given.key, given.nominal, moved);
        given.three_sigma = 0.0;
    }
}

#[cfg(test)]
mod tests {
    use std::sync::Arc;

    use super::super::{Flow, resolve};
    use crate::library::Library;
    use crate::source::Source;
    use crate::syntax;

    const FLOW: &str = "flow f

wafer
  plane    50 nm W
  film     20 nm SiCN
  lines    80 nm W  width 40 ± 2 nm  pitch 80 nm, 120 ± 3 nm
  between  SiCOH

steps
  010  etch     60 nm SiCOH by fluorocarbon-rie
  020  seal     90 nm ± 10 % SiO2 by silane-pecvd with sticking 0.9 ± 0.3
  030  polish   to 40 ± 4 nm above lines

splits
  thin  020 seal 50 ± 1 nm SiO2 by silane-pecvd

limits
  sealed at 40 nm
";

    fn flow() -> Flow {
        let source = Arc::new(Source::new("f.flow", FLOW));
        let (tree, _) = syntax::parse(&source);
        resolve(&tree, source, Library::built_in()).unwrap().0
    }

    #[test]
    fn every_tolerance_is_listed_once() {
        let told: Vec<_> =
            flow().tolerances(0).iter().map(|t| format!("{} {}", t.key, t.written)).collect();
        assert_eq!(
            told,
            [
                "line width ± 2 nm",
                "space 80 nm ± 3 nm",
                "020 seal thickness ± 9 nm",
                "020 seal sticking ± 0.3",
                "030 polish height ± 4 nm",
            ]
        );
    }

    #[test]
    fn a_shift_moves_every_variant_and_no_name() {
        let flow = flow();
        let shifts = [("line width", 1.0), ("space 80 nm", -0.5), ("020 seal thickness", 1.0)];
        let shifted = flow.shifted(&shifts);
        let spaces = |flow: &Flow| {
            let lines = &flow.variants[1].wafer.lines;
            lines.spaces.iter().map(|pair| pair.left.nominal.nm()).collect::<Vec<_>>()
        };
        // By pitch, a wider line takes from both spaces.
        assert_eq!((spaces(&flow), spaces(&shifted)), (vec![40.0, 80.0], vec![38.0, 76.5]));
        assert_eq!(flow.variants[0].sites(), shifted.variants[0].sites());
        let thickness = |flow: &Flow, variant: usize| {
            let super::Action::Deposit { thickness, .. } = flow.variants[variant].steps[1].action
            else {
                panic!("020 is a deposit")
            };
            (thickness.nominal.nm(), thickness.three_sigma.nm())
        };
        assert_eq!(thickness(&shifted, 0), (99.0, 0.0));
        assert_eq!(thickness(&shifted, 1), (51.0, 0.0));
        assert_eq!(thickness(&flow, 1), (50.0, 1.0));
    }

    #[test]
    fn a_moved_number_of_a_process_stays_within_what_can_be() {
        let shifted = flow().shifted(&[("020 seal sticking", 1.0)]);
        let process = &shifted.variants[0].steps[1].action.process();
        assert_eq!(process.process.arrival.as_ref().unwrap().sticking.value, 1.0);
        assert_eq!(process.overrides[0].nominal, 1.0);
    }
}
