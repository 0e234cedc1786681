//! Fixed nets: what is known to set a net before any network is looked at.

use crate::block::{Amp, AmpId, Role, Unplaceable};
use crate::circuit::{Circuit, ElementKind, NetId, Tie};
use crate::device::Rank;

/// The amplifiers of a board, and op amps whose output is no place for one, with the reason.
pub(super) fn amps(circuit: &Circuit) -> (Vec<Amp>, Vec<(u32, Unplaceable)>) {
    let mut drivers: Vec<u8> = vec![0; circuit.nets.len()];
    for op_amp in &circuit.op_amps {
        let count = &mut drivers[op_amp.output.0 as usize];
        *count = count.saturating_add(1);
    }
    let mut amps = Vec::new();
    let mut skipped = Vec::new();
    for id in circuit.element_ids() {
        let element = circuit.element(id);
        match element.kind {
            ElementKind::OpAmp(at) => {
                let op_amp = &circuit.op_amps[at as usize];
                match fault(circuit, op_amp.output, drivers[op_amp.output.0 as usize]) {
                    Some(reason) => skipped.push((at, reason)),
                    None => amps.push(Amp {
                        op_amp: Some(at),
                        gain: None,
                        element: id,
                        plus: op_amp.non_inverting,
                        minus: op_amp.inverting,
                        output: op_amp.output,
                    }),
                }
            }
            ElementKind::VoltageGain(gain) if follows(circuit, id) => amps.push(Amp {
                op_amp: None,
                gain: Some(gain),
                element: id,
                plus: element.nets[2],
                minus: element.nets[3],
                output: element.nets[0],
            }),
            _ => {}
        }
    }
    (amps, skipped)
}

/// Whether a controlled source stands on ground and alone sets its output.
fn follows(circuit: &Circuit, id: crate::circuit::ElementId) -> bool {
    let nets = &circuit.element(id).nets;
    let output = nets[0];
    let others = circuit.pins(output).filter(|(other, pin)| {
        *other != id && *pin == 0 && matches!(circuit.element(*other).kind, ElementKind::VoltageGain(_))
    });
    circuit.net(nets[1]).ground
        && !circuit.net(output).ground
        && circuit.tie(output).is_none()
        && others.count() == 0
        && circuit.op_amps.iter().all(|op_amp| op_amp.output != output)
}

/// Why an op amp's output can't be solved for: more than one output, or a source, sets its net.
fn fault(circuit: &Circuit, output: NetId, drivers: u8) -> Option<Unplaceable> {
    let net = circuit.net(output);
    if net.ground {
        return Some(Unplaceable::Grounded);
    }
    if matches!(circuit.tie(output), Some(Tie::Source | Tie::MovingSource | Tie::Rail)) {
        return Some(Unplaceable::Tied(output));
    }
    (drivers > 1).then_some(Unplaceable::Joined(output, drivers))
}

/// The role of every net before open ends are looked at.
pub(super) fn fixed(circuit: &Circuit, amps: &[Amp], skipped: &[(u32, Unplaceable)]) -> Vec<Role> {
    let mut supply = vec![false; circuit.nets.len()];
    let mut input = vec![false; circuit.nets.len()];
    for op_amp in &circuit.op_amps {
        op_amp.positive.iter().chain(&op_amp.negative).for_each(|net| supply[net.0 as usize] = true);
        input[op_amp.non_inverting.0 as usize] = true;
        input[op_amp.inverting.0 as usize] = true;
    }
    let mut roles: Vec<Role> = circuit
        .net_ids()
        .map(|net| {
            let at = net.0 as usize;
            match circuit.tie(net) {
                _ if circuit.net(net).ground => Role::Ground,
                Some(Tie::Rail) => Role::Rail,
                Some(Tie::Signal) => Role::Signal,
                Some(Tie::Source | Tie::MovingSource) if supply[at] => Role::Rail,
                Some(Tie::MovingSource) => Role::Signal,
                Some(Tie::Source) => Role::Reference,
                None if supply[at] => Role::Rail,
                None if !input[at] && is_rail_by_name(circuit, net) => Role::Rail,
                None => Role::Free,
            }
        })
        .collect();
    for element in &circuit.elements {
        // A behavioural or other controlled source sets its first node; what it does isn't known here.
        let letter = element.name.rsplit('.').next().and_then(|name| name.chars().next());
        let driven = matches!(element.kind, ElementKind::Unmodelled | ElementKind::VoltageGain(_))
            && matches!(letter.map(|c| c.to_ascii_uppercase()), Some('E' | 'B' | 'H'));
        if let (true, Some(net)) = (driven, element.nets.first())
            && roles[net.0 as usize] == Role::Free
        {
            roles[net.0 as usize] = Role::Signal;
        }
    }
    zeners(circuit, &mut roles);
    for (at, _) in skipped {
        let output = circuit.op_amps[*at as usize].output.0 as usize;
        if roles[output] == Role::Free {
            roles[output] = Role::Signal;
        }
    }
    for (at, amp) in amps.iter().enumerate() {
        roles[amp.output.0 as usize] = Role::Output(AmpId(at as u32));
    }
    roles
}

/// A name that states a voltage or is a usual supply name makes a rail where nothing else speaks.
fn is_rail_by_name(circuit: &Circuit, net: NetId) -> bool {
    let stated = circuit.potential(net).is_some_and(|potential| potential.rank == Rank::Assumed);
    stated || crate::circuit::supply_like(&circuit.net(net).name)
}

/// A net that a diode from ground holds and a resistor from a rail feeds is a reference.
fn zeners(circuit: &Circuit, roles: &mut [Role]) {
    for element in &circuit.elements {
        let (ElementKind::Diode, [anode, cathode]) = (&element.kind, element.nets.as_slice()) else {
            continue;
        };
        if !circuit.net(*anode).ground || roles[cathode.0 as usize] != Role::Free {
            continue;
        }
        let fed = circuit.pins(*cathode).any(|(other, pin)| {
            let other = circuit.element(other);
            matches!(other.kind, ElementKind::Resistor(_))
                && other.nets.get(1 - pin.min(1)).is_some_and(|net| roles[net.0 as usize] == Role::Rail)
        });
        if fed {
            roles[cathode.0 as usize] = Role::Reference;
        }
    }
}
