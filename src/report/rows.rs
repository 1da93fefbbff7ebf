//! Every figure of a report as one list, by the names that flows give them: what the CSV holds
//! and what two reports are compared by.

use super::FlowReport;
use crate::flow::Dimension::{
    CapacitancePerLength, Delay, Length, One, ResistancePerLength, Share,
};
use crate::flow::{Dimension, State};
use crate::measure::{Figure, NetReport, SiteFigures, VoidFigures};

/// One figure and what it is of.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Row<'a> {
    /// Split; `None` for the unsplit flow.
    pub split: Option<&'a str>,
    /// Site or net.
    pub place: &'a str,
    /// State of the site; `None` for a net, or when it cannot be told.
    pub state: Option<State>,
    /// Quantity, as flows name it where they can name it.
    pub quantity: &'static str,
    /// Its dimension.
    pub dimension: Dimension,
    /// The figure.
    pub figure: Figure,
}

/// All figures of a report that exist: site by site, then net by net.
pub fn rows(report: &FlowReport) -> Vec<Row<'_>> {
    let sites = report.sites.iter().flat_map(|site| {
        let row = move |(quantity, dimension, figure)| Row {
            split: site.split.as_deref(),
            place: &site.site,
            state: site.state,
            quantity,
            dimension,
            figure,
        };
        of_site(site).into_iter().map(row)
    });
    let nets = report.nets.iter().flat_map(|net| {
        let row = move |(quantity, dimension, figure)| Row {
            split: net.split.as_deref(),
            place: &net.name,
            state: None,
            quantity,
            dimension,
            figure,
        };
        of_net(net).into_iter().map(row)
    });
    sites.chain(nets).collect()
}

type Told = (&'static str, Dimension, Figure);

/// Of several voids as flows mean it: the highest top, the lowest bottom, the greatest extents.
fn of_site(site: &SiteFigures) -> Vec<Told> {
    let voids = |of: fn(&VoidFigures) -> Figure, sign: f64| {
        let most = |a: Figure, b: Figure| if sign * b.value > sign * a.value { b } else { a };
        site.voids.iter().map(of).reduce(most)
    };
    let electrical = site.electrical.as_ref();
    let all = [
        ("seal-thickness", Length, site.seal_thickness_nm),
        ("throat", Length, site.throat_nm),
        ("void-top", Length, site.highest_top_nm()),
        ("void-bottom", Length, voids(|void| void.bottom_nm, -1.0)),
        ("void-width", Length, voids(|void| void.width_nm, 1.0)),
        ("void-height", Length, voids(|void| void.height_nm, 1.0)),
        ("void-share", Share, site.void_share()),
        ("side-film", Length, site.side_film_nm),
        ("floor-film", Length, site.floor_film_nm),
        ("corner-film", Length, site.corner_film_nm),
        ("roof", Length, site.thinnest_roof_nm()),
        ("polish-margin", Length, site.polish_margin_nm),
        ("seal-margin", Length, site.seal_margin_nm),
        ("closing-space", Length, site.closing_space_nm),
        ("via-clearance", Length, site.via_clearance_nm),
        ("coupling", CapacitancePerLength, electrical.map(|e| e.coupling_af_per_um)),
        ("coupling-left", CapacitancePerLength, electrical.map(|e| e.coupling_left_af_per_um)),
        ("coupling-right", CapacitancePerLength, electrical.map(|e| e.coupling_right_af_per_um)),
        ("ground", CapacitancePerLength, electrical.and_then(|e| e.ground_af_per_um)),
        ("total", CapacitancePerLength, electrical.map(|e| e.total_af_per_um)),
        ("void-gain", Share, electrical.and_then(|e| e.void_gain)),
        ("coupling-drop", Share, electrical.and_then(|e| e.coupling_drop)),
        ("total-drop", Share, electrical.and_then(|e| e.total_drop)),
        ("k-eff", One, electrical.map(|e| e.k_eff)),
        ("k-eff-lateral", One, electrical.map(|e| e.k_eff_lateral)),
        ("coupling-share", One, electrical.map(|e| e.coupling_share)),
        ("resistance", ResistancePerLength, electrical.and_then(|e| e.resistance_ohm_per_um)),
    ];
    existing(all)
}

fn of_net(net: &NetReport) -> Vec<Told> {
    existing([
        ("delay", Delay, net.delay_ps),
        ("delay-along", Delay, net.delay_along_ps),
        ("delay-against", Delay, net.delay_against_ps),
    ])
}

fn existing<const N: usize>(all: [(&'static str, Dimension, Option<Figure>); N]) -> Vec<Told> {
    all.into_iter()
        .filter_map(|(name, dimension, figure)| Some((name, dimension, figure?)))
        .collect()
}
