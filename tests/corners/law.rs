//! The laws: the worst case is that of the worst corner, and every ledger adds up to it.

use super::brute::{Bad, Corner, FIGURES};
use super::part::device;
use super::stage::{Stage, stages};
use crate::support::{check, stage as stage_of};
use serde_json::Value;

/// The stage's report.
fn report(stage: &Stage) -> Value {
    let board = check(&stage.netlist(), &stage.budget(), &device());
    stage_of(&board, "XU1").clone()
}

/// The worst of some values.
fn worst(bad: Bad, values: impl Iterator<Item = f64>) -> f64 {
    values
        .reduce(|worst, next| {
            let worse = match bad {
                Bad::Either => worst.abs() < next.abs(),
                Bad::Low => next < worst,
                Bad::High => worst < next,
            };
            if worse { next } else { worst }
        })
        .expect("there is a corner")
}

#[track_caller]
fn near(what: &str, stage: &Stage, found: &Value, expected: f64) {
    let number = found.as_f64().unwrap_or_else(|| panic!("{what} of {stage:?} is {found}"));
    let close = (number - expected).abs() <= 1e-8 * expected.abs() + 1e-13;
    assert!(close, "{what} is {number}, the worst corner has {expected}\n{stage:?}");
}

#[test]
fn worst_cases_are_those_of_the_worst_corner() {
    for stage in stages() {
        let report = report(&stage);
        assert_eq!(report["topology"], stage.topology);
        let nominal = Corner::nominal(&stage);
        let corners: Vec<Corner> = Corner::all(&stage, true).collect();
        for (slug, bad, value) in FIGURES {
            let expected = worst(*bad, corners.iter().map(|corner| value(corner, &nominal)));
            near(slug, &stage, &report["figures"][slug]["worst"], expected);
        }
    }
}

#[test]
fn the_gain_spreads_as_far_as_resistors_alone_take_it() {
    for stage in stages() {
        let nominal = Corner::nominal(&stage).real_gain();
        let spreads = Corner::all(&stage, false).map(|corner| corner.real_gain() / nominal - 1.0);
        let expected = worst(Bad::Either, spreads);
        near("gain-spread", &stage, &report(&stage)["figures"]["gain-spread"]["worst"], expected);
    }
}

/// Asserts that the lines of every ledger of a stage add up to the worst case, and their shares to 1; the
/// number of ledgers.
fn add_up(stage: &Value) -> usize {
    let figures = stage["figures"].as_object().expect("a stage has figures");
    let mut ledgers = 0;
    for (slug, figure) in figures {
        let lines = figure["ledger"].as_array().expect("a figure has a ledger");
        let Some(worst) = figure["worst"].as_f64().filter(|_| !lines.is_empty()) else { continue };
        // Decibels don't add up: the lines are those of the ratio.
        let worst = if figure["unit"] == "dB" { 10f64.powf(-worst / 20.0) } else { worst };
        ledgers += 1;
        let effects: Vec<f64> =
            lines.iter().map(|line| line["effect"].as_f64().expect("a line has an effect")).collect();
        let largest = effects.iter().fold(0.0f64, |most, effect| most.max(effect.abs()));
        let sum: f64 = effects.iter().sum();
        assert!(
            (sum - worst).abs() <= 1e-9 * largest,
            "{slug}: lines add up to {sum}, the worst case is {worst}"
        );
        let shares: Vec<f64> = lines.iter().filter_map(|line| line["share"].as_f64()).collect();
        let total: f64 = shares.iter().sum();
        assert!(shares.is_empty() || (total - 1.0).abs() <= 1e-9, "{slug}: shares add up to {total}");
        assert!(shares.iter().all(|share| 0.0 <= *share), "{slug}: {shares:?}");
    }
    ledgers
}

#[test]
fn ledgers_add_up() {
    for stage in stages() {
        let ledgers = add_up(&report(&stage));
        assert!(8 <= ledgers, "only {ledgers} figures of {stage:?} have a ledger");
    }
}

#[test]
fn ledgers_of_several_op_amps_and_intended_gains_add_up() {
    let netlist = "several\nVP VCC 0 12\nVN VEE 0 -12\nR1 a m 10k\nR2 o1 m 47k\nXU1 0 m VCC VEE o1 PART
R3 o1 q 10k\nR4 q 0 5k\nR5 c p 1k\nXU2 q s VCC VEE o2 PART\nR6 o2 s 20k\nR7 s p 1k\nR8 o3 p 20k
XU3 b p VCC VEE o3 PART\nR9 o2 o3 2k\nR10 o3 0 3k\n.end\n";
    let budget = "temperature: -20 degC .. 85 degC
rails: { VCC: 12 V +/- 5 %, VEE: -12 V +/- 5 % }
tolerance: { resistor: 5 % }
parts: [ { match: [R6, R8], tolerance: 1 %, ratio: 0.1 % } ]
signals:
  a: { range: -0.2 V .. 0.4 V, source: 600 ohm }
  b: { range: 0 V .. 50 mV }
  c: { range: -5 mV .. 5 mV }
stages: [ { match: XU1, gain: -4.5 } ]
";
    let board = check(netlist, budget, &device());
    let ledgers: usize = ["XU1", "XU2", "XU3"].iter().map(|id| add_up(stage_of(&board, id))).sum();
    assert!(30 <= ledgers, "only {ledgers} figures have a ledger: {board:#}");
}
