//! Source loading: what of a signal is lost in its source's own resistance.

use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::stage::{Main, Stage, Transfer};
use crate::figure::study::study;
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use crate::solve::Node;
use smallvec::smallvec;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "source-loading",
    title: "source loading",
    unit: Unit::One,
    bad: Bad::High,
    physics: "Source resistance and input resistance are a divider. The stage amplifies only what is left; the gain seems right and the reading is low.",
    formula: "1 - loaded / unloaded: of a voltage, 1 less the voltage behind the source resistance for a volt of open-circuit voltage; of a current, the share that flows through the source's own resistance.",
    source: "Common practice (voltage divider).",
    worse: "High source resistance into inverting or difference stages.",
    cure: "raise the stage's input resistance, or buffer the source",
};

pub(super) fn compute(stage: &Stage, transfers: &[Transfer]) -> Figure {
    let kind = Kind::SourceLoading;
    let found = transfers.iter().filter(|transfer| transfer.input.signal).flat_map(|transfer| match transfer
        .input
        .from
    {
        Main::Port(_) | Main::Current(_) => vec![transfer.input.from],
        Main::Pair(_, positive, negative) => vec![Main::Port(positive), Main::Port(negative)],
    });
    let figures = found.filter_map(|from| of_source(stage, from));
    let most = figures.max_by(|a, b| a.worst.unwrap_or(0.0).total_cmp(&b.worst.unwrap_or(0.0)));
    most.unwrap_or_else(|| Figure::absent(kind, "no source resistance is declared"))
}

fn of_source(stage: &Stage, from: Main) -> Option<Figure> {
    let kind = Kind::SourceLoading;
    let (node, constant, sign) = match from {
        Main::Port(port) => {
            stage.series_resistance(port)?;
            (stage.behind(port)?, 1.0, -1.0)
        }
        Main::Current(at) => {
            let current = &stage.board.circuit.currents[stage.cut().currents[at] as usize];
            (stage.model().node(current.into)?, 0.0, 1.0 / current.source?)
        }
        Main::Pair(..) => return None,
    };
    if !matches!(node, Node::Unknown(_)) {
        return None;
    }
    let linear = Linear {
        model: stage.model(),
        twin: false,
        reading: Reading::Nodes(smallvec![(node, 1.0)]),
        constant,
        sign,
        excitation: stage.unit(from),
        extras: Vec::new(),
    };
    let axes = axes(stage.model(), false);
    Some(match study(&linear, &axes, Bad::High) {
        Some(found) => stage.figure_of(kind, &linear, &axes, &found, &[], false),
        None => Figure::unknown(kind, "its equations have no solution at the worst corner"),
    })
}
