//! What a check hands in: findings as it meets them, site by site, and numbers it lacked.

use std::collections::BTreeMap;

use super::context::{site_of, space_at};
use super::{Context, Rule};
use crate::diag::Severity;
use crate::flow::Site;
use crate::geom::Point;
use crate::library::RuleSettings;
use crate::sim::{CellTrace, Exposure};
use crate::source::Span;

/// One fact at one site, before facts are gathered over sites.
#[derive(Debug, Clone)]
pub struct Found {
    pub(super) step: Option<usize>,
    pub(super) span: Span,
    pub(super) site: Option<String>,
    pub(super) severity: Option<Severity>,
    pub(super) message: String,
    pub(super) help: Option<String>,
    pub(super) place: Option<Point>,
    pub(super) exposed_nm: Option<f64>,
    pub(super) fact: Option<String>,
    pub(super) weight: f64,
}

impl Found {
    /// On a step.
    pub fn on_step(context: &Context<'_>, step: usize, message: impl Into<String>) -> Self {
        Self { step: Some(step), ..Self::on(context.variant.steps[step].span, message) }
    }

    /// On the wafer as found.
    pub fn on_wafer(context: &Context<'_>, message: impl Into<String>) -> Self {
        Self::on(context.variant.wafer.span, message)
    }

    /// On any other statement.
    pub fn on(span: Span, message: impl Into<String>) -> Self {
        Self {
            step: None,
            span,
            site: None,
            severity: None,
            message: message.into(),
            help: None,
            place: None,
            exposed_nm: None,
            fact: None,
            weight: 0.0,
        }
    }

    /// At a space of a cell.
    #[must_use]
    pub fn in_space(self, cell: &CellTrace, space: usize) -> Self {
        self.at_site(site_of(cell, space))
    }

    /// At a site.
    #[must_use]
    pub fn at_site(mut self, site: &Site) -> Self {
        self.site = Some(site.label().to_owned());
        self
    }

    /// At the site or sites of this name; everywhere without.
    #[must_use]
    pub fn at_label(mut self, label: Option<&str>) -> Self {
        self.site = label.map(str::to_owned);
        self
    }

    /// At a place of a cell's section, and so at the site of the nearest space.
    #[must_use]
    pub fn at_place(mut self, cell: &CellTrace, place: Point) -> Self {
        self.place = Some(place);
        self.in_space(cell, space_at(cell, place.x))
    }

    /// At an exposed surface of a cell.
    #[must_use]
    pub fn at_exposure(mut self, cell: &CellTrace, exposure: &Exposure) -> Self {
        self.exposed_nm = Some(exposure.length_nm);
        self.weight = exposure.length_nm;
        self.at_place(cell, exposure.place)
    }

    /// What to do about it.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// Another severity than the rule's.
    #[must_use]
    pub fn severity(mut self, severity: Severity) -> Self {
        self.severity = Some(severity);
        self
    }

    /// One fact at several sites is told once, by its heaviest words. Facts are told apart by
    /// this name; without it every different message is a fact of its own.
    #[must_use]
    pub fn fact(mut self, name: impl Into<String>, weight: f64) -> Self {
        self.fact = Some(name.into());
        self.weight = weight;
        self
    }
}

/// The hand-in tray of one rule.
pub struct Findings<'a> {
    pub(super) rule: &'static Rule,
    pub(super) settings: Option<&'a RuleSettings>,
    pub(super) found: Vec<Found>,
    /// Missing keys by the material or process that lacks them.
    pub(super) missing: BTreeMap<(String, &'static str), &'static str>,
}

impl<'a> Findings<'a> {
    pub(super) fn of(rule: &'static Rule, context: &Context<'a>) -> Self {
        Self {
            rule,
            settings: context.flow.library.rules.get(rule.name),
            found: Vec::new(),
            missing: BTreeMap::new(),
        }
    }

    /// Hands in a fact.
    pub fn add(&mut self, found: Found) {
        self.found.push(found);
    }

    /// A number of the rule: the library's, else its default. The registry test reads every
    /// check's keys, so a key that the rule does not list is an error of the program.
    pub fn threshold(&self, key: &str) -> f64 {
        let set = self.settings.and_then(|settings| settings.thresholds.get(key).copied());
        let default = || self.rule.thresholds.iter().find(|t| t.key == key).map(|t| t.default);
        set.or_else(default).expect("a rule asks only for thresholds that it lists")
    }

    /// A number that the check wants of a material or process; when it is missing, the run's
    /// collected note names it.
    pub fn want<T>(&mut self, owner: &str, key: &'static str, value: Option<T>) -> Option<T> {
        if value.is_none() {
            self.missing.insert((owner.to_owned(), key), self.rule.name);
        }
        value
    }
}
