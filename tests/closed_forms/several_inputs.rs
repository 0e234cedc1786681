//! Stages with several signals: summing, non-inverting summing, difference.

use super::form::{
    A, Form, bias_error, closed, input_headroom, loading, offset_error, output_headroom, parallel, spread,
};

#[test]
fn summing() {
    let (r1, r2, rf) = (20e3, 10e3, 40e3);
    // The gain from the second input, which is the larger one.
    let gain = |r1: f64, r2: f64, rf: f64| {
        let rg = parallel(r1, r2);
        -closed(rg / (rg + rf)) * parallel(rg, rf) / r2
    };
    let rg = parallel(r1, r2);
    let (beta, k) = (rg / (rg + rf), closed(rg / (rg + rf)));
    let (h1, h2) = (-k * parallel(rg, rf) / r1, gain(r1, r2, rf));
    let output = h1.abs() + h2.abs();
    Form {
        netlist: "R1 a m 20k\nR2 b m 10k\nRf o m 40k\nXU1 0 m VCC VEE o PART",
        signals: "  a: { range: -1 V .. 1 V }\n  b: { range: -1 V .. 1 V }",
        topology: "summing",
        main: ("b", -rf / r2, h2),
        figures: &[
            ("loop-gain", A * beta),
            ("bias-error", bias_error(0.0, -k * parallel(rg, rf))),
            ("offset-error", offset_error(beta, 0.0)),
            ("output-headroom", output_headroom(-output, output)),
            ("input-headroom", input_headroom(-output / A, output / A)),
            ("feedback-loading", loading((output + output / A) / rf)),
            ("gain-spread", spread(3, |by| gain(r1 * by[0], r2 * by[1], rf * by[2]))),
        ],
    }
    .holds();
}

#[test]
fn non_inverting_summing() {
    let (ra, rb, rg, rf) = (10e3, 30e3, 10e3, 30e3);
    // From the first input, which has the smaller resistor.
    let gain = |ra: f64, rb: f64, rg: f64, rf: f64| closed(rg / (rg + rf)) * rb / (ra + rb);
    let (beta, k) = (rg / (rg + rf), closed(rg / (rg + rf)));
    let output = k;
    Form {
        netlist: "Ra a p 10k\nRb b p 30k\nRg m 0 10k\nRf o m 30k\nXU1 p m VCC VEE o PART",
        signals: "  a: { range: -1 V .. 1 V }\n  b: { range: -1 V .. 1 V }",
        topology: "summing-non-inverting",
        main: ("a", rb / (ra + rb) / beta, gain(ra, rb, rg, rf)),
        figures: &[
            ("loop-gain", A * beta),
            ("bias-error", bias_error(k * parallel(ra, rb), -k * parallel(rg, rf))),
            ("offset-error", offset_error(beta, 0.0)),
            ("output-headroom", output_headroom(-output, output)),
            ("input-headroom", input_headroom(-1.0, 1.0)),
            ("feedback-loading", loading(output / (rg + rf))),
            ("gain-spread", spread(4, |by| gain(ra * by[0], rb * by[1], rg * by[2], rf * by[3]))),
        ],
    }
    .holds();
}

#[test]
fn difference() {
    let (r1, r2) = (10e3, 50e3);
    // Both gains of the twin are 5; of equals the inverting one is the main port's.
    let beta = r1 / (r1 + r2);
    let k = closed(beta);
    let (above, below) = (k * r2 / (r1 + r2), -k * r2 / (r1 + r2));
    // b low and a high: the output is highest; Vp follows a alone.
    let output = above + below.abs();
    let plus = r2 / (r1 + r2);
    let peak = |v: f64| (output - v) / r2;
    Form {
        netlist: "R1 b m 10k\nR2 o m 50k\nR3 a p 10k\nR4 p 0 50k\nXU1 p m VCC VEE o PART",
        signals: "  a: { range: -1 V .. 1 V }\n  b: { range: -1 V .. 1 V }",
        topology: "difference",
        main: ("b", -r2 / r1, below),
        figures: &[
            ("loop-gain", A * beta),
            ("bias-error", bias_error(k * parallel(r1, r2), -k * parallel(r1, r2))),
            ("offset-error", offset_error(beta, 0.0)),
            ("output-headroom", output_headroom(-output, output)),
            ("input-headroom", input_headroom(-plus, plus)),
            ("feedback-loading", loading(peak(plus - output / A))),
            (
                "gain-spread",
                spread(2, |by| {
                    closed(r1 * by[0] / (r1 * by[0] + r2 * by[1])) * r2 * by[1] / (r1 * by[0] + r2 * by[1])
                }),
            ),
        ],
    }
    .holds();
}
