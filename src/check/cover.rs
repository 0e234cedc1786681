//! Coverage: how many op amps there are, and a finding for each that isn't analysed.

use crate::block::{AmpId, Role, Unplaceable};
use crate::circuit::{ElementId, NetId};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::figure::explain;
use crate::report::{BoardReport, Coverage};
use crate::rule::Finding;
use crate::solve::{Board, Fault};

/// The rules under which an op amp without figures is a finding.
pub(super) const RULES: [&str; 9] = [
    "pin-map",
    "shorted-output",
    "joined-outputs",
    "bias-path",
    "feedback-polarity",
    "unknown-device",
    "dc-loop",
    "open-loop",
    "not-analysed",
];

/// An op amp without figures: what to say of it.
struct Case {
    element: ElementId,
    name: String,
    rule: &'static str,
    severity: Severity,
    reason: String,
    cure: Option<String>,
    /// Whether it counts as skipped; else it is non-linear by intent.
    skipped: bool,
}

/// Counts op amps, and says of each that isn't analysed why.
pub(super) fn count(board: &Board, report: &mut BoardReport) {
    let circuit = board.circuit;
    let total = circuit.op_amps.len() + circuit.unplaced.len();
    let mut coverage = Coverage { op_amps: total, ..Coverage::default() };
    let mut cases: Vec<Case> = Vec::new();
    let unplaced = circuit.unplaced.iter().map(|unplaced| Case {
        element: unplaced.element,
        name: circuit.element(unplaced.element).name.clone(),
        rule: "pin-map",
        severity: Severity::Error,
        reason: unplaced.reason.clone(),
        cure: Some(unplaced.cure.clone()),
        skipped: true,
    });
    cases.extend(unplaced);
    let blocked = board.layout.skipped.iter();
    cases.extend(blocked.map(|(at, why)| misplaced(board, *at, *why)));
    for (at, amp) in board.layout.amps.iter().enumerate() {
        let Some(op_amp) = amp.op_amp else { continue };
        match &board.models[board.place[at].0].fault {
            None => coverage.analysed += 1,
            Some(fault) => cases.push(unsolved(board, AmpId(at as u32), op_amp, fault)),
        }
    }
    cases.sort_by_key(|case| case.element);
    for case in cases {
        let span = circuit.element(case.element).span;
        let message = match case.skipped {
            true => format!("{} is not analysed: {}", case.name, case.reason),
            false => format!("{} has no linear figures: {}", case.name, case.reason),
        };
        let fault = Diagnostic {
            kind: case.rule,
            severity: case.severity,
            message,
            labels: span.map(|span| Label { span, text: String::new() }).into_iter().collect(),
            help: case.cure,
        };
        report.findings.push(Finding { stage: Some(case.name.clone()), ..Finding::from(fault) });
        match case.skipped {
            true => coverage.skipped.push((case.name, case.reason)),
            false => coverage.non_linear += 1,
        }
    }
    report.coverage = coverage;
}

/// An op amp whose output is no place for one.
fn misplaced(board: &Board, op_amp: u32, why: Unplaceable) -> Case {
    let part = &board.circuit.op_amps[op_amp as usize];
    let net = |net: NetId| &board.circuit.net(net).name;
    let (rule, reason) = match why {
        Unplaceable::Grounded => ("shorted-output", "its output is tied to ground".to_owned()),
        Unplaceable::Tied(at) => {
            ("shorted-output", format!("its output is tied to the source or rail on {}", net(at)))
        }
        Unplaceable::Joined(at, outputs) => {
            ("joined-outputs", format!("{outputs} outputs are joined on {}", net(at)))
        }
    };
    let (element, name) = (part.element, part.name.clone());
    Case { element, name, rule, severity: Severity::Error, reason, cure: None, skipped: true }
}

/// An op amp whose block has no figures.
fn unsolved(board: &Board, amp: AmpId, op_amp: u32, fault: &Fault) -> Case {
    let part = &board.circuit.op_amps[op_amp as usize];
    let (rule, severity, skipped) = match fault {
        Fault::NonLinear(_) => ("not-analysed", Severity::Note, false),
        Fault::OpenLoop if feeds_network(board, amp) => ("open-loop", Severity::Warning, false),
        Fault::OpenLoop => ("open-loop", Severity::Note, false),
        Fault::NoPath(_) => ("bias-path", Severity::Error, true),
        Fault::Regenerative => ("feedback-polarity", Severity::Warning, true),
        Fault::UnknownDevice(_) => ("unknown-device", Severity::Warning, true),
        Fault::NoTwin(Some(net)) if matches!(board.layout.role(*net), Role::Output(_)) => {
            ("dc-loop", Severity::Warning, true)
        }
        _ => ("not-analysed", Severity::Warning, true),
    };
    let cure = match fault {
        Fault::UnknownDevice(at) => {
            let model = &board.circuit.op_amps[*at as usize].model;
            Some(format!(
                "budget: devices: {{ {model}: {{ profile: ... }} }}, or give a profile with --devices"
            ))
        }
        _ => None,
    };
    let reason = explain(board.circuit, board.layout, fault);
    Case { element: part.element, name: part.name.clone(), rule, severity, reason, cure, skipped }
}

/// Whether an output reaches the inputs of other amplifiers.
fn feeds_network(board: &Board, amp: AmpId) -> bool {
    let driven = |role: Role| role == Role::Output(amp);
    board.layout.blocks.iter().flat_map(|block| &block.ports).any(|port| port.input && driven(port.role))
}
