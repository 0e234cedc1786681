//! Resistor power: what each resistor dissipates, over what it is rated for.

use crate::circuit::{ElementId, ElementKind};
use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::range::extremes;
use crate::figure::stage::Stage;
use crate::figure::study::{Axis, Quantity, study};
use crate::figure::{Bad, Doc, Figure, Item, Kind};
use crate::quantity::{Unit, show};
use crate::solve::{Excitation, Node};
use smallvec::smallvec;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "resistor-power",
    title: "resistor dissipation",
    unit: Unit::One,
    bad: Bad::High,
    physics: "A resistor's rating holds at room temperature in free air. Above half of it the resistor drifts and ages; above all of it it fails.",
    formula: "V^2 / R at the extreme of the signals, over the rating that netlist or budget states; the largest of the stage's resistors. Without a rating, the rating that is needed is said where it is 50 mW or more.",
    source: "Common practice (half to 0.6 of the rating at 70 degC).",
    worse: "Low values across large swings, small packages, high ambient temperature.",
    cure: "raise the value, split the resistor, or take one with a higher rating",
};

/// Unrated resistors below this, watt, need no word.
const SILENT: f64 = 0.05;

/// The square of a voltage over resistance and rating; the resistor's own deviation is the axis `own`.
struct Share<'m> {
    volts: Linear<'m>,
    ohms: f64,
    rating: f64,
    own: Option<usize>,
}

impl Quantity for Share<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let volts = self.volts.at(point, gradient)?;
        let deviation = self.own.map_or(0.0, |own| point[own]);
        let power = volts * volts / (self.ohms * deviation.exp()) / self.rating;
        let slope = 2.0 * volts / (self.ohms * deviation.exp()) / self.rating;
        gradient.iter_mut().for_each(|entry| *entry *= slope);
        if let Some(own) = self.own {
            gradient[own] -= power;
        }
        Some(power)
    }
}

pub(super) fn compute(stage: &Stage) -> Figure {
    let kind = Kind::ResistorPower;
    let mut unrated: Option<(f64, ElementId)> = None;
    let mut worst: Option<Figure> = None;
    for (branch, id) in stage.own_branches() {
        let ElementKind::Resistor(part) = stage.board.circuit.element(id).kind else { continue };
        let Some(ohms) = part.value else { continue };
        let volts = match across(stage, branch) {
            Ok(Some(volts)) => volts,
            Ok(None) => return Figure::unknown(kind, "its equations have no solution"),
            Err(name) => return Figure::unknown(kind, format!("the range of {name} is not declared")),
        };
        let axes = axes(stage.model(), false);
        let own = stage.model().parameters.iter().position(|parameter| {
            matches!(&parameter.what, crate::solve::What::Resistors(branches) if branches.as_slice() == [branch as u32])
        });
        let share = Share { volts, ohms, rating: part.rating.unwrap_or(1.0), own };
        if part.rating.is_none() {
            let Some(power) = peak(&share, &axes) else {
                return Figure::unknown(kind, "its equations have no solution");
            };
            if unrated.is_none_or(|(most, _)| most < power) {
                unrated = Some((power, id));
            }
            continue;
        }
        let Some(found) = study(&share, &axes, Bad::High) else {
            return Figure::unknown(kind, "its equations have no solution at the worst corner");
        };
        let figure = stage.figure_of(kind, &share, &axes, &found, &[Item::Resistor(id)], false);
        if worst.as_ref().is_none_or(|known| known.worst < figure.worst) {
            worst = Some(figure);
        }
    }
    let needed = unrated.filter(|(power, _)| SILENT <= *power).map(|(power, id)| (id, power));
    let figure = worst.unwrap_or_else(|| match needed {
        Some((id, power)) => {
            let name = &stage.board.circuit.element(id).name;
            Figure::absent(kind, format!("no rating is stated; {name} needs {}", show(power, Unit::Watt)))
        }
        None => Figure::absent(kind, "no rating is stated, and none is needed above 50 mW"),
    });
    Figure { needed, ..figure }
}

/// Nominal dissipation over rating.
fn peak(share: &Share, axes: &[Axis]) -> Option<f64> {
    let point: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
    share.at(&point, &mut vec![0.0; axes.len()])
}

/// The voltage across a branch at the end of the ranges where it is larger.
fn across<'b>(stage: &Stage<'b>, branch: usize) -> Result<Option<Linear<'b>>, String> {
    let model = stage.model();
    let ends = model.network.branches[branch];
    let read = |excitation: Excitation<f64>| Linear {
        model,
        twin: false,
        reading: Reading::Nodes(smallvec![(ends.a, 1.0), (ends.b, -1.0)]),
        constant: 0.0,
        sign: 1.0,
        excitation,
        extras: Vec::new(),
    };
    let Some(row) = stage.row_of(&read(Excitation::none())) else { return Ok(None) };
    let [low, high] = extremes(stage.board, &row).0?;
    let end = if high.reached.abs() < low.reached.abs() { low } else { high };
    Ok(Some(read(stage.excited(&end))))
}

impl Stage<'_> {
    /// Branches of the block that belong to this stage: with an end at its output or at one of its inputs,
    /// all of a block of one.
    fn own_branches(&self) -> Vec<(usize, ElementId)> {
        let model = self.model();
        let (plus, minus) = self.inputs();
        let own = |node: Node| node != Node::Ground && [plus, minus, self.output()].contains(&node);
        let alone = model.network.members == 1;
        let branches = model.network.branches.iter().enumerate();
        branches
            .filter(|(_, branch)| alone || own(branch.a) || own(branch.b))
            .map(|(at, _)| (at, model.elements[at]))
            .collect()
    }
}
