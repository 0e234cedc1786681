//! Input headroom: how far both inputs stay inside the common-mode range.

use crate::device::{Key, Rank};
use crate::figure::disturbance::Extra;
use crate::figure::linear::Linear;
use crate::figure::range::{Drive, extremes};
use crate::figure::stage::Stage;
use crate::figure::study::Quantity;
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;
use crate::solve::{Excitation, Node};

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "input-headroom",
    title: "input headroom",
    unit: Unit::Volt,
    bad: Bad::Low,
    physics: "Outside its common-mode range an input stage loses gain or bias; some op amps reverse their phase there and latch.",
    formula: "The least distance, over the ranges of all signals, between either input pin and the ends of the common-mode range. Offsets and bias currents count only where together they move a pin by more than 50 mV.",
    source: "The device's datasheet, common-mode input range.",
    worse: "Followers and high-side signals near a rail, low rails, signals at the ground of a single supply.",
    cure: "move the signal away from the rail (divider, inverting form, other rail), or take an op amp whose inputs reach that rail",
};

/// Disturbances that together move a pin by less than this, volt, are no matter of common mode.
const COUNTS: f64 = 0.05;

pub(super) fn compute(stage: &Stage, drive: &Drive) -> Figure {
    distances(stage, drive).unwrap_or_else(|reason| Figure::unknown(Kind::InputHeadroom, reason))
}

fn distances(stage: &Stage, drive: &Drive) -> Result<Figure, String> {
    let bounds =
        stage.bounds().ok_or_else(|| format!("the supplies of {} are not known", stage.part().name))?;
    let mut own = stage.bias_currents()?;
    own.extend(stage.offsets(&drive.rest)?);
    own.extend(stage.upstream());
    let (plus, minus) = stage.inputs();
    let mut distances = Vec::with_capacity(4);
    let mut ranges = Rank::Guaranteed;
    for node in [plus, minus] {
        let bare = stage.reading(node, 1.0, 0.0, Excitation::none(), &[]);
        let row = stage.row_of(&bare).ok_or_else(|| "its equations have no solution".to_owned())?;
        let (ends, rank) = extremes(stage.board, &row);
        let ends = ends.map_err(|name| format!("the range of {name} is not declared"))?;
        ranges = ranges.max(rank);
        let counted = if COUNTS < moved(stage, node, &own) { own.clone() } else { Vec::new() };
        for (bound, end) in bounds.into_iter().zip(&ends) {
            let key = if bound.high { Key::InputBelowPositive } else { Key::InputAboveNegative };
            distances.push(stage.distance(node, bound, (key, 0.0), stage.excited(end), counted.clone())?);
        }
    }
    Ok(stage.least(Kind::InputHeadroom, &distances, ranges))
}

/// By how much disturbances together move a node, volt.
fn moved(stage: &Stage, node: Node, extras: &[Extra]) -> f64 {
    let linear: Linear = stage.reading(node, 1.0, 0.0, Excitation::none(), extras);
    let parameters = &stage.model().parameters;
    let mut point: Vec<f64> = parameters.iter().map(|parameter| parameter.nominal).collect();
    point.resize(parameters.len() + extras.len(), 0.0);
    let mut gradient = vec![0.0; point.len()];
    linear.at(&point, &mut gradient);
    gradient[parameters.len()..].iter().zip(extras).map(|(slope, extra)| slope.abs() * extra.axis.high).sum()
}
