//! The two legs of a differential signal at a stage's output.

use crate::figure::linear::axes;
use crate::figure::stage::{LegsFrom, Main, Stage, Transfer};
use crate::figure::study::{Axis, Quantity};
use crate::solve::{Excitation, List, Solved, along, values_at};

/// Port voltages for one volt at the positive and at the negative leg.
#[derive(Debug, Clone)]
pub(super) struct Legs {
    pub positive: List<f64>,
    pub negative: List<f64>,
    /// Index of the declared pair, where the legs are a pair's.
    pub pair: Option<usize>,
}

impl Legs {
    /// The legs of a stage: of a declared pair at its own ports or, through an earlier pair of op amps, at
    /// theirs; else the two signals of a difference stage.
    pub(super) fn of(stage: &Stage, transfers: &[Transfer], from: LegsFrom) -> Option<Legs> {
        if from == LegsFrom::Nowhere {
            return None;
        }
        let ports = stage.model().ports.len();
        let one = |port: usize| {
            let mut held = List::from_elem(0.0, ports);
            held[port] = 1.0;
            held
        };
        let declared = transfers.iter().find_map(|transfer| match transfer.input.from {
            Main::Pair(at, positive, negative) => Some((at, positive, negative)),
            _ => None,
        });
        if let Some((at, positive, negative)) = declared {
            return Some(Legs { positive: one(positive), negative: one(negative), pair: Some(at) });
        }
        if let Some(legs) = Legs::upstream(stage) {
            return Some(legs);
        }
        let signals: Vec<&Transfer> = transfers
            .iter()
            .filter(|transfer| transfer.input.signal && matches!(transfer.input.from, Main::Port(_)))
            .collect();
        let [a, b] = signals.as_slice() else { return None };
        let port = |transfer: &Transfer| match transfer.input.from {
            Main::Port(port) => port,
            _ => 0,
        };
        if from == LegsFrom::Pair {
            return None;
        }
        let (above, below) = if b.ideal < a.ideal { (port(a), port(b)) } else { (port(b), port(a)) };
        Some(Legs { positive: one(above), negative: one(below), pair: None })
    }

    /// What a declared pair does to this stage's ports through earlier stages.
    fn upstream(stage: &Stage) -> Option<Legs> {
        let board = stage.board;
        let (at, difference) = board.circuit.pairs.iter().enumerate().find_map(|(at, pair)| {
            let difference = board.pair_difference(pair)?;
            let feeds = |primary: u32| {
                let ports = stage.model().ports.iter().filter(|port| port.input);
                ports.filter(|port| board.row(port).iter().any(|(known, _)| *known == primary)).count()
            };
            (2 <= feeds(difference)).then_some((at, difference))
        })?;
        let leg = |sign: f64| -> List<f64> {
            let of = |port| -> f64 {
                let entry = |wanted: u32| {
                    board
                        .row(port)
                        .iter()
                        .find(|(known, _)| *known == wanted)
                        .map_or(0.0, |(_, entry)| *entry)
                };
                // A volt at one leg is half a volt of mean and a volt of difference.
                entry(difference + 1) / 2.0 + sign * entry(difference)
            };
            stage.model().ports.iter().map(of).collect()
        };
        Some(Legs { positive: leg(1.0), negative: leg(-1.0), pair: Some(at) })
    }
}

/// `scale * (Hp + Hn)`, or `2 (Hp + Hn) / (Hp - Hn)` where it is relative.
pub(super) struct CommonMode<'s> {
    pub stage: Stage<'s>,
    pub legs: Legs,
    pub scale: f64,
    pub relative: bool,
}

impl CommonMode<'_> {
    pub(super) fn axes(&self) -> Vec<Axis> {
        axes(self.stage.model(), false)
    }
}

impl Quantity for CommonMode<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let model = self.stage.model();
        let solved = Solved::new(&model.network, values_at(&model.nominal, &model.parameters, point)).ok()?;
        let weights = solved.adjoint(&[(self.stage.output(), 1.0)]);
        let drive = |sign: f64, gradient: &mut [f64]| {
            let legs = self.legs.positive.iter().zip(&self.legs.negative);
            let ports: List<f64> = legs.map(|(positive, negative)| positive + sign * negative).collect();
            let state = solved.forward(&Excitation { ports, ..Excitation::none() });
            along(&model.parameters, solved.values(), &solved.sensitivity(&state, &weights), gradient);
            state.volts(self.stage.output())
        };
        let common = drive(1.0, gradient);
        if !self.relative {
            gradient.iter_mut().for_each(|slope| *slope *= self.scale);
            return Some(self.scale * common);
        }
        let mut slopes = vec![0.0; gradient.len()];
        let difference = drive(-1.0, &mut slopes);
        let ratio = 2.0 * common / difference;
        for (slope, of_difference) in gradient.iter_mut().zip(slopes) {
            *slope = (2.0 * *slope - ratio * of_difference) / difference;
        }
        Some(ratio)
    }
}
