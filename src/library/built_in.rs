//! The library that is compiled in: YAML files by topic, of the same form as a user's.

use std::sync::{Arc, OnceLock};

use super::{Library, parse};
use crate::source::Source;

/// The files with their names, in the order in which they are laid over one another.
pub const FILES: &[(&str, &str)] = &[
    ("dielectrics.yaml", include_str!("built_in/dielectrics.yaml")),
    ("low-k.yaml", include_str!("built_in/low-k.yaml")),
    ("polymers.yaml", include_str!("built_in/polymers.yaml")),
    ("conductors.yaml", include_str!("built_in/conductors.yaml")),
    ("deposit.yaml", include_str!("built_in/deposit.yaml")),
    ("atomic-layer.yaml", include_str!("built_in/atomic-layer.yaml")),
    ("metal.yaml", include_str!("built_in/metal.yaml")),
    ("fill.yaml", include_str!("built_in/fill.yaml")),
    ("etch.yaml", include_str!("built_in/etch.yaml")),
    ("removal.yaml", include_str!("built_in/removal.yaml")),
    ("heat-and-clean.yaml", include_str!("built_in/heat-and-clean.yaml")),
];

impl Library {
    /// The built-in library; read once, then shared.
    ///
    /// # Panics
    /// Never in a build whose tests pass: they read every file.
    pub fn built_in() -> Arc<Self> {
        static BUILT_IN: OnceLock<Arc<Library>> = OnceLock::new();
        BUILT_IN
            .get_or_init(|| {
                let mut library = Self::default();
                for (name, text) in FILES {
                    let source = Source::new(*name, *text);
                    let file = parse(&source).unwrap_or_else(|errors| {
                        panic!("the built-in library is broken: {name}: {errors:?}")
                    });
                    library = library.with(file, &source).0;
                }
                Arc::new(library)
            })
            .clone()
    }
}
