//! Calls that nothing defines and no profile knows: op amps, as far as the nets on their pins tell, and others.

use crate::budget::Budget;
use crate::circuit::identify::Identity;
use crate::circuit::values::{stated_voltage, supply_like};
use crate::circuit::{Circuit, ElementId, ElementKind, NetId, OpAmp, Tie};
use crate::device::Catalogue;
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::source::{Sources, Span, quote};
use rustc_hash::FxHashMap;

/// A call of a name that nothing defines, with the place of the name.
pub(super) type Undefined = (ElementId, Span);

/// Takes a call for an op amp of an unknown device where five pins in the usual order have a supply on the third
/// and fourth and no other; says of every other name, once, that it isn't modelled.
pub(super) fn settle(
    sources: &Sources,
    circuit: &mut Circuit,
    undefined: &[Undefined],
    (catalogue, budget): (&Catalogue, &Budget),
) -> Vec<Diagnostic> {
    let identity = Identity::of(catalogue, budget, None, None);
    let mut supply = vec![false; circuit.nets.len()];
    for op_amp in &circuit.op_amps {
        op_amp.positive.iter().chain(&op_amp.negative).for_each(|net| supply[net.0 as usize] = true);
    }
    let mut others: Vec<(&str, Vec<Undefined>)> = Vec::new();
    let mut index: FxHashMap<String, usize> = FxHashMap::default();
    for (element, model) in undefined {
        let name = sources.text(*model);
        if is_op_amp(circuit, &supply, &circuit.element(*element).nets) {
            take(circuit, *element, name, &identity);
            continue;
        }
        let at = *index.entry(name.to_ascii_lowercase()).or_insert_with(|| {
            others.push((name, Vec::new()));
            others.len() - 1
        });
        others[at].1.push((*element, *model));
    }
    circuit.op_amps.sort_by_key(|op_amp| op_amp.element);
    for (at, op_amp) in circuit.op_amps.iter().enumerate() {
        circuit.elements[op_amp.element.0 as usize].kind = ElementKind::OpAmp(at as u32);
    }
    others.into_iter().map(|(name, calls)| unmodelled(circuit, &supply, name, &calls)).collect()
}

/// Whether the nets on five pins are those of an op amp in the order in+, in-, V+, V-, out.
fn is_op_amp(circuit: &Circuit, supply: &[bool], nets: &[NetId]) -> bool {
    let [plus, minus, positive, negative, output] = nets else { return false };
    let supplies = |net: &NetId| is_supply(circuit, supply, *net);
    let volts = |net: &NetId| match circuit.net(*net).ground {
        true => Some(0.0),
        false => circuit.potential(*net).map(|potential| potential.nominal),
    };
    let in_order = volts(positive).zip(volts(negative)).is_none_or(|(above, below)| below < above);
    supplies(positive)
        && supplies(negative)
        && positive != negative
        && in_order
        && plus != output
        && !supplies(output)
        && [plus, minus].into_iter().all(|net| circuit.net(*net).ground || !supplies(net))
}

/// Ground, a net tied to ground by sources that only have a DC value, a supply of a known op amp, or a net that is
/// named like a supply.
fn is_supply(circuit: &Circuit, supply: &[bool], net: NetId) -> bool {
    let facts = circuit.net(net);
    let tied = match circuit.tie(net) {
        Some(Tie::Source | Tie::Rail) => true,
        Some(Tie::Signal | Tie::MovingSource) => false,
        None => stated_voltage(&facts.name).is_some() || supply_like(&facts.name),
    };
    facts.ground || tied || supply[net.0 as usize]
}

fn take(circuit: &mut Circuit, element: ElementId, model: &str, identity: &Identity) {
    let own = circuit.element(element);
    let op_amp = OpAmp {
        element,
        name: own.name.clone(),
        model: model.to_owned(),
        profile: identity.profile,
        technology: identity.technology,
        non_inverting: own.nets[0],
        inverting: own.nets[1],
        positive: Some(own.nets[2]),
        negative: Some(own.nets[3]),
        output: own.nets[4],
    };
    circuit.op_amps.push(op_amp);
}

/// One finding for a name, at its calls. A call with as many pins as op-amp packages have, two supplies among
/// them, may hold op amps that would go unseen.
fn unmodelled(circuit: &Circuit, supply: &[bool], name: &str, calls: &[Undefined]) -> Diagnostic {
    const SHOWN: usize = 4;
    const PINS: [usize; 4] = [5, 6, 8, 14];
    let doubtful = calls.iter().any(|(element, _)| {
        let nets = &circuit.element(*element).nets;
        let mut supplies: Vec<NetId> =
            nets.iter().copied().filter(|net| is_supply(circuit, supply, *net)).collect();
        supplies.sort_unstable();
        supplies.dedup();
        PINS.contains(&nets.len()) && 2 <= supplies.len()
    });
    let severity = if doubtful { Severity::Warning } else { Severity::Note };
    let count = match calls.len() {
        1 => "one call".to_owned(),
        count => format!("{count} calls"),
    };
    let message = format!(
        "neither the netlist nor a profile defines {}; {count} of it kept as parts that are not modelled",
        quote(name)
    );
    let labels = calls
        .iter()
        .take(SHOWN)
        .filter_map(|(element, _)| circuit.element(*element).span)
        .map(|span| Label { span, text: String::new() });
    Diagnostic {
        kind: "unknown-subcircuit",
        severity,
        message,
        labels: labels.collect(),
        help: Some(
            "where it is an op amp, budget: devices: { NAME: { profile: ..., pins: [...] } }".to_owned(),
        ),
    }
}
