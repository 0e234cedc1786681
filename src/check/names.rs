//! Names and limits in the budget that only a whole board can be asked about.

use crate::budget::{Budget, Gain, Name, StageBudget, StatedLimit};
use crate::check::cover;
use crate::check::stages::Judgement;
use crate::circuit::Circuit;
use crate::diagnostic::{Diagnostic, Severity};
use crate::figure::Kind;
use crate::quantity::Unit;
use crate::rule::Finding;
use crate::source::{matches, nearest, quote};

/// What the budget's stages and waivers name and the board lacks, and limits that fit no figure.
pub(super) fn misnamed(budget: &Budget, circuit: &Circuit, judged: &[Judgement]) -> Vec<Finding> {
    let mut faults = Vec::new();
    let patterns = budget.stages.iter().flat_map(|stage| &stage.matches);
    for pattern in patterns.chain(budget.waivers.iter().flat_map(|waiver| &waiver.matches)) {
        let names = || circuit.op_amps.iter().map(|op_amp| op_amp.name.as_str());
        let elements = || circuit.elements.iter().map(|element| element.name.as_str());
        if !names().chain(elements()).any(|name| matches(&pattern.text, name)) {
            faults.push(unknown("the netlist has no stage", pattern, nearest(&pattern.text, names())));
        }
    }
    let supplies = budget.stages.iter().filter_map(|stage| stage.supply.as_ref());
    for net in supplies.flat_map(|(positive, negative)| [positive, negative]) {
        let nets = || circuit.nets.iter().map(|net| net.name.as_str());
        if net.text != "0" && !nets().any(|name| name.eq_ignore_ascii_case(&net.text)) {
            faults.push(unknown("the netlist has no net", net, nearest(&net.text, nets())));
        }
    }
    for waiver in &budget.waivers {
        let rules = || Kind::ALL.iter().map(|kind| kind.doc().slug).chain(cover::RULES);
        if !rules().any(|rule| rule == waiver.rule.text) {
            let near = nearest(&waiver.rule.text, rules());
            let fault = unknown("no stage breaks a rule", &waiver.rule, near);
            faults.push(Diagnostic { severity: Severity::Warning, ..fault });
        }
    }
    for stage in &budget.stages {
        faults.extend(stage.limits.iter().filter_map(limit));
        faults.extend(gains(stage, judged));
    }
    faults.into_iter().map(Finding::from).collect()
}

fn unknown(what: &str, name: &Name, near: Option<&str>) -> Diagnostic {
    let message = format!("{what} named {}", quote(&name.text));
    let fault = Diagnostic::at("unknown-name", Severity::Error, name.span, message);
    match near {
        Some(near) => fault.help(format!("the nearest name is {}", quote(near))),
        None => fault,
    }
}

/// A limit on a figure that isn't there, or in another unit than the figure's.
fn limit(limit: &StatedLimit) -> Option<Diagnostic> {
    let slugs = || Kind::ALL.iter().map(|kind| kind.doc().slug);
    let Some(kind) = Kind::ALL.iter().find(|kind| kind.doc().slug == limit.figure.text) else {
        return Some(unknown("there is no figure", &limit.figure, nearest(&limit.figure.text, slugs())));
    };
    let unit = kind.doc().unit;
    let expected = if limit.of_span { Unit::Volt } else { limit.unit };
    let message = format!("a limit of {} is {}, found {}", limit.figure.text, unit.noun(), expected.noun());
    (unit != expected).then(|| Diagnostic::at("bad-value", Severity::Error, limit.span, message))
}

/// Intended gains from inputs that no stage meant has.
fn gains(stage: &StageBudget, judged: &[Judgement]) -> Vec<Diagnostic> {
    let Some(Gain::ByInput(gains)) = &stage.gain else { return Vec::new() };
    let meant = |judgement: &&Judgement| {
        let id = &judgement.report.id;
        !judgement.report.transfers.is_empty()
            && stage.matches.iter().any(|pattern| matches(&pattern.text, id))
    };
    let inputs: Vec<&str> = judged
        .iter()
        .filter(meant)
        .flat_map(|judgement| judgement.report.transfers.iter().map(|transfer| transfer.input.as_str()))
        .collect();
    let lacking = |name: &&Name| {
        !inputs.is_empty() && !inputs.iter().any(|input| input.eq_ignore_ascii_case(&name.text))
    };
    let names = gains.iter().map(|(name, _)| name);
    names
        .filter(lacking)
        .map(|name| unknown("the stage has no input", name, nearest(&name.text, inputs.iter().copied())))
        .collect()
}
