//! The quantities of the language: names and dimensions. How each is computed is in `measure`.

use serde::Serialize;

/// The dimension of a quantity, with the unit in which figures and limits carry it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Dimension {
    /// nm.
    Length,
    /// Fraction of one; `%` in flows and text.
    Share,
    /// aF/µm.
    CapacitancePerLength,
    /// ohm/µm.
    ResistancePerLength,
    /// ps.
    Delay,
    /// °C.
    Temperature,
    /// A plain number.
    One,
}

macro_rules! quantities {
    ($($(#[$doc:meta])* $variant:ident $name:literal $dimension:ident;)+) => {
        /// A quantity that a limit can name.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
        #[serde(rename_all = "kebab-case")]
        pub enum Quantity {
            $($(#[$doc])* $variant,)+
        }

        impl Quantity {
            /// All quantities, in the order of the documentation.
            pub const ALL: &[Self] = &[$(Self::$variant,)+];

            /// As written in a flow.
            pub const fn name(self) -> &'static str {
                match self { $(Self::$variant => $name,)+ }
            }

            /// Whether it comes from the field between electrodes, and so can be asked `between`
            /// those of one name.
            pub const fn is_electrical(self) -> bool {
                use Quantity as Q;
                matches!(
                    self,
                    Q::Coupling
                        | Q::Ground
                        | Q::Total
                        | Q::CouplingDrop
                        | Q::TotalDrop
                        | Q::VoidGain
                        | Q::KEff
                        | Q::KEffLateral
                        | Q::CouplingShare
                )
            }

            /// Its dimension.
            pub const fn dimension(self) -> Dimension {
                match self { $(Self::$variant => Dimension::$dimension,)+ }
            }
        }
    };
}

quantities! {
    /// Top of the void above the line top.
    VoidTop "void-top" Length;
    /// Bottom of the void above the line bottom.
    VoidBottom "void-bottom" Length;
    /// Void area between line bottom and top, of the whole drawn space there.
    VoidShare "void-share" Share;
    /// Greatest width of the void.
    VoidWidth "void-width" Length;
    /// Greatest height of the void.
    VoidHeight "void-height" Length;
    /// Solid between void and line side, at half of the line height.
    SideFilm "side-film" Length;
    /// Solid below the void at mid-space.
    FloorFilm "floor-film" Length;
    /// Least film around the line's top corner.
    CornerFilm "corner-film" Length;
    /// Shortest way from the void to the finished surface.
    Roof "roof" Length;
    /// Lowest polish plane after the void closed, above its top.
    PolishMargin "polish-margin" Length;
    /// Thickness of the seal beyond what closed this space.
    SealMargin "seal-margin" Length;
    /// Widest space of these lines that this seal still closes.
    ClosingSpace "closing-space" Length;
    /// From the via's edge to the nearest void.
    ViaClearance "via-clearance" Length;
    /// Line to both nearest neighbours.
    Coupling "coupling" CapacitancePerLength;
    /// Line to planes, bulk and next level.
    Ground "ground" CapacitancePerLength;
    /// Line to everything.
    Total "total" CapacitancePerLength;
    /// Coupling lost against a split or a material.
    CouplingDrop "coupling-drop" Share;
    /// Total lost against a split or a material.
    TotalDrop "total-drop" Share;
    /// Coupling lost by the void alone.
    VoidGain "void-gain" Share;
    /// Total over the same with every dielectric set to vacuum.
    KEff "k-eff" One;
    /// Coupling over the same with every dielectric set to vacuum.
    KEffLateral "k-eff-lateral" One;
    /// Coupling over total.
    CouplingShare "coupling-share" One;
    /// Resistance of the line, size effect included.
    Resistance "resistance" ResistancePerLength;
    /// Delay of a net.
    Delay "delay" Delay;
    /// Highest step temperature of the flow.
    PeakTemperature "peak-temperature" Temperature;
}
