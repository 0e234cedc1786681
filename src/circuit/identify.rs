//! What a call is: an op amp of a known or unknown device, and which of its nodes is which pin.

use crate::budget::{Budget, DeviceChoice};
use crate::device::{Catalogue, Pin, Technology};
use crate::source::matches;

/// Pin order of most five-node calls; used where neither budget, definition nor profile gives one.
pub(super) const USUAL: [Pin; 5] =
    [Pin::NonInverting, Pin::Inverting, Pin::PositiveSupply, Pin::NegativeSupply, Pin::Output];

/// An op amp behind a call.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Identity {
    /// Index into the catalogue's profiles.
    pub profile: Option<usize>,
    /// From the profile or the budget.
    pub technology: Option<Technology>,
    /// What each node is.
    pub pins: Vec<Pin>,
}

impl Identity {
    /// An op amp of a profile, if there is one; else of a stated technology, or of that which the run
    /// assumes, whose generic profile then serves. The pins are left to the caller.
    pub(super) fn of(
        catalogue: &Catalogue,
        budget: &Budget,
        profile: Option<usize>,
        stated: Option<Technology>,
    ) -> Identity {
        let of_profile = profile.map(|at| catalogue.profiles[at].technology);
        let technology = stated.or(of_profile).or(budget.assumed_technology);
        let profile = profile.or_else(|| technology.and_then(|technology| catalogue.generic(technology)));
        Identity { profile, technology, pins: Vec::new() }
    }
}

/// How many pins an order has that doesn't fit the nodes of its call.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Misfit(pub usize);

/// What the budget says of a model name or designator.
fn choice<'b>(budget: &'b Budget, designator: &str, model: &str) -> Option<&'b DeviceChoice> {
    let by = |name: &str| budget.devices.iter().rfind(|choice| matches(&choice.name.text, name));
    by(designator).or_else(|| by(model))
}

/// Tells whether a call is an op amp; `ports` are the port names of its definition, where there is one.
pub(super) fn identify(
    catalogue: &Catalogue,
    budget: &Budget,
    (designator, model): (&str, &str),
    nodes: usize,
    ports: Option<&[&str]>,
) -> Result<Option<Identity>, Misfit> {
    let declared = choice(budget, designator, model);
    let known = catalogue.find(model);
    // A profile that the budget names and nobody has leaves the device unknown; its pins stay.
    let profile = match declared.and_then(|choice| choice.profile.as_ref()) {
        Some(name) => catalogue.named(&name.text),
        None => known,
    };
    if profile.is_none() && declared.is_none() {
        return Ok(None);
    }
    let named = declared.and_then(|choice| choice.pins.clone());
    let order = named.or_else(|| ports.and_then(pins_by_name)).unwrap_or_else(|| {
        profile
            .or(known)
            .map(|at| catalogue.profiles[at].pins.clone())
            .filter(|pins| !pins.is_empty())
            .unwrap_or(USUAL.into())
    });
    let pins = fit(order, nodes).map_err(Misfit)?;
    let stated = declared.and_then(|choice| choice.technology);
    Ok(Some(Identity { pins, ..Identity::of(catalogue, budget, profile, stated) }))
}

/// A call with three nodes leaves out the supply pins; any other count must be the order's own.
fn fit(order: Vec<Pin>, nodes: usize) -> Result<Vec<Pin>, usize> {
    if order.len() == nodes {
        return Ok(order);
    }
    let signal: Vec<Pin> = order
        .iter()
        .copied()
        .filter(|pin| !matches!(pin, Pin::PositiveSupply | Pin::NegativeSupply))
        .collect();
    if nodes == 3 && signal.len() == 3 { Ok(signal) } else { Err(order.len()) }
}

/// Pins by the port names of a definition, where every port tells what it is and the three signal pins
/// are there once each.
pub(super) fn pins_by_name(ports: &[&str]) -> Option<Vec<Pin>> {
    let pins: Vec<Pin> = ports.iter().map(|name| pin_by_name(name)).collect::<Option<_>>()?;
    let once = |pin: Pin| pins.iter().filter(|other| **other == pin).count() == 1;
    let supplies = [Pin::PositiveSupply, Pin::NegativeSupply];
    let signal = [Pin::NonInverting, Pin::Inverting, Pin::Output];
    let whole = signal.into_iter().all(once) && (pins.len() == 3 || supplies.into_iter().all(once));
    whole.then_some(pins)
}

/// What a port of that name is, by the names that definitions of op amps use (common practice).
fn pin_by_name(name: &str) -> Option<Pin> {
    let name = name.trim_start_matches(|c: char| c.is_ascii_digit()).to_ascii_lowercase();
    Some(match name.as_str() {
        "in+" | "+in" | "inp" | "ip" | "vinp" | "vin+" | "vip" | "plus" | "posin" | "in_pos" | "inpos"
        | "+" | "p" | "ni" | "noninv" | "noninverting" | "non_inverting" | "non-inverting" => {
            Pin::NonInverting
        }
        "in-" | "-in" | "inn" | "im" | "inm" | "vinn" | "vin-" | "vim" | "minus" | "negin" | "in_neg"
        | "inneg" | "-" | "n" | "inv" | "inverting" => Pin::Inverting,
        "v+" | "vcc" | "vdd" | "vp" | "vs+" | "vpos" | "v_pos" | "vcc+" | "+vs" | "+vcc" | "avdd" | "vps" => {
            Pin::PositiveSupply
        }
        "v-" | "vee" | "vss" | "vn" | "vs-" | "vneg" | "v_neg" | "vcc-" | "-vs" | "-vcc" | "avss" | "gnd" => {
            Pin::NegativeSupply
        }
        "out" | "o" | "vo" | "vout" | "output" | "outp" => Pin::Output,
        _ => return None,
    })
}
