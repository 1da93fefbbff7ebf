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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::library::Verb;

    /// Names that flows rely on; they may grow, never go.
    const MATERIALS: &str = "SiO2 SiO2-thermal SiO2-teos SiO2-ozone SiO2-hdp FSG SiCOH SiCOH-porous \
        ULK damaged-SiCOH SiN SiN-lpcvd SiCN SiC AlN AlO BCB polyimide aromatic-polymer parylene \
        polynorbornene polycarbonate polyoxymethylene carbon spin-carbon resist Si polySi ONO Cu Al \
        W Co Ru Mo Ta TaN TiN Ti";
    const PROCESSES: &str = "silane-pecvd teos-pecvd ozone-teos hdp-oxide nitride-pecvd \
        carbonitride-pecvd sicoh-pecvd teos-lpcvd nitride-lpcvd ald-oxide ald-nitride \
        ald-carbonitride ald-alumina sputter ionized-sputter evaporation selective-cobalt \
        spin-polymer spin-carbon spin-resist flowable-oxide fluorocarbon-rie chlorine-rie dilute-hf \
        vapor-hf xenon-difluoride hot-phosphoric oxygen-damage thermal-release hydrogen-ash \
        oxygen-ash solvent-strip cmp furnace uv-cure degas hydrogen-clean wet-clean via-fill";

    #[test]
    fn every_name_that_flows_rely_on_is_there() {
        let library = Library::built_in();
        for name in MATERIALS.split_whitespace() {
            assert!(library.material_id(name).is_some(), "{name}");
        }
        for name in PROCESSES.split_whitespace() {
            assert!(library.process(name).is_some(), "{name}");
        }
    }

    #[test]
    fn it_passes_its_own_check_without_a_message() {
        let mut library = Library::default();
        let mut strangers = Vec::new();
        for (name, text) in FILES {
            let source = Source::new(*name, *text);
            let file = parse(&source).unwrap_or_else(|errors| panic!("{name}: {errors:#?}"));
            assert_eq!(file.notes, [], "{name}");
            library = library.with(file, &source).0;
        }
        // Files refer to one another: names are held against the whole.
        for (name, text) in FILES {
            let source = Source::new(*name, *text);
            let file = parse(&source).unwrap_or_default();
            let (_, messages) = library.with(file, &source);
            strangers.extend(messages.into_iter().filter(|m| !m.message.contains("replaces")));
        }
        assert_eq!(strangers, []);
    }

    #[test]
    fn each_verb_of_flows_without_by_has_its_default() {
        let library = Library::built_in();
        let default = |verb| library.default_process(verb).map(|process| process.name.as_str());
        assert_eq!(default(Verb::Polish), Some("cmp"));
        assert_eq!(default(Verb::Release), Some("thermal-release"));
        assert_eq!(default(Verb::Anneal), Some("furnace"));
        assert_eq!(default(Verb::Cure), Some("uv-cure"));
        assert_eq!(default(Verb::Via), Some("via-fill"));
    }
}
