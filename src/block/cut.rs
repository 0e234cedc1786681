//! The cut: networks reached from inputs, blocks as strongly connected components, their ports.

use crate::block::ends::{self, passive};
use crate::block::roles;
use crate::block::{Amp, AmpId, Block, Layout, Port, Role};
use crate::circuit::{Circuit, ElementId, NetId};
use petgraph::algo::kosaraju_scc;
use petgraph::graph::{DiGraph, NodeIndex};
use petgraph::unionfind::UnionFind;
use rustc_hash::FxHashMap;

/// Cuts a board into blocks; currents that open ends feed into inputs are added to the circuit.
pub fn lay_out(circuit: &mut Circuit) -> Layout {
    let (amps, skipped) = roles::amps(circuit);
    let roles = roles::fixed(circuit, &amps, &skipped);
    let mut layout = Layout { roles, amps, skipped, ..Layout::default() };
    ends::find(circuit, &mut layout);
    let networks = Networks::of(circuit, &layout);
    layout.blocks = blocks(circuit, &layout, &networks);
    let several =
        layout.blocks.iter().filter(|block| 1 < block.members.len()).flat_map(|block| &block.members);
    let alone =
        |amp: &AmpId| (*amp, block(circuit, &layout, &networks, vec![*amp], Loads::default(), &|_| false));
    let mut locals: Vec<(AmpId, Block)> = several.map(alone).collect();
    locals.sort_by_key(|(amp, _)| *amp);
    layout.locals = locals;
    layout
}

/// A connected set of free nets.
#[derive(Debug, Default)]
struct Network {
    nets: Vec<NetId>,
    elements: Vec<ElementId>,
    /// Amplifiers with an input on it, in netlist order.
    inputs: Vec<AmpId>,
    /// Outputs at its edge, in netlist order.
    outputs: Vec<AmpId>,
    /// All held nets at its edge but ground, in netlist order.
    edge: Vec<NetId>,
}

#[derive(Debug, Default)]
struct Networks {
    all: Vec<Network>,
    /// Network of each net, where it is free and on an element.
    of_net: FxHashMap<NetId, usize>,
}

impl Networks {
    /// Free nets joined by passives; the two inputs of an amplifier are joined by its input resistance.
    fn of(circuit: &Circuit, layout: &Layout) -> Networks {
        let free = |net: NetId| layout.role(net) == Role::Free;
        let mut joined = UnionFind::<u32>::new(circuit.nets.len());
        let mut join = |a: NetId, b: NetId| {
            if free(a) && free(b) {
                joined.union(a.0, b.0);
            }
        };
        circuit.elements.iter().filter(|e| passive(circuit, e)).for_each(|e| join(e.nets[0], e.nets[1]));
        layout.amps.iter().filter(|amp| amp.op_amp.is_some()).for_each(|amp| join(amp.plus, amp.minus));
        let mut networks = Networks::default();
        let mut index: FxHashMap<u32, usize> = FxHashMap::default();
        let mut at = |net: NetId, networks: &mut Networks| {
            let place = *index.entry(joined.find(net.0)).or_insert_with(|| {
                networks.all.push(Network::default());
                networks.all.len() - 1
            });
            networks.of_net.insert(net, place);
            place
        };
        for id in circuit.element_ids() {
            let element = circuit.element(id);
            if !passive(circuit, element) {
                continue;
            }
            for (net, other) in [(element.nets[0], element.nets[1]), (element.nets[1], element.nets[0])] {
                if free(net) {
                    let place = at(net, &mut networks);
                    let network = &mut networks.all[place];
                    network.nets.push(net);
                    network.elements.push(id);
                    network.touch(other, layout);
                }
            }
        }
        for (number, amp) in layout.amps.iter().enumerate() {
            for (net, other) in [(amp.plus, amp.minus), (amp.minus, amp.plus)] {
                if free(net) {
                    let place = at(net, &mut networks);
                    let network = &mut networks.all[place];
                    network.nets.push(net);
                    network.inputs.push(AmpId(number as u32));
                    if amp.op_amp.is_some() {
                        network.touch(other, layout);
                    }
                }
            }
        }
        networks.all.iter_mut().for_each(Network::settle);
        networks
    }

    fn of_amp(&self, amp: &Amp) -> Vec<usize> {
        let mut found: Vec<usize> =
            [amp.plus, amp.minus].iter().filter_map(|net| self.of_net.get(net).copied()).collect();
        found.sort_unstable();
        found.dedup();
        found
    }
}

impl Network {
    fn touch(&mut self, net: NetId, layout: &Layout) {
        match layout.role(net) {
            Role::Free | Role::Ground => {}
            Role::Output(amp) => {
                self.outputs.push(amp);
                self.edge.push(net);
            }
            _ => self.edge.push(net),
        }
    }

    fn settle(&mut self) {
        self.nets.sort_unstable();
        self.nets.dedup();
        self.elements.sort_unstable();
        self.elements.dedup();
        self.inputs.sort_unstable();
        self.inputs.dedup();
        self.outputs.sort_unstable();
        self.outputs.dedup();
        self.edge.sort_unstable();
        self.edge.dedup();
    }
}

/// Strongly connected components of 'the output of A reaches an input of B', those that feed first.
fn blocks(circuit: &Circuit, layout: &Layout, networks: &Networks) -> Vec<Block> {
    let amps = layout.amps.len();
    let mut graph: DiGraph<(), ()> = DiGraph::new();
    (0..amps + networks.all.len()).for_each(|_| {
        graph.add_node(());
    });
    let node = NodeIndex::new;
    for (at, network) in networks.all.iter().enumerate() {
        network.outputs.iter().for_each(|amp| {
            graph.add_edge(node(amp.0 as usize), node(amps + at), ());
        });
        network.inputs.iter().for_each(|amp| {
            graph.add_edge(node(amps + at), node(amp.0 as usize), ());
        });
    }
    for (at, amp) in layout.amps.iter().enumerate() {
        for net in [amp.plus, amp.minus] {
            if let Role::Output(driver) = layout.role(net) {
                graph.add_edge(node(driver.0 as usize), node(at), ());
            }
        }
    }
    let components = kosaraju_scc(&graph);
    let mut owner: Vec<Option<usize>> = vec![None; networks.all.len()];
    let mut groups: Vec<Vec<AmpId>> = Vec::new();
    for component in components.into_iter().rev() {
        let mut members: Vec<AmpId> =
            component.iter().filter(|at| at.index() < amps).map(|at| AmpId(at.index() as u32)).collect();
        if members.is_empty() {
            continue;
        }
        members.sort_unstable();
        for network in component.iter().filter(|at| at.index() >= amps) {
            owner[network.index() - amps] = Some(groups.len());
        }
        groups.push(members);
    }
    let mut group_of = vec![0; amps];
    for (group, members) in groups.iter().enumerate() {
        members.iter().for_each(|amp| group_of[amp.0 as usize] = group);
    }
    for (at, network) in networks.all.iter().enumerate() {
        owner[at] = owner[at].or(network.inputs.first().map(|amp| group_of[amp.0 as usize]));
    }
    let mut loads = loads(circuit, layout, networks);
    groups
        .into_iter()
        .enumerate()
        .map(|(at, members)| {
            let own = loads_of(&members, layout, &mut loads);
            block(circuit, layout, networks, members, own, &|network| owner[network] == Some(at))
        })
        .collect()
}

/// What hangs on each output beside networks with inputs: passives to held nets and networks without inputs.
fn loads(
    circuit: &Circuit,
    layout: &Layout,
    networks: &Networks,
) -> FxHashMap<NetId, (Vec<ElementId>, Vec<usize>)> {
    let mut loads: FxHashMap<NetId, (Vec<ElementId>, Vec<usize>)> = FxHashMap::default();
    for id in circuit.element_ids() {
        let element = circuit.element(id);
        if passive(circuit, element) && element.nets.iter().all(|net| layout.role(*net) != Role::Free) {
            for net in element.nets.iter().filter(|net| matches!(layout.role(**net), Role::Output(_))) {
                loads.entry(*net).or_default().0.push(id);
            }
        }
    }
    for (at, network) in networks.all.iter().enumerate().filter(|(_, network)| network.inputs.is_empty()) {
        for amp in &network.outputs {
            loads.entry(layout.amp(*amp).output).or_default().1.push(at);
        }
    }
    loads
}

type Loads = (Vec<ElementId>, Vec<usize>);

fn loads_of(members: &[AmpId], layout: &Layout, loads: &mut FxHashMap<NetId, Loads>) -> Loads {
    let mut own = Loads::default();
    for member in members {
        if let Some((elements, networks)) = loads.remove(&layout.amp(*member).output) {
            own.0.extend(elements);
            own.1.extend(networks);
        }
    }
    own.1.sort_unstable();
    own.1.dedup();
    own
}

fn block(
    circuit: &Circuit,
    layout: &Layout,
    networks: &Networks,
    members: Vec<AmpId>,
    (mut loads, load_networks): Loads,
    owns: &dyn Fn(usize) -> bool,
) -> Block {
    let mut own: Vec<usize> = members.iter().flat_map(|amp| networks.of_amp(layout.amp(*amp))).collect();
    own.sort_unstable();
    own.dedup();
    let mut block = Block { owns_network: own.iter().all(|network| owns(*network)), ..Block::default() };
    let mut ports: Vec<(NetId, bool)> = Vec::new();
    for network in own.iter().map(|at| &networks.all[*at]) {
        block.nets.extend(&network.nets);
        block.network.extend(&network.elements);
        block.visitors.extend(network.inputs.iter().filter(|amp| !members.contains(amp)));
        ports.extend(network.edge.iter().map(|net| (*net, true)));
    }
    for network in load_networks.iter().map(|at| &networks.all[*at]) {
        block.nets.extend(&network.nets);
        loads.extend(&network.elements);
        ports.extend(network.edge.iter().map(|net| (*net, false)));
    }
    for id in &loads {
        ports.extend(circuit.element(*id).nets.iter().map(|net| (*net, false)));
    }
    for amp in members.iter().map(|amp| layout.amp(*amp)) {
        ports.extend([(amp.plus, true), (amp.minus, true)]);
    }
    block.members = members;
    block.ports = settle_ports(layout, &block, ports);
    block.nets.sort_unstable();
    block.nets.dedup();
    block.network.sort_unstable();
    block.network.dedup();
    loads.sort_unstable();
    loads.dedup();
    block.loads = loads;
    block.visitors.sort_unstable();
    block.visitors.dedup();
    let inside = |net: NetId| block.nets.binary_search(&net).is_ok();
    let feeds = circuit.currents.iter().enumerate();
    block.currents = feeds
        .filter(|(_, current)| inside(current.into) || inside(current.from))
        .map(|(at, _)| at as u32)
        .collect();
    block
}

fn settle_ports(layout: &Layout, block: &Block, mut found: Vec<(NetId, bool)>) -> Vec<Port> {
    found.retain(|(net, _)| match layout.role(*net) {
        Role::Free | Role::Ground => false,
        Role::Output(amp) => block.members.binary_search(&amp).is_err(),
        _ => true,
    });
    found.sort_unstable_by_key(|(net, input)| (*net, !*input));
    found.dedup_by_key(|(net, _)| *net);
    found.into_iter().map(|(net, input)| Port { net, role: layout.role(net), input }).collect()
}
