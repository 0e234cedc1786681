//! Judging: a figure against its limit, with the severity that the data allows.

use crate::circuit::Circuit;
use crate::device::Rank;
use crate::diagnostic::{Label, Severity};
use crate::figure::{Bad, Figure, Item, Kind};
use crate::quantity::{Unit, percent, show};
use crate::rule::{Finding, Limit, Rule, Status};
use crate::source::matches;

/// What a stage is, as far as rules ask.
#[derive(Debug, Clone, Copy)]
pub struct Subject<'a> {
    /// The board.
    pub circuit: &'a Circuit,
    /// Its id.
    pub id: &'a str,
    /// Index of its op amp.
    pub op_amp: u32,
    /// What it is called.
    pub topology: &'a str,
    /// Its profile's name.
    pub device: &'a str,
    /// Its device's technology.
    pub technology: Option<crate::device::Technology>,
    /// Whether it belongs to an instrumentation amplifier.
    pub grouped: bool,
    /// Output span, with whether it is declared.
    pub span: Option<(f64, bool)>,
    /// Rated load of its device, ohm, with its rank.
    pub rated_load: Option<(f64, Rank)>,
    /// Whether the budget says that the last millivolts at the rail don't matter.
    pub zero_unused: bool,
    /// Limits that the budget states: slug, value, whether it is a share of the span.
    pub stated: &'a [(String, f64, bool)],
}

/// A figure judged.
#[derive(Debug, Clone, PartialEq)]
pub struct Judged {
    /// The limit, in the figure's unit.
    pub limit: Option<f64>,
    /// Whether the budget states it.
    pub stated: bool,
    /// The verdict.
    pub status: Status,
    /// Why it can't be judged.
    pub reason: Option<String>,
    /// How far its data can be trusted.
    pub data: Rank,
    /// What breaks, if anything does.
    pub finding: Option<Finding>,
}

/// The rule of a figure for a stage: the last one that applies.
pub fn rule<'r>(rules: &'r [Rule], subject: &Subject, slug: &str) -> Option<&'r Rule> {
    let fits = |rule: &&Rule| {
        let scope = &rule.scope;
        let any = |patterns: &[String], name: &str| {
            patterns.is_empty() || patterns.iter().any(|pattern| matches(pattern, name))
        };
        // The stage behind an instrumentation amplifier's pair is judged as the whole amplifier.
        let whole = subject.grouped && slug == "rejection";
        let topology = if whole { "instrumentation" } else { subject.topology };
        rule.name == slug
            && any(&scope.topology, topology)
            && any(&scope.device, subject.device)
            && any(&scope.designator, subject.id)
            && (scope.technology.is_empty()
                || subject.technology.is_some_and(|technology| scope.technology.contains(&technology)))
    };
    rules.iter().rfind(fits)
}

/// Judges one figure of a stage.
pub fn judge(rules: &[Rule], subject: &Subject, figure: &Figure) -> Judged {
    let doc = figure.kind.doc();
    let rule = rule(rules, subject, doc.slug);
    let stated = subject.stated.iter().rfind(|(slug, ..)| slug == doc.slug);
    let resolve = |limit: Limit| match limit {
        Limit::Value(value) => Ok((value, Rank::Guaranteed)),
        Limit::ShareOfSpan(share) => match subject.span {
            Some((span, true)) => Ok((share * span, Rank::Guaranteed)),
            Some((span, false)) => Ok((share * span, Rank::Assumed)),
            None => Err("the output span is not known: declare the range of its signals".to_owned()),
        },
        Limit::RatedLoad => subject.rated_load.ok_or_else(|| "the profile gives no rated load".to_owned()),
        Limit::TopOfBand => Err("its limit can't be told".to_owned()),
    };
    let asked = match stated {
        Some((_, value, true)) => Some(Limit::ShareOfSpan(*value)),
        Some((_, value, false)) => Some(Limit::Value(*value)),
        None => rule.and_then(|rule| rule.limit),
    };
    let mut judged = Judged {
        limit: None,
        stated: stated.is_some(),
        status: Status::Unknown,
        reason: figure.reason.clone(),
        data: figure.rests_on,
        finding: None,
    };
    let unrated = figure.needed.map(|needed| unrated(subject, needed));
    if figure.absent && figure.worst.is_none() {
        if !judged.stated {
            judged.status = Status::Within;
        }
        judged.finding = unrated;
        return judged;
    }
    let limit = match asked.map(resolve) {
        Some(Ok((limit, rank))) => {
            judged.data = judged.data.max(rank);
            Some(limit)
        }
        Some(Err(reason)) => {
            judged.reason.get_or_insert(reason);
            return judged;
        }
        None => None,
    };
    judged.limit = limit;
    let Some(worst) = figure.worst else { return judged };
    let guard =
        rule.and_then(|rule| rule.guard).filter(|_| stated.is_none()).and_then(|guard| resolve(guard).ok());
    let guard = guard.map(|(guard, _)| guard);
    judged.data = judged.data.max(data_rank(figure, limit, guard));
    let Some(limit) = limit else {
        judged.status = Status::Within;
        judged.reason.get_or_insert_with(|| "no limit is set".to_owned());
        return judged;
    };
    let ceiling = rule.map_or(Severity::Error, |rule| rule.severity);
    let broken = verdict(figure, worst, limit, guard);
    let (severity, by) = match broken {
        Broken::None => {
            judged.status = Status::Within;
            judged.finding = unrated;
            return judged;
        }
        Broken::Nominal => (ceiling, By::Nominal),
        Broken::Worst if judged.stated && judged.data == Rank::Guaranteed => (ceiling, By::Worst),
        Broken::Worst => (ceiling.lower(), By::Worst),
        Broken::Guard => (Severity::Warning.min(ceiling), By::Guard),
    };
    let severity = match (judged.data, figure.bound) {
        (_, true) => Severity::Note,
        (Rank::Assumed, _) => severity.min(Severity::Warning),
        _ => severity,
    };
    judged.status = match severity {
        Severity::Error => Status::Broken,
        Severity::Warning => Status::Marginal,
        Severity::Note if figure.bound => Status::Unknown,
        Severity::Note => Status::Within,
    };
    let zero = figure.zero && figure.kind == Kind::OutputHeadroom;
    if zero && !judged.stated && by != By::Guard && lost_little(subject, worst) {
        judged.status = if subject.zero_unused { Status::Within } else { Status::Marginal };
        judged.finding = (!subject.zero_unused).then(|| lost_zero(subject, figure, worst));
        return judged;
    }
    let bar = if by == By::Guard { guard.unwrap_or(limit) } else { limit };
    judged.finding = Some(finding(subject, figure, (worst, bar, by), severity, judged.data));
    judged
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Broken {
    None,
    Nominal,
    Worst,
    Guard,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum By {
    Nominal,
    Worst,
    Guard,
}

/// Whether a value keeps a limit; a value that isn't a number never does.
fn keeps(bad: Bad, value: f64, limit: f64) -> bool {
    match bad {
        Bad::Either => value.abs() <= limit.abs(),
        Bad::High => value <= limit,
        Bad::Low => limit <= value,
    }
}

fn verdict(figure: &Figure, worst: f64, limit: f64, guard: Option<f64>) -> Broken {
    let bad = figure.kind.doc().bad;
    let nominal_keeps = |limit: f64| figure.nominal.is_none_or(|nominal| keeps(bad, nominal, limit));
    if nominal_keeps(limit) && keeps(bad, worst, limit) {
        if guard.is_none_or(nominal_keeps) { Broken::None } else { Broken::Guard }
    } else if nominal_keeps(limit) {
        Broken::Worst
    } else {
        Broken::Nominal
    }
}

/// The worst rank of what has an effect above a tenth of the limit; where the limit is nought, of the guard.
fn data_rank(figure: &Figure, limit: Option<f64>, guard: Option<f64>) -> Rank {
    if figure.kind == Kind::Rejection {
        // The ledger of the rejection is that of the ratio behind its decibels.
        let ratio = limit.map_or(0.0, |limit| 10f64.powf(-limit / 20.0));
        let lines = figure
            .ledger
            .iter()
            .filter(|line| line.item != Item::Nominal && ratio / 10.0 < line.effect.abs());
        return lines.map(|line| line.rank).max().unwrap_or(Rank::Guaranteed);
    }
    let scale = limit.filter(|limit| *limit != 0.0).or(guard).map_or(0.0, f64::abs);
    let counts = |effect: f64| scale / 10.0 < effect.abs();
    let lines = figure.ledger.iter().filter(|line| line.item != Item::Nominal && counts(line.effect));
    lines.map(|line| line.rank).max().unwrap_or(Rank::Guaranteed)
}

/// A value as sentences show it: relative errors in percent, other ratios bare.
pub fn shown(kind: Kind, value: f64) -> String {
    let relative = matches!(
        kind,
        Kind::GainError
            | Kind::GainSpread
            | Kind::FeedbackLoading
            | Kind::OutputCurrent
            | Kind::SourceLoading
            | Kind::ResistorPower
    );
    match kind.doc().unit {
        Unit::One if relative => percent(value),
        unit => show(value, unit),
    }
}

/// Whether only the last of a single supply's zero is lost: less than 2 % of the span.
fn lost_little(subject: &Subject, worst: f64) -> bool {
    const LITTLE: f64 = 0.02;
    subject.span.is_some_and(|(span, _)| -worst < LITTLE * span)
}

fn lost_zero(subject: &Subject, figure: &Figure, worst: f64) -> Finding {
    let lost = show(-worst, Unit::Volt);
    Finding {
        rule: "lost-zero".to_owned(),
        severity: Severity::Warning,
        stage: Some(subject.id.to_owned()),
        value: Some(worst),
        limit: Some(0.0),
        unit: Some(Unit::Volt),
        message: format!("{} can't reach the last {lost} above the ground of its single supply", subject.id),
        cure: Some("lift the zero by a small bias, give a negative rail, or say `zero: unused` in the budget if it doesn't matter".to_owned()),
        waived: None,
        labels: labels(subject, figure),
    }
}

/// A resistor without rating that dissipates enough to need a word.
fn unrated(subject: &Subject, (element, power): (crate::circuit::ElementId, f64)) -> Finding {
    let resistor = subject.circuit.element(element);
    let watts = show(power, Unit::Watt);
    Finding {
        rule: "resistor-power".to_owned(),
        severity: Severity::Note,
        stage: Some(subject.id.to_owned()),
        value: None,
        limit: None,
        unit: Some(Unit::One),
        message: format!(
            "{} dissipates {watts} at the extremes of its signals and no rating is stated",
            resistor.name
        ),
        cure: Some(format!(
            "budget: parts: [{{ match: {}, power: ... }}]; more than {} is needed at 0.6 of the rating",
            resistor.name,
            show(power / 0.6, Unit::Watt)
        )),
        waived: None,
        labels: resistor.span.map(|span| Label { span, text: watts.clone() }).into_iter().collect(),
    }
}

fn finding(
    subject: &Subject,
    figure: &Figure,
    (worst, limit, by): (f64, f64, By),
    severity: Severity,
    data: Rank,
) -> Finding {
    let doc = figure.kind.doc();
    let value = if by == By::Worst { worst } else { figure.nominal.unwrap_or(worst) };
    let (number, bar) = (shown(figure.kind, value), shown(figure.kind, limit));
    let case = if by == By::Worst { "in the worst case" } else { "with typical parts" };
    let verdict = match (by, doc.bad) {
        (By::Guard, _) => format!("closer than the guard of {bar}"),
        (_, Bad::Low) => format!("below the limit of {bar}"),
        _ => format!("past the limit of {bar}"),
    };
    let assumed = match data {
        Rank::Assumed => ", on assumed data",
        _ => "",
    };
    let topology = if subject.topology == "unclassified" { "" } else { subject.topology };
    let space = if topology.is_empty() { "" } else { ", " };
    Finding {
        rule: doc.slug.to_owned(),
        severity,
        stage: Some(subject.id.to_owned()),
        value: Some(value),
        limit: Some(limit),
        unit: Some(doc.unit),
        message: format!(
            "{}{space}{topology}: {} is {number} {case}, {verdict}{assumed}",
            subject.id, doc.title
        ),
        cure: Some(cure(subject, figure, (worst, limit, by), data)),
        waived: None,
        labels: labels(subject, figure),
    }
}

/// What must change and which way, led by the item with the largest share. Where a nominal value that is
/// no error breaks the limit, shares of the spread explain nothing, and none is named.
fn cure(subject: &Subject, figure: &Figure, (worst, limit, by): (f64, f64, By), data: Rank) -> String {
    let shares = figure.shares();
    let lines = figure.ledger.iter().zip(&shares).filter_map(|(line, share)| Some((line, (*share)?)));
    let with_worst = lines.filter(|(line, _)| pushes(figure, line.effect, worst));
    let leading =
        with_worst.max_by(|a, b| a.1.total_cmp(&b.1)).filter(|_| by == By::Worst || !spreads(figure));
    let doc = figure.kind.doc();
    let short = match doc.bad {
        Bad::Low => limit - worst,
        Bad::High | Bad::Either => worst.abs() - limit.abs(),
    };
    let mut text = String::new();
    if let Some((line, share)) = leading {
        let name = line.item.label(subject.circuit);
        let makes = if line.item == Item::Values { "make" } else { "makes" };
        let whole = if spreads(figure) { "the spread" } else { "it" };
        text = format!("{name} {makes} {} of {whole}", portion(share));
        if 0.0 < short && short < line.effect.abs() && line.item != Item::Values {
            let factor = line.effect.abs() / (line.effect.abs() - short);
            text.push_str(&format!(" and must act {} times less", show(factor, Unit::One)));
        }
        text.push_str("; ");
    }
    text.push_str(remedy(figure.kind, leading.map(|(line, _)| line.item)));
    if data == Rank::Assumed {
        text.push_str(&format!("; declare {} to decide", deciding(subject, figure)));
    }
    text
}

/// What to do about a figure; against tolerances and values more loop gain is of no use.
fn remedy(kind: Kind, leading: Option<Item>) -> &'static str {
    match (kind, leading) {
        (Kind::GainError, Some(Item::Values)) => {
            "choose resistors whose ratio gives the intended gain, or correct the gain that the budget intends"
        }
        (Kind::GainError, Some(Item::Resistor(_) | Item::Group(_))) => {
            "take resistors of closer tolerance, or a matched network"
        }
        _ => kind.doc().cure,
    }
}

/// Whether a figure's ledger starts from a nominal value, so that its shares are shares of the spread from
/// there to the worst case.
fn spreads(figure: &Figure) -> bool {
    figure.ledger.first().is_some_and(|line| line.item == Item::Nominal && line.effect != 0.0)
}

/// A share as sentences show it.
fn portion(share: f64) -> String {
    format!("{:.1} %", share * 100.0)
}

/// Whether an effect pushes a figure towards its worst value.
fn pushes(figure: &Figure, effect: f64, worst: f64) -> bool {
    match figure.kind.doc().bad {
        Bad::Low => effect < 0.0,
        Bad::High => 0.0 < effect,
        Bad::Either => 0.0 < effect * worst,
    }
}

/// The one declaration that would decide a verdict on assumed data.
fn deciding(subject: &Subject, figure: &Figure) -> String {
    let assumed =
        figure.ledger.iter().filter(|line| line.rank == Rank::Assumed && line.item != Item::Nominal);
    let largest = assumed.max_by(|a, b| a.effect.abs().total_cmp(&b.effect.abs()));
    match largest.map(|line| line.item) {
        _ if figure.bound => "the range of its signals".to_owned(),
        Some(Item::Rail(net)) => format!("the tolerance of rail {}", subject.circuit.net(net).name),
        Some(Item::Resistor(_) | Item::Group(_)) => "the tolerance of its resistors".to_owned(),
        Some(Item::OpAmp(at, quality)) => {
            format!("{} of {}", quality.label(), subject.circuit.op_amps[at as usize].name)
        }
        Some(Item::Upstream(net)) => {
            format!("what is assumed of the stage that drives {}", subject.circuit.net(net).name)
        }
        _ => "rails and ranges".to_owned(),
    }
}

/// The lines that cause a figure, the largest share first, with the shares of each.
fn labels(subject: &Subject, figure: &Figure) -> Vec<Label> {
    const MOST: usize = 4;
    const LEAST_SHARE: f64 = 0.02;
    let mut found: Vec<(crate::circuit::ElementId, f64, Vec<String>)> = Vec::new();
    for (line, share) in figure.ledger.iter().zip(figure.shares()) {
        let (Some(element), Some(share)) = (line.item.element(subject.circuit), share) else { continue };
        if share < LEAST_SHARE {
            continue;
        }
        let what = match line.item {
            Item::OpAmp(_, quality) => quality.label(),
            _ => "tolerance",
        };
        let text = format!("{what} {}", portion(share));
        match found.iter_mut().find(|(known, ..)| *known == element) {
            Some((_, sum, texts)) => {
                *sum += share;
                texts.push(text);
            }
            None => found.push((element, share, vec![text])),
        }
    }
    found.sort_by(|a, b| b.1.total_cmp(&a.1));
    found.truncate(MOST);
    if spreads(figure) {
        found
            .iter_mut()
            .filter_map(|(.., texts)| texts.last_mut())
            .for_each(|text| text.push_str(" of the spread"));
    }
    let own = subject.circuit.op_amps[subject.op_amp as usize].element;
    if !found.iter().any(|(element, ..)| *element == own) {
        found.push((own, 0.0, vec!["this stage".to_owned()]));
    }
    let span = |element| subject.circuit.element(element).span;
    found
        .into_iter()
        .filter_map(|(element, _, texts)| Some(Label { span: span(element)?, text: texts.join(", ") }))
        .collect()
}
