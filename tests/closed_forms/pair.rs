//! The pair of an instrumentation amplifier: two op amps in one block.
//!
//! By symmetry the pair falls apart into two forms: the difference of both signals sees
//! `beta = Rg / (Rg + 2 Rf)`, their mean sees `beta = 1`. Each output is half the sum or difference of both.

use super::form::{A, Form, bias_error, closed, input_headroom, output_headroom, spread};

#[test]
fn instrumentation() {
    let (rg, rf) = (1e3, 12e3);
    let difference = closed(rg / (rg + 2.0 * rf));
    let common = closed(1.0);
    let (own, other) = ((common + difference) / 2.0, (common - difference) / 2.0);
    // Loop gain of the first with the second at work: the second holds its own input near 0 V, where
    // n2 = n1 / (1 + (1 + A) Rg / Rf).
    let held = 1.0 / (1.0 + (1.0 + A) * rg / rf);
    let returned = (1.0 / rf) / (1.0 / rf + 1.0 / rg - held / rg);
    // A current into the inverting inputs, alike or opposed.
    let alike = -rf * common;
    let opposed = -A / (2.0 / rg + (1.0 + A) / rf);
    let (first, second) = ((alike + opposed) / 2.0, (alike - opposed) / 2.0);
    let output = (own - other) * 0.2;
    // General gain of the first from its own signal with three resistors: nodal equations of both inputs
    // with V = A (v - n).
    let gain = |by: &[f64]| {
        let [g, f1, f2] = [1.0 / (rg * by[0]), 1.0 / (rf * by[1]), 1.0 / (rf * by[2])];
        let n2 = g / (g + f2 * (1.0 + A));
        let n1 = f1 * A / (g + f1 * (1.0 + A) - g * n2);
        A * (1.0 - n1)
    };
    Form {
        netlist: "Rf1 o m 12k\nRg m q 1k\nRf2 r q 12k\nXU1 a m VCC VEE o PART\nXU2 b q VCC VEE r PART",
        signals: "  a: { range: -0.2 V .. 0.2 V }\n  b: { range: -0.2 V .. 0.2 V }",
        topology: "instrumentation",
        main: ("a", (1.0 + 1.0 + 2.0 * rf / rg) / 2.0, own),
        figures: &[
            ("loop-gain", A * returned),
            ("bias-error", bias_error(0.0, first) + bias_error(0.0, second)),
            ("output-headroom", output_headroom(-output, output)),
            ("input-headroom", input_headroom(-0.2, 0.2)),
            ("gain-spread", spread(3, gain)),
        ],
    }
    .holds();
}
