//! Budgets that can't be meant: each mistake at its line and column, the board checked without it.

use crate::bad_input::bench::{Bench, Outcome, board};

fn with(budget: &str) -> Outcome {
    let outcome = Bench::new(board("")).budget(budget).check();
    outcome.covers(1, 1, 0).sound();
    outcome
}

/// Asserts one error at a place, and that the budget counts as unusable.
#[track_caller]
fn fault(budget: &str, expected: &str) -> Outcome {
    let outcome = with(budget);
    outcome.is(2, &[&format!("error {expected}")]);
    assert!(outcome.errors.contains("board.budget.yaml"), "{}", outcome.errors);
    outcome
}

#[test]
fn shapes() {
    fault("- a\n- b\n", "yaml-shape board.budget.yaml:1:1");
    fault("hello\n", "yaml-shape board.budget.yaml:1:1");
    fault("rails: 12 V\n", "yaml-shape board.budget.yaml:1:8");
    fault("rails: {VCC: 5 V\nboard: x\n", "yaml-syntax board.budget.yaml:2:6");
    fault("rails: { VCC: 12 V }\nrails: { VEE: -12 V }\n", "duplicate-key board.budget.yaml:2:1");
}

#[test]
fn keys() {
    fault("board: x\nrials: { VCC: 12 V }\n", "unknown-key board.budget.yaml:2:1");
    fault("loads:\n  out: { resistence: 1 kohm }\n", "unknown-key board.budget.yaml:2:10");
}

#[test]
fn units() {
    fault("rails: { VCC: 12 ohm }\n", "bad-value board.budget.yaml:1:15");
    fault("loads:\n  out: { resistance: 10 nF }\n", "bad-value board.budget.yaml:2:22");
    fault("stages:\n  - match: XU1\n    limits: { gain-error: 2 mV }\n", "bad-value board.budget.yaml:3:27");
    fault(
        "stages:\n  - match: XU1\n    limits: { output-headroom: 2 % }\n",
        "bad-value board.budget.yaml:3:32",
    );
}

#[test]
fn nets() {
    fault("signals:\n  INX: { range: +/- 1 V }\n", "unknown-name board.budget.yaml:2:3");
    fault("rails:\n  VPP: 12 V\n", "unknown-name board.budget.yaml:2:3");
    fault("loads:\n  outx: { resistance: 10 kohm }\n", "unknown-name board.budget.yaml:2:3");
    fault("grounds: [AGND]\n", "unknown-name board.budget.yaml:1:11");
    fault("stages:\n  - { match: XU1, supply: [vccx, vee] }\n", "unknown-name board.budget.yaml:2:28");
    let outcome =
        fault("pairs:\n  P: { positive: in, negative: inx }\n", "unknown-name board.budget.yaml:2:32");
    assert_eq!(outcome.board["findings"][0]["cure"], "the nearest name is `in`");
}

#[test]
fn stages_and_parts() {
    fault(
        "stages:\n  - { match: XU7, limits: { gain-error: 1 % } }\n",
        "unknown-name board.budget.yaml:2:14",
    );
    fault("parts:\n  - { match: R77, tolerance: 1 % }\n", "unknown-name board.budget.yaml:2:14");
    fault("absent: [R77]\n", "unknown-name board.budget.yaml:1:10");
    fault("stages:\n  - { match: XU1, gain: { nope: 3 } }\n", "unknown-name board.budget.yaml:2:27");
}

#[test]
fn figures_and_rules() {
    fault(
        "stages:\n  - { match: XU1, limits: { gian-error: 1 % } }\n",
        "unknown-name board.budget.yaml:2:29",
    );
    let waiver = "waivers:\n  - { rule: gian-error, match: XU1, reason: r, by: b }\n";
    with(waiver).is(0, &["warning unknown-name board.budget.yaml:2:13"]);
}

#[test]
fn devices() {
    fault("devices:\n  OPX99: { technology: cmos }\n", "unknown-name board.budget.yaml:2:3");
    let outcome = Bench::new(board("")).budget("devices:\n  OP07C: { profile: no-such }\n").check();
    outcome.is(2, &["error unknown-device board.budget.yaml:2:21", "warning unknown-device board.cir:4:1"]);
    outcome.covers(1, 0, 0).skips("XU1", "unknown device OP07C (XU1)");
}

#[test]
fn what_an_op_amp_drives_is_not_declared() {
    fault("signals:\n  out: { range: +/- 1 V }\n", "declared-output board.budget.yaml:2:3");
    fault("signals:\n  X: { net: XU1.out, range: 0 uA .. 1 uA }\n", "declared-output board.budget.yaml:2:13");
    fault("rails:\n  out: 5 V\n", "declared-output board.budget.yaml:2:3");
    let outcome =
        fault("pairs:\n  P: { positive: out, negative: in }\n", "declared-output board.budget.yaml:2:18");
    assert_eq!(outcome.board["findings"][0]["spans"][1]["line"], 4);
}

#[test]
fn every_fault_of_value_is_said() {
    let outcome =
        with("rails: { VCC: 12 ohm, VPP: 3 V }\nabsent: [R77]\nsignals: { INX: { range: 1 V .. 0 V } }\n");
    assert_eq!(outcome.status, 2);
    assert!(
        3 <= outcome.said().iter().filter(|line| line.starts_with("error")).count(),
        "{:?}",
        outcome.said()
    );
}

#[test]
fn budgets_that_cannot_be_read() {
    let outcome = Bench::new(board("")).arguments(&["--budget", "gone.yaml"]).check();
    outcome.is(2, &["error unreadable-file gone.yaml:1:1"]).sound();
    let outcome =
        Bench::new(board("")).file("b.yaml", b"\0\0binary").arguments(&["--budget", "b.yaml"]).check();
    outcome.is(2, &["error unreadable-file b.yaml:1:1"]).sound();
}

#[test]
fn an_empty_budget_declares_nothing() {
    with("").is(0, &[]);
    with("# nothing yet\n").is(0, &[]);
}
