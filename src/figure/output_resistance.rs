//! Output resistance: what the closed loop leaves of the op amp's own.

use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::stage::Stage;
use crate::figure::study::study;
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use crate::solve::{Excitation, Model};
use smallvec::smallvec;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "output-resistance",
    title: "output resistance",
    unit: Unit::Ohm,
    bad: Bad::High,
    physics: "Feedback holds the output against its load: the open-loop output resistance is divided by one plus the loop gain.",
    formula: "The voltage that a current of one ampere into the output makes, ports at 0, the load taken away, the stage's own feedback attached: Ro / (1 + T).",
    source: "S. Franco, Design with Operational Amplifiers and Analog Integrated Circuits, 3rd ed., McGraw-Hill 2002, equation 1.61.",
    worse: "Little loop gain, micropower and rail-to-rail CMOS outputs.",
    cure: "lower the noise gain, or take an op amp with more open-loop gain or less output resistance",
};

pub(super) fn compute(stage: &Stage) -> Figure {
    let bare = unloaded(stage.model());
    let linear = Linear {
        model: &bare,
        twin: false,
        reading: Reading::Nodes(smallvec![(stage.output(), 1.0)]),
        constant: 0.0,
        sign: 1.0,
        excitation: Excitation { injections: smallvec![(stage.output(), 1.0)], ..Excitation::none() },
        extras: Vec::new(),
    };
    let axes = axes(&bare, false);
    match study(&linear, &axes, Bad::High) {
        Some(found) => stage.figure_of(Kind::OutputResistance, &linear, &axes, &found, &[], false),
        None => Figure::unknown(Kind::OutputResistance, "its equations have no solution without a load"),
    }
}

/// A block without its loads and without what later blocks draw. Load branches keep a trace of a
/// conductance, so that nets which only loads join still have a voltage.
fn unloaded(model: &Model) -> Model {
    /// Siemens that stand for nothing: far below any input's.
    const TRACE: f64 = 1e-18;
    let mut bare = model.clone();
    bare.network.loads.clear();
    bare.nominal.siemens[model.feedback_branches..].iter_mut().for_each(|siemens| *siemens = TRACE);
    bare
}
