//! Parameters and definitions that a level of the netlist can see.

use crate::netlist::{Assignment, Netlist, Value, evaluate};
use crate::source::{Sources, Span};
use rustc_hash::FxHashMap;

/// Parameter values of one level, with the level around it.
#[derive(Debug, Default)]
pub(super) struct Parameters<'a> {
    values: FxHashMap<String, f64>,
    outer: Option<&'a Parameters<'a>>,
}

/// An expression that gave no value: where it stands and why.
pub(super) type Fault = (Span, String);

impl<'a> Parameters<'a> {
    pub(super) fn within(outer: &'a Parameters<'a>) -> Self {
        Parameters { values: FxHashMap::default(), outer: Some(outer) }
    }

    fn get(&self, name: &str) -> Option<f64> {
        let mut level = Some(self);
        while let Some(parameters) = level {
            if let Some(value) = parameters.values.get(name) {
                return Some(*value);
            }
            level = parameters.outer;
        }
        None
    }

    /// Evaluates an expression with the names that this level sees.
    pub(super) fn evaluate(&self, sources: &Sources, expression: Span) -> Result<f64, Fault> {
        evaluate(sources.text(expression), &|name| self.get(&name.to_ascii_lowercase()))
            .map_err(|reason| (expression, reason))
    }

    /// The number behind a value.
    pub(super) fn value(&self, sources: &Sources, value: Value) -> Result<f64, Fault> {
        match value {
            Value::Number(number, _) => Ok(number),
            Value::Expression(expression) => self.evaluate(sources, expression),
        }
    }

    /// Takes assignments into this level, in order; `from` is the level whose names their values use.
    pub(super) fn assign(
        &mut self,
        sources: &Sources,
        assignments: &[Assignment],
        from: Option<&Parameters>,
        faults: &mut Vec<Fault>,
    ) {
        for assignment in assignments {
            let name = sources.text(assignment.name).to_ascii_lowercase();
            match from.unwrap_or(self).evaluate(sources, assignment.value) {
                Ok(value) => {
                    self.values.insert(name, value);
                }
                // Without a value it still hides a parameter of that name further out.
                Err(fault) => {
                    self.values.insert(name, f64::NAN);
                    faults.push(fault);
                }
            }
        }
    }
}

/// Definitions and models by name, seen from a level outwards.
#[derive(Debug, Default)]
pub(super) struct Definitions {
    subcircuits: FxHashMap<(Option<usize>, String), usize>,
}

impl Definitions {
    pub(super) fn of(sources: &Sources, netlist: &Netlist) -> Self {
        let mut subcircuits = FxHashMap::default();
        for (index, definition) in netlist.subcircuits.iter().enumerate() {
            let name = sources.text(definition.name).to_ascii_lowercase();
            subcircuits.entry((definition.parent, name)).or_insert(index);
        }
        Definitions { subcircuits }
    }

    /// The definition of that name nearest to a level.
    pub(super) fn find(&self, netlist: &Netlist, mut level: Option<usize>, name: &str) -> Option<usize> {
        let name = name.to_ascii_lowercase();
        loop {
            if let Some(index) = self.subcircuits.get(&(level, name.clone())) {
                return Some(*index);
            }
            level = netlist.subcircuits[level?].parent;
        }
    }
}
