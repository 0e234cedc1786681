//! Markdown: one stage in full, for a review record.

use crate::quantity::{Unit, percent, show};
use crate::report::harmless::harmless;
use crate::report::{CAUTION, FigureReport, LedgerLine, StageReport};
use std::fmt::Write;

/// One stage with every figure, its ledger and the origin of every value.
pub fn ledger_markdown(stage: &StageReport) -> String {
    let mut page = String::new();
    let head = [&stage.topology, &stage.device, &stage.output].map(|text| cell(text));
    let _ = writeln!(page, "# {}\n\n{}, device {}, output {}\n", cell(&stage.id), head[0], head[1], head[2]);
    page.push_str("| input | unit | ideal | actual | error |\n| --- | --- | ---: | ---: | ---: |\n");
    for transfer in &stage.transfers {
        let actual = transfer.actual.map_or_else(|| "unknown".to_owned(), |actual| format!("{actual:.8}"));
        let error = transfer.error.map_or_else(|| "unknown".to_owned(), percent);
        let input = cell(&transfer.input);
        let _ =
            writeln!(page, "| {input} | {} | {:.8} | {actual} | {error} |", transfer.unit, transfer.ideal);
    }
    if let Some(worked) = &stage.worked {
        let _ = writeln!(page, "\nIdeal gain by hand: {}", cell(worked));
    }
    stage.figures.iter().for_each(|figure| write_figure(&mut page, figure));
    let _ = writeln!(page, "\n---\n\n{CAUTION}");
    page
}

fn write_figure(page: &mut String, figure: &FigureReport) {
    let number =
        |number: Option<f64>| number.map_or_else(|| "none".to_owned(), |value| show(value, figure.unit));
    let _ = writeln!(page, "\n## {}: {}\n", figure.slug, figure.status.word());
    let _ = writeln!(
        page,
        "nominal {}, worst {}, RSS {}, limit {}",
        number(figure.nominal),
        number(figure.worst),
        number(figure.rss),
        number(figure.limit),
    );
    if let Some(reason) = &figure.reason {
        let _ = writeln!(page, "\nReason: {}", cell(reason));
    }
    if let Some(worked) = &figure.worked {
        let _ = writeln!(page, "\nBy hand: {}", cell(worked));
    }
    if figure.ledger.is_empty() {
        return;
    }
    page.push_str("\n| item | effect | share | nominal | at worst | origin |\n| --- | ---: | ---: | ---: | ---: | --- |\n");
    figure.ledger.iter().for_each(|line| write_line(page, line, figure.ledger_unit));
}

fn write_line(page: &mut String, line: &LedgerLine, unit: Unit) {
    let share = line.share.map_or_else(String::new, |share| format!("{:.1} %", 100.0 * share));
    let (nominal, worst) = line
        .value
        .map_or_else(Default::default, |(nominal, worst, unit)| (show(nominal, unit), show(worst, unit)));
    let origin = line.origin.as_deref().map_or_else(String::new, cell);
    let (item, effect) = (cell(&line.item), show(line.effect, unit));
    let _ = writeln!(page, "| {item} | {effect} | {share} | {nominal} | {worst} | {origin} |");
}

/// A text that can't leave its cell or act as markup.
fn cell(text: &str) -> String {
    let mut safe = String::new();
    for character in harmless(text).chars() {
        match character {
            '\\' | '|' | '`' | '*' | '_' | '[' | ']' | '#' | '~' => safe.extend(['\\', character]),
            '<' => safe.push_str("&lt;"),
            '>' => safe.push_str("&gt;"),
            '&' => safe.push_str("&amp;"),
            _ => safe.push(character),
        }
    }
    safe
}
