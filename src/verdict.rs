//! Limit × figures → holds, broken, or cannot tell; and the verdict over all of them.
//!
//! Pure functions. What the figures are comes through
//! [`Figures`]; a figure whose bounds straddle
//! its limit is never a pass.

use schemars::JsonSchema;
use serde::Serialize;

use crate::flow::{Claim, Dimension, Flow, Limit, Quantity, Site, State, Variant};
use crate::measure::{Figure, Figures, Missing, Question, Reading, for_all, site_states};

/// Whether a flow holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, JsonSchema)]
#[serde(rename_all = "lowercase")]
pub enum Verdict {
    /// No error finding, no broken limit.
    Pass,
    /// An error finding or a broken limit.
    Fail,
    /// Something lies within the numerical error of its boundary.
    Undecided,
}

/// One limit at one site.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct LimitReport {
    /// The limit in its standard layout.
    pub text: String,
    /// Line in the flow, from 1.
    pub line: usize,
    /// Site as the text names it; `null` for a limit of a net or of the flow.
    pub site: Option<String>,
    /// Split; `null` for the unsplit flow.
    pub split: Option<String>,
    /// The figure, in the unit of the quantity; `null` when it does not exist.
    pub value: Option<Figure>,
    /// Unit of value and margin: `nm`, `1`, `aF/um`, `ohm/um`, `ps`, `C`.
    pub unit: String,
    /// State of the space, for a limit on a state.
    pub state: Option<State>,
    /// Whether it holds; `null` when it cannot be told.
    pub holds: Option<bool>,
    /// Distance of the value from the limit, positive when it holds, same unit.
    pub margin: Option<f64>,
    /// What a reader must know of this verdict (judged at nominal values, solid space …).
    pub note: Option<String>,
}

/// Judges all limits of a flow on one variant, in the order of the text, one entry a site.
pub fn judge(flow: &Flow, variant: &Variant, figures: &dyn Figures) -> Vec<LimitReport> {
    let on_limit = |limit| {
        let judged = limit_on(limit, figures).into_iter();
        judged.map(move |(site, judgement)| report(flow, variant, limit, site, judgement))
    };
    flow.limits.iter().flat_map(on_limit).collect()
}

/// The verdict: a finding that fails or a broken limit beats what cannot be told.
pub fn overall(a_finding_fails: bool, limits: &[LimitReport]) -> Verdict {
    let any = |holds| limits.iter().any(|limit| limit.holds == holds);
    if a_finding_fails || any(Some(false)) {
        Verdict::Fail
    } else if any(None) {
        Verdict::Undecided
    } else {
        Verdict::Pass
    }
}

/// One judgement, before it is tied to its place in the text.
#[derive(Debug, Clone, PartialEq)]
struct Judgement {
    value: Option<Figure>,
    state: Option<State>,
    holds: Option<bool>,
    margin: Option<f64>,
    note: Option<String>,
    /// Whether the quantity exists.
    exists: bool,
}

impl Judgement {
    fn without_value(holds: Option<bool>, note: String) -> Self {
        Self { value: None, state: None, holds, margin: None, note: Some(note), exists: false }
    }
}

/// A limit at every place where it is judged.
fn limit_on(limit: &Limit, figures: &dyn Figures) -> Vec<(Option<Site>, Judgement)> {
    match limit.claim {
        Claim::State(wanted) => {
            let sites = limit.at.clone().unwrap_or_else(|| figures.sites());
            let states = |site: Site| {
                let sides = figures.states(&site, limit.after)?;
                Some((Some(site), on_state(wanted, &sides)))
            };
            sites.into_iter().filter_map(states).collect()
        }
        Claim::Bound { quantity, at_most, amount } => {
            let bound = Bound { at_most, amount };
            if limit.for_net.is_some() || quantity == Quantity::PeakTemperature {
                let readings = figures.readings(&Question::of(limit, quantity, None));
                let sides = readings.unwrap_or_default();
                return worst(sides.into_iter().map(|reading| on_bound(bound, reading, &[])))
                    .map(|judgement| (None, judgement))
                    .into_iter()
                    .collect();
            }
            on_sites(limit, quantity, bound, figures)
        }
    }
}

/// A limit on a quantity at its sites; without `at`, at every site where the quantity exists, and
/// once for all where it exists nowhere.
fn on_sites(
    limit: &Limit,
    quantity: Quantity,
    bound: Bound,
    figures: &dyn Figures,
) -> Vec<(Option<Site>, Judgement)> {
    let sites = limit.at.clone().unwrap_or_else(|| figures.sites());
    let judged = |site: Site| {
        let readings = figures.readings(&Question::of(limit, quantity, Some(&site)))?;
        let states = figures.states(&site, limit.after)?;
        let all = site_states(&states);
        let by_side = readings.len() == states.len();
        let side = |(at, reading): (usize, Reading)| {
            on_bound(bound, reading, if by_side { &states[at] } else { &all })
        };
        let judgement = worst(readings.into_iter().enumerate().map(side))?;
        Some((Some(site), judgement))
    };
    let all: Vec<_> = sites.into_iter().filter_map(judged).collect();
    if limit.at.is_some() || all.is_empty() {
        return all;
    }
    let (existing, missing): (Vec<_>, Vec<_>) = all.into_iter().partition(|(_, j)| j.exists);
    if existing.is_empty() {
        worst(missing.into_iter().map(|(_, j)| j)).map(|j| (None, j)).into_iter().collect()
    } else {
        existing
    }
}

/// A limit on a state: every side must meet it, and `sealed` is met by hermetic too.
fn on_state(wanted: State, sides: &[Vec<State>]) -> Judgement {
    let meets = |state| state == wanted || (wanted == State::Sealed && state == State::Hermetic);
    let holds = sides.iter().map(|side| for_all(side, meets)).fold(Some(true), both);
    let states = site_states(sides);
    let note = holds.is_none().then(|| "within the numerical error of its boundary".to_owned());
    let state = if let [state] = states[..] { Some(state) } else { None };
    Judgement { value: None, state, holds, margin: None, note, exists: true }
}

/// One side of an amount.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Bound {
    at_most: bool,
    amount: f64,
}

impl Bound {
    fn margin(self, value: f64) -> f64 {
        if self.at_most { self.amount - value } else { value - self.amount }
    }
}

/// A limit on a quantity of one side of a site that may be in some states.
fn on_bound(bound: Bound, reading: Reading, states: &[State]) -> Judgement {
    match reading {
        Reading::Known(figure) => {
            let (a, b) = (bound.margin(figure.low), bound.margin(figure.high));
            let holds = match (a >= 0.0, b >= 0.0) {
                (true, true) => Some(true),
                (false, false) => Some(false),
                _ => None,
            };
            let note =
                holds.is_none().then(|| "the limit lies within the numerical error".to_owned());
            let margin = Some(bound.margin(figure.value));
            Judgement { value: Some(figure), state: None, holds, margin, note, exists: true }
        }
        Reading::Missing(missing) => {
            let mut judgement =
                Judgement::without_value(without(missing, states), missing.to_string());
            judgement.exists = matches!(missing, Missing::Cut { .. });
            judgement
        }
        Reading::Unclear(unclear) => {
            let mut judgement = Judgement::without_value(None, unclear.to_string());
            judgement.exists = true;
            judgement
        }
    }
}

/// Whether a limit holds on a quantity that does not exist in a space of these states.
fn without(missing: Missing, states: &[State]) -> Option<bool> {
    match missing {
        Missing::Cut { .. } => Some(false),
        Missing::NoVoid
        | Missing::NoPlane
        | Missing::NotClosed
        | Missing::NoVia
        | Missing::NothingEmpty => {
            let open = for_all(states, |state| state == State::Open)?;
            let solid = for_all(states, |state| state == State::Solid)?;
            let unthreatened = solid || matches!(missing, Missing::NoPlane | Missing::NoVia);
            if open {
                Some(false)
            } else if unthreatened {
                Some(true)
            } else {
                None
            }
        }
        Missing::NoCorner
        | Missing::NoConductor
        | Missing::Shorted
        | Missing::NoSuchElectrode
        | Missing::NoGround
        | Missing::NoReference
        | Missing::NoSuchSite
        | Missing::NoNumber
        | Missing::NoTemperature => None,
    }
}

/// The worst of some judgements: broken, then cannot tell, then the least margin.
fn worst(judgements: impl Iterator<Item = Judgement>) -> Option<Judgement> {
    let rank = |judgement: &Judgement| match judgement.holds {
        Some(false) => 0,
        None => 1,
        Some(true) => 2,
    };
    let margin = |judgement: &Judgement| judgement.margin.unwrap_or(f64::INFINITY);
    judgements.min_by(|a, b| rank(a).cmp(&rank(b)).then(margin(a).total_cmp(&margin(b))))
}

/// Both: broken beats cannot tell.
fn both(a: Option<bool>, b: Option<bool>) -> Option<bool> {
    match (a, b) {
        (Some(false), _) | (_, Some(false)) => Some(false),
        (Some(true), Some(true)) => Some(true),
        _ => None,
    }
}

fn report(
    flow: &Flow,
    variant: &Variant,
    limit: &Limit,
    site: Option<Site>,
    judgement: Judgement,
) -> LimitReport {
    let nominal = limit.in_spread.map(|share| {
        format!(
            "judged at the nominal values, not in {} % of the spread",
            (share.percent() * 1e6).round() / 1e6
        )
    });
    let notes: Vec<_> = nominal.into_iter().chain(judgement.note).collect();
    LimitReport {
        text: limit.text.clone(),
        line: flow.source.position(limit.span.start).line,
        site: site.map(|site| site.label().to_owned()),
        split: variant.split.as_ref().map(|split| split.value.clone()),
        value: judgement.value,
        unit: unit(limit.claim).to_owned(),
        state: judgement.state,
        holds: judgement.holds,
        margin: judgement.margin,
        note: (!notes.is_empty()).then(|| notes.join("; ")),
    }
}

/// Unit of a limit's value in JSON.
fn unit(claim: Claim) -> &'static str {
    let Claim::Bound { quantity, .. } = claim else { return "1" };
    match quantity.dimension() {
        Dimension::Length => "nm",
        Dimension::Share | Dimension::One => "1",
        Dimension::CapacitancePerLength => "aF/um",
        Dimension::ResistancePerLength => "ohm/um",
        Dimension::Delay => "ps",
        Dimension::Temperature => "C",
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::measure::Unclear;
    use crate::measure::hand;
    use crate::source::Span;
    use crate::units::Share;

    /// A site, the states that its sides may be in, and their readings.
    type Sides = (&'static str, Vec<Vec<State>>, Vec<Reading>);

    /// Figures made by hand.
    struct Hand(Vec<Sides>);

    fn site(label: &str) -> Site {
        Site::Array { array: 0, label: label.into() }
    }

    impl Figures for Hand {
        fn sites(&self) -> Vec<Site> {
            self.0.iter().map(|(label, ..)| site(label)).collect()
        }

        fn states(&self, site: &Site, _: Option<u32>) -> Option<Vec<Vec<State>>> {
            self.0.iter().find(|(label, ..)| *label == site.label()).map(|(_, s, _)| s.clone())
        }

        fn readings(&self, question: &Question) -> Option<Vec<Reading>> {
            let Some(site) = question.site else { return self.0.first().map(|(.., r)| r.clone()) };
            self.0.iter().find(|(label, ..)| *label == site.label()).map(|(.., r)| r.clone())
        }
    }

    fn limit(claim: Claim, at: &[&str]) -> Limit {
        Limit {
            claim,
            at: (!at.is_empty()).then(|| at.iter().map(|label| site(label)).collect()),
            for_net: None,
            between: None,
            against: None,
            after: None,
            in_spread: None,
            text: "by hand".into(),
            span: Span::default(),
        }
    }

    fn judged(limit: Limit, figures: &Hand) -> Vec<LimitReport> {
        let mut flow = hand::flow(&[(40.0, 40.0)]);
        flow.limits = vec![limit];
        judge(&flow, &flow.variants[0], figures)
    }

    fn holds(reports: &[LimitReport]) -> Vec<Option<bool>> {
        reports.iter().map(|report| report.holds).collect()
    }

    fn at_least(quantity: Quantity, amount: f64) -> Claim {
        Claim::Bound { quantity, at_most: false, amount }
    }

    const SHARE: Quantity = Quantity::VoidShare;

    fn known(value: f64, error: f64) -> Reading {
        Reading::Known(Figure::within(value, error))
    }

    fn one(state: State, reading: Reading) -> Hand {
        Hand(vec![("40 nm", vec![vec![state]], vec![reading])])
    }

    #[test]
    fn a_figure_holds_breaks_or_cannot_be_told() {
        for (amount, expected) in [(0.38, Some(true)), (0.42, Some(false)), (0.405, None)] {
            let reports =
                judged(limit(at_least(SHARE, amount), &[]), &one(State::Sealed, known(0.4, 0.01)));
            assert_eq!(holds(&reports), [expected], "{amount}");
            assert!((reports[0].margin.unwrap() - (0.4 - amount)).abs() < 1e-12);
            assert_eq!(reports[0].unit, "1");
        }
        let at_most = Claim::Bound { quantity: Quantity::VoidTop, at_most: true, amount: 35.0 };
        let reports = judged(limit(at_most, &[]), &one(State::Sealed, known(35.0, 0.0)));
        assert_eq!(holds(&reports), [Some(true)], "the limit itself is allowed");
    }

    #[test]
    fn without_a_void_a_solid_space_holds_and_an_open_one_breaks() {
        let missing = Reading::Missing(Missing::NoVoid);
        for (state, expected) in [(State::Solid, Some(true)), (State::Open, Some(false))] {
            let reports = judged(limit(at_least(SHARE, 0.4), &["40 nm"]), &one(state, missing));
            assert_eq!(holds(&reports), [expected]);
            assert!(reports[0].note.is_some() && reports[0].value.is_none());
        }
    }

    #[test]
    fn without_at_a_limit_is_judged_where_the_quantity_exists() {
        let figures = Hand(vec![
            ("32 nm", vec![vec![State::Sealed]], vec![known(0.5, 0.01)]),
            ("96 nm", vec![vec![State::Solid]], vec![Reading::Missing(Missing::NoVoid)]),
        ]);
        let reports = judged(limit(at_least(SHARE, 0.4), &[]), &figures);
        assert_eq!(reports.len(), 1);
        assert_eq!(reports[0].site.as_deref(), Some("32 nm"));
        let nowhere = Hand(vec![
            ("32 nm", vec![vec![State::Open]], vec![Reading::Missing(Missing::NoVoid)]),
            ("96 nm", vec![vec![State::Solid]], vec![Reading::Missing(Missing::NoVoid)]),
        ]);
        let reports = judged(limit(at_least(SHARE, 0.4), &[]), &nowhere);
        assert_eq!(holds(&reports), [Some(false)], "existing nowhere is no way to pass");
    }

    #[test]
    fn what_a_plane_opened_is_broken_and_what_no_plane_met_is_not() {
        let margin = |missing| {
            let claim = at_least(Quantity::PolishMargin, 10.0);
            judged(limit(claim, &["40 nm"]), &one(State::Sealed, Reading::Missing(missing)))
        };
        let cut = margin(Missing::Cut { depth_nm: 3.0 });
        assert_eq!(holds(&cut), [Some(false)]);
        assert!(cut[0].note.as_ref().unwrap().contains("3.0 nm"));
        assert_eq!(holds(&margin(Missing::NoPlane)), [Some(true)]);
        let unclear = one(State::Sealed, Reading::Unclear(Unclear::Topology));
        assert_eq!(holds(&judged(limit(at_least(SHARE, 0.1), &[]), &unclear)), [None]);
        let no_number = one(State::Sealed, Reading::Missing(Missing::NoNumber));
        let claim = at_least(Quantity::Resistance, 1.0);
        assert_eq!(holds(&judged(limit(claim, &["40 nm"]), &no_number)), [None]);
    }

    #[test]
    fn the_worse_side_of_a_pair_decides() {
        let figures = Hand(vec![(
            "30 | 34 nm",
            vec![vec![State::Sealed], vec![State::Hermetic]],
            vec![known(0.5, 0.01), known(0.3, 0.01)],
        )]);
        let reports = judged(limit(at_least(SHARE, 0.4), &[]), &figures);
        assert_eq!(holds(&reports), [Some(false)]);
        assert_eq!(reports[0].value.unwrap().value, 0.3);
        let wide = Claim::Bound { quantity: SHARE, at_most: true, amount: 0.4 };
        assert_eq!(judged(limit(wide, &[]), &figures)[0].value.unwrap().value, 0.5);
    }

    #[test]
    fn sealed_is_met_by_hermetic_and_by_both_sides_only() {
        let state = |claim, sides: Vec<Vec<State>>| {
            let figures = Hand(vec![("40 nm", sides, Vec::new())]);
            holds(&judged(limit(Claim::State(claim), &[]), &figures))[0]
        };
        use State::{Hermetic, Open, Sealed, Solid};
        assert_eq!(state(Sealed, vec![vec![Hermetic]]), Some(true));
        assert_eq!(state(Hermetic, vec![vec![Sealed]]), Some(false));
        assert_eq!(state(Sealed, vec![vec![Sealed], vec![Solid]]), Some(false));
        assert_eq!(state(Sealed, vec![vec![Open, Sealed]]), None);
        assert_eq!(state(Sealed, vec![vec![Sealed, Hermetic]]), Some(true));
        assert_eq!(state(Open, vec![vec![Open], vec![Open]]), Some(true));
    }

    #[test]
    fn a_spread_limit_is_judged_at_nominal_and_says_so() {
        let mut spread = limit(at_least(SHARE, 0.1), &[]);
        spread.in_spread = Some(Share::from_percent(99.0));
        let reports = judged(spread, &one(State::Sealed, known(0.4, 0.01)));
        assert_eq!(holds(&reports), [Some(true)]);
        assert!(reports[0].note.as_ref().unwrap().contains("99 %"));
    }

    #[test]
    fn broken_beats_undecided_beats_pass() {
        let report = |holds| LimitReport {
            text: String::new(),
            line: 1,
            site: None,
            split: None,
            value: None,
            unit: "1".into(),
            state: None,
            holds,
            margin: None,
            note: None,
        };
        let all = [report(Some(true)), report(None), report(Some(false))];
        assert_eq!(overall(false, &all), Verdict::Fail);
        assert_eq!(overall(false, &all[..2]), Verdict::Undecided);
        assert_eq!(overall(false, &all[..1]), Verdict::Pass);
        assert_eq!(overall(true, &all[..1]), Verdict::Fail);
    }
}
