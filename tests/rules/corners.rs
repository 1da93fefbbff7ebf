//! `check --corners` as a user runs it.

use assert_cmd::Command;

const FLOW: &str = r#"flow corners

wafer
  plane    50 nm W
  film     20 nm SiCN
  film     60 nm SiCOH
  lines    80 nm W  width 40 nm  space 40 ± 1 nm
  between  SiCOH

steps
  010  etch     70 nm SiCOH by fluorocarbon-rie
  020  deposit  3 nm SiN by ald-nitride
  030  seal     90 ± 60 nm SiO2 by silane-pecvd
  040  polish   to 60 ± 20 nm above lines
  050  cap      20 nm SiN by nitride-pecvd

limits
  sealed after 030
  roof >= 25 nm

waivers
  corner-fails on 040 because "the lot is held at the polish"
"#;

fn check(arguments: &[&str]) -> (i32, String) {
    let mut command = Command::cargo_bin("gapwright").unwrap();
    let run = command.args(["check", "--accuracy", "10 %"]).args(arguments).arg("-");
    let run = run.write_stdin(FLOW).output().unwrap();
    let text = String::from_utf8(run.stdout).unwrap();
    let findings = text.split("  findings\n").nth(1).unwrap_or_default();
    let findings = findings.split("\n  cautions").next().unwrap_or_default();
    (run.status.code().unwrap(), findings.to_owned())
}

#[test]
fn what_holds_at_nominal_values_breaks_at_their_corners() {
    let (status, findings) = check(&["--corners"]);
    assert_eq!(status, 0, "{findings}");
    for told in [
        "warning  corner-fails on 030 at 40 nm",
        "space-not-sealed at 030 seal thickness − 60 nm: the seal does not close the space",
        "polish-opens-void at 040 polish height − 20 nm: the plane passes",
        "waived: the lot is held at the polish",
        "% of it 030 seal thickness ± 60 nm",
        "`sealed after 030` breaks at 030 seal thickness − 60 nm\n",
    ] {
        assert!(findings.contains(told), "{told}:\n{findings}");
    }
    assert_eq!(check(&["--corners", "--deny", "warnings"]).0, 1);
}

#[test]
fn without_corners_nothing_is_said_of_them_and_no_waiver_is_stale() {
    let (status, findings) = check(&[]);
    assert_eq!((status, findings.contains("corner-fails")), (0, false), "{findings}");
    assert!(!findings.contains("stale-waiver"), "{findings}");
}
