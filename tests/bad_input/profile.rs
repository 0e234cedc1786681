//! Profiles and rule packs of the user's own that can't be meant.

use crate::bad_input::bench::{Bench, Outcome, board};

/// A second stage with a device of the user's own, called in line 8.
fn with(devices: &str) -> Outcome {
    let netlist = board("XU2 in a vcc vee o MYAMP\nR3 o a 10k\nR4 a 0 1k\n");
    let outcome = Bench::new(netlist).file("own.yaml", devices).arguments(&["--devices", "own.yaml"]).check();
    outcome.sound();
    outcome
}

fn profile(parameters: &str) -> String {
    format!(
        "- device: MYAMP\n  technology: bipolar\n  sections: 1\n  pins: [non-inverting, inverting, positive-supply, negative-supply, output]\n  source: memory\n  parameters:\n    {parameters}\n"
    )
}

#[test]
fn a_sound_profile_serves() {
    with(&profile("open-loop-gain: { min: 100 dB, typ: 110 dB }")).is(0, &[]).covers(2, 2, 0);
}

#[test]
fn a_profile_without_open_loop_gain() {
    let outcome = with(&profile("gain-bandwidth: 1 MHz"));
    outcome.is(0, &["warning not-analysed board.cir:8:1"]).covers(2, 1, 0);
    outcome.skips("XU2", "the profile of XU2 gives no open-loop gain");
}

#[test]
fn unknown_parameters_and_units() {
    let outcome = with(&profile("open-loop-gian: 100 dB"));
    assert_eq!(outcome.status, 2);
    outcome.has("error unknown-key own.yaml:7:5");
    let outcome = with(&profile("open-loop-gain: 100 dB\n    bias-current: 3 mV"));
    assert_eq!(outcome.status, 2);
    outcome.has("error bad-value own.yaml:8:19").covers(2, 2, 0);
}

#[test]
fn profiles_that_cannot_be_read() {
    let bench = Bench::new(board("")).arguments(&["--devices", "gone.yaml"]);
    bench.check().is(2, &["error unreadable-file gone.yaml:1:1"]).sound();
    let bench = Bench::new(board("")).file("folder/readme.txt", "").arguments(&["--devices", "folder"]);
    bench.check().is(2, &["error unreadable-file folder:1:1"]).sound();
}

#[test]
fn rule_packs() {
    let pack = "- figure: gian-error\n  limit: 1 %\n  severity: error\n  reason: r\n  source: s\n";
    let bench = Bench::new(board("")).file("own.yaml", pack).arguments(&["--rules", "own.yaml"]);
    bench.check().is(2, &["error bad-name own.yaml:1:11"]).sound();
    let bench = Bench::new(board("")).arguments(&["--rules", "gone.yaml"]);
    bench.check().is(2, &["error unreadable-file gone.yaml:1:1"]).sound();
}
