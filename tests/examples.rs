//! The boards under examples/: what the tool says of them stays what their README says.

use gainsay::check::{Options, Outcome, run};
use gainsay::report::{Style, json, text};
use std::path::{Path, PathBuf};

const DRYER: &str = "examples/dryer/drum-card.cir";
const SUN_HEAD: &str = "examples/heliostat/sun-head.cir";

/// A seeded mistake: its rule, stage, severity, first netlist line, and the cure as lines to exchange.
struct Seed {
    rule: &'static str,
    stage: &'static str,
    severity: &'static str,
    line: u64,
    cure: &'static [(usize, &'static str, &'static str)],
}

const SEEDS: [Seed; 4] = [
    Seed {
        rule: "gain-error",
        stage: "XU3",
        severity: "error",
        line: 24,
        cure: &[(24, "OP07CS8", "OPA188")],
    },
    Seed {
        rule: "bias-error",
        stage: "XU7",
        severity: "error",
        line: 53,
        cure: &[(53, "OP07CS8", "OPA1678")],
    },
    Seed {
        rule: "output-headroom",
        stage: "XU8",
        severity: "error",
        line: 61,
        cure: &[(61, "TL071CP", "OPA188")],
    },
    Seed {
        rule: "feedback-loading",
        stage: "XU6A",
        severity: "warning",
        line: 46,
        cure: &[(47, "1K2", "12k"), (48, "1K2", "12k")],
    },
];

fn outcome(path: impl Into<PathBuf>) -> Outcome {
    run(&Options { paths: vec![path.into()], ..Options::default() })
}

fn as_text(outcome: &Outcome) -> String {
    text(&outcome.report, &outcome.sources, Style { colour: false, width: 100, all: false })
}

fn as_json(outcome: &Outcome) -> serde_json::Value {
    serde_json::from_str(&json(&outcome.report, &outcome.sources)).expect("the report is JSON")
}

/// Findings that are no notes, as rule and stage.
fn weighty(report: &serde_json::Value) -> Vec<(String, String)> {
    let word = |finding: &serde_json::Value, key: &str| finding[key].as_str().unwrap_or("none").to_owned();
    let findings = report["boards"][0]["findings"].as_array().expect("a board has findings");
    findings
        .iter()
        .filter(|finding| finding["severity"] != "note")
        .map(|finding| (word(finding, "rule"), word(finding, "stage")))
        .collect()
}

/// Exchanges words on numbered lines.
fn exchange(netlist: &str, changes: &[(usize, &str, &str)]) -> String {
    let mut lines: Vec<String> = netlist.lines().map(str::to_owned).collect();
    for (line, from, to) in changes {
        let old = &mut lines[line - 1];
        assert!(old.contains(from), "line {line} holds no {from}: {old}");
        *old = old.replace(from, to);
    }
    lines.join("\n") + "\n"
}

/// Checks the dryer with some lines exchanged.
fn cured(changes: &[(usize, &str, &str)]) -> Outcome {
    let folder = tempfile::tempdir().expect("a temporary folder can be made");
    let netlist = std::fs::read_to_string(DRYER).expect("the example is there");
    let board = folder.path().join("drum-card.cir");
    std::fs::write(&board, exchange(&netlist, changes)).expect("the folder can be written to");
    let budget = Path::new(DRYER).with_extension("budget.yaml");
    std::fs::copy(budget, folder.path().join("drum-card.budget.yaml")).expect("the budget can be copied");
    outcome(board)
}

#[test]
fn the_dryer_reads_as_its_readme_says() {
    insta::assert_snapshot!("dryer", as_text(&outcome(DRYER)));
}

#[test]
fn the_sun_head_is_quiet() {
    let outcome = outcome(SUN_HEAD);
    insta::assert_snapshot!("sun_head", as_text(&outcome));
    let report = as_json(&outcome);
    let board = &report["boards"][0];
    let verdict = serde_json::json!({
        "schema": report["schema"],
        "verdict": report["verdict"],
        "budget": board["budget"],
        "coverage": board["coverage"],
        "findings": board["findings"],
    });
    insta::assert_json_snapshot!("sun_head_verdict", verdict);
}

#[test]
fn the_four_seeded_mistakes_are_found_and_nothing_else() {
    let report = as_json(&outcome(DRYER));
    let expected: Vec<(String, String)> =
        SEEDS.iter().map(|seed| (seed.rule.to_owned(), seed.stage.to_owned())).collect();
    assert_eq!(weighty(&report), expected);
    let findings = report["boards"][0]["findings"].as_array().expect("a board has findings");
    for seed in &SEEDS {
        let found = findings
            .iter()
            .find(|finding| finding["rule"] == seed.rule)
            .unwrap_or_else(|| panic!("no finding of {}", seed.rule));
        assert_eq!(found["severity"], seed.severity, "{}", seed.rule);
        let lines: Vec<u64> = found["spans"]
            .as_array()
            .expect("a finding has spans")
            .iter()
            .filter(|span| span["file"] == DRYER)
            .filter_map(|span| span["line"].as_u64())
            .collect();
        assert!(lines.contains(&seed.line), "{} is not on line {}: {lines:?}", seed.rule, seed.line);
    }
}

#[test]
fn each_cure_cures_its_own_mistake_and_brings_no_other() {
    for seed in &SEEDS {
        let expected: Vec<(String, String)> = SEEDS
            .iter()
            .filter(|other| other.rule != seed.rule)
            .map(|other| (other.rule.to_owned(), other.stage.to_owned()))
            .collect();
        assert_eq!(weighty(&as_json(&cured(seed.cure))), expected, "after the cure of {}", seed.rule);
    }
}

#[test]
fn all_cures_together_keep_the_budget() {
    let changes: Vec<_> = SEEDS.iter().flat_map(|seed| seed.cure.iter().copied()).collect();
    let outcome = cured(&changes);
    assert_eq!(as_json(&outcome)["verdict"], "within-budget");
    assert_eq!(outcome.status(), 0);
}

#[test]
fn exit_statuses_tell_the_boards_apart() {
    assert_eq!(outcome(DRYER).status(), 1);
    assert_eq!(outcome(SUN_HEAD).status(), 0);
    assert_eq!(outcome("examples").status(), 1);
    assert_eq!(outcome("examples/no-such-board.cir").status(), 2);
}

#[test]
fn the_same_board_gives_the_same_bytes() {
    for board in [DRYER, SUN_HEAD] {
        let (first, second) = (outcome(board), outcome(board));
        assert_eq!(as_text(&first), as_text(&second));
        assert_eq!(json(&first.report, &first.sources), json(&second.report, &second.sources));
    }
}
