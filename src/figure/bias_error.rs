//! Bias error: what input currents make of the resistances around the inputs.

use crate::figure::disturbance::Extra;
use crate::figure::stage::Stage;
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "bias-error",
    title: "output error from bias currents",
    unit: Unit::Volt,
    bad: Bad::High,
    physics: "Each input draws a small current. It flows through the resistance that its pin sees and makes a voltage that the stage amplifies. What both pins have in common cancels where both see the same resistance; the offset current never does.",
    formula: "|Ib| |Zp + Zn| + (|Ios| / 2) |Zp - Zn|, with Zp and Zn the transresistances from a current into each pin to the output, summed over every op amp of the block; earlier stages are left out.",
    source: "Analog Devices MT-038, Op Amp Input Bias Current (form of the expression; cited from memory), and nodal analysis.",
    worse: "Large or unequal resistances at the inputs, bipolar inputs, field-effect inputs that get hot.",
    cure: "lower the resistances at the inputs, make both inputs see the same resistance, or take an op amp with less bias current",
};

pub(super) fn compute(stage: &Stage) -> Figure {
    let extras: Vec<Extra> = match stage.bias_currents() {
        Ok(extras) => extras,
        Err(reason) => return Figure::unknown(Kind::BiasError, reason),
    };
    stage.magnitude(Kind::BiasError, extras)
}
