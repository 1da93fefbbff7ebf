//! Typing mistakes, each with the message that a user gets: the example with one place
//! changed. Read the snapshots as the user would.

use super::read::{changed, errors};

/// `name: what stands in the example => what was typed instead;`
macro_rules! mistakes {
    ($($name:ident: $from:literal => $to:literal;)+) => {
        $(
            #[test]
            fn $name() {
                insta::assert_snapshot!(stringify!($name), errors(&changed($from, $to)));
            }
        )+
    };
}

mistakes! {
    // Numbers and units.
    wrong_kind_of_unit: "3 nm SiCN by ald" => "3 min SiCN by ald";
    wrong_capital_in_unit: "3 nm SiCN by ald" => "3 NM SiCN by ald";
    missing_unit: "3 nm SiCN by ald" => "3 SiCN by ald";
    missing_unit_in_list: "space 32 ± 2, 48, 96 nm" => "space 32 nm, 48, 96";
    unit_of_another_kind_in_list: "space 32 ± 2, 48, 96 nm" => "space 32, 48 deg, 96 nm";
    bad_number: "3 nm SiCN by ald" => "3.nm SiCN by ald";
    number_without_leading_digit: "3 nm SiCN by ald" => ".3 nm SiCN by ald";
    decimal_comma: "3 nm SiCN by ald" => "3,5 nm SiCN by ald";
    number_too_large: "3 nm SiCN by ald" => "3e999 nm SiCN by ald";
    negative_thickness: "3 nm SiCN by ald" => "-3 nm SiCN by ald";
    typographic_minus: "3 nm SiCN by ald" => "−3 nm SiCN by ald";
    thickness_out_of_range: "3 nm SiCN by ald" => "300 um SiCN by ald";
    tolerance_of_another_kind: "95 ± 5 nm" => "95 nm ± 5 C";
    tolerance_of_more_than_all: "95 ± 5 nm" => "95 nm ± 120 %";
    tolerance_without_number: "95 ± 5 nm" => "95 ± nm";
    taper_without_unit: "taper 2 deg" => "taper 2";
    taper_too_steep: "taper 2 deg" => "taper 60 deg";

    // Names.
    unknown_material: "3 nm SiCN by ald" => "3 nm SiNC by ald";
    unknown_material_unlike_any: "3 nm SiCN by ald" => "3 nm unobtainium by ald";
    material_in_quotes: "3 nm SiCN by ald" => "3 nm \"SiCN\" by ald";
    material_beyond_ascii: "3 nm SiCN by ald" => "3 nm Übergangsoxid by ald";
    unknown_process: "by silane-pecvd\n  040" => "by silan-pecvd\n  040";
    process_of_another_verb: "by silane-pecvd\n  040" => "by fluorocarbon-rie\n  040";
    process_of_another_material: "by silane-pecvd\n  040" => "by nitride-pecvd\n  040";
    unknown_number_of_process: "by silane-pecvd\n  040" => "by silane-pecvd with stickiness 0.3\n  040";
    number_of_process_out_of_bounds: "by silane-pecvd\n  040" => "by silane-pecvd with sticking 1.5\n  040";
    number_of_process_in_wrong_unit: "by silane-pecvd\n  040" => "by silane-pecvd with temperature 380\n  040";
    shares_of_process_above_one: "by silane-pecvd\n  040" => "by silane-pecvd with conformal 60 %, directional 50 %\n  040";
    reserved_name: "thin     030 seal" => "seal     030 seal";
    reserved_unit: "thin     030 seal" => "nm       030 seal";
    quantity_as_name: "bus      length" => "delay    length";

    // Statements.
    misspelt_verb: "020  deposit" => "020  depsoit";
    unknown_verb: "020  deposit" => "020  implant";
    missing_by: "3 nm SiCN by ald-carbonitride" => "3 nm SiCN";
    missing_process: "3 nm SiCN by ald-carbonitride" => "3 nm SiCN by";
    misspelt_clause: "overetch 5 nm" => "overtech 5 nm";
    missing_clause: "overlay 6 nm" => "";
    clause_twice: "overlay 6 nm" => "overlay 6 nm  overlay 4 nm";
    surplus_word: "040  polish   to 70 ± 6 nm above lines" => "040  polish   to 70 ± 6 nm above the lines";
    missing_operation_number: "020  deposit" => "deposit";
    operation_number_too_long: "020  deposit" => "0000020  deposit";
    unclosed_string: "\"Copper lines sealed with a lean oxide\"" => "\"Copper lines sealed";
    title_without_quotes: "\"Copper lines sealed with a lean oxide\"" => "Copper";
    only_at_on_a_deposit: "SiCN by ald-carbonitride" => "SiCN by ald-carbonitride only at 32 nm";
    note_without_quotes: "SiCN by ald-carbonitride" => "SiCN by ald-carbonitride thin but dense";
    negative_height: "to 70 ± 6 nm above lines" => "to -5 nm above lines";
    unknown_place: "above lines" => "above line";
    unknown_wafer_statement: "liner    2 nm" => "linear   2 nm";
    backslash_within_a_line: "liner    2 nm TaN" => "liner \\ 2 nm TaN";

    // Sections and the file.
    wafer_statement_among_steps: "020  deposit" => "film 5 nm SiCN\n  020  deposit";
    step_among_limits: "  solid at 96 nm" => "  080 clean by wet-clean\n  solid at 96 nm";
    misspelt_section: "\nsteps\n" => "\nstep\n";
    section_with_colon: "\nsteps\n" => "\nsteps:\n";
    section_in_capitals: "\nlimits\n" => "\nLIMITS\n";
    forgotten_section_word: "\nsteps\n" => "\n";
    repeated_section: "\nsplits\n" => "\nsteps\n  080 clean by wet-clean\nsplits\n";
    use_after_flow: "\nwafer " => "\nuse \"our.yaml\"\nwafer ";
    second_flow: "\nnets\n" => "\nflow another\nnets\n";

    // What does not fit together.
    repeated_operation_number: "040  polish" => "030  polish";
    plane_that_insulates: "60 nm Cu" => "60 nm SiCOH";
    film_above_the_lines: "  liner    2 nm TaN" => "  film     5 nm SiCN\n  liner    2 nm TaN";
    lines_that_meet: "taper 2 deg" => "taper 12 deg";
    pitch_without_space: "space 32 ± 2, 48, 96 nm" => "pitch 30, 64 nm";
    liner_without_core: "liner    2 nm TaN" => "liner    16 nm TaN";
    too_few_row_spaces: "  liner" => "  row edge width 26, 26 nm space 26, 60 nm\n  liner";
    no_such_space: "sealed at 32, 48 nm" => "sealed at 32, 40 nm";
    no_such_row: "sealed at 32, 48 nm" => "sealed at edge:1";
    several_missing_spaces: "only at 32, 48 nm" => "only at 31, 49 nm";
    unknown_split_step: "020 skip" => "025 skip";
    split_without_number: "no-liner 020 skip" => "no-liner skip";
    split_of_a_repeated_word: "thin     030 seal 80 nm SiO2 by silane-pecvd" => "thin film 30 nm SiCOH";
    unknown_split_in_limit: "against no-gap" => "against no-gapp";
    shares_of_a_net: "96 nm 30 %" => "96 nm 20 %";
    share_of_a_net_above_all: "96 nm 30 %" => "96 nm 130 %";
    net_without_driver: "driver 1 kohm" => "";
    unknown_net: "for bus" => "for buss";
    unknown_quantity: "void-share >= 40 %" => "void_share >= 40 %";
    misspelt_quantity: "void-share >= 40 %" => "void-shar >= 40 %";
    comparison_without_equals: "void-share >= 40 %" => "void-share > 40 %";
    limit_without_comparison: "void-share >= 40 %" => "void-share 40 %";
    limit_in_wrong_unit: "void-share >= 40 %" => "void-share >= 40 nm";
    limit_with_tolerance: "void-share >= 40 %" => "void-share >= 40 ± 2 %";
    limit_for_a_net_on_a_space: "void-share >= 40 % at 32 nm" => "void-share >= 40 % for bus";
    spread_above_all: "in 99 % of spread" => "in 990 % of spread";
    after_unknown_step: "polish-margin >= 10 nm" => "polish-margin >= 10 nm after 045";
    waiver_without_reason: "\nlimits\n" => "\nwaivers\n  roof-too-thin on 050\nlimits\n";
}

/// `name: text;`
macro_rules! texts {
    ($($name:ident: $text:expr;)+) => {
        $(
            #[test]
            fn $name() {
                insta::assert_snapshot!(stringify!($name), errors($text.as_ref()));
            }
        )+
    };
}

const SMALL: &str = "\
flow small
wafer
  lines 60 nm Cu width 30 nm space 30 | 40, 50 nm
    # the stack
steps
  010 seal 80 nm SiO2 by silane-pecvd
";

texts! {
    empty_file: "";
    only_comments: "# nothing yet\n\n# but soon\n";
    not_a_flow: "Dear all,\n\nplease find attached.\n";
    no_flow_statement: "wafer\n  lines 60 nm Cu width 30 nm space 30 nm\nsteps\n  010 clean by wet-clean\n";
    missing_sections: "flow small\n";
    no_lines: "flow small\nwafer\n  plane 60 nm Cu\nsteps\n  010 clean by wet-clean\n";
    lines_without_material: "flow small\nwafer\n  lines width 30 nm space 30 nm\nsteps\n  010 clean by wet-clean\n";
    tabs_and_crlf: "flow small\r\nwafer\r\n\tlines\t60 nm Cu\twidth 30 nm\tspace 30 nm\r\nsteps\r\n\t010\tseal\t80 nn SiO2\tby silane-pecvd\r\n";
    columns_count_characters: "flow small\nwafer\n  lines 60 nm Cu width 30 ± 2 nm  µ space 30 nm\nsteps\n  010 clean by wet-clean\n";
    control_characters: "flow small\u{0}\u{1}\nwafer\n";
    over_long_file: "# a long file\n".repeat(80_000);
    too_many_statements: "flow small\nwafer\n  lines 60 nm Cu width 30 nm space 30 nm\nsteps\n".to_owned() + &(1..9_998).map(|op| format!("  {op} clean by wet-clean\n")).collect::<String>();
    half_of_a_pair: SMALL.to_owned() + "limits\n  sealed at 30 nm\n  sealed at 30 | 40 nm\n  sealed at 40 | 30 nm\n";
    name_of_split_and_material: SMALL.to_owned() + "splits\n  SiCOH 010 skip\nlimits\n  coupling-drop >= 20 % against SiCOH\n";
    between_without_named_layers: SMALL.to_owned() + "limits\n  coupling <= 40 aF/um between gate\n";
    net_without_place: SMALL.to_owned() + "nets\n  bus length 1 mm driver 1 kohm load 1 fF\n  bit length 1000 um driver 1 kohm load 1 fF\n";
    delay_without_net: SMALL.to_owned() + "limits\n  delay <= 60 ps\n";
    several_mistakes: "flow small\nwafer\n  lines 60 nm Co width 30 nm space 30\nsteps\n  010 seel 80 nm SiO2 by silane-pecvd\n  020 polish to 30 nm over lines\n  030 cap 20 nm SiN\nlimits\n  sealed at 30 nm after 010\n  roof => 10 nm\n";
    continued_line: "flow small\nwafer\n  lines 60 nm Cu \\\n    width 30 nm \\\n    spacing 30 nm\nsteps\n  010 clean by wet-clean\n";
    comment_ends_a_continued_line: "flow small\nwafer\n  lines 60 nm Cu \\ # core\n    width 30 nm space 30 nm\nsteps\n  010 clean by wet-clean\n";
    etch_of_what_it_does_not_attack: SMALL.to_owned() + "  020 etch 5 nm SiCN by dilute-hf\n";
    split_breaks_a_place: "flow small\nwafer\n  lines width 30 nm space 30 nm\n    layer 60 nm polySi as gate\nsteps\n  010 polish to 5 nm below gate\nsplits\n  solid-line lines 60 nm W width 30 nm space 30 nm\n";
}
