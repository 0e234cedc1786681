//! `gainsay stages`, and each stage's reach against closed forms.

use crate::{PLAIN, gainsay, support};
use gainsay::figure::{Edge, InputRange};
use gainsay::quantity::Unit;
use gainsay::report::{ReachReport, stages_text};

/// All but ideal; 2 V of swing and 3 V of common-mode range short of each rail, 10 mA.
const DEVICE: &str = "\
- device: OPX
  technology: jfet
  source: a document
  parameters:
    open-loop-gain: { min: 1e12 }
    input-resistance: { min: 1e18 ohm }
    common-mode-resistance: { min: 1e18 ohm }
    output-resistance: { typ: 0 ohm, min: 0 ohm, max: 0 ohm }
    bias-current: { max: 0 A }
    offset-voltage: { max: 0 V }
    common-mode-rejection: { min: 200 dB }
    supply-rejection: { min: 200 dB }
    swing-below-positive: { max: 2 V }
    swing-above-negative: { max: 2 V }
    input-below-positive: { max: 3 V }
    input-above-negative: { max: 3 V }
    output-current: { min: 10 mA }
";

const RAILS: &str = "rails: { VCC: 15 V +/- 0 V, VEE: -15 V +/- 0 V }\ntolerance: { resistor: 0 % }\n";

/// The reach of the first stage.
fn reach(lines: &[&str], budget: &str, device: &str) -> ReachReport {
    let netlist = format!("a board\n{}\n.end\n", lines.join("\n"));
    let outcome = support::outcome(&netlist, budget, device);
    assert_eq!(outcome.unusable, Vec::<String>::new());
    outcome.report.boards[0].stages[0].reach.clone().expect("a run reports the reach")
}

fn close(found: f64, expected: f64) {
    assert!((found - expected).abs() <= 1e-9 * expected.abs().max(1e-9), "{found}, not {expected}");
}

fn range(reach: &ReachReport) -> InputRange {
    reach.input.clone().expect("the range is known")
}

#[test]
fn a_gain_divides_the_swing() {
    let found = reach(&["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 10k", "XU1 i m VCC VEE o OPX"], RAILS, DEVICE);
    let input = range(&found);
    close(input.low, -13.0 / 11.0);
    close(input.high, 13.0 / 11.0);
    assert_eq!((input.low_by, input.high_by, found.unit), (Edge::Swing, Edge::Swing, Unit::Volt));
    assert_eq!(found.main.as_deref(), Some("i"));
    // 13 V and 10 mA, of which 13 V / 11 kohm goes into the feedback.
    close(found.load.expect("the load is known"), 13.0 / (10e-3 - 13.0 / 11e3));
}

#[test]
fn a_follower_is_ended_by_its_inputs() {
    let found = reach(&["V1 i 0 AC 1", "XU1 i o VCC VEE o OPX"], RAILS, DEVICE);
    let input = range(&found);
    close(input.low, -12.0);
    close(input.high, 12.0);
    assert_eq!((input.low_by, input.high_by), (Edge::CommonMode, Edge::CommonMode));
    close(found.load.expect("the load is known"), 13.0 / 10e-3);
}

#[test]
fn a_reference_moves_the_range() {
    // Out = 6 V - 2 (in - 6 V) between 2 V and 10 V.
    let found = reach(
        &["V1 i 0 AC 1", "VB VCC 0 12", "VR r 0 6", "R1 i m 10k", "R2 o m 20k", "XU1 r m VCC 0 o OPX"],
        "tolerance: { resistor: 0 % }\n",
        DEVICE,
    );
    let input = range(&found);
    close(input.low, 4.0);
    close(input.high, 8.0);
    // At 10 V the feedback takes (10 - 6) / 20 kohm; at 2 V it gives, which the load doesn't count.
    close(found.load.expect("the load is known"), 10.0 / (10e-3 - 4.0 / 20e3));
}

#[test]
fn a_current_has_its_range_in_ampere() {
    let found = reach(
        &["R2 o m 100k", "XU1 0 m VCC VEE o OPX"],
        &format!("{RAILS}signals: {{ PHOTO: {{ net: m, range: 0 uA .. 1 uA }} }}\n"),
        DEVICE,
    );
    let input = range(&found);
    close(input.low, -130e-6);
    close(input.high, 130e-6);
    assert_eq!((found.unit, found.main.as_deref()), (Unit::Ampere, Some("PHOTO")));
}

#[test]
fn a_pair_is_ended_by_its_difference() {
    // A difference stage of gain 4, its common mode at 1 V.
    let found = reach(
        &["R1 a m 10k", "R2 o m 40k", "R3 b p 10k", "R4 p 0 40k", "XU1 p m VCC VEE o OPX"],
        &format!(
            "{RAILS}pairs: {{ BRIDGE: {{ positive: b, negative: a, difference: +/- 1 V, common: 1 V .. 1 V }} }}\n"
        ),
        DEVICE,
    );
    let input = range(&found);
    close(input.low, -13.0 / 4.0);
    close(input.high, 13.0 / 4.0);
    assert_eq!(found.main.as_deref(), Some("BRIDGE"));
}

#[test]
fn the_swing_is_that_at_the_current_that_flows() {
    let device = DEVICE.replace(
        "swing-below-positive: { max: 2 V }",
        "swing-below-positive: [{ max: 1 V, at: { sourcing: 1 mA } }, { max: 5 V, at: { sourcing: 10 mA } }]",
    );
    let light = reach(&["V1 i 0 AC 1", "R1 m 0 50k", "R2 o m 50k", "XU1 i m VCC VEE o OPX"], RAILS, &device);
    close(range(&light).high, 7.0);
    // 14 V / 4 kohm is more than 1 mA.
    let heavy = reach(&["V1 i 0 AC 1", "R1 m 0 2k", "R2 o m 2k", "XU1 i m VCC VEE o OPX"], RAILS, &device);
    close(range(&heavy).high, 5.0);
    // At the rated current the swing ends at 10 V above, at 13 V below.
    close(heavy.load.expect("the load is known"), 13.0 / (10e-3 - 13.0 / 4e3));
}

#[test]
fn a_range_of_that_reach_leaves_no_headroom() {
    let lines = ["R1 i m 10k", "R2 o m 30k", "RB r m 100k", "VR r 0 2", "XU1 0 m VCC VEE o OPX"];
    let netlist = format!("a board\n{}\n.end\n", lines.join("\n"));
    let declared = |low: f64, high: f64| {
        let budget = format!("{RAILS}signals: {{ i: {{ range: {low:e} V .. {high:e} V }} }}\n");
        (reach(&lines, &budget, DEVICE), support::check(&netlist, &budget, DEVICE))
    };
    let input = range(&declared(0.0, 0.0).0);
    let board = declared(input.low, input.high).1;
    let headroom = &support::stage(&board, "XU1")["figures"]["output-headroom"];
    assert!(headroom["nominal"].as_f64().is_some_and(|volts| volts.abs() < 1e-9), "{headroom:#}");
}

#[test]
fn what_is_missing_is_said() {
    let lines = ["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 10k", "XU1 i m A B o OPX"];
    let found = reach(&lines, "", DEVICE);
    assert_eq!(found.input, Err("the supplies of XU1 are not known".to_owned()));
    let lines = ["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 10k", "XU1 i m VCC VEE o OPX"];
    let found = reach(&lines, RAILS, &DEVICE.replace("    swing-below-positive: { max: 2 V }\n", ""));
    let missing = "the profile of XU1 gives no swing-below-positive".to_owned();
    assert_eq!((found.input, found.load), (Err(missing.clone()), Err(missing)));
    let found = reach(&lines, RAILS, &DEVICE.replace("    output-current: { min: 10 mA }\n", ""));
    assert!(found.input.is_ok());
    assert_eq!(found.load, Err("the profile of XU1 gives no output current".to_owned()));
}

#[test]
fn a_network_that_takes_all_leaves_no_load() {
    let found = reach(&["V1 i 0 AC 1", "R1 i m 1k", "R2 o m 1k", "XU1 0 m VCC VEE o OPX"], RAILS, DEVICE);
    assert_eq!(found.load, Err("its feedback network alone takes the rated current".to_owned()));
}

#[test]
fn an_input_that_rests_outside_has_no_range() {
    let found = reach(
        &["V1 i 0 AC 1", "VB VCC 0 12", "R1 i m 10k", "R2 o m 20k", "XU1 0 m VCC 0 o OPX"],
        "tolerance: { resistor: 0 % }\n",
        DEVICE,
    );
    assert_eq!(found.input, Err("an input rests outside its guaranteed range".to_owned()));
}

/// A board with a bit of everything; names that could act on a terminal among them.
const BOARD: &str = "\
A board of all kinds
VCC VCC 0 12
VEE VEE 0 -12
R1 N1 0 1k
R2 OUT1 N1 9k
XU1 IN1 N1 VCC VEE OUT1 OPX
R3 OUT1 N2 10k
R4 N2 OUT\u{202e}2 10k
XU2 0 N2 VCC VEE OUT\u{202e}2 OPX
R5 IN3 N3 10k
R6 N3 OUT3 100k
XU3 0 N3 VCC VEE OUT3 OPNEW
XU4 IN1 IN3 VCC VEE OUT4 OPX
XU5 IN1 N5 VCC OPX
J1 IN1 IN3 OUT\u{202e}2 OUT3 CONN
.end
";

#[test]
fn a_board_of_all_kinds() {
    let mut outcome = support::outcome(BOARD, "", DEVICE);
    for board in &mut outcome.report.boards {
        board.netlist = "board.cir".to_owned();
    }
    let page = stages_text(&outcome.report, PLAIN);
    assert!(!page.contains('\u{202e}'), "{page}");
    insta::assert_snapshot!(page);
}

#[test]
fn an_example_in_full() {
    let (status, printed, complaint) = gainsay(&["stages", "examples/dryer/drum-card.cir"]);
    assert_eq!((status, complaint.as_str()), (0, ""));
    insta::assert_snapshot!(printed);
}

#[test]
fn a_file_that_is_not_there_fails() {
    let (status, _, complaint) = gainsay(&["stages", "examples/none.cir"]);
    assert_eq!(status, 2);
    assert!(complaint.starts_with("gainsay: examples/none.cir: "), "{complaint}");
    assert!(complaint.ends_with("there is no such file\n"), "{complaint}");
}
