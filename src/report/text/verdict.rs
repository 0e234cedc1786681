//! The first lines: each board's verdict, what was found, and how much of the board was analysed.

use super::paper::{Paper, count};
use crate::diagnostic::Severity;
use crate::report::harmless::short_path;
use crate::report::{BoardReport, Coverage, Report, Verdict};

/// Writes a line for each board, and one for all where there are several.
pub(super) fn write(paper: &mut Paper, report: &Report) {
    if report.boards.len() != 1 {
        write_run(paper, report);
    }
    let widest = report.boards.iter().map(|board| word(board.verdict).len()).max().unwrap_or(0);
    for board in &report.boards {
        let word = format!("{:widest$}", word(board.verdict));
        let first = format!("{}  ", paper.accent(&word));
        paper.paragraph(&first, &" ".repeat(widest + 2), &sentence(board, paper.width() / 2));
    }
}

/// One line over all boards.
fn write_run(paper: &mut Paper, report: &Report) {
    let with = |verdict| report.boards.iter().filter(|board| board.verdict == verdict).count();
    let counts = [
        (Verdict::Fail, "fail"),
        (Verdict::Incomplete, "incomplete"),
        (Verdict::WithinBudget, "within budget"),
    ]
    .map(|(verdict, words)| format!("{} {words}", with(verdict)));
    paper.paragraph("", "", &format!("{}: {}", count(report.boards.len(), "board"), counts.join(", ")));
}

/// The verdict in words.
fn word(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Fail => "FAILS",
        Verdict::Incomplete => "INCOMPLETE",
        Verdict::WithinBudget => "WITHIN BUDGET",
    }
}

fn sentence(board: &BoardReport, room: usize) -> String {
    format!("{}: {}; {}", short_path(&board.netlist, room), found(board), covered(&board.coverage))
}

/// `2 errors, 1 warning, 3 notes, 1 waived`, without what there is none of.
fn found(board: &BoardReport) -> String {
    let open = |severity| {
        board
            .findings
            .iter()
            .filter(|finding| finding.waived.is_none() && finding.severity == severity)
            .count()
    };
    let waived = board.findings.iter().filter(|finding| finding.waived.is_some()).count();
    let mut parts: Vec<String> = [Severity::Error, Severity::Warning, Severity::Note]
        .into_iter()
        .map(|severity| (open(severity), severity))
        .filter(|(number, _)| 0 < *number)
        .map(|(number, severity)| count(number, severity.word()))
        .collect();
    if parts.is_empty() {
        parts.push("no findings".to_owned());
    }
    if 0 < waived {
        parts.push(format!("{waived} waived"));
    }
    parts.join(", ")
}

/// `9 of 10 op amps analysed, 1 skipped`.
fn covered(coverage: &Coverage) -> String {
    if coverage.op_amps == 0 {
        return "no op amp found".to_owned();
    }
    let mut words = format!("{} of {} analysed", coverage.analysed, count(coverage.op_amps, "op amp"));
    if 0 < coverage.non_linear {
        words += &format!(", {} non-linear by intent", coverage.non_linear);
    }
    if !coverage.skipped.is_empty() {
        words += &format!(", {} skipped", coverage.skipped.len());
    }
    words
}
