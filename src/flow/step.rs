//! The steps of a flow.

use std::sync::Arc;

use super::{Height, Site};
use crate::library::{MaterialId, Process};
use crate::source::{Span, Spanned};
use crate::units::{Amount, Duration, Length, Share, Temperature};

/// One step of a flow.
#[derive(Debug, Clone)]
pub struct Step {
    /// Operation number.
    pub op: u32,
    /// The number as written (`010`).
    pub op_text: String,
    /// What is done.
    pub action: Action,
    /// The sites to which `only at` limits it; `None`: everywhere; empty where this variant has
    /// none of them: nowhere.
    pub only_at: Option<Vec<Site>>,
    /// Operations that must come before, by `after`.
    pub after: Vec<Spanned<u32>>,
    /// Operations that must come after, by `before`.
    pub before: Vec<Spanned<u32>>,
    /// The note in quotes.
    pub note: Option<String>,
    /// The whole statement.
    pub span: Span,
}

/// What a deposit is for; rules ask more of a seal or a cap.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    /// A film.
    Deposit,
    /// It is to close the spaces.
    Seal,
    /// It is to cover what is closed, or to bridge a sacrificial fill.
    Cap,
}

/// What a step does.
#[derive(Debug, Clone)]
pub enum Action {
    /// `deposit`, `seal`, `cap`.
    Deposit {
        /// What it is for.
        role: Role,
        /// Thickness on an open flat.
        thickness: Amount<Length>,
        /// What grows.
        material: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `etch LENGTH MATERIAL`: depth as on open, flat material.
    Etch {
        /// Depth.
        depth: Amount<Length>,
        /// The material whose rate the depth is of.
        material: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `etch MATERIAL until MATERIAL`.
    EtchUntil {
        /// The material whose rate is the base.
        material: MaterialId,
        /// The material that ends it when first reached at any site.
        stop: MaterialId,
        /// More of the time to the stop.
        overetch: Amount<Share>,
        /// By what.
        process: ProcessUse,
    },
    /// `convert`: exposed material becomes another.
    Convert {
        /// How deep.
        depth: Amount<Length>,
        /// From what.
        from: MaterialId,
        /// To what.
        to: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `mask`: a planar block mask on some sites until it is stripped.
    Mask {
        /// Thickness above the surface.
        thickness: Amount<Length>,
        /// Of what.
        material: MaterialId,
        /// Where.
        over: Vec<Site>,
        /// By what.
        process: ProcessUse,
    },
    /// `fill`: planar, spun on or flowed.
    Fill {
        /// Of what.
        material: MaterialId,
        /// Up to where.
        to: Height,
        /// By what.
        process: ProcessUse,
    },
    /// `release`: a sacrificial material leaves through what lets it pass.
    Release {
        /// What leaves.
        material: MaterialId,
        /// At what temperature.
        temperature: Amount<Temperature>,
        /// For how long.
        time: Option<Amount<Duration>>,
        /// By what.
        process: ProcessUse,
    },
    /// `strip`: all of a material that is exposed.
    Strip {
        /// What goes.
        material: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `polish to HEIGHT`.
    Polish {
        /// The plane.
        to: Height,
        /// By what.
        process: ProcessUse,
    },
    /// `polish until MATERIAL`.
    PolishUntil {
        /// The material whose topmost occurrence at any site gives the plane.
        stop: MaterialId,
        /// By what.
        process: ProcessUse,
    },
    /// `anneal`.
    Anneal {
        /// At what temperature.
        temperature: Amount<Temperature>,
        /// For how long.
        time: Amount<Duration>,
        /// By what.
        process: ProcessUse,
    },
    /// `cure`.
    Cure {
        /// At what temperature.
        temperature: Amount<Temperature>,
        /// For how long.
        time: Amount<Duration>,
        /// By what.
        process: ProcessUse,
    },
    /// `clean`.
    Clean {
        /// By what.
        process: ProcessUse,
    },
    /// `via`: opened down onto a line, lined and filled flush.
    Via {
        /// Its width.
        width: Amount<Length>,
        /// Its core.
        material: MaterialId,
        /// Its liner.
        liner: Option<(Amount<Length>, MaterialId)>,
        /// Off its line by at most this.
        overlay: Amount<Length>,
        /// Below the line top.
        overetch: Amount<Length>,
        /// By what.
        process: ProcessUse,
    },
}

impl Action {
    /// The process of the step.
    pub fn process(&self) -> &ProcessUse {
        match self {
            Self::Deposit { process, .. }
            | Self::Etch { process, .. }
            | Self::EtchUntil { process, .. }
            | Self::Convert { process, .. }
            | Self::Mask { process, .. }
            | Self::Fill { process, .. }
            | Self::Release { process, .. }
            | Self::Strip { process, .. }
            | Self::Polish { process, .. }
            | Self::PolishUntil { process, .. }
            | Self::Anneal { process, .. }
            | Self::Cure { process, .. }
            | Self::Clean { process }
            | Self::Via { process, .. } => process,
        }
    }

    /// The process of the step, to be changed.
    pub(super) fn process_mut(&mut self) -> &mut ProcessUse {
        match self {
            Self::Deposit { process, .. }
            | Self::Etch { process, .. }
            | Self::EtchUntil { process, .. }
            | Self::Convert { process, .. }
            | Self::Mask { process, .. }
            | Self::Fill { process, .. }
            | Self::Release { process, .. }
            | Self::Strip { process, .. }
            | Self::Polish { process, .. }
            | Self::PolishUntil { process, .. }
            | Self::Anneal { process, .. }
            | Self::Cure { process, .. }
            | Self::Clean { process }
            | Self::Via { process, .. } => process,
        }
    }

    /// The verb as written in a flow.
    pub fn verb(&self) -> &'static str {
        match self {
            Self::Deposit { role: Role::Deposit, .. } => "deposit",
            Self::Deposit { role: Role::Seal, .. } => "seal",
            Self::Deposit { role: Role::Cap, .. } => "cap",
            Self::Etch { .. } | Self::EtchUntil { .. } => "etch",
            Self::Convert { .. } => "convert",
            Self::Mask { .. } => "mask",
            Self::Fill { .. } => "fill",
            Self::Release { .. } => "release",
            Self::Strip { .. } => "strip",
            Self::Polish { .. } | Self::PolishUntil { .. } => "polish",
            Self::Anneal { .. } => "anneal",
            Self::Cure { .. } => "cure",
            Self::Clean { .. } => "clean",
            Self::Via { .. } => "via",
        }
    }
}

/// A process as one step uses it: the library's numbers with the step's `with` applied.
#[derive(Debug, Clone)]
pub struct ProcessUse {
    /// The process, overrides applied.
    pub process: Arc<Process>,
    /// What `with` replaced, by key of the library, in library units.
    pub overrides: Vec<Override>,
}

/// One `with NAME AMOUNT`.
#[derive(Debug, Clone, PartialEq)]
pub struct Override {
    /// The key of the library file that it replaces, unit included: `temperature_c`, `sticking`.
    pub key: String,
    /// The value, in the unit of the key.
    pub nominal: f64,
    /// Three standard deviations, same unit.
    pub three_sigma: f64,
}
