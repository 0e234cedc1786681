//! Stages with one signal: non-inverting, follower, inverting, T network, transimpedance.

use super::form::{
    A, Form, bias_error, closed, input_headroom, loading, offset_error, output_headroom, parallel, spread,
};

#[test]
fn non_inverting() {
    let (rs, rg, rf) = (10e3, 2e3, 18e3);
    let beta = |rg: f64, rf: f64| rg / (rg + rf);
    let (own, k) = (beta(rg, rf), closed(beta(rg, rf)));
    // At rest, in the middle of 0 V to 1 V, both inputs are near 0.5 V: Vn = Vp - Vo / A.
    let common = (0.5 + (0.5 - 0.5 * k / A)) / 2.0;
    Form {
        netlist: "Rs in p 10k\nRg m 0 2k\nRf o m 18k\nXU1 p m VCC VEE o PART",
        signals: "  in: { range: 0 V .. 1 V }",
        topology: "non-inverting",
        main: ("in", 1.0 + rf / rg, k),
        figures: &[
            ("loop-gain", A * own),
            ("bias-error", bias_error(k * rs, -k * parallel(rg, rf))),
            ("offset-error", offset_error(own, common)),
            ("output-headroom", output_headroom(0.0, k)),
            ("input-headroom", input_headroom(0.0, 1.0)),
            ("feedback-loading", loading(k / (rg + rf))),
            ("gain-spread", spread(2, |by| closed(beta(rg * by[0], rf * by[1])))),
        ],
    }
    .holds();
}

#[test]
fn follower() {
    let k = closed(1.0);
    let common = (3.0 + (3.0 - 3.0 * k / A)) / 2.0;
    Form {
        netlist: "Rs in p 47k\nXU1 p o VCC VEE o PART",
        signals: "  in: { range: -2 V .. 8 V }",
        topology: "follower",
        main: ("in", 1.0, k),
        figures: &[
            ("loop-gain", A),
            ("bias-error", bias_error(k * 47e3, 0.0)),
            ("offset-error", offset_error(1.0, common)),
            ("output-headroom", output_headroom(-2.0 * k, 8.0 * k)),
            ("input-headroom", input_headroom(-2.0, 8.0)),
            ("feedback-loading", 0.0),
            ("gain-spread", 0.0),
        ],
    }
    .holds();
}

#[test]
fn follower_with_a_current_sink() {
    // The sink's 4 mA flow through no resistor, yet they leave the output; with no output resistance they
    // move nothing.
    Form {
        netlist: "XU1 in o VCC VEE o PART\nRL o 0 1k\nI1 o 0 4m",
        signals: "  in: { range: -1 V .. 2 V }",
        topology: "follower",
        main: ("in", 1.0, closed(1.0)),
        figures: &[
            ("output-headroom", output_headroom(-closed(1.0), 2.0 * closed(1.0))),
            ("feedback-loading", 0.0),
            ("output-current", loading(2.0 * closed(1.0) / 1e3 + 4e-3)),
        ],
    }
    .holds();
}

#[test]
fn inverting() {
    let (r1, rf, rp) = (5e3, 100e3, 4.7e3);
    let gain = |r1: f64, rf: f64| -closed(r1 / (r1 + rf)) * rf / (r1 + rf);
    let (beta, k, h) = (r1 / (r1 + rf), closed(r1 / (r1 + rf)), gain(r1, rf));
    // The current into Rf is (Vo - Vn) / Rf with Vn = -Vo / A.
    let output = 0.4 * h.abs();
    Form {
        netlist: "R1 in m 5k\nRf o m 100k\nRp p 0 4.7k\nXU1 p m VCC VEE o PART",
        signals: "  in: { range: -0.4 V .. 0.4 V }",
        topology: "inverting",
        main: ("in", -rf / r1, h),
        figures: &[
            ("loop-gain", A * beta),
            ("bias-error", bias_error(k * rp, -k * parallel(r1, rf))),
            ("offset-error", offset_error(beta, 0.0)),
            ("output-headroom", output_headroom(-output, output)),
            ("input-headroom", input_headroom(-output / A, output / A)),
            ("feedback-loading", loading((output + output / A) / rf)),
            ("gain-spread", spread(2, |by| gain(r1 * by[0], rf * by[1]))),
        ],
    }
    .holds();
}

#[test]
fn t_network() {
    // R2 from the input to the middle, R3 from the output to the middle, R4 from the middle to ground.
    let values = [10e3, 100e3, 90e3, 2e3];
    let shares = |[r1, r2, r3, r4]: [f64; 4]| {
        let behind = r2 + parallel(r3, r4);
        (r4 / (r3 + r4) * r1 / (r1 + behind), behind / (r1 + behind))
    };
    let gain = |values: [f64; 4]| {
        let (beta, forward) = shares(values);
        -closed(beta) * forward
    };
    let [r1, r2, r3, r4] = values;
    let (beta, h) = (shares(values).0, gain(values));
    let (k, output) = (closed(beta), 0.05 * h.abs());
    // With Vn = -Vo / A the middle is at Vn - R2 (Vin - Vn) / R1.
    let minus = output / A;
    let middle = minus - r2 * (0.05 - minus) / r1;
    Form {
        netlist: "R1 in m 10k\nR2 m t 100k\nR3 o t 90k\nR4 t 0 2k\nXU1 0 m VCC VEE o PART",
        signals: "  in: { range: -50 mV .. 50 mV }",
        topology: "inverting",
        main: ("in", -(r2 + r3 + r2 * r3 / r4) / r1, h),
        figures: &[
            ("loop-gain", A * beta),
            ("bias-error", bias_error(0.0, -k * parallel(r1, r2 + parallel(r3, r4)))),
            ("offset-error", offset_error(beta, 0.0)),
            ("output-headroom", output_headroom(-output, output)),
            ("input-headroom", input_headroom(-minus, minus)),
            ("feedback-loading", loading((-output - middle) / r3)),
            ("gain-spread", spread(4, |by| gain([r1 * by[0], r2 * by[1], r3 * by[2], r4 * by[3]]))),
        ],
    }
    .holds();
}

#[test]
fn transimpedance() {
    let (rf, k) = (1e6, closed(1.0));
    let output = k * rf * 4e-6;
    Form {
        netlist: "Rf o m 1MEG\nXU1 0 m VCC VEE o PART",
        signals: "  pd: { net: m, range: 0 uA .. 4 uA }",
        topology: "transimpedance",
        main: ("pd", -rf, -k * rf),
        figures: &[
            ("loop-gain", A),
            ("bias-error", bias_error(0.0, -k * rf)),
            ("offset-error", offset_error(1.0, output / 2.0 / A / 2.0)),
            ("output-headroom", output_headroom(-output, 0.0)),
            ("input-headroom", input_headroom(0.0, output / A)),
            ("feedback-loading", loading(4e-6)),
            ("gain-spread", spread(1, |by| rf * by[0])),
        ],
    }
    .holds();
}
