//! Sensitivities: one forward and one adjoint solution give the effect of every value.

use crate::solve::{List, Node, Scalar, Solved, State, Weights};
use smallvec::SmallVec;

/// What a quantity gains for a unit of each value.
#[derive(Debug, Clone, Default)]
pub struct Sensitivity<T> {
    /// To 1/A, 1/Rid, 1/Rcm and Ro of each amplifier, in the network's order.
    pub amps: SmallVec<[[T; 4]; 2]>,
    /// To each branch's conductance, per siemens.
    pub siemens: List<T>,
}

impl<T: Scalar> Solved<'_, T> {
    /// The sensitivities of the quantity behind `weights` under the excitation behind `state`.
    ///
    /// For a conductance between a and b: `-(Wa - Wb)(Va - Vb)` with W the effect of a current into a
    /// node (adjoint network method).
    pub fn sensitivity(&self, state: &State<T>, weights: &Weights<T>) -> Sensitivity<T> {
        let across =
            |a: Node, b: Node| -(weights.current(a) - weights.current(b)) * (state.volts(a) - state.volts(b));
        let leaving = self.leaving(state);
        let amps = self.network.amps.iter().enumerate().map(|(at, amp)| {
            let differential = across(amp.plus, amp.minus);
            let common = across(amp.plus, Node::Ground) + across(amp.minus, Node::Ground);
            let Some(output) = amp.output else { return [T::zero(), differential, common, T::zero()] };
            let values = self.values.amps[at];
            let source = state.unknowns[output as usize] + T::from_real(values.output) * leaving[at];
            let error = weights.error[at];
            [-error * source, differential, common, -error * values.inverse_gain * leaving[at]]
        });
        let siemens = self.network.branches.iter().map(|branch| across(branch.a, branch.b));
        Sensitivity { amps: amps.collect(), siemens: siemens.collect() }
    }

    /// The current that leaves each member's output.
    pub fn leaving(&self, state: &State<T>) -> List<T> {
        let mut leaving = List::from_elem(T::zero(), self.network.members);
        let mut add = |node: Node, amps: T| {
            if let Node::Unknown(at) = node
                && let Some(member) = self.member_at[at as usize]
            {
                leaving[member] += amps;
            }
        };
        self.network.conductances(&self.values, |a, b, siemens| {
            let amps = siemens * (state.volts(a) - state.volts(b));
            add(a, amps);
            add(b, -amps);
        });
        for load in &self.network.loads {
            add(Node::Unknown(load.output), load.siemens * state.volts(load.node));
        }
        for (at, short) in self.network.shorts.iter().enumerate() {
            let amps = state.unknowns[self.network.unknowns + at];
            add(short.a, amps);
            add(short.b, -amps);
        }
        for (node, amps) in &state.injections {
            add(*node, -*amps);
        }
        leaving
    }

    /// The current that leaves each port into the block, through the first branches and shorts and the
    /// amplifiers that count.
    pub fn drawn(
        &self,
        state: &State<T>,
        branches: usize,
        shorts: usize,
        amp_counts: impl Fn(usize) -> bool,
    ) -> Vec<T> {
        let mut drawn = vec![T::zero(); self.network.ports];
        let mut flow = |a: Node, b: Node, amps: T| {
            for (node, amps) in [(a, amps), (b, -amps)] {
                if let Node::Port(at) = node {
                    drawn[at as usize] += amps;
                }
            }
        };
        let volts = |a: Node, b: Node| state.volts(a) - state.volts(b);
        for (branch, siemens) in self.network.branches[..branches].iter().zip(&self.values.siemens) {
            flow(branch.a, branch.b, *siemens * volts(branch.a, branch.b));
        }
        for (at, (amp, values)) in self.network.amps.iter().zip(&self.values.amps).enumerate() {
            if amp_counts(at) {
                flow(amp.plus, amp.minus, values.differential * volts(amp.plus, amp.minus));
                for input in [amp.plus, amp.minus] {
                    flow(input, Node::Ground, values.common * state.volts(input));
                }
            }
        }
        for (at, short) in self.network.shorts[..shorts].iter().enumerate() {
            flow(short.a, short.b, state.unknowns[self.network.unknowns + at]);
        }
        drawn
    }
}
