//! The standard layout keeps what is said and settles how it looks.

use gapwright::source::Source;
use gapwright::syntax::{parse, tidy};

const EXAMPLE: &str = include_str!("dense-copper-gap.flow");

#[test]
fn the_example_is_read_without_a_message() {
    let (_, messages) = parse(&Source::new("example.flow", EXAMPLE));
    assert_eq!(messages, []);
}

#[test]
fn the_layout_of_the_layout_is_the_layout() {
    let once = tidy(EXAMPLE);
    assert_eq!(tidy(&once), once);
}
