//! The geometric quantities of one site from its two traces.

use super::error::GrowthError;
use super::gap::Gap;
use super::reading::Reading;
use super::{Figure, MeasureError, SeamFigures, Side, VoidFigures};
use crate::flow::{Flow, Quantity, Site, State, Variant};
use crate::sim::{CellTrace, Stage};

/// One site of one variant, traced at two resolutions, up to one stage.
#[derive(Debug, Clone, Copy)]
pub struct Traced<'a> {
    /// The flow.
    pub flow: &'a Flow,
    /// The variant of it that was traced.
    pub variant: &'a Variant,
    /// The site.
    pub site: &'a Site,
    /// Stages of its cell, coarse: the wafer first, the last one is what is measured.
    pub coarse: &'a [Stage],
    /// The same at half the facet.
    pub fine: &'a [Stage],
    /// That facet, in nm.
    pub facet_nm: f64,
}

impl<'a> Traced<'a> {
    /// The `index`-th site of a cell traced twice, at the end of the flow.
    pub fn new(
        flow: &'a Flow,
        variant: &'a Variant,
        coarse: &'a CellTrace,
        fine: &'a CellTrace,
        index: usize,
    ) -> Option<Self> {
        let site = fine.cell.sites.get(index)?;
        let (facet_nm, coarse, fine) = (fine.facet_nm, &coarse.stages, &fine.stages);
        Some(Self { flow, variant, site, coarse, fine, facet_nm })
    }

    /// The same site after an operation; `None` where the variant skips it.
    pub fn after(self, op: u32) -> Option<Self> {
        let step = self.variant.steps.iter().position(|step| step.op == op)?;
        let upto = self.fine.iter().position(|stage| stage.step == Some(step))?;
        Some(Self { coarse: self.coarse.get(..=upto)?, fine: &self.fine[..=upto], ..self })
    }

    /// Spaces of the cell that the site names, with the side of the line on which each lies.
    pub fn spaces(&self) -> Vec<(usize, Side)> {
        match self.site {
            Site::Row { space, .. } => vec![(space - 1, Side::Both)],
            Site::Array { array, .. } => {
                let pair = &self.variant.wafer.lines.spaces[*array];
                if pair.left.nominal == pair.right.nominal {
                    vec![(1, Side::Both)]
                } else {
                    vec![(0, Side::Left), (1, Side::Right)]
                }
            }
        }
    }

    /// The line that electrical figures are of, from 0: of an array its only one, of a row the one
    /// right of the space, at the last space the last.
    pub fn line(&self) -> usize {
        let lines = self.fine.last().map_or(1, |stage| stage.section.drawn.lines.len());
        match self.site {
            Site::Array { .. } => 0,
            Site::Row { space, .. } => (space - 1).min(lines - 1),
        }
    }

    /// Measures both traces.
    pub fn geometry(&self) -> Result<Geometry, MeasureError> {
        let gap = |stages: &[Stage], index| {
            Gap::of(self.variant, stages, index)
                .ok_or(MeasureError::Inconsistent("a space without a state"))
        };
        let sides = self.spaces().into_iter().map(|(index, side)| {
            Ok(SidePair { side, coarse: gap(self.coarse, index)?, fine: gap(self.fine, index)? })
        });
        let sides: Vec<_> = sides.collect::<Result<_, MeasureError>>()?;
        for gap in sides.iter().flat_map(|s| [&s.coarse, &s.fine]) {
            finite(gap)?;
        }
        let error = GrowthError::new(self.flow.library.settings.closure_width_nm, self.facet_nm);
        Ok(Geometry { error, sides })
    }
}

/// One space at two resolutions.
#[derive(Debug, Clone)]
struct SidePair {
    side: Side,
    coarse: Gap,
    fine: Gap,
}

/// The spaces of one site, measured at two resolutions.
#[derive(Debug, Clone)]
pub struct Geometry {
    error: GrowthError,
    sides: Vec<SidePair>,
}

impl Geometry {
    /// A geometric quantity on each side of the site, left first.
    pub fn readings(&self, quantity: Quantity) -> Vec<Reading> {
        self.sides.iter().map(|s| self.error.reading(&s.coarse, &s.fine, quantity)).collect()
    }

    /// The states that each side may be in, left first; one each where it can be told.
    pub fn states(&self) -> Vec<Vec<State>> {
        self.sides.iter().map(|s| self.error.states(&s.coarse, &s.fine)).collect()
    }

    /// The least figure of a quantity over the sides; `None` unless each side has one.
    pub(super) fn least(&self, quantity: Quantity) -> Option<Figure> {
        let figures = self.readings(quantity).into_iter().map(Reading::figure);
        let figures: Vec<_> = figures.collect::<Option<_>>()?;
        figures.into_iter().min_by(|a, b| a.value.total_cmp(&b.value))
    }

    /// Index of the step that closed the space, thickness of its film at closure in nm: of the side
    /// that took most.
    pub(super) fn sealed_by(&self) -> Option<(usize, Option<Figure>)> {
        let seals = self.sides.iter().map(|s| {
            let seal = s.fine.seal?;
            let at = |gap: &Gap| Some(gap.seal?.film?.at_closure_nm);
            Some((seal.step, self.error.closing(at(&s.coarse), at(&s.fine))))
        });
        let seals: Vec<_> = seals.collect::<Option<_>>()?;
        let thickness = |figure: Option<Figure>| figure.map_or(0.0, |figure| figure.value);
        seals
            .into_iter()
            .max_by(|a, b| a.0.cmp(&b.0).then(thickness(a.1).total_cmp(&thickness(b.1))))
    }

    /// Width of the widest throat still open, in nm.
    pub(super) fn throat(&self) -> Option<Figure> {
        let throats =
            self.sides.iter().filter_map(|s| self.error.optional(s.coarse.throat, s.fine.throat));
        throats.max_by(|a, b| a.value.total_cmp(&b.value))
    }

    /// All voids, left to right, lowest first.
    pub(super) fn voids(&self) -> Vec<VoidFigures> {
        let error = &self.error;
        let sides = self.sides.iter().flat_map(|s| s.fine.voids.iter().map(move |void| (s, void)));
        sides
            .map(|(s, fine)| {
                let coarse = GrowthError::counterpart(&s.coarse, fine);
                VoidFigures {
                    side: s.side,
                    top_nm: error.top(coarse.top, fine.top),
                    bottom_nm: error.length(coarse.bottom, fine.bottom),
                    width_nm: error.length(coarse.width, fine.width),
                    height_nm: error.top(coarse.height, fine.height),
                    area_nm2: error.area(coarse.area, fine.area, fine.perimeter, 1.0),
                    share: error.area(coarse.share, fine.share, fine.perimeter, s.fine.drawn_area),
                    side_film_nm: error.optional(coarse.side_film, fine.side_film),
                    floor_film_nm: error.optional(coarse.floor_film, fine.floor_film),
                    roof_nm: coarse.roof.zip(fine.roof).map(|(c, f)| error.top(c, f)),
                    outline_nm: fine.outline(),
                }
            })
            .collect()
    }

    /// All seams, left to right.
    pub(super) fn seams(&self) -> Vec<SeamFigures> {
        let seams = self.sides.iter().flat_map(|s| &s.fine.seams);
        seams.map(|&[bottom_nm, top_nm]| SeamFigures { top_nm, bottom_nm }).collect()
    }

    /// Index of the step whose plane comes nearest to the void.
    pub(super) fn nearest_plane(&self) -> Option<usize> {
        let planes = self.sides.iter().filter_map(|s| s.fine.polish.ok());
        planes.min_by(|a, b| a.margin_nm.total_cmp(&b.margin_nm)).map(|clearance| clearance.step)
    }
}

fn finite(gap: &Gap) -> Result<(), MeasureError> {
    let all = Quantity::ALL.iter();
    let broken = all.into_iter().find(|q| gap.value(**q).is_ok_and(|value| !value.is_finite()));
    broken.map_or(Ok(()), |quantity| Err(MeasureError::NotFinite(quantity.name())))
}

/// The states that a site may be in: of each choice of one state a side, the first of open,
/// sealed, hermetic, solid that one side has.
pub fn site_states(sides: &[Vec<State>]) -> Vec<State> {
    let mut states = sides.iter().fold(vec![State::Solid], |so_far, side| {
        so_far.iter().flat_map(|a| side.iter().map(|b| (*a).min(*b))).collect()
    });
    states.sort_unstable();
    states.dedup();
    states
}

/// Whether something holds for all, or for none, of the possible states; `None` in between.
pub fn for_all(states: &[State], meets: impl Fn(State) -> bool) -> Option<bool> {
    let met = states.iter().filter(|state| meets(**state)).count();
    match met {
        0 => Some(false),
        met if met == states.len() => Some(true),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::measure::hand::{Cell, Void, flow};
    use crate::measure::{Extras, Missing, site};

    /// 24 nm wide between lines 40 nm apart, 52 nm high: films of 8 nm at the sides, 8 on the floor.
    const VOID: Void = Void { x: [-12.0, 12.0], z: [18.0, 70.0] };

    fn measured(flow: &Flow, coarse: &[Stage], fine: &[Stage], site: &Site) -> Geometry {
        let traced = Traced { flow, variant: &flow.variants[0], site, coarse, fine, facet_nm: 0.0 };
        traced.geometry().unwrap()
    }

    fn value(geometry: &Geometry, quantity: Quantity) -> f64 {
        geometry.least(quantity).unwrap_or_else(|| panic!("no {}", quantity.name())).value
    }

    fn near(a: f64, b: f64) -> bool {
        (a - b).abs() < 1e-5
    }

    #[test]
    fn a_rectangle_in_a_rectangle_has_every_quantity_by_hand() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let stages = cell.stages(&[(0, VOID), (1, VOID)]);
        let geometry = measured(&flow, &stages, &stages, &flow.variants[0].sites()[0]);
        let by_hand = [
            (Quantity::VoidTop, -10.0),
            (Quantity::VoidBottom, 18.0),
            (Quantity::VoidWidth, 24.0),
            (Quantity::VoidHeight, 52.0),
            (Quantity::VoidShare, 24.0 * 52.0 / (40.0 * 80.0)),
            (Quantity::SideFilm, 8.0),
            (Quantity::FloorFilm, 8.0),
            (Quantity::CornerFilm, 8.0_f64.hypot(10.0)),
            (Quantity::Roof, 50.0),
            (Quantity::PolishMargin, 50.0),
            (Quantity::SealMargin, 10.0),
        ];
        for (quantity, expected) in by_hand {
            let found = value(&geometry, quantity);
            assert!(near(found, expected), "{}: {found}, by hand {expected}", quantity.name());
        }
        assert_eq!(geometry.readings(Quantity::ViaClearance), [Reading::Missing(Missing::NoVia)]);
        assert_eq!(geometry.states(), [[State::Sealed]]);
    }

    #[test]
    fn a_void_above_the_lines_counts_with_what_lies_between_them() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let high = Void { x: [-12.0, 12.0], z: [60.0, 100.0] };
        let stages = cell.stages(&[(0, high), (1, high)]);
        let geometry = measured(&flow, &stages, &stages, &flow.variants[0].sites()[0]);
        assert!(near(value(&geometry, Quantity::VoidShare), 24.0 * 20.0 / 3200.0));
        assert!(near(value(&geometry, Quantity::VoidTop), 20.0));
        assert!(near(value(&geometry, Quantity::SideFilm), 8.0), "at its widest place");
        assert!(near(value(&geometry, Quantity::CornerFilm), 8.0));
        assert!(near(value(&geometry, Quantity::FloorFilm), 50.0));
    }

    #[test]
    fn a_bar_of_copper_resists_by_its_size() {
        // Cu, ρ0 1.72 µΩ cm, λ 39 nm, R 0.3, p 0, grain as wide as the line: 20 × 40 nm has 5.595 µΩ cm
        // (closed forms of Fuchs and Sondheimer, Mayadas and Shatzkes); 80 nm high it has less of
        // the surface term, ⅜ · 39 · (1/40 − 1/80) · 1.72.
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let stages = cell.stages(&[]);
        let site = &flow.variants[0].sites()[0];
        let traced = Traced {
            flow: &flow,
            variant: &flow.variants[0],
            site,
            coarse: &stages,
            fine: &stages,
            facet_nm: 0.0,
        };
        let resistivity = 5.595 - 0.375 * 39.0 * (1.0 / 40.0 - 1.0 / 80.0) * 1.72;
        let by_hand = resistivity * 1e4 / (20.0 * 80.0);
        let found = crate::measure::resistance::reading(&traced).figure().unwrap();
        assert!((found.value / by_hand - 1.0).abs() < 2e-3, "{found:?}, by hand {by_hand}");
    }

    #[test]
    fn several_voids_give_the_highest_top_the_lowest_bottom_and_the_sum() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let upper = Void { x: [-5.0, 5.0], z: [75.0, 90.0] };
        let lower = Void { x: [-10.0, 10.0], z: [20.0, 60.0] };
        let stages = cell.stages(&[(1, lower), (1, upper)]);
        let geometry = measured(&flow, &stages, &stages, &flow.variants[0].sites()[0]);
        assert!(near(value(&geometry, Quantity::VoidTop), 10.0));
        assert!(near(value(&geometry, Quantity::VoidBottom), 20.0));
        assert!(near(value(&geometry, Quantity::VoidShare), (50.0 + 800.0) / 3200.0));
        assert!(near(value(&geometry, Quantity::SideFilm), 10.0));
        assert!(near(value(&geometry, Quantity::FloorFilm), 10.0));
        assert!(near(value(&geometry, Quantity::PolishMargin), 30.0));
        assert_eq!(geometry.voids().len(), 2);
    }

    #[test]
    fn a_pair_keeps_both_sides() {
        let flow = flow(&[(40.0, 60.0)]);
        let cell = Cell { spaces: vec![40.0, 60.0] };
        let wide = Void { x: [-12.0, 12.0], z: [18.0, 74.0] };
        let stages = cell.stages(&[(0, VOID), (1, wide)]);
        let geometry = measured(&flow, &stages, &stages, &flow.variants[0].sites()[0]);
        let films =
            geometry.readings(Quantity::SideFilm).into_iter().map(|r| r.figure().unwrap().value);
        let films: Vec<_> = films.collect();
        assert!(near(films[0], 8.0) && near(films[1], 18.0), "{films:?}");
        assert!(near(value(&geometry, Quantity::PolishMargin), 46.0), "the worse side");
        let sides: Vec<_> = geometry.voids().iter().map(|void| void.side).collect();
        assert_eq!(sides, [Side::Left, Side::Right]);
    }

    #[test]
    fn a_row_is_measured_space_by_space() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 30.0, 80.0] };
        let narrow = Void { x: [-7.0, 9.0], z: [20.0, 60.0] };
        let stages = cell.stages(&[(1, narrow), (2, VOID)]);
        let at = |space| {
            let site = Site::Row { row: 0, space, label: format!("edge:{space}") };
            measured(&flow, &stages, &stages, &site)
        };
        assert_eq!(at(1).readings(Quantity::VoidTop), [Reading::Missing(Missing::NoVoid)]);
        assert!(near(value(&at(2), Quantity::SideFilm), 6.0), "the nearer side");
        assert!(near(value(&at(2), Quantity::VoidShare), 16.0 * 40.0 / 2400.0));
        assert!(near(value(&at(3), Quantity::SideFilm), 28.0));
        assert!(near(value(&at(3), Quantity::VoidShare), 24.0 * 52.0 / 6400.0));
    }

    #[test]
    fn the_error_is_the_difference_of_two_resolutions() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let coarse = cell.stages(&[(1, Void { x: [-12.0, 12.0], z: [18.0, 72.0] })]);
        let fine = cell.stages(&[(1, VOID)]);
        let site = &flow.variants[0].sites()[0];
        let top = measured(&flow, &coarse, &fine, site).least(Quantity::VoidTop).unwrap();
        assert!(near(top.value, -10.0) && near(top.high - top.value, 1.25 * 2.0 + 0.01), "{top:?}");
        let none = measured(&flow, &cell.stages(&[]), &fine, site);
        assert!(matches!(none.readings(Quantity::VoidTop)[..], [Reading::Unclear(_)]));
        assert_eq!(none.voids().len(), 1, "all of it doubtful");
        assert!(none.voids()[0].height_nm.low <= 0.0);
    }

    #[test]
    fn closing_within_the_error_cannot_be_told() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let mut stages = cell.stages(&[(1, VOID)]);
        for event in &mut stages[2].events {
            if let crate::sim::Event::Closed { thickness_nm, .. } = event {
                *thickness_nm = 59.995;
            }
        }
        let geometry = measured(&flow, &stages, &stages, &flow.variants[0].sites()[0]);
        assert_eq!(geometry.states(), [[State::Open, State::Sealed]]);
    }

    #[test]
    fn open_spaces_have_films_and_no_void() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let stages = &cell.stages(&[])[..2];
        let geometry = measured(&flow, stages, stages, &flow.variants[0].sites()[0]);
        assert!(near(value(&geometry, Quantity::SideFilm), 0.0));
        assert!(near(value(&geometry, Quantity::FloorFilm), 0.0));
        assert!(near(value(&geometry, Quantity::CornerFilm), 0.0));
        assert_eq!(geometry.readings(Quantity::Roof), [Reading::Missing(Missing::NoVoid)]);
    }

    #[test]
    fn a_plane_that_opened_the_void_leaves_no_margin() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let mut stages = cell.stages(&[(1, VOID)]);
        let void = cell.void(1, VOID);
        stages[3].events = vec![
            crate::sim::Event::Planed { z_nm: 66.0, surface_nm: 140.0 },
            crate::sim::Event::Opened { space: 1, void },
        ];
        let geometry = measured(&flow, &stages, &stages, &flow.variants[0].sites()[0]);
        let cut = Missing::Cut { depth_nm: 4.0 };
        assert_eq!(geometry.readings(Quantity::PolishMargin), [Reading::Missing(cut)]);
    }

    #[test]
    fn the_site_says_what_closed_it_and_how_safe_the_plane_is() {
        let flow = flow(&[(40.0, 40.0)]);
        let cell = Cell { spaces: vec![40.0, 40.0] };
        let stages = cell.stages(&[(0, VOID), (1, VOID)]);
        let sites = flow.variants[0].sites();
        let traced = Traced {
            flow: &flow,
            variant: &flow.variants[0],
            site: &sites[0],
            coarse: &stages,
            fine: &stages,
            facet_nm: 0.0,
        };
        let figures = site(&traced, &traced.geometry().unwrap(), Extras::default()).unwrap();
        assert_eq!(figures.sealed_by.as_deref(), Some("020"));
        assert_eq!(figures.sealed, Some(true));
        assert!(near(figures.seal_thickness_nm.unwrap().value, 50.0));
        assert!(near(figures.polish_margin_sigmas.unwrap(), 50.0 / 2.0));
        assert_eq!(figures.steps.len(), 3);
        assert!(near(figures.steps[1].surface_top_nm, 60.0));
        let sealed = traced.after(20).unwrap();
        assert_eq!(sealed.fine.len(), 3);
        let unpolished = sealed.geometry().unwrap().readings(Quantity::PolishMargin);
        assert_eq!(unpolished, [Reading::Missing(Missing::NoPlane)]);
    }
}
