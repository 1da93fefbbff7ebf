//! `materials:` of a library file.

use super::fields::{Defects, Fields};
use super::file::{Placed, hazards, named, references, source_of};
use super::numbers::{Bounds, MATERIAL_NUMBERS};
use super::words::{KINDS, OXIDATIONS, PASSES, word_of};
use super::yaml::{Node, Place, Value};
use super::{CopperBarrier, Kind, Material, Oxidation};
use crate::diag::Severity;

pub(super) fn materials(node: &Node, defects: &mut Defects) -> Vec<Placed<Material>> {
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
