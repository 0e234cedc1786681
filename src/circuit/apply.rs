//! The circuit of a netlist under a budget: expansion, then rails, grounds, signals, pairs and loads.

use crate::budget::Budget;
use crate::circuit::declare::Declarer;
use crate::circuit::expand::Expander;
use crate::circuit::{Circuit, ElementKind, NetId, trace, unknown};
use crate::device::Catalogue;
use crate::diagnostic::Diagnostic;
use crate::netlist::Netlist;
use crate::source::Sources;
use petgraph::unionfind::UnionFind;
use rustc_hash::FxHashMap;

/// Builds the circuit of a board; faults name lines of the netlist and of the budget.
pub fn build(
    sources: &Sources,
    netlist: &Netlist,
    budget: &Budget,
    catalogue: &Catalogue,
) -> (Circuit, Vec<Diagnostic>) {
    let mut expander = Expander::new(sources, netlist, budget, catalogue);
    expander.expand();
    join_links(&mut expander);
    let temperature = budget.temperature.map_or((25.0, 25.0), |(low, high)| (low.0, high.0));
    expander.circuit.temperature = temperature;
    let mut declarer = Declarer::new(&mut expander);
    declarer.declare(budget);
    let declared = declarer.finish();
    let Expander { mut circuit, mut faults, undefined, .. } = expander;
    faults.extend(trace::sources(&mut circuit));
    trace::currents(&mut circuit);
    trace::declared(&mut circuit, declared);
    faults.extend(unknown::settle(sources, &mut circuit, &undefined, (catalogue, budget)));
    circuit.connect();
    trace::names(&mut circuit);
    (circuit, faults)
}

/// Nets joined by a zero-ohm link become one, under the name that comes first.
fn join_links(expander: &mut Expander) {
    let circuit = &mut expander.circuit;
    let mut joined = UnionFind::<u32>::new(circuit.nets.len());
    let mut any = false;
    for element in &circuit.elements {
        if element.kind == ElementKind::Link && element.nets.len() == 2 {
            any |= joined.union(element.nets[0].0, element.nets[1].0);
        }
    }
    if !any {
        return;
    }
    let mut first: FxHashMap<u32, u32> = FxHashMap::default();
    let map: Vec<NetId> = (0..circuit.nets.len() as u32)
        .map(|net| NetId(*first.entry(joined.find(net)).or_insert(net)))
        .collect();
    let move_to = |net: &mut NetId| *net = map[net.0 as usize];
    circuit.elements.iter_mut().flat_map(|element| &mut element.nets).for_each(move_to);
    for op_amp in &mut circuit.op_amps {
        let signal = [&mut op_amp.non_inverting, &mut op_amp.inverting, &mut op_amp.output];
        signal.into_iter().chain(&mut op_amp.positive).chain(&mut op_amp.negative).for_each(move_to);
    }
    expander.joined = map;
}
