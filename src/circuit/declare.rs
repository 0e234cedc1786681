//! What the budget puts on a board: loads, currents, source resistances, pairs, rails.

use crate::budget::{Budget, Name, Signal, Toleranced};
use crate::circuit::expand::Expander;
use crate::circuit::{CurrentInput, DeclaredPair, Element, ElementKind, NetId, Part, SourceResistance};
use crate::device::{Pin, Rank};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::quantity::Unit;
use crate::source::{Span, matches, nearest, quote};
use rustc_hash::FxHashMap;

/// Voltages that the budget declares, net by net.
#[derive(Debug, Default)]
pub(super) struct Declared {
    /// Rails.
    pub rails: Vec<(NetId, Toleranced)>,
    /// Signals and legs of pairs, with their range where it is stated.
    pub signals: Vec<(NetId, Option<(f64, f64)>)>,
}

pub(super) struct Declarer<'e, 'a> {
    expander: &'e mut Expander<'a>,
    elements: FxHashMap<String, u32>,
    declared: Declared,
}

impl<'e, 'a> Declarer<'e, 'a> {
    pub(super) fn new(expander: &'e mut Expander<'a>) -> Self {
        Declarer { expander, elements: FxHashMap::default(), declared: Declared::default() }
    }

    pub(super) fn finish(self) -> Declared {
        self.declared
    }

    pub(super) fn declare(&mut self, budget: &Budget) {
        for (name, voltage) in &budget.rails {
            if let Some(net) = self.driven(name) {
                self.declared.rails.push((net, *voltage));
            }
        }
        for load in &budget.loads {
            let Some(net) = self.net(&load.net) else { continue };
            let Some(to) = load.to.as_ref().map_or(Some(NetId(0)), |name| self.net(name)) else { continue };
            let name = format!("load {}", load.net.text);
            let span = load.net.span;
            self.part(&name, net, to, load.resistance.map(|ohms| ElementKind::Resistor(exact(ohms.0))), span);
            self.part(
                &name,
                net,
                to,
                load.capacitance.map(|farads| ElementKind::Capacitor(exact(farads.0))),
                span,
            );
        }
        budget.signals.iter().for_each(|signal| self.signal(signal));
        for pair in &budget.pairs {
            let legs = (self.driven(&pair.positive), self.driven(&pair.negative));
            let (Some(positive), Some(negative)) = legs else { continue };
            let source = pair.source.map(|ohms| ohms.0);
            let leg = |declarer: &mut Self, net, name: &Name| {
                let port = declarer.series(net, &name.text, source, name.span);
                declarer.declared.signals.push((port, None));
                port
            };
            let (positive, negative) =
                (leg(self, positive, &pair.positive), leg(self, negative, &pair.negative));
            self.expander.circuit.pairs.push(DeclaredPair {
                name: pair.name.text.clone(),
                positive,
                negative,
                difference: pair.difference,
                common: pair.common,
            });
        }
        self.unused(budget);
    }

    fn signal(&mut self, signal: &Signal) {
        let Some(net) = self.driven(signal.net.as_ref().unwrap_or(&signal.name)) else { return };
        let (name, span) = (&signal.name.text, signal.name.span);
        let range = signal.range.map(|(low, high, _)| (low, high));
        if matches!(signal.range, Some((_, _, Unit::Ampere))) {
            self.expander.circuit.nets[net.0 as usize].declared = true;
            let resistance = signal.source.map(|ohms| ElementKind::Resistor(exact(ohms.0)));
            let capacitance = signal.capacitance.map(|farads| ElementKind::Capacitor(exact(farads.0)));
            self.part(&format!("source {name}"), net, NetId(0), resistance, span);
            self.part(&format!("source {name}"), net, NetId(0), capacitance, span);
            let current = CurrentInput {
                name: name.clone(),
                into: net,
                from: NetId(0),
                range,
                source: signal.source.map(|ohms| ohms.0),
                span: Some(span),
            };
            self.expander.circuit.currents.push(current);
        } else {
            let port = self.series(net, name, signal.source.map(|ohms| ohms.0), span);
            self.declared.signals.push((port, range));
        }
    }

    fn part(&mut self, name: &str, a: NetId, b: NetId, kind: Option<ElementKind>, span: Span) {
        if let Some(kind) = kind {
            let nets = [a, b].as_slice().into();
            self.expander.add_element(Element { name: name.to_owned(), nets, kind, span: Some(span) });
        }
    }

    /// Puts a source resistance between a net and its open-circuit voltage, which becomes a net of its own
    /// under the same name; voltage sources on the net move behind the resistance.
    fn series(&mut self, net: NetId, name: &str, source: Option<f64>, span: Span) -> NetId {
        self.expander.circuit.nets[net.0 as usize].declared = true;
        let Some(ohms) = source.filter(|ohms| 0.0 < *ohms) else { return net };
        let port = self.expander.add_net(name.to_owned(), Some(span));
        self.expander.circuit.nets[port.0 as usize].declared = true;
        for element in &mut self.expander.circuit.elements {
            if matches!(element.kind, ElementKind::VoltageSource(_)) {
                element.nets.iter_mut().filter(|pin| **pin == net).for_each(|pin| *pin = port);
            }
        }
        let resistance = Some(ElementKind::Resistor(exact(ohms)));
        self.part(&format!("source {name}"), port, net, resistance, span);
        self.expander.circuit.series.push(SourceResistance { open: port, loaded: net, ohms });
        port
    }

    /// Names that the budget gives and the netlist lacks: elements, grounds, devices and their profiles.
    fn unused(&mut self, budget: &Budget) {
        let expander = &*self.expander;
        let circuit = &expander.circuit;
        let elements = || circuit.elements.iter().map(|element| element.name.as_str());
        let devices = || {
            let op_amps = circuit.op_amps.iter().map(|op_amp| (op_amp.element, op_amp.model.as_str()));
            let unplaced =
                circuit.unplaced.iter().map(|unplaced| (unplaced.element, unplaced.model.as_str()));
            op_amps
                .chain(unplaced)
                .flat_map(|(element, model)| [model, circuit.element(element).name.as_str()])
        };
        let mut faults = Vec::new();
        for name in budget.parts.iter().flat_map(|part| &part.matches) {
            if !elements().any(|element| matches(&name.text, element)) {
                faults.push(unknown(name, "element", nearest(&name.text, elements())));
            }
        }
        for (name, used) in budget.absent.iter().zip(&expander.absent_used) {
            if !used {
                faults.push(unknown(name, "element", nearest(&name.text, elements())));
            }
        }
        for (name, used) in budget.grounds.iter().zip(&expander.grounds_used) {
            if !used {
                let nets = circuit.nets.iter().map(|net| net.name.as_str());
                faults.push(unknown(name, "net", nearest(&name.text, nets)));
            }
        }
        for choice in &budget.devices {
            if !devices().any(|device| matches(&choice.name.text, device)) {
                faults.push(unknown(
                    &choice.name,
                    "device or element",
                    nearest(&choice.name.text, devices()),
                ));
            }
            if let Some(profile) =
                choice.profile.as_ref().filter(|name| expander.catalogue.named(&name.text).is_none())
            {
                let message = format!("no profile is named {}", quote(&profile.text));
                let fault = Diagnostic::at("unknown-device", Severity::Error, profile.span, message);
                faults.push(
                    fault.help(
                        "name a profile that is embedded or given with --devices, or state `technology:`",
                    ),
                );
            }
        }
        self.expander.faults.extend(faults);
    }

    /// The net of a name that something outside drives; what an op amp drives is computed, not declared.
    fn driven(&mut self, name: &Name) -> Option<NetId> {
        let net = self.net(name)?;
        let circuit = &self.expander.circuit;
        let Some(op_amp) = circuit.op_amps.iter().find(|op_amp| op_amp.output == net) else {
            return Some(net);
        };
        let message = format!(
            "expected a net that something outside drives, found {}, the output of {}",
            quote(&name.text),
            quote(&op_amp.name)
        );
        let mut fault = Diagnostic::at("declared-output", Severity::Error, name.span, message);
        let span = circuit.element(op_amp.element).span;
        fault.labels.extend(span.map(|span| Label { span, text: "drives it".to_owned() }));
        self.expander.faults.push(fault);
        None
    }

    /// The net of a name: a net's own, or `ELEMENT.PIN` with the pin's number or, for an op amp, its role.
    fn net(&mut self, name: &Name) -> Option<NetId> {
        let found = self.expander.find_net(&name.text).or_else(|| self.pin(&name.text));
        if found.is_none() {
            let nets = self.expander.circuit.nets.iter().map(|net| net.name.as_str());
            let fault = unknown(name, "net", nearest(&name.text, nets));
            self.expander.faults.push(fault);
        }
        found
    }

    fn pin(&mut self, text: &str) -> Option<NetId> {
        let (element, pin) = text.rsplit_once('.')?;
        let circuit = &self.expander.circuit;
        if self.elements.is_empty() {
            let names = circuit.elements.iter().enumerate();
            self.elements.extend(names.map(|(at, element)| (element.name.to_ascii_lowercase(), at as u32)));
        }
        let element = &circuit.elements[*self.elements.get(&element.to_ascii_lowercase())? as usize];
        if let Ok(number) = pin.parse::<usize>() {
            return element.nets.get(number.checked_sub(1)?).copied();
        }
        let ElementKind::OpAmp(at) = element.kind else { return None };
        let op_amp = &circuit.op_amps[at as usize];
        match role(pin)? {
            Pin::NonInverting => Some(op_amp.non_inverting),
            Pin::Inverting => Some(op_amp.inverting),
            Pin::Output => Some(op_amp.output),
            Pin::PositiveSupply => op_amp.positive,
            Pin::NegativeSupply => op_amp.negative,
        }
    }
}

fn role(pin: &str) -> Option<Pin> {
    match pin.to_ascii_lowercase().as_str() {
        "in+" => Some(Pin::NonInverting),
        "in-" => Some(Pin::Inverting),
        "out" => Some(Pin::Output),
        "v+" => Some(Pin::PositiveSupply),
        "v-" => Some(Pin::NegativeSupply),
        _ => None,
    }
}

fn unknown(name: &Name, what: &str, nearest: Option<&str>) -> Diagnostic {
    let message = format!("the netlist has no {what} named {}", quote(&name.text));
    let fault = Diagnostic::at("unknown-name", Severity::Error, name.span, message);
    match nearest {
        Some(other) => fault.help(format!("the nearest name is {}", quote(other))),
        None => fault,
    }
}

/// A declared value: no tolerance unless one is declared with it.
fn exact(value: f64) -> Part {
    Part {
        value: Some(value),
        tolerance: 0.0,
        rank: Rank::Guaranteed,
        rating: None,
        travel: None,
        group: None,
    }
}
