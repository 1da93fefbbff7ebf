//! No rule cries wolf: flows that an engineer would run as they stand.

use std::fs;
use std::path::{Path, PathBuf};

use rayon::prelude::*;

use crate::harness::{findings, grave, resolve};

pub fn flows_in(folder: &str) -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/rules").join(folder);
    let mut files: Vec<_> = fs::read_dir(folder).unwrap().map(|e| e.unwrap().path()).collect();
    files.retain(|file| file.extension().is_some_and(|ending| ending == "flow"));
    files.sort();
    files
}

/// What is graver than a note in each flow of a folder.
fn alarms(folder: &str) -> Vec<String> {
    let alarms = flows_in(folder).into_par_iter().flat_map(|file| {
        let name = file.file_stem().unwrap().to_string_lossy().into_owned();
        let flow = resolve(&name, &fs::read_to_string(&file).unwrap(), None);
        let lines = findings(&flow).map_or_else(|error| vec![error], |f| grave(&flow, &f));
        lines.into_iter().map(move |line| format!("{name}: {line}")).collect::<Vec<_>>()
    });
    alarms.collect()
}

#[test]
fn legitimate_flows_raise_no_alarm() {
    assert!(flows_in("legitimate").len() >= 12);
    let alarms = alarms("legitimate");
    assert!(alarms.is_empty(), "{alarms:#?}");
}

#[test]
fn corrected_flows_raise_no_alarm() {
    let alarms = alarms("corrected");
    assert!(alarms.is_empty(), "{alarms:#?}");
}
