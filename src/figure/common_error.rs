//! Common-mode error: what the declared common range makes at the output.

use crate::figure::legs::{CommonMode, Legs};
use crate::figure::stage::Stage;
use crate::figure::study::study;
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "common-error",
    title: "output error from the common mode",
    unit: Unit::Volt,
    bad: Bad::High,
    physics: "Rejection in decibels convinces nobody; the volts that a moving common mode makes at the output do.",
    formula: "|Hp + Hn| times half the declared common range of the pair, at the worst corner of the resistors.",
    source: "Common practice; see rejection.",
    worse: "A wide common range, wide tolerances, gain behind the difference stage.",
    cure: "match the ratios better, or keep the common mode still",
};

pub(super) fn compute(stage: &Stage, legs: Option<Legs>) -> Figure {
    let kind = Kind::CommonError;
    let pair = legs.as_ref().and_then(|legs| legs.pair);
    let (Some(legs), Some(pair)) = (legs, pair) else { return Figure::absent(kind, "no declared pair") };
    let pair = &stage.board.circuit.pairs[pair];
    let Some((low, high)) = pair.common else {
        return Figure::unknown(kind, format!("the common range of {} is not declared", pair.name));
    };
    let quantity = CommonMode { stage: *stage, legs, scale: (high - low) / 2.0, relative: false };
    let axes = quantity.axes();
    match study(&quantity, &axes, Bad::Either) {
        Some(found) => {
            let figure = stage.figure_of(kind, &quantity, &axes, &found, &[], true);
            let turn = if found.worst < 0.0 { -1.0 } else { 1.0 };
            let ledger =
                figure.ledger.iter().map(|line| crate::figure::Line { effect: turn * line.effect, ..*line });
            Figure {
                nominal: Some(found.nominal.abs()),
                worst: Some(found.worst.abs()),
                ledger: ledger.collect(),
                ..figure.clone()
            }
        }
        None => Figure::unknown(kind, "its equations have no solution at the worst corner"),
    }
}
