//! The values that a block's figures depend on, each with its range, in the coordinates of the ledger:
//! 1/A, 1/Rid, 1/Rcm, Ro, and the logarithm of a resistor's ratio to its nominal value.

use crate::device::Rank;
use crate::solve::{Network, Values};
use smallvec::SmallVec;

/// What a parameter is. Amplifiers and branches by their place in the network.
#[derive(Debug, Clone, PartialEq)]
pub enum What {
    /// 1/A of an amplifier.
    InverseGain(usize),
    /// 1/Rid, siemens.
    Differential(usize),
    /// 1/Rcm, siemens.
    Common(usize),
    /// Ro, ohm.
    Output(usize),
    /// ln(R/Rnominal) of resistors that move together.
    Resistors(SmallVec<[u32; 2]>),
}

/// One parameter with its range.
#[derive(Debug, Clone, PartialEq)]
pub struct Parameter {
    /// What it is.
    pub what: What,
    /// Its value in the ideal circuit.
    pub ideal: f64,
    /// Its nominal value.
    pub nominal: f64,
    /// Least value.
    pub low: f64,
    /// Greatest value.
    pub high: f64,
    /// How far its range can be trusted.
    pub rank: Rank,
}

/// The values of a network at a point of the parameter space.
pub fn values_at(nominal: &Values<f64>, parameters: &[Parameter], point: &[f64]) -> Values<f64> {
    let mut values = nominal.clone();
    for (parameter, at) in parameters.iter().zip(point) {
        match &parameter.what {
            What::InverseGain(amp) => values.amps[*amp].inverse_gain = *at,
            What::Differential(amp) => values.amps[*amp].differential = *at,
            What::Common(amp) => values.amps[*amp].common = *at,
            What::Output(amp) => values.amps[*amp].output = *at,
            What::Resistors(branches) => {
                let factor = (-at).exp();
                branches.iter().for_each(|branch| values.siemens[*branch as usize] *= factor);
            }
        }
    }
    values
}

/// Sensitivities to a network's values, turned into sensitivities to its parameters.
pub fn along(
    parameters: &[Parameter],
    values: &Values<f64>,
    sensitivity: &crate::solve::Sensitivity<f64>,
    gradient: &mut [f64],
) {
    for (parameter, slot) in parameters.iter().zip(gradient) {
        *slot = match &parameter.what {
            What::InverseGain(amp) => sensitivity.amps[*amp][0],
            What::Differential(amp) => sensitivity.amps[*amp][1],
            What::Common(amp) => sensitivity.amps[*amp][2],
            What::Output(amp) => sensitivity.amps[*amp][3],
            What::Resistors(branches) => branches
                .iter()
                .map(|branch| -values.siemens[*branch as usize] * sensitivity.siemens[*branch as usize])
                .sum(),
        };
    }
}

/// A point at which every parameter has the value that `pick` gives.
pub fn point(parameters: &[Parameter], pick: impl Fn(&Parameter) -> f64) -> Vec<f64> {
    parameters.iter().map(pick).collect()
}

/// Whether a network's DC loop gain regenerates: its determinant has another sign than with dead
/// amplifiers, so that an odd number of real poles lies in the right half-plane (with one-pole
/// amplifiers, whatever their bandwidths).
pub fn regenerates(network: &Network<f64>, values: &Values<f64>) -> bool {
    let mut dead = values.clone();
    for amp in &mut dead.amps[..network.members] {
        // A controlled source may invert by itself: dead, it keeps its sign.
        amp.inverse_gain = 1e15f64.copysign(amp.inverse_gain);
    }
    // Later blocks' draws may be those of negative resistances: beside dead amplifiers they count for nothing.
    let unloaded = Network { loads: Vec::new(), ..network.clone() };
    let sign = |network: &Network<f64>, values: Values<f64>| {
        crate::solve::Solved::new(network, values).map(|solved| solved.sign())
    };
    matches!((sign(network, values.clone()), sign(&unloaded, dead)), (Ok(live), Ok(dead)) if live != dead)
}
