//! Library files from outside: what is refused and where, what merges, what stays bounded.

#![allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    clippy::print_stdout,
    clippy::print_stderr,
    reason = "tests read files and time nothing"
)]

use gapwright::diag::Diagnostic;
use gapwright::library::{self, Exponent, Library, Ranged};
use gapwright::source::Source;
use std::fmt::Write;

use assert_cmd::Command;

/// One line a message: place, marked text, message, label, help.
fn told(messages: &[Diagnostic], source: &Source) -> String {
    let mut out = String::new();
    for message in messages {
        if let Some(span) = message.span {
            let at = source.position(span.start);
            let marked = &source.text[span.start..span.end];
            write!(out, "{}:{} [{marked}] ", at.line, at.column).unwrap();
        }
        out += &message.message;
        if !message.label.is_empty() {
            write!(out, " | {}", message.label).unwrap();
        }
        if let Some(help) = &message.help {
            write!(out, " | {help}").unwrap();
        }
        out.push('\n');
    }
    out
}

fn errors_of(text: &str) -> String {
    let source = Source::new("test.yaml", text);
    match library::parse(&source) {
        Ok(file) => panic!("accepted: {file:?}"),
        Err(errors) => told(&errors, &source),
    }
}

fn load(text: &str) -> (Library, String) {
    let source = Source::new("test.yaml", text);
    let file = library::parse(&source).unwrap_or_else(|e| panic!("{}", told(&e, &source)));
    let (library, messages) = Library::built_in().with(file, &source);
    (library, told(&messages, &source))
}

#[test]
fn unknown_keys_name_the_nearest_known_one() {
    let text = "
materials:
  Oxid:
    kind: dielectric
    permitivity: 4
    permittivity: 4.2
    source: measured
seting: {}
";
    assert_eq!(
        errors_of(text),
        "\
5:5 [permitivity] material Oxid has no key `permitivity` | unknown key | did you mean `permittivity`?
8:1 [seting] a library file has no key `seting` | unknown key | did you mean `settings`?
"
    );
}

#[test]
fn repeated_keys_are_refused_at_every_level() {
    let text = "
materials:
  A:
    kind: dielectric
    permittivity: 4
    permittivity: 5
    density_g_per_cm3: {value: 2, low: 1, low: 1.5, high: 3}
  A: {kind: conductor}
processes:
  p: {verb: strip, rates: {SiN: 1, SiN: 2}}
materials: {}
";
    assert_eq!(
        errors_of(text),
        "\
6:5 [permittivity] `permittivity` is given twice in material A | given before
7:43 [low] `low` is given twice in `density_g_per_cm3` of material A | given before
8:3 [A] `A` is given twice in `materials` | given before
10:36 [SiN] `SiN` is given twice in `rates` of process p | given before
11:1 [materials] `materials` is given twice in a library file | given before
"
    );
}

#[test]
fn numbers_that_cannot_be_are_refused() {
    let text = "
materials:
  A:
    kind: dielectric
    permittivity: .nan
    density_g_per_cm3: -2.2
    youngs_modulus_gpa: {value: 60, low: 70, high: 80}
    stress_mpa: .inf
    poisson_ratio: 0.7
    highest_temperature_c: -300
    copper_barrier: -1
    expansion_ppm_per_k: {low: 1, high: 2}
";
    assert_eq!(
        errors_of(text),
        "\
5:19 [.nan] `permittivity` of material A is not finite | no number
6:24 [-2.2] `density_g_per_cm3` of material A cannot be -2.2 | must be above 0 and at most 25
7:25 [{] `youngs_modulus_gpa` of material A: 60 is outside its range 70 to 80 | low <= value <= high must hold
8:17 [.inf] `stress_mpa` of material A is not finite | no number
9:20 [0.7] `poisson_ratio` of material A cannot be 0.7 | must be above -1 and at most 0.5
10:28 [-300] `highest_temperature_c` of material A cannot be -300 | must be at least -273.15 and at most 6000
11:21 [-1] `copper_barrier` must be true, false or the least thickness in nm | true, false or a number above 0 belongs here
12:26 [{] `expansion_ppm_per_k` of material A has no `value`: a range stands around a value
"
    );
}

#[test]
fn wrong_kinds_are_refused() {
    let text = "
materials:
  A:
    kind: conductor
    strength_mpa: [1, 2]
    expansion_ppm_per_k: '1'
    oxidizes_from_c: 1e999
    hazards: [HF, 3]
    needs_barrier: yes
    label: 7
  T: !metal {kind: conductor}
  1: {kind: conductor}
processes: [p]
";
    assert_eq!(
        errors_of(text),
        "\
5:19 [[] `strength_mpa` of material A must be a number, not a list | a number belongs here
6:26 ['1'] `expansion_ppm_per_k` of material A must be a number, not a text | a number belongs here
7:22 [1e999] `oxidizes_from_c` of material A must be a number, not a text | a number belongs here
8:15 [HF] `hazards` cannot be `HF`: one of hf, silane, ozone, fluorine, chlorine, decomposition, \
ruthenium-oxide, solvent, slurry, vacuum, heat | unknown word | did you mean `hf`?
8:19 [3] `hazards` of material A must be a list of names, not a number | a list of names belongs here
9:20 [yes] `needs_barrier` of material A must be true or false, not a text | true or false belongs here
10:12 [7] `label` of material A must be a text, not a number | a text belongs here
11:6 [!metal {kind] material T must be a table of keys, not a tagged value | a table of keys belongs here
12:3 [1] a key of `materials` is a number, not a name | quote it if it is a name
13:12 [[] `processes` must be a table of keys, not a list | a table of keys belongs here
"
    );
}

#[test]
fn unknown_words_are_refused_with_the_known_ones() {
    let text = "
materials:
  A: {kind: metal, passes: tight}
  B C: {kind: conductor, oxidizes: med}
processes:
  q: {verb: etsch}
  s: {verb: clean, ambient: [oxidising]}
";
    assert_eq!(
        errors_of(text),
        "\
3:13 [metal] `kind` cannot be `metal`: one of dielectric, conductor, semiconductor, sacrificial, resist | unknown word
3:28 [tight] `passes` cannot be `tight`: one of hermetic, low, permeable, open | unknown word
4:3 [B C] `B C` cannot be a name in a flow | a letter, then letters, digits and `-`
4:36 [med] `oxidizes` cannot be `med`: one of none, low, medium, high | unknown word
6:13 [etsch] `verb` cannot be `etsch`: one of deposit, etch, convert, fill, release, strip, polish, anneal, \
cure, clean, via | unknown word | did you mean `etch`?
7:30 [oxidising] `ambient` cannot be `oxidising`: one of inert, oxidizing, reducing, hydrogen-plasma, \
oxygen-plasma, ozone, fluorine, fluorocarbon, hf, chlorine, wet, plasma, vacuum, slurry | unknown word | \
did you mean `oxidizing`?
"
    );
}

#[test]
fn an_arrival_must_be_whole_and_possible() {
    let text = "
processes:
  p:
    verb: deposit
    arrival: {directional: 0.7, conformal: 0.6, sticking: 0, tilt_deg: 90, exponent: narrow}
  r: {verb: etch}
  s:
    verb: deposit
    arrival: {directional: 0.5}
    dose_pa_s: 1
    rates: {SiN: -1}
  t: {verb: deposit, arrival: {sticking: 1.2}}
";
    assert_eq!(
        errors_of(text),
        "\
5:14 [{] the shares in `arrival` of process p sum to more than 1 | conformal + directional <= 1 must hold
5:59 [0] `sticking` of `arrival` of process p cannot be 0 | must be above 0 and at most 1
5:72 [90] `tilt_deg` of `arrival` of process p cannot be 90 | must be at least 0 and below 90
5:86 [narrow] `exponent` of `arrival` of process p must be a number, not a text | a number belongs here
6:6 [{] process r has no `arrival`: how its species reach the surface
7:3 [s] process s: a dose-limited film needs all of dose_pa_s, saturation_per_m2, molecule_mass_u
9:14 [{] `arrival` of process s has no `sticking`: the neutral share needs its sticking probability
9:14 [{] `arrival` of process s has no `exponent`: the directional share needs its spread
11:18 [-1] `SiN` of `rates` of process s cannot be -1 | must be at least 0
12:42 [1.2] `sticking` of `arrival` of process t cannot be 1.2 | must be above 0 and at most 1
"
    );
}

#[test]
fn a_decomposition_window_has_two_ends_and_a_sacrificial_material() {
    let text = "
materials:
  A: {kind: sacrificial, leaves_at_c: {low: 300, high: 200}}
  B: {kind: sacrificial, leaves_at_c: {low: 300}}
  C: {kind: conductor, leaves_at_c: {low: 200, high: 300}}
";
    assert_eq!(
        errors_of(text),
        "\
3:39 [{] `leaves_at_c` of material A: 300 is not below 200 | low must be below high
4:39 [{] `leaves_at_c` of material B has no `high`: a window has two ends
5:24 [leaves_at_c] material C has `leaves_at_c` but its kind is not sacrificial | sacrificial only
"
    );
}

#[test]
fn rules_and_settings_are_held_to_their_kinds() {
    let text = "
rules: {roof-too-thin: {minimum_nm: thick, severity: fatal}, x: 4}
settings: {closure_width_nm: 0}
";
    assert_eq!(
        errors_of(text),
        "\
2:37 [thick] `minimum_nm` of rule roof-too-thin cannot be a text | a number of at least 0 belongs here
2:54 [fatal] `severity` cannot be `fatal`: one of note, warning, error | unknown word
2:65 [4] rule x must be a table of keys, not a number | a table of keys belongs here
3:30 [0] `closure_width_nm` of `settings` cannot be 0 | must be above 0 and at most 1000
"
    );
}

#[test]
fn two_defaults_of_a_verb_are_refused() {
    let text =
        "processes:\n  a: {verb: polish, default: true}\n  b: {verb: polish, default: true}\n";
    let told = "3:3 [b] a and b are both the default of polish | one default a verb\n";
    assert_eq!(errors_of(text), told);
}

#[test]
fn what_is_not_yaml_is_told_with_its_place() {
    let open = "materials:\n  A: {kind: conductor\n  B: {kind: conductor}\n";
    assert_eq!(
        errors_of(open),
        "3:4 [] not YAML: did not find expected ',' or '}' at line 3 column 4, while parsing a flow mapping at line 2 column 6\n"
    );
    let anchor = "materials: {A: {kind: conductor, source: *nowhere}}";
    assert_eq!(errors_of(anchor), "1:42 [*nowhere] not YAML: unknown anchor at line 1 column 42\n");
    assert_eq!(errors_of("--- {}\n--- {}\n"), "more than one YAML document\n");
    assert_eq!(
        errors_of("just words"),
        "1:1 [just words] a library file must be a table of keys, not a text | a table of keys belongs here\n"
    );
}

#[test]
fn places_hold_behind_a_mark_line_ends_and_wide_characters() {
    let text = "\u{feff}materials:\r\n  Oxid: {kind: conductor, label: \"µ Ω 日\", permittivty: 3} # ä\r\n";
    let told = "2:43 [permittivty] material Oxid has no key `permittivty` | unknown key | did you mean `permittivity`?\n";
    assert_eq!(errors_of(text), told);
}

#[test]
fn bombs_are_refused_and_not_built() {
    let ten = |name: char| vec![format!("*{name}"); 10].join(", ");
    let mut aliases = String::from("a: &a [x, x, x, x, x, x, x, x, x, x]\n");
    for (below, name) in ('a'..'i').zip('b'..='i') {
        aliases += &format!("{name}: &{name} [{}]\n", ten(below));
    }
    let told = errors_of(&aliases);
    assert!(told.contains("more than 200,000 values, aliases expanded"), "{told}");

    // Deep brackets cost the reader the square of their depth: a megabyte must not get there.
    for opening in ["[", "{a: ", "[{a: ", "- ", "? "] {
        let deep = opening.repeat(library::MAX_BYTES / opening.len());
        let told = errors_of(&deep);
        assert!(told.contains("nested more than 16 deep"), "{opening}: {told}");
    }
    let quoted = format!("materials: {{A: {{kind: conductor, source: '{}'}}}}", "[{".repeat(500));
    assert_eq!(load(&quoted).1, "");

    let large = "#".repeat(library::MAX_BYTES + 1);
    let told = "the file has 1048577 bytes, a library file at most 1048576 (1 MiB)\n";
    assert_eq!(errors_of(&large), told);
}

#[test]
fn a_large_file_full_of_defects_is_counted_out() {
    let mut text = String::from("materials:\n");
    for number in 0..20_000 {
        text += &format!("  M{number}: {{kind: conductr, lable: a}}\n");
    }
    let told = errors_of(&text);
    assert!(told.starts_with("2:14 [conductr] "), "{told}");
    assert!(told.ends_with("more in this file\n"), "{told}");
}

#[test]
fn a_later_entry_replaces_an_earlier_one_whole() {
    let (library, told) = load(
        "
materials:
  Cu: {kind: conductor, resistivity_uohm_cm: {value: 2, low: 1.9, high: 2.2}, source: ours}
processes:
  our-polish: {verb: polish, default: true, source: ours}
settings: {closure_width_nm: 0.01}
",
    );
    let copper = library.material(library.material_id("Cu").unwrap());
    let ours = Ranged { value: 2.0, low: 1.9, high: 2.2 };
    assert_eq!(copper.resistivity_uohm_cm, Some(ours));
    assert_eq!(copper.mean_free_path_nm, None);
    assert!(!copper.needs_barrier);
    assert_eq!(library.default_process(library::Verb::Polish).unwrap().name, "our-polish");
    assert_eq!(library.settings.closure_width_nm, 0.01);
    assert_eq!(
        told,
        "\
3:3 [Cu] material Cu replaces the one of that name in an earlier library
5:3 [our-polish] our-polish is the default now, no longer cmp
"
    );
}

#[test]
fn names_that_no_library_has_are_warned_of() {
    let (_, told) = load(
        "
processes:
  our-etch:
    verb: etch
    materials: [SiCHO]
    arrival: {conformal: 1}
    rates: {Si02: 1, nitrid: 0.1, metal: 0, conductor: 0}
",
    );
    assert_eq!(
        told,
        "\
3:3 [our-etch] no `source`: where do these numbers come from?
5:17 [SiCHO] `materials` of our-etch: no material is called `SiCHO` | unknown name | did you mean `SiCOH`?
7:13 [Si02] `rates` of our-etch: no material or family is called `Si02` | unknown name | did you mean `SiO2`?
7:22 [nitrid] `rates` of our-etch: no material or family is called `nitrid` | unknown name | did you mean `nitride`?
"
    );
}

#[test]
fn rules_are_held_against_those_that_are_known() {
    let text = "rules:\n  roof-to-thin: {}\n  via-meets-void: {severity: note, minimum: 3}\n";
    let source = Source::new("test.yaml", text);
    let file = library::parse(&source).unwrap();
    let known: [library::KnownRule<'_>; 2] =
        [("roof-too-thin", &["minimum_nm"]), ("via-meets-void", &["minimum_nm"])];
    assert_eq!(
        told(&file.unknown_rules(&known, &source), &source),
        "\
2:3 [roof-to-thin] there is no rule `roof-to-thin` | unknown rule | did you mean `roof-too-thin`?
3:36 [minimum] rule via-meets-void has no setting `minimum` | unknown setting | did you mean `minimum_nm`?
"
    );
}

#[test]
fn an_empty_file_adds_nothing() {
    for text in ["", "# nothing yet\n", "materials:\nprocesses: ~\n"] {
        assert_eq!(load(text), ((*Library::built_in()).clone(), String::new()), "{text}");
    }
}

#[test]
fn a_beam_is_written_vertical() {
    let (library, _) = load(
        "processes:\n  beam: {verb: deposit, arrival: {directional: 1, exponent: vertical}, source: x}\n",
    );
    let arrival = library.process("beam").unwrap().arrival.clone().unwrap();
    assert_eq!(arrival.exponent, Exponent::Vertical);
    assert_eq!(arrival.neutral(), 0.0);
}

#[test]
fn every_entry_of_the_built_in_library_has_a_source() {
    let library = Library::built_in();
    let materials = library.materials.iter().map(|m| (&m.name, &m.source));
    let processes = library.processes.iter().map(|p| (&p.name, &p.source));
    for (name, source) in materials.chain(processes) {
        assert!(source.contains("from memory") || source.contains("look-up"), "{name}: {source}");
    }
}

#[test]
fn every_range_of_the_built_in_library_can_be() {
    let library = Library::built_in();
    for material in &library.materials {
        for number in library::MATERIAL_NUMBERS {
            let Some(range) = (number.get)(material) else { continue };
            assert!(range.low <= range.value && range.value <= range.high, "{}", material.name);
            assert!(number.bounds.allow(range.low) && number.bounds.allow(range.high));
        }
    }
    for process in &library.processes {
        for number in library::PROCESS_NUMBERS.iter().chain(library::ARRIVAL_NUMBERS) {
            let Some(range) = (number.get)(process) else { continue };
            assert!(range.low <= range.value && range.value <= range.high, "{}", process.name);
            assert!(number.bounds.allow(range.low) && number.bounds.allow(range.high));
        }
    }
}

const PAGE: &str = include_str!("../docs/library.md");

#[test]
fn the_page_names_every_key_and_its_file_can_be_used() {
    let materials = library::MATERIAL_NUMBERS.iter().map(|number| number.key);
    let processes = library::PROCESS_NUMBERS.iter().map(|number| number.key);
    let arrival = library::ARRIVAL_NUMBERS.iter().map(|number| number.key);
    for key in materials.chain(processes).chain(arrival) {
        assert!(PAGE.contains(&format!("\n| `{key}` |")), "{key}");
    }
    for hazard in library::HAZARDS {
        assert!(PAGE.contains(&format!("`{}`", hazard.word)), "{}", hazard.word);
    }
    let example = PAGE.split("```yaml\n").nth(1).unwrap().split("```").next().unwrap();
    assert_eq!(load(example).1, "");
}

/// Runs `gapwright library …` and hands back exit status, standard output, standard error.
fn command(arguments: &[&str], input: &str) -> (i32, String, String) {
    let mut command = Command::cargo_bin("gapwright").unwrap();
    let run = command.arg("library").args(arguments).write_stdin(input).output().unwrap();
    let text = |bytes| String::from_utf8(bytes).unwrap();
    (run.status.code().unwrap(), text(run.stdout), text(run.stderr))
}

#[test]
fn the_command_checks_a_file() {
    let (status, out, told) = command(&["check", "-"], "materials: {Oxid: {kind: dielectrc}}");
    assert_eq!((status, out.as_str()), (2, "standard input: cannot be used\n"));
    assert!(told.contains("standard input:1:26") && told.contains("did you mean `dielectric`?"));

    let good = "materials: {Oxid: {kind: dielectric, permittivity: 4, source: ours}}";
    let told = (0, "standard input: can be used\n".to_owned(), String::new());
    assert_eq!(command(&["check", "-"], good), told);

    let (status, _, told) = command(&["check", "-"], "rules: {roof-to-thin: {}}");
    assert_eq!(status, 2);
    assert!(told.contains("did you mean `roof-too-thin`?"), "{told}");
}

#[test]
fn the_command_shows_entries_and_keeps_messages_out_of_them() {
    let ours = "materials: {Cu: {kind: conductor, resistivity_uohm_cm: 2, source: ours}}";
    let arguments = ["--use", "-", "Cu", "--format", "json"];
    let (status, out, told) = command(&arguments, ours);
    assert_eq!(status, 0);
    let json: serde_json::Value = serde_json::from_str(&out).unwrap();
    assert_eq!(json["materials"]["Cu"]["resistivity_uohm_cm"]["value"], 2.0);
    assert!(told.contains("replaces the one of that name"), "{told}");

    let (status, out, told) = command(&["silan-pecvd"], "");
    assert_eq!((status, out.as_str()), (2, ""));
    assert!(told.contains("did you mean `silane-pecvd`?"), "{told}");

    let (status, out, _) = command(&[], "");
    let library = Library::built_in();
    assert_eq!(status, 0);
    for name in library.materials.iter().map(|m| &m.name) {
        assert!(out.lines().any(|line| line.starts_with(&format!("{name} "))), "{name}");
    }
}
