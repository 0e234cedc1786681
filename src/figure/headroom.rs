//! What bias error, offset error and both headrooms share: a reading of the block with disturbances.

use crate::circuit::NetId;
use crate::device::{Key, Rank};
use crate::figure::disturbance::Extra;
use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::stage::Stage;
use crate::figure::study::{Axis, Quantity, Study, study};
use crate::figure::{Bad, Figure, Item, Kind, Quality};
use crate::solve::{Excitation, Node};
use smallvec::smallvec;

/// One end of the supplies as a limit: its voltage, the net that carries it, what keeps a pin away from it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Bound {
    /// Whether it is the positive end.
    pub high: bool,
    /// Nominal voltage of the rail.
    pub rail: f64,
    /// Its net.
    pub net: Option<NetId>,
}

/// A distance with its nominal value and how far it falls in the worst case, to first order.
pub(super) struct Distance<'b> {
    linear: Linear<'b>,
    axes: Vec<Axis>,
    items: Vec<Item>,
    nominal: f64,
    fall: f64,
    /// Whether it is the distance to the ground end of a single supply.
    ground: bool,
}

/// Why a figure is missing where the equations fail away from the nominal values.
const UNSOLVED: &str = "its equations have no solution at the worst corner";

impl<'b> Stage<'b> {
    /// The figure of a magnitude that disturbances alone make at the output.
    pub(super) fn magnitude(&self, kind: Kind, extras: Vec<Extra>) -> Figure {
        let linear = self.reading(self.output(), 1.0, 0.0, Excitation::none(), &extras);
        let (axes, items) = with_axes(axes(self.model(), true), &extras);
        let Some(found) = study(&linear, &axes, Bad::High) else {
            return Figure::unknown(kind, "its equations have no solution at the worst corner");
        };
        let found = both_ways(&linear, &axes, found);
        // The nominal is the sum of typical magnitudes in the nominal circuit.
        let point: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
        let mut gradient = vec![0.0; axes.len()];
        linear.at(&point, &mut gradient);
        let own = self.model().parameters.len();
        let typical =
            gradient[own..].iter().zip(&extras).map(|(slope, extra)| slope.abs() * extra.axis.typical).sum();
        Figure { nominal: Some(typical), ..self.figure_of(kind, &linear, &axes, &found, &items, true) }
    }

    /// A reading of one node with disturbances.
    pub(super) fn reading(
        &self,
        node: Node,
        sign: f64,
        constant: f64,
        excitation: Excitation<f64>,
        extras: &[Extra],
    ) -> Linear<'b> {
        Linear {
            model: self.model(),
            twin: false,
            reading: Reading::Nodes(smallvec![(node, 1.0)]),
            constant,
            sign,
            excitation,
            extras: extras.iter().map(|extra| extra.effect.clone()).collect(),
        }
    }

    /// Both ends of the op amp's supplies.
    pub(super) fn bounds(&self) -> Option<[Bound; 2]> {
        let supply = self.device().supply?;
        let (positive, negative) = self.board.supply_nets(self.op_amp);
        Some([
            Bound { high: false, rail: supply.negative, net: negative },
            Bound { high: true, rail: supply.positive, net: positive },
        ])
    }

    /// A distance before it is studied: the distance of a node from an end of the supplies, in a given state of the ports. `key` is the
    /// distance that must be kept, at an output current of `current`.
    ///
    /// # Errors
    /// What is missing, in words.
    pub(super) fn distance(
        &self,
        node: Node,
        bound: Bound,
        (key, current): (Key, f64),
        excitation: Excitation<f64>,
        mut extras: Vec<Extra>,
    ) -> Result<Distance<'b>, String> {
        let kept = self.spread(key, current).ok_or_else(|| self.missing(key))?;
        let sign = if bound.high { -1.0 } else { 1.0 };
        extras.extend(self.rail_extras(bound.net.map(|net| (net, -sign))));
        let mut kept_axis = Extra::symmetric(
            Default::default(),
            Item::OpAmp(self.op_amp, Quality::distance(key)),
            0.0,
            0.0,
            kept.rank,
        );
        kept_axis.effect.direct = -1.0;
        kept_axis.axis = Axis {
            base: kept.nominal,
            nominal: kept.nominal,
            typical: kept.nominal,
            low: kept.low,
            high: kept.high,
            rank: kept.rank,
        };
        extras.push(kept_axis);
        let linear = self.reading(node, sign, -sign * bound.rail, excitation, &extras);
        let (axes, items) = with_axes(axes(self.model(), false), &extras);
        let point: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
        let mut gradient = vec![0.0; axes.len()];
        let nominal = linear.at(&point, &mut gradient).ok_or(UNSOLVED)?;
        let reach = |(slope, axis): (&f64, &Axis)| {
            (slope * (axis.low - axis.nominal)).min(slope * (axis.high - axis.nominal)).min(0.0)
        };
        let fall: f64 = gradient.iter().zip(&axes).map(reach).sum();
        let ground = !bound.high
            && bound.rail == 0.0
            && bound.net.is_some_and(|net| self.board.circuit.net(net).ground);
        Ok(Distance { linear, axes, items, nominal, fall, ground })
    }

    /// The figure of the least of several distances. Only those are studied that to first order could be
    /// the least: within a quarter of their own fall of the least one.
    pub(super) fn least(&self, kind: Kind, distances: &[Distance], ranges: Rank) -> Figure {
        if distances.iter().any(|distance| !(distance.nominal + distance.fall).is_finite()) {
            return Figure::unknown(kind, UNSOLVED);
        }
        let lowest =
            distances.iter().map(|distance| distance.nominal + distance.fall).fold(f64::INFINITY, f64::min);
        let near = |distance: &&Distance| distance.nominal + distance.fall * 1.25 <= lowest;
        let studied = distances
            .iter()
            .filter(near)
            .map(|distance| Some((distance, study(&distance.linear, &distance.axes, Bad::Low)?)));
        let Some(studied) = studied.collect::<Option<Vec<_>>>() else {
            return Figure::unknown(kind, UNSOLVED);
        };
        let least = studied.iter().min_by(|a, b| a.1.worst.total_cmp(&b.1.worst));
        let Some((least, found)) = least else {
            return Figure::unknown(kind, "there is no distance to take");
        };
        let nominal = distances.iter().map(|distance| distance.nominal).fold(f64::INFINITY, f64::min);
        let figure = self.figure_of(kind, &least.linear, &least.axes, found, &least.items, false);
        let rests_on = self.device().supply.map_or(ranges, |supply| ranges.max(supply.rank));
        let kept = |distance: &Distance| 0.0 <= distance.nominal + distance.fall;
        let zero = least.ground && distances.iter().all(|distance| distance.ground || kept(distance));
        Figure { nominal: Some(nominal), rests_on, zero, ..figure }
    }
}

/// The worse of a study and of those in which one disturbance has the other sign.
///
/// The sign that a disturbance has in the nominal circuit may be the wrong one at the worst corner: where both
/// inputs see nearly the same resistance, the effect of the bias current is near nought and tolerances turn it.
fn both_ways(linear: &Linear, axes: &[Axis], mut worst: Study) -> Study {
    for extra in linear.model.parameters.len()..axes.len() {
        if !may_turn(linear, axes, extra) {
            continue;
        }
        for end in [axes[extra].low, axes[extra].high] {
            let mut pinned = axes.to_vec();
            pinned[extra] = Axis { low: end, high: end, ..axes[extra] };
            match study(linear, &pinned, Bad::High) {
                Some(found) if worst.worst < found.worst => worst = found,
                _ => {}
            }
        }
    }
    worst
}

/// Whether the stage's values, within their ranges, may turn the sign of a disturbance's effect, to first order.
fn may_turn(linear: &Linear, axes: &[Axis], extra: usize) -> bool {
    let mut point: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
    point[extra] = axes[extra].high;
    let mut gradient = vec![0.0; axes.len()];
    let Some(effect) = linear.at(&point, &mut gradient) else { return true };
    let own = gradient.iter().zip(axes).take(linear.model.parameters.len());
    let reach: f64 =
        own.map(|(slope, axis)| slope.abs() * (axis.high - axis.nominal).max(axis.nominal - axis.low)).sum();
    effect.abs() <= reach
}

/// Appends the axes of extra values; returns them with the names of the extra ones.
pub(super) fn with_axes(mut axes: Vec<Axis>, extras: &[Extra]) -> (Vec<Axis>, Vec<Item>) {
    axes.extend(extras.iter().map(|extra| extra.axis));
    (axes, extras.iter().map(|extra| extra.item).collect())
}
