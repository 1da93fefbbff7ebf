//! `processes:` of a library file.

use std::collections::BTreeMap;

use super::fields::{Defects, Fields, choose};
use super::file::{Placed, Reference, hazards, named, references, source_of};
use super::numbers::{ARRIVAL_NUMBERS, Bounds, PROCESS_NUMBERS};
use super::words::{AMBIENTS, VERBS, word_of};
use super::yaml::{Node, Place, Value};
use super::{Arrival, Exponent, Process, Ranged, Verb};

pub(super) fn processes(node: &Node, defects: &mut Defects) -> Vec<Placed<Process>> {
    let mut read: Vec<Placed<Process>> = Vec::new();
    let mut defaults: BTreeMap<Verb, String> = BTreeMap::new();
    for (name, place, node) in named(node, "processes", defects) {
        let Some(process) = process(name, place, node, defects) else { continue };
        if process.value.default {
            let verb = process.value.verb;
            if let Some(other) = defaults.insert(verb, name.to_owned()) {
                let verb = word_of(&VERBS, Some(verb));
                let message = format!("{other} and {name} are both the default of {verb}");
                defects.error(place, message, "one default a verb");
            }
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
        grows_on: BTreeMap::new(),
        rates: BTreeMap::new(),
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
    let vertical = fields
        .take("exponent")
        .is_some_and(|node| matches!(&node.value, Value::Text(word) if word == "vertical"));
    for number in ARRIVAL_NUMBERS {
        if vertical && number.key == "exponent" {
            continue;
        }
        if let Some(read) = fields.number(number.key, number.bounds, defects) {
            (number.set)(process, read);
        }
    }
    if let (true, Some(arrival)) = (vertical, &mut process.arrival) {
        arrival.exponent = Exponent::Vertical;
    }
    let arrival = process.arrival.as_ref().unwrap_or(&Arrival::NEUTRAL);
    let shares = arrival.conformal.value + arrival.directional.value;
    if shares > 1.0 + f64::EPSILON {
        let message = format!("the shares in {what} sum to more than 1");
        defects.error(node.place, message, "conformal + directional <= 1 must hold");
    } else if arrival.neutral() > f64::EPSILON && fields.place_of("sticking").is_none() {
        fields.missing("sticking", "the neutral share needs its sticking probability", defects);
    }
    if arrival.directional.value > 0.0 && fields.place_of("exponent").is_none() {
        fields.missing("exponent", "the directional share needs its spread", defects);
    }
    fields.close(defects);
}
