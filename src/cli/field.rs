//! `field`: the capacitance of a section from anywhere.

use std::path::{Path, PathBuf};

use clap::ValueEnum;

use super::disk::Disk;
use super::output::{self, Failure};
use super::{Exit, Shared};
use crate::field::{self, FieldError};
use crate::library::{self, Library};
use crate::report::capacitance::CapacitanceReport;
use crate::report::{geojson, messages};
use crate::world::read_text;

/// The capacitance matrix of a section given as GeoJSON, with proven bounds.
///
/// Coordinates in nm, x across, y up. Each region has the property `material` (of the
/// library), `permittivity` or `electrode`; the member `section` gives the extent.
#[derive(Debug, clap::Args)]
pub(crate) struct Args {
    /// GeoJSON file, or `-` for standard input.
    #[arg(value_name = "SECTION")]
    section: String,
    /// Relative half-width wanted of the diagonal and of each electrode's largest coupling.
    #[arg(long, value_name = "SHARE", default_value = "0.5 %", value_parser = share)]
    accuracy: f64,
    /// Library files on top of the built-in one.
    #[arg(long = "use", value_name = "FILE")]
    libraries: Vec<String>,
    /// Form of the answer.
    #[arg(long, value_enum, default_value = "json")]
    format: Format,
    /// Write the answer to this file, whole or not at all.
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
}

#[derive(Debug, Clone, Copy, ValueEnum)]
enum Format {
    /// A table for people.
    Text,
    /// The matrix with its bounds.
    Json,
}

pub(crate) fn run(args: &Args, shared: &Shared) -> Result<Exit, Failure> {
    let name = if args.section == "-" { "standard input" } else { &args.section };
    let source = read_text(&Disk, &args.section, name).map_err(Failure::unusable)?;
    let library = load(&args.libraries, shared)?;
    let unusable = |errors: Vec<geojson::GeoJsonError>| {
        let lines: Vec<String> = errors.iter().map(|error| format!("{name}: {error}")).collect();
        Failure::unusable(lines.join("\n"))
    };
    let section = geojson::read(&source.text).map_err(unusable)?;
    let named = section.problem(&library).map_err(unusable)?;
    let solved = field::solve(&named.problem, args.accuracy).map_err(|error| Failure {
        exit: match error {
            FieldError::Internal(_) => Exit::Internal,
            _ => Exit::Unusable,
        },
        message: format!("{name}: {}", named.explain(&error)),
    })?;
    let report = CapacitanceReport::new(&named.electrodes, &solved);
    let answer = match args.format {
        Format::Text => report.text(),
        Format::Json => report.json(),
    };
    output::emit(answer.as_bytes(), args.output.as_deref().map(Path::new))?;
    if solved.converged {
        return Ok(Exit::Holds);
    }
    output::tell(&format!("{name}: the wanted accuracy was not reached; the bounds hold"));
    Ok(Exit::Broken)
}

/// The built-in library with the given files on top, notes and errors told.
fn load(files: &[String], shared: &Shared) -> Result<Library, Failure> {
    let color = shared.colored(&std::io::stderr());
    let mut library = Library::clone(&Library::built_in());
    for path in files {
        let source = read_text(&Disk, path, path).map_err(Failure::unusable)?;
        let file = library::parse(&source)
            .map_err(|errors| Failure::unusable(messages::render(&errors, &source, color)))?;
        let (with, notes) = library.with(file, &source);
        if !notes.is_empty() {
            output::tell(&messages::render(&notes, &source, color));
        }
        library = with;
    }
    Ok(library)
}

/// A share as a number or in per cent.
fn share(text: &str) -> Result<f64, String> {
    let (number, unit) = match text.trim().strip_suffix('%') {
        Some(number) => (number.trim_end(), 0.01),
        None => (text.trim(), 1.0),
    };
    match number.parse::<f64>() {
        Ok(v) if v.is_finite() && v > 0.0 && v * unit < 1.0 => Ok(v * unit),
        _ => Err("expected a share between 0 and 1, such as `0.5 %`".into()),
    }
}
