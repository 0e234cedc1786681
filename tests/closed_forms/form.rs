//! The op amp of all forms, and how a form is compared with the report.

use crate::support::{check, stage};
use serde_json::Value;

/// Open-loop gain.
pub const A: f64 = 2e4;
/// Bias current, ampere, typical.
const BIAS: f64 = 20e-9;
/// Offset current, ampere, typical.
const OFFSET: f64 = 4e-9;
/// Offset voltage, volt, typical.
const VOS: f64 = 0.2e-3;
/// Common-mode rejection, typical: 100 dB.
const CMRR: f64 = 1e5;
/// How near the output comes to either rail, volt, typical.
const SWING: f64 = 1.0;
/// How near the inputs may come to either rail, volt, typical.
const INPUT: f64 = 1.5;
/// Rated output current, ampere.
const RATED: f64 = 0.01;
/// Supplies, volt, to either side.
const RAIL: f64 = 12.0;
/// Tolerance of every resistor.
pub const TOLERANCE: f64 = 0.01;

const DEVICE: &str = "- device: PART
  technology: bipolar
  sections: 1
  pins: [non-inverting, inverting, positive-supply, negative-supply, output]
  source: invented
  parameters:
    open-loop-gain: { min: 5000, typ: 2e4 }
    bias-current: { typ: 20 nA, max: 60 nA }
    offset-current: { typ: 4 nA, max: 10 nA }
    offset-voltage: { typ: 0.2 mV, max: 1 mV }
    common-mode-rejection: { min: 80 dB, typ: 100 dB }
    supply-rejection: { min: 80 dB, typ: 100 dB }
    swing-below-positive: { typ: 1 V, max: 2 V }
    swing-above-negative: { typ: 1 V, max: 2 V }
    input-below-positive: { typ: 1.5 V, max: 2 V }
    input-above-negative: { typ: 1.5 V, max: 2 V }
    output-current: { min: 10 mA, typ: 20 mA }
";

/// `K` of a feedback share.
pub fn closed(beta: f64) -> f64 {
    1.0 / (beta + 1.0 / A)
}

/// Two resistors in parallel.
pub fn parallel(a: f64, b: f64) -> f64 {
    1.0 / (1.0 / a + 1.0 / b)
}

/// Bias error from the transresistances of both pins.
pub fn bias_error(plus: f64, minus: f64) -> f64 {
    BIAS * (plus + minus).abs() + OFFSET / 2.0 * (plus - minus).abs()
}

/// Offset error: K times the offset voltage and the resting common mode over the rejection.
pub fn offset_error(beta: f64, common: f64) -> f64 {
    closed(beta) * (VOS + common.abs() / CMRR)
}

/// Distance of an output that spans `low` to `high` from its swing limits.
pub fn output_headroom(low: f64, high: f64) -> f64 {
    (RAIL - SWING - high).min(low - (-RAIL + SWING))
}

/// Distance of inputs that span `low` to `high` from the common-mode range.
pub fn input_headroom(low: f64, high: f64) -> f64 {
    (RAIL - INPUT - high).min(low - (-RAIL + INPUT))
}

/// A current as a share of the rated one.
pub fn loading(amps: f64) -> f64 {
    amps.abs() / RATED
}

/// The worst spread of a gain over all corners of `count` resistors, given their factors.
pub fn spread(count: u32, gain: impl Fn(&[f64]) -> f64) -> f64 {
    let nominal = gain(&vec![1.0; count as usize]);
    let corner = |signs: u32| -> f64 {
        let factor = |at: u32| if signs >> at & 1 == 0 { 1.0 - TOLERANCE } else { 1.0 + TOLERANCE };
        gain(&(0..count).map(factor).collect::<Vec<_>>()) / nominal - 1.0
    };
    (0..1 << count)
        .map(corner)
        .fold(0.0, |worst: f64, next| if worst.abs() < next.abs() { next } else { worst })
}

/// One stage and what it should be.
pub struct Form<'f> {
    /// Elements, supplies and title aside.
    pub netlist: &'f str,
    /// Ranges of signals: YAML entries.
    pub signals: &'f str,
    /// Its topology.
    pub topology: &'f str,
    /// Transfer from the main port: its name, the twin's, the real one.
    pub main: (&'f str, f64, f64),
    /// Figures: slug and nominal value; a gain spread has its worst case instead.
    pub figures: &'f [(&'f str, f64)],
}

impl Form<'_> {
    /// Compares the report of stage XU1 with the form.
    #[track_caller]
    pub fn holds(&self) {
        let netlist = format!("a form\nVP VCC 0 12\nVN VEE 0 -12\n{}\n.end\n", self.netlist);
        let budget = format!(
            "rails: {{ VCC: 12 V +/- 0 V, VEE: -12 V +/- 0 V }}\ntolerance: {{ resistor: 1 % }}\nsignals:\n{}\n",
            self.signals
        );
        let board = check(&netlist, &budget, DEVICE);
        let stage = stage(&board, "XU1");
        assert_eq!(stage["topology"], self.topology, "{}", self.netlist);
        let (input, ideal, actual) = self.main;
        let main = &stage["transfers"][0];
        assert_eq!(main["input"], input);
        near("ideal", &main["ideal"], ideal);
        near("actual", &main["actual"], actual);
        near("gain-error", &stage["figures"]["gain-error"]["nominal"], actual / ideal - 1.0);
        for (slug, value) in self.figures {
            let figure = &stage["figures"][slug];
            if *slug == "gain-spread" {
                // Both sides may be equally bad, but for rounding.
                near(slug, &figure["worst"].as_f64().map(f64::abs).into(), value.abs());
            } else {
                near(slug, &figure["nominal"], *value);
            }
        }
    }
}

/// Errors are differences of nearly equal numbers: what is left of 1e-16 in them is allowed.
#[track_caller]
fn near(what: &str, found: &Value, expected: f64) {
    let number = found.as_f64().unwrap_or_else(|| panic!("{what} is {found}, expected {expected}"));
    let difference = (number - expected).abs();
    assert!(difference <= 1e-9 * expected.abs() + 1e-14, "{what} is {number}, expected {expected}");
}
