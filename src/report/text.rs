//! The report for people at a terminal.
//!
//! The verdicts come first, then the findings, the heaviest first, then what was found, what was left out
//! and what was taken for granted.

mod devices;
mod explain;
mod findings;
mod ledger;
mod number;
mod paper;
mod snippet;
mod survey;
mod stages;
mod table;
mod trial;
mod verdict;

pub use devices::{device_text, devices_text};
pub use explain::{topic_text, topics_text};
pub use ledger::ledger_text;
pub use survey::stages_text;
pub use trial::trial_text;

use crate::report::{BoardReport, CAUTION_LINE, Report};
use crate::source::Sources;
use paper::Paper;

/// How a text is laid out.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Style {
    /// Whether the one accent colour is used; without it no escape sequence is written.
    pub colour: bool,
    /// Columns of the terminal; below 40 counts as 40.
    pub width: usize,
    /// Whether notes are written out instead of counted.
    pub all: bool,
}

/// The report as text, ending in a newline.
pub fn text(report: &Report, sources: &Sources, style: Style) -> String {
    let mut paper = Paper::new(style);
    verdict::write(&mut paper, report);
    for board in &report.boards {
        if 1 < report.boards.len() {
            paper.blank();
            paper.title(&board.netlist);
        }
        write_board(&mut paper, board, sources);
    }
    paper.blank();
    paper.paragraph("", "", CAUTION_LINE);
    paper.done()
}

fn write_board(paper: &mut Paper, board: &BoardReport, sources: &Sources) {
    findings::write(paper, &board.findings, sources);
    stages::write(paper, &board.stages);
    stages::write_skipped(paper, &board.coverage);
    write_basis(paper, board);
}

/// What the verdict rests on: the budget, and what stands in for what it doesn't say.
fn write_basis(paper: &mut Paper, board: &BoardReport) {
    paper.blank();
    let subject = board.name.as_ref().map_or(String::new(), |name| format!("{name}, "));
    match &board.budget {
        Some(path) => paper.paragraph("", "  ", &format!("{subject}judged by {path}")),
        None => paper.paragraph(
            "",
            "  ",
            "no budget: signals and rails are inferred, the limits are the common ones",
        ),
    }
    if board.assumed.is_empty() {
        return;
    }
    paper.paragraph("", "", "assumed, because nothing declares it:");
    for sentence in &board.assumed {
        paper.paragraph("  - ", "    ", sentence);
    }
}
