//! Topic: how far inputs and outputs may go.
//!
//! The end of a range is where the headroom is nought: a range that ends before it, and the nominal headroom
//! that is left there, referred to the input.

use super::case::{Ask, BLANK, Case, Within};
use super::source::{FRANCO, Print, SBOA583};

/// Supplies and common-mode range as the brief's printed limits imply them.
const SBOA583_RAILS: &str = "{ VCC: 12 V +/- 0 V, VEE: -5 V +/- 0 V }";
const SBOA583_INPUTS: &[(&str, &str)] = &[("input-below-positive", "1.4 V"), ("input-above-negative", "1 V")];

/// The load hangs in the feedback loop; both examples have 5 V over 10 kohm, 0.5 mA.
const FLOATING_LOAD: &[&str] = &["V1 i 0 5", "R m 0 10k", "RL o m 10k", "XU1 i m VCC VEE o OPX"];
const SATURATION: &[(&str, &str)] = &[("swing-below-positive", "2 V"), ("swing-above-negative", "2 V")];

/// The rows.
pub const CASES: &[Case] = &[
    Case {
        id: "H4-hi",
        source: SBOA583,
        place: "section 2, figures 1-1 and 2-1",
        print: Print::Seen,
        netlist: &["V1 i 0 5", "XU1 i o VCC VEE o OPX"],
        device: SBOA583_INPUTS,
        rails: SBOA583_RAILS,
        ask: Ask::Sum(&[Ask::Given(5.0), Ask::Nominal("XU1", "input-headroom")]),
        printed: 10.6,
        within: Within::Digit(0.1),
        ..BLANK
    },
    Case {
        id: "H4-lo",
        source: SBOA583,
        place: "section 2, figures 1-1 and 2-1",
        print: Print::Seen,
        netlist: &["V1 i 0 -1", "XU1 i o VCC VEE o OPX"],
        device: SBOA583_INPUTS,
        rails: SBOA583_RAILS,
        ask: Ask::Sum(&[Ask::Given(-1.0), Ask::Times(-1.0, &Ask::Nominal("XU1", "input-headroom"))]),
        printed: -4.0,
        within: Within::Digit(0.1),
        ..BLANK
    },
    Case {
        id: "H4-g10",
        source: SBOA583,
        place: "section 2, figure 2-2",
        print: Print::Seen,
        netlist: &["V1 i 0 1", "R1 m 0 1k", "R2 o m 9k", "XU1 i m VCC VEE o OPX"],
        device: SBOA583_INPUTS,
        rails: SBOA583_RAILS,
        ask: Ask::Sum(&[Ask::Given(1.0), Ask::Times(0.1, &Ask::Nominal("XU1", "output-headroom"))]),
        printed: 1.2,
        within: Within::Digit(0.1),
        ..BLANK
    },
    Case {
        id: "H4-g10-lo",
        source: SBOA583,
        place: "section 2, figure 2-2",
        print: Print::Seen,
        netlist: &["V1 i 0 -0.1", "R1 m 0 1k", "R2 o m 9k", "XU1 i m VCC VEE o OPX"],
        device: SBOA583_INPUTS,
        rails: SBOA583_RAILS,
        ask: Ask::Sum(&[Ask::Given(-0.1), Ask::Times(-0.1, &Ask::Nominal("XU1", "output-headroom"))]),
        printed: -0.5,
        within: Within::Digit(0.1),
        ..BLANK
    },
    Case {
        id: "H3-vl",
        source: FRANCO,
        place: "chapter 2, example 2.3, p. 65 (largest load voltage)",
        netlist: FLOATING_LOAD,
        device: SATURATION,
        ask: Ask::Sum(&[Ask::Given(5.0), Ask::Nominal("XU1", "output-headroom")]),
        printed: 8.0,
        within: Within::Digit(0.1),
        ..BLANK
    },
    Case {
        id: "H3-rl",
        source: FRANCO,
        place: "chapter 2, example 2.3, p. 65 (largest load resistance)",
        netlist: FLOATING_LOAD,
        device: SATURATION,
        ask: Ask::Sum(&[Ask::Given(10e3), Ask::Times(2e3, &Ask::Nominal("XU1", "output-headroom"))]),
        printed: 16e3,
        within: Within::Digit(1e3),
        ..BLANK
    },
];
