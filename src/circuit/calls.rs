//! What calls of definitions lead to: which are opened, how much they stand for, which never end.
//!
//! Everything is told from the graph of definitions, before anything is expanded: a few lines may stand
//! for more elements than any machine holds.

use crate::budget::Budget;
use crate::circuit::scope::Definitions;
use crate::device::Catalogue;
use crate::diagnostic::{Diagnostic, Severity};
use crate::netlist::{Kind, Netlist, Statement};
use crate::source::{Sources, Span, matches, quote};
use petgraph::algo::kosaraju_scc;
use petgraph::graph::{DiGraph, NodeIndex};

/// What one definition is when it is called.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Call {
    /// Whether it is opened: it calls an op amp, or holds linear elements alone. Any other body is one
    /// part that isn't modelled.
    pub opens: bool,
    /// Whether it calls itself, or something in it does.
    pub endless: bool,
    /// How many statements it stands for once everything in it is opened.
    pub weight: u64,
    linear: bool,
}

/// A call within a definition.
#[derive(Debug, Clone, Copy)]
struct Inner {
    index: Option<usize>,
    span: Span,
    op_amp: bool,
}

/// One answer for each definition of the netlist, and a fault for each circle of calls.
pub(super) fn calls(
    sources: &Sources,
    netlist: &Netlist,
    definitions: &Definitions,
    budget: &Budget,
    catalogue: &Catalogue,
) -> (Vec<Call>, Vec<Diagnostic>) {
    let inner = |level: usize, statement: &Statement| {
        let Kind::Call { model, .. } = &statement.kind else { return None };
        let (name, model) = (sources.text(statement.name), sources.text(*model));
        let declared = budget
            .devices
            .iter()
            .any(|choice| [name, model].iter().any(|own| matches(&choice.name.text, own)));
        let op_amp = declared || catalogue.find(model).is_some();
        let index = definitions.find(netlist, Some(level), model);
        Some(Inner { index, span: statement.span, op_amp })
    };
    let bodies = netlist.subcircuits.iter().enumerate();
    let called: Vec<Vec<Inner>> = bodies
        .map(|(at, definition)| definition.body.elements.iter().filter_map(|one| inner(at, one)).collect())
        .collect();
    let mut found = vec![Call::default(); called.len()];
    let mut faults = Vec::new();
    for members in components(&called) {
        let own = |inner: &&Inner| inner.index.is_some_and(|to| members.binary_search(&to).is_ok());
        let circle = members.iter().find_map(|at| Some((*at, called[*at].iter().find(own)?.span)));
        if let Some((at, span)) = circle {
            faults.push(circular(sources.text(netlist.subcircuits[at].name), 1 < members.len(), span));
        }
        for at in &members {
            let mut call = open(&netlist.subcircuits[*at].body.elements, &called[*at], &found);
            call.endless |= circle.is_some();
            found[*at] = call;
        }
    }
    (found, faults)
}

/// Definitions that call one another, each set in rising order, those that are called first.
fn components(called: &[Vec<Inner>]) -> Vec<Vec<usize>> {
    let mut graph: DiGraph<(), ()> = DiGraph::new();
    called.iter().for_each(|_| {
        graph.add_node(());
    });
    for (from, inner) in called.iter().enumerate() {
        for to in inner.iter().filter(|inner| !inner.op_amp).filter_map(|inner| inner.index) {
            graph.add_edge(NodeIndex::new(from), NodeIndex::new(to), ());
        }
    }
    let sorted = |component: Vec<NodeIndex>| {
        let mut members: Vec<usize> = component.into_iter().map(NodeIndex::index).collect();
        members.sort_unstable();
        members
    };
    kosaraju_scc(&graph).into_iter().map(sorted).collect()
}

fn open(elements: &[Statement], called: &[Inner], found: &[Call]) -> Call {
    let linear = |statement: &Statement| {
        matches!(
            statement.kind,
            Kind::Resistor(_)
                | Kind::Capacitor(_)
                | Kind::Inductor(_)
                | Kind::VoltageSource(_)
                | Kind::CurrentSource(_)
                | Kind::VoltageGain(_)
                | Kind::Call { .. }
        )
    };
    let mut call =
        Call { weight: elements.len() as u64, linear: elements.iter().all(linear), ..Call::default() };
    for inner in called {
        let body = inner.index.filter(|_| !inner.op_amp).map(|index| found[index]).unwrap_or_default();
        call.linear &= body.linear;
        call.opens |= inner.op_amp || (body.opens && !body.linear);
        call.endless |= body.endless;
        if body.opens {
            call.weight = call.weight.saturating_add(body.weight);
        }
    }
    call.opens |= call.linear;
    call
}

fn circular(name: &str, others: bool, span: Span) -> Diagnostic {
    let way = if others { " by way of others" } else { "" };
    let message =
        format!("the subcircuit {} calls itself{way}; calls of it are kept as unmodelled parts", quote(name));
    Diagnostic::at("recursive-subcircuit", Severity::Error, span, message)
}
