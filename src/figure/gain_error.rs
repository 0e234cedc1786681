//! Gain error: what the real op amp, its load and its source leave of the ideal gain.

use crate::figure::linear::axes;
use crate::figure::stage::{Main, Stage};
use crate::figure::study::{Quantity, study};
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::{Unit, show};
use crate::solve::{Solved, along, values_at};

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "gain-error",
    title: "gain error",
    unit: Unit::One,
    bad: Bad::Either,
    physics: "An op amp of finite open-loop gain needs a small voltage between its inputs to move its output; that voltage is missing from the signal. Input resistance loads the network and output resistance is divided by the loop gain only, so both add to the loss.",
    formula: "H / H_twin - 1 at DC, from the nodal solution of the stage with its real and with its ideal op amp; about -(noise gain) / A. Where the budget states an intended gain, H / gain - 1, and resistor tolerances count.",
    source: "Nodal analysis; the approximation is common practice in op-amp handbooks (gain error = 1 / loop gain).",
    worse: "A high noise gain, a heavy load, a low open-loop gain at temperature or under load, resistances comparable with the input resistance.",
    cure: "raise the loop gain: less gain in this stage, or an op amp with more open-loop gain",
};

/// `H / reference - 1`, with the twin's transfer or the intended gain as reference.
struct GainError<'s> {
    stage: Stage<'s>,
    from: Main,
    intended: Option<f64>,
}

impl Quantity for GainError<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let model = self.stage.model();
        let values = values_at(&model.nominal, &model.parameters, point);
        let twin = if self.intended.is_none() { Some(self.stage.twin(&values)?) } else { None };
        let solved = Solved::new(&model.network, values).ok()?;
        let slope = |solved: &Solved<f64>, gradient: &mut [f64]| {
            let weights = solved.adjoint(&[(self.stage.output(), 1.0)]);
            let state = solved.forward(&self.stage.unit(self.from));
            along(&model.parameters, solved.values(), &solved.sensitivity(&state, &weights), gradient);
            self.stage.transfer(solved, &weights, self.from)
        };
        let actual = slope(&solved, gradient);
        let Some(twin) = twin else {
            let gain = self.intended?;
            gradient.iter_mut().for_each(|slope| *slope /= gain);
            return Some(actual / gain - 1.0);
        };
        let mut ideal_gradient = vec![0.0; gradient.len()];
        let ideal = slope(&twin, &mut ideal_gradient);
        for ((slope, ideal_slope), parameter) in
            gradient.iter_mut().zip(&ideal_gradient).zip(&model.parameters)
        {
            // The twin has no op-amp parameters; only what both share moves its transfer.
            let shared = matches!(parameter.what, crate::solve::What::Resistors(_));
            let twin_slope = if shared { *ideal_slope } else { 0.0 };
            *slope = (*slope - actual / ideal * twin_slope) / ideal;
        }
        Some(actual / ideal - 1.0)
    }
}

pub(super) fn compute(stage: &Stage, from: Option<Main>, intended: Option<f64>) -> Figure {
    let Some(from) = from else { return Figure::absent(Kind::GainError, "no signal port") };
    if let (Some(gain), Some((low, high))) = (intended, stage.adjusts(from)) {
        let range = format!("adjusts {} to {}", show(low, Unit::One), show(high, Unit::One));
        if (low..=high).contains(&gain) {
            return Figure::absent(
                Kind::GainError,
                format!("{range}, the intended {} inside", show(gain, Unit::One)),
            );
        }
        let nearest = if gain < low { low } else { high };
        return Figure {
            nominal: Some(nearest / gain - 1.0),
            worst: Some(nearest / gain - 1.0),
            reason: Some(format!("{range}, the intended {} outside", show(gain, Unit::One))),
            ..Figure::unknown(Kind::GainError, "")
        };
    }
    let quantity = GainError { stage: *stage, from, intended };
    let axes = axes(stage.model(), true);
    match study(&quantity, &axes, Bad::Either) {
        Some(found) => stage.figure_of(Kind::GainError, &quantity, &axes, &found, &[], true),
        None => Figure::unknown(Kind::GainError, "its equations have no solution at the worst corner"),
    }
}
