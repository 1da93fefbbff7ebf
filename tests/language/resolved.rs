//! What a text resolves to.

use super::read::{EXAMPLE, resolved};

#[test]
fn the_example_resolves() {
    let (flow, notes) = resolved(EXAMPLE);
    assert_eq!(notes.len(), 1);
    assert_eq!(flow.variants.len(), 4);
}
