//! What stages are called. A name changes no number.

use crate::block::verdict::walk;
use crate::block::{AmpId, Layout, Role};
use crate::circuit::{Circuit, ElementKind, NetId};

/// A stage's name.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Topology {
    /// One signal at the non-inverting input, feedback divided.
    NonInverting,
    /// One signal into the inverting input's network.
    Inverting,
    /// One signal at the non-inverting input, all of the output fed back.
    Follower,
    /// Several signals into the inverting input's network.
    Summing,
    /// Several signals into the non-inverting input's network.
    SummingNonInverting,
    /// One signal each way.
    Difference,
    /// One of the pair that drives a difference stage through a shared gain resistor.
    Instrumentation,
    /// A current into the inverting input.
    Transimpedance,
    /// None of these.
    Unclassified,
}

impl Topology {
    /// The name in reports.
    pub fn word(self) -> &'static str {
        match self {
            Topology::NonInverting => "non-inverting",
            Topology::Inverting => "inverting",
            Topology::Follower => "follower",
            Topology::Summing => "summing",
            Topology::SummingNonInverting => "summing-non-inverting",
            Topology::Difference => "difference",
            Topology::Instrumentation => "instrumentation",
            Topology::Transimpedance => "transimpedance",
            Topology::Unclassified => "unclassified",
        }
    }
}

/// What conducts at DC from one input: the held nets it leads to and whether a current feeds it.
struct Side {
    held: Vec<NetId>,
    fed: bool,
}

fn side(circuit: &Circuit, layout: &Layout, input: NetId) -> Side {
    let conducts = |kind: &ElementKind| !matches!(kind, ElementKind::Capacitor(_));
    let reached = walk(circuit, layout, input, conducts);
    let feeds = |net: &NetId| layout.role(*net) == Role::Free && reached.contains(net);
    let fed = circuit.currents.iter().any(|current| feeds(&current.into) || feeds(&current.from));
    Side { held: reached.into_iter().filter(|net| layout.role(*net) != Role::Free).collect(), fed }
}

/// Names every amplifier, and the group of those that make one instrumentation amplifier; `level` tells
/// how much of a signal a held net is.
pub fn name(circuit: &Circuit, layout: &Layout, level: &dyn Fn(NetId) -> u8) -> Vec<(Topology, Option<u32>)> {
    let sides: Vec<(Side, Side)> = layout
        .amps
        .iter()
        .map(|amp| (side(circuit, layout, amp.plus), side(circuit, layout, amp.minus)))
        .collect();
    let mut names: Vec<(Topology, Option<u32>)> = sides
        .iter()
        .enumerate()
        .map(|(at, (plus, minus))| (one(layout, AmpId(at as u32), plus, minus, level), None))
        .collect();
    let mut group = 0;
    for block in &layout.blocks {
        let [a, b] = block.members.as_slice() else { continue };
        if !crossed(layout, &sides, *a, *b, level) {
            continue;
        }
        let outputs = [layout.amp(*a).output, layout.amp(*b).output];
        let third = (0..layout.amps.len()).find(|at| {
            let (plus, minus) = &sides[*at];
            names[*at].0 == Topology::Difference
                && outputs.iter().all(|net| plus.held.contains(net) || minus.held.contains(net))
                && !block.members.contains(&AmpId(*at as u32))
        });
        for amp in [a, b] {
            names[amp.0 as usize] = (Topology::Instrumentation, Some(group));
        }
        if let Some(third) = third {
            names[third].1 = Some(group);
        }
        group += 1;
    }
    names
}

/// Whether two amplifiers are a pair: each has a signal of its own at the non-inverting input, and the
/// other's output reaches its inverting one.
fn crossed(layout: &Layout, sides: &[(Side, Side)], a: AmpId, b: AmpId, level: &dyn Fn(NetId) -> u8) -> bool {
    let own = |amp: AmpId| -> Vec<NetId> {
        sides[amp.0 as usize].0.held.iter().copied().filter(|net| 0 < level(*net)).collect()
    };
    let reaches = |amp: AmpId, other: AmpId| {
        let minus = &sides[amp.0 as usize].1.held;
        minus.contains(&layout.amp(other).output) && minus.contains(&layout.amp(amp).output)
    };
    let (first, second) = (own(a), own(b));
    first.len() == 1 && second.len() == 1 && first != second && reaches(a, b) && reaches(b, a)
}

fn one(layout: &Layout, amp: AmpId, plus: &Side, minus: &Side, level: &dyn Fn(NetId) -> u8) -> Topology {
    let output = layout.amp(amp).output;
    let closed = minus.held.contains(&output) && !plus.held.contains(&output);
    if !closed {
        return Topology::Unclassified;
    }
    let others = plus.held.iter().chain(&minus.held).filter(|net| **net != output);
    let best = others.map(|net| level(*net)).max().unwrap_or(0);
    let signals = |side: &Side| -> Vec<NetId> {
        let is_signal = |net: &NetId| *net != output && 0 < best && level(*net) == best;
        side.held.iter().copied().filter(is_signal).collect()
    };
    let (above, below) = (signals(plus), signals(minus));
    if above.iter().any(|net| below.contains(net)) {
        return Topology::Unclassified;
    }
    match (above.len(), below.len(), plus.fed, minus.fed) {
        (0, 0, false, true) => Topology::Transimpedance,
        (0 | 1, 0, false, false) if minus.held == [output] => Topology::Follower,
        (0 | 1, 0, false, false) => Topology::NonInverting,
        (0, 1, false, false) => Topology::Inverting,
        (0, _, false, false) => Topology::Summing,
        (1, 1, false, false) => Topology::Difference,
        (_, 0, false, false) => Topology::SummingNonInverting,
        _ => Topology::Unclassified,
    }
}
