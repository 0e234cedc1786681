//! `gainsay devices`.

use crate::{PLAIN, gainsay};
use gainsay::check::catalogue;
use gainsay::device::Standing;
use gainsay::report::{device_text, devices_text};

const OWN: &str = "\
- device: OPX21
  aliases: [OPX22, OPX23, OPX24, \"OPX21A*\"]
  technology: jfet
  sections: 2
  source: maker's document, revision A
  notes: [\"a trap \\e[31m\"]
  parameters:
    open-loop-gain: { min: 106 dB, typ: 120 dB }
    bias-current:
      - { typ: 30 pA, max: 65 pA, at: { temperature: 25 degC .. 25 degC } }
      - { max: 2 nA, at: { temperature: 0 degC .. 70 degC }, source: memory }
    swing-below-positive: { typ: 1 V, at: { load: 2 kohm, load-to: middle, supply: 30 V } }
    swing-above-negative: { max: 1 V, at: { sinking: 5 mA } }
    slew-rate: 13 V/us
    minimum-stable-gain: { typ: 1, source: assumed }
";

/// Runs the command with profiles of one's own.
fn with_own(words: &[&str]) -> (i32, String, String) {
    let folder = tempfile::tempdir().expect("a temporary folder can be made");
    let path = folder.path().join("own.yaml");
    std::fs::write(&path, OWN).expect("the folder can be written to");
    let path = path.to_str().expect("a plain path");
    gainsay(&[&["devices", "--devices", path][..], words].concat())
}

#[test]
fn a_profile_of_ones_own_in_full() {
    let (status, printed, complaint) = with_own(&["opx21a/9"]);
    assert_eq!((status, complaint.as_str()), (0, ""));
    insta::assert_snapshot!(printed);
}

#[test]
fn an_embedded_profile_in_full() {
    let catalogue = catalogue();
    let at = catalogue.named("OP07C").expect("the profile is embedded");
    insta::assert_snapshot!(device_text(&catalogue.profiles[at], "OP07C", PLAIN));
}

#[test]
fn ones_own_stand_in_the_table() {
    let (status, printed, _) = with_own(&[]);
    assert_eq!(status, 0);
    let line = printed.lines().find(|line| line.starts_with("OPX21 ")).expect("the profile is listed");
    let words: Vec<&str> = line.split_whitespace().collect();
    assert_eq!(words[..8], ["OPX21", "jfet", "2", "OPX22,", "OPX23", "and", "2", "more"]);
    assert_eq!(words[8..], ["3", "2", "1", "1"]);
}

#[test]
fn the_table_counts_every_entry_of_every_profile() {
    let catalogue = catalogue();
    let table = devices_text(&catalogue.profiles, PLAIN);
    for profile in &catalogue.profiles {
        let line = table.lines().find(|line| line.split_whitespace().next() == Some(profile.name.as_str()));
        let line = line.unwrap_or_else(|| panic!("{} is not listed", profile.name));
        let columns = if profile.generic { 1 } else { 4 };
        let counts = line.split_whitespace().rev().take(columns).map(|word| word.parse().unwrap_or(0usize));
        assert_eq!(counts.sum::<usize>(), profile.entries.iter().flatten().count(), "{line}");
    }
}

#[test]
fn all_figures_of_a_class_are_assumed() {
    let catalogue = catalogue();
    for name in ["generic-bipolar", "generic-jfet", "generic-cmos"] {
        let profile = &catalogue.profiles[catalogue.named(name).expect("the class is embedded")];
        let entries = || profile.entries.iter().flatten();
        assert!(10 < entries().count(), "{name}");
        assert!(entries().all(|entry| profile.standing(entry) == Standing::Assumed), "{name}");
    }
}

#[test]
fn an_unknown_name_fails_with_the_nearest() {
    let (status, printed, complaint) = gainsay(&["devices", "TL0B1"]);
    assert_eq!((status, printed.as_str()), (2, ""));
    assert!(
        complaint.starts_with("gainsay: no profile is named `TL0B1`; the nearest is `TL0"),
        "{complaint}"
    );
}
