//! Currents as shares of the rated output current: what both loading figures share.

use crate::device::{Key, Rank};
use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::range::{Extreme, extremes};
use crate::figure::stage::{Main, Stage};
use crate::figure::study::{Axis, Quantity, study};
use crate::figure::{Bad, Figure, Item, Kind, Quality};
use crate::solve::{Excitation, Solved};

/// The rated output current, ampere.
#[derive(Debug, Clone, Copy)]
pub(super) struct Rated {
    /// The rating; a typical value where only one is printed.
    pub nominal: f64,
    /// What is guaranteed.
    pub low: f64,
    /// How far it can be trusted.
    pub rank: Rank,
}

/// A current over the rated one; the rated one is the last axis.
struct Share<'m> {
    current: Linear<'m>,
}

impl Quantity for Share<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let (own, rated) = point.split_at(point.len() - 1);
        let current = self.current.at(own, gradient)?;
        gradient.iter_mut().for_each(|slope| *slope /= rated[0]);
        gradient[own.len()] = -current / (rated[0] * rated[0]);
        Some(current / rated[0])
    }
}

/// The figure of a peak current as a share of the rated one: of the current into the feedback network,
/// or of all that leaves the output.
pub(super) fn compute(kind: Kind, stage: &Stage, from: Option<Main>) -> Figure {
    share(kind, stage, from).unwrap_or_else(|reason| Figure::unknown(kind, reason))
}

fn share(kind: Kind, stage: &Stage, from: Option<Main>) -> Result<Figure, String> {
    let rated = rated(stage)
        .ok_or_else(|| format!("the profile of {} gives no output current", stage.part().name))?;
    let model = stage.model();
    let touches = |node| node == stage.output();
    if kind == Kind::OutputCurrent
        && model.network.shorts.iter().any(|short| touches(short.a) || touches(short.b))
    {
        return Err("an inductor or a floating source hangs on the output".to_owned());
    }
    let reading = match kind {
        Kind::OutputCurrent => {
            Reading::Current { from: stage.output(), branches: model.network.branches.len(), whole: true }
        }
        _ => Reading::Current { from: stage.output(), branches: model.feedback_branches, whole: false },
    };
    let current = |sign: f64, excitation: Excitation<f64>| Linear {
        model,
        twin: false,
        reading: reading.clone(),
        constant: 0.0,
        sign,
        excitation,
        extras: Vec::new(),
    };
    // What draws from the output by itself belongs to the whole current, but to no branch.
    let drained = if kind == Kind::OutputCurrent { stage.drained() } else { Vec::new() };
    let row = stage
        .row_of(&current(1.0, Excitation::none()))
        .ok_or_else(|| "its equations have no solution".to_owned())?;
    let row = stage.board.compose(stage.block, &[], &[row, drained.clone()].concat());
    let taken = |end: &Extreme| -> f64 {
        drained.iter().map(|(primary, amps)| amps * stage.value_at(end, *primary)).sum()
    };
    let (excitation, sign, beside, bound) = match extremes(stage.board, &row).0 {
        Ok([low, high]) => {
            let end = if high.reached.abs() < low.reached.abs() { &low } else { &high };
            (stage.excited(end), if end.reached < 0.0 { -1.0 } else { 1.0 }, taken(end), false)
        }
        Err(name) => {
            let missing = || format!("the range of {name} is not declared");
            let (excitation, sign) =
                full_swing(stage, from, &current(1.0, Excitation::none())).ok_or_else(missing)?;
            (excitation, sign, taken(&Extreme::default()), true)
        }
    };
    let mut axes = axes(model, false);
    axes.push(Axis {
        base: rated.nominal,
        nominal: rated.nominal,
        typical: rated.nominal,
        low: rated.low,
        high: rated.nominal,
        rank: rated.rank,
    });
    let quantity = Share { current: Linear { constant: sign * beside, ..current(sign, excitation) } };
    let found = study(&quantity, &axes, Bad::High)
        .ok_or_else(|| "its equations have no solution at the worst corner".to_owned())?;
    let items = [Item::OpAmp(stage.op_amp, Quality::RatedCurrent)];
    let figure = stage.figure_of(kind, &quantity, &axes, &found, &items, false);
    let rests_on = if bound { Rank::Assumed } else { Rank::Guaranteed };
    Ok(Figure { bound, rests_on, ..figure })
}

/// The main port driven so far that the output takes its whole guaranteed swing, the others at 0.
fn full_swing(stage: &Stage, from: Option<Main>, current: &Linear) -> Option<(Excitation<f64>, f64)> {
    let from = from?;
    let (low, high) = stage.guaranteed_swing()?;
    let model = stage.model();
    let solved = Solved::new(&model.network, model.nominal.clone()).ok()?;
    let gain = stage.transfer(&solved, &solved.adjoint(&[(stage.output(), 1.0)]), from);
    let volts = if low.abs() < high.abs() { high } else { low };
    let mut excitation = stage.unit(from);
    excitation.ports.iter_mut().for_each(|port| *port *= volts / gain);
    excitation.injections.iter_mut().for_each(|(_, amps)| *amps *= volts / gain);
    let mut gradient = vec![0.0; model.parameters.len()];
    let point: Vec<f64> = model.parameters.iter().map(|parameter| parameter.nominal).collect();
    let reached = Linear { excitation: excitation.clone(), ..current.clone() }.at(&point, &mut gradient)?;
    Some((excitation, if reached < 0.0 { -1.0 } else { 1.0 }))
}

impl Stage<'_> {
    /// The rated output current, ampere.
    pub(super) fn rated_current(&self) -> Option<f64> {
        rated(self).map(|rated| rated.nominal)
    }
}

/// The rated output current of a stage's device.
pub(super) fn rated(stage: &Stage) -> Option<Rated> {
    if let Some(current) = stage.spread(Key::OutputCurrent, 0.0) {
        // A guaranteed current is the rating; a typical one alone is derated in the worst case.
        let nominal = if current.rank == Rank::Guaranteed { current.low } else { current.nominal };
        return Some(Rated { nominal, low: current.low, rank: current.rank });
    }
    if let (Some(load), Some(supply)) = (stage.spread(Key::RatedLoad, 0.0), stage.device().supply) {
        let current = (supply.positive - supply.negative) / 2.0 / load.nominal;
        let above = stage.spread(Key::SwingAboveNegative, current);
        let below = stage.spread(Key::SwingBelowPositive, current);
        if let (Some(above), Some(below)) = (above, below) {
            let swing = supply.positive - supply.negative - above.high - below.high;
            let rank = above.rank.max(below.rank).max(supply.rank);
            let rated = swing / 2.0 / load.nominal;
            return (0.0 < rated).then_some(Rated { nominal: rated, low: rated, rank });
        }
    }
    let short = stage.spread(Key::ShortCircuitCurrent, 0.0)?;
    Some(Rated { nominal: short.low / 2.0, low: short.low / 2.0, rank: short.rank })
}
