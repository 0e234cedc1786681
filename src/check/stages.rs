//! Stages reviewed and judged, and turned into what reports show.

use crate::block::{AmpId, Topology};
use crate::budget::{Budget, Gain, StageBudget};
use crate::device::Rank;
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::figure::{Bad, Figure, Kind, LegsFrom, Main, PinVoltages, Requirement, Review, Stage, Transfer};
use crate::quantity::{Unit, percent};
use crate::report::{FigureReport, LedgerLine, PinReport, ReachReport, StageReport, TransferReport};
use crate::rule::{Finding, Judged, Rule, Status, Subject, judge};
use crate::solve::{Board, PrimaryKind};
use crate::source::{Sources, matches};
use rayon::prelude::*;
use std::collections::BTreeSet;

/// A stage judged.
pub(super) struct Judgement {
    pub(super) report: StageReport,
    pub(super) findings: Vec<Finding>,
    op_amp: u32,
}

/// How much is told of each stage.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Detail<'s> {
    /// Texts to name origins by, where every value's origin and formula is asked for.
    pub(super) sources: Option<&'s Sources>,
    /// Random trials of each figure.
    pub(super) trials: u32,
}

/// Reviews and judges every stage, blocks in parallel, in netlist order.
pub(super) fn judge_all(
    board: &Board,
    budget: &Budget,
    rules: &[Rule],
    names: &[(Topology, Option<u32>)],
    deviations: &[(f64, Rank)],
    detail: Detail,
) -> Vec<Judgement> {
    let groups = groups(board, names);
    (0..board.layout.amps.len())
        .into_par_iter()
        .filter_map(|at| {
            let mut stage = Stage::of(board, deviations, AmpId(at as u32))?;
            stage.trials = detail.trials;
            let group = names[at].1.map(|group| groups[group as usize].clone());
            Some(one(&stage, budget, rules, (names[at].0, group), detail))
        })
        .collect()
}

/// Names of groups: the ids of their members.
fn groups(board: &Board, names: &[(Topology, Option<u32>)]) -> Vec<String> {
    let count = names.iter().filter_map(|(_, group)| *group).max().map_or(0, |most| most + 1);
    let mut members: Vec<Vec<&str>> = vec![Vec::new(); count as usize];
    for ((_, group), amp) in names.iter().zip(&board.layout.amps) {
        if let (Some(group), Some(op_amp)) = (group, amp.op_amp) {
            members[*group as usize].push(&board.circuit.op_amps[op_amp as usize].name);
        }
    }
    members.into_iter().map(|ids| ids.join("+")).collect()
}

fn one(
    stage: &Stage,
    budget: &Budget,
    rules: &[Rule],
    (topology, group): (Topology, Option<String>),
    detail: Detail,
) -> Judgement {
    let part = stage.part();
    let asked: Vec<&StageBudget> = budget
        .stages
        .iter()
        .filter(|asked| asked.matches.iter().any(|pattern| matches(&pattern.text, &part.name)))
        .collect();
    let mut requirement = requirement(&asked);
    requirement.legs = match topology {
        Topology::Difference => LegsFrom::Signals,
        Topology::Instrumentation => LegsFrom::Nowhere,
        _ => LegsFrom::Pair,
    };
    let review = stage.review(&requirement);
    let known = stage.profile().filter(|profile| !profile.generic);
    let device = stage.profile().map_or(part.model.as_str(), |profile| profile.name.as_str());
    let stated: Vec<(String, f64, bool)> = asked
        .iter()
        .flat_map(|asked| &asked.limits)
        .map(|limit| (limit.figure.text.clone(), limit.value, limit.of_span))
        .collect();
    let subject = Subject {
        circuit: stage.board.circuit,
        id: &part.name,
        op_amp: stage.op_amp,
        topology: topology.word(),
        device,
        technology: part.technology,
        grouped: group.is_some(),
        span: review.span,
        rated_load: stage.rated_load(),
        zero_unused: asked.iter().any(|asked| asked.zero_unused),
        stated: &stated,
    };
    let mut findings = Vec::new();
    let mut figures = Vec::with_capacity(review.figures.len());
    for figure in &review.figures {
        let mut judged = judge(rules, &subject, figure);
        let speaks = |rule: &str| findings.iter().any(|finding: &Finding| finding.rule == rule);
        // A gain error says already what a low loop gain would.
        if figure.kind.doc().slug != "loop-gain" || !speaks("gain-error") {
            findings.extend(judged.finding.take());
        }
        figures.push(figure_report(stage, &review, figure, judged, detail.sources));
    }
    let report = StageReport {
        id: part.name.clone(),
        device: known.map_or(part.model.as_str(), |profile| profile.name.as_str()).to_owned(),
        topology: topology.word().to_owned(),
        group,
        output: stage.board.circuit.net(part.output).name.clone(),
        transfers: transfers(&review.transfers, review.main),
        worked: detail.sources.and_then(|_| stage.worked_transfer(&review, topology)),
        local: stage.local().map(|local| transfers(&local, None)),
        pins: review.pins.iter().map(pin).collect(),
        reach: Some(reach(&review)),
        figures,
    };
    Judgement { report, findings, op_amp: stage.op_amp }
}

fn requirement(asked: &[&StageBudget]) -> Requirement {
    let mut requirement = Requirement::default();
    for gain in asked.iter().filter_map(|asked| asked.gain.as_ref()) {
        match gain {
            Gain::Main(gain) => requirement.gain = Some(*gain),
            Gain::ByInput(gains) => {
                requirement.gains = gains.iter().map(|(name, gain)| (name.text.clone(), *gain)).collect();
            }
        }
    }
    requirement
}

/// Transfers as reports show them, the main one first.
fn transfers(found: &[Transfer], main: Option<usize>) -> Vec<TransferReport> {
    let order = main.into_iter().chain((0..found.len()).filter(|at| Some(*at) != main));
    let report = |transfer: &Transfer| TransferReport {
        input: transfer.input.name.clone(),
        unit: if matches!(transfer.input.from, Main::Current(_)) { "ohm" } else { "V/V" },
        frequency: 0.0,
        adjusts: transfer.adjusts,
        ideal: transfer.ideal,
        actual: transfer.actual,
        error: transfer.actual.filter(|_| transfer.ideal != 0.0).map(|actual| actual / transfer.ideal - 1.0),
    };
    order.map(|at| report(&found[at])).collect()
}

fn reach(review: &Review) -> ReachReport {
    let main = review.main.map(|at| &review.transfers[at].input);
    let current = main.is_some_and(|input| matches!(input.from, Main::Current(_)));
    ReachReport {
        main: main.map(|input| input.name.clone()),
        unit: if current { Unit::Ampere } else { Unit::Volt },
        input: review.reach.input.clone(),
        load: review.reach.load.clone(),
        data: review.reach.rank,
    }
}

fn pin(pins: &PinVoltages) -> PinReport {
    PinReport {
        at: if pins.high { "high" } else { "low" },
        plus: pins.plus,
        minus: pins.minus,
        out: pins.out,
        difference: pins.difference,
        twin_out: pins.twin_out,
    }
}

fn figure_report(
    stage: &Stage,
    review: &Review,
    figure: &Figure,
    judged: Judged,
    sources: Option<&Sources>,
) -> FigureReport {
    let doc = figure.kind.doc();
    let shares = figure.shares();
    let direction = match doc.bad {
        Bad::Either => figure.worst.unwrap_or(1.0),
        Bad::High => 1.0,
        Bad::Low if figure.kind == Kind::Rejection => 1.0,
        Bad::Low => -1.0,
    };
    let lines = figure.ledger.iter().zip(shares).map(|(line, share)| LedgerLine {
        item: line.item.label(stage.board.circuit),
        effect: line.effect,
        share,
        value: line.value,
        origin: sources.and_then(|sources| stage.origin(line, sources)),
        against: share.is_some() && line.effect * direction < 0.0,
    });
    FigureReport {
        slug: doc.slug,
        unit: doc.unit,
        bad: doc.bad,
        nominal: figure.nominal,
        worst: figure.worst,
        rss: figure.rss,
        sign: figure.sign,
        limit: judged.limit,
        stated: judged.stated,
        status: judged.status,
        reason: judged.reason,
        data: judged.data,
        ledger_unit: if figure.kind == Kind::Rejection { Unit::One } else { doc.unit },
        worked: sources.and_then(|_| stage.worked(review, figure)),
        trials: figure.trials,
        ledger: lines.collect(),
    }
}

/// One note for each reason that leaves figures unknown, with the stages that it holds for. Where there is
/// nothing to judge, or the stage is a finding already, nothing is said.
pub(super) fn unjudged(board: &Board, judged: &[Judgement]) -> Vec<Finding> {
    let mut reasons: Vec<(String, Vec<&str>, Vec<u32>)> = Vec::new();
    for stage in judged {
        let amp = board.layout.amps.iter().position(|amp| amp.op_amp == Some(stage.op_amp));
        let faulty = amp.is_some_and(|at| !board.solved(AmpId(at as u32)));
        for figure in stage.report.figures.iter().filter(|figure| figure.status == Status::Unknown) {
            let Some(reason) = &figure.reason else { continue };
            if faulty || reason == "no signal port" {
                continue;
            }
            let place = reasons.iter().position(|(known, ..)| known == reason).unwrap_or_else(|| {
                reasons.push((reason.clone(), Vec::new(), Vec::new()));
                reasons.len() - 1
            });
            let (_, figures, stages) = &mut reasons[place];
            if !figures.contains(&figure.slug) {
                figures.push(figure.slug);
            }
            if !stages.contains(&stage.op_amp) {
                stages.push(stage.op_amp);
            }
        }
    }
    reasons.into_iter().map(|(reason, figures, stages)| note(board, &reason, &figures, &stages)).collect()
}

fn note(board: &Board, reason: &str, figures: &[&str], stages: &[u32]) -> Finding {
    const NAMED: usize = 6;
    let names: Vec<&str> =
        stages.iter().take(NAMED).map(|at| board.circuit.op_amps[*at as usize].name.as_str()).collect();
    let more =
        if NAMED < stages.len() { format!(" and {} more", stages.len() - NAMED) } else { String::new() };
    let message = format!("{} of {}{more} can't be judged: {reason}", figures.join(", "), names.join(", "));
    let spans = stages
        .iter()
        .take(NAMED)
        .filter_map(|at| board.circuit.element(board.circuit.op_amps[*at as usize].element).span);
    let fault = Diagnostic {
        kind: "unjudged",
        severity: Severity::Note,
        message,
        labels: spans.map(|span| Label { span, text: String::new() }).collect(),
        help: declaration(reason),
    };
    Finding::from(fault)
}

/// The line of budget that would tell what is missing.
fn declaration(reason: &str) -> Option<String> {
    if let Some(name) =
        reason.strip_prefix("the range of ").and_then(|rest| rest.strip_suffix(" is not declared"))
    {
        return Some(format!("budget: signals: {{ {name}: {{ range: 0 V .. 1 V }} }} with the true range"));
    }
    if reason.starts_with("the supplies of ") {
        return Some("budget: rails: { NET: 12 V +/- 5 % } for the nets on its supply pins".to_owned());
    }
    reason
        .starts_with("the profile of ")
        .then(|| "give the figure in a profile of your own, with --devices".to_owned())
}

/// Devices of which only the class is known, one sentence each.
fn classes(board: &Board) -> Vec<String> {
    let mut said: Vec<String> = Vec::new();
    let mut models: BTreeSet<String> = BTreeSet::new();
    for op_amp in &board.circuit.op_amps {
        let Some(profile) = op_amp.profile.map(|at| &board.catalogue.profiles[at]) else { continue };
        if profile.generic && models.insert(op_amp.model.to_ascii_lowercase()) {
            let technology = profile.technology.word();
            said.push(format!(
                "{} is a {technology} op amp within the bounds of {}",
                op_amp.model, profile.name
            ));
        }
    }
    said
}

/// What was assumed because neither netlist nor budget says it, one sentence each.
pub(super) fn assumed(board: &Board, budget: &Budget) -> Vec<String> {
    let assumed = &board.catalogue.assumed;
    let mut said = classes(board);
    let resistors = board.models.iter().flat_map(|model| &model.parameters).any(|parameter| {
        matches!(parameter.what, crate::solve::What::Resistors(_)) && parameter.rank == Rank::Assumed
    });
    if resistors {
        said.push(format!("resistors {}", percent(assumed.resistor)));
    }
    let rails = |test: fn(&crate::solve::Primary) -> bool| {
        board.primaries.iter().any(|primary| primary.kind == PrimaryKind::Rail && test(primary))
    };
    if rails(|rail| rail.deviation_rank == Rank::Assumed && 0.0 < rail.deviation) {
        said.push(format!("rails +/- {}", percent(assumed.rail)));
    }
    if rails(|rail| rail.rank == Rank::Assumed) {
        said.push("rail voltages read off their names".to_owned());
    }
    if budget.temperature.is_none() {
        said.push("25 degC".to_owned());
    }
    if budget.loads.is_empty() {
        said.push("no load beyond the netlist's".to_owned());
    }
    for net in &board.layout.inferred {
        said.push(format!("{} is a signal", board.circuit.net(*net).name));
    }
    said
}
