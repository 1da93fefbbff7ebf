//! One library file: from its tree to materials, processes, settings and rules.

use super::fields::{Defect, Defects, Fields, choose};
use super::numbers::{ARRIVAL_NUMBERS, Bounds, MATERIAL_NUMBERS, PROCESS_NUMBERS};
use super::yaml::{self, Node, Place, Value};
use super::{
    Ambient, Arrival, CopperBarrier, Exponent, Kind, Material, Oxidation, Passes, Process, Ranged,
    RuleSettings, Verb,
};
use crate::diag::{Diagnostic, Severity};
use crate::source::{Source, Span};

/// Most defects of one file that are shown; each costs another reading of the text.
pub const MAX_DEFECTS_SHOWN: usize = 50;

/// What one file says, checked by itself; [`super::Library::with`] checks it against the rest.
#[derive(Debug, Clone, Default)]
pub struct LibraryFile {
    /// Materials in the order of the text.
    pub materials: Vec<Placed<Material>>,
    /// Processes in the order of the text.
    pub processes: Vec<Placed<Process>>,
    /// `settings.closure_width_nm`, where it is given.
    pub closure_width_nm: Option<f64>,
    /// Settings of rules in the order of the text.
    pub rules: Vec<Placed<RuleEntry>>,
    /// What is worth knowing about the file.
    pub notes: Vec<Diagnostic>,
}

/// A value with the place of its name in the file.
#[derive(Debug, Clone)]
pub struct Placed<T> {
    /// The value.
    pub value: T,
    /// Where its name stands; [`Placed::span`] finds it.
    pub place: Place,
    /// Names that the value refers to, with their places.
    pub refers_to: Vec<Reference>,
}

impl<T> Placed<T> {
    /// Where its name stands in the text that it was read from.
    pub fn span(&self, source: &Source) -> Option<Span> {
        yaml::locate(source, self.place)
    }
}

/// A name that an entry refers to.
#[derive(Debug, Clone)]
pub struct Reference {
    /// The key under which it stands.
    pub key: &'static str,
    /// The name.
    pub name: String,
    /// Whether a family will do.
    pub or_family: bool,
    /// Where it stands.
    pub place: Place,
}

/// What a file sets for one rule.
#[derive(Debug, Clone)]
pub struct RuleEntry {
    /// Name of the rule as written; who holds the rules knows whether there is such a one.
    pub rule: String,
    /// Severity and thresholds.
    pub settings: RuleSettings,
    /// Places of the thresholds' names.
    pub threshold_places: Vec<(String, Place)>,
}

/// Reads a library file; all defects of a readable file come in one pass, in the order of the text.
///
/// # Errors
/// The file is not YAML, too large, too deep, or says something that cannot be.
pub fn parse(source: &Source) -> Result<LibraryFile, Vec<Diagnostic>> {
    let root = yaml::read(source).map_err(|error| vec![error])?;
    let mut defects = Defects::default();
    let mut file = LibraryFile::default();
    if let Some(mut fields) = Fields::open(&root, "a library file", &mut defects) {
        if let Some(node) = fields.take("materials") {
            file.materials = materials(node, &mut defects);
        }
        if let Some(node) = fields.take("processes") {
            file.processes = processes(node, &mut defects);
        }
        if let Some(node) = fields.take("settings") {
            file.closure_width_nm = settings(node, &mut defects);
        }
        if let Some(node) = fields.take("rules") {
            file.rules = rules(node, &mut defects);
        }
        fields.close(&mut defects);
    }
    let mut found = defects.0;
    found.sort_by_key(|defect| defect.place);
    if found.iter().any(|defect| defect.severity == Severity::Error) {
        found.retain(|defect| defect.severity == Severity::Error);
        return Err(located(found, source));
    }
    file.notes = located(found, source);
    Ok(file)
}

/// Gives defects their places; what exceeds [`MAX_DEFECTS_SHOWN`] is counted.
pub(super) fn located(defects: Vec<Defect>, source: &Source) -> Vec<Diagnostic> {
    let hidden = defects.get(MAX_DEFECTS_SHOWN..).map(|rest| {
        let severity = rest.iter().map(|defect| defect.severity).max().unwrap_or(Severity::Note);
        Diagnostic::new(severity, None, format!("and {} more in this file", rest.len()))
    });
    let shown = defects.into_iter().take(MAX_DEFECTS_SHOWN).map(|defect| Diagnostic {
        severity: defect.severity,
        span: yaml::locate(source, defect.place),
        message: defect.message,
        label: defect.label,
        help: defect.help,
    });
    let shown: Vec<_> = shown.collect();
    shown.into_iter().chain(hidden).collect()
}

/// Whether a word can stand as a name in a flow: a letter, then letters, digits, `-`.
fn is_name(word: &str) -> bool {
    word.starts_with(|c: char| c.is_ascii_alphabetic())
        && word.chars().all(|c| c.is_ascii_alphanumeric() || c == '-')
}

/// The entries of `materials`, `processes` or `rules`, with names that a flow can write.
fn named<'n>(
    node: &'n Node,
    what: &'static str,
    defects: &mut Defects,
) -> Vec<(&'n str, Place, &'n Node)> {
    let Some(table) = Fields::open(node, format!("`{what}`"), defects) else { return Vec::new() };
    let entries: Vec<_> = table.names().collect();
    for (name, place, _) in entries.iter().filter(|(name, ..)| !is_name(name)) {
        let message = format!("`{name}` cannot be a name in a flow");
        defects.error(*place, message, "a letter, then letters, digits and `-`");
    }
    entries
}

fn settings(node: &Node, defects: &mut Defects) -> Option<f64> {
    let mut fields = Fields::open(node, "`settings`", defects)?;
    let bounds = Bounds::above_to(0.0, 1000.0);
    let width = fields.number("closure_width_nm", bounds, defects);
    fields.close(defects);
    width.map(|width| width.value)
}

fn rules(node: &Node, defects: &mut Defects) -> Vec<Placed<RuleEntry>> {
    let severities =
        [("note", Severity::Note), ("warning", Severity::Warning), ("error", Severity::Error)];
    let mut read = Vec::new();
    for (rule, place, node) in named(node, "rules", defects) {
        let what = format!("rule {rule}");
        let Some(fields) = Fields::open(node, what.clone(), defects) else { continue };
        let mut settings = RuleSettings::default();
        let mut threshold_places = Vec::new();
        for (name, name_place, value) in fields.names() {
            match (name, &value.value) {
                ("severity", Value::Text(word)) => {
                    settings.severity = choose(word, value.place, name, &severities, defects);
                }
                ("severity", other) => {
                    let message = format!("`severity` of {what} is {}", other.kind());
                    defects.error(value.place, message, "note, warning or error belongs here");
                }
                (_, Value::Number(number)) if number.is_finite() => {
                    settings.thresholds.insert(name.to_owned(), *number);
                    threshold_places.push((name.to_owned(), name_place));
                }
                (_, other) => {
                    let found = match other {
                        Value::Number(_) => "not finite",
                        other => other.kind(),
                    };
                    let message = format!("`{name}` of {what} is {found}");
                    defects.error(value.place, message, "a number belongs here");
                }
            }
        }
        let value = RuleEntry { rule: rule.to_owned(), settings, threshold_places };
        read.push(Placed { value, place, refers_to: Vec::new() });
    }
    read
}

fn materials(node: &Node, defects: &mut Defects) -> Vec<Placed<Material>> {
    named(node, "materials", defects)
        .into_iter()
        .filter_map(|(name, place, node)| material(name, place, node, defects))
        .collect()
}

fn material(
    name: &str,
    place: Place,
    node: &Node,
    defects: &mut Defects,
) -> Option<Placed<Material>> {
    let mut fields = Fields::open(node, format!("material {name}"), defects)?;
    let kind = fields.choice("kind", &KINDS, defects);
    if fields.place_of("kind").is_none() {
        fields.missing("kind", "say what it is to the flow", defects);
    }
    let label = fields.text("label", defects);
    let family = fields.text("family", defects);
    let mut material = Material {
        name: name.to_owned(),
        kind: kind.unwrap_or(Kind::Dielectric),
        label: label.unwrap_or_else(|| name.to_owned()),
        family: family.unwrap_or_else(|| word_of(&KINDS, kind).to_owned()),
        permittivity: None,
        density_g_per_cm3: None,
        youngs_modulus_gpa: None,
        poisson_ratio: None,
        stress_mpa: None,
        fracture_energy_j_per_m2: None,
        strength_mpa: None,
        expansion_ppm_per_k: None,
        heat_conductivity_w_per_mk: None,
        highest_temperature_c: None,
        oxidizes: fields.choice("oxidizes", &OXIDATIONS, defects).unwrap_or(Oxidation::None),
        oxidizes_from_c: None,
        copper_barrier: copper_barrier(&mut fields, defects),
        needs_barrier: fields.flag("needs_barrier", defects).unwrap_or(false),
        passes: fields.choice("passes", &PASSES, defects),
        passes_up_to_nm: None,
        hermetic_from_nm: None,
        leaves_at_c: leaves_at(&mut fields, name, defects),
        poor_adhesion_to: Vec::new(),
        resistivity_uohm_cm: None,
        mean_free_path_nm: None,
        grain_reflection: None,
        surface_specularity: None,
        grain_size_nm: None,
        hazards: Vec::new(),
        source: String::new(),
    };
    for number in MATERIAL_NUMBERS {
        if let Some(read) = fields.number(number.key, number.bounds, defects) {
            (number.set)(&mut material, read);
        }
    }
    let foes = fields.texts("poor_adhesion_to", defects);
    let refers_to = references("poor_adhesion_to", true, &foes);
    material.poor_adhesion_to = foes.into_iter().map(|(name, _)| name).collect();
    material.hazards = hazards(&mut fields, defects);
    material.source = source_of(&mut fields, place, defects);
    if material.leaves_at_c.is_some() && material.kind != Kind::Sacrificial {
        let message = format!("material {name} has `leaves_at_c` but its kind is not sacrificial");
        defects.error(fields.place_of("leaves_at_c").unwrap_or(place), message, "sacrificial only");
    }
    if kind.is_some_and(|kind| !kind.conducts()) && material.permittivity.is_none() {
        let message = format!("material {name} has no `permittivity`: no capacitance without it");
        defects.push(Severity::Warning, place, message, "", None);
    }
    fields.close(defects);
    kind?;
    Some(Placed { value: material, place, refers_to })
}

fn copper_barrier(fields: &mut Fields<'_>, defects: &mut Defects) -> CopperBarrier {
    let Some(node) = fields.take("copper_barrier") else { return CopperBarrier::No };
    match &node.value {
        Value::Flag(true) => CopperBarrier::Yes,
        Value::Flag(false) => CopperBarrier::No,
        Value::Number(nm) if Bounds::POSITIVE.allow(*nm) => CopperBarrier::FromNm(*nm),
        _ => {
            let message = "`copper_barrier` must be true, false or the least thickness in nm";
            defects.error(node.place, message, "true, false or a number above 0 belongs here");
            CopperBarrier::No
        }
    }
}

fn leaves_at(fields: &mut Fields<'_>, name: &str, defects: &mut Defects) -> Option<[f64; 2]> {
    let node = fields.take("leaves_at_c")?;
    let mut window = Fields::open(node, format!("`leaves_at_c` of material {name}"), defects)?;
    let low = window.number("low", Bounds::CELSIUS, defects);
    let high = window.number("high", Bounds::CELSIUS, defects);
    for key in ["low", "high"] {
        if window.place_of(key).is_none() {
            window.missing(key, "a window has two ends", defects);
        }
    }
    window.close(defects);
    let (low, high) = (low?.value, high?.value);
    if low >= high {
        let message = format!("`leaves_at_c` of material {name}: {low} is not below {high}");
        defects.error(node.place, message, "low must be below high");
        return None;
    }
    Some([low, high])
}

fn processes(node: &Node, defects: &mut Defects) -> Vec<Placed<Process>> {
    let mut read: Vec<Placed<Process>> = Vec::new();
    for (name, place, node) in named(node, "processes", defects) {
        let Some(process) = process(name, place, node, defects) else { continue };
        let verb = process.value.verb;
        let same = |other: &&Placed<Process>| other.value.default && other.value.verb == verb;
        if let (true, Some(other)) = (process.value.default, read.iter().find(same)) {
            let message = format!(
                "{name} and {} are both the default of {}",
                other.value.name,
                word_of(&VERBS, Some(verb))
            );
            defects.error(place, message, "one default a verb");
        }
        read.push(process);
    }
    read
}

fn process(
    name: &str,
    place: Place,
    node: &Node,
    defects: &mut Defects,
) -> Option<Placed<Process>> {
    let mut fields = Fields::open(node, format!("process {name}"), defects)?;
    let verb = fields.choice("verb", &VERBS, defects);
    if fields.place_of("verb").is_none() {
        fields.missing("verb", "say what it does", defects);
    }
    let default = fields.flag("default", defects).unwrap_or(false);
    let materials = fields.texts("materials", defects);
    let mut refers_to = references("materials", false, &materials);
    let ambient = fields
        .texts("ambient", defects)
        .into_iter()
        .filter_map(|(word, at)| choose(&word, at, "ambient", &AMBIENTS, defects))
        .collect();
    let mut process = Process {
        name: name.to_owned(),
        verb: verb.unwrap_or(Verb::Clean),
        default,
        materials: materials.into_iter().map(|(name, _)| name).collect(),
        temperature_c: None,
        pressure_torr: None,
        molecule_diameter_nm: None,
        ambient,
        arrival: None,
        grows_on: Default::default(),
        rates: Default::default(),
        shrinks: Ranged::exact(0.0),
        fills_down_to_nm: None,
        drawn_openings: fields.flag("drawn_openings", defects).unwrap_or(false),
        dose_pa_s: None,
        saturation_per_m2: None,
        molecule_mass_u: None,
        hazards: Vec::new(),
        source: String::new(),
    };
    for number in PROCESS_NUMBERS {
        if let Some(read) = fields.number(number.key, number.bounds, defects) {
            (number.set)(&mut process, read);
        }
    }
    match fields.take("arrival") {
        Some(node) => arrival(node, &mut process, defects),
        None => {
            let moves = [Verb::Deposit, Verb::Etch, Verb::Convert];
            if verb.is_some_and(|verb| moves.contains(&verb)) {
                fields.missing("arrival", "how its species reach the surface", defects);
            }
        }
    }
    for (key, table) in [("grows_on", &mut process.grows_on), ("rates", &mut process.rates)] {
        for (name, place, number) in fields.numbers(key, Bounds::NOT_NEGATIVE, defects) {
            refers_to.push(Reference { key, name: name.clone(), or_family: true, place });
            table.insert(name, number);
        }
    }
    let dose = [process.dose_pa_s, process.saturation_per_m2, process.molecule_mass_u];
    if dose.iter().any(Option::is_some) && dose.iter().any(Option::is_none) {
        let why = "a dose-limited film needs all of dose_pa_s, saturation_per_m2, molecule_mass_u";
        defects.error(place, format!("process {name}: {why}"), "");
    }
    process.hazards = hazards(&mut fields, defects);
    process.source = source_of(&mut fields, place, defects);
    fields.close(defects);
    verb?;
    Some(Placed { value: process, place, refers_to })
}

fn arrival(node: &Node, process: &mut Process, defects: &mut Defects) {
    let what = format!("`arrival` of process {}", process.name);
    let Some(mut fields) = Fields::open(node, what.clone(), defects) else { return };
    process.arrival = Some(Arrival::NEUTRAL);
    for number in ARRIVAL_NUMBERS {
        if number.key == "exponent"
            && matches!(fields.take("exponent"), Some(node) if matches!(&node.value, Value::Text(word) if word == "vertical"))
        {
            if let Some(arrival) = &mut process.arrival {
                arrival.exponent = Exponent::Vertical;
            }
        } else if let Some(read) = fields.number(number.key, number.bounds, defects) {
            (number.set)(process, read);
        }
    }
    let arrival = process.arrival.as_ref().unwrap_or(&Arrival::NEUTRAL);
    let shares = arrival.conformal.value + arrival.directional.value;
    if shares > 1.0 + f64::EPSILON {
        let message = format!("the shares in {what} sum to {shares}, more than 1");
        defects.error(node.place, message, "conformal + directional <= 1 must hold");
    } else if arrival.neutral() > f64::EPSILON && fields.place_of("sticking").is_none() {
        fields.missing("sticking", "the neutral share needs its sticking probability", defects);
    }
    if arrival.directional.value > 0.0 && fields.place_of("exponent").is_none() {
        fields.missing("exponent", "the directional share needs its spread", defects);
    }
    fields.close(defects);
}

fn references(key: &'static str, or_family: bool, names: &[(String, Place)]) -> Vec<Reference> {
    names
        .iter()
        .map(|(name, place)| Reference { key, name: name.clone(), or_family, place: *place })
        .collect()
}

fn hazards(fields: &mut Fields<'_>, defects: &mut Defects) -> Vec<String> {
    let words: Vec<(&str, &str)> = super::HAZARDS.iter().map(|&word| (word, word)).collect();
    fields
        .texts("hazards", defects)
        .into_iter()
        .filter_map(|(word, place)| choose(&word, place, "hazards", &words, defects))
        .map(str::to_owned)
        .collect()
}

fn source_of(fields: &mut Fields<'_>, place: Place, defects: &mut Defects) -> String {
    let text = fields.text("source", defects).unwrap_or_default();
    if text.trim().is_empty() {
        let message = "no `source`: where do these numbers come from?";
        defects.push(Severity::Note, place, message, "", None);
    }
    text
}

fn word_of<T: Copy + PartialEq>(words: &[(&'static str, T)], value: Option<T>) -> &'static str {
    words.iter().find(|(_, known)| Some(*known) == value).map_or("", |(word, _)| word)
}

pub(super) const KINDS: [(&str, Kind); 5] = [
    ("dielectric", Kind::Dielectric),
    ("conductor", Kind::Conductor),
    ("semiconductor", Kind::Semiconductor),
    ("sacrificial", Kind::Sacrificial),
    ("resist", Kind::Resist),
];

const OXIDATIONS: [(&str, Oxidation); 4] = [
    ("none", Oxidation::None),
    ("low", Oxidation::Low),
    ("medium", Oxidation::Medium),
    ("high", Oxidation::High),
];

const PASSES: [(&str, Passes); 4] = [
    ("hermetic", Passes::Hermetic),
    ("low", Passes::Low),
    ("permeable", Passes::Permeable),
    ("open", Passes::Open),
];

const VERBS: [(&str, Verb); 11] = [
    ("deposit", Verb::Deposit),
    ("etch", Verb::Etch),
    ("convert", Verb::Convert),
    ("fill", Verb::Fill),
    ("release", Verb::Release),
    ("strip", Verb::Strip),
    ("polish", Verb::Polish),
    ("anneal", Verb::Anneal),
    ("cure", Verb::Cure),
    ("clean", Verb::Clean),
    ("via", Verb::Via),
];

const AMBIENTS: [(&str, Ambient); 14] = [
    ("inert", Ambient::Inert),
    ("oxidizing", Ambient::Oxidizing),
    ("reducing", Ambient::Reducing),
    ("hydrogen-plasma", Ambient::HydrogenPlasma),
    ("oxygen-plasma", Ambient::OxygenPlasma),
    ("ozone", Ambient::Ozone),
    ("fluorine", Ambient::Fluorine),
    ("fluorocarbon", Ambient::Fluorocarbon),
    ("hf", Ambient::Hf),
    ("chlorine", Ambient::Chlorine),
    ("wet", Ambient::Wet),
    ("plasma", Ambient::Plasma),
    ("vacuum", Ambient::Vacuum),
    ("slurry", Ambient::Slurry),
];
