//! Topics: difference amplifiers with mismatched resistors, and summing amplifiers.

use super::case::{Ask, BLANK, Case, Within};
use super::source::{FIORE, FRANCO, Print};

/// A difference amplifier of gain 10 with four mismatched resistors: output in volt at a difference of 0.2 V.
const fn mismatched(id: &'static str, netlist: &'static [&'static str], printed: f64) -> Case {
    Case {
        id,
        source: FRANCO,
        place: "chapter 2, example 2.8b, p. 74",
        print: Print::Memory,
        netlist,
        ask: Ask::Pin("XU1", "out"),
        printed,
        within: Within::Digit(0.001),
        ..BLANK
    }
}

/// The non-inverting summer; its sources differ from row to row.
const fn summer(id: &'static str, netlist: &'static [&'static str], printed: f64) -> Case {
    Case {
        id,
        source: FIORE,
        place: "chapter 4, example 4.14, p. 116",
        netlist,
        ask: Ask::Pin("XU1", "out"),
        printed,
        within: Within::Digit(0.01),
        ..BLANK
    }
}

/// The rows.
pub const CASES: &[Case] = &[
    mismatched(
        "D1-cm0",
        &[
            "V1 a 0 -0.1",
            "V2 b 0 0.1",
            "R1 a m 10k",
            "R2 m o 98k",
            "R3 b p 9.9k",
            "R4 p 0 103k",
            "XU1 p m VCC VEE o OPX",
        ],
        1.965,
    ),
    mismatched(
        "D1-cm5",
        &[
            "V1 a 0 4.9",
            "V2 b 0 5.1",
            "R1 a m 10k",
            "R2 m o 98k",
            "R3 b p 9.9k",
            "R4 p 0 103k",
            "XU1 p m VCC VEE o OPX",
        ],
        2.230,
    ),
    mismatched(
        "D1-cm10",
        &[
            "V1 a 0 9.9",
            "V2 b 0 10.1",
            "R1 a m 10k",
            "R2 m o 98k",
            "R3 b p 9.9k",
            "R4 p 0 103k",
            "XU1 p m VCC VEE o OPX",
        ],
        2.495,
    ),
    Case {
        id: "D3-57",
        source: FRANCO,
        place: "chapter 5, example 5.4, p. 228",
        // The step is the resting common mode of 10 V.
        netlist: &[
            "V1 a 0 10",
            "V2 b 0 10",
            "R1 a m 10k",
            "R2 m o 100k",
            "R3 b p 10k",
            "R4 p 0 100k",
            "XU1 p m VCC VEE o OPX",
        ],
        device: &[("common-mode-rejection", "57 dB")],
        ask: Ask::Effect("XU1", "offset-error", "common-mode rejection"),
        printed: 0.141,
        within: Within::Digit(0.001),
        ..BLANK
    },
    Case {
        id: "S2",
        source: FIORE,
        place: "chapter 4, example 4.13, p. 113",
        netlist: &[
            "V1 a 0 1",
            "V2 b 0 -2",
            "V3 c 0 0.5",
            "R1 a m 4k",
            "R2 b m 2k",
            "R3 c m 1k",
            "Rf m o 10k",
            "XU1 0 m VCC VEE o OPX",
        ],
        ask: Ask::Pin("XU1", "out"),
        printed: 2.5,
        within: Within::Digit(0.1),
        ..BLANK
    },
    summer(
        "S3-dc",
        &[
            "V1 a 0 1",
            "V2 b 0 -0.2",
            "V3 c 0 0",
            "R1 a p 20k",
            "R2 b p 20k",
            "R3 c p 20k",
            "Ri m 0 5k",
            "Rf o m 20k",
            "XU1 p m VCC VEE o OPX",
        ],
        1.33,
    ),
    // The sine alone, at its peak: the other two sources at nought.
    summer(
        "S3-ac",
        &[
            "V1 a 0 0",
            "V2 b 0 0",
            "V3 c 0 2",
            "R1 a p 20k",
            "R2 b p 20k",
            "R3 c p 20k",
            "Ri m 0 5k",
            "Rf o m 20k",
            "XU1 p m VCC VEE o OPX",
        ],
        3.33,
    ),
];
