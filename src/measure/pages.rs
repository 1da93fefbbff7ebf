//! The documentation page of each quantity, compiled in.

use crate::flow::Quantity;

macro_rules! pages {
    ($($variant:ident $name:literal)+) => {
        /// The page of a quantity, as Markdown.
        pub const fn page(quantity: Quantity) -> &'static str {
            match quantity {
                $(Quantity::$variant => {
                    include_str!(concat!("../../docs/quantities/", $name, ".md"))
                })+
            }
        }
    };
}

pages! {
    VoidTop "void-top"
    VoidBottom "void-bottom"
    VoidShare "void-share"
    VoidWidth "void-width"
    VoidHeight "void-height"
    SideFilm "side-film"
    FloorFilm "floor-film"
    CornerFilm "corner-film"
    Roof "roof"
    PolishMargin "polish-margin"
    SealMargin "seal-margin"
    ClosingSpace "closing-space"
    ViaClearance "via-clearance"
    Coupling "coupling"
    Ground "ground"
    Total "total"
    CouplingDrop "coupling-drop"
    TotalDrop "total-drop"
    VoidGain "void-gain"
    KEff "k-eff"
    KEffLateral "k-eff-lateral"
    CouplingShare "coupling-share"
    Resistance "resistance"
    Delay "delay"
    PeakTemperature "peak-temperature"
}

#[cfg(test)]
#[allow(clippy::disallowed_methods, reason = "the test lists the pages on disk")]
mod tests {
    use super::*;

    #[test]
    fn every_quantity_has_its_page_and_every_page_its_quantity() {
        for quantity in Quantity::ALL {
            let title = page(*quantity).lines().next().unwrap();
            assert_eq!(title, format!("# {}", quantity.name()));
            for part in ["- Unit: ", "- Exists: ", "## How it is computed", "## Error", "## Source"]
            {
                assert!(page(*quantity).contains(part), "{}: no {part}", quantity.name());
            }
        }
        let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/docs/quantities");
        let pages = std::fs::read_dir(folder).unwrap().count();
        assert_eq!(pages, Quantity::ALL.len());
    }
}
