//! What can be said once everything is read: names used twice, pin counts, definitions by name.

use super::fault::{Faults, shown};
use super::name::{name_hash, name_order, same_name};
use super::{Kind, Model, Netlist, Scope, Statement, Word, settle};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::source::{FileId, Sources};
use std::cmp::Ordering;

/// Checks a whole netlist and settles what depends on later lines.
pub(super) fn finish(netlist: &mut Netlist, sources: &Sources, file: FileId, faults: &mut Faults) {
    empty(netlist, file, faults);
    let index = Index::new(netlist, sources);
    pin_counts(netlist, &index, sources, faults);
    settle::passives(netlist, &index, sources, faults);
    duplicates(&netlist.top, sources, faults);
    for subcircuit in &netlist.subcircuits {
        duplicates(&subcircuit.body, sources, faults);
    }
}

/// Where a scope stands: the top, or a definition.
pub(super) type Level = Option<usize>;

/// Definitions, models and parameters by name and level.
pub(super) struct Index {
    /// Definitions, ordered by name, the level they are written in, and place.
    definitions: Vec<usize>,
    /// Models likewise: their level and their index in its scope.
    models: Vec<(Level, usize)>,
    /// Parameters likewise: their name and their level.
    parameters: Vec<(Word, Level)>,
}

impl Index {
    /// Sorts the names of a whole netlist.
    fn new(netlist: &Netlist, sources: &Sources) -> Index {
        let key = |index: &usize| {
            (sources.text(netlist.subcircuits[*index].name), netlist.subcircuits[*index].parent)
        };
        let mut definitions: Vec<usize> = (0..netlist.subcircuits.len()).collect();
        definitions.sort_by(|a, b| order(key(a), key(b)));
        let mut models: Vec<(Level, usize)> = Vec::new();
        for level in levels(netlist) {
            models.extend((0..scope(netlist, level).models.len()).map(|model| (level, model)));
        }
        let key = |at: &(Level, usize)| (sources.text(scope(netlist, at.0).models[at.1].name), at.0);
        models.sort_by(|a, b| order(key(a), key(b)));
        let mut parameters: Vec<(Word, Level)> = Vec::new();
        for level in levels(netlist) {
            let defaults = level.map_or(&[][..], |index| &netlist.subcircuits[index].defaults);
            let all = scope(netlist, level).parameters.iter().chain(defaults);
            parameters.extend(all.map(|assignment| (assignment.name, level)));
        }
        let key = |at: &(Word, Level)| (sources.text(at.0), at.1);
        parameters.sort_by(|a, b| order(key(a), key(b)));
        Index { definitions, models, parameters }
    }

    /// The definition that a name means at a level: its own, else that of the level around it.
    fn definition(&self, netlist: &Netlist, sources: &Sources, name: &str, level: Level) -> Option<usize> {
        around(netlist, level).find_map(|level| {
            let key = |index: &usize| {
                (sources.text(netlist.subcircuits[*index].name), netlist.subcircuits[*index].parent)
            };
            let at =
                self.definitions.partition_point(|index| order(key(index), (name, level)) == Ordering::Less);
            self.definitions
                .get(at)
                .copied()
                .filter(|index| order(key(index), (name, level)) == Ordering::Equal)
        })
    }

    /// Whether a name is a parameter at a level.
    pub(super) fn parameter(&self, netlist: &Netlist, sources: &Sources, name: &str, level: Level) -> bool {
        let key = |at: &(Word, Level)| (sources.text(at.0), at.1);
        around(netlist, level)
            .any(|level| self.parameters.binary_search_by(|at| order(key(at), (name, level))).is_ok())
    }

    /// The model that a name means at a level.
    pub(super) fn model<'a>(
        &self,
        netlist: &'a Netlist,
        sources: &Sources,
        name: &str,
        level: Level,
    ) -> Option<&'a Model> {
        around(netlist, level).find_map(|level| {
            let key = |at: &(Level, usize)| (sources.text(scope(netlist, at.0).models[at.1].name), at.0);
            let at = self.models.partition_point(|at| order(key(at), (name, level)) == Ordering::Less);
            let found = self.models.get(at).filter(|at| order(key(at), (name, level)) == Ordering::Equal);
            found.map(|at| &scope(netlist, at.0).models[at.1])
        })
    }
}

fn order(a: (&str, Level), b: (&str, Level)) -> Ordering {
    name_order(a.0, b.0).then(a.1.cmp(&b.1))
}

pub(super) fn levels(netlist: &Netlist) -> impl Iterator<Item = Level> + use<> {
    std::iter::once(None).chain((0..netlist.subcircuits.len()).map(Some))
}

pub(super) fn scope(netlist: &Netlist, level: Level) -> &Scope {
    level.map_or(&netlist.top, |index| &netlist.subcircuits[index].body)
}

/// A level and those around it, outwards to the top.
fn around(netlist: &Netlist, level: Level) -> impl Iterator<Item = Level> + '_ {
    std::iter::successors(Some(level), |level| level.map(|index| netlist.subcircuits[index].parent))
}

/// A file that says nothing is a fault, unless another fault says why.
fn empty(netlist: &Netlist, file: FileId, faults: &mut Faults) {
    let top = &netlist.top;
    let holds = !top.elements.is_empty()
        || !top.models.is_empty()
        || !top.parameters.is_empty()
        || !netlist.subcircuits.is_empty()
        || !netlist.includes.is_empty();
    if !holds && faults.list.is_empty() {
        let span = Word { file, start: 0, end: 0 };
        faults.error("empty-netlist", span, "expected elements, found none");
    }
}

/// Element names used twice in a scope, and definitions of one name.
fn duplicates(scope: &Scope, sources: &Sources, faults: &mut Faults) {
    let name = |index: u32| sources.text(scope.elements[index as usize].name);
    let mut keys: Vec<u64> = Vec::with_capacity(scope.elements.len());
    keys.extend(
        (0..scope.elements.len() as u32)
            .map(|index| (name_hash(name(index)) & !u64::from(u32::MAX)) | u64::from(index)),
    );
    keys.sort_unstable();
    let mut twice: Vec<(u32, u32)> = Vec::new();
    for run in keys.chunk_by(|a, b| a >> 32 == b >> 32).filter(|run| 1 < run.len()) {
        let mut run: Vec<u32> = run.iter().map(|key| *key as u32).collect();
        run.sort_by(|a, b| name_order(name(*a), name(*b)).then(a.cmp(b)));
        for same in run.chunk_by(|a, b| same_name(name(*a), name(*b))) {
            twice.extend(same[1..].iter().map(|again| (*again, same[0])));
        }
    }
    twice.sort_unstable();
    for (again, first) in twice {
        if faults.is_full() {
            return;
        }
        let (again, first) = (scope.elements[again as usize].name, scope.elements[first as usize].name);
        let message = format!("{} names two elements", shown(sources.text(again)));
        let mut fault = Diagnostic::at("duplicate-designator", Severity::Error, again, message);
        fault.labels.push(Label { span: first, text: "first used here".to_owned() });
        faults.push(fault);
    }
}

/// Calls whose number of nodes differs from the ports of the definition that they name.
fn pin_counts(netlist: &Netlist, index: &Index, sources: &Sources, faults: &mut Faults) {
    for pair in index.definitions.windows(2) {
        let (first, again) = (&netlist.subcircuits[pair[0]], &netlist.subcircuits[pair[1]]);
        if first.parent == again.parent && same_name(sources.text(first.name), sources.text(again.name)) {
            let message =
                format!("{} is defined twice; the first definition counts", shown(sources.text(again.name)));
            let mut fault = Diagnostic::at("duplicate-subckt", Severity::Warning, again.name, message);
            fault.labels.push(Label { span: first.name, text: "first defined here".to_owned() });
            faults.push(fault);
        }
    }
    if netlist.subcircuits.is_empty() {
        return;
    }
    for level in levels(netlist) {
        for call in &scope(netlist, level).elements {
            let Kind::Call { model, .. } = call.kind else { continue };
            let Some(found) = index.definition(netlist, sources, sources.text(model), level) else {
                continue;
            };
            let definition = &netlist.subcircuits[found];
            if call.nodes.len() != definition.ports.len() && !faults.is_full() {
                faults.push(pin_count(call, definition.name, definition.ports.len(), sources));
            }
        }
    }
}

fn pin_count(call: &Statement, definition: Word, ports: usize, sources: &Sources) -> Diagnostic {
    let message = format!(
        "{} connects {} nets to {}, which has {ports} ports",
        shown(sources.text(call.name)),
        call.nodes.len(),
        shown(sources.text(definition))
    );
    let mut fault = Diagnostic::at("pin-count", Severity::Error, call.span, message);
    fault.labels.push(Label { span: definition, text: "defined here".to_owned() });
    fault
}
