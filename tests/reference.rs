//! Numbers computed by `reference/make.py`, which builds the nodal equations by itself and tries all corners,
//! against what gainsay says of the same boards.

mod support;

use serde::Deserialize;
use serde_json::Value;

/// One board with what a report must say of it.
#[derive(Deserialize)]
struct Board {
    name: String,
    netlist: String,
    budget: String,
    devices: String,
    expected: Vec<Expected>,
}

/// One number: `what` is a kind of transfer, an end of the ranges or a part of a figure; `of` is the input, the
/// pin or the figure's slug.
#[derive(Deserialize)]
struct Expected {
    stage: String,
    what: String,
    of: String,
    value: f64,
}

impl Expected {
    /// What the report says.
    fn found(&self, board: &Value) -> Option<f64> {
        let stage = support::stage(board, &self.stage);
        let entry = |list: &str, key: &str, name: &str| {
            stage[list].as_array()?.iter().find(|entry| entry[key] == name).cloned()
        };
        match self.what.as_str() {
            "ideal" | "actual" => entry("transfers", "input", &self.of)?[&self.what].as_f64(),
            "low" | "high" => entry("pins", "at", &self.what)?[&self.of].as_f64(),
            _ => stage["figures"][&self.of][&self.what].as_f64(),
        }
    }

    /// How far apart the two may be: transfers and pins to 1e-9, of a volt where they are less; figures to 1e-6.
    fn within(&self) -> f64 {
        match self.what.as_str() {
            "ideal" | "actual" => 1e-9 * self.value.abs(),
            "low" | "high" => 1e-9 * self.value.abs().max(1e-3),
            "nominal" | "sign" => 1e-9 * self.value.abs() + 1e-13,
            _ => 1e-6 * self.value.abs(),
        }
    }

    /// What is wrong; `None` where both agree.
    fn failure(&self, board: &Value) -> Option<String> {
        let found = self.found(board);
        if found.is_some_and(|found| (found - self.value).abs() <= self.within()) {
            return None;
        }
        let Expected { stage, what, of, value } = self;
        Some(format!("  {stage} {what} {of}: reference {value:e}, gainsay {found:?}"))
    }
}

fn boards() -> Vec<Board> {
    serde_json::from_str(include_str!("reference/reference.json")).expect("make.py writes JSON")
}

#[test]
fn gainsay_agrees_with_an_outside_solution() {
    let mut failures = Vec::new();
    let mut count = 0;
    for board in boards() {
        let report = support::check(&board.netlist, &board.budget, &board.devices);
        let differ: Vec<String> =
            board.expected.iter().filter_map(|expected| expected.failure(&report)).collect();
        count += board.expected.len();
        if !differ.is_empty() {
            failures.push(format!("{}:\n{}", board.name, differ.join("\n")));
        }
    }
    assert!(failures.is_empty(), "of {count} numbers these differ:\n{}", failures.join("\n"));
    assert!(1200 <= count, "only {count} numbers are left");
}

#[test]
fn every_topology_is_there() {
    let mut found: Vec<String> = Vec::new();
    for board in boards() {
        let report = support::check(&board.netlist, &board.budget, &board.devices);
        let stages = report["stages"].as_array().expect("a board has stages");
        found.extend(stages.iter().map(|stage| stage["topology"].as_str().expect("a name").to_owned()));
    }
    for topology in [
        "non-inverting",
        "inverting",
        "follower",
        "summing",
        "summing-non-inverting",
        "difference",
        "instrumentation",
        "transimpedance",
    ] {
        assert!(found.iter().any(|name| name == topology), "no {topology}");
    }
}

#[test]
fn a_number_that_differs_is_noticed() {
    let board = &boards()[0];
    let report = support::check(&board.netlist, &board.budget, &board.devices);
    for expected in &board.expected {
        let Expected { stage, what, of, value } = expected;
        let (stage, what, of) = (stage.clone(), what.clone(), of.clone());
        let wrong = Expected { stage, what, of, value: value * 1.001 + 1e-9 };
        assert!(wrong.failure(&report).is_some(), "{} {} {}", wrong.stage, wrong.what, wrong.of);
    }
}
