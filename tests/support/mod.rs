//! What tests share: a board checked from text, and its JSON.

use gainsay::check::{Options, Outcome, run};
use std::path::PathBuf;

/// Checks a netlist from text with a budget and profiles from text; empty ones are left out.
pub fn outcome(netlist: &str, budget: &str, devices: &str) -> Outcome {
    let folder = tempfile::tempdir().expect("a temporary folder can be made");
    let write = |name: &str, text: &str| -> PathBuf {
        let path = folder.path().join(name);
        std::fs::write(&path, text).expect("the folder can be written to");
        path
    };
    let board = write("board.cir", netlist);
    if !budget.is_empty() {
        write("board.budget.yaml", budget);
    }
    let devices = if devices.is_empty() { Vec::new() } else { vec![write("devices.yaml", devices)] };
    run(&Options { paths: vec![board], devices, ..Options::default() })
}

/// The same as JSON: the report's one board.
pub fn check(netlist: &str, budget: &str, devices: &str) -> serde_json::Value {
    let outcome = outcome(netlist, budget, devices);
    let text = gainsay::report::json(&outcome.report, &outcome.sources);
    let report: serde_json::Value = serde_json::from_str(&text).expect("the report is JSON");
    report["boards"][0].clone()
}

/// The stage of that id.
pub fn stage<'r>(board: &'r serde_json::Value, id: &str) -> &'r serde_json::Value {
    let stages = board["stages"].as_array().expect("a board has stages");
    stages.iter().find(|stage| stage["id"] == id).unwrap_or_else(|| panic!("no stage {id}: {board:#}"))
}
