//! Which nets have a known voltage: traced through sources, declared, or read off a name.

use crate::circuit::declare::Declared;
use crate::circuit::values::stated_voltage;
use crate::circuit::{Circuit, CurrentInput, Drive, ElementKind, NetId, Potential, Tie};
use crate::device::Rank;
use crate::diagnostic::{Diagnostic, Severity};
use crate::source::quote;
use rustc_hash::FxHashMap;
use std::collections::VecDeque;

/// Walks from ground through voltage sources, reversed and chained ones included; sources that close a loop
/// of sources are faults.
pub(super) fn sources(circuit: &mut Circuit) -> Vec<Diagnostic> {
    circuit.ties = vec![None; circuit.nets.len()];
    circuit.potentials = vec![None; circuit.nets.len()];
    let mut on_net: FxHashMap<NetId, Vec<(usize, NetId, Drive, f64)>> = FxHashMap::default();
    for (at, element) in circuit.elements.iter().enumerate() {
        if let (ElementKind::VoltageSource(drive), [plus, minus]) = (&element.kind, element.nets.as_slice()) {
            on_net.entry(*minus).or_default().push((at, *plus, *drive, 1.0));
            on_net.entry(*plus).or_default().push((at, *minus, *drive, -1.0));
        }
    }
    let zero = Potential { nominal: 0.0, range: Some((0.0, 0.0)), rank: Rank::Guaranteed };
    let mut queue = VecDeque::from([(Circuit::GROUND, Some(zero), Tie::Source)]);
    let mut seen = vec![false; circuit.nets.len()];
    let mut walked = vec![false; circuit.elements.len()];
    let mut faults = Vec::new();
    seen[0] = true;
    while let Some((net, from, tie)) = queue.pop_front() {
        for (element, other, drive, sign) in on_net.get(&net).map_or(&[][..], Vec::as_slice) {
            if std::mem::replace(&mut walked[*element], true) {
                continue;
            }
            let potential = from.and_then(|from| step(from, *drive, *sign));
            let place = other.0 as usize;
            if std::mem::replace(&mut seen[place], true) {
                let there = if place == 0 { Some(zero) } else { circuit.potentials[place] };
                faults.extend(closed(circuit, *element, there.is_some() && there == potential));
                continue;
            }
            let tie = if drive.moves || drive.unknown { Tie::MovingSource } else { tie };
            circuit.ties[place] = Some(tie);
            circuit.potentials[place] = potential;
            queue.push_back((*other, potential, tie));
        }
    }
    faults
}

/// A source that closes a loop of voltage sources: no fault where it says the same as the others.
fn closed(circuit: &Circuit, element: usize, same: bool) -> Option<Diagnostic> {
    let element = &circuit.elements[element];
    let (severity, but) = match same {
        true => (Severity::Note, "the others say the same"),
        false => (Severity::Error, "the others say something else and are taken"),
    };
    let message = format!("{} closes a loop of voltage sources; {but}", quote(&element.name));
    Some(Diagnostic::at("source-loop", severity, element.span?, message))
}

/// The potential behind a source, seen from the net before it; `None` where the source's value can't be told.
fn step(from: Potential, drive: Drive, sign: f64) -> Option<Potential> {
    if drive.unknown && drive.span.is_none() {
        return None;
    }
    let middle = drive.span.map(|(low, high)| (low + high) / 2.0);
    let own = drive.span.or(if drive.moves {
        None
    } else {
        Some((drive.dc.unwrap_or(0.0), drive.dc.unwrap_or(0.0)))
    });
    let nominal = from.nominal + sign * drive.dc.or(middle).unwrap_or(0.0);
    let range = from.range.zip(own).map(|((low, high), (least, greatest))| {
        let (a, b) = (sign * least, sign * greatest);
        (low + a.min(b), high + a.max(b))
    });
    Some(Potential { nominal, range, rank: Rank::Guaranteed })
}

/// Current sources of the netlist as currents that feed nets. A current that the budget declares for the
/// same net stands before what a source says.
pub(super) fn currents(circuit: &mut Circuit) {
    let declared: Vec<NetId> = circuit.currents.iter().map(|current| current.into).collect();
    for element in &circuit.elements {
        let (ElementKind::CurrentSource(drive), [from, into]) = (&element.kind, element.nets.as_slice())
        else {
            continue;
        };
        // A source that draws from a net is counted as what flows into it, with the sign turned.
        let (into, from, sign) = match *into {
            Circuit::GROUND => (*from, *into, -1.0),
            _ => (*into, *from, 1.0),
        };
        if into == from || declared.contains(&into) {
            continue;
        }
        let own = drive.span.or(drive.dc.filter(|_| !drive.moves).map(|amps| (amps, amps)));
        let range = own.map(|(a, b)| ((sign * a).min(sign * b), (sign * a).max(sign * b)));
        let name = circuit.nets[into.0 as usize].name.clone();
        circuit.currents.push(CurrentInput { name, into, from, range, source: None, span: element.span });
    }
}

/// Takes what the budget declares; it stands before what sources say.
pub(super) fn declared(circuit: &mut Circuit, declared: Declared) {
    for (net, voltage) in declared.rails {
        let deviation = voltage.deviation;
        circuit.ties[net.0 as usize] = Some(Tie::Rail);
        circuit.potentials[net.0 as usize] = Some(Potential {
            nominal: voltage.nominal,
            range: deviation.map(|by| (voltage.nominal - by, voltage.nominal + by)),
            rank: Rank::Guaranteed,
        });
    }
    for (net, range) in declared.signals {
        let traced = circuit.potentials[net.0 as usize];
        circuit.ties[net.0 as usize] = Some(Tie::Signal);
        circuit.potentials[net.0 as usize] = match range {
            Some((low, high)) => Some(Potential {
                nominal: (low + high) / 2.0,
                range: Some((low, high)),
                rank: Rank::Guaranteed,
            }),
            None => traced.filter(|potential| potential.range.is_some_and(|(low, high)| low < high)),
        };
    }
}

/// Reads voltages off names such as `+12V` where nothing else tells them.
pub(super) fn names(circuit: &mut Circuit) {
    for net in circuit.net_ids() {
        let at = net.0 as usize;
        if circuit.ties[at].is_none()
            && circuit.potentials[at].is_none()
            && let Some(volts) = stated_voltage(&circuit.nets[at].name)
        {
            circuit.potentials[at] = Some(Potential { nominal: volts, range: None, rank: Rank::Assumed });
        }
    }
}
