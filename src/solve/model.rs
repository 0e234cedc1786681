//! A block's equations at DC, built from the circuit: capacitors open, inductors short.

use crate::block::{Block, Layout, Port, Role};
use crate::circuit::{Circuit, ElementId, ElementKind, NetId};
use crate::device::Rank;
use crate::solve::device::Device;
use crate::solve::parameter::{Parameter, What};
use crate::solve::shorted::{Joined, Shorted};
use crate::solve::{AmpStamp, AmpValues, Branch, Drain, Network, Node, Short, Values};
use petgraph::unionfind::UnionFind;
use rustc_hash::FxHashMap;
use smallvec::{SmallVec, smallvec};

/// Blocks with more unknowns than this aren't solved: dense solutions would take minutes.
const MOST_UNKNOWNS: usize = 400;
/// Blocks with more resistors than this aren't solved: each has lines of its own in every ledger.
const MOST_BRANCHES: usize = 4_000;

/// Why a block can't be solved.
#[derive(Debug, Clone, PartialEq)]
pub enum Fault {
    /// An input lies on a net without a DC path to anything that sets its voltage.
    NoPath(NetId),
    /// A resistor or a floating source of the network has no value that can be used.
    NoValue(ElementId),
    /// A voltage source or an inductor closes a loop of such elements, or joins two held voltages.
    ShortLoop(ElementId),
    /// A device of the block is unknown: index into the circuit's op amps.
    UnknownDevice(u32),
    /// The profile of an op amp gives no open-loop gain.
    NoGain(u32),
    /// Too many unknowns or resistors: how many.
    TooLarge(usize),
    /// The equations have no single solution; the net at fault where one is known.
    Singular(Option<NetId>),
    /// The twin has no DC solution: feedback is missing at DC.
    NoTwin(Option<NetId>),
    /// The solution leaves this share unexplained after refinement.
    Inexact(f64),
    /// The DC loop gain regenerates.
    Regenerative,
    /// The loop closes through an element that isn't modelled.
    OutsideLoop(ElementId),
    /// A diode makes the block non-linear by intent.
    NonLinear(ElementId),
    /// No passive leads from the output back to an input.
    OpenLoop,
}

/// A block as equations.
#[derive(Debug, Clone)]
pub struct Model {
    /// Its stamps.
    pub network: Network<f64>,
    /// Nominal values.
    pub nominal: Values<f64>,
    /// Everything its figures depend on.
    pub parameters: Vec<Parameter>,
    /// The resistor behind each branch.
    pub elements: Vec<ElementId>,
    /// How many branches belong to the network that reaches the inputs; the others are loads.
    pub feedback_branches: usize,
    /// The same of the branches without resistance.
    pub feedback_shorts: usize,
    /// What later blocks and current sources draw from the outputs by themselves.
    pub drains: Vec<Drain>,
    /// Op amp of each amplifier; `None` for a controlled source.
    pub op_amps: Vec<Option<u32>>,
    /// Why it can't be solved, where it can't.
    pub fault: Option<Fault>,
    /// Held nets around it: the block's, then those that only later blocks' draws tie to its outputs.
    pub ports: Vec<Port>,
    nodes: FxHashMap<NetId, Node>,
    unknown_nets: Vec<NetId>,
}

impl Model {
    /// Where a net stands in the equations; `None` where it has no DC path.
    pub fn node(&self, net: NetId) -> Option<Node> {
        if net == Circuit::GROUND { Some(Node::Ground) } else { self.nodes.get(&net).copied() }
    }

    /// The net behind an unknown.
    pub fn net(&self, unknown: usize) -> Option<NetId> {
        self.unknown_nets.get(unknown).copied()
    }

    /// The node of a net that a later block ties to an output; a held net becomes a load port.
    pub(super) fn port(&mut self, net: NetId, role: Role) -> Node {
        if let Some(node) = self.node(net) {
            return node;
        }
        let node = Node::Port(self.ports.len() as u32);
        self.ports.push(Port { net, role, input: false });
        self.network.ports = self.ports.len();
        self.nodes.insert(net, node);
        node
    }

    /// Whether both inputs of an amplifier are held, so that no network has it.
    pub(super) fn held(&self, amp: usize) -> bool {
        let stamp = self.network.amps[amp];
        let free = |node: Node| match node {
            Node::Unknown(at) => stamp.output != Some(at),
            Node::Ground | Node::Port(_) => false,
        };
        !free(stamp.plus) && !free(stamp.minus)
    }

    /// Builds a block's equations; what is wrong with them is in [`Model::fault`].
    pub fn new(circuit: &Circuit, layout: &Layout, block: &Block, devices: &[Device]) -> Model {
        let mut builder = Builder {
            circuit,
            layout,
            block,
            nodes: FxHashMap::default(),
            shorted: Shorted::default(),
            fault: None,
        };
        let conducting = builder.conducting();
        let unknown_nets = builder.number(&conducting);
        let mut model = Model {
            network: Network { unknowns: unknown_nets.len(), ports: block.ports.len(), ..Network::default() },
            nominal: Values::default(),
            parameters: Vec::new(),
            elements: Vec::new(),
            feedback_branches: 0,
            feedback_shorts: 0,
            drains: Vec::new(),
            op_amps: Vec::new(),
            fault: None,
            ports: block.ports.clone(),
            nodes: FxHashMap::default(),
            unknown_nets,
        };
        builder.amps(&mut model, devices);
        builder.branches(&mut model, &block.network);
        model.feedback_branches = model.elements.len();
        model.feedback_shorts = model.network.shorts.len();
        builder.branches(&mut model, &block.loads);
        if MOST_UNKNOWNS < model.network.size() {
            builder.fault.get_or_insert(Fault::TooLarge(model.network.size()));
        }
        if MOST_BRANCHES < model.elements.len() {
            builder.fault.get_or_insert(Fault::TooLarge(model.elements.len()));
        }
        groups(circuit, &mut model);
        model.fault = builder.fault;
        model.nodes = builder.nodes;
        model
    }
}

struct Builder<'a> {
    circuit: &'a Circuit,
    layout: &'a Layout,
    block: &'a Block,
    nodes: FxHashMap<NetId, Node>,
    shorted: Shorted,
    fault: Option<Fault>,
}

impl Builder<'_> {
    /// Own nets with a DC path to an output or a held net, in netlist order.
    fn conducting(&mut self) -> Vec<NetId> {
        let nets = &self.block.nets;
        let at = |net: NetId| nets.binary_search(&net).unwrap_or(nets.len());
        let mut joined = UnionFind::<u32>::new(nets.len() + 1);
        for id in self.block.network.iter().chain(&self.block.loads) {
            let element = self.circuit.element(*id);
            if !matches!(element.kind, ElementKind::Capacitor(_)) {
                joined.union(at(element.nets[0]) as u32, at(element.nets[1]) as u32);
            }
        }
        // A current fixes no voltage, and an input is no path: only what conducts counts.
        let held = joined.find(nets.len() as u32);
        let live = |net: &NetId| joined.find(at(*net) as u32) == held;
        for amp in self.block.members.iter().map(|amp| self.layout.amp(*amp)) {
            for net in [amp.plus, amp.minus] {
                if self.layout.role(net) == Role::Free && !live(&net) {
                    self.fault.get_or_insert(Fault::NoPath(net));
                }
            }
        }
        nets.iter().copied().filter(live).collect()
    }

    /// Gives every net its node; returns the nets of the unknowns.
    fn number(&mut self, own: &[NetId]) -> Vec<NetId> {
        let outputs = self.block.members.iter().map(|amp| self.layout.amp(*amp).output);
        let unknowns: Vec<NetId> = own.iter().copied().chain(outputs).collect();
        for (at, net) in unknowns.iter().enumerate() {
            self.nodes.insert(*net, Node::Unknown(at as u32));
        }
        for (at, port) in self.block.ports.iter().enumerate() {
            self.nodes.insert(port.net, Node::Port(at as u32));
        }
        unknowns
    }

    fn node(&self, net: NetId) -> Option<Node> {
        if net == Circuit::GROUND { Some(Node::Ground) } else { self.nodes.get(&net).copied() }
    }

    fn amps(&mut self, model: &mut Model, devices: &[Device]) {
        for (at, id) in self.block.members.iter().chain(&self.block.visitors).enumerate() {
            let amp = self.layout.amp(*id);
            let member = at < self.block.members.len();
            // A visitor's other input may lie outside the block; then only ground stands for it.
            let plus = self.node(amp.plus).unwrap_or(Node::Ground);
            let minus = self.node(amp.minus).unwrap_or(Node::Ground);
            let output = match self.node(amp.output) {
                Some(Node::Unknown(output)) if member => Some(output),
                _ => None,
            };
            if !member && amp.op_amp.is_none() {
                continue;
            }
            let place = model.network.amps.len();
            model.network.amps.push(AmpStamp { plus, minus, output });
            model.op_amps.push(amp.op_amp);
            let mut values = AmpValues::ideal();
            match (amp.op_amp, amp.gain) {
                (Some(op_amp), _) => {
                    let device = &devices[op_amp as usize];
                    if member {
                        self.check(op_amp, device);
                    }
                    for parameter in device.parameters(place, member) {
                        match parameter.what {
                            What::InverseGain(_) => values.inverse_gain = parameter.nominal,
                            What::Differential(_) => values.differential = parameter.nominal,
                            What::Common(_) => values.common = parameter.nominal,
                            What::Output(_) => values.output = parameter.nominal,
                            What::Resistors(_) => {}
                        }
                        model.parameters.push(parameter);
                    }
                }
                (None, gain) => values.inverse_gain = gain.map_or(0.0, |gain| 1.0 / gain),
            }
            model.nominal.amps.push(values);
        }
        model.network.members = self.block.members.len();
    }

    fn check(&mut self, op_amp: u32, device: &Device) {
        if device.unknown {
            self.fault.get_or_insert(Fault::UnknownDevice(op_amp));
        } else if device.inverse_gain.is_none() {
            self.fault.get_or_insert(Fault::NoGain(op_amp));
        }
    }

    fn branches(&mut self, model: &mut Model, elements: &[ElementId]) {
        for id in elements {
            let element = self.circuit.element(*id);
            let (Some(a), Some(b)) = (self.node(element.nets[0]), self.node(element.nets[1])) else {
                continue;
            };
            match element.kind {
                ElementKind::Resistor(part) => match part.value {
                    Some(ohms) => {
                        model.network.branches.push(Branch { a, b });
                        model.nominal.siemens.push(1.0 / ohms);
                        model.elements.push(*id);
                    }
                    None => {
                        self.fault.get_or_insert(Fault::NoValue(*id));
                    }
                },
                ElementKind::Inductor(_) => self.short(model, *id, Short { a, b, volts: 0.0 }),
                ElementKind::VoltageSource(drive) => {
                    if drive.unknown {
                        self.fault.get_or_insert(Fault::NoValue(*id));
                    }
                    self.short(model, *id, Short { a, b, volts: drive.dc.unwrap_or(0.0) });
                }
                _ => {}
            }
        }
    }
}

impl Builder<'_> {
    /// A short that says what others say already is left out, for its current would be undetermined.
    fn short(&mut self, model: &mut Model, id: ElementId, short: Short) {
        match self.shorted.join(short) {
            Joined::New => model.network.shorts.push(short),
            Joined::Same => {}
            Joined::Contradiction => {
                self.fault.get_or_insert(Fault::ShortLoop(id));
            }
        }
    }
}

/// One parameter for each resistor with a tolerance; a matched group moves together, and each of its
/// resistors by half the tolerance of the group's ratios beside it.
fn groups(circuit: &Circuit, model: &mut Model) {
    let mut common: Vec<(u32, Parameter)> = Vec::new();
    for (branch, id) in model.elements.iter().enumerate() {
        let ElementKind::Resistor(part) = circuit.element(*id).kind else { continue };
        let own = match part.group {
            Some((group, ratio)) => {
                let shared = common.iter_mut().find(|(other, _)| *other == group);
                match shared {
                    Some((_, parameter)) => {
                        if let What::Resistors(branches) = &mut parameter.what {
                            branches.push(branch as u32);
                        }
                    }
                    None => {
                        common.push((group, resistor(smallvec![branch as u32], part.tolerance, part.rank)))
                    }
                }
                ratio / 2.0
            }
            None => part.tolerance,
        };
        if 0.0 < own {
            model.parameters.push(resistor(smallvec![branch as u32], own, part.rank));
        }
    }
    model.parameters.extend(common.into_iter().map(|(_, parameter)| parameter));
}

fn resistor(branches: SmallVec<[u32; 2]>, tolerance: f64, rank: Rank) -> Parameter {
    let tolerance = tolerance.clamp(0.0, 0.99);
    Parameter {
        what: What::Resistors(branches),
        ideal: 0.0,
        nominal: 0.0,
        low: (1.0 - tolerance).ln(),
        high: (1.0 + tolerance).ln(),
        rank,
    }
}
