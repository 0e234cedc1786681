//! Missing data never ends as a pass.

mod support;

use support::{check, stage};

const STAGE: &str = "XU1 IN N1 VCC VEE OUT OP07C\nRG N1 0 1k\nRF OUT N1 9k\nV1 VCC 0 15\nV2 0 VEE 15\n";

/// Without the range of its signal a resistor's dissipation is unknown, though nothing is wrong with it.
#[test]
fn dissipation_without_a_range_is_unknown() {
    let netlist = format!("* power\nVS IN 0 AC 1\n{STAGE}RL OUT 0 2k\n.end\n");
    let budget = "parts: [{ match: RL, power: 100 mW }]\n";
    let figure = &stage(&check(&netlist, budget, ""), "XU1")["figures"]["resistor-power"].clone();
    assert_eq!(figure["status"], "unknown", "{figure:#}");
    assert!(figure["reason"].as_str().is_some_and(|reason| reason.contains("range of IN")), "{figure:#}");
}

/// A rated resistor that keeps its rating doesn't hide an unrated one: 10 V across 1 kohm is 100 mW.
#[test]
fn a_rated_resistor_hides_no_unrated_one() {
    let netlist = format!("* power\nVS IN 0 SIN(0 1 1k)\n{STAGE}RL OUT 0 1k\n.end\n");
    let board = check(&netlist, "parts: [{ match: RF, power: 250 mW }]\n", "");
    let figure = &stage(&board, "XU1")["figures"]["resistor-power"];
    assert_eq!(figure["status"], "within", "{figure:#}");
    let findings = board["findings"].as_array().expect("a board has findings");
    let told = findings.iter().find(|finding| finding["rule"] == "resistor-power").expect("RL is told");
    assert!(
        told["message"].as_str().is_some_and(|message| message.starts_with("RL dissipates 99.9")
            || message.starts_with("RL dissipates 100 mW")),
        "{told:#}"
    );
}

/// A pair whose common range isn't declared has no common-mode error, and no pass either.
#[test]
fn a_common_range_that_is_not_declared_is_unknown() {
    let netlist = "* pair\nV1 VCC 0 15\nV2 0 VEE 15\nVA P 0 AC 1\nVB N 0 AC 1\nR1 N A 10k\nR2 OUT A 10k\nR3 P B 10k\n\
                   R4 B 0 10k\nXU1 B A VCC VEE OUT OP07C\n.end\n";
    let budget = "pairs: { SENSE: { positive: P, negative: N, difference: +/- 100 mV } }\n";
    let figure = &stage(&check(netlist, budget, ""), "XU1")["figures"]["common-error"].clone();
    assert_eq!(figure["status"], "unknown", "{figure:#}");
}
