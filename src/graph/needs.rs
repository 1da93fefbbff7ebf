//! What each step needs, read from the text and the library along one order of the steps.
//!
//! For every need the nearest provider before the step is taken; where there is none, the
//! first one after it, and the need points against the order. A step that nothing in the flow
//! could provide for has no need: that the wafer lacks something is for the rules to say.

use std::collections::BTreeSet;

use super::{Need, Reason};
use crate::flow::{Action, Height, Place, Role, Step, Variant};
use crate::library::{Ambient, Kind, Library, MaterialId};
use crate::units::{Amount, Length};

/// The needs of all steps, read along `order`, sorted and each once.
pub(super) fn read(library: &Library, variant: &Variant, order: &[usize]) -> Vec<Need> {
    let reader = Reader { library, variant, order };
    let mut needs = BTreeSet::new();
    for at in 0..order.len() {
        reader.needs_of(at, &mut needs);
    }
    reader.stated(&mut needs);
    needs.into_iter().collect()
}

/// Whether a film of this thickness closes the way for gases.
pub fn is_hermetic(library: &Library, material: MaterialId, thickness: Amount<Length>) -> bool {
    let least = library.material(material).hermetic_thickness_nm();
    least.is_some_and(|least| thickness.nominal.nm() >= least)
}

struct Reader<'a> {
    library: &'a Library,
    variant: &'a Variant,
    /// Steps by their place in the order that is read.
    order: &'a [usize],
}

type Needs = BTreeSet<Need>;

impl<'a> Reader<'a> {
    fn step(&self, at: usize) -> &'a Step {
        &self.variant.steps[self.order[at]]
    }

    fn action(&self, at: usize) -> &'a Action {
        &self.step(at).action
    }

    fn name(&self, material: MaterialId) -> &'a str {
        &self.library.material(material).name
    }

    /// The nearest place before `at`, not before `from`, that does it.
    fn last(&self, from: usize, at: usize, does: impl Fn(usize) -> bool) -> Option<usize> {
        (from..at).rev().find(|&p| does(p))
    }

    fn next(&self, at: usize, does: impl Fn(usize) -> bool) -> Option<usize> {
        (at + 1..self.order.len()).find(|&p| does(p))
    }

    fn add(&self, needs: &mut Needs, from: usize, to: usize, reason: Reason, why: String) {
        needs.insert(Need { from: self.order[from], to: self.order[to], reason, why });
    }

    fn needs_of(&self, at: usize, needs: &mut Needs) {
        match *self.action(at) {
            Action::Deposit { role, material, .. } => {
                match role {
                    Role::Seal => self.opened_space(at, needs),
                    Role::Cap => self.closed_space(at, Reason::Covers, needs),
                    Role::Deposit => self.lines_an_open_space(at, needs),
                }
                self.barrier(at, material, needs);
            }
            Action::Fill { material, .. } => self.barrier(at, material, needs),
            Action::Etch { material, .. } => {
                self.material(at, material, needs);
                self.opens_before_the_seal(at, material, needs);
            }
            Action::Strip { material, .. } => self.material(at, material, needs),
            Action::Convert { from, .. } => {
                self.material(at, from, needs);
                self.unburied(at, from, needs);
            }
            Action::EtchUntil { material, stop, .. } => {
                self.material(at, material, needs);
                self.opens_before_the_seal(at, material, needs);
                self.stop(at, stop, needs);
            }
            Action::Mask { material, .. } => self.mask(at, material, needs),
            Action::Release { material, .. } => {
                self.material(at, material, needs);
                self.roof(at, material, needs);
            }
            Action::Polish { .. } => self.polish(at, needs),
            Action::PolishUntil { stop, .. } => {
                self.polish(at, needs);
                self.stop(at, stop, needs);
            }
            Action::Via { material, .. } => {
                self.closed_space(at, Reason::LandsOn, needs);
                self.cover_after(at, material, "the via's metal", needs);
            }
            Action::Cure { .. } => self.cure(at, needs),
            Action::Anneal { .. } | Action::Clean { .. } => {}
        }
        let wets = self.step(at).action.process().process.meets(&[Ambient::Wet]);
        if wets && matches!(self.action(at), Action::Clean { .. }) {
            self.dry_space(at, needs);
        }
    }

    /// Needs that the text states by `after` and `before`.
    fn stated(&self, needs: &mut Needs) {
        let place = |op: u32| (0..self.order.len()).find(|&at| self.step(at).op == op);
        for at in 0..self.order.len() {
            let step = self.step(at);
            for other in step.after.iter().filter_map(|op| place(op.value)) {
                self.add(needs, other, at, Reason::After, "the text says after".into());
            }
            for other in step.before.iter().filter_map(|op| place(op.value)) {
                self.add(needs, at, other, Reason::Before, "the text says before".into());
            }
        }
    }

    // What fills the spaces.

    fn wafer_fills(&self) -> bool {
        self.variant.wafer.between.is_some()
    }

    /// Materials that stand in the spaces at some time: the wafer's, fills, what these become.
    fn in_spaces(&self, material: MaterialId) -> bool {
        let between = self.variant.wafer.between.as_ref().map(|between| between.material);
        Some(material) == between
            || self.library.material(material).kind == Kind::Sacrificial
            || self.variant.steps.iter().any(|step| match step.action {
                Action::Fill { material: filled, .. } => filled == material,
                Action::Convert { from, to, .. } => to == material && Some(from) == between,
                _ => false,
            })
    }

    /// Whether a step empties spaces.
    fn opens(&self, at: usize) -> bool {
        let removed = match *self.action(at) {
            Action::Etch { material, .. }
            | Action::EtchUntil { material, .. }
            | Action::Strip { material, .. }
            | Action::Release { material, .. } => material,
            _ => return false,
        };
        self.in_spaces(removed) && !self.is_mask(removed)
    }

    fn is_mask(&self, material: MaterialId) -> bool {
        self.variant
            .steps
            .iter()
            .any(|step| matches!(step.action, Action::Mask { material: m, .. } if m == material))
    }

    fn seals(&self, at: usize) -> bool {
        matches!(self.action(at), Action::Deposit { role: Role::Seal, .. })
    }

    fn adds(&self, at: usize) -> bool {
        matches!(self.action(at), Action::Deposit { .. } | Action::Fill { .. })
    }

    fn films(&self, at: usize) -> bool {
        matches!(self.action(at), Action::Deposit { .. })
    }

    /// The last step that opened spaces before `at` and is not closed again before it.
    fn open_since(&self, at: usize) -> Option<usize> {
        let opened = self.last(0, at, |p| self.opens(p))?;
        // What leaves under a roof leaves a closed space behind.
        let roofed = matches!(self.action(opened), Action::Release { .. })
            && self.roof_before(opened).is_some();
        let closed = self
            .last(opened, at, |p| self.seals(p) || matches!(self.action(p), Action::Fill { .. }));
        (closed.is_none() && !roofed).then_some(opened)
    }

    /// A seal needs the steps that opened what it closes.
    fn opened_space(&self, at: usize, needs: &mut Needs) {
        if !self.wafer_fills() {
            return;
        }
        let why = || "closes a space that something must have opened".to_owned();
        // A release without a roof waits for this film; it does not open for it.
        let opens = |p: usize| {
            let release = matches!(self.action(p), Action::Release { .. });
            self.opens(p) && (!release || self.roof_before(p).is_some())
        };
        let Some(last) = self.last(0, at, opens) else {
            if let Some(opener) = self.next(at, opens) {
                self.add(needs, opener, at, Reason::Opens, why());
            }
            return;
        };
        // Seals on each other share their openings: all since the seal before the last one.
        let since = self.last(0, last, |p| self.seals(p)).map_or(0, |p| p + 1);
        for opener in (since..=last).filter(|&p| opens(p)) {
            self.add(needs, opener, at, Reason::Opens, why());
        }
    }

    /// A film between opening and seal lines what is open: it stays between them.
    fn lines_an_open_space(&self, at: usize, needs: &mut Needs) {
        let (Some(opener), Some(seal)) = (self.open_since(at), self.next(at, |p| self.seals(p)))
        else {
            return;
        };
        self.add(needs, opener, at, Reason::Opens, "lines the space that it opens".into());
        self.add(needs, at, seal, Reason::Protects, "closes over the liner".into());
    }

    /// A cap, a polish or a via needs the spaces closed that were opened before it.
    fn closed_space(&self, at: usize, reason: Reason, needs: &mut Needs) {
        let why = "needs its spaces closed".to_owned();
        if self.open_since(at).is_some() {
            if let Some(seal) = self.next(at, |p| self.seals(p)) {
                self.add(needs, seal, at, reason, why);
            }
        } else if let Some(seal) = self.last(0, at, |p| self.seals(p)) {
            self.add(needs, seal, at, reason, why);
        } else if self.stays_over_spaces(at)
            && let Some(opener) = self.next(at, |p| self.etches_spaces(p))
            && let Some(seal) = self.next(opener, |p| self.seals(p))
        {
            self.add(needs, seal, at, reason, "spaces are opened and closed under it".into());
        }
    }

    /// Whether what a step leaves lies over spaces for good: a via, or a cap that no later step
    /// opens.
    fn stays_over_spaces(&self, at: usize) -> bool {
        match *self.action(at) {
            Action::Via { .. } => true,
            Action::Deposit { role: Role::Cap, material, .. } => self
                .next(at, |p| match *self.action(p) {
                    Action::Etch { material: m, .. }
                    | Action::EtchUntil { material: m, .. }
                    | Action::Strip { material: m, .. } => m == material,
                    _ => false,
                })
                .is_none(),
            _ => false,
        }
    }

    /// Whether a step empties spaces from above; a release does it under a roof.
    fn etches_spaces(&self, at: usize) -> bool {
        self.opens(at) && !matches!(self.action(at), Action::Release { .. })
    }

    /// A liquid must not find a space open: before it opens, or after it is closed.
    fn dry_space(&self, at: usize, needs: &mut Needs) {
        let why = "must not wet an open space".to_owned();
        if self.open_since(at).is_some() {
            if let Some(seal) = self.next(at, |p| self.seals(p)) {
                self.add(needs, seal, at, Reason::Protects, why);
            }
        } else if let Some(seal) = self.last(0, at, |p| self.seals(p)) {
            self.add(needs, seal, at, Reason::Protects, why);
        } else if let Some(opener) = self.next(at, |p| self.opens(p)) {
            self.add(needs, at, opener, Reason::Protects, "opens a space that stays dry".into());
        }
    }

    // Materials that steps bring.

    fn brings(&self, at: usize, material: MaterialId) -> bool {
        match *self.action(at) {
            Action::Deposit { material: m, .. }
            | Action::Fill { material: m, .. }
            | Action::Mask { material: m, .. }
            | Action::Convert { to: m, .. } => m == material,
            _ => false,
        }
    }

    fn on_wafer(&self, material: MaterialId) -> bool {
        let wafer = &self.variant.wafer;
        wafer.layers.iter().any(|layer| layer.material == material)
            || wafer.liner.iter().chain(&wafer.over).any(|film| film.material == material)
            || wafer.between.as_ref().is_some_and(|between| between.material == material)
            || wafer.below.iter().any(|below| below.material() == material)
    }

    /// The step that brings a material that is not on the wafer as found: the nearest before,
    /// else the first after.
    fn bringer(&self, at: usize, material: MaterialId) -> Option<usize> {
        if self.on_wafer(material) {
            return None;
        }
        let brings = |p: usize| self.brings(p, material);
        self.last(0, at, brings).or_else(|| self.next(at, brings))
    }

    fn material(&self, at: usize, material: MaterialId, needs: &mut Needs) {
        if let Some(from) = self.bringer(at, material) {
            let why = format!("needs the {} that it takes away", self.name(material));
            self.add(needs, from, at, Reason::Fills, why);
            // What a conversion left in the spaces goes before they are closed.
            let converted = matches!(self.action(from), Action::Convert { .. });
            let buries = (from + 1..at).find(|&p| converted && self.seals(p));
            if let Some(seal) = buries {
                let why = format!("would seal {} in", self.name(material));
                self.add(needs, at, seal, Reason::Opens, why);
            }
        }
    }

    /// An etch of what fills the spaces comes before a seal buries it, where no other closes them.
    fn opens_before_the_seal(&self, at: usize, material: MaterialId, needs: &mut Needs) {
        let closes = |p: usize| self.seals(p) || matches!(self.action(p), Action::Fill { .. });
        if self.opens(at) && self.next(at, closes).is_none() {
            self.unburied(at, material, needs);
        }
    }

    /// What fills the spaces is changed before a seal buries it; a polish may bare it again.
    fn unburied(&self, at: usize, material: MaterialId, needs: &mut Needs) {
        let sealed = self.last(0, at, |p| self.seals(p) || self.reaches_lines(p));
        if let Some(seal) = sealed.filter(|&p| self.seals(p) && self.in_spaces(material)) {
            let why = format!("would bury {}", self.name(material));
            self.add(needs, at, seal, Reason::Opens, why);
        }
    }

    fn stop(&self, at: usize, stop: MaterialId, needs: &mut Needs) {
        if let Some(from) = self.bringer(at, stop) {
            let why = format!("needs {} to stop on", self.name(stop));
            self.add(needs, from, at, Reason::StopsOn, why);
        }
    }

    /// A mask comes before the etches that it limits, its strip after them and before a film.
    fn mask(&self, at: usize, material: MaterialId, needs: &mut Needs) {
        let strips = |p: usize| matches!(*self.action(p), Action::Strip { material: m, .. } if m == material);
        let limited = |p: usize| {
            !strips(p)
                && matches!(
                    self.action(p),
                    Action::Etch { .. }
                        | Action::EtchUntil { .. }
                        | Action::Convert { .. }
                        | Action::Strip { .. }
                        | Action::Release { .. }
                )
        };
        let strip = self.next(at, strips);
        let until = strip.unwrap_or(self.order.len());
        let why = || "must spare what the mask covers".to_owned();
        let mut etches: Vec<usize> = (at + 1..until).filter(|&p| limited(p)).collect();
        if etches.is_empty() {
            etches.extend(self.last(0, at, limited).or_else(|| self.next(at, limited)));
        }
        for &etch in &etches {
            self.add(needs, at, etch, Reason::Protects, why());
            if let Some(strip) = strip {
                let why = "may go only when the etch is done".to_owned();
                self.add(needs, etch, strip, Reason::Protects, why);
            }
        }
        if let Some(strip) = strip {
            for film in (at + 1..self.order.len()).filter(|&p| self.adds(p)) {
                let why = "would bury the mask".to_owned();
                self.add(needs, strip, film, Reason::Protects, why);
            }
        }
    }

    // Roofs, polishes, metals.

    /// The film that bridges what a release at `at` takes away.
    fn roof_before(&self, at: usize) -> Option<usize> {
        let Action::Release { material, .. } = *self.action(at) else { return None };
        let from = self.last(0, at, |p| self.brings(p, material)).map_or(0, |p| p + 1);
        let bridges = |p: usize| self.adds(p) && !self.brings(p, material);
        self.last(from, at, bridges)
    }

    fn roof(&self, at: usize, material: MaterialId, needs: &mut Needs) {
        let process = &self.step(at).action.process().process;
        let from = self.last(0, at, |p| self.brings(p, material)).map_or(0, |p| p + 1);
        let shuts = |p: usize| match *self.action(p) {
            Action::Deposit { material, thickness, .. } => {
                is_hermetic(self.library, material, thickness)
            }
            _ => false,
        };
        if !process.drawn_openings {
            let why = "shuts the way by which the gas leaves".to_owned();
            let before = (from..at).filter(|&p| shuts(p) && !self.taken_away(p, at));
            let after = (at + 1..self.order.len()).filter(|&p| shuts(p));
            for film in before.chain(after) {
                self.add(needs, at, film, Reason::ReleasesThrough, why.clone());
            }
        }
        let bridges = |p: usize| self.films(p) && !self.brings(p, material) && !shuts(p);
        let why = "leaves only under what bridges it".to_owned();
        if let Some(roof) = self.last(from, at, bridges) {
            self.add(needs, roof, at, Reason::Covers, why);
        } else if self.variant.wafer.over.is_empty()
            && self.roof_before(at).is_none()
            && let Some(roof) = self.next(at, bridges)
        {
            self.add(needs, roof, at, Reason::Covers, why);
        }
    }

    /// Whether a film of `film` is polished or etched away before `at`.
    fn taken_away(&self, film: usize, at: usize) -> bool {
        let Action::Deposit { material, .. } = *self.action(film) else { return false };
        (film + 1..at).any(|p| match *self.action(p) {
            Action::Polish { .. } | Action::PolishUntil { .. } => true,
            Action::Etch { material: m, .. }
            | Action::EtchUntil { material: m, .. }
            | Action::Strip { material: m, .. } => m == material,
            _ => false,
        })
    }

    fn is_polish(&self, at: usize) -> bool {
        matches!(self.action(at), Action::Polish { .. } | Action::PolishUntil { .. })
    }

    fn polish(&self, at: usize, needs: &mut Needs) {
        let previous = self.last(0, at, |p| self.is_polish(p));
        let from = previous.map_or(0, |p| p + 1);
        let why = "needs something above its plane".to_owned();
        // Any of them will do: the seal, which it needs anyway, before a film that may come later.
        let overburden = self.last(from, at, |p| self.seals(p));
        if let Some(film) = overburden.or_else(|| self.last(from, at, |p| self.adds(p))) {
            self.add(needs, film, at, Reason::Covers, why);
        } else if previous.is_none()
            && self.variant.wafer.over.is_empty()
            && let Some(film) = self.next(at, |p| self.adds(p))
        {
            self.add(needs, film, at, Reason::Covers, why);
        }
        if previous.is_none() {
            self.reaches_plane(at, needs);
        }
        self.closed_space(at, Reason::Covers, needs);
        if let Some(metal) = self.bared_metal(at) {
            self.cover_after(at, metal, "the metal that the polish bares", needs);
        }
    }

    /// A plane above the lines needs films that reach it.
    fn reaches_plane(&self, at: usize, needs: &mut Needs) {
        let Action::Polish { to: Height { offset, place: Place::Lines }, .. } = self.action(at)
        else {
            return;
        };
        let thickness = |p: usize| match *self.action(p) {
            Action::Deposit { thickness, .. } => thickness.nominal.nm(),
            Action::Fill { .. } => f64::INFINITY,
            _ => 0.0,
        };
        let over = self.variant.wafer.over.iter().map(|film| film.thickness.nominal.nm());
        let mut height: f64 = over.sum::<f64>() + (0..at).map(thickness).sum::<f64>();
        for film in (at + 1..self.order.len()).filter(|&p| self.adds(p)) {
            if height > offset.nominal.nm() {
                break;
            }
            height += thickness(film);
            let why = "reaches its plane only with it".to_owned();
            self.add(needs, film, at, Reason::Covers, why);
        }
    }

    /// Whether a polish goes down to the line top or below.
    fn reaches_lines(&self, at: usize) -> bool {
        let wafer = &self.variant.wafer;
        match self.action(at) {
            Action::Polish { to: Height { offset, place }, .. } => {
                *place != Place::Lines || offset.nominal.nm() <= 0.0
            }
            Action::PolishUntil { stop, .. } => {
                let of_lines = wafer.layers.iter().map(|layer| layer.material);
                of_lines.chain(wafer.liner.iter().map(|liner| liner.material)).any(|m| m == *stop)
            }
            _ => false,
        }
    }

    /// The drifting metal of the lines, where the plane lies at the line top or below.
    fn bared_metal(&self, at: usize) -> Option<MaterialId> {
        let top = self.variant.wafer.layers.last().map(|layer| layer.material);
        top.filter(|&top| self.reaches_lines(at) && self.library.material(top).needs_barrier)
    }

    /// Bare metal needs the next film: the film comes after what bares it.
    fn cover_after(&self, at: usize, metal: MaterialId, what: &str, needs: &mut Needs) {
        if !self.library.material(metal).needs_barrier {
            return;
        }
        let cap = |p: usize| matches!(self.action(p), Action::Deposit { role: Role::Cap, .. });
        // What a polish finds above its plane is its overburden, not its cover.
        let earlier = || self.last(0, at, cap).filter(|_| !self.is_polish(at));
        if let Some(film) = self.next(at, |p| self.films(p)).or_else(earlier) {
            self.add(needs, at, film, Reason::Covers, format!("covers {what}"));
        }
    }

    /// A drifting metal needs its barrier first.
    fn barrier(&self, at: usize, metal: MaterialId, needs: &mut Needs) {
        if !self.library.material(metal).needs_barrier {
            return;
        }
        let is_barrier = |p: usize| match *self.action(p) {
            Action::Deposit { material, .. } => {
                let material = self.library.material(material);
                material.kind == Kind::Conductor && material.copper_barrier.counts()
            }
            _ => false,
        };
        let provider = self.last(0, at, is_barrier).or_else(|| self.next(at, is_barrier));
        if let Some(barrier) = provider {
            let why = format!("{} needs its barrier first", self.name(metal));
            self.add(needs, barrier, at, Reason::Protects, why);
        }
    }

    /// A cure needs its material, and its way out not yet shut.
    fn cure(&self, at: usize, needs: &mut Needs) {
        let Some(filled) = self.last(0, at, |p| matches!(self.action(p), Action::Fill { .. }))
        else {
            return;
        };
        self.add(needs, filled, at, Reason::Fills, "needs what it cures".into());
        for p in filled + 1..self.order.len() {
            if let Action::Deposit { material, thickness, .. } = *self.action(p)
                && is_hermetic(self.library, material, thickness)
            {
                let why = "shuts the way by which the cure's gas leaves".to_owned();
                self.add(needs, at, p, Reason::ReleasesThrough, why);
            }
        }
    }
}
