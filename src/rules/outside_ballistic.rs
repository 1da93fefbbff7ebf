//! `outside-ballistic`: molecules collide in the space, which the growth model leaves out.

use crate::diag::Severity;
use crate::flow::Action;
use crate::measure::mean_free_path_nm;
use crate::units::{Pressure, Temperature};
use super::frame::shape::drawn_width;
use super::frame::{Context, Findings, Found, Needs, Rule, Threshold};

pub static RULE: Rule = Rule {
    name: "outside-ballistic",
    severity: Severity::Warning,
    needs: Needs::Section,
    thresholds: &[
        Threshold {
            key: "note_below",
            default: 10.0,
            meaning: "Knudsen number below which it is a note",
        },
        Threshold {
            key: "warning_below",
            default: 1.0,
            meaning: "Knudsen number below which it is a warning",
        },
    ],
    yields_to: &[],
    page: include_str!("../../docs/rules/outside-ballistic.md"),
    check: Some(check),
};

fn check(context: &Context<'_>, findings: &mut Findings<'_>) {
    let (note, warning) = (findings.threshold("note_below"), findings.threshold("warning_below"));
    for (index, step) in context.steps() {
        let Action::Deposit { process, .. } = &step.action else { continue };
        let process = &process.process;
        let transported = process.arrival.as_ref().is_some_and(|a| a.conformal.value < 1.0);
        if !transported || process.dose_pa_s.is_some() {
            continue;
        }
        let name = &process.name;
        let temperature = findings.want(name, "temperature_c", process.temperature_c);
        let pressure = findings.want(name, "pressure_torr", process.pressure_torr);
        let diameter = findings.want(name, "molecule_diameter_nm", process.molecule_diameter_nm);
        let (Some(temperature), Some(pressure), Some(diameter)) = (temperature, pressure, diameter)
        else {
            continue;
        };
        let path_nm = mean_free_path_nm(
            Temperature::from_celsius(temperature.value),
            Pressure::from_torr(pressure.value),
            diameter.value,
        );
        let widest = context
            .moments()
            .filter(|moment| moment.index == index)
            .flat_map(|moment| moment.spaces().map(move |space| (moment, space)))
            .map(|(m, space)| (drawn_width(&m.before.section, space), m.cell, space))
            .max_by(|a, b| a.0.total_cmp(&b.0));
        let Some((width, cell, space)) = widest else { continue };
        let knudsen = path_nm / width;
        if knudsen >= note {
            continue;
        }
        let severity = if knudsen < warning { Severity::Warning } else { Severity::Note };
        let message = format!(
            "the mean free path in {name} is {path_nm:.0} nm, {knudsen:.1} times a space of \
             {width:.0} nm: molecules collide there, which the growth leaves out"
        );
        findings.add(
            Found::on_step(context, index, message)
                .severity(severity)
                .help("take the figures as rough, or lower the pressure")
                .in_space(cell, space),
        );
    }
}
