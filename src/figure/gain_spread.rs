//! Gain spread: what resistor tolerances alone do to the gain.

use crate::figure::linear::axes;
use crate::figure::stage::{Main, Stage};
use crate::figure::study::{Axis, Quantity, study};
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use crate::solve::{Solved, What, along, values_at};

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "gain-spread",
    title: "gain spread",
    unit: Unit::One,
    bad: Bad::Either,
    physics: "The gain is a ratio of resistors; each may be off by its tolerance, and in the worst case all are off the way that hurts.",
    formula: "|H| / |H nominal| - 1 at the corner of all resistors and capacitors, both ways. One ratio of parts with tolerance t spreads by about 2 t (1 - 1/G) in a non-inverting stage and by 2 t in an inverting one.",
    source: "Extreme value analysis, common practice.",
    worse: "Wide tolerances, several ratios in a row, unmatched parts in a difference stage.",
    cure: "tighten the tolerance of the resistors with the largest shares, or take a matched network",
};

/// The gain relative to its nominal value.
struct Spread<'s> {
    stage: Stage<'s>,
    from: Main,
    nominal: f64,
}

impl Quantity for Spread<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let model = self.stage.model();
        let solved = Solved::new(&model.network, values_at(&model.nominal, &model.parameters, point)).ok()?;
        let weights = solved.adjoint(&[(self.stage.output(), 1.0)]);
        let state = solved.forward(&self.stage.unit(self.from));
        along(&model.parameters, solved.values(), &solved.sensitivity(&state, &weights), gradient);
        gradient.iter_mut().for_each(|slope| *slope /= self.nominal);
        Some(self.stage.transfer(&solved, &weights, self.from) / self.nominal - 1.0)
    }
}

pub(super) fn compute(stage: &Stage, from: Option<Main>) -> Figure {
    let Some(from) = from else { return Figure::absent(Kind::GainSpread, "no signal port") };
    let model = stage.model();
    let axes: Vec<Axis> = axes(model, false)
        .into_iter()
        .zip(&model.parameters)
        .map(|(axis, parameter)| match parameter.what {
            What::Resistors(_) => axis,
            _ => Axis { low: axis.nominal, high: axis.nominal, ..axis },
        })
        .collect();
    let unknown = || Figure::unknown(Kind::GainSpread, "its equations have no solution at the worst corner");
    let Ok(solved) = Solved::new(&model.network, model.nominal.clone()) else { return unknown() };
    let nominal = stage.transfer(&solved, &solved.adjoint(&[(stage.output(), 1.0)]), from);
    let quantity = Spread { stage: *stage, from, nominal };
    match study(&quantity, &axes, Bad::Either) {
        Some(found) => {
            Figure { nominal: None, ..stage.figure_of(Kind::GainSpread, &quantity, &axes, &found, &[], true) }
        }
        None => unknown(),
    }
}
