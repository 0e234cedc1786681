//! Words of R, C and L that only the whole netlist explains: a model, a parameter, a third net.

use super::fault::{Faults, shown};
use super::finish::{Index, Level, levels, scope};
use super::name::{name_hash, same_name};
use super::number::number;
use super::remark::percentage;
use super::{Kind, Model, Netlist, Passive, Statement, Value, Word};
use crate::source::Sources;

/// What is to be done with one passive.
enum Settled {
    /// It stays as it is.
    Kept,
    /// The named model's factor and tolerance are put in.
    Model(Passive),
    /// The word is a parameter, which gives the value; the model that is left.
    Parameter(Word, Option<Word>),
    /// The word is a third net: the part has three pins.
    Pin(Word),
    /// Nothing gives a value.
    Missing(Word),
}

/// Passives with a word that may be a model, a parameter or a third net.
pub(super) fn passives(netlist: &mut Netlist, index: &Index, sources: &Sources, faults: &mut Faults) {
    for level in levels(netlist) {
        let doubtful = |statement: &Statement| {
            passive(&statement.kind)
                .is_some_and(|passive| passive.model.is_some() || is_leading_code(passive, sources))
        };
        let elements = &scope(netlist, level).elements;
        let places: Vec<usize> = (0..elements.len()).filter(|at| doubtful(&elements[*at])).collect();
        if places.is_empty() {
            continue;
        }
        let nets = net_hashes(elements, sources);
        for at in places {
            let settled = settle(netlist, index, sources, level, &scope(netlist, level).elements[at], &nets);
            let scope = match level {
                Some(index) => &mut netlist.subcircuits[index].body,
                None => &mut netlist.top,
            };
            apply(&mut scope.elements[at], settled, sources, faults);
        }
    }
}

/// Whether the value is a code such as `R47`, which may be the name of a parameter too.
fn is_leading_code(passive: &Passive, sources: &Sources) -> bool {
    match passive.value {
        Some(Value::Number(_, word)) => sources.text(word).starts_with(char::is_alphabetic),
        _ => false,
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
    let Some(passive) = passive(&statement.kind) else { return Settled::Kept };
    let is_parameter = |word: Word| index.parameter(netlist, sources, sources.text(word), level);
    if let Some(Value::Number(_, word)) = passive.value
        && is_leading_code(passive, sources)
        && is_parameter(word)
    {
        return Settled::Parameter(word, passive.model);
    }
    let Some(word) = passive.model else { return Settled::Kept };
    let name = sources.text(word);
    if let Some(model) = index.model(netlist, sources, name, level) {
        return Settled::Model(with_model(*passive, model, statement, sources));
    }
    let value_behind = match passive.value {
        Some(Value::Number(_, value) | Value::Expression(value)) => word.end <= value.start,
        None => false,
    };
    if passive.value.is_none() {
        return if is_parameter(word) { Settled::Parameter(word, None) } else { Settled::Missing(word) };
    }
    let net = nets.binary_search(&name_hash(name)).is_ok() || is_potentiometer(sources.text(statement.name));
    if value_behind && net { Settled::Pin(word) } else { Settled::Kept }
}

/// Whether a name is that of a potentiometer in a board export: `RV1`, `R_POT2`.
fn is_potentiometer(name: &str) -> bool {
    let head = |count: usize| name.get(..count).unwrap_or("");
    same_name(head(2), "rv") || ["rpot", "r_po"].iter().any(|pot| same_name(head(4), pot))
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
        Settled::Parameter(word, model) => {
            (passive.model, passive.value) = (model, Some(Value::Expression(word)));
        }
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
