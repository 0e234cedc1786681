//! Ranges: where the primary signals drive a quantity lowest and highest, and what a stage's pins do there.

use crate::device::{Key, Rank, Situation, spread};
use crate::figure::linear::Linear;
use crate::figure::stage::Stage;
use crate::solve::{Board, Excitation, Node, PrimaryKind, Row, Solved};

/// An output that moves less than this share of its swing only carries what leaks into it from elsewhere: it
/// is a reference's, and its span is no measure.
const LEAST_SPAN: f64 = 1e-4;

/// A primary whose share in a quantity is smaller than this need not have a known range.
const NEGLIGIBLE: f64 = 1e-6;

/// Values of the primaries that drive a quantity to one end; all others rest.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Extreme {
    /// Primary and value, in rising order of the primaries.
    pub values: Vec<(u32, f64)>,
    /// The quantity there.
    pub reached: f64,
}

/// Voltages of a stage's pins at one extreme of its output, volt.
#[derive(Debug, Clone, PartialEq)]
pub struct PinVoltages {
    /// Whether it is the high end.
    pub high: bool,
    /// Non-inverting input.
    pub plus: f64,
    /// Inverting input.
    pub minus: f64,
    /// Output.
    pub out: f64,
    /// Non-inverting less inverting input.
    pub difference: f64,
    /// Output of the twin.
    pub twin_out: f64,
}

/// How a stage's output is driven over the declared ranges.
#[derive(Debug, Clone)]
pub(super) struct Drive {
    /// Lowest and highest, or the name of a primary whose range is missing.
    pub ends: Result<[Extreme; 2], String>,
    /// Worst rank of the ranges that matter.
    pub rank: Rank,
    /// State of the ports at rest.
    pub rest: Excitation<f64>,
}

impl Drive {
    pub(super) fn of(stage: &Stage) -> Drive {
        let row = stage.output_row();
        let (ends, rank) = extremes(stage.board, &row);
        let rest = stage.excited(&Extreme::default());
        Drive { ends, rank, rest }
    }

    /// What the pins do at both ends.
    pub(super) fn pins(&self, stage: &Stage) -> Vec<PinVoltages> {
        let Ok(ends) = &self.ends else { return Vec::new() };
        let model = stage.model();
        let real = Solved::new(&model.network, model.nominal.clone()).ok();
        let (Some(real), Some(twin)) = (real, stage.twin(&model.nominal)) else { return Vec::new() };
        let (plus, minus) = stage.inputs();
        let pins = ends.iter().zip([false, true]).map(|(end, high)| {
            let excitation = stage.excited(end);
            let state = real.forward(&excitation);
            PinVoltages {
                high,
                plus: state.volts(plus),
                minus: state.volts(minus),
                out: state.volts(stage.output()),
                difference: state.volts(plus) - state.volts(minus),
                twin_out: twin.forward(&excitation).volts(stage.output()),
            }
        });
        pins.collect()
    }

    /// The declared output span, else the guaranteed swing between the rails; with whether it is declared.
    pub(super) fn span(&self, stage: &Stage) -> Option<(f64, bool)> {
        let swing = stage.guaranteed_swing().map(|(low, high)| high - low).filter(|swing| 0.0 < *swing);
        let least = swing.unwrap_or(1.0) * LEAST_SPAN;
        match &self.ends {
            Ok([low, high]) if least < high.reached - low.reached => Some((high.reached - low.reached, true)),
            _ => swing.map(|swing| (swing, false)),
        }
    }
}

/// Where a row is lowest and highest over the ranges of the primaries; the name of a primary whose range
/// is missing where that can't be told.
pub(super) fn extremes(board: &Board, row: &Row) -> (Result<[Extreme; 2], String>, Rank) {
    let most = row.iter().fold(0.0f64, |most, (_, entry)| most.max(entry.abs()));
    let mut ends = [Extreme::default(), Extreme::default()];
    let mut rank = Rank::Guaranteed;
    for (at, entry) in row {
        let primary = &board.primaries[*at as usize];
        let (low, high) = match primary.range {
            Some(range) => range,
            None if entry.abs() <= NEGLIGIBLE * most => (primary.rest, primary.rest),
            None => return (Err(primary.name.clone()), Rank::Assumed),
        };
        rank = rank.max(primary.rank);
        let (down, up) = if *entry < 0.0 { (high, low) } else { (low, high) };
        for (end, value) in ends.iter_mut().zip([down, up]) {
            end.values.push((*at, value));
            end.reached += entry * value;
        }
    }
    (Ok(ends), rank)
}

/// A rail's primary, its deviation with its rank, and the ports it moves with their shares.
pub(super) type RailMoves = (u32, f64, Rank, Vec<(usize, f64)>);

impl Stage<'_> {
    /// The output's transfers from the board's primaries.
    pub(super) fn output_row(&self) -> Row {
        let amp = self.cut().members[self.member];
        self.board.rows[amp.0 as usize].clone()
    }

    /// The row of any reading of this block.
    pub(super) fn row_of(&self, linear: &Linear) -> Option<Row> {
        let model = self.model();
        let solved = Solved::new(&model.network, model.nominal.clone()).ok()?;
        let (ports, currents, constant) = linear.transfers(&solved);
        let weight = |node: Node| match node {
            Node::Unknown(at) => currents[at as usize],
            Node::Ground | Node::Port(_) => 0.0,
        };
        let own = self.board.own(self.block, weight, constant);
        Some(self.board.compose(self.block, &ports, &own))
    }

    /// The value of a primary at one end of a quantity.
    pub(super) fn value_at(&self, end: &Extreme, primary: u32) -> f64 {
        match end.values.binary_search_by_key(&primary, |(at, _)| *at) {
            Ok(found) => end.values[found].1,
            Err(_) => self.board.primaries[primary as usize].rest,
        }
    }

    /// What draws from the stage's output by itself: primary and the current that leaves for one unit of it.
    pub(super) fn drained(&self) -> Vec<(u32, f64)> {
        let drains = self.model().drains.iter().filter(|drain| Node::Unknown(drain.output) == self.output());
        drains.map(|drain| (self.board.primary_of_feed(drain.feed), drain.amps)).collect()
    }

    /// The block's excitation with the primaries at one end of a quantity.
    pub(super) fn excited(&self, end: &Extreme) -> Excitation<f64> {
        let board = self.board;
        let value = |primary: u32| self.value_at(end, primary);
        let port = |port| board.row(port).iter().map(|(at, entry)| entry * value(*at)).sum();
        let mut injections = smallvec::SmallVec::new();
        for ((into, from), at) in board.currents(self.block).zip(&self.cut().currents) {
            let amps = value(board.first_current as u32 + at);
            injections.push((into, amps));
            injections.push((from, -amps));
        }
        for drain in &self.model().drains {
            let amps = drain.amps * value(board.primary_of_feed(drain.feed));
            injections.push((Node::Unknown(drain.output), -amps));
        }
        Excitation {
            ports: self.model().ports.iter().map(port).collect(),
            errors: Default::default(),
            injections,
            constant: true,
        }
    }

    /// What a profile says of a parameter, with a given output current at the end that is asked for.
    pub(super) fn spread(&self, key: Key, current: f64) -> Option<crate::device::Spread<'_>> {
        let supply = self.device().supply.map(|supply| supply.positive - supply.negative);
        let situation = Situation { temperature: self.board.circuit.temperature, supply, current };
        spread(self.profile()?, &self.board.catalogue.assumed, key, situation)
    }

    /// The load at which the device's gain and swing are guaranteed, ohm.
    pub fn rated_load(&self) -> Option<(f64, Rank)> {
        self.spread(Key::RatedLoad, 0.0).map(|load| (load.nominal, load.rank))
    }

    /// The guaranteed swing at nominal rails under the lightest load: lowest and highest output voltage.
    pub(super) fn guaranteed_swing(&self) -> Option<(f64, f64)> {
        let supply = self.device().supply?;
        let above = self.spread(Key::SwingAboveNegative, 0.0)?.high;
        let below = self.spread(Key::SwingBelowPositive, 0.0)?.high;
        Some((supply.negative + above, supply.positive - below))
    }

    /// Ports' transfers from each rail that deviates: primary, deviation, rank, and the ports it moves.
    pub(super) fn rails(&self) -> Vec<RailMoves> {
        let mut rails: Vec<RailMoves> = Vec::new();
        for (at, port) in self.model().ports.iter().enumerate() {
            for (primary, entry) in self.board.row(port) {
                let rail = &self.board.primaries[*primary as usize];
                if rail.kind != PrimaryKind::Rail || rail.deviation <= 0.0 {
                    continue;
                }
                match rails.iter_mut().find(|(known, ..)| known == primary) {
                    Some((.., ports)) => ports.push((at, *entry)),
                    None => rails.push((*primary, rail.deviation, rail.deviation_rank, vec![(at, *entry)])),
                }
            }
        }
        rails.sort_by_key(|(primary, ..)| *primary);
        rails
    }
}
