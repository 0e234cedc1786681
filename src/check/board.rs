//! One board along the road.

use crate::block::{Layout, lay_out, name};
use crate::budget::{self, Budget};
use crate::check::Options;
use crate::check::cover;
use crate::check::files::{self, Includer, Packs};
use crate::check::stages::{self, Judgement};
use crate::circuit::{self, Circuit, NetId};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::figure::deviations;
use crate::netlist;
use crate::report::{BoardReport, Coverage, Verdict};
use crate::rule::{Finding, Waived};
use crate::solve::Board;
use crate::source::{Sources, matches, nearest};
use std::path::{Path, PathBuf};

/// A board's report, and the files that belong to it and can't be used.
pub(super) struct Checked {
    pub(super) report: BoardReport,
    pub(super) unusable: Vec<String>,
}

/// Checks one board.
pub(super) fn check(sources: &mut Sources, packs: &Packs, options: &Options, path: &Path) -> Checked {
    let shown = path.display().to_string();
    let mut report = BoardReport {
        netlist: shown.clone(),
        budget: None,
        name: None,
        verdict: Verdict::Incomplete,
        coverage: Coverage::default(),
        assumed: Vec::new(),
        stages: Vec::new(),
        findings: Vec::new(),
    };
    let mut unusable = Vec::new();
    let (mut budget, faults) = match budget_path(options, path) {
        None => (Budget::default(), Vec::new()),
        Some(budget_path) => {
            let name = budget_path.display().to_string();
            report.budget = Some(name.clone());
            match files::load(sources, &budget_path, &name) {
                Ok(file) => budget::read(sources, file),
                Err(reason) => {
                    unusable.push(format!("{name}: {reason}"));
                    (Budget::default(), Vec::new())
                }
            }
        }
    };
    if faults.iter().any(|fault| fault.severity == Severity::Error) {
        unusable.push(format!("{}: it has faults", report.budget.clone().unwrap_or_default()));
    }
    budget.assumed_technology = options.assume_technology;
    report.name = budget.board.clone();
    report.findings.extend(faults.into_iter().map(Finding::from));
    match files::load(sources, path, &shown) {
        Ok(file) => {
            let mut includer = Includer::new(path, &shown, file);
            let (netlist, faults) =
                netlist::read(sources, file, &mut |sources, name, from| includer.answer(sources, name, from));
            report.findings.extend(faults.into_iter().map(Finding::from));
            let (mut circuit, faults) = circuit::build(sources, &netlist, &budget, &packs.catalogue);
            report.findings.extend(faults.into_iter().map(Finding::from));
            let layout = lay_out(&mut circuit);
            analyse(packs, &budget, &circuit, &layout, &mut report);
        }
        Err(reason) => {
            unusable.push(format!("{shown}: {reason}"));
            let message = format!("{shown} can't be read: {reason}");
            report.findings.push(plain("unreadable-file", Severity::Error, message));
        }
    }
    waive(&budget, &mut report.findings);
    report.findings.sort_by_key(|finding| std::cmp::Reverse(finding.severity));
    report.verdict = verdict(&report, options.fail_on.unwrap_or(Severity::Error));
    Checked { report, unusable }
}

/// The budget of a board: the one named, else `BOARD.budget.yaml` beside it.
fn budget_path(options: &Options, path: &Path) -> Option<PathBuf> {
    options.budget.clone().or_else(|| Some(path.with_extension("budget.yaml")).filter(|path| path.is_file()))
}

fn analyse(packs: &Packs, budget: &Budget, circuit: &Circuit, layout: &Layout, report: &mut BoardReport) {
    report.findings.extend(misnamed(budget, circuit));
    let supplies = supplies(budget, circuit);
    let board = Board::new(circuit, layout, &packs.catalogue, supplies);
    let names = name(circuit, layout, &|net| board.level(net));
    let moved = deviations(&board);
    let judged = stages::judge_all(&board, budget, &packs.rules, &names, &moved);
    cover::count(&board, report);
    report.assumed = stages::assumed(&board, budget);
    report.findings.extend(stages::unjudged(&board, &judged));
    for Judgement { report: stage, findings, .. } in judged {
        report.stages.push(stage);
        report.findings.extend(findings);
    }
    report.findings.extend(undriven(circuit, layout));
}

/// Supply nets of every op amp: its own pins, else what the budget says.
fn supplies(budget: &Budget, circuit: &Circuit) -> Vec<(Option<NetId>, Option<NetId>)> {
    let find = |name: &str| circuit.net_ids().find(|net| circuit.net(*net).name.eq_ignore_ascii_case(name));
    let declared: Vec<_> = budget
        .stages
        .iter()
        .filter_map(|stage| Some((stage, stage.supply.as_ref()?)))
        .map(|(stage, (positive, negative))| (stage, find(&positive.text), find(&negative.text)))
        .collect();
    let of = |op_amp: &circuit::OpAmp| {
        let said = declared
            .iter()
            .rfind(|(stage, ..)| stage.matches.iter().any(|pattern| matches(&pattern.text, &op_amp.name)));
        match said {
            Some((_, positive, negative)) => (*positive, *negative),
            None => (op_amp.positive, op_amp.negative),
        }
    };
    circuit.op_amps.iter().map(of).collect()
}

/// Names in the budget's stages, waivers and supplies that the netlist lacks.
fn misnamed(budget: &Budget, circuit: &Circuit) -> Vec<Finding> {
    let mut found = Vec::new();
    let patterns = budget.stages.iter().flat_map(|stage| &stage.matches);
    for pattern in patterns.chain(budget.waivers.iter().flat_map(|waiver| &waiver.matches)) {
        let names = || circuit.op_amps.iter().map(|op_amp| op_amp.name.as_str());
        let elements = || circuit.elements.iter().map(|element| element.name.as_str());
        if !names().chain(elements()).any(|name| matches(&pattern.text, name)) {
            found.push((pattern, "stage", nearest(&pattern.text, names()).map(str::to_owned)));
        }
    }
    let supplies = budget.stages.iter().filter_map(|stage| stage.supply.as_ref());
    for net in supplies.flat_map(|(positive, negative)| [positive, negative]) {
        let nets = || circuit.nets.iter().map(|net| net.name.as_str());
        if net.text != "0" && !nets().any(|name| name.eq_ignore_ascii_case(&net.text)) {
            found.push((net, "net", nearest(&net.text, nets()).map(str::to_owned)));
        }
    }
    let finding = |(name, what, near): (&budget::Name, &str, Option<String>)| {
        let message = format!("the netlist has no {what} named `{}`", name.text);
        let fault = Diagnostic::at("unknown-name", Severity::Error, name.span, message);
        Finding::from(match near {
            Some(near) => fault.help(format!("the nearest name is `{near}`")),
            None => fault,
        })
    };
    found.into_iter().map(finding).collect()
}

/// Networks that nothing drives although several nets could be the signal.
fn undriven(circuit: &Circuit, layout: &Layout) -> Vec<Finding> {
    let finding = |nets: &Vec<NetId>| {
        let names: Vec<&str> = nets.iter().map(|net| circuit.net(*net).name.as_str()).collect();
        let labels = nets.iter().filter_map(|net| circuit.net(*net).span);
        Finding {
            cure: Some(format!("budget: signals: {{ {}: {{ range: ... }} }}", names[0])),
            labels: labels.map(|span| Label { span, text: String::new() }).collect(),
            ..plain(
                "unjudged",
                Severity::Note,
                format!("nothing drives the network of {}: which net is the signal?", names.join(", ")),
            )
        }
    };
    layout.undriven.iter().map(finding).collect()
}

fn plain(rule: &str, severity: Severity, message: String) -> Finding {
    let mut finding =
        Finding::from(Diagnostic { kind: "", severity, message, labels: Vec::new(), help: None });
    finding.rule = rule.to_owned();
    finding
}

/// Marks the findings that someone answers for; the last waiver that matches counts.
fn waive(budget: &Budget, findings: &mut [Finding]) {
    for finding in findings {
        let Some(stage) = &finding.stage else { continue };
        let waiver = budget.waivers.iter().rfind(|waiver| {
            waiver.rule.text == finding.rule
                && waiver.matches.iter().any(|pattern| matches(&pattern.text, stage))
        });
        finding.waived = waiver.map(|waiver| Waived {
            reason: waiver.reason.clone(),
            by: waiver.by.clone(),
            until: waiver.until.clone(),
        });
    }
}

fn verdict(report: &BoardReport, fail_on: Severity) -> Verdict {
    let fails = |finding: &Finding| finding.waived.is_none() && fail_on <= finding.severity;
    if report.findings.iter().any(fails) {
        return Verdict::Fail;
    }
    let unknown = report.stages.iter().flat_map(|stage| &stage.figures);
    let undecided =
        |figure: &crate::report::FigureReport| figure.stated && figure.status == crate::rule::Status::Unknown;
    if !report.coverage.skipped.is_empty() || unknown.into_iter().any(undecided) {
        return Verdict::Incomplete;
    }
    Verdict::WithinBudget
}
