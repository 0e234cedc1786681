//! Adjustable parts: the range of gains that their travel gives.

use crate::circuit::ElementKind;
use crate::figure::stage::{Main, Stage};
use crate::solve::{Solved, Values};

/// Of more adjustable parts than this not every combination is tried.
const MOST: usize = 6;

/// A wiper at the end of its track still has some resistance: this share of the other end's.
const END: f64 = 1e-6;

/// A branch with its resistance at either end of its travel, ohm.
type Travel = (usize, (f64, f64));

impl Stage<'_> {
    /// Least and greatest transfer from an input over the travel of the block's adjustable parts; `None`
    /// where it has none.
    pub(super) fn adjusts(&self, from: Main) -> Option<(f64, f64)> {
        let model = self.model();
        // Both halves of a potentiometer move together; they carry one name before the colon.
        let mut parts: Vec<(&str, Vec<Travel>)> = Vec::new();
        for (branch, id) in model.elements.iter().enumerate() {
            let element = self.board.circuit.element(*id);
            let ElementKind::Resistor(part) = &element.kind else { continue };
            let Some(travel) = part.travel else { continue };
            let name = element.name.split(':').next().unwrap_or(&element.name);
            match parts.iter_mut().find(|(known, _)| *known == name) {
                Some((_, branches)) => branches.push((branch, travel)),
                None => parts.push((name, vec![(branch, travel)])),
            }
        }
        if parts.is_empty() || MOST < parts.len() {
            return None;
        }
        let at = |ends: usize| {
            let mut values = model.nominal.clone();
            for (number, (_, branches)) in parts.iter().enumerate() {
                branches.iter().for_each(|part| set(&mut values, *part, ends >> number & 1 == 1));
            }
            let solved = Solved::new(&model.network, values).ok()?;
            Some(self.transfer(&solved, &solved.adjoint(&[(self.output(), 1.0)]), from))
        };
        let gains: Vec<f64> = (0..1usize << parts.len()).filter_map(at).collect();
        let fold = |pick: fn(f64, f64) -> f64| gains.iter().copied().reduce(pick);
        fold(f64::min).zip(fold(f64::max))
    }
}

fn set(values: &mut Values<f64>, (branch, (first, second)): Travel, end: bool) {
    let floor = END * first.max(second);
    values.siemens[branch] = 1.0 / if end { second } else { first }.max(floor);
}
