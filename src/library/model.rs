//! The library as data. Keys, kinds and units are those of `docs/library.md`.

use std::collections::BTreeMap;

use crate::num::tolerance::HERMETIC_FROM_NM;

/// A number with its range; the range is sampled as a triangular distribution.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Ranged {
    /// The value that is used.
    pub value: f64,
    /// Lower end of its range; the value itself when none is given.
    pub low: f64,
    /// Upper end of its range; the value itself when none is given.
    pub high: f64,
}

impl Ranged {
    /// A number without a range.
    pub const fn exact(value: f64) -> Self {
        Self { value, low: value, high: value }
    }
}

/// What a material is to the flow and to the field.
#[derive(Debug, Clone, Copy, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Kind {
    /// Insulates; has a permittivity.
    Dielectric,
    /// An equipotential in the field.
    Conductor,
    /// An equipotential in the field.
    Semiconductor,
    /// An insulator that a release is to remove.
    Sacrificial,
    /// A mask that a strip is to remove.
    Resist,
}

impl Kind {
    /// Whether the field holds it at one potential.
    pub const fn conducts(self) -> bool {
        matches!(self, Self::Conductor | Self::Semiconductor)
    }
}

/// How readily a material oxidises.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Oxidation {
    /// Not at all, or it protects itself.
    None,
    /// Slightly.
    Low,
    /// Noticeably.
    Medium,
    /// Readily.
    High,
}

/// Whether a material keeps a drifting metal in.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum CopperBarrier {
    /// It does not.
    No,
    /// It does.
    Yes,
    /// It does from this thickness on, in nm.
    FromNm(f64),
}

impl CopperBarrier {
    /// Whether it is a barrier at some thickness.
    pub fn counts(self) -> bool {
        self != Self::No
    }
}

/// What gases and moisture a material lets pass, tightest first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Passes {
    /// Nothing.
    Hermetic,
    /// Little.
    Low,
    /// Decomposition products and moisture.
    Permeable,
    /// Everything.
    Open,
}

/// A material, as loaded.
#[derive(Debug, Clone, PartialEq)]
pub struct Material {
    /// Its name in flows.
    pub name: String,
    /// What it is.
    pub kind: Kind,
    /// What it is, in words.
    pub label: String,
    /// Family for rates and pairs: oxide, low-k, nitride, carbide, polymer, carbon, silicon, metal, barrier …
    pub family: String,
    /// Relative permittivity, 1.
    pub permittivity: Option<Ranged>,
    /// Density, g/cm³.
    pub density_g_per_cm3: Option<Ranged>,
    /// Young's modulus, GPa.
    pub youngs_modulus_gpa: Option<Ranged>,
    /// Poisson's ratio, 1.
    pub poisson_ratio: Option<Ranged>,
    /// Film stress, tensile positive, MPa.
    pub stress_mpa: Option<Ranged>,
    /// Fracture energy, J/m².
    pub fracture_energy_j_per_m2: Option<Ranged>,
    /// Strength, MPa.
    pub strength_mpa: Option<Ranged>,
    /// Thermal expansion, ppm/K.
    pub expansion_ppm_per_k: Option<Ranged>,
    /// Heat conductivity, W/(m K).
    pub heat_conductivity_w_per_mk: Option<Ranged>,
    /// Highest temperature of the material itself, °C.
    pub highest_temperature_c: Option<Ranged>,
    /// How readily it oxidises.
    pub oxidizes: Oxidation,
    /// Onset of its oxidation, °C.
    pub oxidizes_from_c: Option<Ranged>,
    /// Whether it keeps a drifting metal in.
    pub copper_barrier: CopperBarrier,
    /// Whether it is a metal that drifts and needs a barrier.
    pub needs_barrier: bool,
    /// What it lets pass.
    pub passes: Option<Passes>,
    /// Thickest film through which it still lets pass, nm.
    pub passes_up_to_nm: Option<Ranged>,
    /// Thickness from which it is hermetic, nm.
    pub hermetic_from_nm: Option<Ranged>,
    /// Decomposition window, °C; sacrificial materials only.
    pub leaves_at_c: Option<[f64; 2]>,
    /// Families or names to which it adheres poorly.
    pub poor_adhesion_to: Vec<String>,
    /// Bulk resistivity, µΩ cm.
    pub resistivity_uohm_cm: Option<Ranged>,
    /// Electron mean free path, nm.
    pub mean_free_path_nm: Option<Ranged>,
    /// Grain boundary reflection R of Mayadas and Shatzkes, 1.
    pub grain_reflection: Option<Ranged>,
    /// Surface specularity p of Fuchs and Sondheimer, 1.
    pub surface_specularity: Option<Ranged>,
    /// Grain size, nm; the core width when absent.
    pub grain_size_nm: Option<Ranged>,
    /// Hazards of the material.
    pub hazards: Vec<String>,
    /// Where its numbers come from.
    pub source: String,
}

impl Material {
    /// Thickness from which its films are hermetic, in nm; `None`: they never are.
    pub fn hermetic_thickness_nm(&self) -> Option<f64> {
        let least = || self.hermetic_from_nm.map_or(HERMETIC_FROM_NM, |nm| nm.value);
        (self.passes == Some(Passes::Hermetic)).then(least)
    }
}

/// The verb that a process serves.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Verb {
    /// Deposit, seal and cap.
    Deposit,
    /// Etch.
    Etch,
    /// Convert.
    Convert,
    /// Fill and mask.
    Fill,
    /// Release.
    Release,
    /// Strip.
    Strip,
    /// Polish.
    Polish,
    /// Anneal.
    Anneal,
    /// Cure.
    Cure,
    /// Clean.
    Clean,
    /// Via.
    Via,
}

/// What the wafer meets in the chamber.
#[derive(
    Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, serde::Serialize, serde::Deserialize,
)]
#[serde(rename_all = "kebab-case")]
pub enum Ambient {
    /// Inert gas.
    Inert,
    /// Oxidising gas.
    Oxidizing,
    /// Reducing gas.
    Reducing,
    /// Hydrogen plasma.
    HydrogenPlasma,
    /// Oxygen plasma.
    OxygenPlasma,
    /// Ozone.
    Ozone,
    /// Fluorine radicals, XeF2.
    Fluorine,
    /// Fluorocarbon etch plasma.
    Fluorocarbon,
    /// Hydrofluoric acid, wet or vapour.
    Hf,
    /// Chlorine plasma.
    Chlorine,
    /// A liquid.
    Wet,
    /// A plasma of any kind.
    Plasma,
    /// Vacuum.
    Vacuum,
    /// Polishing slurry.
    Slurry,
}

/// How the directional part of an arrival spreads about the vertical.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Exponent {
    /// p of cos^p φ.
    Cosine(Ranged),
    /// A beam.
    Vertical,
}

/// How growth species arrive, as shares of growth on an open flat; what conformal and
/// directional leave is neutral.
#[derive(Debug, Clone, PartialEq)]
pub struct Arrival {
    /// Share limited by the surface reaction, 1.
    pub conformal: Ranged,
    /// Share arriving by line of sight, 1.
    pub directional: Ranged,
    /// Spread of the directional share.
    pub exponent: Exponent,
    /// Tilt of the directional share, half to each side, degrees.
    pub tilt_deg: Ranged,
    /// Sticking probability of the neutral share, 0 < S ≤ 1.
    pub sticking: Ranged,
}

impl Arrival {
    /// All neutral, everything sticks: what the keys that are not given mean.
    pub const NEUTRAL: Self = Self {
        conformal: Ranged::exact(0.0),
        directional: Ranged::exact(0.0),
        exponent: Exponent::Cosine(Ranged::exact(1.0)),
        tilt_deg: Ranged::exact(0.0),
        sticking: Ranged::exact(1.0),
    };

    /// The neutral share: what conformal and directional leave.
    pub fn neutral(&self) -> f64 {
        (1.0 - self.conformal.value - self.directional.value).max(0.0)
    }
}

/// A process, as loaded, or as overridden by a step's `with`.
#[derive(Debug, Clone, PartialEq)]
pub struct Process {
    /// Its name in flows.
    pub name: String,
    /// The verb that it serves.
    pub verb: Verb,
    /// Whether its verb takes it without `by`.
    pub default: bool,
    /// What it deposits, fills or removes; empty: any.
    pub materials: Vec<String>,
    /// Temperature of the wafer, °C.
    pub temperature_c: Option<Ranged>,
    /// Pressure, Torr.
    pub pressure_torr: Option<Ranged>,
    /// Molecule diameter for the mean free path, nm.
    pub molecule_diameter_nm: Option<Ranged>,
    /// What the wafer meets.
    pub ambient: Vec<Ambient>,
    /// How species arrive.
    pub arrival: Option<Arrival>,
    /// Relative growth by what lies beneath (material or family); empty: everywhere.
    pub grows_on: BTreeMap<String, Ranged>,
    /// Relative rate of removal or conversion per material or family.
    pub rates: BTreeMap<String, Ranged>,
    /// Linear shrinkage of a cure, 1.
    pub shrinks: Ranged,
    /// Narrowest space a fill still enters, nm.
    pub fills_down_to_nm: Option<Ranged>,
    /// Whether openings along the line are drawn for a release.
    pub drawn_openings: bool,
    /// Dose per cycle of a dose-limited film, Pa s.
    pub dose_pa_s: Option<Ranged>,
    /// Molecules per m² at saturation.
    pub saturation_per_m2: Option<Ranged>,
    /// Molecule mass, u.
    pub molecule_mass_u: Option<Ranged>,
    /// Hazards of the process.
    pub hazards: Vec<String>,
    /// Where its numbers come from.
    pub source: String,
}

/// Rate relative to the named material that is assumed where `rates` has no entry.
pub const ASSUMED_RATE: f64 = 0.1;

impl Process {
    /// The `rates` entry of a material: by its name, else by its family; `None` when missing.
    pub fn rate_of(&self, material: &Material) -> Option<Ranged> {
        by_name_or_family(&self.rates, material)
    }

    /// Relative growth on a material; 1 where `grows_on` is empty, 0 where it has no entry.
    pub fn growth_on(&self, material: &Material) -> f64 {
        if self.grows_on.is_empty() {
            return 1.0;
        }
        by_name_or_family(&self.grows_on, material).map_or(0.0, |entry| entry.value)
    }

    /// Whether it can be named after `by` at a verb: its own, and a strip (an ash, a solvent)
    /// may also release through what lets it pass.
    pub fn serves(&self, verb: Verb) -> bool {
        self.verb == verb || (self.verb == Verb::Strip && verb == Verb::Release)
    }

    /// Whether it can deposit, fill or remove a material; a process without a list can any.
    pub fn handles(&self, material: &Material) -> bool {
        self.materials.is_empty() || self.materials.contains(&material.name)
    }

    /// Whether the wafer meets any of these ambients.
    pub fn meets(&self, ambients: &[Ambient]) -> bool {
        self.ambient.iter().any(|ambient| ambients.contains(ambient))
    }
}

fn by_name_or_family(table: &BTreeMap<String, Ranged>, material: &Material) -> Option<Ranged> {
    table.get(&material.name).or_else(|| table.get(&material.family)).copied()
}

/// Settings of a library file under `settings:`.
#[derive(Debug, Clone, PartialEq)]
pub struct Settings {
    /// A throat narrower than this is closed, a void narrower is a seam, nm.
    pub closure_width_nm: f64,
}

impl Default for Settings {
    fn default() -> Self {
        Self { closure_width_nm: crate::num::tolerance::CLOSURE_WIDTH_NM }
    }
}

/// What library files set for one rule.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct RuleSettings {
    /// Replaces the severity of the rule.
    pub severity: Option<crate::diag::Severity>,
    /// Named thresholds, each with its unit in its name.
    pub thresholds: BTreeMap<String, f64>,
}

/// A material by its place in [`Library::materials`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct MaterialId(pub usize);

/// All materials and processes that a flow may name.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Library {
    /// Materials in order of name.
    pub materials: Vec<Material>,
    /// Processes in order of name.
    pub processes: Vec<Process>,
    /// Settings.
    pub settings: Settings,
    /// Settings of rules, by rule name.
    pub rules: BTreeMap<String, RuleSettings>,
}

impl Library {
    /// The material of an id.
    pub fn material(&self, id: MaterialId) -> &Material {
        &self.materials[id.0]
    }

    /// The id of a material name.
    pub fn material_id(&self, name: &str) -> Option<MaterialId> {
        self.materials.binary_search_by(|m| m.name.as_str().cmp(name)).ok().map(MaterialId)
    }

    /// The process of a name.
    pub fn process(&self, name: &str) -> Option<&Process> {
        self.processes
            .binary_search_by(|p| p.name.as_str().cmp(name))
            .ok()
            .map(|at| &self.processes[at])
    }

    /// The process that a verb takes without `by`.
    pub fn default_process(&self, verb: Verb) -> Option<&Process> {
        self.processes.iter().find(|p| p.verb == verb && p.default)
    }
}
