//! Statements to the flat graph of nets and elements, with what the budget adds.
//!
//! Subcircuits are expanded, values evaluated, tolerances and loads of the budget put in. What can't be
//! read right is a [`Diagnostic`](crate::diagnostic::Diagnostic); the rest of the board stands.

mod apply;
mod calls;
mod declare;
mod expand;
mod trace;
mod unknown;
mod identify;
mod scope;
mod values;

pub use apply::build;
pub use values::supply_like;

use crate::device::{Rank, Technology};
use crate::source::Span;
use petgraph::graph::{NodeIndex, UnGraph};
use petgraph::visit::EdgeRef;
use smallvec::SmallVec;

/// A net of a circuit.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct NetId(pub u32);

/// An element of a circuit.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct ElementId(pub u32);

/// One net.
#[derive(Debug, Clone)]
pub struct Net {
    /// Its name as first written, with its subcircuit path.
    pub name: String,
    /// Where it is first written.
    pub span: Option<Span>,
    /// Whether it is ground.
    pub ground: bool,
    /// Whether a person named it, as far as can be told.
    pub labelled: bool,
    /// Whether the exporter marks the pin as unconnected.
    pub unconnected: bool,
    /// Whether the budget says what drives it: nothing is inferred about it.
    pub declared: bool,
}

/// One element.
#[derive(Debug, Clone)]
pub struct Element {
    /// Its designator as written, with its subcircuit path.
    pub name: String,
    /// Nets in the order of its pins.
    pub nets: SmallVec<[NetId; 4]>,
    /// What it is.
    pub kind: ElementKind,
    /// The line that declares it: netlist, or budget for what the budget adds.
    pub span: Option<Span>,
}

/// Value and tolerance of a passive.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Part {
    /// Value in ohm, farad or henry; `None` where the netlist has none.
    pub value: Option<f64>,
    /// Relative tolerance, temperature drift included.
    pub tolerance: f64,
    /// Where the tolerance comes from.
    pub rank: Rank,
    /// Rated power (watt) or voltage (volt), where stated.
    pub rating: Option<f64>,
    /// Value at either end of its travel, ohm, where it is adjustable.
    pub travel: Option<(f64, f64)>,
    /// Index of the matched group it belongs to, with the tolerance of the group's ratios.
    pub group: Option<(u32, f64)>,
}

/// DC value and range of an independent source.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Drive {
    /// DC value, where given.
    pub dc: Option<f64>,
    /// What its waveform spans, where one is given.
    pub span: Option<(f64, f64)>,
    /// Whether it moves: a waveform or an AC magnitude is given.
    pub moves: bool,
    /// Whether its value stands there but can't be told.
    pub unknown: bool,
}

/// What an element is.
#[derive(Debug, Clone, PartialEq)]
pub enum ElementKind {
    /// Two pins, ohm.
    Resistor(Part),
    /// Two pins, farad.
    Capacitor(Part),
    /// Two pins, henry.
    Inductor(Part),
    /// Two pins, volt from the first to the second.
    VoltageSource(Drive),
    /// Two pins, ampere through the source from the first to the second.
    CurrentSource(Drive),
    /// Output, output reference, control, control reference: a linear voltage amplifier.
    VoltageGain(f64),
    /// An op amp; index into [`Circuit::op_amps`].
    OpAmp(u32),
    /// Two pins.
    Diode,
    /// Three pins or more.
    Transistor,
    /// Zero ohm: its two nets are one.
    Link,
    /// Its nets count, its values don't.
    Unmodelled,
}

/// One op amp: a section of a package where a package holds several.
#[derive(Debug, Clone)]
pub struct OpAmp {
    /// The element it is.
    pub element: ElementId,
    /// Its id in reports.
    pub name: String,
    /// The model or device name in the netlist.
    pub model: String,
    /// Index into the catalogue's profiles; `None` for an unknown device.
    pub profile: Option<usize>,
    /// Technology, from the profile or the budget.
    pub technology: Option<Technology>,
    /// Non-inverting input.
    pub non_inverting: NetId,
    /// Inverting input.
    pub inverting: NetId,
    /// Output.
    pub output: NetId,
    /// Positive supply pin; `None` where it is called without.
    pub positive: Option<NetId>,
    /// Negative supply pin.
    pub negative: Option<NetId>,
}

/// An op amp that can't be placed: which of its nodes is which pin isn't known.
#[derive(Debug, Clone, PartialEq)]
pub struct Unplaced {
    /// The element, kept as an unmodelled part.
    pub element: ElementId,
    /// The model or device name in the netlist.
    pub model: String,
    /// Why, in words.
    pub reason: String,
    /// What to declare.
    pub cure: String,
}

/// What a net's voltage is known to be.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Potential {
    /// Nominal or resting value, volt.
    pub nominal: f64,
    /// Least and greatest value, where known.
    pub range: Option<(f64, f64)>,
    /// How far the nominal can be trusted.
    pub rank: Rank,
}

/// What the budget or a voltage source says of a net.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Tie {
    /// The budget declares it a rail.
    Rail,
    /// The budget declares it a signal, or a leg of a pair.
    Signal,
    /// Tied to ground through voltage sources that only have a DC value.
    Source,
    /// Tied to ground through voltage sources of which at least one moves.
    MovingSource,
}

/// A current that feeds a net.
#[derive(Debug, Clone)]
pub struct CurrentInput {
    /// The name reports use: the declared signal's, else the net's.
    pub name: String,
    /// The net it flows into.
    pub into: NetId,
    /// The net it flows out of.
    pub from: NetId,
    /// Range of the current into the net, where known.
    pub range: Option<(f64, f64)>,
    /// Declared source resistance in parallel, ohm.
    pub source: Option<f64>,
    /// Where it is written.
    pub span: Option<Span>,
}

/// A declared source resistance in series with a signal.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SourceResistance {
    /// Net of the open-circuit voltage.
    pub open: NetId,
    /// Net behind the resistance, which the stage loads.
    pub loaded: NetId,
    /// Ohm.
    pub ohms: f64,
}

/// A declared differential signal.
#[derive(Debug, Clone)]
pub struct DeclaredPair {
    /// Its name.
    pub name: String,
    /// Net of the positive leg's open-circuit voltage.
    pub positive: NetId,
    /// Net of the negative leg's.
    pub negative: NetId,
    /// Range of the difference.
    pub difference: Option<(f64, f64)>,
    /// Range of the mean.
    pub common: Option<(f64, f64)>,
}

/// A flat board.
#[derive(Debug, Default)]
pub struct Circuit {
    /// Nets, ground first.
    pub nets: Vec<Net>,
    /// Elements in netlist order, the budget's last.
    pub elements: Vec<Element>,
    /// Op amps in netlist order.
    pub op_amps: Vec<OpAmp>,
    /// Op amps that can't be placed, in netlist order.
    pub unplaced: Vec<Unplaced>,
    /// What ties a net to a known or declared voltage.
    pub ties: Vec<Option<Tie>>,
    /// The voltage, where it is known.
    pub potentials: Vec<Option<Potential>>,
    /// Currents that feed nets.
    pub currents: Vec<CurrentInput>,
    /// Declared source resistances of voltages.
    pub series: Vec<SourceResistance>,
    /// Declared pairs.
    pub pairs: Vec<DeclaredPair>,
    /// Ambient range in degree Celsius, both 25 where undeclared.
    pub temperature: (f64, f64),
    graph: UnGraph<(), u8>,
}

impl Circuit {
    /// The net ground.
    pub const GROUND: NetId = NetId(0);

    /// A net by its id.
    pub fn net(&self, id: NetId) -> &Net {
        &self.nets[id.0 as usize]
    }

    /// An element by its id.
    pub fn element(&self, id: ElementId) -> &Element {
        &self.elements[id.0 as usize]
    }

    /// Ids of all nets.
    pub fn net_ids(&self) -> impl Iterator<Item = NetId> + use<> {
        (0..self.nets.len() as u32).map(NetId)
    }

    /// Ids of all elements.
    pub fn element_ids(&self) -> impl Iterator<Item = ElementId> + use<> {
        (0..self.elements.len() as u32).map(ElementId)
    }

    /// Elements on a net with the pin that touches it, last element first.
    pub fn pins(&self, net: NetId) -> impl Iterator<Item = (ElementId, usize)> {
        let nets = self.nets.len() as u32;
        self.graph
            .edges(NodeIndex::new(net.0 as usize))
            .map(move |edge| (ElementId(edge.target().index() as u32 - nets), *edge.weight() as usize))
    }

    /// What ties a net to a known or declared voltage.
    pub fn tie(&self, net: NetId) -> Option<Tie> {
        self.ties[net.0 as usize]
    }

    /// The voltage of a net, where it is known.
    pub fn potential(&self, net: NetId) -> Option<Potential> {
        self.potentials[net.0 as usize]
    }

    /// Puts another value on a resistor, capacitor or inductor; whether there is one of that name.
    pub fn set_value(&mut self, name: &str, value: f64) -> bool {
        let mut found = false;
        for element in self.elements.iter_mut().filter(|element| element.name.eq_ignore_ascii_case(name)) {
            if let ElementKind::Resistor(part) | ElementKind::Capacitor(part) | ElementKind::Inductor(part) =
                &mut element.kind
            {
                part.value = Some(value).filter(|value| 0.0 < *value && value.is_finite());
                found = true;
            }
        }
        found
    }

    /// Joins nets and elements into the graph; nothing may be added afterwards.
    fn connect(&mut self) {
        let mut graph =
            UnGraph::with_capacity(self.nets.len() + self.elements.len(), 3 * self.elements.len());
        for _ in 0..self.nets.len() + self.elements.len() {
            graph.add_node(());
        }
        for (at, element) in self.elements.iter().enumerate() {
            let node = NodeIndex::new(self.nets.len() + at);
            for (pin, net) in element.nets.iter().enumerate() {
                graph.add_edge(NodeIndex::new(net.0 as usize), node, pin.min(255) as u8);
            }
        }
        self.graph = graph;
    }
}
