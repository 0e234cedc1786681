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
            && (inputs.contains(&net) || block.nets.binary_search(&net).is_ok())
            && layout.role(net) == Role::Free
        {
            return Some(element);
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
                let held = layout.role(*other) != Role::Free;
                if other_pin != pin && !held {
                    stack.push((*other, if unmodelled { Some(id) } else { through }));
                }
            }
        }
    }
    None
}

/// Designators of connectors and test points (IEC 81346-2 and common practice: J, P, X with digits, TP, CN).
fn is_connector(name: &str) -> bool {
    let name = name.rsplit('.').next().unwrap_or(name).to_ascii_uppercase();
    ["J", "P", "CN", "TP", "CON", "K"].iter().any(|prefix| {
        name.strip_prefix(prefix).is_some_and(|rest| rest.starts_with(|c: char| c.is_ascii_digit()))
    })
}
