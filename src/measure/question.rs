//! What may be asked of the figures of one variant.

use super::Reading;
use crate::flow::{Against, Limit, Quantity, Site, State};

/// A quantity at one place, with everything that a limit may add to it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Question<'a> {
    /// The quantity.
    pub quantity: Quantity,
    /// Where; `None` for one of the whole flow or of a net.
    pub site: Option<&'a Site>,
    /// Of which net, by its index.
    pub net: Option<usize>,
    /// After which operation; `None`: of the finished flow.
    pub after: Option<u32>,
    /// Between the layers of which name.
    pub between: Option<&'a str>,
    /// Against what.
    pub against: Option<&'a Against>,
}

impl<'a> Question<'a> {
    /// A quantity at a site of the finished flow.
    pub fn plain(quantity: Quantity, site: &'a Site) -> Self {
        let site = Some(site);
        Self { quantity, site, net: None, after: None, between: None, against: None }
    }

    /// What a limit asks of a quantity at a site, or of its net or the whole flow.
    pub fn of(limit: &'a Limit, quantity: Quantity, site: Option<&'a Site>) -> Self {
        Self {
            quantity,
            site,
            net: limit.for_net,
            after: limit.after,
            between: limit.between.as_deref(),
            against: limit.against.as_ref(),
        }
    }
}

/// The figures of one variant.
pub trait Figures {
    /// All sites of the variant, in the order of the text.
    fn sites(&self) -> Vec<Site>;

    /// The states that each side of a site may be in, left first; `None` where the variant lacks
    /// the site or the operation.
    fn states(&self, site: &Site, after: Option<u32>) -> Option<Vec<Vec<State>>>;

    /// What is known of a quantity, on each side of a site where sides differ; `None` as for the
    /// states.
    fn readings(&self, question: &Question) -> Option<Vec<Reading>>;
}
