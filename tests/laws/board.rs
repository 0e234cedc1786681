//! The board that the laws are tried on, line by line: an instrumentation amplifier, a T network, a follower
//! behind a divider, a summing stage fed by outputs, a current into a transimpedance stage, loads.

use crate::support::{check, stage};

/// Elements, supplies aside.
pub const LINES: [&str; 31] = [
    "VA a 0 AC 1",
    "VB b 0 AC 1",
    "VS s 0 AC 1",
    "R1 o1 m1 20k",
    "R2 m1 m2 2k",
    "R3 o2 m2 20k",
    "XU1 a m1 VCC VEE o1 PART",
    "XU2 b m2 VCC VEE o2 PART",
    "R4 o1 m3 10k",
    "R5 o3 m3 22k",
    "R6 o2 p3 10k",
    "R7 p3 0 22k",
    "XU3 p3 m3 VCC VEE o3 PART",
    "R8 s m4 10k",
    "R9 m4 t 47k",
    "R10 t o4 33k",
    "R11 t 0 2.2k",
    "XU4 0 m4 VCC VEE o4 PART",
    "R12 s d 91k",
    "R13 d 0 33k",
    "R14 o5 m5 15k",
    "XU5 d m5 VCC VEE o5 PART",
    "R15 o3 m6 12k",
    "R16 o4 m6 68k",
    "R17 o5 m6 39k",
    "R18 o6 m6 56k",
    "XU6 0 m6 VCC VEE o6 PART",
    "R19 o6 0 4.7k",
    "R20 o5 o4 100k",
    "R21 o7 m7 470k",
    "XU7 0 m7 VCC VEE o7 PART",
];

/// Ranges of all signals, rails, tolerances.
pub const BUDGET: &str = "temperature: 0 degC .. 60 degC
rails: { VCC: 12 V +/- 2 %, VEE: -12 V +/- 2 % }
tolerance: { resistor: 1 % }
signals:
  a: { range: -40 mV .. 60 mV }
  b: { range: -50 mV .. 50 mV }
  s: { range: -20 mV .. 30 mV }
  diode: { net: m7, range: 0 uA .. 5 uA }
";

/// Resistances of the op amp, ohm: differential, common-mode and output, each least, typical, greatest.
const RESISTANCES: [(&str, [f64; 3]); 3] = [
    ("input-resistance", [3e5, 2e6, 5e6]),
    ("common-mode-resistance", [2e8, 1e9, 4e9]),
    ("output-resistance", [40.0, 75.0, 150.0]),
];

/// The profile of the op amp, its resistances times `scale`.
pub fn device(scale: f64) -> String {
    let resistances = RESISTANCES.map(|(name, values)| {
        let [low, usual, high] = values.map(|ohms| ohms * scale);
        format!("    {name}: {{ min: {low:e} ohm, typ: {usual:e} ohm, max: {high:e} ohm }}\n")
    });
    format!(
        "- device: PART
  technology: bipolar
  sections: 1
  pins: [non-inverting, inverting, positive-supply, negative-supply, output]
  source: invented
  parameters:
    open-loop-gain: {{ min: 2e4, typ: 2e5 }}
    bias-current: {{ typ: 80 nA, max: 500 nA }}
    offset-current: {{ typ: 20 nA, max: 200 nA }}
    offset-voltage: {{ typ: 1 mV, max: 6 mV }}
    offset-drift: {{ typ: 3 uV/K, max: 15 uV/K }}
    common-mode-rejection: {{ min: 70 dB, typ: 90 dB }}
    supply-rejection: {{ min: 77 dB, typ: 96 dB }}
    swing-below-positive: {{ typ: 1 V, max: 2 V }}
    swing-above-negative: {{ typ: 1 V, max: 2 V }}
    input-below-positive: {{ typ: 1 V, max: 2 V }}
    input-above-negative: {{ typ: 1 V, max: 2 V }}
    output-current: {{ min: 10 mA, typ: 20 mA }}
{}",
        resistances.concat()
    )
}

/// A netlist of some lines, with supplies.
pub fn netlist(lines: &[String]) -> String {
    format!("laws\nVP VCC 0 12\nVN VEE 0 -12\n{}\n.end\n", lines.join("\n"))
}

/// The board's own lines.
pub fn lines() -> Vec<String> {
    LINES.iter().map(|line| (*line).to_owned()).collect()
}

#[test]
fn the_board_is_what_it_says() {
    let board = check(&netlist(&lines()), BUDGET, &device(1.0));
    let topologies = [
        ("XU1", "instrumentation"),
        ("XU2", "instrumentation"),
        ("XU3", "difference"),
        ("XU4", "inverting"),
        ("XU5", "follower"),
        ("XU6", "summing"),
        ("XU7", "transimpedance"),
    ];
    for (id, topology) in topologies {
        assert_eq!(stage(&board, id)["topology"], topology, "{id}");
    }
}
