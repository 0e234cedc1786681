//! A board before and after a trial of other values.

use super::Style;
use super::number::{optional, value};
use super::paper::Paper;
use super::table::Table;
use crate::quantity::{Unit, show};
use crate::report::{BoardReport, CAUTION_LINE, FigureReport, Report, StageReport};
use crate::rule::Finding;

/// Changes of a figure below this share of it are rounding.
const STILL: f64 = 1e-9;

/// Figures that move and findings that come and go, ending in a newline.
pub fn trial_text(before: &Report, after: &Report, with: &[(String, f64)], style: Style) -> String {
    let mut paper = Paper::new(style);
    let values: Vec<String> =
        with.iter().map(|(name, value)| format!("{name} = {}", show(*value, Unit::One))).collect();
    paper.paragraph("trial, nothing written: ", "  ", &values.join(", "));
    for (old, new) in before.boards.iter().zip(&after.boards) {
        write_board(&mut paper, old, new);
    }
    paper.blank();
    paper.paragraph("", "", CAUTION_LINE);
    paper.done()
}

fn write_board(paper: &mut Paper, before: &BoardReport, after: &BoardReport) {
    paper.blank();
    let verdicts = format!("{} before, {} after", before.verdict.word(), after.verdict.word());
    paper.paragraph("", "  ", &format!("{}: {verdicts}", after.netlist));
    let mut table = Table::new(["stage", "figure", ">worst before", ">worst after", ">limit", "verdict"]);
    let mut moved = false;
    for new in &after.stages {
        let Some(old) = before.stages.iter().find(|old| old.id == new.id) else { continue };
        for (was, is) in old.figures.iter().zip(&new.figures).filter(|(was, is)| moves(was, is)) {
            table.row(row(new, was, is));
            moved = true;
        }
    }
    if moved {
        table.write(paper, 2);
    } else {
        paper.line("  no figure moves");
    }
    write_findings(paper, "gone", &before.findings, &after.findings);
    write_findings(paper, "new", &after.findings, &before.findings);
    let stays = after.findings.iter().filter(|finding| same(finding, &before.findings)).count();
    paper.line(&format!("  {stays} findings stay"));
}

fn moves(was: &FigureReport, is: &FigureReport) -> bool {
    match (was.worst, is.worst) {
        (Some(a), Some(b)) => STILL * a.abs().max(b.abs()) < (a - b).abs(),
        (a, b) => a.is_some() != b.is_some() || was.status != is.status,
    }
}

fn row(stage: &StageReport, was: &FigureReport, is: &FigureReport) -> [String; 6] {
    let number = |number| optional(number, is.unit, is.bad);
    let verdict = if was.status == is.status {
        is.status.word().to_owned()
    } else {
        format!("{}, was {}", is.status.word(), was.status.word())
    };
    let limit = is.limit.map_or_else(|| "none".to_owned(), |limit| value(limit, is.unit, is.bad));
    [stage.id.clone(), is.slug.to_owned(), number(was.worst), number(is.worst), limit, verdict]
}

/// Whether a finding of the same rule and stage is among others.
fn same(finding: &Finding, others: &[Finding]) -> bool {
    others.iter().any(|other| other.rule == finding.rule && other.stage == finding.stage)
}

fn write_findings(paper: &mut Paper, word: &str, these: &[Finding], those: &[Finding]) {
    for finding in these.iter().filter(|finding| !same(finding, those)) {
        let first = format!("  {word}: {}: ", finding.severity.word());
        paper.paragraph(&first, "    ", &format!("{} ({})", finding.message, finding.rule));
    }
}
