//! What happened to one cell, step by step.

use std::sync::Arc;

use super::{Body, Section};
use crate::flow::{Site, State};
use crate::geom::{Point, Region};
use crate::library::MaterialId;

/// One section that is grown as a whole.
///
/// An array is one line with half of the space to its left and right between mirrors; a row
/// is all of its lines.
#[derive(Debug, Clone, PartialEq)]
pub struct Cell {
    /// The sites that the section holds: one for an array, one a space for a row.
    pub sites: Vec<Site>,
}

/// What a step found exposed to its ambient.
#[derive(Debug, Clone, PartialEq)]
pub struct Exposure {
    /// Of what.
    pub material: MaterialId,
    /// Length of surface exposed, in nm.
    pub length_nm: f64,
    /// Middle of its longest exposed piece.
    pub place: Point,
}

/// Something that a step did to a space.
#[derive(Debug, Clone, PartialEq)]
pub enum Event {
    /// A throat closed.
    Closed {
        /// Space of the cell, from 0, left to right.
        space: usize,
        /// Open-field thickness of the deposit at closure, in nm.
        thickness_nm: f64,
        /// Middle of the throat where it closed.
        throat: Point,
        /// The void it shut off; empty when nothing remained.
        void: Region,
    },
    /// A void met the ambient again.
    Opened {
        /// Space of the cell, from 0.
        space: usize,
        /// The void as it was before.
        void: Region,
    },
    /// A plane was cut at this height, in nm above the line bottom.
    Planed {
        /// The height.
        z_nm: f64,
        /// Highest point of the surface before.
        surface_nm: f64,
    },
    /// A slot was opened for a via and filled.
    Via {
        /// The slot.
        slot: Region,
        /// Liner and core, for drawing; the section stays as it is without the via.
        bodies: Vec<Body>,
        /// Index of the line it is meant to land on.
        line: usize,
        /// Voids and their shortest distance to the worst-case slot edge (overlay and half
        /// of the width tolerance included), in nm; negative when it cuts in.
        clearance_nm: Option<f64>,
    },
    /// A part of the material to be released had to stay.
    Trapped {
        /// The part.
        region: Region,
        /// Thickness on its best way out over what may be passed, above 1; `None`: no way out.
        share: Option<f64>,
    },
    /// The step changed nothing in this cell.
    NoEffect,
}

/// The state of the cell after one step.
#[derive(Debug, Clone)]
pub struct Stage {
    /// Index of the step in the variant; `None` is the wafer as found.
    pub step: Option<usize>,
    /// Whether the step acts on this cell (`only at`, masks of no cost).
    pub acts: bool,
    /// What the step found exposed, longest first.
    pub exposed_before: Vec<Exposure>,
    /// The section after the step.
    pub section: Arc<Section>,
    /// What happened.
    pub events: Vec<Event>,
    /// State of each space after the step, left to right.
    pub states: Vec<State>,
    /// Throat still open in each space, in nm; `None` when closed or without a throat.
    pub throats_nm: Vec<Option<f64>>,
}

/// One cell of one variant, from the wafer to the finished flow, at one resolution.
#[derive(Debug, Clone)]
pub struct CellTrace {
    /// Which cell.
    pub cell: Cell,
    /// Facet length of its fronts on the open surface, in nm.
    pub facet_nm: f64,
    /// The wafer first, then one stage a step.
    pub stages: Vec<Stage>,
}
