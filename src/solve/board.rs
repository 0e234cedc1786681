//! The board composed of its blocks: what each block draws from those that feed it, and one row of
//! transfers from the board's primary quantities for every output.

use crate::block::{AmpId, Layout, Port, Role};
use crate::circuit::{Circuit, DeclaredPair, NetId, Tie};
use crate::device::{Catalogue, Rank};
use crate::solve::device::{Device, Supply};
use crate::solve::model::Model;
use crate::solve::{Feed, Node};
use rustc_hash::FxHashMap;

/// What a primary quantity is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum PrimaryKind {
    /// The constant one, for the voltages of floating sources.
    Constant,
    /// A signal net.
    Signal,
    /// The difference of a declared pair.
    Difference,
    /// The mean of a declared pair.
    Common,
    /// A supply or declared voltage.
    Rail,
    /// A fixed voltage.
    Reference,
    /// A current, ampere.
    Current,
    /// The output of a block that couldn't be solved.
    Unsolved,
}

/// Something that the board is driven by.
#[derive(Debug, Clone, PartialEq)]
pub struct Primary {
    /// What it is.
    pub kind: PrimaryKind,
    /// Its name in reports.
    pub name: String,
    /// Its net, where it is one.
    pub net: Option<NetId>,
    /// Its value at rest, volt or ampere.
    pub rest: f64,
    /// Its range, where known; a rail's is its nominal value alone.
    pub range: Option<(f64, f64)>,
    /// What a rail may deviate to either side.
    pub deviation: f64,
    /// How far value and range can be trusted.
    pub rank: Rank,
    /// How far the deviation can be trusted.
    pub deviation_rank: Rank,
}

/// Transfers from primaries, by their index, in rising order.
pub type Row = Vec<(u32, f64)>;

/// A board with its blocks as equations.
#[derive(Debug)]
pub struct Board<'a> {
    /// The flat board.
    pub circuit: &'a Circuit,
    /// How it is cut.
    pub layout: &'a Layout,
    /// Profiles and what is assumed.
    pub catalogue: &'a Catalogue,
    /// One for each op amp of the circuit.
    pub devices: Vec<Device>,
    /// One for each block.
    pub models: Vec<Model>,
    /// What drives the board; the first is the constant.
    pub primaries: Vec<Primary>,
    /// Block and place within it of each amplifier.
    pub place: Vec<(usize, usize)>,
    /// Row of each amplifier's output.
    pub rows: Vec<Row>,
    fixed: FxHashMap<NetId, Row>,
    levels: Vec<u8>,
    supply_nets: Vec<(Option<NetId>, Option<NetId>)>,
    /// Index of the first current among the primaries.
    pub first_current: usize,
}

impl<'a> Board<'a> {
    /// Composes a board; `nets` holds the positive and negative supply net of each op amp.
    pub fn new(
        circuit: &'a Circuit,
        layout: &'a Layout,
        catalogue: &'a Catalogue,
        nets: Vec<(Option<NetId>, Option<NetId>)>,
    ) -> Board<'a> {
        let supplies = nets.iter().map(|nets| supply(circuit, catalogue.assumed.rail, *nets));
        let devices: Vec<Device> = circuit
            .op_amps
            .iter()
            .zip(supplies)
            .map(|(op_amp, supply)| Device::new(circuit, catalogue, op_amp, supply))
            .collect();
        let models = layout.blocks.iter().map(|block| Model::new(circuit, layout, block, &devices)).collect();
        let mut place = vec![(usize::MAX, 0); layout.amps.len()];
        for (at, block) in layout.blocks.iter().enumerate() {
            for (member, amp) in block.members.iter().enumerate() {
                place[amp.0 as usize] = (at, member);
            }
        }
        let mut board = Board {
            circuit,
            layout,
            catalogue,
            devices,
            models,
            primaries: Vec::new(),
            place,
            rows: vec![Row::new(); layout.amps.len()],
            fixed: FxHashMap::default(),
            levels: vec![0; layout.amps.len()],
            supply_nets: nets,
            first_current: 0,
        };
        board.rank_outputs();
        board.load();
        // A block whose loads make it regenerate is found by the sweep; its outputs are primaries then.
        loop {
            board.enumerate();
            let faults = board.sweep();
            if faults.is_empty() {
                break;
            }
            for (block, fault) in faults {
                board.models[block].fault.get_or_insert(fault);
            }
        }
        board
    }

    /// The transfers of a held net from the primaries; empty for ground.
    pub fn row(&self, port: &Port) -> &[(u32, f64)] {
        match port.role {
            Role::Output(amp) if !self.fixed.contains_key(&port.net) => &self.rows[amp.0 as usize],
            _ => self.fixed.get(&port.net).map_or(&[], Vec::as_slice),
        }
    }

    /// Nets of an op amp's positive and negative supply.
    pub fn supply_nets(&self, op_amp: u32) -> (Option<NetId>, Option<NetId>) {
        self.supply_nets[op_amp as usize]
    }

    /// The primary that is a declared pair's difference; its mean is the next.
    pub fn pair_difference(&self, pair: &DeclaredPair) -> Option<u32> {
        self.fixed.get(&pair.positive)?.first().map(|(primary, _)| *primary)
    }

    /// The primary that a held net is alone.
    pub fn primary_of(&self, net: NetId) -> Option<u32> {
        match self.fixed.get(&net).map(Vec::as_slice) {
            Some([(primary, entry)]) if *entry == 1.0 => Some(*primary),
            _ => None,
        }
    }

    /// How much of a signal a held net is: 2 for a signal, 1 for a source that only has a DC value, 0 for
    /// rails, references and what is derived from them alone. Of a stage's ports those of the highest
    /// level above 0 are its signals.
    pub fn level(&self, net: NetId) -> u8 {
        match self.layout.role(net) {
            Role::Signal => 2,
            Role::Output(amp) => self.levels[amp.0 as usize],
            Role::Reference if self.circuit.tie(net) == Some(Tie::Source) => 1,
            Role::Reference | Role::Rail | Role::Ground | Role::Free => 0,
        }
    }

    fn rank_outputs(&mut self) {
        for block in &self.layout.blocks {
            let ports = block.ports.iter().filter(|port| port.input).map(|port| self.level(port.net));
            let level = if block.currents.is_empty() { ports.max().unwrap_or(0) } else { 2 };
            for amp in &block.members {
                self.levels[amp.0 as usize] = level;
            }
        }
    }

    /// What a quantity gains from each primary, given its transfers from a block's ports and what it has
    /// of the block's own: see [`Board::own`].
    pub fn compose(&self, block: usize, ports: &[f64], own: &[(u32, f64)]) -> Row {
        let mut terms: Row = Vec::with_capacity(8);
        for (port, transfer) in self.models[block].ports.iter().zip(ports) {
            if *transfer != 0.0 {
                terms.extend(self.row(port).iter().map(|(at, entry)| (*at, entry * transfer)));
            }
        }
        terms.extend(own);
        collect(terms)
    }

    /// What a quantity gains from the currents that feed a block, from what later blocks draw from it by
    /// themselves, and its constant part; `weight` is the effect of a current into a node.
    pub fn own(&self, block: usize, weight: impl Fn(Node) -> f64, constant: f64) -> Row {
        let mut terms: Row = vec![(0, constant)];
        for (at, (into, from)) in self.layout.blocks[block].currents.iter().zip(self.currents(block)) {
            terms.push((self.first_current as u32 + at, weight(into) - weight(from)));
        }
        for drain in &self.models[block].drains {
            terms.push((self.primary_of_feed(drain.feed), -drain.amps * weight(Node::Unknown(drain.output))));
        }
        collect(terms)
    }

    /// The primary behind what later blocks draw by themselves.
    pub fn primary_of_feed(&self, feed: Feed) -> u32 {
        match feed {
            Feed::Constant => 0,
            Feed::Current(at) => self.first_current as u32 + at,
        }
    }

    fn enumerate(&mut self) {
        let circuit = self.circuit;
        self.primaries.clear();
        self.fixed.clear();
        self.primaries.push(Primary {
            kind: PrimaryKind::Constant,
            name: String::new(),
            net: None,
            rest: 1.0,
            range: Some((1.0, 1.0)),
            deviation: 0.0,
            rank: Rank::Guaranteed,
            deviation_rank: Rank::Guaranteed,
        });
        for pair in &circuit.pairs {
            let at = self.primaries.len() as u32;
            self.primaries.push(signal(PrimaryKind::Difference, pair.name.clone(), pair.difference));
            self.primaries.push(signal(PrimaryKind::Common, format!("{} common", pair.name), pair.common));
            self.fixed.insert(pair.positive, vec![(at, 0.5), (at + 1, 1.0)]);
            self.fixed.insert(pair.negative, vec![(at, -0.5), (at + 1, 1.0)]);
        }
        for net in circuit.net_ids() {
            let primary = match self.layout.role(net) {
                Role::Signal | Role::Rail | Role::Reference if !self.fixed.contains_key(&net) => {
                    self.held(net)
                }
                Role::Output(amp) if !self.solved(amp) => {
                    signal(PrimaryKind::Unsolved, circuit.net(net).name.clone(), None)
                }
                _ => continue,
            };
            self.fixed.insert(net, vec![(self.primaries.len() as u32, 1.0)]);
            self.primaries.push(primary);
        }
        self.first_current = self.primaries.len();
        let currents = circuit.currents.iter();
        self.primaries
            .extend(currents.map(|input| signal(PrimaryKind::Current, input.name.clone(), input.range)));
    }

    /// Whether an amplifier's output follows from its block.
    pub fn solved(&self, amp: AmpId) -> bool {
        self.models[self.place[amp.0 as usize].0].fault.is_none()
    }

    fn held(&self, net: NetId) -> Primary {
        let potential = self.circuit.potential(net);
        let name = self.circuit.net(net).name.clone();
        let kind = match self.layout.role(net) {
            Role::Rail => PrimaryKind::Rail,
            Role::Reference => PrimaryKind::Reference,
            _ => PrimaryKind::Signal,
        };
        let range = potential.and_then(|potential| potential.range);
        let mut primary = Primary { net: Some(net), ..signal(kind, name, range) };
        let Some(potential) = potential else { return primary };
        primary.rest = potential.nominal;
        primary.rank = potential.rank;
        if kind != PrimaryKind::Signal {
            primary.range = Some((potential.nominal, potential.nominal));
            if kind == PrimaryKind::Rail {
                (primary.deviation, primary.deviation_rank) =
                    rail_deviation(self.circuit, net, self.catalogue.assumed.rail);
            }
        }
        primary
    }

    /// The nodes that each current of a block flows into and out of.
    pub fn currents(&self, block: usize) -> impl Iterator<Item = (Node, Node)> + '_ {
        let model = &self.models[block];
        self.layout.blocks[block].currents.iter().map(|at| {
            let current = &self.circuit.currents[*at as usize];
            let node = |net: NetId| model.node(net).unwrap_or(Node::Ground);
            (node(current.into), node(current.from))
        })
    }
}

/// A row out of terms in any order.
fn collect(mut terms: Row) -> Row {
    terms.sort_by_key(|(at, _)| *at);
    let mut row: Row = Vec::with_capacity(terms.len());
    for (at, entry) in terms {
        match row.last_mut() {
            Some((last, sum)) if *last == at => *sum += entry,
            _ => row.push((at, entry)),
        }
    }
    row.retain(|(_, entry)| *entry != 0.0);
    row
}

fn signal(kind: PrimaryKind, name: String, range: Option<(f64, f64)>) -> Primary {
    Primary {
        kind,
        name,
        net: None,
        rest: range.map_or(0.0, |(low, high)| (low + high) / 2.0),
        range,
        deviation: 0.0,
        rank: Rank::Guaranteed,
        deviation_rank: Rank::Guaranteed,
    }
}

/// The supplies on two nets, where the voltages of both are known and in order.
fn supply(
    circuit: &Circuit,
    assumed: f64,
    (positive, negative): (Option<NetId>, Option<NetId>),
) -> Option<Supply> {
    let (positive, negative) = (positive?, negative?);
    let volts = |net: NetId| match circuit.net(net).ground {
        true => Some((0.0, Rank::Guaranteed)),
        false => circuit.potential(net).map(|potential| (potential.nominal, potential.rank)),
    };
    let (above, below) = (volts(positive)?, volts(negative)?);
    let (up, down) = (rail_deviation(circuit, positive, assumed), rail_deviation(circuit, negative, assumed));
    (below.0 < above.0).then(|| Supply {
        positive: above.0,
        negative: below.0,
        deviation: (up.0, down.0),
        rank: above.1.max(below.1),
        deviation_rank: up.1.max(down.1),
    })
}

/// What a rail may deviate: as declared, else the assumed share of its voltage.
pub(super) fn rail_deviation(circuit: &Circuit, net: NetId, assumed: f64) -> (f64, Rank) {
    let Some(potential) = circuit.potential(net) else { return (0.0, Rank::Assumed) };
    if circuit.net(net).ground {
        return (0.0, Rank::Guaranteed);
    }
    match potential.range {
        // A source's single value says nothing of what a rail may do; a declared deviation of nought does.
        Some((low, high)) if low < high || circuit.tie(net) == Some(Tie::Rail) => {
            ((high - low) / 2.0, Rank::Guaranteed)
        }
        _ => (potential.nominal.abs() * assumed, Rank::Assumed),
    }
}
