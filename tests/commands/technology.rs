//! Devices that nobody knows: what stands without them, and what a technology gives.

use crate::{gainsay, support};
use serde_json::Value;

const BOARD: &str = "\
Two unknown devices
VCC VCC 0 15
VEE VEE 0 -15
V1 IN 0 AC 1
R1 N1 0 1k
R2 OUT1 N1 99k
XU1 IN N1 VCC VEE OUT1 OPNEW
R3 OUT1 N2 10k
R4 N2 OUT2 10k
XU2 0 N2 VCC VEE OUT2 opnew
XU3 OUT2 OUT3 VCC VEE OUT3 2OTHER
.end
";

const SIGNALS: &str = "signals: { IN: { range: +/- 50 mV } }\n";

fn findings<'b>(board: &'b Value, rule: &str) -> Vec<&'b Value> {
    board["findings"]
        .as_array()
        .expect("a board has findings")
        .iter()
        .filter(|finding| finding["rule"] == rule)
        .collect()
}

#[test]
fn structure_name_and_twin_stand_without_the_device() {
    let board = support::check(BOARD, SIGNALS, "");
    let stage = support::stage(&board, "XU1");
    assert_eq!((&stage["topology"], &stage["device"]), (&"non-inverting".into(), &"OPNEW".into()));
    let transfer = &stage["transfers"][0];
    assert_eq!(transfer["input"], "IN");
    assert!(transfer["ideal"].as_f64().is_some_and(|ideal| (ideal - 100.0).abs() < 1e-9), "{transfer}");
    assert!(transfer["actual"].is_null());
    assert_eq!(board["coverage"]["skipped"].as_array().map(Vec::len), Some(3));
}

#[test]
fn each_device_is_one_finding_with_all_its_stages() {
    let board = support::check(BOARD, SIGNALS, "");
    let found = findings(&board, "unknown-device");
    let spans = |finding: &Value| finding["spans"].as_array().map(Vec::len);
    assert_eq!(found.iter().map(|finding| spans(finding)).collect::<Vec<_>>(), [Some(2), Some(1)]);
    let message = found[0]["message"].as_str().expect("a finding has a message");
    assert!(
        message.starts_with("OPNEW is an unknown device: of XU1, XU2 nothing but structure"),
        "{message}"
    );
    let cure = found[0]["cure"].as_str().expect("there is a cure");
    for word in ["open-loop-gain", "bias-current", "offset-voltage", "swing-above-negative", "--devices"] {
        assert!(cure.contains(word), "{cure}");
    }
}

/// What stands in backquotes of a cure.
fn lines(cure: &str) -> Vec<String> {
    cure.split('`').skip(1).step_by(2).map(|line| line.to_owned() + "\n").collect()
}

#[test]
fn the_first_line_of_the_cure_cures() {
    let board = support::check(BOARD, SIGNALS, "");
    let cures: Vec<String> = findings(&board, "unknown-device")
        .iter()
        .map(|finding| lines(finding["cure"].as_str().expect("there is a cure"))[0].clone())
        .collect();
    assert_eq!(cures[1], "devices: { \"2OTHER\": { technology: bipolar } }\n");
    // Two mappings of one key would be a fault: their entries are put together.
    let entries = |line: &str| line.trim_start_matches("devices: { ").trim_end_matches(" }\n").to_owned();
    let budget = format!("{SIGNALS}devices: {{ {}, {} }}\n", entries(&cures[0]), entries(&cures[1]));
    let board = support::check(BOARD, &budget, "");
    assert_eq!(findings(&board, "unknown-device"), Vec::<&Value>::new());
    assert_eq!(board["coverage"]["analysed"], 3);
    assert_eq!(support::stage(&board, "XU1")["device"], "OPNEW");
}

/// Rows of the ledger of a figure.
fn ledger<'b>(board: &'b Value, id: &str, slug: &str) -> &'b Value {
    &support::stage(board, id)["figures"][slug]["ledger"]
}

#[test]
fn a_technology_stands_for_its_class_and_all_of_it_is_assumed() {
    for (technology, gain) in [("bipolar", 15e3), ("jfet", 3e3), ("cmos", 4e3)] {
        let budget = format!(
            "{SIGNALS}tolerance: {{ resistor: 0 % }}\ndevices: {{ OPNEW: {{ technology: {technology} }} }}\n"
        );
        let board = support::check(BOARD, &budget, "");
        let figure = &support::stage(&board, "XU1")["figures"]["gain-error"];
        let worst = figure["worst"].as_f64().expect("the gain error is known");
        // 1 / (1 + A / 100), with what input and output resistance add.
        assert!((worst + 1.0 / (1.0 + gain / 100.0)).abs() < 0.1 * worst.abs(), "{technology}: {worst}");
        for slug in ["gain-error", "offset-error", "output-headroom", "input-headroom"] {
            let figure = &support::stage(&board, "XU1")["figures"][slug];
            assert!(figure["worst"].is_number(), "{technology} {slug}: {figure:#}");
            assert_eq!(figure["data"], "assumed", "{technology} {slug}: {figure:#}");
        }
        assert!(ledger(&board, "XU1", "gain-error").as_array().is_some_and(|lines| !lines.is_empty()));
        let heavy: Vec<&Value> = board["findings"]
            .as_array()
            .expect("a board has findings")
            .iter()
            .filter(|finding| finding["severity"] == "error")
            .collect();
        assert!(heavy.is_empty(), "what is assumed is at most a warning: {heavy:#?}");
    }
}

#[test]
fn the_command_line_assumes_for_all_that_are_unknown() {
    let folder = tempfile::tempdir().expect("a temporary folder can be made");
    let path = folder.path().join("board.cir");
    std::fs::write(&path, BOARD).expect("the folder can be written to");
    let path = path.to_str().expect("a plain path");
    let (status, printed, _) = gainsay(&["check", path]);
    assert_eq!(status, 2, "{printed}");
    let (status, printed, _) = gainsay(&["check", path, "--assume-technology", "jfet"]);
    assert_eq!(status, 0, "{printed}");
    assert!(printed.contains("3 of 3 op amps analysed"), "{printed}");
    assert!(printed.contains("  - OPNEW is a jfet op amp within the bounds of generic-jfet\n"), "{printed}");
    for words in [&["stages", path][..], &["ledger", path, "XU1"]] {
        let (status, printed, _) = gainsay(&[words, &["--assume-technology", "cmos"]].concat());
        assert_eq!(status, 0, "{printed}");
        assert!(!printed.contains("unknown device"), "{printed}");
    }
}

#[test]
fn what_is_known_stays_as_it_is() {
    let known = BOARD.replace("OPNEW", "OP07C").replace("opnew", "OP07C").replace("2OTHER", "OP07C");
    let with = |technology| {
        let folder = tempfile::tempdir().expect("a temporary folder can be made");
        let path = folder.path().join("board.cir");
        std::fs::write(&path, &known).expect("the folder can be written to");
        let options = gainsay::check::Options {
            paths: vec![path],
            assume_technology: technology,
            ..gainsay::check::Options::default()
        };
        gainsay::check::run(&options).report.boards[0].stages.clone()
    };
    assert_eq!(with(None), with(Some(gainsay::device::Technology::Cmos)));
}
