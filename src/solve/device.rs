//! What a profile says of one op amp on one board, in the coordinates of the ledger.

use crate::circuit::{Circuit, OpAmp};
use crate::device::{Catalogue, Key, Rank, Situation, Spread, bounds, spread};
use crate::solve::parameter::{Parameter, What};

/// Supplies of an op amp, volt, at their nominal values and with what they may deviate.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Supply {
    /// Nominal voltage of the positive and the negative pin.
    pub positive: f64,
    /// Nominal voltage of the negative pin.
    pub negative: f64,
    /// Deviation of each, to either side.
    pub deviation: (f64, f64),
    /// How far the nominal values can be trusted.
    pub rank: Rank,
    /// How far the deviations can be trusted.
    pub deviation_rank: Rank,
}

/// A range with its nominal value and rank.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Range {
    /// Nominal value.
    pub nominal: f64,
    /// Least value.
    pub low: f64,
    /// Greatest value.
    pub high: f64,
    /// How far it can be trusted.
    pub rank: Rank,
}

/// One op amp's linear model and what else its stage needs of it.
#[derive(Debug, Clone)]
pub struct Device {
    /// Whether there is no profile and no technology to go by.
    pub unknown: bool,
    /// Its supplies, where known.
    pub supply: Option<Supply>,
    /// 1/A.
    pub inverse_gain: Option<Range>,
    differential: Range,
    common: Range,
    output: Range,
}

impl Device {
    /// Reads the linear model of an op amp from its profile and the bounds of its technology.
    pub fn new(circuit: &Circuit, catalogue: &Catalogue, op_amp: &OpAmp, supply: Option<Supply>) -> Device {
        let situation = Situation {
            temperature: circuit.temperature,
            supply: supply.map(|supply| supply.positive - supply.negative),
            current: 0.0,
        };
        let profile = op_amp.profile.map(|at| &catalogue.profiles[at]);
        let find = |key: Key| -> Option<Spread> { spread(profile?, &catalogue.assumed, key, situation) };
        let bound = |key: Key| bounds(&catalogue.assumed, op_amp.technology, key);
        let conductance = |key: Key| match find(key) {
            Some(ohms) => inverse(&ohms),
            // The ideal value is nominal; the class bound is the worst.
            None => Range {
                nominal: 0.0,
                low: 0.0,
                high: bound(key).map_or(0.0, |(least, _)| 1.0 / least),
                rank: Rank::Assumed,
            },
        };
        let output = match find(Key::OutputResistance) {
            Some(ohms) => Range { nominal: ohms.nominal, low: ohms.low, high: ohms.high, rank: ohms.rank },
            None => {
                let (low, high) = bound(Key::OutputResistance).unwrap_or((0.0, 0.0));
                Range { nominal: 0.0, low, high, rank: Rank::Assumed }
            }
        };
        Device {
            unknown: profile.is_none() && op_amp.technology.is_none(),
            supply,
            inverse_gain: find(Key::OpenLoopGain).map(|gain| inverse(&gain)),
            differential: conductance(Key::InputResistance),
            common: conductance(Key::CommonModeResistance),
            output,
        }
    }

    /// The parameters of its linear model as the amplifier at `place` of a network; a visitor has its
    /// input alone.
    pub fn parameters(&self, place: usize, member: bool) -> Vec<Parameter> {
        let make = |what: What, range: Range| Parameter {
            what,
            ideal: 0.0,
            nominal: range.nominal,
            low: range.low,
            high: range.high,
            rank: range.rank,
        };
        let mut parameters = Vec::with_capacity(4);
        if let (true, Some(gain)) = (member, self.inverse_gain) {
            parameters.push(make(What::InverseGain(place), gain));
        }
        parameters.push(make(What::Differential(place), self.differential));
        parameters.push(make(What::Common(place), self.common));
        if member {
            parameters.push(make(What::Output(place), self.output));
        }
        parameters
    }
}

fn inverse(spread: &Spread) -> Range {
    Range { nominal: 1.0 / spread.nominal, low: 1.0 / spread.high, high: 1.0 / spread.low, rank: spread.rank }
}
