//! Why a section has no answer.

use thiserror::Error;

/// Why [`super::solve`] gave no matrix.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum FieldError {
    /// An edge of the section, a vertex of a body or the wanted accuracy is NaN or infinite.
    #[error("{0} is not a finite number")]
    NonFinite(String),
    /// The section has no area.
    #[error("the section is empty: it must be wider and higher than zero")]
    EmptySection,
    /// No electrode was asked for.
    #[error("the section has no electrode")]
    NoElectrode,
    /// An electrode, by its index, has no area inside the section.
    #[error("electrode {0} has no area inside the section")]
    ElectrodeAbsent(usize),
    /// A body names an electrode, by its index, that the problem does not count.
    #[error("a body names electrode {0}, which the section does not have")]
    ElectrodeUnknown(usize),
    /// Two electrodes touch: their capacitance is infinite.
    #[error("electrode {first} touches electrode {second} at ({}, {}) nm", .at_nm[0], .at_nm[1])]
    ElectrodesTouch {
        /// Index of the one.
        first: usize,
        /// Index of the other.
        second: usize,
        /// A point of both.
        at_nm: [f64; 2],
    },
    /// A relative permittivity that is not positive.
    #[error("{0} is not a relative permittivity: it must be positive")]
    Permittivity(f64),
    /// A wanted accuracy that is not positive.
    #[error("{0} is not an accuracy: it must be positive")]
    Accuracy(f64),
    /// A variant has another number of roles than there are bodies, or other conductors.
    #[error("variants of a section must have the same bodies and the same conductors")]
    VariantDiffers,
    /// The outlines alone need more triangles than the limit.
    #[error("the section needs more than {0} triangles")]
    MeshTooLarge(usize),
    /// A check inside the solver failed.
    #[error("internal check of the field solver failed: {0}")]
    Internal(String),
}

impl FieldError {
    pub(super) fn internal(message: impl Into<String>) -> Self {
        Self::Internal(message.into())
    }
}
