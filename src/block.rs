//! Where stages end: op amps, the networks that set what they do, their ports, and the blocks that must
//! be solved together. What each stage is called is decided here too, from its solution.

mod cut;
mod ends;
mod name;
mod roles;
mod verdict;

pub use cut::lay_out;
pub use name::{Topology, name};
pub use verdict::{open_loop, outside_loop, rectifier};

use crate::circuit::{ElementId, NetId};

/// An amplifier of the board: an op amp, or a linear voltage-controlled source.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct AmpId(pub u32);

/// An amplifier with its three signal nets.
#[derive(Debug, Clone, PartialEq)]
pub struct Amp {
    /// Index into the circuit's op amps; `None` for a controlled source.
    pub op_amp: Option<u32>,
    /// Gain of a controlled source.
    pub gain: Option<f64>,
    /// The element it is.
    pub element: ElementId,
    /// Non-inverting input.
    pub plus: NetId,
    /// Inverting input.
    pub minus: NetId,
    /// Output.
    pub output: NetId,
}

/// What sets the voltage of a net.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    /// The network it lies in.
    Free,
    /// Ground.
    Ground,
    /// A supply.
    Rail,
    /// A fixed voltage that is no signal where another one is there.
    Reference,
    /// Something outside.
    Signal,
    /// An amplifier's output.
    Output(AmpId),
}

/// A held net that a block's network touches; ground is none.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Port {
    /// The net.
    pub net: NetId,
    /// What sets it.
    pub role: Role,
    /// Whether it reaches an input of the block; else it is a load port, at 0 in the block's own figures.
    pub input: bool,
}

/// Op amps that must be solved together, with their network.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Block {
    /// Amplifiers whose outputs the block sets, in netlist order.
    pub members: Vec<AmpId>,
    /// Other amplifiers with an input on the block's network.
    pub visitors: Vec<AmpId>,
    /// Nets that its network sets, outputs aside, in netlist order.
    pub nets: Vec<NetId>,
    /// Passives of the network that reaches the members' inputs.
    pub network: Vec<ElementId>,
    /// Passives that only load the members' outputs.
    pub loads: Vec<ElementId>,
    /// Held nets around it, in netlist order.
    pub ports: Vec<Port>,
    /// Indices of the currents that feed its nets.
    pub currents: Vec<u32>,
    /// Whether the network counts as the load of the outputs that feed it; of several blocks on one
    /// network only one does.
    pub owns_network: bool,
}

/// Why an op amp's output can't be solved for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Unplaceable {
    /// It is tied to ground.
    Grounded,
    /// It is tied to a voltage source or a declared rail.
    Tied(NetId),
    /// So many outputs are joined.
    Joined(NetId, u8),
}

/// How a board is cut.
#[derive(Debug, Default)]
pub struct Layout {
    /// What sets each net.
    pub roles: Vec<Role>,
    /// Amplifiers in netlist order.
    pub amps: Vec<Amp>,
    /// Blocks, those that feed others first.
    pub blocks: Vec<Block>,
    /// Each amplifier of a block of several alone, the block's other outputs held.
    pub locals: Vec<(AmpId, Block)>,
    /// Op amps that can't be analysed, with the reason.
    pub skipped: Vec<(u32, Unplaceable)>,
    /// Nets taken for signals because nothing else could drive their network.
    pub inferred: Vec<NetId>,
    /// Networks that nothing drives, with the nets that could be the signal.
    pub undriven: Vec<Vec<NetId>>,
}

impl Layout {
    /// An amplifier by its id.
    pub fn amp(&self, id: AmpId) -> &Amp {
        &self.amps[id.0 as usize]
    }

    /// An amplifier of a block of several as a block of its own; `None` where its block is one of one.
    pub fn local(&self, amp: AmpId) -> Option<&Block> {
        let at = self.locals.binary_search_by_key(&amp, |(own, _)| *own).ok()?;
        Some(&self.locals[at].1)
    }

    /// What sets a net.
    pub fn role(&self, net: NetId) -> Role {
        self.roles[net.0 as usize]
    }
}
