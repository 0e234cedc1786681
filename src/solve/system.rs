//! The matrix of a block and its solutions, forward and adjoint.

use crate::solve::{Excitation, Network, Node, Scalar, Values};
use nalgebra::{DMatrix, DVector, Dyn, LU};

/// A pivot under this share of the terms that went into it is rounding: the system is singular.
/// Found on floating islands whose values round; a sound block keeps its pivots above 1e-13.
const LEAST_PIVOT: f64 = 2e-15;

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
    pub(super) member_at: Vec<Option<usize>>,
    /// What the current law of each row is multiplied with: one, or a Ro for an output.
    pub(super) factor: Vec<T>,
    /// What each whole row is multiplied with.
    scale: Vec<f64>,
    matrix: DMatrix<T>,
    inverse: DMatrix<T>,
}

/// A solution under one excitation.
#[derive(Debug, Clone)]
pub struct State<T: Scalar> {
    /// Voltages, then branch currents.
    pub unknowns: DVector<T>,
    /// Voltages of the ports.
    pub ports: Vec<T>,
    /// What was injected.
    pub(super) injections: Vec<(Node, T)>,
    /// Largest remainder of any row, as a share of its terms.
    pub residual: f64,
}

/// An adjoint solution: what a unit of disturbance anywhere does to one quantity.
#[derive(Debug, Clone)]
pub struct Weights<T> {
    /// Effect of a current into each unknown's node.
    pub current: Vec<T>,
    /// Effect of an error in series with each member's input.
    pub error: Vec<T>,
    /// Effect of a volt in each short.
    pub short: Vec<T>,
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
        let factor: Vec<T> = member_at
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
        let scale: Vec<f64> = matrix
            .row_iter()
            .map(|row| row.iter().fold(0.0f64, |most, entry| most.max(entry.modulus())))
            .map(|most| if 0.0 < most && most.is_finite() { 1.0 / most } else { 1.0 })
            .collect();
        for (mut row, scale) in matrix.row_iter_mut().zip(&scale) {
            row.scale_mut(*scale);
        }
        let lu = LU::new(matrix.clone());
        check_pivots(&lu)?;
        let inverse = lu.try_inverse().ok_or(Singular { unknown: 0 })?;
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
        let (unknowns, residual) = refine(&self.matrix, &self.inverse, &rhs);
        State {
            unknowns,
            ports: excitation.ports.clone(),
            injections: excitation.injections.clone(),
            residual,
        }
    }

    /// The adjoint solution for the quantity `sum of coefficient * unknown`.
    pub fn adjoint(&self, coefficients: &[(Node, T)]) -> Weights<T> {
        let mut rhs = DVector::from_element(self.network.size(), T::zero());
        for (node, coefficient) in coefficients {
            if let Node::Unknown(at) = node {
                rhs[*at as usize] += *coefficient;
            }
        }
        let mut lambda = self.inverse.tr_mul(&rhs);
        let remainder = rhs - self.matrix.tr_mul(&lambda);
        lambda += self.inverse.tr_mul(&remainder);
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
    pub fn from_ports(&self, weights: &Weights<T>) -> Vec<T> {
        let mut transfers = vec![T::zero(); self.network.ports];
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
        LU::new(self.matrix.clone()).determinant().real().signum()
    }

    fn right_side(&self, excitation: &Excitation<T>) -> DVector<T> {
        let mut rhs = DVector::from_element(self.network.size(), T::zero());
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
) -> DMatrix<T> {
    let mut matrix = DMatrix::from_element(network.size(), network.size(), T::zero());
    network.conductances(values, |a, b, siemens| {
        for (node, other) in [(a, b), (b, a)] {
            if let Node::Unknown(row) = node {
                let term = factor[row as usize] * siemens;
                matrix[(row as usize, row as usize)] += term;
                if let Node::Unknown(column) = other {
                    matrix[(row as usize, column as usize)] -= term;
                }
            }
        }
    });
    for load in &network.loads {
        if let Node::Unknown(column) = load.node {
            let row = load.output as usize;
            matrix[(row, column as usize)] += factor[row] * load.siemens;
        }
    }
    for (row, member) in member_at.iter().enumerate() {
        let Some(member) = member else { continue };
        let amp = network.amps[*member];
        matrix[(row, row)] += values.amps[*member].inverse_gain;
        for (node, sign) in [(amp.plus, -T::one()), (amp.minus, T::one())] {
            if let Node::Unknown(column) = node {
                matrix[(row, column as usize)] += sign;
            }
        }
    }
    for (at, short) in network.shorts.iter().enumerate() {
        let branch = network.unknowns + at;
        for (node, sign) in [(short.a, T::one()), (short.b, -T::one())] {
            if let Node::Unknown(net) = node {
                matrix[(net as usize, branch)] += sign * factor[net as usize];
                matrix[(branch, net as usize)] += sign;
            }
        }
    }
    matrix
}

/// Compares each pivot with the sum of the absolute terms that went into it.
fn check_pivots<T: Scalar>(lu: &LU<T, Dyn, Dyn>) -> Result<(), Singular> {
    let packed = lu.lu_internal();
    for at in 0..packed.nrows() {
        let pivot = packed[(at, at)].modulus();
        let terms: f64 = (0..at).map(|k| packed[(at, k)].modulus() * packed[(k, at)].modulus()).sum();
        if !(pivot > LEAST_PIVOT * (pivot + terms) && pivot.is_finite()) {
            return Err(Singular { unknown: at });
        }
    }
    Ok(())
}

/// A product with the inverse and one step of refinement; the remainder as a share of its terms.
fn refine<T: Scalar>(matrix: &DMatrix<T>, inverse: &DMatrix<T>, rhs: &DVector<T>) -> (DVector<T>, f64) {
    let mut unknowns = inverse * rhs;
    let remainder = rhs - matrix * &unknowns;
    unknowns += inverse * remainder;
    let mut residual = 0.0f64;
    for row in 0..matrix.nrows() {
        let terms = (0..matrix.ncols()).map(|column| matrix[(row, column)] * unknowns[column]);
        let size: f64 = terms.clone().map(|term| term.modulus()).sum::<f64>() + rhs[row].modulus();
        let left = terms.fold(rhs[row], |left, term| left - term).modulus();
        if 0.0 < size {
            residual = residual.max(left / size);
        }
    }
    (unknowns, residual)
}
