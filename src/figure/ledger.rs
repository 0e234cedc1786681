//! Ledgers: what a study found, item by item.

use crate::circuit::{Circuit, ElementId, ElementKind, NetId};
use crate::device::Rank;
use crate::figure::stage::Stage;
use crate::figure::study::{Axis, Quantity, Study};
use crate::figure::trials::trials;
use crate::figure::{Bad, Figure, Kind, Quality};
use crate::quantity::Unit;
use crate::solve::What;

/// What a line of a ledger is about.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Item {
    /// The nominal value that the other lines start from.
    Nominal,
    /// What the nominal values alone miss of an intended gain.
    Values,
    /// What no single item explains.
    HigherOrder,
    /// A parameter of an op amp, by its index in the circuit.
    OpAmp(u32, Quality),
    /// A resistor.
    Resistor(ElementId),
    /// Resistors of a matched group that move together; the first of them.
    Group(ElementId),
    /// A rail.
    Rail(NetId),
    /// Everything that moves the output of an earlier stage.
    Upstream(NetId),
}

impl Item {
    /// The item in words.
    pub fn label(self, circuit: &Circuit) -> String {
        let element = |id: ElementId| circuit.element(id).name.as_str();
        match self {
            Item::Nominal => "nominal".to_owned(),
            Item::Values => "nominal values".to_owned(),
            Item::HigherOrder => "higher order".to_owned(),
            Item::OpAmp(at, quality) => {
                format!("{} {}", circuit.op_amps[at as usize].name, quality.label())
            }
            Item::Resistor(id) => element(id).to_owned(),
            Item::Group(id) => format!("{} and its matched group", element(id)),
            Item::Rail(net) => format!("rail {}", circuit.net(net).name),
            Item::Upstream(net) => format!("error of {}", circuit.net(net).name),
        }
    }

    /// The element whose line it points at.
    pub fn element(self, circuit: &Circuit) -> Option<ElementId> {
        match self {
            Item::OpAmp(at, _) => Some(circuit.op_amps[at as usize].element),
            Item::Resistor(id) | Item::Group(id) => Some(id),
            Item::Nominal | Item::Values | Item::HigherOrder | Item::Rail(_) | Item::Upstream(_) => None,
        }
    }
}

/// One line of a ledger.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Line {
    /// What it is about.
    pub item: Item,
    /// Its signed effect, in the figure's unit.
    pub effect: f64,
    /// How far its data can be trusted.
    pub rank: Rank,
    /// Its value: nominal or typical, at the worst corner, and the unit of both.
    pub value: Option<(f64, f64, Unit)>,
}

impl Stage<'_> {
    /// What each of a model's parameters is called.
    fn item(&self, at: usize) -> Item {
        let model = self.model();
        let op_amp = |amp: usize, what| match model.op_amps[amp] {
            Some(op_amp) => Item::OpAmp(op_amp, what),
            None => Item::HigherOrder,
        };
        match &model.parameters[at].what {
            What::InverseGain(amp) => op_amp(*amp, Quality::OpenLoopGain),
            What::Differential(amp) => op_amp(*amp, Quality::InputResistance),
            What::Common(amp) => op_amp(*amp, Quality::CommonModeResistance),
            What::Output(amp) => op_amp(*amp, Quality::OutputResistance),
            What::Resistors(branches) if branches.len() == 1 => {
                Item::Resistor(model.elements[branches[0] as usize])
            }
            What::Resistors(branches) => Item::Group(model.elements[branches[0] as usize]),
        }
    }

    /// An item's value in the unit that people read it in: at a nominal and at another coordinate.
    fn natural(&self, item: Item, nominal: f64, corner: f64) -> Option<(f64, f64, Unit)> {
        let circuit = self.board.circuit;
        match item {
            Item::OpAmp(_, quality) => {
                Some((quality.natural(nominal), quality.natural(corner), quality.unit()))
            }
            Item::Resistor(id) | Item::Group(id) => match circuit.element(id).kind {
                ElementKind::Resistor(part) => {
                    let ohms = part.value?;
                    Some((ohms * nominal.exp(), ohms * corner.exp(), Unit::Ohm))
                }
                _ => None,
            },
            Item::Rail(net) => {
                let volts = circuit.potential(net)?.nominal;
                Some((volts, volts + corner, Unit::Volt))
            }
            Item::Upstream(_) => Some((0.0, corner, Unit::Volt)),
            Item::Nominal | Item::Values | Item::HigherOrder => None,
        }
    }

    /// A figure from a study; `extras` names the axes behind the model's parameters.
    ///
    /// The base is nought for errors: then what the base point itself has is a line of its own. For all
    /// else the nominal value is the base and the first line.
    pub(super) fn figure_of(
        &self,
        kind: Kind,
        quantity: &dyn Quantity,
        axes: &[Axis],
        found: &Study,
        extras: &[Item],
        error: bool,
    ) -> Figure {
        let parameters = self.model().parameters.len();
        let mut lines: Vec<Line> = found
            .effects
            .iter()
            .enumerate()
            .filter(|(_, effect)| **effect != 0.0)
            .map(|(at, effect)| {
                let item = if at < parameters { self.item(at) } else { extras[at - parameters] };
                let value = self.natural(item, axes[at].typical, found.corner[at]);
                Line { item, effect: *effect, rank: axes[at].rank, value }
            })
            .collect();
        lines.sort_by(|a, b| b.effect.abs().total_cmp(&a.effect.abs()));
        let squares: f64 = lines.iter().map(|line| line.effect * line.effect).sum();
        let rest = found.worst - found.base - lines.iter().map(|line| line.effect).sum::<f64>();
        if rest.abs() > 1e-12 * found.worst.abs() {
            lines.push(Line { item: Item::HigherOrder, effect: rest, rank: Rank::Guaranteed, value: None });
        }
        let first = if error { Item::Values } else { Item::Nominal };
        if !error || 1e-14 < found.base.abs() {
            lines.insert(0, Line { item: first, effect: found.base, rank: Rank::Guaranteed, value: None });
        }
        let rss = match (error, kind.doc().bad) {
            (true, _) => (squares + found.base * found.base).sqrt(),
            (false, Bad::Low) => found.nominal - squares.sqrt(),
            (false, _) => found.nominal + squares.sqrt(),
        };
        Figure {
            // Adding nought takes the sign off a nought.
            nominal: Some(found.nominal + 0.0),
            worst: Some(found.worst + 0.0),
            rss: Some(rss + 0.0),
            reason: None,
            trials: trials(quantity, axes, self.trials, error && kind.doc().bad == Bad::High),
            ledger: lines,
            ..Figure::unknown(kind, "")
        }
    }
}
