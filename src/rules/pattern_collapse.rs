//! `pattern-collapse`: a liquid dries between free-standing lines that bend together.

use crate::diag::Severity;
use crate::flow::State;
use crate::measure::{FreeLine, drying_deflection_nm};
use super::frame::context::is_wet;
use super::frame::shape::{drawn_width, free_height};
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "pattern-collapse",
    severity: Severity::Error,
    needs: Needs::Section,
    thresholds: &[
        Threshold { key: "surface_tension_n_per_m", default: 0.072, meaning: "surface tension of what dries, N/m; water" },
        Threshold { key: "contact_angle_deg", default: 0.0, meaning: "its contact angle on the lines, degrees; 0 is the worst" },
        Threshold { key: "deflection_share", default: 0.25, meaning: "drying deflection over the space at which lines meet" },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/pattern-collapse.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let tension = findings.threshold("surface_tension_n_per_m");
    let angle = findings.threshold("contact_angle_deg").to_radians();
    let share = findings.threshold("deflection_share");
    for moment in context.moments().filter(|m| is_wet(m.step)) {
        let stage = moment.after;
        let drawn = &stage.section.drawn;
        for (number, line) in drawn.lines.iter().enumerate() {
            let spaces = [number, number + 1];
            if spaces.iter().any(|&space| stage.states[space] != State::Open) {
                continue;
            }
            let Some(height) = free_height(&stage.section, number) else { continue };
            let moduli = context.variant.wafer.layers.iter().filter_map(|layer| {
                let material = context.material(layer.material);
                findings.want(&material.name, "youngs_modulus_gpa", material.youngs_modulus_gpa)
            });
            let Some(modulus) = moduli.map(|gpa| gpa.value).reduce(f64::min) else { continue };
            let space = drawn_width(&stage.section, spaces[0]).min(drawn_width(&stage.section, spaces[1]));
            let width = (line.top_x[1] - line.top_x[0]).min(line.bottom_x[1] - line.bottom_x[0]);
            let line = FreeLine {
                height_nm: height,
                width_nm: width,
                space_nm: space,
                youngs_modulus_gpa: modulus,
            };
            let deflection = drying_deflection_nm(&line, tension, angle);
            if deflection < share * space {
                continue;
            }
            let message = format!(
                "drying bends lines {height:.0} nm tall and {width:.0} nm wide by {deflection:.1} nm across a space of {space:.0} nm"
            );
            findings.add(
                Found::on_step(context, moment.index, message)
                    .help("dry from a liquid of low surface tension, take a dry process, or lower the lines")
                    .in_space(moment.cell, spaces[0])
                    .fact("collapse", deflection / space),
            );
        }
    }
}
