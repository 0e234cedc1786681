//! Quantities that are linear in what drives a stage: an output error, a distance to a limit, a current.

use crate::figure::study::{Axis, Quantity};
use crate::solve::{Excitation, List, Model, Node, Sensitivity, Solved, State, What, along, values_at};
use smallvec::SmallVec;

/// How a unit of one extra value acts: a list each for currents, errors and port voltages, and directly.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Effect {
    /// Currents into nodes.
    pub injections: SmallVec<[(Node, f64); 2]>,
    /// Errors in series with members' inputs.
    pub errors: SmallVec<[(usize, f64); 1]>,
    /// Voltages of ports.
    pub ports: SmallVec<[(usize, f64); 2]>,
    /// Added to the quantity itself.
    pub direct: f64,
}

/// What a linear quantity reads of a solution.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Reading {
    /// Voltages, each with its coefficient.
    Nodes(SmallVec<[(Node, f64); 2]>),
    /// The current that leaves a node through the first so many branches; the whole current takes in
    /// the inputs of amplifiers and what later blocks draw.
    Current { from: Node, branches: usize, whole: bool },
}

/// `constant + sign * (sum of coefficient * voltage) + sum of direct effects`.
#[derive(Debug, Clone)]
pub(super) struct Linear<'m> {
    /// The block.
    pub model: &'m Model,
    /// Whether the op amps are ideal.
    pub twin: bool,
    /// What is read.
    pub reading: Reading,
    /// What stands beside the reading.
    pub constant: f64,
    /// What multiplies the reading.
    pub sign: f64,
    /// What drives the block before the extra values.
    pub excitation: Excitation<f64>,
    /// Extra values, in the order of the axes behind the model's parameters.
    pub extras: Vec<Effect>,
}

/// Axes of a model's parameters with the ledger's base at their nominal or ideal values.
pub(super) fn axes(model: &Model, ideal_base: bool) -> Vec<Axis> {
    model
        .parameters
        .iter()
        .map(|parameter| Axis {
            base: if ideal_base { parameter.ideal } else { parameter.nominal },
            nominal: parameter.nominal,
            typical: parameter.nominal,
            low: parameter.low,
            high: parameter.high,
            rank: parameter.rank,
        })
        .collect()
}

impl Linear<'_> {
    /// The excitation with the extra values at their places on `point`.
    fn driven(&self, extras: &[f64]) -> Excitation<f64> {
        let mut driven = self.excitation.clone();
        driven.ports.resize(self.model.ports.len(), 0.0);
        driven.errors.resize(self.model.network.members, 0.0);
        for (effect, at) in self.extras.iter().zip(extras) {
            if *at == 0.0 {
                continue;
            }
            driven.injections.extend(effect.injections.iter().map(|(node, amps)| (*node, amps * at)));
            effect.errors.iter().for_each(|(member, volts)| driven.errors[*member] += volts * at);
            effect.ports.iter().for_each(|(port, volts)| driven.ports[*port] += volts * at);
        }
        driven
    }

    /// Coefficients of the reading at given conductances.
    fn coefficients(&self, solved: &Solved<f64>) -> SmallVec<[(Node, f64); 2]> {
        let (from, branches, whole) = match &self.reading {
            Reading::Nodes(nodes) => return nodes.clone(),
            Reading::Current { from, branches, whole } => (*from, *branches, *whole),
        };
        let (network, values) = (&self.model.network, solved.values());
        let mut read = SmallVec::new();
        let mut flow = |other: Node, siemens: f64| read.extend([(from, siemens), (other, -siemens)]);
        for (branch, siemens) in network.branches[..branches].iter().zip(&values.siemens) {
            if let Some(other) = other_end(branch.a, branch.b, from) {
                flow(other, *siemens);
            }
        }
        if whole {
            for (amp, values) in network.amps.iter().zip(&values.amps) {
                if let Some(other) = other_end(amp.plus, amp.minus, from) {
                    flow(other, values.differential);
                }
                [amp.plus, amp.minus]
                    .into_iter()
                    .filter(|input| *input == from)
                    .for_each(|_| flow(Node::Ground, values.common));
            }
            let loads = network.loads.iter().filter(|load| Node::Unknown(load.output) == from);
            read.extend(loads.map(|load| (load.node, load.siemens)));
        }
        read
    }

    /// Adds what the coefficients of a current gain themselves where conductances change.
    fn add_own(&self, state: &State<f64>, sensitivity: &mut Sensitivity<f64>) {
        let Reading::Current { from, branches, whole } = self.reading else { return };
        let across = |other: Node| state.volts(from) - state.volts(other);
        for (at, branch) in self.model.network.branches[..branches].iter().enumerate() {
            if let Some(other) = other_end(branch.a, branch.b, from) {
                sensitivity.siemens[at] += across(other);
            }
        }
        for (at, amp) in self.model.network.amps.iter().enumerate().filter(|_| whole) {
            if let Some(other) = other_end(amp.plus, amp.minus, from) {
                sensitivity.amps[at][1] += across(other);
            }
            let own = [amp.plus, amp.minus].into_iter().filter(|input| *input == from).count();
            sensitivity.amps[at][2] += own as f64 * state.volts(from);
        }
    }

    /// Transfers of the reading from every port, with the coefficients of ports that are read directly.
    pub(super) fn transfers(&self, solved: &Solved<f64>) -> (List<f64>, List<f64>, f64) {
        let coefficients = self.coefficients(solved);
        let weights = solved.adjoint(&coefficients);
        let mut ports = solved.from_ports(&weights);
        for (node, coefficient) in &coefficients {
            if let Node::Port(port) = node {
                ports[*port as usize] += coefficient;
            }
        }
        (ports, weights.current.clone(), solved.from_shorts(&weights))
    }
}

/// The far end of a branch that starts at a node.
pub(super) fn other_end(a: Node, b: Node, from: Node) -> Option<Node> {
    if a == from {
        Some(b)
    } else if b == from {
        Some(a)
    } else {
        None
    }
}

fn read(coefficients: &[(Node, f64)], state: &State<f64>) -> f64 {
    coefficients.iter().map(|(node, coefficient)| coefficient * state.volts(*node)).sum()
}

impl Quantity for Linear<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let parameters = &self.model.parameters;
        let (own, extras) = point.split_at(parameters.len());
        let mut values = values_at(&self.model.nominal, parameters, own);
        if self.twin {
            values = values.twin(|amp| self.model.op_amps[amp].is_some());
        }
        let solved = Solved::new(&self.model.network, values).ok()?;
        let state = solved.forward(&self.driven(extras));
        let coefficients = self.coefficients(&solved);
        let weights = solved.adjoint(&coefficients);
        let mut sensitivity = solved.sensitivity(&state, &weights);
        self.add_own(&state, &mut sensitivity);
        along(parameters, solved.values(), &sensitivity, gradient);
        for (slope, parameter) in gradient.iter_mut().zip(parameters) {
            // An ideal op amp has no parameters.
            let counts = !self.twin || matches!(parameter.what, What::Resistors(_));
            *slope *= if counts { self.sign } else { 0.0 };
        }
        let ports = solved.from_ports(&weights);
        let direct_port = |port: usize| -> f64 {
            let at = Node::Port(port as u32);
            coefficients.iter().filter(|(node, _)| *node == at).map(|(_, coefficient)| coefficient).sum()
        };
        let mut value = self.constant + self.sign * read(&coefficients, &state);
        for ((effect, at), slope) in self.extras.iter().zip(extras).zip(&mut gradient[parameters.len()..]) {
            let currents: f64 =
                effect.injections.iter().map(|(node, amps)| weights.current(*node) * amps).sum();
            let errors: f64 =
                effect.errors.iter().map(|(member, volts)| weights.error[*member] * volts).sum();
            let held: f64 =
                effect.ports.iter().map(|(port, volts)| (ports[*port] + direct_port(*port)) * volts).sum();
            *slope = self.sign * (currents + errors + held) + effect.direct;
            value += effect.direct * at;
        }
        Some(value)
    }
}
