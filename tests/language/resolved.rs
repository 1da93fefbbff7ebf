//! What a text resolves to.

use gapwright::diag::Severity;
use gapwright::flow::{Action, Against, Claim, Flow, Height, Place, Quantity, Role, Site, State};
use gapwright::syntax::tidy;
use gapwright::units::{Amount, Length};

use super::read::{EXAMPLE, changed, errors, resolved};

const LINES: &str = "lines 90 nm W width 32 nm space 32 nm";
const STEPS: &str = "010 seal 90 nm SiO2 by silane-pecvd";

/// A flow of these lines (further wafer statements after `;`), steps and further sections.
fn flow(lines: &str, steps: &str, rest: &str) -> Flow {
    resolved(&text(lines, steps, rest)).0
}

fn text(lines: &str, steps: &str, rest: &str) -> String {
    let lines = lines.replace(';', "\n");
    let steps = steps.replace(';', "\n");
    format!("flow test\nwafer\n{lines}\nsteps\n{steps}\n{rest}\n")
}

fn nm(amount: Amount<Length>) -> (f64, f64) {
    (amount.nominal.nm(), amount.three_sigma.nm())
}

fn labels(sites: &[Site]) -> Vec<&str> {
    sites.iter().map(Site::label).collect()
}

fn thickness(flow: &Flow, variant: usize, step: usize) -> (f64, f64) {
    match &flow.variants[variant].steps[step].action {
        Action::Deposit { thickness, .. } => nm(*thickness),
        other => panic!("{other:?}"),
    }
}

#[test]
fn the_example_resolves() {
    let (flow, notes) = resolved(EXAMPLE);
    assert_eq!(flow.name, "dense-copper-gap");
    assert_eq!(flow.title.as_deref(), Some("Copper lines sealed with a lean oxide"));
    let splits: Vec<_> =
        flow.variants.iter().map(|v| v.split.as_ref().map(|s| s.value.as_str())).collect();
    assert_eq!(splits, [None, Some("thin"), Some("no-liner"), Some("no-gap")]);
    assert_eq!(labels(&flow.variants[0].sites()), ["32 nm", "48 nm", "96 nm"]);
    assert_eq!(nm(flow.variants[0].wafer.lines.spaces[0].left), (32.0, 2.0));
    let counts: Vec<_> = flow.variants.iter().map(|variant| variant.steps.len()).collect();
    assert_eq!(counts, [7, 7, 6, 6]);
    assert_eq!(flow.limits[4].against, Some(Against::Split(3)));
    assert_eq!(flow.limits[6].for_net, Some(0));
    assert_eq!(notes.len(), 1);
    assert_eq!(notes[0].severity, Severity::Note);
}

#[test]
fn amounts_and_tolerances() {
    for (written, expected) in [
        ("60 ± 3 nm", (60.0, 3.0)),
        ("60 +- 3nm", (60.0, 3.0)),
        ("60 nm ± 3 nm", (60.0, 3.0)),
        ("60 nm ± 5 %", (60.0, 3.0)),
        ("0.06 um ± 3 nm", (60.0, 3.0)),
        ("0.06 ± 0.003 µm", (60.0, 3.0)),
        ("600 ± 30 A", (60.0, 3.0)),
        ("600 Å", (60.0, 0.0)),
        ("6e1 nm", (60.0, 0.0)),
        ("6.0e+1 nm", (60.0, 0.0)),
    ] {
        let steps = format!("010 seal {written} SiO2 by silane-pecvd");
        let (nominal, three_sigma) = thickness(&flow(LINES, &steps, ""), 0, 0);
        assert!((nominal - expected.0).abs() < 1e-9, "{written}: {nominal}");
        assert!((three_sigma - expected.1).abs() < 1e-9, "{written}: {three_sigma}");
    }
}

#[test]
fn an_item_without_unit_takes_that_of_the_next_that_has_one() {
    let flow =
        flow("lines 90 nm W width 32 nm space 30 | 34, 0.05, 0.1 um, 400 ± 5 %, 480 A", STEPS, "");
    let spaces: Vec<_> = flow.variants[0]
        .wafer
        .lines
        .spaces
        .iter()
        .map(|pair| (nm(pair.left), nm(pair.right)))
        .collect();
    let same = |length: f64, tolerance: f64| ((length, tolerance), (length, tolerance));
    assert_eq!(
        spaces,
        [
            ((30_000.0, 0.0), (34_000.0, 0.0)),
            same(50.0, 0.0),
            same(100.0, 0.0),
            same(40.0, 2.0),
            same(48.0, 0.0),
        ]
    );
}

#[test]
fn a_pitch_leaves_the_space_beside_the_line() {
    let flow =
        flow("lines 90 nm W width 32 nm pitch 64 ± 1, 80 nm", STEPS, "limits\nsealed at 48 nm");
    let lines = &flow.variants[0].wafer.lines;
    assert!(lines.by_pitch);
    assert_eq!(nm(lines.spaces[0].left), (32.0, 1.0));
    assert_eq!(labels(flow.limits[0].at.as_ref().unwrap()), ["48 nm"]);
}

#[test]
fn sites_of_pairs_and_rows() {
    let lines = "lines 90 nm W width 32 nm space 30 | 34, 48 nm;\
                 row edge width 26, 26, 100 nm space 26, 26, 60, 180 nm";
    let flow = flow(lines, STEPS, "limits\nsealed at edge:4, 30 | 34, 48 nm, edge:1");
    let sites = flow.variants[0].sites();
    assert_eq!(labels(&sites), ["30 | 34 nm", "48 nm", "edge:1", "edge:2", "edge:3", "edge:4"]);
    let at = flow.limits[0].at.as_ref().unwrap();
    assert_eq!(labels(at), ["edge:4", "30 | 34 nm", "48 nm", "edge:1"]);
}

#[test]
fn heights() {
    let lines = "lines width 32 nm space 32 nm;layer 60 nm polySi as gate;layer 30 nm SiN;\
                 between SiO2 to gate";
    let steps = "010 polish to 7 ± 2 nm above lines;020 polish to 5 nm below gate;\
                 030 polish to floor;040 polish to 0 nm above lines";
    let flow = flow(lines, steps, "");
    let heights: Vec<Height> = flow.variants[0]
        .steps
        .iter()
        .map(|step| match &step.action {
            Action::Polish { to, .. } => to.clone(),
            other => panic!("{other:?}"),
        })
        .collect();
    assert_eq!((nm(heights[0].offset), &heights[0].place), ((7.0, 2.0), &Place::Lines));
    assert_eq!((nm(heights[1].offset), &heights[1].place), ((-5.0, 0.0), &Place::Layer(0)));
    assert_eq!((nm(heights[2].offset), &heights[2].place), ((0.0, 0.0), &Place::Floor));
    let between = flow.variants[0].wafer.between.as_ref().unwrap();
    assert_eq!(between.to.place, Place::Layer(0));
}

#[test]
fn a_verb_without_by_takes_the_default() {
    let steps = "010 seal 90 nm SiO2 by silane-pecvd;020 polish to lines;\
                 030 anneal at 673.15 ± 5 K for 2 h;040 cure at 350 C for 90 s";
    let flow = flow(LINES, steps, "");
    let steps = &flow.variants[0].steps;
    let process = |step: usize| steps[step].action.process().process.name.as_str();
    assert_eq!([process(1), process(2), process(3)], ["cmp", "furnace", "uv-cure"]);
    let Action::Anneal { temperature, time, .. } = &steps[2].action else { panic!() };
    assert!((temperature.nominal.celsius() - 400.0).abs() < 1e-9);
    assert!((temperature.three_sigma.celsius() - 5.0).abs() < 1e-9);
    assert_eq!(time.nominal.s(), 7200.0);
}

#[test]
fn with_replaces_numbers_of_this_step_only() {
    let steps = "010 seal 90 nm SiO2 by silane-pecvd with sticking 0.3 ± 0.05, directional 10 %, \
                 temperature 653.15 K, pressure 1 ± 0.1 Torr;020 cap 9 nm SiO2 by silane-pecvd";
    let flow = flow(LINES, steps, "");
    let used = flow.variants[0].steps[0].action.process();
    let keys: Vec<_> = used.overrides.iter().map(|entry| entry.key.as_str()).collect();
    assert_eq!(keys, ["sticking", "directional", "temperature_c", "pressure_torr"]);
    assert_eq!((used.overrides[0].nominal, used.overrides[0].three_sigma), (0.3, 0.05));
    let arrival = used.process.arrival.as_ref().unwrap();
    let sticking = arrival.sticking;
    assert_eq!((sticking.value, sticking.low, sticking.high), (0.3, 0.3, 0.3));
    assert_eq!(arrival.directional.value, 0.1);
    assert!((used.overrides[2].nominal - 380.0).abs() < 1e-9);
    assert!((used.overrides[3].three_sigma - 0.1).abs() < 1e-12);
    let untouched = flow.variants[0].steps[1].action.process();
    assert_eq!(&*untouched.process, flow.library.process("silane-pecvd").unwrap());
}

#[test]
fn with_replaces_the_rate_of_a_material() {
    let lines = format!("{LINES};between SiCOH");
    let flow = flow(&lines, "010 etch 9 nm SiCOH by fluorocarbon-rie with SiCN 0.05", "");
    let used = flow.variants[0].steps[0].action.process();
    assert_eq!(used.overrides[0].key, "rates.SiCN");
    assert_eq!(used.process.rates["SiCN"].value, 0.05);
}

#[test]
fn a_split_step_inherits_what_stands_behind_the_step() {
    let lines = "lines 90 nm W width 32 nm space 32, 96 nm;between SiCOH";
    let steps = "010 clean by wet-clean;\
                 020 etch 9 nm SiCOH by fluorocarbon-rie only at 32 nm after 010 before 030 \"slow\";\
                 030 seal 90 nm SiO2 by silane-pecvd";
    let rest = "splits\ndeep 020 etch 20 nm SiCOH by fluorocarbon-rie\nbare 010 skip";
    let flow = flow(lines, steps, rest);
    let step = &flow.variants[1].steps[1];
    assert_eq!(labels(step.only_at.as_ref().unwrap()), ["32 nm"]);
    assert_eq!((step.after[0].value, step.before[0].value), (10, 30));
    assert_eq!(step.note.as_deref(), Some("slow"));
    assert_eq!(step.op_text, "020");
    let Action::Etch { depth, .. } = &step.action else { panic!() };
    assert_eq!(depth.nominal.nm(), 20.0);
    assert!(flow.variants[2].steps[0].after.is_empty(), "010 is skipped there");
}

#[test]
fn a_split_of_the_wafer_replaces_the_only_such_statement() {
    let lines = "plane 60 nm Cu;lines width 32 nm space 32 nm;layer 60 nm W as core;layer 4 nm Co";
    let rest = "splits\n\
                wide lines width 40 nm space 32 nm\n\
                plain lines 80 nm W width 32 nm space 32 nm\n\
                plain plane 90 nm Cu";
    let flow = flow(lines, STEPS, rest);
    let [_, wide, plain] = flow.variants.as_slice() else { panic!() };
    assert_eq!(wide.wafer.lines.width.nominal.nm(), 40.0);
    assert_eq!(wide.wafer.layers.len(), 2);
    assert_eq!(plain.wafer.layers.len(), 1);
    assert_eq!(plain.wafer.layers[0].thickness.nominal.nm(), 80.0);
}

#[test]
fn a_bare_lines_keeps_the_only_layer() {
    let flow = flow(LINES, STEPS, "splits\nwide lines width 40 nm space 32 nm");
    assert_eq!(flow.variants[1].wafer.layers[0].thickness.nominal.nm(), 90.0);
}

#[test]
fn a_split_that_lacks_a_site_skips_it() {
    let lines = "lines 90 nm W width 32 nm space 32, 96 nm;between SiCOH";
    let steps = "010 etch 9 nm SiCOH by fluorocarbon-rie only at 32, 96 nm;\
                 020 seal 90 nm SiO2 by silane-pecvd";
    let rest = "splits\nother lines width 32 nm space 40, 96 nm\nlimits\nsealed at 32, 40 nm";
    let flow = flow(lines, steps, rest);
    let only = |variant: usize| labels(flow.variants[variant].steps[0].only_at.as_ref().unwrap());
    assert_eq!(only(0), ["32 nm", "96 nm"]);
    assert_eq!(only(1), ["96 nm"]);
    assert_eq!(labels(flow.limits[0].at.as_ref().unwrap()), ["32 nm", "40 nm"]);
}

#[test]
fn limits_with_all_their_clauses() {
    let lines = "lines width 32 nm space 32 nm;layer 60 nm polySi as gate;layer 9 nm SiN";
    let rest = "limits\n\
                coupling-drop>=20% between gate against SiN after 010 at 32nm in 99% of spread\n\
                hermetic after 010\nvoid-top <= -0.001 um\nk-eff <= 2.2 between gate\npeak-temperature <= 673.15 K";
    let flow = flow(lines, STEPS, rest);
    let limit = &flow.limits[0];
    assert_eq!(
        limit.text,
        "coupling-drop >= 20 % at 32 nm between gate against SiN after 010 in 99 % of spread"
    );
    assert_eq!(limit.between.as_deref(), Some("gate"));
    assert_eq!(limit.after, Some(10));
    assert_eq!(limit.in_spread.map(|share| share.fraction()), Some(0.99));
    let drop = Claim::Bound { quantity: Quantity::CouplingDrop, at_most: false, amount: 0.2 };
    assert_eq!(limit.claim, drop);
    let sin = flow.library.material_id("SiN").unwrap();
    assert_eq!(limit.against, Some(Against::Material(sin)));
    assert_eq!(flow.limits[1].claim, Claim::State(State::Hermetic));
    let bounds: Vec<f64> = flow.limits[2..]
        .iter()
        .map(|limit| match limit.claim {
            Claim::Bound { amount, .. } => amount,
            Claim::State(_) => f64::NAN,
        })
        .collect();
    assert_eq!(bounds[..2], [-1.0, 2.2]);
    assert!((bounds[2] - 400.0).abs() < 1e-9);
}

#[test]
fn nets_and_the_next_level() {
    let lines = "lines 90 nm W width 32 nm space 32, 48, 96 nm";
    let rest = "nets\nnext-level 80 nm SiCOH\n\
                bus length 100000 um at 32 nm 12.5 %, 48 nm 12.5, 96 nm 75 % driver 1 kohm load 1 pF";
    let flow = flow(lines, STEPS, rest);
    let net = &flow.nets[0];
    let shares: Vec<f64> = net.at.iter().map(|(_, share)| share.fraction()).collect();
    assert_eq!(shares, [0.125, 0.125, 0.75]);
    assert_eq!((net.driver.nominal.ohm(), net.load.nominal.af()), (1000.0, 1e6));
    assert_eq!(flow.next_level.unwrap().distance.nominal.nm(), 80.0);
}

#[test]
fn a_net_without_at_runs_at_the_only_site() {
    let flow =
        flow(LINES, STEPS, "nets\nbus length 9 um driver 1 ohm load 0 fF\nlimits\ndelay <= 9 ps");
    assert_eq!(flow.nets[0].at[0].0.label(), "32 nm");
    assert_eq!(flow.limits[0].for_net, Some(0));
}

#[test]
fn waivers() {
    let rest = "splits\nthin 010 seal 60 nm SiO2 by silane-pecvd\n\
                waivers\nroof-too-thin at 32 nm in thin on 010 because \"so\"";
    let flow = flow(LINES, STEPS, rest);
    let waiver = &flow.waivers[0];
    assert_eq!((waiver.rule.value.as_str(), waiver.on), ("roof-too-thin", Some(10)));
    assert_eq!((waiver.in_split.as_deref(), waiver.because.as_str()), (Some("thin"), "so"));
}

#[test]
fn roles_and_a_via_with_its_liner() {
    let steps = "010 deposit 3 nm SiCN by ald-carbonitride;020 seal 90 nm SiO2 by silane-pecvd;\
                 030 cap 9 nm SiN by nitride-pecvd;\
                 040 via width 28 ± 1 nm Cu in 3 nm TaN overlay 0 nm overetch 0 nm";
    let flow = flow(LINES, steps, "");
    let steps = &flow.variants[0].steps;
    let roles: Vec<Role> = steps
        .iter()
        .filter_map(|step| match step.action {
            Action::Deposit { role, .. } => Some(role),
            _ => None,
        })
        .collect();
    assert_eq!(roles, [Role::Deposit, Role::Seal, Role::Cap]);
    let Action::Via { width, liner, overlay, .. } = &steps[3].action else { panic!() };
    assert_eq!((nm(*width), overlay.nominal.nm()), ((28.0, 1.0), 0.0));
    assert_eq!(liner.unwrap().0.nominal.nm(), 3.0);
}

#[test]
fn material_and_process_names_may_look_like_anything() {
    // Positions tell names apart from words: a unit, a verb and a clause as materials.
    for name in ["nm", "seal", "by", "width", "lines", "void-top"] {
        let shown = errors(&text(LINES, &format!("010 seal 9 nm {name} by silane-pecvd"), ""));
        assert!(shown.starts_with(&format!("error: no material is called `{name}`")), "{shown}");
    }
}

#[test]
fn nothing_is_resolved_from_a_flow_with_an_error() {
    assert_ne!(errors(&changed("95 ± 5 nm", "95 ± 5")), "");
    assert_ne!(errors(&changed("against no-gap", "against nothing")), "");
}

#[test]
fn sixty_four_sites_and_no_more() {
    let spaces = |count: usize| {
        let list: Vec<String> = (0..count).map(|at| (30 + at).to_string()).collect();
        text(&format!("lines 90 nm W width 32 nm space {} nm", list.join(", ")), STEPS, "")
    };
    assert_eq!(errors(&spaces(64)), "");
    assert!(errors(&spaces(65)).contains("64 sites"));
    let row = "row edge width 26 nm space 26, 60 nm";
    let with_row = spaces(63).replace("nm\nsteps", &format!("nm\n{row}\nsteps"));
    assert!(errors(&with_row).contains("65 spaces"));
    let long = spaces(3) + "limits\nsealed at " + &"30, ".repeat(64) + "30 nm\n";
    assert!(errors(&long).contains("64 items"));
}

#[test]
fn a_hundred_splits_and_no_more() {
    let splits = |count: usize| {
        let list: Vec<String> = (0..count).map(|at| format!("s{at}x 010 skip")).collect();
        text(LINES, STEPS, &format!("splits\n{}", list.join("\n")))
    };
    assert_eq!(errors(&splits(100)), "");
    assert_eq!(errors(&splits(103)).matches("too many splits").count(), 1);
}

#[test]
fn lengths_from_a_hundredth_of_a_nanometre_to_a_hundred_micrometres() {
    let seal = |length: &str| text(LINES, &format!("010 seal {length} SiO2 by silane-pecvd"), "");
    for good in ["0.01 nm", "0.1 A", "100 um", "100000 nm"] {
        assert_eq!(errors(&seal(good)), "", "{good}");
    }
    for bad in ["0.009 nm", "0 nm", "100.1 um"] {
        assert!(errors(&seal(bad)).contains("from 0.01 nm to 100 um"), "{bad}");
    }
}

/// Texts that would cost hours if anything were quadratic in them with a large factor; the
/// test is that it ends.
#[test]
fn large_flows_end() {
    let steps: String = (1..9_000)
        .map(|op| format!("{op} seal 9 nm SiNC by silane-pecvd after {}\n", op + 1))
        .collect();
    let splits: String = (0..100).map(|at| format!("s{at}x {} skip\n", at + 1)).collect();
    let many_steps = text(LINES, &steps, &format!("splits\n{splits}"));
    let many_nets: String =
        (0..9_000).map(|at| format!("n{at} length 1 um driver 1 ohm load 1 fF\n")).collect();
    let many_limits = "sealed at 31, 33, 35 nm\n".repeat(9_000);
    let many_rows: String =
        (0..9_000).map(|at| format!("row r{at} width 9 nm space 9, 9 nm\n")).collect();
    for text in [
        many_steps,
        text(LINES, STEPS, &format!("nets\n{many_nets}")),
        text(LINES, STEPS, &format!("limits\n{many_limits}")),
        text(&format!("{LINES}\n{many_rows}"), STEPS, ""),
        text(&format!("{LINES}{}", ", 32".repeat(200_000)), STEPS, ""),
        text(LINES, &format!("{STEPS} {}", "with sticking 1, ".repeat(60_000)), ""),
        "wafer\n".repeat(9_999),
        "\n".repeat(1_000_000),
        "# a comment\n\n".repeat(80_000),
        "\"".repeat(1_000_000),
    ] {
        assert!(errors(&text).len() < 1 << 26);
        assert!(tidy(&text).len() <= 2 * text.len());
    }
}
