//! What moves an output beyond its signals, to first order: for the stages that it feeds.

use crate::block::{AmpId, Role};
use crate::device::Rank;
use crate::figure::linear::axes;
use crate::figure::range::{Drive, Extreme};
use crate::figure::stage::Stage;
use crate::figure::study::Quantity;
use crate::solve::Board;

/// The deviation of every amplifier's output that feeds another block, volt, with the worst rank of what
/// makes up a tenth of it or more: bias, offsets, tolerances, rails and what earlier stages add, summed at
/// the extreme where the sum is larger.
pub fn deviations(board: &Board) -> Vec<(f64, Rank)> {
    let mut feeds = vec![false; board.layout.amps.len()];
    for port in board.models.iter().flat_map(|model| &model.ports) {
        if let (Role::Output(amp), true) = (port.role, port.input) {
            feeds[amp.0 as usize] = true;
        }
    }
    let mut found = vec![(0.0, Rank::Guaranteed); board.layout.amps.len()];
    for block in &board.layout.blocks {
        for amp in block.members.iter().filter(|amp| feeds[amp.0 as usize] && board.solved(**amp)) {
            found[amp.0 as usize] = deviation(board, &found, *amp);
        }
    }
    found
}

fn deviation(board: &Board, known: &[(f64, Rank)], amp: AmpId) -> (f64, Rank) {
    let (block, member) = board.place[amp.0 as usize];
    // A controlled source has no device; any op amp's index serves where none of its own data is read.
    let op_amp = board.layout.amp(amp).op_amp.unwrap_or(0);
    let stage = Stage { board, block, member, op_amp, deviations: known, trials: 0 };
    let drive = Drive::of(&stage);
    let mut incomplete = false;
    let mut extras = stage.bias_currents().unwrap_or_else(|_| {
        incomplete = true;
        Vec::new()
    });
    match stage.offsets(&drive.rest) {
        Ok(offsets) => extras.extend(offsets),
        Err(_) => incomplete = true,
    }
    extras.extend(stage.rail_extras(None));
    extras.extend(stage.upstream());
    let mut all = axes(stage.model(), false);
    all.extend(extras.iter().map(|extra| extra.axis));
    let point: Vec<f64> = all.iter().map(|axis| axis.nominal).collect();
    let resting = [Extreme::default()];
    let ends = drive.ends.as_ref().map_or(&resting[..], |ends| &ends[..]);
    let mut worst = (0.0, Rank::Guaranteed);
    for end in ends {
        let linear = stage.reading(stage.output(), 1.0, 0.0, stage.excited(end), &extras);
        let mut gradient = vec![0.0; all.len()];
        if linear.at(&point, &mut gradient).is_none() {
            incomplete = true;
            continue;
        }
        let moves = || {
            gradient.iter().zip(&all).map(|(slope, axis)| {
                let reach = (axis.high - axis.nominal).abs().max((axis.low - axis.nominal).abs());
                ((slope * reach).abs(), axis.rank)
            })
        };
        let sum: f64 = moves().map(|(effect, _)| effect).sum();
        let rank = moves().filter(|(effect, _)| sum / 10.0 < *effect).map(|(_, rank)| rank).max();
        if worst.0 < sum {
            worst = (sum, rank.unwrap_or(Rank::Guaranteed));
        }
    }
    (worst.0, if incomplete { Rank::Assumed } else { worst.1 })
}
