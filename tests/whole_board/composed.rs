//! What the crate makes of a board: a row of transfers for every output, and for every net inside a block.

use super::sketch::{Sketch, name};
use crate::nodal::{Element, Net, Nodal};
use gainsay::block::lay_out;
use gainsay::budget::Budget;
use gainsay::circuit::{self, NetId};
use gainsay::netlist::{self, Include};
use gainsay::solve::{Board, Excitation, Node, Solved};
use gainsay::source::Sources;

/// The largest difference between both rows of a net, as a share of the row's largest entry.
#[derive(Debug, Clone, PartialEq)]
pub struct Difference {
    /// The share; 0 where both rows are 0.
    pub share: f64,
    /// The net.
    pub net: String,
}

/// What a comparison found.
#[derive(Debug, Default)]
pub struct Comparison {
    /// Of outputs.
    pub outputs: Vec<Difference>,
    /// Of nets inside blocks.
    pub inner: Vec<Difference>,
    /// Blocks that weren't solved, with the reason.
    pub faults: Vec<String>,
}

/// Solves a board both ways.
pub fn compare(sketch: &Sketch) -> Comparison {
    compare_with(sketch, sketch)
}

/// Solves a board in blocks and compares it with the whole of another one with the same nets and sources.
pub fn compare_with(sketch: &Sketch, other: &Sketch) -> Comparison {
    let mut sources = Sources::default();
    let file = sources.add("board.cir", sketch.netlist());
    let (netlist, faults) =
        netlist::read(&mut sources, file, &mut |_, _, _| Include::Missing("there is none".to_owned()));
    assert!(faults.is_empty(), "{faults:?}");
    let catalogue = sketch.catalogue();
    let (mut circuit, faults) = circuit::build(&sources, &netlist, &Budget::default(), &catalogue);
    assert!(faults.is_empty(), "{faults:?}");
    let layout = lay_out(&mut circuit);
    let supplies = vec![(None, None); circuit.op_amps.len()];
    let board = Board::new(&circuit, &layout, &catalogue, supplies);
    let faults = board.models.iter().filter_map(|model| model.fault.as_ref());
    let mut comparison =
        Comparison { faults: faults.map(|fault| format!("{fault:?}")).collect(), ..Comparison::default() };
    if !comparison.faults.is_empty() {
        return comparison;
    }
    let whole = whole(other, &board);
    let net = |id: NetId| -> Net {
        let name = &circuit.net(id).name;
        name.strip_prefix('n').map_or(0, |digits| digits.parse().expect("nets are numbered"))
    };
    for (amp, row) in layout.amps.iter().zip(&board.rows) {
        let row = |primary: usize| entry(row, primary);
        comparison.outputs.push(differ(net(amp.output), &whole, row));
    }
    for at in 0..layout.blocks.len() {
        let states = states(&board, at);
        for id in &layout.blocks[at].nets {
            let Some(node) = board.models[at].node(*id) else { continue };
            comparison.inner.push(differ(net(*id), &whole, |primary| states[primary].volts(node)));
        }
    }
    comparison
}

/// Voltages of the whole board for one unit of each primary.
fn whole(sketch: &Sketch, board: &Board) -> Vec<Vec<f64>> {
    let nodal = Nodal::new(sketch.nets, &sketch.elements);
    let circuit = board.circuit;
    let driven = |wanted: &dyn Fn(&Element) -> bool| -> Vec<(usize, f64)> {
        let all = sketch.elements.iter().enumerate();
        all.filter(|(_, element)| wanted(element)).map(|(at, _)| (at, 1.0)).collect()
    };
    let solve = |(at, primary): (usize, &gainsay::solve::Primary)| {
        let drives = match primary.net {
            Some(id) => {
                driven(&|e| matches!(e, Element::Source(plus, 0) if name(*plus) == circuit.net(id).name))
            }
            None if at == 0 => driven(&|e| matches!(e, Element::Source(_, minus) if *minus != 0)),
            None => {
                let into = circuit.currents[at - board.first_current].into;
                driven(&|e| matches!(e, Element::Current(net, _) if name(*net) == circuit.net(into).name))
            }
        };
        assert!(at == 0 || drives.len() == 1, "{primary:?} is one element");
        nodal.voltages(&drives)
    };
    board.primaries.iter().enumerate().map(solve).collect()
}

/// The states of a block for one unit of each primary.
fn states(board: &Board, at: usize) -> Vec<gainsay::solve::State<f64>> {
    let (model, block) = (&board.models[at], &board.layout.blocks[at]);
    let solved = Solved::new(&model.network, model.nominal.clone()).expect("the block has no fault");
    let state = |primary: usize| {
        let mut excitation = Excitation::none();
        excitation.ports = model.ports.iter().map(|port| entry(board.row(port), primary)).collect();
        excitation.constant = primary == 0;
        for (current, (into, from)) in block.currents.iter().zip(board.currents(at)) {
            if board.first_current + *current as usize == primary {
                excitation.injections.extend([(into, 1.0), (from, -1.0)]);
            }
        }
        for drain in model.drains.iter().filter(|drain| board.primary_of_feed(drain.feed) as usize == primary)
        {
            excitation.injections.push((Node::Unknown(drain.output), -drain.amps));
        }
        solved.forward(&excitation)
    };
    (0..board.primaries.len()).map(state).collect()
}

fn entry(row: &[(u32, f64)], primary: usize) -> f64 {
    row.iter().find(|(at, _)| *at as usize == primary).map_or(0.0, |(_, entry)| *entry)
}

fn differ(net: Net, whole: &[Vec<f64>], composed: impl Fn(usize) -> f64) -> Difference {
    let largest = whole.iter().fold(0.0f64, |most, volts| most.max(volts[net].abs()));
    let most = whole.iter().enumerate().map(|(primary, volts)| (volts[net] - composed(primary)).abs());
    let most = most.fold(0.0, |most: f64, next| if next <= most { most } else { next });
    Difference { share: if most == 0.0 { 0.0 } else { most / largest }, net: name(net) }
}
