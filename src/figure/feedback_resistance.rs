//! Feedback resistance: what load the feedback network is to its own output.

use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::ratio::Ratio;
use crate::figure::stage::{Main, Stage};
use crate::figure::study::{Quantity, study};
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use smallvec::smallvec;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "feedback-resistance",
    title: "feedback resistance",
    unit: Unit::Ohm,
    bad: Bad::Low,
    physics: "The feedback network hangs on the output before any load does. Below the load at which the datasheet promises gain and swing, neither is promised any more.",
    formula: "The twin's output voltage over the current from the output into its own feedback network, the main port driving, other ports at 0: Rf in an inverting stage, Rf + Rg in a non-inverting one.",
    source: "Common practice; the limit is the datasheet's load condition.",
    worse: "Low-valued networks chosen for low noise, T networks with a small leg.",
    cure: "raise the resistances of the feedback network, all by the same factor",
};

/// Currents below this, ampere for a volt, are none: the output is fed back by a wire.
const NONE: f64 = 1e-15;

pub(super) fn compute(stage: &Stage, from: Option<Main>) -> Figure {
    let kind = Kind::FeedbackResistance;
    let Some(from) = from else { return Figure::absent(kind, "no signal port") };
    let model = stage.model();
    let read = |reading: Reading| Linear {
        model,
        twin: true,
        reading,
        constant: 0.0,
        sign: 1.0,
        excitation: stage.unit(from),
        extras: Vec::new(),
    };
    let current = Reading::Current { from: stage.output(), branches: model.feedback_branches, whole: false };
    let ratio = Ratio {
        over: read(Reading::Nodes(smallvec![(stage.output(), 1.0)])),
        under: read(current),
        offset: 0.0,
    };
    let axes = axes(model, false);
    let point: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
    let drawn = ratio.under.at(&point, &mut vec![0.0; axes.len()]);
    if drawn.is_none_or(|amps| amps.abs() < NONE) {
        return Figure::absent(
            kind,
            "no current flows into the feedback network: the output is fed back by a wire",
        );
    }
    match study(&ratio, &axes, Bad::Low) {
        Some(found) => stage.figure_of(kind, &ratio, &axes, &found, &[], false),
        None => Figure::unknown(kind, "its equations have no solution at the worst corner"),
    }
}
