//! Open ends: nets that something outside the netlist's linear elements drives or loads.

use crate::block::{Amp, Layout, Role};
use crate::circuit::{Circuit, CurrentInput, Element, ElementKind, NetId};
use petgraph::unionfind::UnionFind;
use rustc_hash::FxHashMap;

/// Whether an element is part of a linear network: R, C, L, or a voltage source that floats.
pub(super) fn passive(circuit: &Circuit, element: &Element) -> bool {
    element.nets.len() == 2
        && element.nets[0] != element.nets[1]
        && match element.kind {
            ElementKind::Resistor(_) | ElementKind::Capacitor(_) | ElementKind::Inductor(_) => true,
            ElementKind::VoltageSource(_) => {
                element.nets.iter().all(|net| circuit.tie(*net).is_none() && !circuit.net(*net).ground)
            }
            _ => false,
        }
}

/// What hangs on one net, as far as open ends need it.
#[derive(Debug, Default, Clone, Copy)]
struct Surroundings {
    passives: usize,
    inputs: usize,
    others: usize,
    outside: bool,
    transistor: bool,
    beside_output: bool,
}

fn surroundings(circuit: &Circuit, roles: &[Role], net: NetId) -> Surroundings {
    let mut found = Surroundings::default();
    for (id, pin) in circuit.pins(net) {
        let element = circuit.element(id);
        match element.kind {
            _ if passive(circuit, element) => {
                found.passives += 1;
                let other = element.nets[1 - pin.min(1)];
                found.beside_output |= matches!(roles[other.0 as usize], Role::Output(_));
            }
            ElementKind::OpAmp(_) => found.inputs += 1,
            ElementKind::Transistor => {
                found.others += 1;
                found.transistor = true;
            }
            ElementKind::Unmodelled if element.nets.len() >= 2 => {
                found.others += 1;
                found.outside = true;
            }
            _ => found.others += 1,
        }
    }
    found
}

/// A set of passives joined at nets that are neither held nor inputs.
#[derive(Debug, Default)]
struct Piece {
    inner: Vec<NetId>,
    edge: Vec<NetId>,
}

/// Decides open ends, piece by piece; roles of open ends become signals, currents that feed inputs are
/// added to the circuit's.
pub(super) fn find(circuit: &mut Circuit, layout: &mut Layout) {
    let inputs = input_nets(circuit, &layout.amps, &layout.roles);
    let pieces = pieces(circuit, &layout.roles, &inputs);
    let mut ports = Vec::new();
    for net in circuit.net_ids().filter(|net| inputs[net.0 as usize]) {
        let around = surroundings(circuit, &layout.roles, net);
        if circuit.net(net).declared || !(around.outside || around.transistor) {
            continue;
        }
        if around.beside_output {
            feed(circuit, net);
        } else {
            ports.push(net);
        }
    }
    for piece in &pieces {
        let touches_input = piece.edge.iter().any(|net| inputs[net.0 as usize]);
        let touches_output =
            piece.edge.iter().any(|net| matches!(layout.roles[net.0 as usize], Role::Output(_)));
        if touches_input {
            let opens = piece.inner.iter().filter(|net| opens(circuit, &layout.roles, **net, touches_output));
            ports.extend(opens);
        }
    }
    for net in ports {
        layout.roles[net.0 as usize] = Role::Signal;
    }
    infer(circuit, layout, &inputs, &pieces);
}

/// Nets of amplifier inputs that aren't held.
fn input_nets(circuit: &Circuit, amps: &[Amp], roles: &[Role]) -> Vec<bool> {
    let mut inputs = vec![false; circuit.nets.len()];
    for net in amps.iter().flat_map(|amp| [amp.plus, amp.minus]) {
        inputs[net.0 as usize] = roles[net.0 as usize] == Role::Free;
    }
    inputs
}

fn pieces(circuit: &Circuit, roles: &[Role], inputs: &[bool]) -> Vec<Piece> {
    let inner = |net: NetId| roles[net.0 as usize] == Role::Free && !inputs[net.0 as usize];
    let mut joined = UnionFind::<u32>::new(circuit.nets.len());
    for element in circuit.elements.iter().filter(|element| passive(circuit, element)) {
        if inner(element.nets[0]) && inner(element.nets[1]) {
            joined.union(element.nets[0].0, element.nets[1].0);
        }
    }
    let mut index: FxHashMap<u32, usize> = FxHashMap::default();
    let mut pieces: Vec<Piece> = Vec::new();
    for element in circuit.elements.iter().filter(|element| passive(circuit, element)) {
        let (a, b) = (element.nets[0], element.nets[1]);
        let Some(own) = [a, b].into_iter().find(|net| inner(*net)) else { continue };
        let at = *index.entry(joined.find(own.0)).or_insert_with(|| {
            pieces.push(Piece::default());
            pieces.len() - 1
        });
        for net in [a, b] {
            if inner(net) { pieces[at].inner.push(net) } else { pieces[at].edge.push(net) }
        }
    }
    for piece in &mut pieces {
        piece.inner.sort_unstable();
        piece.inner.dedup();
        piece.edge.sort_unstable();
        piece.edge.dedup();
    }
    pieces
}

/// Whether an inner net of a piece that reaches an input is driven from outside.
fn opens(circuit: &Circuit, roles: &[Role], net: NetId, touches_output: bool) -> bool {
    let facts = circuit.net(net);
    if facts.declared || facts.unconnected {
        return false;
    }
    let around = surroundings(circuit, roles, net);
    let dangling = around.passives == 1 && around.others == 0 && around.inputs == 0;
    let load = around.beside_output || (touches_output && around.transistor && !around.outside);
    (around.outside || around.transistor || dangling) && !load
}

/// Adds a current of unknown size into an input net.
fn feed(circuit: &mut Circuit, net: NetId) {
    let name = circuit.net(net).name.clone();
    let span = circuit.net(net).span;
    circuit.currents.push(CurrentInput {
        name,
        into: net,
        from: Circuit::GROUND,
        range: None,
        source: None,
        span,
    });
}

/// Where nothing could drive a piece, its one labelled net is taken for the signal.
fn infer(circuit: &Circuit, layout: &mut Layout, inputs: &[bool], pieces: &[Piece]) {
    let fed = |net: NetId| circuit.currents.iter().any(|current| current.into == net || current.from == net);
    let quiet =
        |roles: &[Role], net: NetId| matches!(roles[net.0 as usize], Role::Ground) || inputs[net.0 as usize];
    for piece in pieces {
        let reaches = piece.edge.iter().any(|net| inputs[net.0 as usize]);
        let driven =
            piece.inner.iter().any(|net| {
                layout.roles[net.0 as usize] != Role::Free || fed(*net) || circuit.net(*net).declared
            }) || !piece.edge.iter().all(|net| quiet(&layout.roles, *net));
        if reaches && !driven && !has_signal(circuit, layout, &piece.edge) {
            let labelled: Vec<NetId> =
                piece.inner.iter().copied().filter(|net| circuit.net(*net).labelled).collect();
            take(layout, labelled);
        }
    }
    for net in circuit.net_ids().filter(|net| inputs[net.0 as usize]) {
        let at = net.0 as usize;
        if layout.roles[at] != Role::Free || fed(net) || circuit.net(net).declared {
            continue;
        }
        let alone = circuit.pins(net).all(|(id, pin)| {
            let element = circuit.element(id);
            match element.kind {
                ElementKind::OpAmp(_) | ElementKind::VoltageGain(_) => true,
                _ if passive(circuit, element) => {
                    layout.roles[element.nets[1 - pin.min(1)].0 as usize] == Role::Ground
                }
                _ => false,
            }
        });
        // A resistor to ground alone is a bias resistor: only a label tells a signal.
        let named = circuit.net(net).labelled && !circuit.net(net).unconnected;
        if alone && named && !has_signal(circuit, layout, &[net]) {
            take(layout, vec![net]);
        }
    }
}

/// Whether an amplifier with an input on one of these nets has a signal already, on either input.
fn has_signal(circuit: &Circuit, layout: &Layout, nets: &[NetId]) -> bool {
    let outside = |net: NetId, own: NetId| match layout.roles[net.0 as usize] {
        Role::Signal => true,
        Role::Output(_) => net != own,
        _ => circuit.net(net).declared || circuit.currents.iter().any(|current| current.into == net),
    };
    layout.amps.iter().filter(|amp| nets.contains(&amp.plus) || nets.contains(&amp.minus)).any(|amp| {
        [amp.plus, amp.minus].into_iter().any(|input| {
            outside(input, amp.output)
                || circuit.pins(input).any(|(id, pin)| {
                    let element = circuit.element(id);
                    passive(circuit, element) && outside(element.nets[1 - pin.min(1)], amp.output)
                })
        })
    })
}

fn take(layout: &mut Layout, labelled: Vec<NetId>) {
    match labelled.as_slice() {
        [] => {}
        [net] => {
            layout.roles[net.0 as usize] = Role::Signal;
            layout.inferred.push(*net);
        }
        _ => layout.undriven.push(labelled),
    }
}
