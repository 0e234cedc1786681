//! Topic: instrumentation amplifiers of three op amps.

use super::case::{Ask, BLANK, Case, Within};
use super::source::{COUGHLIN, FIORE, FRANCO};

const FIORE_6_1: &[&str] = &[
    "V1 a 0 0.006",
    "V2 b 0 -0.006",
    "R1a x ga 20k",
    "R1b y gb 20k",
    "Rg ga gb 400",
    "R3a y m 10k",
    "R3b x p 10k",
    "R4a m o 50k",
    "R4b p 0 50k",
    "XU1 a ga VCC VEE x OPX",
    "XU2 b gb VCC VEE y OPX",
    "XU3 p m VCC VEE o OPX",
];

/// The rows.
pub const CASES: &[Case] = &[
    Case {
        id: "I1",
        source: FIORE,
        place: "chapter 6, example 6.1, p. 176",
        netlist: FIORE_6_1,
        ask: Ask::Pin("XU3", "out"),
        printed: 6.06,
        within: Within::Digit(0.01),
        ..BLANK
    },
    Case {
        id: "I1-node",
        source: FIORE,
        place: "chapter 6, example 6.1, p. 176 (output of the first stage)",
        netlist: FIORE_6_1,
        ask: Ask::Pin("XU1", "out"),
        printed: 0.606,
        within: Within::Digit(0.001),
        ..BLANK
    },
    Case {
        id: "I2",
        source: COUGHLIN,
        place: "chapter 8, examples 8.3 and 8.5, p. 227",
        // The second stage's resistors are chosen here; the example gives 25 kohm and 50 ohm.
        netlist: &[
            "V1 a 0 5.001",
            "V2 b 0 5.002",
            "R1a x ga 25k",
            "R1b y gb 25k",
            "Rg ga gb 50",
            "R3a y m 10k",
            "R3b x p 10k",
            "R4a m o 10k",
            "R4b p 0 10k",
            "XU1 a ga VCC VEE x OPX",
            "XU2 b gb VCC VEE y OPX",
            "XU3 p m VCC VEE o OPX",
        ],
        ask: Ask::Pin("XU3", "out"),
        printed: -1.001,
        within: Within::Digit(0.001),
        ..BLANK
    },
    Case {
        id: "I3-max",
        source: FRANCO,
        place: "chapter 2, example 2.10, p. 80",
        netlist: &[
            "V1 a 0 0.005",
            "V2 b 0 -0.005",
            "R1a x ga 50k",
            "R1b y gb 50k",
            "Rg ga gb 50",
            "R3a y m 100k",
            "R3b x p 100k",
            "R4a m o 50k",
            "R4b p 0 50k",
            "XU1 a ga VCC VEE x OPX",
            "XU2 b gb VCC VEE y OPX",
            "XU3 p m VCC VEE o OPX",
        ],
        ask: Ask::Times(100.0, &Ask::Pin("XU3", "out")),
        printed: 1000.0,
        // The values give 1000.5.
        within: Within::Loose(0.51, "a design target; the values are rounded"),
        ..BLANK
    },
    Case {
        id: "I3-min",
        source: FRANCO,
        place: "chapter 2, example 2.10, p. 80",
        netlist: &[
            "V1 a 0 0.5",
            "V2 b 0 -0.5",
            "R1a x ga 50k",
            "R1b y gb 50k",
            "Rg ga gb 100.05k",
            "R3a y m 100k",
            "R3b x p 100k",
            "R4a m o 50k",
            "R4b p 0 50k",
            "XU1 a ga VCC VEE x OPX",
            "XU2 b gb VCC VEE y OPX",
            "XU3 p m VCC VEE o OPX",
        ],
        ask: Ask::Pin("XU3", "out"),
        printed: 1.0,
        // The values give 0.99975.
        within: Within::Loose(0.0003, "a design target; the values are rounded"),
        ..BLANK
    },
];
