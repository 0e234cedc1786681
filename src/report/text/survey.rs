//! What was found on each board: stages with their transfers, what each can do, and what was left out.

use super::Style;
use super::paper::{Paper, count};
use super::stages::main_transfer;
use super::table::Table;
use crate::device::Rank;
use crate::figure::Edge;
use crate::quantity::{Unit, show};
use crate::report::{BoardReport, CAUTION_LINE, Coverage, Report, StageReport};

/// Every board's stages and their reach, ending in a newline.
pub fn stages_text(report: &Report, style: Style) -> String {
    let mut paper = Paper::new(style);
    for board in &report.boards {
        paper.blank();
        paper.title(&board.netlist);
        write_coverage(&mut paper, board);
        write_stages(&mut paper, &board.stages);
        write_reach(&mut paper, &board.stages);
    }
    paper.blank();
    paper.paragraph("", "", CAUTION_LINE);
    paper.done()
}

/// `6 op amps found, 5 named, 4 analysed, 1 non-linear by intent, 1 skipped`, with a line for each skipped one.
fn write_coverage(paper: &mut Paper, board: &BoardReport) {
    let Coverage { op_amps, analysed, non_linear, skipped } = &board.coverage;
    let named = board.stages.iter().filter(|stage| stage.topology != "unclassified").count();
    let mut words = format!("{} found, {named} named, {analysed} analysed", count(*op_amps, "op amp"));
    if 0 < *non_linear {
        words += &format!(", {non_linear} non-linear by intent");
    }
    if !skipped.is_empty() {
        words += &format!(", {} skipped:", skipped.len());
    }
    paper.paragraph("", "  ", &words);
    for (element, reason) in skipped {
        paper.paragraph("  - ", "    ", &format!("{element}: {reason}"));
    }
}

fn write_stages(paper: &mut Paper, stages: &[StageReport]) {
    if stages.is_empty() {
        return;
    }
    let mut table =
        Table::new(["stage", "topology", "device", "from", "to", ">ideal", ">actual", "pin voltages"]);
    for stage in stages {
        let (ideal, actual) = main_transfer(stage);
        let inputs: Vec<&str> = stage.transfers.iter().map(|transfer| transfer.input.as_str()).collect();
        let group = stage.group.as_ref().map_or("", |_| " *");
        table.row([
            stage.id.clone(),
            format!("{}{group}", stage.topology),
            stage.device.clone(),
            inputs.join(" "),
            stage.output.clone(),
            ideal,
            actual,
            if stage.pins.is_empty() { "no range" } else { "known" }.to_owned(),
        ]);
    }
    paper.blank();
    table.write(paper, 0);
    write_groups(paper, stages);
}

/// The groups that stages with a star belong to.
fn write_groups(paper: &mut Paper, stages: &[StageReport]) {
    let mut groups: Vec<&str> = stages.iter().filter_map(|stage| stage.group.as_deref()).collect();
    groups.dedup();
    for (at, group) in groups.iter().enumerate() {
        if !groups[..at].contains(group) {
            paper.paragraph("* ", "  ", &format!("one amplifier: {}", group.replace('+', " ")));
        }
    }
}

/// Input range and least load of every stage, then why some are missing.
fn write_reach(paper: &mut Paper, stages: &[StageReport]) {
    let mut table =
        Table::new(["stage", "input", ">from", "ended by", ">to", "ended by", ">least load", "data"]);
    let mut rows = 0;
    let mut reasons: Vec<(&str, Vec<&str>)> = Vec::new();
    for stage in stages {
        let Some(reach) = &stage.reach else { continue };
        for reason in [reach.input.as_ref().err(), reach.load.as_ref().err()].into_iter().flatten() {
            match reasons.iter_mut().find(|(known, _)| known == reason) {
                Some((_, ids)) if ids.contains(&stage.id.as_str()) => {}
                Some((_, ids)) => ids.push(&stage.id),
                None => reasons.push((reason, vec![&stage.id])),
            }
        }
        if reach.input.is_err() && reach.load.is_err() {
            continue;
        }
        let [low, low_by, high, high_by] = match &reach.input {
            Ok(range) => [
                show(range.low, reach.unit),
                edge(range.low_by).to_owned(),
                show(range.high, reach.unit),
                edge(range.high_by).to_owned(),
            ],
            Err(_) => [const { String::new() }; 4],
        };
        let load = reach.load.as_ref().map_or_else(|_| String::new(), |ohms| show(*ohms, Unit::Ohm));
        let main = reach.main.clone().unwrap_or_default();
        table.row([stage.id.clone(), main, low, low_by, high, high_by, load, rank(reach.data).to_owned()]);
        rows += 1;
    }
    if 0 < rows {
        paper.blank();
        paper.paragraph(
            "",
            "  ",
            "Reach: input range within which output and inputs stay inside their guaranteed limits, other inputs at rest, rails nominal; least load to ground at full swing",
        );
        table.write(paper, 0);
    }
    if !reasons.is_empty() {
        paper.blank();
        paper.paragraph("", "", "no reach:");
    }
    for (reason, ids) in reasons {
        paper.paragraph("  - ", "    ", &format!("{}: {reason}", ids.join(", ")));
    }
}

fn edge(edge: Edge) -> &'static str {
    match edge {
        Edge::Swing => "swing",
        Edge::CommonMode => "inputs",
        Edge::Nothing => "nothing",
    }
}

fn rank(rank: Rank) -> &'static str {
    match rank {
        Rank::Guaranteed => "guaranteed",
        Rank::Typical => "typical",
        Rank::Assumed => "assumed",
    }
}
