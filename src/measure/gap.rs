//! Everything geometric about one space in one trace, as plain numbers in nm.

use super::film;
use super::polish::{self, Clearance};
use super::reading::Missing;
use super::seal::{self, Seal};
use super::via;
use super::view::{View, Window};
use super::void::{VoidShape, drawn_area};
use crate::flow::{Quantity, State, Variant};
use crate::geom::Region;
use crate::sim::Stage;

/// One space in one trace, after the last of the stages given.
#[derive(Debug, Clone)]
pub(super) struct Gap {
    /// Its state.
    pub state: State,
    /// Throat still open.
    pub throat: Option<f64>,
    /// What closed it.
    pub seal: Option<Seal>,
    /// Voids, lowest first.
    pub voids: Vec<VoidShape>,
    /// Area of the drawn space between line bottom and top, nm².
    pub drawn_area: f64,
    /// Least solid to a line side, level, of voids and open space.
    side_film: Option<f64>,
    /// Least solid on the floor at mid-space, below voids and open space.
    floor_film: Option<f64>,
    /// Least film around the top corners.
    corner_film: Result<f64, Missing>,
    /// Planes after closure.
    pub polish: Result<Clearance, Missing>,
    /// Of vias.
    via_clearance: Option<f64>,
    /// Seams: bottom and top above the line top.
    pub seams: Vec<[f64; 2]>,
}

impl Gap {
    /// Measures the `index`-th space of a cell after the last of some stages; `None` without stages.
    pub fn of(variant: &Variant, stages: &[Stage], index: usize) -> Option<Self> {
        let (first, last) = (stages.first()?, stages.last()?);
        let space = View::of(&last.section, index);
        let state = *last.states.get(index)?;
        let drawn_area = drawn_area(&View::of(&first.section, index));
        let floor = film::floor_height(variant, stages, index);
        let voids: Vec<_> = space
            .voids
            .iter()
            .filter_map(|void| VoidShape::of(void, &space, drawn_area, floor))
            .collect();
        let open = if state == State::Open { below_line_top(&space) } else { Region::empty() };
        let side = voids.iter().map(|v| v.side_film).chain([film::side(&space, &open)]);
        let floors = voids.iter().map(|v| v.floor_film);
        let floors = floors.chain([floor.and_then(|floor| film::floor(&space, &open, floor))]);
        let radius_nm = variant.wafer.lines.corner_radius.nominal.nm();
        Some(Self {
            state,
            throat: last.throats_nm.get(index).copied().flatten().filter(|width| width.is_finite()),
            seal: seal::seal(variant, stages, index),
            side_film: least(side),
            floor_film: least(floors),
            corner_film: film::corner(&space, radius_nm).ok_or(Missing::NoCorner),
            polish: polish::clearance(stages, index),
            via_clearance: via::clearance_nm(stages, index),
            seams: seams(last, index),
            drawn_area,
            voids,
        })
    }

    /// The value of a geometric quantity: nm, or a share of one.
    ///
    /// Several voids: the highest top, the lowest bottom, the greatest extents, the sum of
    /// shares, the least films and roof.
    pub fn value(&self, quantity: Quantity) -> Result<f64, Missing> {
        let greatest = |of: fn(&VoidShape) -> f64| {
            self.voids.iter().map(of).max_by(f64::total_cmp).ok_or(Missing::NoVoid)
        };
        match quantity {
            Quantity::VoidTop => greatest(|void| void.top),
            Quantity::VoidBottom => greatest(|void| -void.bottom).map(|bottom| -bottom),
            Quantity::VoidWidth => greatest(|void| void.width),
            Quantity::VoidHeight => greatest(|void| void.height),
            Quantity::VoidShare => {
                greatest(|void| void.share)?;
                Ok(self.voids.iter().map(|void| void.share).sum())
            }
            Quantity::SideFilm => self.side_film.ok_or(Missing::NothingEmpty),
            Quantity::FloorFilm => self.floor_film.ok_or(Missing::NothingEmpty),
            Quantity::CornerFilm => self.corner_film,
            Quantity::Roof => least(self.voids.iter().map(|void| void.roof)).ok_or(Missing::NoVoid),
            Quantity::PolishMargin => self.polish.map(|clearance| clearance.margin_nm),
            Quantity::SealMargin => {
                let film = self.seal.and_then(|seal| seal.film).ok_or(Missing::NotClosed)?;
                Ok(film.margin_nm)
            }
            Quantity::ViaClearance => self.via_clearance.ok_or(Missing::NoVia),
            _ => Err(Missing::NothingEmpty),
        }
    }

    /// Length of the outlines of all voids, in nm: how far an area errs with its outline.
    pub fn perimeter(&self) -> f64 {
        self.voids.iter().map(|void| void.perimeter).sum()
    }
}

fn least(values: impl Iterator<Item = Option<f64>>) -> Option<f64> {
    values.flatten().min_by(f64::total_cmp)
}

/// What the ambient reaches of a space below the line top.
fn below_line_top(space: &View) -> Region {
    let Some(bounds) = space.ambient.bounds() else { return Region::empty() };
    let below = Region::rectangle(space.ends, [bounds.min.z.min(0.0), space.line_top]);
    space.ambient.intersection(&below)
}

fn seams(stage: &Stage, index: usize) -> Vec<[f64; 2]> {
    let section = &stage.section;
    let window = Window::of(&section.drawn, index);
    let here = section.seams.iter().filter(|seam| seam.points.iter().any(|p| window.holds(*p)));
    here.filter_map(|seam| {
        let (bottom, top) = (seam.points.first()?.z, seam.points.last()?.z);
        Some([bottom - section.drawn.line_top, top - section.drawn.line_top])
    })
    .collect()
}
