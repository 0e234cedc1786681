//! Output headroom: how far the output stays from its swing limits.

use crate::device::Key;
use crate::figure::range::Drive;
use crate::figure::stage::Stage;
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use crate::solve::Solved;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "output-headroom",
    title: "output headroom",
    unit: Unit::Volt,
    bad: Bad::Low,
    physics: "An output comes near its rails only so far, less far the more current it gives. Beyond that the loop opens: the signal is clipped and the inputs leave each other.",
    formula: "The least distance, over the ranges of all signals, between the output and V+ less the swing distance above, V- plus the swing distance below. Nominal: signals alone. Worst: offsets, bias currents, rails, tolerances and earlier stages' errors too, all the way that hurts.",
    source: "The device's datasheet, output swing at the next heavier load.",
    worse: "More gain than the rails allow, low rails, heavy loads, a signal that asks for the zero of a single supply.",
    cure: "lower the gain or the range, raise the rail, lighten the load, or take an op amp whose output comes nearer to its rails",
};

pub(super) fn compute(stage: &Stage, drive: &Drive) -> Figure {
    distances(stage, drive).unwrap_or_else(|reason| Figure::unknown(Kind::OutputHeadroom, reason))
}

fn distances(stage: &Stage, drive: &Drive) -> Result<Figure, String> {
    let bounds =
        stage.bounds().ok_or_else(|| format!("the supplies of {} are not known", stage.part().name))?;
    let ends = drive.ends.as_ref().map_err(|name| format!("the range of {name} is not declared"))?;
    let model = stage.model();
    let solved = Solved::new(&model.network, model.nominal.clone());
    let solved = solved.map_err(|_| "its equations have no solution".to_owned())?;
    let mut extras = stage.bias_currents()?;
    extras.extend(stage.offsets(&drive.rest)?);
    extras.extend(stage.upstream());
    let mut distances = Vec::with_capacity(2);
    for (bound, end) in bounds.into_iter().zip(ends) {
        let excitation = stage.excited(end);
        let out = solved.leaving(&solved.forward(&excitation))[stage.member];
        let (key, current) =
            if bound.high { (Key::SwingBelowPositive, out) } else { (Key::SwingAboveNegative, -out) };
        distances.push(stage.distance(stage.output(), bound, (key, current), excitation, extras.clone())?);
    }
    Ok(stage.least(Kind::OutputHeadroom, &distances, drive.rank))
}
