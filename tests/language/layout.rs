//! The standard layout keeps what is said and settles how it looks; no text makes the reader
//! fail, and none is lost.

use std::fs;
use std::path::{Path, PathBuf};

use gapwright::source::Source;
use gapwright::syntax::{Content, Tree, parse, tidy};
use proptest::prelude::*;

use super::read::{EXAMPLE, errors};

fn read(text: &str) -> Tree {
    parse(&Source::new("test.flow", text)).0
}

/// What a tree says, places left out.
fn said(tree: &Tree) -> String {
    let lines = tree.lines.iter().map(|line| &line.content);
    let lines = lines.filter(|content| !matches!(content, Content::Blank));
    let mut out = String::new();
    let mut rest = format!("{:#?}", lines.collect::<Vec<_>>());
    while let Some(at) = rest.find("Span {") {
        out.push_str(&rest[..at]);
        let end = at + rest[at..].find('}').unwrap_or(0);
        rest = rest[end..].to_owned();
    }
    out + &rest
}

/// The comments of a text, in order.
fn comments(text: &str) -> Vec<String> {
    let tree = read(text);
    let comments = tree.lines.iter().filter_map(|line| line.comment);
    comments.map(|span| text[span.start..span.end].to_owned()).collect()
}

/// Puts a text together again from the places in its tree.
fn rebuilt(text: &str) -> String {
    let tree = read(text);
    let mut out = String::new();
    let mut at = 0;
    for line in &tree.lines {
        let tokens = line.tokens.iter().map(|token| token.span);
        for span in tokens.chain(line.comment) {
            let between = &text[at..span.start];
            let blank = |c: char| c.is_whitespace() || c == '\\' || c == '\u{feff}';
            assert!(between.chars().all(blank), "{between:?} is in no token");
            out.push_str(between);
            out.push_str(&text[span.start..span.end]);
            at = span.end;
        }
    }
    out + &text[at..]
}

fn flows(folder: &Path) -> Vec<PathBuf> {
    let mut found = vec![];
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(flows(&path));
        } else if path.extension().is_some_and(|end| end == "flow") {
            found.push(path);
        }
    }
    found.sort();
    found
}

fn check_layout(text: &str) {
    let once = tidy(text);
    assert_eq!(tidy(&once), once, "laid out twice");
    assert_eq!(said(&read(&once)), said(&read(text)), "says something else");
    assert_eq!(comments(&once), comments(text), "comments");
}

#[test]
fn every_flow_keeps_its_words_and_settles() {
    let all = flows(&Path::new(env!("CARGO_MANIFEST_DIR")).join("flows"));
    assert!(!all.is_empty());
    for path in all {
        let text = fs::read_to_string(&path).unwrap();
        assert_eq!(rebuilt(&text), text, "{}", path.display());
        check_layout(&text);
    }
}

#[test]
fn the_example_is_read_without_a_message() {
    let (_, messages) = parse(&Source::new("example.flow", EXAMPLE));
    assert_eq!(messages, []);
}

#[test]
fn the_example_laid_out() {
    insta::assert_snapshot!(tidy(EXAMPLE));
}

/// A file as it grows in use: nothing aligned, clauses in any order, comments everywhere.
const GROWN: &str = "\u{feff}# Owner: integration
use \"our.yaml\"   # measured last year
flow  grown   \"Grown \\\"by hand\\\"\"


# The wafer as it comes.

# Two kinds of spaces.
wafer # bottom to top
plane 60nm Cu
\tlines taper 2deg space 32+-2 ,48, 30|34 nm width 32nm   # the dense ones first
layer 92 nm Cu   as core # kept as measured
      layer 4nm Co

  # between the lines
  between SiCOH to 5 nm below lines
# steps follow
steps # in order

010 etch 90 nm SiCOH by fluorocarbon-rie only at 32,48 nm
020 deposit 3e0 nm SiCN by ald-carbonitride before 030 after 010 \"thin, but dense\"


030 seal 95 nm ± 5% SiO2 with sticking 0.30, directional 10% by silane-pecvd
  040 polish to to the top
050 via overlay 6nm width 28 nm Cu in 3 nm TaN by via-fill overetch 5nm only at 30|34nm # lands
  # nothing after this

splits
thin 030 seal 80 nm SiO2 by silane-pecvd
wide   lines width 40 nm space 32, 48, 40 nm
limits
void-top<=35 nm in 99% of spread at 32 nm
sealed
row-of-long-words
# the end
";

#[test]
fn a_grown_file_laid_out() {
    insta::assert_snapshot!(tidy(GROWN));
    let once = tidy(GROWN);
    assert_eq!(tidy(&once), once);
    assert_eq!(comments(&once), comments(GROWN));
}

#[test]
fn a_long_statement_goes_on_in_the_next_line() {
    let spaces = vec!["26"; 40].join(", ");
    let widths = vec!["26"; 39].join(", ");
    let text = format!("flow long\nwafer\n  row edge space {spaces} nm width {widths} nm # edge\n");
    insta::assert_snapshot!(tidy(&text));
    check_layout(&text);
}

#[test]
fn tabs_crlf_and_byte_order_mark_are_read() {
    let plain = "flow small\nwafer\n  lines 60 nm Cu width 30 nm space 30 nm # all\n";
    let text = format!("\u{feff}{}", plain.replace('\n', "\r\n").replace("  ", "\t"));
    assert_eq!(said(&read(&text)), said(&read(plain)));
    assert_eq!(tidy(&text), tidy(plain));
    assert_eq!(rebuilt(&text), text);
}

#[test]
fn a_continued_line_is_one_statement() {
    let text = "flow small\nwafer\n  lines 60 nm Cu \\\n    width 30 nm \\   \r\n  space 30 nm\n";
    let plain = "flow small\nwafer\n  lines 60 nm Cu width 30 nm space 30 nm\n";
    assert_eq!(said(&read(text)), said(&read(plain)));
    assert_eq!(tidy(text), tidy(plain));
}

/// Words and signs of the language, and some that are none.
fn pieces() -> impl Strategy<Value = &'static str> {
    let known = [
        "flow",
        "use",
        "wafer",
        "steps",
        "splits",
        "nets",
        "limits",
        "waivers",
        "lines",
        "layer",
        "row",
        "film",
        "between",
        "liner",
        "width",
        "space",
        "pitch",
        "taper",
        "as",
        "to",
        "above",
        "below",
        "floor",
        "by",
        "with",
        "until",
        "in",
        "only",
        "at",
        "after",
        "before",
        "deposit",
        "seal",
        "etch",
        "polish",
        "via",
        "mask",
        "over",
        "release",
        "anneal",
        "for",
        "skip",
        "length",
        "driver",
        "load",
        "next-level",
        "sealed",
        "void-top",
        "delay",
        "against",
        "of",
        "spread",
        "on",
        "because",
        "Cu",
        "SiCN",
        "silane-pecvd",
        "gate",
        "edge",
        "nm",
        "um",
        "µm",
        "deg",
        "C",
        "min",
        "%",
        "kohm",
        "fF",
        "ps",
        "010",
        "020",
        "32",
        "0.5",
        "-3",
        "1e3",
        "±",
        "+-",
        ",",
        "|",
        ":",
        "<=",
        ">=",
        "\"a note\"",
        "\"",
        "\\",
        "#",
        "# a comment",
        "\n",
        "\r\n",
        "\t",
        " ",
        "  ",
        "\n\n",
        "\\\n",
        ";",
        "é",
        "\u{feff}",
        "\u{0}",
        "🦀",
    ];
    proptest::sample::select(known.to_vec())
}

/// Statements that can be read, in a section of theirs or not.
fn statements() -> impl Strategy<Value = &'static str> {
    proptest::sample::select(vec![
        "flow f \"t\"",
        "use \"a.yaml\"",
        "wafer",
        "steps",
        "splits",
        "nets",
        "limits",
        "waivers",
        "plane 60 nm Cu",
        "lines space 32+-2, 48 nm width 30nm",
        "layer 9 nm Cu as gate",
        "row edge space 1,2 nm width 3nm",
        "between SiCOH to 3 nm above gate",
        "010 etch 9 nm SiCOH by rie only at 32, 48 nm before 20 after 30 \"n\"",
        "020 seal 9 ± 1 nm SiO2 with sticking 0.3 by pecvd",
        "030 polish until Cu",
        "040 via overlay 1 nm width 9 nm Cu",
        "thin 020 skip",
        "thin 020 seal 8 nm SiO2 by pecvd",
        "wide lines width 40 nm space 32 nm",
        "bus load 1 fF driver 1 kohm length 1 um",
        "sealed",
        "delay <= 6 ps for bus",
        "void-top <= 3 nm in 99 % of spread at 32 nm",
        "too-thin because \"so\" on 010",
        "# a comment",
        "    # indented",
        "",
        "",
        "  sealed # c",
        "steps # s",
        "broken \u{a7} line  ",
        "lines 90 nm W width 32 nm space 32, 48 nm",
        "030 seal 9 nm SiO2 by silane-pecvd",
        "thin 030 seal 8 nm SiO2 by silane-pecvd",
        "wide lines width 40 nm space 32 nm",
        "sealed at 32, 48 nm after 030",
        "coupling-drop >= 3 % against thin",
        "010 etch 9 nm SiCOH by rie # etched",
    ])
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn any_text_is_read_and_kept(text in any::<String>()) {
        prop_assert_eq!(rebuilt(&text), text.clone());
        let once = tidy(&text);
        prop_assert_eq!(tidy(&once), once);
    }

    #[test]
    fn any_words_are_read_and_kept(words in prop::collection::vec(pieces(), 0..80)) {
        let text = words.join(" ");
        prop_assert_eq!(rebuilt(&text), text.clone());
        let once = tidy(&text);
        prop_assert_eq!(tidy(&once), once.clone());
        prop_assert_eq!(said(&read(&once)), said(&read(&text)));
    }

    #[test]
    fn any_words_without_blanks_are_read_and_kept(words in prop::collection::vec(pieces(), 0..80)) {
        let text = words.concat();
        prop_assert_eq!(rebuilt(&text), text.clone());
        let once = tidy(&text);
        prop_assert_eq!(tidy(&once), once);
    }

    #[test]
    fn any_statements_resolve_or_say_why(lines in prop::collection::vec(statements(), 0..40)) {
        let text = format!("flow f\nwafer\n{}", lines.join("\n"));
        let shown = errors(&text);
        prop_assert!(shown.is_empty() || shown.starts_with("error: "), "{}", shown);
    }

    #[test]
    fn any_words_resolve_or_say_why(words in prop::collection::vec(pieces(), 0..80)) {
        let shown = errors(&words.join(" "));
        prop_assert!(shown.is_empty() || shown.starts_with("error: "), "{}", shown);
    }

    #[test]
    fn any_statements_settle(lines in prop::collection::vec(statements(), 0..40)) {
        check_layout(&lines.join("\n"));
    }
}
