//! Loops that close through parts that aren't modelled. A verdict only: the network stays as it was cut.

use crate::block::ends::passive;
use crate::block::{Block, Layout, Role};
use crate::circuit::{Circuit, ElementId, ElementKind, NetId};
use rustc_hash::FxHashSet;

/// Parts with more pins than this don't close a loop: they are converters, processors, connectors.
const MOST_PINS: usize = 12;

/// The unmodelled element through which a block's outputs lead back to its own network, if any.
///
/// The walk goes from the outputs through passives, diodes, transistors and unmodelled parts, not through
/// connectors nor across held nets.
pub fn outside_loop(circuit: &Circuit, layout: &Layout, block: &Block) -> Option<ElementId> {
    let mut seen: FxHashSet<NetId> = FxHashSet::default();
    let mut stack: Vec<(NetId, Option<ElementId>)> =
        block.members.iter().map(|amp| (layout.amp(*amp).output, None)).collect();
    let inputs: Vec<NetId> =
        block.members.iter().map(|amp| layout.amp(*amp)).flat_map(|amp| [amp.plus, amp.minus]).collect();
    while let Some((net, through)) = stack.pop() {
        if !seen.insert(net) {
            continue;
        }
        if let Some(element) = through
            && (inputs.contains(&net) || block.nets.binary_search(&net).is_ok() || touches(block, net))
        {
            return Some(element);
        }
        if layout.role(net) == Role::Signal {
            continue;
        }
        for (id, pin) in circuit.pins(net) {
            let element = circuit.element(id);
            let unmodelled = match element.kind {
                ElementKind::Diode | ElementKind::Transistor => true,
                ElementKind::Unmodelled => {
                    (2..=MOST_PINS).contains(&element.nets.len()) && !is_connector(&element.name)
                }
                _ if passive(circuit, element) => false,
                _ => continue,
            };
            // Only what the network doesn't hold already is followed; a diode's far end may be a clamp's.
            if element.kind == ElementKind::Diode {
                continue;
            }
            for (other_pin, other) in element.nets.iter().enumerate() {
                if other_pin != pin
                    && (layout.role(*other) == Role::Free || open_end(circuit, layout, *other))
                {
                    stack.push((*other, if unmodelled { Some(id) } else { through }));
                }
            }
        }
    }
    None
}

/// Whether a net is held only because something outside the model is on it: no source, no declaration.
fn open_end(circuit: &Circuit, layout: &Layout, net: NetId) -> bool {
    layout.role(net) == Role::Signal && circuit.tie(net).is_none() && !circuit.net(net).declared
}

/// Whether a net is a port of a block's own network.
fn touches(block: &Block, net: NetId) -> bool {
    block.ports.iter().any(|port| port.input && port.net == net)
}

/// Designators of connectors and test points (IEC 81346-2 and common practice: J, P, X with digits, TP, CN).
fn is_connector(name: &str) -> bool {
    let name = name.rsplit('.').next().unwrap_or(name).to_ascii_uppercase();
    ["J", "P", "CN", "TP", "CON", "K"].iter().any(|prefix| {
        name.strip_prefix(prefix).is_some_and(|rest| rest.starts_with(|c: char| c.is_ascii_digit()))
    })
}

/// A diode that makes a block non-linear by intent, if any.
///
/// A diode on the block's nets or outputs is a clamp when feedback remains without it and its far end,
/// through further diodes, is the block's own network or output, ground or a rail.
pub fn rectifier(circuit: &Circuit, layout: &Layout, block: &Block) -> Option<ElementId> {
    let own = |net: NetId| match layout.role(net) {
        Role::Free => block.nets.binary_search(&net).is_ok(),
        Role::Output(amp) => block.members.contains(&amp),
        _ => false,
    };
    let feedback = !block.members.iter().any(|amp| !fed_back(circuit, layout, block, layout.amp(*amp).minus));
    let outputs = block.members.iter().map(|amp| layout.amp(*amp).output);
    for net in block.nets.iter().copied().chain(outputs) {
        for (id, pin) in circuit.pins(net) {
            let element = circuit.element(id);
            if element.kind != ElementKind::Diode || element.nets[0] == element.nets[1] {
                continue;
            }
            let far = element.nets[1 - pin.min(1)];
            let clamps = own(far) || matches!(layout.role(far), Role::Ground | Role::Rail);
            let at_output = matches!(layout.role(net), Role::Output(_));
            // A diode from the output to a load of its own, as for a lamp, leaves the loop alone.
            let beside = at_output && feedback && !own(far) && !leads_back(circuit, layout, block, far);
            if !(feedback && (clamps || beside)) {
                return Some(id);
            }
        }
    }
    None
}

/// Whether a net leads to the block's own network through passives.
fn leads_back(circuit: &Circuit, layout: &Layout, block: &Block, from: NetId) -> bool {
    walk(circuit, layout, from, |_| true).into_iter().any(|net| block.nets.binary_search(&net).is_ok())
}

/// Whether passives lead from an input net to an output of its block.
fn fed_back(circuit: &Circuit, layout: &Layout, block: &Block, input: NetId) -> bool {
    walk(circuit, layout, input, |_| true)
        .into_iter()
        .any(|net| matches!(layout.role(net), Role::Output(amp) if block.members.contains(&amp)))
}

/// Whether no passive leads from any output of a block of one back to either input.
pub fn open_loop(circuit: &Circuit, layout: &Layout, block: &Block) -> bool {
    block.members.len() == 1
        && block.members.iter().all(|amp| {
            let amp = layout.amp(*amp);
            amp.op_amp.is_some()
                && !fed_back(circuit, layout, block, amp.minus)
                && !fed_back(circuit, layout, block, amp.plus)
        })
}

/// All nets that passives reach from a net, across free nets alone: itself and the held nets at the edge
/// included, in the order found.
pub(super) fn walk(
    circuit: &Circuit,
    layout: &Layout,
    from: NetId,
    conducts: impl Fn(&ElementKind) -> bool,
) -> Vec<NetId> {
    let mut found = vec![from];
    let mut seen: FxHashSet<NetId> = FxHashSet::from_iter([from]);
    let mut next = 0;
    while let Some(net) = found.get(next).copied() {
        next += 1;
        if layout.role(net) != Role::Free {
            continue;
        }
        for (id, pin) in circuit.pins(net) {
            let element = circuit.element(id);
            if passive(circuit, element) && conducts(&element.kind) {
                let other = element.nets[1 - pin.min(1)];
                if seen.insert(other) {
                    found.push(other);
                }
            }
        }
    }
    found
}
