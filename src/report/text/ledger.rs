//! One stage in full: its transfers, its voltages, and what makes up each figure.

use super::Style;
use super::number::{fine, optional, value};
use super::paper::Paper;
use super::table::Table;
use crate::device::Rank;
use crate::figure::Bad;
use crate::quantity::{Unit, percent, show};
use crate::report::{CAUTION_LINE, FigureReport, LedgerLine, PinReport, StageReport, TransferReport};

/// Columns of a bar that stands for a share of one.
const BAR: usize = 10;

/// Lines with a smaller share stand together in one.
const SMALL: f64 = 0.0005;

/// Blocks of one to seven eighths of a column.
const EIGHTHS: [&str; 8] = ["", "▏", "▎", "▍", "▌", "▋", "▊", "▉"];

/// How near a sum must come to the worst case to be called it, as a share of it.
const AGREES: f64 = 1e-6;

/// One stage with every figure and its ledger, ending in a newline.
pub fn ledger_text(stage: &StageReport, style: Style) -> String {
    let mut paper = Paper::new(style);
    write_header(&mut paper, stage);
    write_transfers(&mut paper, "transfers", &stage.transfers);
    if let Some(local) = &stage.local {
        write_transfers(&mut paper, "transfers with the block's other outputs held", local);
    }
    write_pins(&mut paper, &stage.pins);
    if let Some(worked) = &stage.worked {
        paper.blank();
        paper.paragraph("ideal gain by hand: ", "  ", worked);
    }
    for figure in &stage.figures {
        write_figure(&mut paper, figure);
    }
    write_origins(&mut paper, stage);
    paper.blank();
    paper.paragraph("", "", CAUTION_LINE);
    paper.done()
}

fn write_header(paper: &mut Paper, stage: &StageReport) {
    let StageReport { id, device, topology, output, .. } = stage;
    let group = stage.group.as_ref().map_or(String::new(), |group| format!(", group {group}"));
    paper.paragraph("", "  ", &format!("{id}: {topology}{group}, device {device}, output {output}"));
}

fn write_transfers(paper: &mut Paper, title: &str, transfers: &[TransferReport]) {
    if transfers.is_empty() {
        return;
    }
    let mut table = Table::new(["input", "unit", ">at", ">ideal", ">actual", ">error"]);
    for transfer in transfers {
        let unknown = || "unknown".to_owned();
        table.row([
            transfer.input.clone(),
            transfer.unit.to_owned(),
            show(transfer.frequency, Unit::Hertz),
            fine(transfer.ideal, transfer.unit),
            transfer.actual.map_or_else(unknown, |actual| fine(actual, transfer.unit)),
            transfer.error.map_or_else(unknown, percent),
        ]);
    }
    paper.blank();
    paper.line(title);
    table.write(paper, 2);
}

fn write_pins(paper: &mut Paper, pins: &[PinReport]) {
    if pins.is_empty() {
        return;
    }
    let mut table = Table::new(["output", ">in+", ">in-", ">in+ less in-", ">out", ">ideal out"]);
    for pin in pins {
        table.row([
            pin.at.to_owned(),
            fine(pin.plus, "V"),
            fine(pin.minus, "V"),
            show(pin.difference, Unit::Volt),
            fine(pin.out, "V"),
            fine(pin.twin_out, "V"),
        ]);
    }
    paper.blank();
    paper.line("voltages where the ranges drive the output lowest and highest");
    table.write(paper, 2);
}

fn write_figure(paper: &mut Paper, figure: &FigureReport) {
    paper.blank();
    let first = format!("{}: ", paper.accent(figure.slug));
    paper.paragraph(&first, "  ", &format!("{}{}", figure.status.word(), limit(figure)));
    let number = |number| optional(number, figure.unit, figure.bad);
    let mut numbers = format!(
        "nominal {}, worst {}, RSS {}, {} data",
        number(figure.nominal),
        number(figure.worst),
        number(figure.rss),
        rank(figure.data),
    );
    if let Some(sign) = figure.sign {
        numbers += &format!(", return ratio {} at DC", if sign < 0.0 { "negative" } else { "positive" });
    }
    paper.paragraph("  ", "  ", &numbers);
    if let Some(reason) = figure.reason.as_ref().filter(|_| figure.limit.is_none() && figure.worst.is_none())
    {
        paper.paragraph("  reason: ", "          ", reason);
    }
    if let Some(worked) = &figure.worked {
        paper.paragraph("  by hand: ", "           ", worked);
    }
    if let Some(trials) = &figure.trials {
        let number = |at: f64| value(at, figure.ledger_unit, figure.bad);
        let words = format!(
            "{} random trials: 2.5 % below {}, half below {}, 97.5 % below {}; all within {} .. {}",
            trials.trials,
            number(trials.low),
            number(trials.median),
            number(trials.high),
            number(trials.span.0),
            number(trials.span.1),
        );
        paper.paragraph("  ", "  ", &words);
    }
    write_ledger(paper, figure);
}

/// `, limit at least 250 mV`: a limit has no sign of its own.
fn limit(figure: &FigureReport) -> String {
    let Some(limit) = figure.limit else { return ", no limit".to_owned() };
    let limit = value(limit, figure.unit, figure.bad);
    let stated = if figure.stated { ", stated in the budget" } else { "" };
    match figure.bad {
        Bad::Either => format!(", limit +/- {limit}{stated}"),
        Bad::Low => format!(", limit at least {limit}{stated}"),
        Bad::High => format!(", limit at most {limit}{stated}"),
    }
}

/// The lines, the largest share first, and what they add up to.
fn write_ledger(paper: &mut Paper, figure: &FigureReport) {
    if figure.ledger.is_empty() {
        return;
    }
    let (mut lines, small): (Vec<&LedgerLine>, Vec<&LedgerLine>) =
        figure.ledger.iter().partition(|line| line.share.is_none_or(|share| SMALL <= share));
    let size = |line: &LedgerLine| line.share.map_or(f64::NEG_INFINITY, |share| -share);
    lines.sort_by(|left, right| size(left).total_cmp(&size(right)));
    let mut table = Table::new([">effect", ">share", "", "item", ">nominal", ">at worst", ""]);
    for line in lines {
        let shown = |pick: fn((f64, f64)) -> f64| {
            line.value
                .map_or_else(String::new, |(nominal, worst, unit)| fine_value(pick((nominal, worst)), unit))
        };
        table.row([
            value(line.effect, figure.ledger_unit, figure.bad),
            line.share.map_or_else(String::new, percent_of_all),
            line.share.map_or_else(String::new, bar),
            line.item.clone(),
            shown(|(nominal, _)| nominal),
            shown(|(_, worst)| worst),
            if line.against { "against the worst".to_owned() } else { String::new() },
        ]);
    }
    if !small.is_empty() {
        let rest: f64 = small.iter().map(|line| line.effect).sum();
        let words = format!("{} more, each below {}", small.len(), percent(SMALL));
        let empty = String::new;
        table.row([
            value(rest, figure.ledger_unit, figure.bad),
            empty(),
            empty(),
            words,
            empty(),
            empty(),
            empty(),
        ]);
    }
    if let Some((total, words)) = total(figure) {
        let total = value(total, figure.ledger_unit, figure.bad);
        let empty = String::new;
        table.row([total, empty(), empty(), words.to_owned(), empty(), empty(), empty()]);
    }
    table.write(paper, 2);
}

/// A value with its unit; what is unlimited or unknown is said so.
fn fine_value(value: f64, unit: Unit) -> String {
    if value.is_finite() { show(value, unit) } else { "unlimited".to_owned() }
}

/// Where every value comes from, once.
fn write_origins(paper: &mut Paper, stage: &StageReport) {
    let mut seen: Vec<(&str, &str)> = Vec::new();
    for line in stage.figures.iter().flat_map(|figure| &figure.ledger) {
        if let Some(origin) = &line.origin
            && !seen.contains(&(line.item.as_str(), origin.as_str()))
        {
            seen.push((&line.item, origin));
        }
    }
    if seen.is_empty() {
        return;
    }
    seen.sort_unstable();
    paper.blank();
    paper.line("where the values come from");
    for (item, origin) in seen {
        paper.paragraph(&format!("  {item}: "), "    ", origin);
    }
}

/// What the lines add up to, where that is the worst case: plainly, or as squares.
fn total(figure: &FigureReport) -> Option<(f64, &'static str)> {
    let worst = figure.worst.filter(|_| figure.unit == figure.ledger_unit)?;
    let sum: f64 = figure.ledger.iter().map(|line| line.effect).sum();
    let root = figure.ledger.iter().map(|line| line.effect * line.effect).sum::<f64>().sqrt();
    let agrees = |total: f64| (total - worst).abs() <= AGREES * worst.abs();
    match () {
        _ if agrees(sum) => Some((sum, "sum: the worst case")),
        _ if agrees(root) => Some((root, "root of the sum of squares: the worst case")),
        _ => None,
    }
}

/// A share with one decimal, so that a column of them reads at a glance.
fn percent_of_all(share: f64) -> String {
    if share.is_finite() { format!("{:.1} %", 100.0 * share) } else { percent(share) }
}

/// A bar as long as a share.
fn bar(share: f64) -> String {
    let eighths = (share.clamp(0.0, 1.0) * (BAR * 8) as f64).round() as usize;
    "█".repeat(eighths / 8) + EIGHTHS[eighths % 8]
}

/// The word for how far data can be trusted.
fn rank(rank: Rank) -> &'static str {
    match rank {
        Rank::Guaranteed => "guaranteed",
        Rank::Typical => "typical",
        Rank::Assumed => "assumed",
    }
}
