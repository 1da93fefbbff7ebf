//! Which spaces an `at` names, in every variant.

use std::collections::BTreeSet;

use super::context::Context;
use super::draft::Draft;
use crate::diag::Diagnostic;
use crate::flow::{Site, Wafer};
use crate::syntax;
use crate::units::Length;

/// Lengths that differ by less name the same space, in nm: far below the smallest drawn
/// length, far above the rounding of a sum.
const SAME_NM: f64 = 1e-6;

/// Longest list of sites in a message.
const SHOWN_SITES: usize = 12;

/// Whether two lengths name the same space.
pub(super) fn same_length(a: Length, b: Length) -> bool {
    (a.nm() - b.nm()).abs() < SAME_NM
}

/// The sites of all variants.
pub(super) struct Places {
    variants: Vec<Vec<Known>>,
    /// Those of all variants, each label once, the unsplit flow's first.
    all: Vec<Known>,
    /// Whether a wafer is not known, so that nothing can be missed.
    unsure: bool,
}

/// A site with the lengths or the row by which an `at` finds it.
#[derive(Clone)]
struct Known {
    site: Site,
    lengths: Option<(Length, Length)>,
    row: Option<(String, usize)>,
}

impl Places {
    /// Collects the sites of all variants.
    pub fn of(wafers: &[Option<Wafer>], draft: &Draft) -> Self {
        let variants: Vec<Vec<Known>> =
            wafers.iter().map(|wafer| wafer.as_ref().map(known).unwrap_or_default()).collect();
        let mut labels = BTreeSet::new();
        let all = variants.iter().flatten();
        let all = all.filter(|known| labels.insert(known.site.label())).cloned().collect();
        let unsure = draft.unread.wafer || wafers.iter().any(Option::is_none);
        Self { variants, all, unsure }
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

    /// The sites of an `at`, each from the first variant that has it; the first that none has
    /// is told.
    pub fn anywhere(&self, at: &[syntax::Site], context: &mut Context) -> Vec<Site> {
        let mut sites: Vec<Site> = vec![];
        for site in at {
            let Some(found) = find(&self.all, site) else {
                self.missing(site, context);
                break;
            };
            if !sites.iter().any(|site| site.label() == found.label()) {
                sites.push(found.clone());
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
        let labels: Vec<&str> = self.all.iter().map(|known| known.site.label()).collect();
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
        context.say(Diagnostic::error(span, message).label(match labels.get(..SHOWN_SITES) {
            None => format!("its sites are {}", labels.join(", ")),
            Some(first) => format!("its sites are {} and more", first.join(", ")),
        }));
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
