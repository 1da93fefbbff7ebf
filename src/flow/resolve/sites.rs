//! Which spaces an `at` names, in every variant.

use super::context::Context;
use super::draft::Draft;
use crate::diag::Diagnostic;
use crate::flow::{Site, Wafer};
use crate::syntax::{self, MAX_SITES};
use crate::units::Length;

/// Lengths that differ by less name the same space, in nm: far below the smallest drawn
/// length, far above the rounding of a sum.
const SAME_NM: f64 = 1e-6;

/// Whether two lengths name the same space.
pub(super) fn same_length(a: Length, b: Length) -> bool {
    (a.nm() - b.nm()).abs() < SAME_NM
}

/// The sites of all variants.
pub(super) struct Places {
    variants: Vec<Vec<Known>>,
    /// Whether a wafer is not known, so that nothing can be missed.
    unsure: bool,
}

/// A site with the lengths or the row by which an `at` finds it.
struct Known {
    site: Site,
    lengths: Option<(Length, Length)>,
    row: Option<(String, usize)>,
}

impl Places {
    /// Collects the sites of all variants.
    pub fn of(wafers: &[Option<Wafer>], draft: &Draft, context: &mut Context) -> Self {
        let mut variants = vec![];
        for (variant, wafer) in wafers.iter().enumerate() {
            let known = wafer.as_ref().map(known).unwrap_or_default();
            if let Some(wafer) = wafer
                && known.len() > MAX_SITES
            {
                context.enter(variant.checked_sub(1).map(|at| &draft.splits[at]));
                let message = format!("the wafer has {} spaces", known.len());
                context.say(
                    Diagnostic::error(wafer.lines.span, message)
                        .label(format!("a flow may have {MAX_SITES} sites, rows included")),
                );
                context.enter(None);
            }
            variants.push(known);
        }
        let unsure = draft.unread.wafer || wafers.iter().any(Option::is_none);
        Self { variants, unsure }
    }

    /// The sites of an `at` in one variant; those that it lacks are left out.
    pub fn in_variant(&self, variant: usize, at: &[syntax::Site]) -> Vec<Site> {
        let mut sites = vec![];
        for site in at.iter().filter_map(|site| find(&self.variants[variant], site)) {
            if !sites.contains(site) {
                sites.push(site.clone());
            }
        }
        sites
    }

    /// The sites of an `at`, each from the first variant that has it; one that none has is told.
    pub fn anywhere(&self, at: &[syntax::Site], context: &mut Context) -> Vec<Site> {
        let mut sites: Vec<Site> = vec![];
        for site in at {
            match self.variants.iter().find_map(|known| find(known, site)) {
                Some(found) if sites.iter().any(|site| site.label() == found.label()) => {}
                Some(found) => sites.push(found.clone()),
                None => self.missing(site, context),
            }
        }
        sites
    }

    /// The only site of the unsplit flow, if there is only one.
    pub fn only(&self) -> Option<&Site> {
        match self.variants.first()?.as_slice() {
            [only] => Some(&only.site),
            _ => None,
        }
    }

    /// Whether the sites of a wafer are not known.
    pub fn unsure(&self) -> bool {
        self.unsure
    }

    fn missing(&self, site: &syntax::Site, context: &mut Context) {
        if self.unsure {
            return;
        }
        let span = site.span();
        let mut labels: Vec<&str> = vec![];
        for known in self.variants.iter().flatten() {
            if !labels.contains(&known.site.label()) {
                labels.push(known.site.label());
            }
        }
        let message = match site {
            syntax::Site::Row { row, .. } => {
                let of_row = labels.iter().filter(|label| {
                    label.split_once(':').is_some_and(|(name, _)| name == row.value)
                });
                match of_row.count() {
                    0 => format!("the wafer has no row `{}`", row.value),
                    count => format!("the row `{}` has {count} spaces", row.value),
                }
            }
            syntax::Site::Space { .. } => {
                format!("the wafer has no space {}", context.text(span).trim_end_matches(','))
            }
        };
        context.say(
            Diagnostic::error(span, message).label(format!("its sites are {}", labels.join(", "))),
        );
    }
}

fn known(wafer: &Wafer) -> Vec<Known> {
    wafer
        .sites()
        .into_iter()
        .map(|site| {
            let (lengths, row) = match &site {
                Site::Array { array, .. } => {
                    let pair = wafer.lines.spaces[*array];
                    (Some((pair.left.nominal, pair.right.nominal)), None)
                }
                Site::Row { row, space, .. } => {
                    (None, Some((wafer.rows[*row].name.clone(), *space)))
                }
            };
            Known { site, lengths, row }
        })
        .collect()
}

fn find<'k>(known: &'k [Known], site: &syntax::Site) -> Option<&'k Site> {
    let found = known.iter().find(|known| match site {
        syntax::Site::Space { left, right, .. } => known
            .lengths
            .is_some_and(|(l, r)| same_length(l, *left) && same_length(r, right.unwrap_or(*left))),
        syntax::Site::Row { row, space, .. } => {
            known.row.as_ref().is_some_and(|(name, n)| *name == row.value && *n == *space as usize)
        }
    })?;
    Some(&found.site)
}
