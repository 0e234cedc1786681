//! The matrix of a block and its solutions, forward and adjoint.

use crate::solve::dense::Square;
use crate::solve::{Excitation, List, Network, Node, Scalar, Values};
use smallvec::SmallVec;

/// A block whose equations have no single solution.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Singular {
    /// The unknown at fault.
    pub unknown: usize,
}

/// A block with values, factored.
#[derive(Debug, Clone)]
pub struct Solved<'n, T: Scalar> {
    pub(super) network: &'n Network<T>,
    pub(super) values: Values<T>,
    pub(super) member_at: List<Option<usize>>,
    /// What the current law of each row is multiplied with: one, or a Ro for an output.
    pub(super) factor: List<T>,
    /// What each whole row is multiplied with.
    scale: List<f64>,
    matrix: Square<T>,
    inverse: Square<T>,
}

/// A solution under one excitation.
#[derive(Debug, Clone)]
pub struct State<T: Scalar> {
    /// Voltages, then branch currents.
    pub unknowns: List<T>,
    /// Voltages of the ports.
    pub ports: List<T>,
    /// What was injected.
    pub(super) injections: SmallVec<[(Node, T); 4]>,
    /// Largest remainder of any row over the largest unknown and the right side; infinite where a number is
    /// none.
    pub residual: f64,
}

/// An adjoint solution: what a unit of disturbance anywhere does to one quantity.
#[derive(Debug, Clone)]
pub struct Weights<T> {
    /// Effect of a current into each unknown's node.
    pub current: List<T>,
    /// Effect of an error in series with each member's input.
    pub error: SmallVec<[T; 2]>,
    /// Effect of a volt in each short.
    pub short: SmallVec<[T; 2]>,
}

impl<T: Scalar> State<T> {
    /// The voltage of a node.
    pub fn volts(&self, node: Node) -> T {
        match node {
            Node::Ground => T::zero(),
            Node::Unknown(at) => self.unknowns[at as usize],
            Node::Port(at) => self.ports.get(at as usize).copied().unwrap_or_else(T::zero),
        }
    }
}

impl<T: Scalar> Weights<T> {
    /// Effect of a current into a node; none where the node is held.
    pub fn current(&self, node: Node) -> T {
        match node {
            Node::Unknown(at) => self.current[at as usize],
            Node::Ground | Node::Port(_) => T::zero(),
        }
    }
}

impl<'n, T: Scalar> Solved<'n, T> {
    /// Assembles and factors a block.
    ///
    /// # Errors
    /// [`Singular`] where the values leave an unknown undetermined.
    pub fn new(network: &'n Network<T>, values: Values<T>) -> Result<Self, Singular> {
        let member_at = network.member_at();
        let factor: List<T> = member_at
            .iter()
            .map(|member| match member {
                Some(member) => {
                    let amp = values.amps[*member];
                    amp.inverse_gain * T::from_real(amp.output)
                }
                None => T::one(),
            })
            .collect();
        let mut matrix = assemble(network, &values, &member_at, &factor);
        let mut scale = List::from_elem(1.0, matrix.size());
        for (row, scale) in scale.iter_mut().enumerate() {
            let most = matrix.largest_in_row(row);
            if 0.0 < most && most.is_finite() {
                *scale = 1.0 / most;
                matrix.scale_row(row, *scale);
            }
        }
        let inverse = matrix.inverse()?;
        Ok(Solved { network, values, member_at, factor, scale, matrix, inverse })
    }

    /// The values it was assembled with.
    pub fn values(&self) -> &Values<T> {
        &self.values
    }

    /// The block it was assembled from.
    pub fn network(&self) -> &'n Network<T> {
        self.network
    }

    /// The solution under an excitation, refined once.
    pub fn forward(&self, excitation: &Excitation<T>) -> State<T> {
        let rhs = self.right_side(excitation);
        let (unknowns, residual) = refine(&self.matrix, &self.inverse, rhs);
        State {
            unknowns,
            ports: excitation.ports.clone(),
            injections: excitation.injections.clone(),
            residual,
        }
    }

    /// The adjoint solution for the quantity `sum of coefficient * unknown`.
    pub fn adjoint(&self, coefficients: &[(Node, T)]) -> Weights<T> {
        let mut rhs = List::from_elem(T::zero(), self.network.size());
        for (node, coefficient) in coefficients {
            if let Node::Unknown(at) = node {
                rhs[*at as usize] += *coefficient;
            }
        }
        let mut lambda = self.inverse.transposed_times(&rhs);
        let remainder = difference(rhs, &self.matrix.transposed_times(&lambda));
        add(&mut lambda, &self.inverse.transposed_times(&remainder));
        let row = |at: usize| lambda[at] * T::from_real(self.scale[at]);
        let nets = self.network.unknowns;
        let members = &self.network.amps[..self.network.members];
        Weights {
            current: (0..nets).map(|at| row(at) * self.factor[at]).collect(),
            error: members.iter().map(|amp| amp.output.map_or(T::zero(), |at| row(at as usize))).collect(),
            short: (nets..self.network.size()).map(row).collect(),
        }
    }

    /// The transfer from every port to the quantity of an adjoint solution.
    pub fn from_ports(&self, weights: &Weights<T>) -> List<T> {
        let mut transfers = List::from_elem(T::zero(), self.network.ports);
        self.network.conductances(&self.values, |a, b, siemens| {
            for (held, other) in [(a, b), (b, a)] {
                if let Node::Port(port) = held {
                    transfers[port as usize] += siemens * weights.current(other);
                }
            }
        });
        for (amp, error) in self.network.amps.iter().zip(&weights.error) {
            for (node, sign) in [(amp.plus, T::one()), (amp.minus, -T::one())] {
                if let Node::Port(port) = node {
                    transfers[port as usize] += sign * *error;
                }
            }
        }
        for load in &self.network.loads {
            if let Node::Port(port) = load.node {
                transfers[port as usize] -= load.siemens * weights.current(Node::Unknown(load.output));
            }
        }
        for (short, weight) in self.network.shorts.iter().zip(&weights.short) {
            for (node, sign) in [(short.a, -T::one()), (short.b, T::one())] {
                if let Node::Port(port) = node {
                    transfers[port as usize] += sign * *weight;
                }
            }
        }
        transfers
    }

    /// What the shorts' own voltages add to the quantity of an adjoint solution.
    pub fn from_shorts(&self, weights: &Weights<T>) -> T {
        let volts = self.network.shorts.iter().map(|short| T::from_real(short.volts));
        volts.zip(&weights.short).fold(T::zero(), |sum, (volts, weight)| sum + volts * *weight)
    }

    /// The sign of the determinant: whether an odd number of real poles has moved to the right.
    pub(super) fn sign(&self) -> f64 {
        self.matrix.sign()
    }

    fn right_side(&self, excitation: &Excitation<T>) -> List<T> {
        let mut rhs = List::from_elem(T::zero(), self.network.size());
        let held = |node: Node| match node {
            Node::Port(at) => excitation.ports.get(at as usize).copied(),
            Node::Ground | Node::Unknown(_) => None,
        };
        if !excitation.ports.is_empty() {
            self.network.conductances(&self.values, |a, b, siemens| {
                for (node, other) in [(a, b), (b, a)] {
                    if let (Node::Unknown(at), Some(volts)) = (node, held(other)) {
                        rhs[at as usize] += self.factor[at as usize] * siemens * volts;
                    }
                }
            });
            for load in &self.network.loads {
                if let Some(volts) = held(load.node) {
                    rhs[load.output as usize] -= self.factor[load.output as usize] * load.siemens * volts;
                }
            }
        }
        for (member, amp) in self.network.amps[..self.network.members].iter().enumerate() {
            let Some(row) = amp.output else { continue };
            let error = excitation.errors.get(member).copied().unwrap_or_else(T::zero);
            let plus = held(amp.plus).unwrap_or_else(T::zero);
            let minus = held(amp.minus).unwrap_or_else(T::zero);
            rhs[row as usize] += error + plus - minus;
        }
        for (node, amps) in &excitation.injections {
            if let Node::Unknown(at) = node {
                rhs[*at as usize] += self.factor[*at as usize] * *amps;
            }
        }
        for (at, short) in self.network.shorts.iter().enumerate() {
            let own = if excitation.constant { T::from_real(short.volts) } else { T::zero() };
            let ends = held(short.b).unwrap_or_else(T::zero) - held(short.a).unwrap_or_else(T::zero);
            rhs[self.network.unknowns + at] += own + ends;
        }
        for (entry, scale) in rhs.iter_mut().zip(&self.scale) {
            *entry *= T::from_real(*scale);
        }
        rhs
    }
}

fn assemble<T: Scalar>(
    network: &Network<T>,
    values: &Values<T>,
    member_at: &[Option<usize>],
    factor: &[T],
) -> Square<T> {
    let mut matrix = Square::zero(network.size());
    network.conductances(values, |a, b, siemens| {
        for (node, other) in [(a, b), (b, a)] {
            if let Node::Unknown(row) = node {
                let term = factor[row as usize] * siemens;
                matrix.add(row as usize, row as usize, term);
                if let Node::Unknown(column) = other {
                    matrix.add(row as usize, column as usize, -(term));
                }
            }
        }
    });
    for load in &network.loads {
        if let Node::Unknown(column) = load.node {
            let row = load.output as usize;
            matrix.add(row, column as usize, factor[row] * load.siemens);
        }
    }
    for (row, member) in member_at.iter().enumerate() {
        let Some(member) = member else { continue };
        let amp = network.amps[*member];
        matrix.add(row, row, values.amps[*member].inverse_gain);
        for (node, sign) in [(amp.plus, -T::one()), (amp.minus, T::one())] {
            if let Node::Unknown(column) = node {
                matrix.add(row, column as usize, sign);
            }
        }
    }
    for (at, short) in network.shorts.iter().enumerate() {
        let branch = network.unknowns + at;
        for (node, sign) in [(short.a, T::one()), (short.b, -T::one())] {
            if let Node::Unknown(net) = node {
                matrix.add(net as usize, branch, sign * factor[net as usize]);
                matrix.add(branch, net as usize, sign);
            }
        }
    }
    matrix
}

/// A product with the inverse and one step of refinement; what is left of the worst row, over the largest
/// unknown and the right side: the normwise backward error, rows being scaled to one (Rigal and Gaches 1967;
/// cited from memory). A row of vanishing terms must not count by itself, it is rounding throughout.
fn refine<T: Scalar>(matrix: &Square<T>, inverse: &Square<T>, rhs: List<T>) -> (List<T>, f64) {
    let mut unknowns = inverse.times(&rhs);
    let remainder = difference(rhs.clone(), &matrix.times(&unknowns));
    add(&mut unknowns, &inverse.times(&remainder));
    let left = difference(rhs.clone(), &matrix.times(&unknowns));
    let largest = |list: &[T]| list.iter().fold(0.0f64, |most, entry| most.max(entry.norm1()));
    let finite = |list: &[T]| list.iter().all(|entry| entry.norm1().is_finite());
    let size = largest(&unknowns) + largest(&rhs);
    let residual = match () {
        _ if !finite(&unknowns) || !finite(&left) => f64::INFINITY,
        _ if 0.0 < size => largest(&left) / size,
        _ => 0.0,
    };
    (unknowns, residual)
}

fn difference<T: Scalar>(mut from: List<T>, less: &[T]) -> List<T> {
    from.iter_mut().zip(less).for_each(|(entry, less)| *entry -= *less);
    from
}

fn add<T: Scalar>(to: &mut [T], more: &[T]) {
    to.iter_mut().zip(more).for_each(|(entry, more)| *entry += *more);
}
