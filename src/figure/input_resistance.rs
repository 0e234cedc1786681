//! Input resistance: what the stage is to the source of its signal.

use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::ratio::Ratio;
use crate::figure::stage::{Main, Stage, Transfer};
use crate::figure::study::{Quantity, study};
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use crate::solve::{Excitation, Node};
use smallvec::smallvec;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "input-resistance",
    title: "input resistance",
    unit: Unit::Ohm,
    bad: Bad::Low,
    physics: "What a stage draws from its source makes a voltage drop in the source's own resistance. Feedback raises the resistance at a non-inverting input by the loop gain, up to the common-mode resistance; an inverting input shows its resistor.",
    formula: "A volt at one voltage port, the others at 0, over the current that the stage draws from it; the least over the stage's voltage signals. A declared source resistance is not part of it.",
    source: "S. Franco, Design with Operational Amplifiers and Analog Integrated Circuits, 3rd ed., McGraw-Hill 2002, equations 1.59 and 6.4 (closed forms).",
    worse: "Low input resistors, little loop gain, bipolar inputs with low differential resistance.",
    cure: "raise the input resistors, or buffer the signal",
};

/// Conductances below this, siemens, are none.
const NONE: f64 = 1e-18;

pub(super) fn compute(stage: &Stage, transfers: &[Transfer]) -> Figure {
    let kind = Kind::InputResistance;
    let ports = transfers.iter().filter(|transfer| transfer.input.signal).flat_map(|transfer| match transfer
        .input
        .from
    {
        Main::Port(port) => vec![port],
        Main::Pair(_, positive, negative) => vec![positive, negative],
        Main::Current(_) => Vec::new(),
    });
    let mut ports: Vec<usize> = ports.collect();
    ports.sort_unstable();
    ports.dedup();
    let figures = ports.into_iter().map(|port| of_port(stage, port));
    let least = figures.min_by(|a, b| value(a).total_cmp(&value(b)));
    least.unwrap_or_else(|| Figure::absent(kind, "no voltage signal"))
}

fn value(figure: &Figure) -> f64 {
    figure.worst.or(figure.nominal).unwrap_or(f64::INFINITY)
}

fn of_port(stage: &Stage, port: usize) -> Figure {
    let (kind, model) = (Kind::InputResistance, stage.model());
    let node = Node::Port(port as u32);
    let series = stage.series_resistance(port).unwrap_or(0.0);
    let read = |reading: Reading| Linear {
        model,
        twin: false,
        reading,
        constant: 0.0,
        sign: 1.0,
        excitation: Excitation::port(model.ports.len(), port),
        extras: Vec::new(),
    };
    let ratio = Ratio {
        over: read(Reading::Nodes(smallvec![(node, 1.0)])),
        under: read(Reading::Current { from: node, branches: model.feedback_branches, whole: true }),
        offset: -series,
    };
    let axes = axes(model, false);
    let point: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
    let unsolved = || Figure::unknown(kind, "its equations have no solution at the worst corner");
    let Some(nominal) = ratio.under.at(&point, &mut vec![0.0; axes.len()]) else { return unsolved() };
    if NONE <= nominal.abs() {
        return study(&ratio, &axes, Bad::Low)
            .map_or_else(unsolved, |found| stage.figure_of(kind, &ratio, &axes, &found, &[], false));
    }
    // The ideal nominal draws nothing; only the worst case has a number, and no ledger leads to it.
    match study(&ratio.under, &axes, Bad::High) {
        Some(found) if NONE <= found.worst => Figure {
            worst: Some(1.0 / found.worst - series),
            rests_on: axes.iter().map(|axis| axis.rank).max().unwrap_or(crate::device::Rank::Guaranteed),
            ..Figure::absent(kind, "the nominal one is unlimited: the profile states no input resistance")
        },
        Some(_) => Figure::absent(kind, "unlimited"),
        None => unsolved(),
    }
}
