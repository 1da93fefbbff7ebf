//! All figures of one variant: what its limits, its nets and the report ask for is computed once,
//! in parallel over sites, and looked up afterwards.

use std::collections::{BTreeMap, BTreeSet};

use rayon::prelude::*;

use super::closing_space::Grow;
use super::electrical::{Electrical, Reference};
use super::geometry::{Geometry, Traced};
use super::question::{Figures, Question};
use super::reading::{Missing, Reading, Unclear};
use super::{
    Extras, MeasureError, NetReport, SiteFigures, closing_space, nets, peak_temperature,
    resistance, site,
};
use crate::flow::{Against, Claim, Flow, Limit, Net, Quantity, Site, State, Variant};
use crate::library::MaterialId;
use crate::sim::CellTrace;

/// The traces of all cells of one variant.
#[derive(Debug, Clone, Copy)]
pub struct Traces<'a> {
    /// Which variant, by its index in [`Flow::variants`].
    pub variant: usize,
    /// Its cells, coarse.
    pub coarse: &'a [CellTrace],
    /// The same at half the facet.
    pub fine: &'a [CellTrace],
}

/// What a report wants besides what limits and nets ask for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wanted {
    /// Electrical figures of every site.
    pub electrical: bool,
    /// Closing space of every site.
    pub closing_space: bool,
    /// Relative half-width wanted of the field's bounds.
    pub field_accuracy: f64,
}

/// A site after an operation, or at the end, of a variant.
type Key = (usize, String, Option<u32>);

/// All figures of one variant.
#[derive(Debug)]
pub struct Measured<'a> {
    flow: &'a Flow,
    judged: usize,
    sites: Vec<Site>,
    geometries: BTreeMap<Key, Geometry>,
    electrical: BTreeMap<Key, Electrical>,
    closing_spaces: BTreeMap<Key, Reading>,
    traced: BTreeMap<Key, Traced<'a>>,
}

impl<'a> Measured<'a> {
    /// Measures the first of some traced variants; the others are what its drops are taken
    /// against. `grow` serves the searches for a closing space.
    pub fn of(
        flow: &'a Flow,
        traces: &[Traces<'a>],
        wanted: &Wanted,
        grow: &Grow,
    ) -> Result<Self, MeasureError> {
        let judged = traces.first().ok_or(MeasureError::Inconsistent("no traces"))?.variant;
        let at_end = all_sites(flow, traces);
        let cells = traces.first().into_iter().flat_map(|traces| traces.fine);
        let sites: Vec<_> = cells.flat_map(|cell| cell.cell.sites.iter().cloned()).collect();
        let orders = Orders::of(flow, judged, &sites, wanted);
        let mut traced = at_end.clone();
        for (variant, label, after) in orders.keys() {
            let end = at_end.get(&(variant, label.clone(), None));
            if let (Some(end), Some(op)) = (end, after)
                && let Some(then) = end.after(op)
            {
                traced.insert((variant, label, Some(op)), then);
            }
        }
        let judged_keys: Vec<_> = traced.iter().filter(|((v, ..), _)| *v == judged).collect();
        let geometries = judged_keys
            .into_par_iter()
            .map(|(key, traced)| Ok((key.clone(), traced.geometry()?)))
            .collect::<Result<_, MeasureError>>()?;
        let fields: Vec<_> = orders
            .electrical
            .iter()
            .filter_map(|(key, references)| Some((key, traced.get(key)?, references)))
            .collect();
        let electrical = fields
            .into_par_iter()
            .map(|(key, traced, references)| {
                let references: Vec<_> = references.iter().copied().collect();
                let solved = Electrical::of(traced, &references, wanted.field_accuracy)?;
                Ok((key.clone(), solved))
            })
            .collect::<Result<_, MeasureError>>()?;
        let searches: Vec<_> =
            orders.closing_space.iter().filter_map(|key| Some((key, traced.get(key)?))).collect();
        let closing_spaces = searches
            .into_par_iter()
            .map(|(key, traced)| Ok((key.clone(), closing_space::closing_space(traced, grow)?)))
            .collect::<Result<_, MeasureError>>()?;
        Ok(Self { flow, judged, sites, geometries, electrical, closing_spaces, traced })
    }
}

impl Figures for Measured<'_> {
    fn sites(&self) -> Vec<Site> {
        self.sites.clone()
    }

    fn states(&self, site: &Site, after: Option<u32>) -> Option<Vec<Vec<State>>> {
        Some(self.geometries.get(&self.key(site, after))?.states())
    }

    fn readings(&self, question: &Question) -> Option<Vec<Reading>> {
        if question.quantity == Quantity::PeakTemperature {
            return Some(vec![peak_temperature::peak_temperature(self.variant())]);
        }
        if let Some(net) = question.net {
            return Some(vec![self.net(net).quiet]);
        }
        let key = self.key(question.site?, question.after);
        let geometry = self.geometries.get(&key)?;
        Some(match question.quantity {
            Quantity::ClosingSpace => vec![self.lookup(&self.closing_spaces, &key)],
            Quantity::Resistance => vec![self.resistance(&key)],
            quantity if quantity.is_electrical() => vec![self.field(&key, question)],
            quantity => geometry.readings(quantity),
        })
    }
}

impl Measured<'_> {
    /// The figures of every site for the report, in the order of the text.
    pub fn site_figures(&self) -> Result<Vec<SiteFigures>, MeasureError> {
        let figures = |site: &Site| {
            let key = self.key(site, None);
            let (Some(traced), Some(geometry)) = (self.traced.get(&key), self.geometries.get(&key))
            else {
                return Err(MeasureError::Inconsistent("a site that was not measured"));
            };
            let electrical = self.electrical.get(&key);
            let extras = Extras {
                closing_space: self.closing_spaces.get(&key).and_then(|r| r.figure()),
                void_top_sigma_nm: None,
                electrical: electrical.and_then(|e| e.figures(self.resistance(&key).figure())),
            };
            site::site(traced, geometry, extras)
        };
        self.sites.iter().map(figures).collect()
    }

    /// The figures of every net, in the order of the text.
    pub fn net_reports(&self) -> Vec<NetReport> {
        let split = self.variant().split.as_ref().map(|split| split.value.clone());
        let report = |(at, net): (usize, &Net)| {
            let delays = self.net(at);
            NetReport {
                name: net.name.clone(),
                split: split.clone(),
                delay_ps: delays.quiet.figure(),
                delay_along_ps: delays.along.figure(),
                delay_against_ps: delays.against.figure(),
            }
        };
        self.flow.nets.iter().enumerate().map(report).collect()
    }

    fn variant(&self) -> &Variant {
        &self.flow.variants[self.judged]
    }

    fn key(&self, site: &Site, after: Option<u32>) -> Key {
        (self.judged, site.label().to_owned(), after)
    }

    fn lookup(&self, readings: &BTreeMap<Key, Reading>, key: &Key) -> Reading {
        readings.get(key).copied().unwrap_or(Reading::Unclear(Unclear::NotAsked))
    }

    fn resistance(&self, key: &Key) -> Reading {
        self.traced.get(key).map_or(Reading::Unclear(Unclear::NotAsked), resistance::reading)
    }

    fn field(&self, key: &Key, question: &Question) -> Reading {
        let Some(own) = self.electrical.get(key) else {
            return Reading::Unclear(Unclear::NotAsked);
        };
        let against = match question.against {
            None => Reference::Default,
            Some(Against::Material(material)) => Reference::Material(*material),
            Some(Against::Split(split)) => {
                match self.electrical.get(&(*split, key.1.clone(), key.2)) {
                    Some(other) => Reference::Section(other),
                    None => return Reading::Missing(Missing::NoSuchSite),
                }
            }
        };
        own.reading(question.quantity, question.between, against)
    }

    fn net(&self, net: usize) -> nets::Delays {
        let Some(net) = self.flow.nets.get(net) else {
            return nets::Delays::all(Reading::Unclear(Unclear::NotAsked));
        };
        let stretches = net.at.iter().map(|(site, share)| {
            let plain =
                |quantity| self.field(&self.key(site, None), &Question::plain(quantity, site));
            nets::Stretch {
                share: share.fraction(),
                total: plain(Quantity::Total),
                coupling: plain(Quantity::Coupling),
                ground: plain(Quantity::Ground),
                resistance: self.resistance(&self.key(site, None)),
            }
        });
        nets::delays(net, &stretches.collect::<Vec<_>>())
    }
}

/// What has to be computed beyond the plain geometry.
#[derive(Debug, Default)]
struct Orders {
    /// Stages to solve, each with the materials that its drops are taken against.
    electrical: BTreeMap<Key, BTreeSet<MaterialId>>,
    /// Sites whose closing space is asked.
    closing_space: BTreeSet<Key>,
    /// Other stages that are asked about.
    stages: BTreeSet<Key>,
}

impl Orders {
    fn of(flow: &Flow, judged: usize, sites: &[Site], wanted: &Wanted) -> Self {
        let mut orders = Self::default();
        let key = |variant: usize, site: &Site, after| (variant, site.label().to_owned(), after);
        for site in sites {
            let key = key(judged, site, None);
            if wanted.electrical {
                orders.electrical.entry(key.clone()).or_default();
            }
            if wanted.closing_space {
                orders.closing_space.insert(key);
            }
        }
        for site in flow.nets.iter().flat_map(|net| &net.at).map(|(site, _)| site) {
            orders.electrical.entry(key(judged, site, None)).or_default();
        }
        for limit in &flow.limits {
            for site in limit.at.as_deref().unwrap_or(sites) {
                orders.add(limit, judged, key(judged, site, limit.after));
            }
        }
        orders
    }

    fn add(&mut self, limit: &Limit, judged: usize, key: Key) {
        self.stages.insert(key.clone());
        let Claim::Bound { quantity, .. } = limit.claim else { return };
        if quantity == Quantity::ClosingSpace {
            self.closing_space.insert(key);
        } else if quantity.is_electrical() {
            let references = self.electrical.entry(key.clone()).or_default();
            match limit.against {
                Some(Against::Material(material)) => {
                    references.insert(material);
                }
                Some(Against::Split(split)) if split != judged => {
                    self.electrical.entry((split, key.1, key.2)).or_default();
                }
                Some(Against::Split(_)) | None => {}
            }
        }
    }

    fn keys(&self) -> BTreeSet<Key> {
        let all = self.electrical.keys().chain(&self.closing_space).chain(&self.stages);
        all.cloned().collect()
    }
}

/// All sites of some traced variants at the end of the flow.
fn all_sites<'a>(flow: &'a Flow, traces: &[Traces<'a>]) -> BTreeMap<Key, Traced<'a>> {
    let mut all = BTreeMap::new();
    for traces in traces {
        let variant = &flow.variants[traces.variant];
        for (coarse, fine) in traces.coarse.iter().zip(traces.fine) {
            for at in 0..fine.cell.sites.len() {
                if let Some(traced) = Traced::new(flow, variant, coarse, fine, at) {
                    all.insert((traces.variant, traced.site.label().to_owned(), None), traced);
                }
            }
        }
    }
    all
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::flow::NextLevel;
    use crate::measure::hand::{Cell, SICOH, SIO2, Void, flow, nm};
    use crate::sim::{self, SimError, Stage};
    use crate::source::Span;

    const VOID: Void = Void { x: [-12.0, 12.0], z: [18.0, 70.0] };

    fn limit(quantity: Quantity, against: Option<Against>) -> Limit {
        Limit {
            claim: Claim::Bound { quantity, at_most: false, amount: 0.0 },
            at: None,
            for_net: None,
            between: None,
            against,
            after: None,
            in_spread: None,
            text: "by hand".into(),
            span: Span::default(),
        }
    }

    fn never(_: &Variant, _: crate::measure::Fineness) -> Result<Vec<CellTrace>, SimError> {
        unreachable!("nobody asked for a closing space")
    }

    fn trace(flow: &Flow, stages: Vec<Stage>) -> Vec<CellTrace> {
        let cell = sim::Cell { sites: flow.variants[0].sites() };
        vec![CellTrace { cell, facet_nm: 0.0, stages }]
    }

    #[test]
    fn a_split_is_solved_as_the_reference_of_a_drop_and_materials_are_too() {
        let mut flow = flow(&[(40.0, 40.0)]);
        let distance = nm(60.0);
        flow.next_level = Some(NextLevel { distance, material: SICOH, span: Span::default() });
        let mut solid = flow.variants[0].clone();
        solid.split = Some(crate::source::Spanned::new("no-gap".into(), Span::default()));
        flow.variants.push(solid);
        let against = [None, Some(Against::Split(1)), Some(Against::Material(SIO2))];
        let drop = Quantity::CouplingDrop;
        flow.limits = against.iter().map(|against| limit(drop, against.clone())).collect();
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let gap = trace(&flow, cell.stages(&[(0, VOID), (1, VOID)]));
        let filled = trace(&flow, cell.stages(&[]));
        let traces = [
            Traces { variant: 0, coarse: &gap, fine: &gap },
            Traces { variant: 1, coarse: &filled, fine: &filled },
        ];
        let wanted = Wanted { electrical: true, closing_space: false, field_accuracy: 0.05 };
        let measured = Measured::of(&flow, &traces, &wanted, &never).unwrap();
        let site = &measured.sites()[0];
        let drops = against.iter().map(|against| {
            let question = Question { against: against.as_ref(), ..Question::plain(drop, site) };
            measured.readings(&question).unwrap()[0].figure().unwrap()
        });
        let drops: Vec<_> = drops.collect();
        // Without `between`, the roof is the default. The split keeps its low-k floor, so it has the
        // lower coupling to begin with.
        assert!((drops[0].value - drops[2].value).abs() < 1e-12);
        assert!(drops[1].value < drops[2].value && drops[1].value > 0.9 * drops[2].value);
        assert!(drops.iter().all(|drop| drop.value > 0.2 && drop.value < 0.7), "{drops:?}");
        let figures = measured.site_figures().unwrap();
        assert_eq!(figures.len(), 1);
        assert_eq!(figures[0].electrical.as_ref().unwrap().coupling_drop, Some(drops[0]));
    }

    #[test]
    fn an_operation_in_the_middle_is_measured_when_a_limit_asks() {
        let mut flow = flow(&[(40.0, 40.0)]);
        let mut after = limit(Quantity::FloorFilm, None);
        after.after = Some(10);
        flow.limits = vec![after];
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let gap = trace(&flow, cell.stages(&[(0, VOID), (1, VOID)]));
        let traces = [Traces { variant: 0, coarse: &gap, fine: &gap }];
        let wanted = Wanted { electrical: false, closing_space: false, field_accuracy: 0.05 };
        let measured = Measured::of(&flow, &traces, &wanted, &never).unwrap();
        let site = &measured.sites()[0];
        assert_eq!(measured.states(site, Some(10)), Some(vec![vec![State::Open]]));
        assert_eq!(measured.states(site, None), Some(vec![vec![State::Sealed]]));
        assert_eq!(measured.states(site, Some(99)), None);
    }
}
