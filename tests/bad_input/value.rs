//! Values that are missing, can't be read, or aren't physical.

use crate::bad_input::bench::{Bench, Outcome, board};

/// A second stage whose feedback resistor stands in line 10 with the given value.
fn with(value: &str) -> Outcome {
    let stage = "XU2 in2 n2 vcc vee out2 OP07C\nR3 n2 0 1k\n";
    let outcome = Bench::new(board(&format!("{stage}R4 out2 n2 {value}\nV2 in2 0 SIN(0 0.1 1k)\n"))).check();
    outcome.sound();
    outcome
}

/// Asserts an error in line 10 and that the second stage is skipped for it.
#[track_caller]
fn skipped(value: &str, fault: &str) {
    let outcome = with(value);
    outcome.is(1, &[&format!("error {fault}"), "warning not-analysed board.cir:8:1"]).covers(2, 1, 0);
    outcome.skips("XU2", "R4 has no value that can be used");
}

#[test]
fn missing_values() {
    skipped("", "missing-value board.cir:10:1");
    skipped("RF", "missing-value board.cir:10:12");
    skipped("nan", "missing-value board.cir:10:12");
}

#[test]
fn values_that_are_no_resistance() {
    skipped("-10k", "not-positive-value board.cir:10:12");
    skipped("1e999", "unreadable-number board.cir:10:12");
    skipped("{0-10k}", "not-positive-value board.cir:10:13");
}

#[test]
fn expressions_without_a_value() {
    for value in ["{RF}", "{0/0}", "{1e308*10}", "{sqrt(0-1)}", "{1k*}", "'2*(3'"] {
        skipped(value, "unreadable-value board.cir:10:13");
    }
}

#[test]
fn zero_ohm_joins_its_nets() {
    with("0").is(0, &[]).covers(2, 2, 0);
}

#[test]
fn values_at_the_ends_of_numbers() {
    with("1e-320").covers(2, 1, 0).skips("XU2", "R4 has no value that can be used");
    let outcome = with("1e308");
    outcome.covers(2, 2, 0);
    assert!(outcome.said().iter().any(|line| line.contains("gain-error")), "{:?}", outcome.said());
}

#[test]
fn parameters_without_a_value() {
    let outcome = with("{rf}\n.param rf={0/0}");
    let expected = [
        "error unreadable-value board.cir:10:13",
        "warning unreadable-value board.cir:11:12",
        "warning not-analysed board.cir:8:1",
    ];
    outcome.is(1, &expected).covers(2, 1, 0);
    assert!(outcome.message("unreadable-value").contains("no finite value"));
}

#[test]
fn a_parameter_without_a_value_lets_no_outer_one_through() {
    let body = ".subckt amp i o\n.param rf={0/0}\nXU1 i n vcc vee o OP07C\nR1 n 0 1k\nR2 o n {rf}\n.ends\n";
    let outcome = Bench::new(board(&format!(".param rf=10k\n{body}X1 in o2 amp\n"))).check();
    outcome.covers(2, 1, 0).skips("X1.XU1", "X1.R2 has no value that can be used").sound();
}

#[test]
fn capacitors_and_inductors() {
    for line in ["C9 in 0 -1n", "L9 in x -1m", "C9 in 0"] {
        let outcome = Bench::new(board(&format!("{line}\n"))).check();
        assert_eq!(outcome.status, 1, "{line}");
        outcome.covers(1, 1, 0).sound();
        assert!(
            outcome.said()[0].ends_with("board.cir:8:9") || outcome.said()[0].ends_with("board.cir:8:1"),
            "{:?}",
            outcome.said()
        );
    }
}

#[test]
fn sources_without_a_value() {
    let outcome = Bench::new(board("V9 in9 0 1e999\nXU9 in9 o9 vcc vee o9 OP07C\n")).check();
    outcome.is(0, &["warning unreadable-value board.cir:8:10"]).covers(2, 2, 0).sound();
    let stage = &outcome.board["stages"][1]["figures"]["output-headroom"];
    assert_eq!((stage["status"].as_str(), stage["worst"].is_null()), (Some("unknown"), true), "{stage:#}");
}

#[test]
fn a_rail_without_a_value_is_not_nought() {
    let outcome = Bench::new(board("V9 v9 0 {0/0}\nXU9 in o9 v9 vee o9 OP07C\n")).check();
    outcome.is(0, &["warning unreadable-value board.cir:8:10"]).covers(2, 2, 0).sound();
    let figure = &outcome.board["stages"][1]["figures"]["output-headroom"];
    assert_eq!(figure["reason"], "the supplies of XU9 are not known");
}

/// A megohm of a drawing is a milliohm of a netlist: both readings are said, and the netlist's is used.
#[test]
fn a_bare_m_of_a_resistor_is_said_both_ways() {
    let outcome = Bench::new("* m\nV1 VCC 0 15\nV2 0 VEE 15\nVS IN 0 SIN(0 1 1k)\nR1 N1 0 1M\nR2 OUT N1 1Meg\nR3 OUT 0 22m\nR4 OUT 0 1M5\nXU1 IN N1 VCC VEE OUT OP07C\n.end\n").check();
    let said: Vec<&serde_json::Value> = outcome.board["findings"]
        .as_array()
        .expect("a board has findings")
        .iter()
        .filter(|finding| finding["rule"] == "value-reading")
        .collect();
    assert_eq!(said.len(), 1, "a small m is milli to everybody: {said:#?}");
    assert_eq!(said[0]["spans"][0]["line"], 5);
    assert!(
        said[0]["message"]
            .as_str()
            .is_some_and(|message| message.contains("1 mohm") && message.contains("1 Mohm"))
    );
}
