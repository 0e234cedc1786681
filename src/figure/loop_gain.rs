//! Loop gain: the return ratio of the op amp's own source.

use crate::figure::linear::axes;
use crate::figure::stage::Stage;
use crate::figure::study::{Quantity, study};
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use crate::solve::{Excitation, Solved, along, values_at};
use smallvec::SmallVec;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "loop-gain",
    title: "loop gain",
    unit: Unit::One,
    bad: Bad::Low,
    physics: "The loop gain is what the amplifier has to spare: errors inside the loop are divided by one plus the loop gain. Its sign at DC tells whether the feedback is negative.",
    formula: "The op amp's controlled source is replaced by an independent one of the same size; the loop gain is minus what comes back to the controlled source (return ratio). With w the input difference for a volt in series with the input, T = -w / (1 + w).",
    source: "H. W. Bode, Network Analysis and Feedback Amplifier Design, Van Nostrand, 1945, chapter 4 (return ratio; cited from memory).",
    worse: "A high noise gain, positive feedback beside the negative, a load that is heavy for the output resistance.",
    cure: "lower the noise gain of the stage, or take an op amp with more open-loop gain",
};

/// The magnitude of the return ratio.
struct LoopGain<'s> {
    stage: Stage<'s>,
}

impl LoopGain<'_> {
    fn signed(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let model = self.stage.model();
        let solved = Solved::new(&model.network, values_at(&model.nominal, &model.parameters, point)).ok()?;
        let (plus, minus) = self.stage.inputs();
        let weights = solved.adjoint(&[(plus, 1.0), (minus, -1.0)]);
        let mut errors = SmallVec::from_elem(0.0, model.network.members);
        errors[self.stage.member] = 1.0;
        let state = solved.forward(&Excitation { errors, ..Excitation::none() });
        let returned = state.volts(plus) - state.volts(minus);
        // One plus the returned voltage is the source over A; computed so, nothing cancels.
        let values = solved.values().amps[self.stage.member];
        let leaving = solved.leaving(&state)[self.stage.member];
        let source = state.volts(self.stage.output()) + values.output * leaving;
        let remaining = values.inverse_gain * source;
        along(&model.parameters, solved.values(), &solved.sensitivity(&state, &weights), gradient);
        gradient.iter_mut().for_each(|slope| *slope /= -(remaining * remaining));
        Some(-returned / remaining)
    }
}

impl Quantity for LoopGain<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let ratio = self.signed(point, gradient)?;
        gradient.iter_mut().for_each(|slope| *slope *= ratio.signum());
        Some(ratio.abs())
    }
}

pub(super) fn compute(stage: &Stage) -> Figure {
    let quantity = LoopGain { stage: *stage };
    let axes = axes(stage.model(), false);
    let nominal: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
    let sign = quantity.signed(&nominal, &mut vec![0.0; axes.len()]);
    match (study(&quantity, &axes, Bad::Low), sign) {
        (Some(found), Some(sign)) => Figure {
            sign: Some(sign.signum()),
            ..stage.figure_of(Kind::LoopGain, &quantity, &axes, &found, &[], false)
        },
        _ => Figure::unknown(Kind::LoopGain, "its equations have no solution at the worst corner"),
    }
}
