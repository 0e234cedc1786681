//! Subcircuits expanded into one flat list of nets and elements.

mod call;

use crate::budget::Budget;
use crate::circuit::calls::{Call, calls};
use crate::circuit::identify::Identity;
use crate::circuit::scope::{Definitions, Fault, Parameters};
use crate::circuit::unknown::Undefined;
use crate::circuit::values::{self, Passive};
use crate::circuit::{Circuit, Element, ElementId, ElementKind, Net, NetId};
use crate::device::Catalogue;
use crate::diagnostic::{Diagnostic, Severity};
use crate::netlist::{Kind, Netlist, Passive as Stated, Scope, Statement, Value, Waveform, number};
use crate::quantity::{Unit, show};
use crate::source::{Sources, Span, matches, quote};
use rustc_hash::FxHashMap;
use smallvec::SmallVec;

/// Expands a netlist while nets and elements are collected.
pub(super) struct Expander<'a> {
    pub(super) sources: &'a Sources,
    netlist: &'a Netlist,
    pub(super) budget: &'a Budget,
    pub(super) catalogue: &'a Catalogue,
    definitions: Definitions,
    pub(super) circuit: Circuit,
    pub(super) faults: Vec<Diagnostic>,
    names: FxHashMap<String, NetId>,
    /// Where zero-ohm links have moved each net; empty where there are none.
    pub(super) joined: Vec<NetId>,
    known: FxHashMap<String, Option<Identity>>,
    buffer: String,
    calls: Vec<Call>,
    /// Elements that calls at the top stand for.
    opened: u64,
    /// Which names under the budget's `absent` match an element.
    pub(super) absent_used: Vec<bool>,
    /// Which names under the budget's `grounds` a statement uses.
    pub(super) grounds_used: Vec<bool>,
    /// Calls that nothing defines and no profile knows.
    pub(super) undefined: Vec<Undefined>,
}

/// One level while it is expanded: where its names lead.
struct Level<'l> {
    /// Path before names, empty at the top, else with a dot behind.
    path: &'l str,
    /// Nets of the definition's ports by lower-case name.
    ports: FxHashMap<String, NetId>,
    /// The definition that this is the body of.
    definition: Option<usize>,
    parameters: Parameters<'l>,
    depth: usize,
}

impl<'a> Expander<'a> {
    pub(super) fn new(
        sources: &'a Sources,
        netlist: &'a Netlist,
        budget: &'a Budget,
        catalogue: &'a Catalogue,
    ) -> Self {
        let definitions = Definitions::of(sources, netlist);
        let (calls, faults) = calls(sources, netlist, &definitions, budget, catalogue);
        let mut expander = Expander {
            sources,
            netlist,
            budget,
            catalogue,
            definitions,
            circuit: Circuit::default(),
            faults,
            names: FxHashMap::default(),
            joined: Vec::new(),
            known: FxHashMap::default(),
            buffer: String::new(),
            calls,
            opened: 0,
            absent_used: vec![false; budget.absent.len()],
            grounds_used: vec![false; budget.grounds.len()],
            undefined: Vec::new(),
        };
        let ground = expander.add_net("0".to_owned(), None);
        expander.circuit.nets[0].ground = true;
        for name in ["0", "gnd", "gnd!"] {
            expander.names.insert(name.to_owned(), ground);
        }
        for name in &budget.grounds {
            expander.names.insert(name.text.to_ascii_lowercase(), ground);
        }
        expander
    }

    /// Expands everything from the top.
    pub(super) fn expand(&mut self) {
        let netlist = self.netlist;
        for name in &netlist.globals {
            let text = self.sources.text(*name).to_ascii_lowercase();
            if !self.names.contains_key(&text) {
                let net = self.add_net(self.sources.text(*name).to_owned(), Some(*name));
                self.names.insert(text, net);
            }
        }
        let mut level = Level {
            path: "",
            ports: FxHashMap::default(),
            definition: None,
            parameters: Parameters::default(),
            depth: 0,
        };
        let mut faults = Vec::new();
        level.parameters.assign(self.sources, &netlist.top.parameters, None, &mut faults);
        self.report(faults);
        self.scope(&netlist.top, &level);
    }

    pub(super) fn add_net(&mut self, name: String, span: Option<Span>) -> NetId {
        let net = Net {
            labelled: values::labelled(&name),
            unconnected: values::unconnected(&name),
            name,
            span,
            ground: false,
            declared: false,
        };
        self.circuit.nets.push(net);
        NetId(self.circuit.nets.len() as u32 - 1)
    }

    /// The top-level net of a name, in any case.
    pub(super) fn find_net(&mut self, name: &str) -> Option<NetId> {
        self.buffer.clear();
        self.buffer.push_str(name);
        self.buffer.make_ascii_lowercase();
        let net = self.names.get(self.buffer.as_str()).copied()?;
        Some(self.joined.get(net.0 as usize).copied().unwrap_or(net))
    }

    pub(super) fn add_element(&mut self, element: Element) -> ElementId {
        self.circuit.elements.push(element);
        ElementId(self.circuit.elements.len() as u32 - 1)
    }

    fn report(&mut self, faults: Vec<Fault>) {
        self.faults.extend(
            faults
                .into_iter()
                .map(|(span, reason)| Diagnostic::at("unreadable-value", Severity::Warning, span, reason)),
        );
    }

    fn net(&mut self, word: Span, level: &Level) -> NetId {
        let text = self.sources.text(word);
        if text == "?" {
            return self.add_net(format!("{}?", level.path), Some(word));
        }
        self.buffer.clear();
        self.buffer.push_str(text);
        self.buffer.make_ascii_lowercase();
        if let Some(net) = level.ports.get(self.buffer.as_str()) {
            return *net;
        }
        // Ground and globals are one net at every level.
        if let Some(net) = self.names.get(self.buffer.as_str())
            && (level.path.is_empty() || net.0 == 0 || self.is_global(text))
        {
            if net.0 == 0 {
                let used =
                    self.budget.grounds.iter().position(|ground| ground.text.eq_ignore_ascii_case(text));
                used.into_iter().for_each(|at| self.grounds_used[at] = true);
            }
            return *net;
        }
        let name = format!("{}{text}", level.path);
        let key = name.to_ascii_lowercase();
        if let Some(net) = self.names.get(&key) {
            return *net;
        }
        let net = self.add_net(name, Some(word));
        self.names.insert(key, net);
        net
    }

    fn is_global(&self, name: &str) -> bool {
        self.netlist.globals.iter().any(|global| self.sources.text(*global).eq_ignore_ascii_case(name))
    }

    fn scope(&mut self, scope: &'a Scope, level: &Level) {
        scope.elements.iter().for_each(|statement| self.statement(statement, level));
    }

    fn statement(&mut self, statement: &'a Statement, level: &Level) {
        let name = format!("{}{}", level.path, self.sources.text(statement.name));
        if self.is_absent(&name) {
            return;
        }
        let nets: SmallVec<[NetId; 4]> = statement.nodes.iter().map(|word| self.net(*word, level)).collect();
        let kind = match &statement.kind {
            Kind::Call { model, parameters } => {
                return self.call(statement, name, nets, (*model, parameters), level);
            }
            Kind::Resistor(stated) if nets.len() == 3 => {
                return self.potentiometer(statement, name, &nets, stated, level);
            }
            Kind::Resistor(stated) => {
                self.milli(&name, stated);
                values::resistor(self.part(&name, Passive::Resistor, stated, level))
            }
            Kind::Capacitor(stated) => {
                ElementKind::Capacitor(self.part(&name, Passive::Capacitor, stated, level))
            }
            Kind::Inductor(stated) => {
                ElementKind::Inductor(self.part(&name, Passive::Inductor, stated, level))
            }
            Kind::VoltageSource(waveform) => ElementKind::VoltageSource(self.drive(waveform, level)),
            Kind::CurrentSource(waveform) => ElementKind::CurrentSource(self.drive(waveform, level)),
            Kind::VoltageGain(gain) => match self.value(*gain, level) {
                Some(gain) if gain.is_finite() && gain != 0.0 && nets.len() == 4 => {
                    ElementKind::VoltageGain(gain)
                }
                _ => ElementKind::Unmodelled,
            },
            Kind::Diode { .. } if nets.len() == 2 => ElementKind::Diode,
            Kind::Transistor { .. } => ElementKind::Transistor,
            Kind::Diode { .. } | Kind::Unmodelled => ElementKind::Unmodelled,
        };
        self.add_element(Element { name, nets, kind, span: Some(statement.span) });
    }

    /// Whether the budget says that an element isn't fitted; remembers which of its names were of use.
    fn is_absent(&mut self, name: &str) -> bool {
        let mut absent = false;
        for (at, pattern) in self.budget.absent.iter().enumerate() {
            if matches(&pattern.text, name) {
                self.absent_used[at] = true;
                absent = true;
            }
        }
        absent
    }

    fn value(&mut self, value: Value, level: &Level) -> Option<f64> {
        level.parameters.value(self.sources, value).map_err(|fault| self.report(vec![fault])).ok()
    }

    fn drive(&mut self, waveform: &Waveform, level: &Level) -> crate::circuit::Drive {
        let dc = waveform.dc.and_then(|value| self.value(value, level));
        let moves = waveform.ac || waveform.unknown || waveform.span.is_some();
        let unknown = dc.is_none() && (waveform.unknown || waveform.dc.is_some());
        values::drive(dc, waveform.span, moves, unknown)
    }

    /// A resistor whose value ends with a bare `M`: milli in a netlist, mega in a drawing: both readings
    /// are said. A small `m` is milli to everybody.
    fn milli(&mut self, name: &str, stated: &Stated) {
        let Some(Value::Number(ohms, word)) = stated.value else { return };
        let text = self.sources.text(word);
        let bare = number(text).is_some_and(|found| found.multiplier == Some('M') && !found.code);
        let below_an_ohm = 0.0 < ohms && ohms < 1.0;
        if !(bare && below_an_ohm) {
            return;
        }
        let message = format!(
            "{} of {} is read as {}, as netlists have it; was {} meant?",
            quote(text),
            quote(name),
            show(ohms, Unit::Ohm),
            show(ohms * 1e9, Unit::Ohm)
        );
        let fault = Diagnostic::at("value-reading", Severity::Warning, word, message);
        let digits = text.trim_end_matches('M');
        self.faults.push(
            fault.help(format!("write {digits}Meg for the one, {} for the other", show(ohms, Unit::Ohm))),
        );
    }

    /// Two resistors at half travel; the second node is the wiper.
    fn potentiometer(
        &mut self,
        statement: &Statement,
        name: String,
        nets: &[NetId],
        stated: &Stated,
        level: &Level,
    ) {
        let whole = self.part(&name, Passive::Resistor, stated, level);
        let stated = stated.value.and_then(|value| self.value(value, level));
        let upper = match (whole.travel, stated) {
            (Some(_), _) => whole,
            _ => crate::circuit::Part { value: whole.value.map(|ohms| ohms / 2.0), ..whole },
        };
        let rest = |ohms: f64| stated.map_or(ohms, |track| track - ohms);
        let lower = crate::circuit::Part {
            value: upper.value.map(rest),
            travel: upper.travel.map(|(first, second)| (rest(first), rest(second))),
            ..upper
        };
        let halves = [([nets[0], nets[1]], "upper", upper), ([nets[1], nets[2]], "lower", lower)];
        for (ends, part, half) in halves {
            self.add_element(Element {
                name: format!("{name}:{part}"),
                nets: ends.as_slice().into(),
                kind: values::resistor(half),
                span: Some(statement.span),
            });
        }
    }

    /// A passive's value, tolerance and rating; the reader has put in what a model of it says.
    fn part(&mut self, name: &str, passive: Passive, stated: &Stated, level: &Level) -> crate::circuit::Part {
        let value = stated.value.and_then(|value| {
            let read = level.parameters.value(self.sources, value);
            let fault = |(span, reason)| Diagnostic::at("unreadable-value", Severity::Error, span, reason);
            let number = read.map_err(|reason| self.faults.push(fault(reason))).ok()?;
            if let (Value::Expression(span), true) = (value, number < 0.0) {
                let message = format!("{} is {number:e}; expected a positive value", quote(name));
                self.faults.push(Diagnostic::at("not-positive-value", Severity::Error, span, message));
            }
            Some(number)
        });
        let sound = value.filter(|value| value.is_finite() && (passive == Passive::Resistor || 0.0 < *value));
        let limits = (stated.tolerance, stated.rating);
        values::part(self.budget, &self.catalogue.assumed, name, passive, sound, limits)
    }
}
