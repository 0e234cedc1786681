//! Closed forms: values worked out on paper, the form beside each.

use super::case::{Ask, BLANK, Case, Within};
use super::source::Print;

/// Gain spread in per cent of a stage of 1 % resistors, the worse side.
const fn spread(
    id: &'static str,
    form: &'static str,
    netlist: &'static [&'static str],
    printed: f64,
) -> Case {
    Case {
        id,
        place: form,
        print: Print::Computed,
        netlist,
        tolerance: "1 %",
        ask: Ask::Times(100.0, &Ask::Worst("XU1", "gain-spread")),
        printed,
        within: Within::Digit(0.001),
        ..BLANK
    }
}

/// A T network of 100 kohm, 1 kohm and 100 kohm as feedback of 10 kohm.
const TEE: &[&str] =
    &["V1 i 0 AC 1", "R1 i m 10k", "R2 m x 100k", "R3 x o 100k", "R4 x 0 1k", "XU1 0 m VCC VEE o OPX"];

/// Two op amps: gain 1 + R2/R1 + 2 R2/RG with R1 = 20 kohm, R2 = 80 kohm, RG = 10 kohm.
const TWO_OP_AMPS: &[&str] = &[
    "V1 a 0 AC 1",
    "V2 b 0 AC 1",
    "R2a 0 ga 80k",
    "R1a ga x 20k",
    "R1b x gb 20k",
    "R2b gb o 80k",
    "RG ga gb 10k",
    "XU1 a ga VCC VEE x OPX",
    "XU2 b gb VCC VEE o OPX",
];

/// The rows.
pub const CASES: &[Case] = &[
    Case {
        id: "dc-error",
        place: "-1 / (1 + A / NG), A = 1e5, NG = 100; in per cent",
        print: Print::Computed,
        netlist: &["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 99k", "XU1 i m VCC VEE o OPX"],
        device: &[("open-loop-gain", "1e5")],
        ask: Ask::Times(100.0, &Ask::Nominal("XU1", "gain-error")),
        printed: -0.0999,
        within: Within::Digit(0.0001),
        ..BLANK
    },
    spread(
        "spread-2",
        "(1 + 1.01/0.99) / 2 - 1",
        &["V1 i 0 AC 1", "R1 m 0 10k", "R2 o m 10k", "XU1 i m VCC VEE o OPX"],
        1.010,
    ),
    spread(
        "spread-10",
        "(1 + 9 * 1.01/0.99) / 10 - 1",
        &["V1 i 0 AC 1", "R1 m 0 10k", "R2 o m 90k", "XU1 i m VCC VEE o OPX"],
        1.818,
    ),
    spread(
        "spread-100",
        "(1 + 99 * 1.01/0.99) / 100 - 1",
        &["V1 i 0 AC 1", "R1 m 0 1k", "R2 o m 99k", "XU1 i m VCC VEE o OPX"],
        2.000,
    ),
    spread(
        "spread-inverting",
        "1.01/0.99 - 1",
        &["V1 i 0 AC 1", "R1 i m 10k", "R2 m o 100k", "XU1 0 m VCC VEE o OPX"],
        2.020,
    ),
    Case {
        id: "tee-noise-gain",
        place: "1 + R2/R1 + R3/R4 (1 + R2/R1) + R3/R1, from the offset error at 1 mV of offset",
        print: Print::Computed,
        netlist: TEE,
        device: &[("offset-voltage", "1 mV")],
        ask: Ask::Times(1000.0, &Ask::Worst("XU1", "offset-error")),
        printed: 1121.0,
        within: Within::Digit(0.001),
        ..BLANK
    },
    Case {
        id: "tee-equivalent",
        place: "R2 + R3 + R2 R3 / R4, the feedback resistor that the network stands for",
        print: Print::Computed,
        netlist: TEE,
        ask: Ask::Times(-10e3, &Ask::Ideal("XU1", "i")),
        printed: 10.2e6,
        within: Within::Digit(0.01e6),
        ..BLANK
    },
    Case {
        id: "two-op-amps-gain",
        place: "1 + R2/R1 + 2 R2/RG",
        print: Print::Computed,
        netlist: TWO_OP_AMPS,
        ask: Ask::Actual("XU2", "b"),
        printed: 21.0,
        within: Within::Digit(0.001),
        ..BLANK
    },
    Case {
        id: "two-op-amps-gain-inverting",
        place: "-(1 + R2/R1 + 2 R2/RG)",
        print: Print::Computed,
        netlist: TWO_OP_AMPS,
        ask: Ask::Actual("XU2", "a"),
        printed: -21.0,
        within: Within::Digit(0.001),
        ..BLANK
    },
    Case {
        id: "two-op-amps-first-output",
        place: "1 + R1/R2, times the common mode: both inputs' transfers to the first output",
        print: Print::Computed,
        netlist: TWO_OP_AMPS,
        ask: Ask::Sum(&[Ask::Ideal("XU1", "a"), Ask::Ideal("XU1", "b")]),
        printed: 1.25,
        within: Within::Digit(0.0001),
        ..BLANK
    },
];
