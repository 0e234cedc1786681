//! Topic: gain error of a finite open-loop gain, with and without input and output resistance.

use super::case::{Ask, BLANK, Case, Within};
use super::source::{COUGHLIN, FRANCO};

/// The example gives the ratio 100 alone; the resistors are chosen here.
const NON_INVERTING: &[&str] = &["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 99k", "XU1 i m VCC VEE o OPX"];

/// The same ratio inverting has a noise gain of 101.
const INVERTING: &[&str] = &["V1 i 0 AC 1", "R1 i m 1k", "R2 m o 100k", "XU1 0 m VCC VEE o OPX"];

/// Input resistance, output resistance, load and a T network at once.
const TEE: &[&str] = &[
    "V1 i 0 AC 1",
    "R1 i m 1Meg",
    "R2 m x 1Meg",
    "R3 x o 100k",
    "R4 x 0 1k",
    "RL o 0 2k",
    "XU1 0 m VCC VEE o OPX",
];

/// A general-purpose op amp as the examples describe it.
const GENERAL: &[(&str, &str)] =
    &[("open-loop-gain", "200000"), ("input-resistance", "2 Mohm"), ("output-resistance", "75 ohm")];

/// Rows of one example: the closed-loop gain at an open-loop gain.
const fn closed_loop(
    id: &'static str,
    netlist: &'static [&'static str],
    device: &'static [(&'static str, &'static str)],
    printed: f64,
    place: f64,
) -> Case {
    Case {
        id,
        source: COUGHLIN,
        place: "chapter 10, example 10.5, p. 279",
        netlist,
        device,
        ask: Ask::Actual("XU1", "i"),
        printed,
        within: Within::Digit(place),
        ..BLANK
    }
}

/// The rows.
pub const CASES: &[Case] = &[
    closed_loop("G1-non-10000", NON_INVERTING, &[("open-loop-gain", "10000")], 99.0, 0.1),
    closed_loop("G1-inv-10000", INVERTING, &[("open-loop-gain", "10000")], -99.0, 0.1),
    closed_loop("G1-non-1000", NON_INVERTING, &[("open-loop-gain", "1000")], 90.91, 0.01),
    closed_loop("G1-inv-1000", INVERTING, &[("open-loop-gain", "1000")], -90.83, 0.01),
    closed_loop("G1-non-100", NON_INVERTING, &[("open-loop-gain", "100")], 50.0, 0.1),
    closed_loop("G1-inv-100", INVERTING, &[("open-loop-gain", "100")], -49.75, 0.01),
    closed_loop("G1-non-10", NON_INVERTING, &[("open-loop-gain", "10")], 9.09, 0.01),
    closed_loop("G1-inv-10", INVERTING, &[("open-loop-gain", "10")], -9.01, 0.01),
    closed_loop("G1-non-1", NON_INVERTING, &[("open-loop-gain", "1")], 0.99, 0.01),
    closed_loop("G1-inv-1", INVERTING, &[("open-loop-gain", "1")], -0.98, 0.01),
    Case {
        id: "G3-tee",
        source: FRANCO,
        place: "chapter 1, example 1.11, p. 38",
        netlist: TEE,
        device: &[
            ("open-loop-gain", "100000"),
            ("input-resistance", "1 Mohm"),
            ("output-resistance", "100 ohm"),
        ],
        ask: Ask::Actual("XU1", "i"),
        printed: -100.78,
        within: Within::Digit(0.01),
        ..BLANK
    },
    Case {
        id: "G3-tee-error",
        source: FRANCO,
        place: "chapter 1, example 1.11, p. 38 (deviation in per cent)",
        netlist: TEE,
        device: &[
            ("open-loop-gain", "100000"),
            ("input-resistance", "1 Mohm"),
            ("output-resistance", "100 ohm"),
        ],
        ask: Ask::Times(-100.0, &Ask::Nominal("XU1", "gain-error")),
        printed: 0.32,
        within: Within::Digit(0.01),
        ..BLANK
    },
    Case {
        id: "G3-tee-ideal",
        source: FRANCO,
        place: "chapter 1, example 1.11, p. 38",
        netlist: TEE,
        ask: Ask::Ideal("XU1", "i"),
        printed: -101.1,
        within: Within::Digit(0.1),
        ..BLANK
    },
    Case {
        id: "Z3-gain",
        source: FRANCO,
        place: "chapter 1, example 1.9a, p. 33",
        netlist: &["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 999k", "XU1 i m VCC VEE o OPX"],
        device: GENERAL,
        ask: Ask::Actual("XU1", "i"),
        printed: 995.024876,
        // The nodal value is 995.022031.
        within: Within::Loose(0.003, "the book leaves out that the network loads both resistances"),
        ..BLANK
    },
    Case {
        id: "Z3-gain-unloaded",
        source: FRANCO,
        place: "chapter 1, example 1.9a, p. 33 (with the gain alone, as the book's formula has it)",
        netlist: &["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 999k", "XU1 i m VCC VEE o OPX"],
        device: &[("open-loop-gain", "200000")],
        ask: Ask::Actual("XU1", "i"),
        printed: 995.024876,
        within: Within::Digit(0.000001),
        ..BLANK
    },
    Case {
        id: "Z4-follower-gain",
        source: FRANCO,
        place: "chapter 1, example 1.9b, p. 33",
        netlist: &["V1 i 0 AC 1", "XU1 i o VCC VEE o OPX"],
        device: GENERAL,
        ask: Ask::Actual("XU1", "i"),
        printed: 0.999995,
        within: Within::Digit(0.000001),
        ..BLANK
    },
    Case {
        id: "Z6-iv-gain",
        source: FRANCO,
        place: "chapter 2, example 2.1, p. 62",
        netlist: &["I1 0 m 1u", "R1 m o 1Meg", "XU1 0 m VCC VEE o OPX"],
        device: GENERAL,
        ask: Ask::Actual("XU1", "m"),
        printed: -999_992.5,
        within: Within::Digit(0.1),
        ..BLANK
    },
    Case {
        id: "Z6-iv-loop-gain",
        source: FRANCO,
        place: "chapter 2, example 2.1, p. 62 (T in the output resistance)",
        netlist: &["I1 0 m 1u", "R1 m o 1Meg", "XU1 0 m VCC VEE o OPX"],
        device: GENERAL,
        ask: Ask::Nominal("XU1", "loop-gain"),
        printed: 133_330.0,
        within: Within::Digit(10.0),
        ..BLANK
    },
];
