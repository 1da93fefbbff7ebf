//! Quantities of a traced cell, each with its numerical error; one file a quantity or a tight
//! group of them.
//!
//! One trace gives plain numbers ([`gap`]); two of them, coarse and fine, give figures
//! ([`error`], [`geometry`]); the figures of a site are put together in [`site`].

mod closing_space;
mod crack;
mod delay;
mod drying;
mod electrical;
mod error;
mod film;
mod gap;
mod geometry;
#[cfg(test)]
pub(crate) mod hand;
mod mean_free_path;
mod measured;
mod model;
mod nets;
mod pages;
mod peak_temperature;
mod plate;
mod polish;
mod question;
mod reading;
mod resistance;
mod resistivity;
mod seal;
mod site;
mod via;
mod view;
mod void;

pub use closing_space::{Fineness, Grow};
pub use crack::critical_thickness_nm;
pub use delay::{Driven, delay_ps};
pub use drying::{FreeLine, drying_deflection_nm};
pub use electrical::{Electrical, FieldSection, Reference, field_section};
pub use geometry::{Geometry, Traced, for_all, site_states};
pub use mean_free_path::mean_free_path_nm;
pub use measured::{Measured, Traces, Wanted};
pub use model::*;
pub use pages::page;
pub use plate::{clamped_deflection_nm, clamped_stress_mpa};
pub use question::{Figures, Question};
pub use reading::{Missing, Reading, Unclear};
pub use resistance::{Path, line_resistance_ohm_per_um, resistance_ohm_per_um};
pub use resistivity::{Metal, SizeEffect};
pub use site::{Extras, site};

/// Why a site could not be measured: an internal error, never a property of the flow.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum MeasureError {
    /// A trace contradicts itself.
    #[error("inconsistent trace: {0}")]
    Inconsistent(&'static str),
    /// A figure came out as no number.
    #[error("{0} is not a finite number")]
    NotFinite(&'static str),
    /// The field solver found itself wrong.
    #[error("field: {0}")]
    Field(#[from] crate::field::FieldError),
    /// A trial growth found itself wrong.
    #[error("{0}")]
    Sim(#[from] crate::sim::SimError),
}
