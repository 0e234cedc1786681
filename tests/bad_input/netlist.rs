//! Lines that can't be right: each is a finding at its place, and the rest of the board is checked.

use crate::bad_input::bench::{Bench, RAILS, SOUND, board};

#[test]
fn missing_nodes() {
    let outcome = Bench::new(board("R7 a\nR8\nXU9\n")).check();
    outcome.is(
        1,
        &[
            "error missing-node board.cir:8:1",
            "error missing-node board.cir:9:1",
            "error missing-node board.cir:10:1",
        ],
    );
    outcome.covers(1, 1, 0).sound();
}

#[test]
fn unknown_elements() {
    let outcome = Bench::new(board("$1 a b c\n1X a b 3\n%foo bar\n")).check();
    let places = [
        "warning unknown-element board.cir:8:1",
        "warning unknown-element board.cir:9:1",
        "warning unknown-element board.cir:10:1",
    ];
    outcome.is(0, &places).covers(1, 1, 0).sound();
}

#[test]
fn duplicate_designators() {
    let outcome = Bench::new(board("R9 in 0 1k\nr9 in 0 10k\n")).check();
    outcome.is(1, &["error duplicate-designator board.cir:9:1"]).sound();
    assert_eq!(outcome.board["findings"][0]["spans"][1]["line"], 8);
}

#[test]
fn unbalanced_definitions() {
    Bench::new(board(".subckt foo a b\nR1 a b 1k\n"))
        .check()
        .is(1, &["error unbalanced-subckt board.cir:8:9"])
        .sound();
    let early = format!("{RAILS}.ends\n{SOUND}");
    Bench::new(early).check().is(1, &["error unbalanced-subckt board.cir:4:1"]).sound();
}

#[test]
fn unknown_directives() {
    Bench::new(board(".frobnicate all\n"))
        .check()
        .is(0, &["warning unknown-directive board.cir:8:1"])
        .sound();
}

#[test]
fn calls_that_nothing_defines() {
    let outcome = Bench::new(board("X7 out a SENSOR\nX8 a b sensor\n")).check();
    outcome.is(0, &[]).has("note unknown-subcircuit board.cir:8:1").covers(1, 1, 0).sound();
    let spans = outcome.board["findings"]
        .as_array()
        .expect("findings")
        .iter()
        .find(|finding| finding["rule"] == "unknown-subcircuit");
    assert_eq!(spans.map(|finding| finding["spans"].as_array().map(Vec::len)), Some(Some(2)));
}

#[test]
fn packages_that_nothing_knows_are_no_note() {
    let outcome = Bench::new(board("X7 a b c vee d e f vcc QUADTHING\n")).check();
    outcome.is(0, &["warning unknown-subcircuit board.cir:8:1"]).sound();
}

#[test]
fn unknown_op_amps_are_counted_and_skipped() {
    let outcome = Bench::new(board("XU2 out n2 vcc vee o2 OPX99\nR3 n2 0 1k\nR4 o2 n2 1k\n")).check();
    outcome.is(0, &["warning unknown-device board.cir:8:1"]).covers(2, 1, 0).sound();
    outcome.skips("XU2", "unknown device OPX99 (XU2)");
    let stage = &outcome.board["stages"][1];
    assert_eq!(stage["id"], "XU2");
    assert!(stage["transfers"][0]["ideal"].as_f64().is_some_and(|gain| (gain - 2.0).abs() <= 1e-9));
    assert!(stage["transfers"][0]["actual"].is_null());
}

#[test]
fn op_amps_that_only_their_definition_tells() {
    let body = ".subckt OPX99 inp inn vcc vee vo\nQ1 vo inp inn NPN\nQ2 vcc vo vee PNP\n.ends\n";
    let outcome = Bench::new(board(&format!("XU2 o2 out vcc vee o2 OPX99\n{body}"))).check();
    outcome.is(0, &["warning unknown-device board.cir:8:1"]).covers(2, 1, 0).sound();
}

#[test]
fn calls_with_pins_that_do_not_fit() {
    let outcome = Bench::new(board("XU2 a b c d OP07C\nXU3 a b OP07C\n")).check();
    outcome.is(1, &["error pin-map board.cir:8:1", "error pin-map board.cir:9:1"]).covers(3, 1, 0).sound();
    outcome.skips("XU2", "it is called with 4 nodes, the pin order of OP07C has 5");
    outcome.skips("XU3", "it is called with 2 nodes, the pin order of OP07C has 5");
}

#[test]
fn calls_with_another_count_of_ports() {
    let definition = ".subckt pad a b\nR1 a b 1k\n.ends\n";
    let outcome = Bench::new(board(&format!("X7 in 0 x pad\n{definition}"))).check();
    outcome.is(1, &["error pin-count board.cir:8:1"]).covers(1, 1, 0).sound();
}
