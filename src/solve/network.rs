//! What a block consists of, as stamps between nodes.

use crate::solve::{List, Scalar};
use smallvec::SmallVec;

/// Where a stamp is tied to.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Node {
    /// Ground.
    Ground,
    /// A voltage that the block sets.
    Unknown(u32),
    /// A held voltage.
    Port(u32),
}

/// An amplifier: a member of the block, or a visitor that only loads its network.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AmpStamp {
    /// Non-inverting input.
    pub plus: Node,
    /// Inverting input.
    pub minus: Node,
    /// The unknown that is its output; `None` for a visitor.
    pub output: Option<u32>,
}

/// A passive that conducts, by its place in [`Values::siemens`].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Branch {
    /// One end.
    pub a: Node,
    /// The other end.
    pub b: Node,
}

/// A branch without resistance: a floating source, an inductor at DC.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Short {
    /// Positive end.
    pub a: Node,
    /// Negative end.
    pub b: Node,
    /// Voltage from a to b.
    pub volts: f64,
}

/// What a later block draws from an output: `siemens` times the voltage of `node`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LoadStamp<T> {
    /// The unknown that is the output.
    pub output: u32,
    /// Whose voltage draws it.
    pub node: Node,
    /// Current that leaves the output for a volt at `node`.
    pub siemens: T,
}

/// What draws current from an output without any voltage of a port.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Feed {
    /// The voltages of floating sources.
    Constant,
    /// A current, by its place among the circuit's.
    Current(u32),
}

/// What later blocks and current sources draw from an output by themselves.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Drain {
    /// The unknown that is the output.
    pub output: u32,
    /// What draws.
    pub feed: Feed,
    /// Current that leaves the output for one unit of it.
    pub amps: f64,
}

/// The structure of a block.
#[derive(Debug, Clone, Default)]
pub struct Network<T> {
    /// Voltages that the block sets.
    pub unknowns: usize,
    /// Held voltages around it.
    pub ports: usize,
    /// Members first, then visitors.
    pub amps: Vec<AmpStamp>,
    /// How many of `amps` are members.
    pub members: usize,
    /// Passives that conduct.
    pub branches: Vec<Branch>,
    /// Branches without resistance.
    pub shorts: Vec<Short>,
    /// What later blocks draw.
    pub loads: Vec<LoadStamp<T>>,
}

/// Values of one amplifier. All nought is the ideal op amp of the twin.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AmpValues<T> {
    /// 1/A.
    pub inverse_gain: T,
    /// 1/Rid, siemens.
    pub differential: T,
    /// 1/Rcm, siemens.
    pub common: T,
    /// Ro, ohm.
    pub output: f64,
}

impl<T: Scalar> AmpValues<T> {
    /// The ideal op amp.
    pub fn ideal() -> Self {
        AmpValues { inverse_gain: T::zero(), differential: T::zero(), common: T::zero(), output: 0.0 }
    }
}

/// Values of a block's stamps.
#[derive(Debug, Clone, Default)]
pub struct Values<T> {
    /// In the order of [`Network::amps`].
    pub amps: SmallVec<[AmpValues<T>; 2]>,
    /// In the order of [`Network::branches`].
    pub siemens: List<T>,
}

impl<T: Scalar> Values<T> {
    /// The same passives with ideal op amps; controlled sources, which have only a gain, stay.
    pub fn twin(&self, is_op_amp: impl Fn(usize) -> bool) -> Values<T> {
        let twin = |(at, amp): (usize, &AmpValues<T>)| if is_op_amp(at) { AmpValues::ideal() } else { *amp };
        Values { amps: self.amps.iter().enumerate().map(twin).collect(), siemens: self.siemens.clone() }
    }
}

/// What drives a block.
#[derive(Debug, Clone, Default)]
pub struct Excitation<T> {
    /// Voltage of each port; missing ones are at 0.
    pub ports: List<T>,
    /// Error in series with each member's input; missing ones are 0.
    pub errors: SmallVec<[T; 2]>,
    /// Currents into nodes.
    pub injections: SmallVec<[(Node, T); 4]>,
    /// Whether the shorts' own voltages count.
    pub constant: bool,
}

impl<T: Scalar> Excitation<T> {
    /// A volt at one port.
    pub fn port(ports: usize, port: usize) -> Self {
        let mut held = List::from_elem(T::zero(), ports);
        held[port] = T::one();
        Excitation { ports: held, ..Excitation::none() }
    }

    /// Nothing at all.
    pub fn none() -> Self {
        Excitation {
            ports: List::new(),
            errors: SmallVec::new(),
            injections: SmallVec::new(),
            constant: false,
        }
    }
}

impl<T: Scalar> Network<T> {
    /// Unknowns and branch currents together.
    pub fn size(&self) -> usize {
        self.unknowns + self.shorts.len()
    }

    /// The member whose output an unknown is.
    pub(super) fn member_at(&self) -> List<Option<usize>> {
        let mut at = List::from_elem(None, self.unknowns);
        for (member, amp) in self.amps[..self.members].iter().enumerate() {
            if let Some(output) = amp.output {
                at[output as usize] = Some(member);
            }
        }
        at
    }

    /// Calls back with every conductance: its ends and its siemens.
    pub(super) fn conductances(&self, values: &Values<T>, mut each: impl FnMut(Node, Node, T)) {
        for (branch, siemens) in self.branches.iter().zip(&values.siemens) {
            each(branch.a, branch.b, *siemens);
        }
        for (amp, values) in self.amps.iter().zip(&values.amps) {
            if values.differential != T::zero() {
                each(amp.plus, amp.minus, values.differential);
            }
            if values.common != T::zero() {
                each(amp.plus, Node::Ground, values.common);
                each(amp.minus, Node::Ground, values.common);
            }
        }
    }
}
