//! Budgets read whole, and what is wrong in them.

use super::{date, read};
use crate::budget::{Budget, Gain, Toleranced};
use crate::device::{Pin, Technology};
use crate::diagnostic::Diagnostic;
use crate::quantity::{Celsius, Farads, Hertz, Ohms, Unit};
use crate::source::Sources;

const WHOLE: &str = r#"
board: Fermenter head, revision B
temperature: 0 degC .. 50 degC
rails: { VCC: 5 V +/- 5 %, VEE: -5 V +/- 5 % }
grounds: [AGND]
tolerance: { resistor: 1 %, capacitor: 10 %, resistor-drift: 100 ppm/K }   # where the netlist doesn't say
parts:
  - { match: [R10, R11, R12], tolerance: 0.1 % }
  - { match: RN1*, tolerance: 1 %, ratio: 0.05 % }
  - { match: RV1, travel: 0 % .. 100 % }
absent: [R31, C7]
signals:
  PRESS_IN: { range: +/- 20 mV, source: 350 ohm, band: 0 Hz .. 200 Hz }
  PHOTO: { net: J3.1, range: 0 uA .. 2 uA, capacitance: 60 pF, band: 0 Hz .. 1 kHz }
  SPARE:
pairs:
  BRIDGE: { positive: BR_P, negative: BR_N, difference: +/- 20 mV, common: 2.4 V .. 2.6 V, source: 350 ohm }
loads:
  PRESS_OUT: { resistance: 10 kohm, capacitance: 220 pF, to: GND }
devices:
  OPX21: { profile: precision-bipolar }
  OPX99: { technology: bipolar, pins: [output, inverting, non-inverting] }
stages:
  - match: XU1
    gain: 101
    limits: { gain-error: 0.2 %, output-headroom: 250 mV, bias-error: 1 % of span }
  - { match: [XU7, "XU8*"], gain: { IN_A: -1, IN_B: -2 } }
  - { match: XU9, supply: [VCC, VEE], zero: unused }
waivers:
  - rule: feedback-loading
    match: XU3
    reason: output drives nothing else; measured on revision A
    by: analog review
    until: 2027-06-30
"#;

fn read_text(text: &str) -> (Budget, Vec<Diagnostic>) {
    let mut sources = Sources::default();
    let file = sources.add("board.budget.yaml", text.to_string());
    read(&sources, file)
}

fn whole() -> Budget {
    let (budget, faults) = read_text(WHOLE);
    assert_eq!(faults, []);
    budget
}

#[test]
fn reads_the_board() {
    let budget = whole();
    assert_eq!(budget.board.as_deref(), Some("Fermenter head, revision B"));
    assert_eq!(budget.temperature, Some((Celsius(0.0), Celsius(50.0))));
    assert_eq!(budget.rails[1].0.text, "VEE");
    assert_eq!(budget.rails[1].1, Toleranced { nominal: -5.0, deviation: Some(0.25) });
    assert_eq!(budget.grounds[0].text, "AGND");
    assert_eq!(budget.tolerance.resistor, Some(0.01));
    assert_eq!(budget.tolerance.inductor, None);
    assert_eq!(budget.tolerance.resistor_drift, Some(100e-6));
    assert_eq!(budget.absent.len(), 2);
}

#[test]
fn reads_parts() {
    let parts = whole().parts;
    assert_eq!(parts[0].matches.len(), 3);
    assert_eq!(parts[0].tolerance, Some(0.001));
    assert_eq!(parts[1].matches[0].text, "RN1*");
    assert_eq!(parts[1].ratio, Some(0.0005));
    assert_eq!(parts[2].travel, Some((0.0, 1.0)));
}

#[test]
fn reads_signals_pairs_and_loads() {
    let budget = whole();
    let [press, photo, spare] = budget.signals.as_slice() else { panic!("three signals") };
    assert_eq!(press.range, Some((-0.02, 0.02, Unit::Volt)));
    assert_eq!(press.source, Some(Ohms(350.0)));
    assert_eq!(press.band, Some((Hertz(0.0), Hertz(200.0))));
    assert_eq!(photo.net.as_ref().unwrap().text, "J3.1");
    assert_eq!(photo.range, Some((0.0, 2e-6, Unit::Ampere)));
    assert_eq!(photo.capacitance, Some(Farads(60e-12)));
    assert_eq!((spare.name.text.as_str(), spare.range), ("SPARE", None));
    let pair = &budget.pairs[0];
    assert_eq!((pair.positive.text.as_str(), pair.negative.text.as_str()), ("BR_P", "BR_N"));
    assert_eq!(pair.common, Some((2.4, 2.6)));
    let load = &budget.loads[0];
    assert_eq!((load.resistance, load.capacitance), (Some(Ohms(10e3)), Some(Farads(220e-12))));
    assert_eq!(load.to.as_ref().unwrap().text, "GND");
}

#[test]
fn reads_devices_stages_and_waivers() {
    let budget = whole();
    assert_eq!(budget.devices[0].profile.as_ref().unwrap().text, "precision-bipolar");
    assert_eq!(budget.devices[0].pins, None);
    assert_eq!(budget.devices[1].technology, Some(Technology::Bipolar));
    assert_eq!(budget.devices[1].pins, Some(vec![Pin::Output, Pin::Inverting, Pin::NonInverting]));
    let [first, summer, single] = budget.stages.as_slice() else { panic!("three stages") };
    assert_eq!(first.gain, Some(Gain::Main(101.0)));
    let limits: Vec<_> = first
        .limits
        .iter()
        .map(|limit| (limit.figure.text.as_str(), limit.value, limit.unit, limit.of_span))
        .collect();
    assert_eq!(
        limits,
        [
            ("gain-error", 0.002, Unit::One, false),
            ("output-headroom", 0.25, Unit::Volt, false),
            ("bias-error", 0.01, Unit::One, true)
        ]
    );
    let Some(Gain::ByInput(gains)) = &summer.gain else { panic!("gains by input") };
    assert_eq!((gains[1].0.text.as_str(), gains[1].1), ("IN_B", -2.0));
    assert_eq!(single.supply.as_ref().map(|(positive, _)| positive.text.as_str()), Some("VCC"));
    assert!(single.zero_unused && !first.zero_unused);
    assert_eq!(budget.waivers[0].until.as_deref(), Some("2027-06-30"));
}

#[test]
fn names_keep_their_place_and_spelling() {
    let mut sources = Sources::default();
    let file = sources.add("b", "absent: [R1, 1e3, no, 007]\n".to_string());
    let (budget, faults) = read(&sources, file);
    assert_eq!(faults, []);
    let names: Vec<&str> = budget.absent.iter().map(|name| sources.text(name.span)).collect();
    assert_eq!(names, ["R1", "1e3", "no", "007"]);
}

#[test]
fn nothing_declared_is_an_empty_budget() {
    for text in ["", "# nothing yet\n", "signals:\n", "board:\nstages:\n"] {
        let (budget, faults) = read_text(text);
        assert_eq!(faults, [], "{text}");
        assert!(budget.signals.is_empty() && budget.stages.is_empty());
    }
}

#[test]
fn a_waiver_whose_date_is_no_date_does_not_hold() {
    let text = "waivers: [{ rule: noise, match: XU1, reason: quiet, by: me, until: next year }]\n";
    let (budget, faults) = read_text(text);
    assert_eq!(faults.len(), 1);
    assert!(budget.waivers.is_empty());
}

#[test]
fn days_exist() {
    for day in ["2027-06-30", "2028-02-29", "2000-02-29"] {
        assert!(date(day).is_ok(), "{day}");
    }
    for day in [
        "2027-06-31",
        "2027-02-29",
        "2100-02-29",
        "2027-13-01",
        "2027-00-10",
        "2027-1-1",
        "30.06.2027",
        "ü027-06-3",
    ] {
        assert!(date(day).is_err(), "{day}");
    }
}
