//! Nets, and the plane above.

use super::context::Context;
use super::draft::Draft;
use super::sites::Places;
use crate::diag::Diagnostic;
use crate::flow::{Net, NextLevel, Site};
use crate::source::{Span, Spanned};
use crate::syntax::{self, NetStatement};
use crate::units::Share;

/// The shares of a net may miss 100 % by this much, as fractions: the rounding of sums of
/// decimal fractions, nothing that anyone would write.
const SUM: f64 = 1e-9;

/// Resolves the statements of `nets`.
pub(super) fn resolve(
    draft: &Draft,
    places: &Places,
    context: &mut Context,
) -> (Vec<Net>, Option<NextLevel>) {
    let nets = draft
        .nets
        .iter()
        .filter_map(|(net, span)| {
            Some(Net {
                name: net.name.value.clone(),
                length: net.length.value,
                at: sites(net, *span, places, context)?,
                driver: net.driver.value,
                load: net.load.value,
                span: *span,
            })
        })
        .collect();
    let next_level = draft.next_level.and_then(|(film, span)| {
        let material = context.material(&film.material)?;
        if context.library.material(material).kind.conducts() {
            context.say(
                Diagnostic::error(
                    film.material.span,
                    format!("`{}` conducts", film.material.value),
                )
                .label("an insulator lies between the surface and the next level"),
            );
        }
        Some(NextLevel { distance: film.thickness.value, material, span })
    });
    (nets, next_level)
}

/// The spaces of a net with their shares, which sum to one.
fn sites(
    net: &NetStatement,
    span: Span,
    places: &Places,
    context: &mut Context,
) -> Option<Vec<(Site, Share)>> {
    let Some(at) = &net.at else {
        let only = places.only();
        if only.is_none() && !places.unsure() {
            context.say(
                Diagnostic::error(span, format!("`{}` does not say where it runs", net.name.value))
                    .label("with several sites, write `at SITE PERCENT, …`"),
            );
        }
        return Some(vec![(only?.clone(), Share::from_fraction(1.0))]);
    };
    let mut resolved: Vec<(Site, Share)> = vec![];
    for (site, share) in at {
        let found = places.anywhere(std::slice::from_ref(site), context);
        let site_span = site.span();
        let found = found.into_iter().next()?;
        if resolved.iter().any(|(other, _)| other.label() == found.label()) {
            context.say(
                Diagnostic::error(site_span, "the same site twice").label("add up its shares"),
            );
            return None;
        }
        resolved.push((found, share.value));
    }
    let sum: f64 = at.iter().map(|(_, share)| share.value.fraction()).sum();
    if (sum - 1.0).abs() > SUM {
        let percent = (sum * 1e8).round() / 1e6;
        context.say(
            Diagnostic::error(shares_span(at), format!("the shares add up to {percent} %"))
                .label("they must make 100 %"),
        );
        return None;
    }
    Some(resolved)
}

fn shares_span(at: &[(syntax::Site, Spanned<Share>)]) -> Span {
    let spans = at.iter().map(|(site, share)| site.span().to(share.span));
    spans.reduce(Span::to).unwrap_or_default()
}
