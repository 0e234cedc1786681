//! Coverage: how many op amps there are, and a finding for each that isn't analysed.

use crate::block::{AmpId, Role, Unplaceable};
use crate::circuit::{Circuit, ElementId, NetId};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::figure::explain;
use crate::report::{BoardReport, Coverage};
use crate::rule::Finding;
use crate::solve::{Board, Fault};
use std::collections::BTreeMap;

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
    /// Model name of the unknown device that is behind it.
    device: Option<String>,
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
        device: None,
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
    let mut devices: BTreeMap<String, Vec<(String, ElementId)>> = BTreeMap::new();
    for (model, case) in cases.iter().filter_map(|case| Some((case.device.as_ref()?, case))) {
        devices.entry(model.to_ascii_lowercase()).or_default().push((case.name.clone(), case.element));
    }
    for case in cases {
        report.findings.extend(match &case.device {
            // One cause, one finding: the first stage of a device speaks for all.
            Some(model) => {
                devices.remove(&model.to_ascii_lowercase()).map(|all| unknown_device(circuit, model, &all))
            }
            None => Some(finding(circuit, &case)),
        });
        match case.skipped {
            true => coverage.skipped.push((case.name, case.reason)),
            false => coverage.non_linear += 1,
        }
    }
    report.coverage = coverage;
}

fn finding(circuit: &Circuit, case: &Case) -> Finding {
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
        help: case.cure.clone(),
    };
    Finding { stage: Some(case.name.clone()), ..Finding::from(fault) }
}

/// Figures that decide most of what is judged.
const DECISIVE: &str = "open-loop-gain, bias-current, offset-voltage, common-mode-rejection, supply-rejection, \
    swing-below-positive, swing-above-negative, input-below-positive, input-above-negative, output-current";

/// A device that no profile knows, with the stages that it leaves without figures.
fn unknown_device(circuit: &Circuit, model: &str, stages: &[(String, ElementId)]) -> Finding {
    const SHOWN: usize = 4;
    let shown = &stages[..stages.len().min(SHOWN)];
    let names: Vec<&str> = shown.iter().map(|(name, _)| name.as_str()).collect();
    let more = stages.len() - names.len();
    let more = if 0 < more { format!(" and {more} more") } else { String::new() };
    let key = yaml_key(model);
    let fault = Diagnostic {
        kind: "unknown-device",
        severity: Severity::Warning,
        message: format!(
            "{model} is an unknown device: of {}{more} nothing but structure and ideal transfers can be told",
            names.join(", ")
        ),
        labels: shown
            .iter()
            .filter_map(|(_, element)| circuit.element(*element).span)
            .map(|span| Label { span, text: String::new() })
            .collect(),
        help: Some(format!(
            "budget: `devices: {{ {key}: {{ technology: bipolar }} }}` (or jfet, cmos) judges it by the bounds of that class; \
            `devices: {{ {key}: {{ profile: NAME }} }}` by a profile, one of your own under --devices with {DECISIVE}"
        )),
    };
    Finding { stage: names.first().map(|name| (*name).to_owned()), ..Finding::from(fault) }
}

/// A name as a key of a YAML mapping, in quotes where it needs them.
fn yaml_key(name: &str) -> String {
    let plain = name.starts_with(|first: char| first.is_ascii_alphabetic())
        && name.bytes().all(|byte| byte.is_ascii_alphanumeric() || matches!(byte, b'_' | b'-' | b'.'));
    if plain { name.to_owned() } else { format!("\"{}\"", name.replace('\\', "\\\\").replace('"', "\\\"")) }
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
    Case { element, name, rule, severity: Severity::Error, reason, cure: None, device: None, skipped: true }
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
    let device = match fault {
        Fault::UnknownDevice(at) => Some(board.circuit.op_amps[*at as usize].model.clone()),
        _ => None,
    };
    let reason = explain(board.circuit, board.layout, fault);
    let (element, name) = (part.element, part.name.clone());
    Case { element, name, rule, severity, reason, cure: None, device, skipped }
}

/// Whether an output reaches the inputs of other amplifiers.
fn feeds_network(board: &Board, amp: AmpId) -> bool {
    let driven = |role: Role| role == Role::Output(amp);
    board.layout.blocks.iter().flat_map(|block| &block.ports).any(|port| port.input && driven(port.role))
}
