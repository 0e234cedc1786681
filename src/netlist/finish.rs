//! What can be said once everything is read: names used twice, pin counts, models and parameters of passives.

use super::fault::{Faults, shown};
use super::name::{name_hash, name_order, same_name};
use super::number::{number, percentage};
use super::{Kind, Model, Netlist, Passive, Scope, Statement, Value, Word};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::source::Sources;
use std::cmp::Ordering;

/// Checks a whole netlist and settles what depends on later lines.
pub(super) fn finish(netlist: &mut Netlist, sources: &Sources, faults: &mut Faults) {
    empty(netlist, faults, sources);
    let index = Index::new(netlist, sources);
    pin_counts(netlist, &index, sources, faults);
    settle_passives(netlist, &index, sources, faults);
    duplicates(&netlist.top, sources, faults);
    for subcircuit in &netlist.subcircuits {
        duplicates(&subcircuit.body, sources, faults);
    }
}

/// Where a scope stands: the top, or a definition.
type Level = Option<usize>;

/// Definitions and models by name and level.
struct Index {
    /// Definitions, ordered by name, the level they are written in, and place.
    definitions: Vec<usize>,
    /// Models likewise: their level and their index in its scope.
    models: Vec<(Level, usize)>,
}

impl Index {
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
        Index { definitions, models }
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

    /// The model that a name means at a level.
    fn model<'a>(
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

fn levels(netlist: &Netlist) -> impl Iterator<Item = Level> + use<> {
    std::iter::once(None).chain((0..netlist.subcircuits.len()).map(Some))
}

fn scope(netlist: &Netlist, level: Level) -> &Scope {
    level.map_or(&netlist.top, |index| &netlist.subcircuits[index].body)
}

/// A level and those around it, outwards to the top.
fn around(netlist: &Netlist, level: Level) -> impl Iterator<Item = Level> + '_ {
    std::iter::successors(Some(level), |level| level.map(|index| netlist.subcircuits[index].parent))
}

/// A file that says nothing is a fault, unless another fault says why.
fn empty(netlist: &Netlist, faults: &mut Faults, sources: &Sources) {
    let top = &netlist.top;
    let holds = !top.elements.is_empty()
        || !top.models.is_empty()
        || !top.parameters.is_empty()
        || !netlist.subcircuits.is_empty()
        || !netlist.includes.is_empty();
    if !holds && faults.list.is_empty() {
        let file = crate::source::FileId(0);
        let end = sources.file(file).text.len() as u32;
        let span = Word { file, start: end, end };
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
            if call.nodes.len() != definition.ports.len() {
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

/// What is to be done with one passive.
enum Settled {
    /// It stays as it is.
    Kept,
    /// The named model's factor and tolerance are put in.
    Model(Passive),
    /// The word is a parameter, which gives the value.
    Parameter(Word),
    /// The word is a third net: the part has three pins.
    Pin(Word),
    /// Nothing gives a value.
    Missing(Word),
}

/// Passives with a word that may be a model, a parameter or a third net.
fn settle_passives(netlist: &mut Netlist, index: &Index, sources: &Sources, faults: &mut Faults) {
    for level in levels(netlist) {
        let doubtful =
            |statement: &Statement| passive(&statement.kind).is_some_and(|passive| passive.model.is_some());
        let elements = &scope(netlist, level).elements;
        let places: Vec<usize> = (0..elements.len()).filter(|at| doubtful(&elements[*at])).collect();
        if places.is_empty() {
            continue;
        }
        let nets = net_hashes(elements, sources);
        let settled: Vec<Settled> =
            places.iter().map(|at| settle(netlist, index, sources, level, &elements[*at], &nets)).collect();
        let scope = match level {
            Some(index) => &mut netlist.subcircuits[index].body,
            None => &mut netlist.top,
        };
        for (at, settled) in places.into_iter().zip(settled) {
            apply(&mut scope.elements[at], settled, sources, faults);
        }
    }
}

fn passive(kind: &Kind) -> Option<&Passive> {
    match kind {
        Kind::Resistor(passive) | Kind::Capacitor(passive) | Kind::Inductor(passive) => Some(passive),
        _ => None,
    }
}

/// The hashes of all nets of a scope, sorted.
fn net_hashes(elements: &[Statement], sources: &Sources) -> Vec<u64> {
    let nodes = elements.iter().flat_map(|element| &element.nodes);
    let mut hashes: Vec<u64> = nodes.map(|node| name_hash(sources.text(*node))).collect();
    hashes.sort_unstable();
    hashes.dedup();
    hashes
}

fn settle(
    netlist: &Netlist,
    index: &Index,
    sources: &Sources,
    level: Level,
    statement: &Statement,
    nets: &[u64],
) -> Settled {
    let Some((passive, word)) = passive(&statement.kind).and_then(|passive| Some((passive, passive.model?)))
    else {
        return Settled::Kept;
    };
    let name = sources.text(word);
    if let Some(model) = index.model(netlist, sources, name, level) {
        return Settled::Model(with_model(*passive, model, statement, sources));
    }
    let value_behind = match passive.value {
        Some(Value::Number(_, value) | Value::Expression(value)) => word.end <= value.start,
        None => false,
    };
    if passive.value.is_none() {
        let parameter = parameter(netlist, sources, name, level);
        return if parameter { Settled::Parameter(word) } else { Settled::Missing(word) };
    }
    if value_behind && nets.binary_search(&name_hash(name)).is_ok() {
        Settled::Pin(word)
    } else {
        Settled::Kept
    }
}

/// Whether a name is a parameter at a level.
fn parameter(netlist: &Netlist, sources: &Sources, name: &str, level: Level) -> bool {
    around(netlist, level).any(|level| {
        let defaults = level.map_or(&[][..], |index| &netlist.subcircuits[index].defaults);
        let mut all = scope(netlist, level).parameters.iter().chain(defaults);
        all.any(|assignment| same_name(sources.text(assignment.name), name))
    })
}

/// A passive whose model multiplies its value (`R=`, `C=`, `L=`) and states its tolerance (`DEV=`, `TOL=`).
fn with_model(mut passive: Passive, model: &Model, statement: &Statement, sources: &Sources) -> Passive {
    let (letter, kinds): (&str, &[&str]) = match statement.kind {
        Kind::Resistor(_) => ("r", &["res", "r"]),
        Kind::Capacitor(_) => ("c", &["cap", "c"]),
        _ => ("l", &["ind", "l"]),
    };
    if !kinds.iter().any(|kind| same_name(kind, sources.text(model.kind))) {
        return passive;
    }
    for assignment in &model.parameters {
        let text = sources.text(assignment.value);
        let name = sources.text(assignment.name);
        if same_name(name, letter)
            && let (Some(factor), Some(Value::Number(value, word))) = (number(text), passive.value)
        {
            passive.value = Some(Value::Number(value * factor.value, word));
        } else if same_name(name, "dev") || same_name(name, "tol") {
            passive.tolerance = passive.tolerance.or_else(|| percentage(text));
        }
    }
    passive
}

fn apply(statement: &mut Statement, settled: Settled, sources: &Sources, faults: &mut Faults) {
    let name = shown(sources.text(statement.name));
    let (Kind::Resistor(passive) | Kind::Capacitor(passive) | Kind::Inductor(passive)) = &mut statement.kind
    else {
        return;
    };
    match settled {
        Settled::Kept => {}
        Settled::Model(with_model) => {
            *passive = with_model;
            if passive.value.is_none() {
                faults.warning("missing-value", statement.span, format!("{name} has a model, but no value"));
            }
        }
        Settled::Parameter(word) => (passive.model, passive.value) = (None, Some(Value::Expression(word))),
        Settled::Missing(word) => {
            let message = format!("expected the value of {name}, found {}", shown(sources.text(word)));
            faults.error("missing-value", word, message);
        }
        Settled::Pin(word) => {
            passive.model = None;
            statement.nodes.push(word);
            if !matches!(statement.kind, Kind::Resistor(_)) {
                statement.kind = Kind::Unmodelled;
            }
        }
    }
}
