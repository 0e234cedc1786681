//! The op amp of all stages and the budget around it.

/// Least, typical and greatest open-loop gain.
pub const GAIN: [f64; 3] = [4e3, 2e4, 1e5];
/// Least, typical and greatest resistance between the inputs, ohm.
pub const DIFFERENTIAL: [f64; 3] = [1e5, 5e5, 2e6];
/// Least, typical and greatest resistance from each input to ground, ohm.
pub const COMMON: [f64; 3] = [2e7, 1e8, 5e8];
/// Least, typical and greatest open-loop output resistance, ohm.
pub const OUTPUT: [f64; 3] = [40.0, 100.0, 400.0];
/// Greatest bias current, ampere.
pub const BIAS: f64 = 500e-9;
/// Greatest offset current, ampere.
pub const OFFSET: f64 = 200e-9;
/// Greatest offset voltage, volt.
pub const VOS: f64 = 3e-3;
/// Greatest drift, volt per kelvin.
pub const DRIFT: f64 = 10e-6;
/// Least rejections of common mode and supplies: 80 dB.
pub const REJECTION: f64 = 1e4;
/// Greatest distance of the output from either rail, volt.
pub const SWING: f64 = 1.8;
/// Greatest distance of the inputs from either rail, volt.
pub const INPUT: f64 = 2.0;
/// Least rated output current, ampere.
pub const RATED: f64 = 0.01;
/// Supplies, volt, to either side.
pub const RAIL: f64 = 12.0;
/// What either supply may deviate, volt.
pub const DEVIATION: f64 = 0.24;
/// From 25 degC to the farther end of the ambient range, kelvin.
pub const AWAY: f64 = 35.0;
/// Tolerance of every resistor.
pub const TOLERANCE: f64 = 0.02;

/// Its profile.
pub fn device() -> String {
    let range = |[low, usual, high]: [f64; 3], unit: &str| {
        format!("{{ min: {low:e}{unit}, typ: {usual:e}{unit}, max: {high:e}{unit} }}")
    };
    format!(
        "- device: PART
  technology: bipolar
  sections: 1
  pins: [non-inverting, inverting, positive-supply, negative-supply, output]
  source: invented
  parameters:
    open-loop-gain: {}
    input-resistance: {}
    common-mode-resistance: {}
    output-resistance: {}
    bias-current: {{ typ: 80 nA, max: 500 nA }}
    offset-current: {{ typ: 20 nA, max: 200 nA }}
    offset-voltage: {{ typ: 1 mV, max: 3 mV }}
    offset-drift: {{ typ: 3 uV/K, max: 10 uV/K }}
    common-mode-rejection: {{ min: 80 dB, typ: 90 dB }}
    supply-rejection: {{ min: 80 dB, typ: 96 dB }}
    swing-below-positive: {{ typ: 1 V, max: 1.8 V }}
    swing-above-negative: {{ typ: 1 V, max: 1.8 V }}
    input-below-positive: {{ typ: 1 V, max: 2 V }}
    input-above-negative: {{ typ: 1 V, max: 2 V }}
    output-current: {{ min: 10 mA, typ: 20 mA }}
",
        range(GAIN, ""),
        range(DIFFERENTIAL, " ohm"),
        range(COMMON, " ohm"),
        range(OUTPUT, " ohm"),
    )
}

/// The budget, signals aside.
pub const BUDGET: &str = "temperature: 0 degC .. 60 degC
rails: { VCC: 12 V +/- 2 %, VEE: -12 V +/- 2 % }
tolerance: { resistor: 2 % }
signals:
";
