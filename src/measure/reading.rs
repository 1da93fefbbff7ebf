//! What is known of one quantity at one place: a figure, that it does not exist, or neither.

use std::fmt;

use super::Figure;

/// What is known of one quantity at one place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Reading {
    /// It has this value.
    Known(Figure),
    /// It does not exist, for this reason.
    Missing(Missing),
    /// It cannot be told, for this reason.
    Unclear(Unclear),
}

impl Reading {
    /// The figure, where there is one.
    pub fn figure(self) -> Option<Figure> {
        match self {
            Self::Known(figure) => Some(figure),
            Self::Missing(_) | Self::Unclear(_) => None,
        }
    }
}

/// Why a quantity does not exist.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Missing {
    /// The space has no void.
    NoVoid,
    /// A plane opened the void, that far below its top, in nm.
    Cut {
        /// Depth of the cut below the top of the void.
        depth_nm: f64,
    },
    /// No plane was cut after the void closed.
    NoPlane,
    /// No film closed the space.
    NotClosed,
    /// No via lands beside the space.
    NoVia,
    /// There is nothing empty to measure from.
    NothingEmpty,
    /// The lines have no corner left.
    NoCorner,
    /// No conductor in the line.
    NoConductor,
    /// Metal joins the line with its neighbour, a plane or bulk.
    Shorted,
    /// No electrode of that name in the line.
    NoSuchElectrode,
    /// No plane, bulk or next level takes the field.
    NoGround,
    /// Nothing to compare with: no filling of the spaces, no roof.
    NoReference,
    /// The reference has no such site.
    NoSuchSite,
    /// A number of the library is missing, such as a resistivity.
    NoNumber,
    /// No step has a temperature.
    NoTemperature,
}

impl fmt::Display for Missing {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        f.write_str(match self {
            Self::NoVoid => "the space has no void",
            Self::Cut { depth_nm } => {
                return write!(f, "a plane opened the void, {depth_nm:.1} nm below its top");
            }
            Self::NoPlane => "no plane was cut after the void closed",
            Self::NotClosed => "no film closed the space",
            Self::NoVia => "no via lands beside the space",
            Self::NothingEmpty => "nothing in the space is empty",
            Self::NoCorner => "the line has no top corner left",
            Self::NoConductor => "the line has no conductor",
            Self::Shorted => "metal joins the line with its neighbour, a plane or bulk",
            Self::NoSuchElectrode => "the line has no electrode of that name",
            Self::NoGround => "there is no plane, bulk or next level",
            Self::NoReference => "there is nothing to compare with: no `between`, no roof",
            Self::NoSuchSite => "the reference has no such space",
            Self::NoNumber => "the library lacks a number that it needs",
            Self::NoTemperature => "no step of the flow has a temperature",
        })
    }
}

/// Why a quantity cannot be told.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Unclear {
    /// It exists at one resolution and not at the other.
    Topology,
    /// A solver did not reach a usable bound.
    NotConverged,
    /// It was not computed in this run.
    NotAsked,
}

impl fmt::Display for Unclear {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        f.write_str(match self {
            Self::Topology => "two resolutions disagree on whether it exists",
            Self::NotConverged => "a solver did not converge",
            Self::NotAsked => "it was not computed",
        })
    }
}
