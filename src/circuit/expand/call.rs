//! Calls: of op amps, of definitions that are opened, and of what isn't modelled.

use super::{Expander, Level};
use crate::circuit::identify::{Identity, Misfit, identify, pins_by_name};
use crate::circuit::scope::Parameters;
use crate::circuit::{Element, ElementId, ElementKind, NetId, OpAmp, Unplaced};
use crate::device::Pin;
use crate::diagnostic::{Diagnostic, Severity};
use crate::netlist::{Assignment, Statement};
use crate::source::{Span, quote};
use smallvec::SmallVec;

/// Calls may nest this deep.
const DEPTH: usize = 40;
/// The names before a name may be this long together, in bytes.
const LONGEST_PATH: usize = 1_000;
/// All subcircuits of a board may stand for this many elements once they are expanded. What stands at the
/// top is bounded by what is read.
const OPENED: u64 = 200_000;

impl<'a> Expander<'a> {
    pub(super) fn call(
        &mut self,
        statement: &'a Statement,
        name: String,
        nets: SmallVec<[NetId; 4]>,
        (model, parameters): (Span, &'a [Assignment]),
        level: &Level,
    ) {
        let text = self.sources.text(model);
        let found = self.definitions.find(self.netlist, level.definition, text);
        match self.identity(&name, text, nets.len(), found) {
            Ok(Some(identity)) => self.op_amp(statement, name, text, &nets, identity),
            Ok(None) => match found {
                Some(index) if self.calls[index].opens => {
                    self.open(statement, name, nets, parameters, index, level)
                }
                Some(index) => match pins_by_name(&self.ports(index)).filter(|pins| pins.len() == nets.len())
                {
                    Some(pins) => {
                        let unknown = Identity::of(self.catalogue, self.budget, None, None);
                        let identity = Identity { pins, ..unknown };
                        self.op_amp(statement, name, text, &nets, identity);
                    }
                    None => {
                        self.unmodelled(statement, name, nets);
                    }
                },
                None => {
                    let element = self.unmodelled(statement, name, nets);
                    self.undefined.push((element, model));
                }
            },
            Err(Misfit(expected)) => {
                let found = nets.len();
                let reason =
                    format!("it is called with {found} nodes, the pin order of {text} has {expected}");
                self.unplaced(statement, name, &nets, text, reason);
            }
        }
    }

    /// An op amp that can't be placed: kept as an unmodelled part, and counted.
    fn unplaced(&mut self, statement: &Statement, name: String, nets: &[NetId], model: &str, reason: String) {
        let cure = format!(
            "budget: devices: {{ {model}: {{ pins: [...] }} }} gives the order of its {} nodes",
            nets.len()
        );
        let element = self.unmodelled(statement, name, nets.into());
        self.circuit.unplaced.push(Unplaced { element, model: model.to_owned(), reason, cure });
    }

    fn unmodelled(&mut self, statement: &Statement, name: String, nets: SmallVec<[NetId; 4]>) -> ElementId {
        let span = Some(statement.span);
        self.add_element(Element { name, nets, kind: ElementKind::Unmodelled, span })
    }

    /// Port names of a definition.
    fn ports(&self, index: usize) -> Vec<&'a str> {
        let (sources, netlist) = (self.sources, self.netlist);
        netlist.subcircuits[index].ports.iter().map(|port| sources.text(*port)).collect()
    }

    /// What a call is; the answer for a model name with a count of nodes is remembered where no
    /// designator in the budget can change it.
    fn identity(
        &mut self,
        name: &str,
        model: &str,
        nodes: usize,
        found: Option<usize>,
    ) -> Result<Option<Identity>, Misfit> {
        let key = format!("{} {nodes} {found:?}", model);
        if self.budget.devices.is_empty()
            && let Some(known) = self.known.get(&key)
        {
            return Ok(known.clone());
        }
        let ports = found.map(|index| self.ports(index));
        let identity = identify(self.catalogue, self.budget, (name, model), nodes, ports.as_deref())?;
        self.known.insert(key, identity.clone());
        Ok(identity)
    }

    fn op_amp(
        &mut self,
        statement: &Statement,
        name: String,
        model: &str,
        nets: &[NetId],
        identity: Identity,
    ) {
        let pin = |wanted: Pin| identity.pins.iter().position(|pin| *pin == wanted).map(|at| nets[at]);
        let (Some(non_inverting), Some(inverting), Some(output)) =
            (pin(Pin::NonInverting), pin(Pin::Inverting), pin(Pin::Output))
        else {
            let reason = "its pin order lacks an input or the output".to_owned();
            self.unplaced(statement, name, nets, model, reason);
            return;
        };
        let index = self.circuit.op_amps.len() as u32;
        let (positive, negative) = (pin(Pin::PositiveSupply), pin(Pin::NegativeSupply));
        let element = self.add_element(Element {
            name: name.clone(),
            nets: nets.into(),
            kind: ElementKind::OpAmp(index),
            span: Some(statement.span),
        });
        self.circuit.op_amps.push(OpAmp {
            element,
            name,
            model: model.to_owned(),
            profile: identity.profile,
            technology: identity.technology,
            non_inverting,
            inverting,
            output,
            positive,
            negative,
        });
    }

    fn open(
        &mut self,
        statement: &'a Statement,
        name: String,
        nets: SmallVec<[NetId; 4]>,
        given: &'a [Assignment],
        index: usize,
        level: &Level,
    ) {
        let definition = &self.netlist.subcircuits[index];
        let call = self.calls[index];
        let path = format!("{name}.");
        let larger = self.opened.saturating_add(call.weight);
        let fault = if OPENED < larger {
            Some(format!(
                "expected at most {OPENED} elements in all subcircuits together once they are expanded, found more"
            ))
        } else if DEPTH <= level.depth || LONGEST_PATH < path.len() {
            Some(format!(
                "calls nest more than {DEPTH} deep, or their names grow longer than {LONGEST_PATH} bytes"
            ))
        } else {
            None
        };
        if let Some(reason) = &fault {
            let message = format!(
                "{reason}; {} is kept as an unmodelled part",
                quote(self.sources.text(statement.name))
            );
            self.faults.push(Diagnostic::at("too-large", Severity::Error, statement.span, message));
        }
        // A circle of calls and a count of pins that differs are faults of their own already.
        if fault.is_some() || call.endless || definition.ports.len() != nets.len() {
            self.unmodelled(statement, name, nets);
            return;
        }
        if level.depth == 0 {
            self.opened = larger;
        }
        let ports = definition.ports.iter().map(|port| self.sources.text(*port).to_ascii_lowercase());
        let ports = ports.zip(nets).collect();
        let mut parameters = Parameters::within(&level.parameters);
        let mut faults = Vec::new();
        parameters.assign(self.sources, &definition.defaults, None, &mut faults);
        parameters.assign(self.sources, given, Some(&level.parameters), &mut faults);
        parameters.assign(self.sources, &definition.body.parameters, None, &mut faults);
        self.report(faults);
        let inner = Level { path: &path, ports, definition: Some(index), parameters, depth: level.depth + 1 };
        self.scope(&definition.body, &inner);
    }
}
