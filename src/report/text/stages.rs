//! What was found on the board: a table of stages, and the op amps that were left out.

use super::number::fine;
use super::paper::Paper;
use super::table::Table;
use crate::report::{Coverage, FigureReport, StageReport};
use crate::rule::Status;

/// Writes a line for each stage.
pub(super) fn write(paper: &mut Paper, stages: &[StageReport]) {
    if stages.is_empty() {
        return;
    }
    let mut table = Table::new(["stage", "device", "topology", "output", ">ideal", ">actual", "figures"]);
    for stage in stages {
        let (ideal, actual) = main_transfer(stage);
        table.row([
            stage.id.clone(),
            stage.device.clone(),
            stage.topology.clone(),
            stage.output.clone(),
            ideal,
            actual,
            worst_figure(stage),
        ]);
    }
    paper.blank();
    table.write(paper, 0);
}

/// Gain or transresistance of the main transfer, of the twin and as it is.
pub(super) fn main_transfer(stage: &StageReport) -> (String, String) {
    let Some(main) = stage.transfers.first() else { return ("none".to_owned(), "none".to_owned()) };
    let actual = main.actual.map_or_else(|| "unknown".to_owned(), |actual| fine(actual, main.unit));
    (fine(main.ideal, main.unit), actual)
}

/// The heaviest status and the figures that have it: `broken: gain-error and 2 more`. Where no signal
/// enters, as in the buffer of a reference, a gain isn't unknown but absent.
fn worst_figure(stage: &StageReport) -> String {
    let absent = |figure: &&FigureReport| figure.reason.as_deref() == Some("no signal port");
    let figures: Vec<&FigureReport> = stage.figures.iter().filter(|figure| !absent(figure)).collect();
    let Some(worst) = figures.iter().map(|figure| figure.status).max() else {
        return "not computed".to_owned();
    };
    if worst == Status::Within {
        let silent = stage.transfers.is_empty() && figures.len() < stage.figures.len();
        return if silent { "no signal".to_owned() } else { worst.word().to_owned() };
    }
    let mut those = figures.iter().filter(|figure| figure.status == worst);
    let first = those.next().map_or("", |figure| figure.slug);
    match those.count() {
        0 => format!("{}: {first}", worst.word()),
        more => format!("{}: {first} and {more} more", worst.word()),
    }
}

/// Writes which op amps weren't analysed, and why.
pub(super) fn write_skipped(paper: &mut Paper, coverage: &Coverage) {
    if coverage.skipped.is_empty() {
        return;
    }
    paper.blank();
    paper.paragraph("", "", "skipped:");
    for (element, reason) in &coverage.skipped {
        paper.paragraph("  - ", "    ", &format!("{element}: {reason}"));
    }
}
