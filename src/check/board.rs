//! One board along the road.

use crate::block::{Layout, lay_out, name};
use crate::budget::{self, Budget};
use crate::check::Options;
use crate::check::files::{self, Includer, Packs};
use crate::check::stages::{self, Judgement};
use crate::check::{cover, names};
use crate::circuit::{self, Circuit, NetId};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::figure::deviations;
use crate::netlist;
use crate::report::{BoardReport, Coverage, Verdict};
use crate::rule::{Finding, Waived};
use crate::solve::Board;
use crate::source::{FileId, Sources, matches, quote};
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
    let mut budget_file = None;
    let mut budget = Budget::default();
    if let Some(path) = budget_path(options, path) {
        let name = path.display().to_string();
        if let Some(file) = files::open(sources, &path, &name, &mut report.findings) {
            let (read, faults) = budget::read(sources, file);
            budget = read;
            budget_file = Some(file);
            report.findings.extend(faults.into_iter().map(Finding::from));
        }
        report.budget = Some(name);
    }
    budget.assumed_technology = options.assume_technology;
    report.name = budget.board.clone();
    let mut unknown_trials = Vec::new();
    if let Some(file) = files::open(sources, path, &shown, &mut report.findings) {
        let mut includer = Includer::new(path, &shown, file);
        let (netlist, faults) =
            netlist::read(sources, file, &mut |sources, name, from| includer.answer(sources, name, from));
        report.findings.extend(faults.into_iter().map(Finding::from));
        let (mut circuit, faults) = circuit::build(sources, &netlist, &budget, &packs.catalogue);
        report.findings.extend(faults.into_iter().map(Finding::from));
        let untouched = options.with.iter().filter(|(name, value)| !circuit.set_value(name, *value));
        unknown_trials.extend(untouched.map(|(name, _)| {
            format!("{shown}: no resistor, capacitor or inductor is named {}", quote(name))
        }));
        let layout = lay_out(&mut circuit);
        let detail = stages::Detail { sources: options.detail.then_some(&*sources), trials: options.trials };
        analyse(packs, &budget, (&circuit, &layout), detail, &mut report);
    }
    let mut unusable = unusable(sources, &report, budget_file);
    unusable.extend(unknown_trials);
    waive(&budget, &mut report.findings);
    report.findings.sort_by_key(|finding| std::cmp::Reverse(finding.severity));
    report.verdict = verdict(&report, options.fail_on.unwrap_or(Severity::Error));
    Checked { report, unusable }
}

/// Files that belong to the board and can't be read or used, each with its reason.
fn unusable(sources: &Sources, report: &BoardReport, budget: Option<FileId>) -> Vec<String> {
    const KINDS: [&str; 4] = ["unreadable-file", "not-a-netlist", "empty-netlist", "include-refused"];
    let mut said = Vec::new();
    let faults = report.findings.iter().filter(|finding| finding.stage.is_none());
    for finding in faults.filter(|finding| finding.severity == Severity::Error) {
        let Some(label) = finding.labels.first() else { continue };
        let path = &sources.file(label.span.file).path;
        let line = match KINDS.contains(&finding.rule.as_str()) {
            true => format!("{path}: {}", finding.message),
            false if Some(label.span.file) == budget => format!("{path}: it has faults"),
            false => continue,
        };
        if !said.contains(&line) {
            said.push(line);
        }
    }
    said
}

/// The budget of a board: the one named, else `BOARD.budget.yaml` beside it.
fn budget_path(options: &Options, path: &Path) -> Option<PathBuf> {
    options.budget.clone().or_else(|| Some(path.with_extension("budget.yaml")).filter(|path| path.is_file()))
}

fn analyse(
    packs: &Packs,
    budget: &Budget,
    (circuit, layout): (&Circuit, &Layout),
    detail: stages::Detail,
    report: &mut BoardReport,
) {
    let supplies = supplies(budget, circuit);
    let board = Board::new(circuit, layout, &packs.catalogue, supplies);
    let named = name(circuit, layout, &|net| board.level(net));
    let moved = deviations(&board);
    let judged = stages::judge_all(&board, budget, &packs.rules, &named, &moved, detail);
    report.findings.extend(names::misnamed(budget, circuit, &judged));
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
