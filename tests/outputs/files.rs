//! Files as the command leaves them.

use std::fs;
use std::os::unix::fs::PermissionsExt;
use std::process::Command;

/// Runs `gapwright check --schema --output FILE` under a mask.
fn write_under(mask: &str, file: &std::path::Path) {
    let gapwright = env!("CARGO_BIN_EXE_gapwright");
    let script =
        format!("umask {mask}; exec '{gapwright}' check --schema --output '{}'", file.display());
    assert!(Command::new("sh").args(["-c", &script]).status().unwrap().success());
}

fn mode(file: &std::path::Path) -> u32 {
    file.metadata().unwrap().permissions().mode() & 0o777
}

#[test]
fn a_new_file_has_the_permissions_that_the_mask_leaves() {
    let folder = tempfile::tempdir().unwrap();
    for (mask, wanted) in [("022", 0o644), ("027", 0o640), ("002", 0o664)] {
        let file = folder.path().join(mask);
        write_under(mask, &file);
        assert_eq!(mode(&file), wanted, "umask {mask}");
    }
}

#[test]
fn a_file_that_is_replaced_keeps_its_own() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("schema.json");
    fs::write(&file, "old").unwrap();
    fs::set_permissions(&file, fs::Permissions::from_mode(0o604)).unwrap();
    write_under("022", &file);
    assert_eq!(mode(&file), 0o604);
    assert!(fs::read_to_string(&file).unwrap().starts_with('{'));
}
