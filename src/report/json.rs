//! The report for machines: JSON of the schema `gainsay-report/1`.
//!
//! Keys stand in the order of these structs. Numbers are SI in full double precision; one that isn't finite
//! becomes `null`, and the `reason` beside it says what it was. Keys may be added later, none goes away.

mod finding;
mod stage;

use crate::quantity::{Unit, show};
use crate::report::harmless::acts;
use crate::report::{BoardReport, CAUTION, Coverage, Report};
use crate::source::Sources;
use serde::Serialize;

/// Name of the schema that the document follows.
const SCHEMA: &str = "gainsay-report/1";

/// The whole document.
#[derive(Serialize)]
struct Document<'a> {
    schema: &'static str,
    tool: Tool,
    verdict: &'static str,
    caution: &'static str,
    boards: Vec<Board<'a>>,
}

/// What made it.
#[derive(Serialize)]
struct Tool {
    name: &'static str,
    version: &'static str,
}

#[derive(Serialize)]
struct Board<'a> {
    netlist: &'a str,
    budget: Option<&'a str>,
    name: Option<&'a str>,
    verdict: &'static str,
    coverage: Counted<'a>,
    assumed: &'a [String],
    stages: Vec<stage::Stage<'a>>,
    findings: Vec<finding::Found<'a>>,
}

#[derive(Serialize)]
struct Counted<'a> {
    op_amps: usize,
    analysed: usize,
    non_linear: usize,
    skipped: Vec<Skipped<'a>>,
}

#[derive(Serialize)]
struct Skipped<'a> {
    element: &'a str,
    reason: &'a str,
}

/// The report as JSON, indented by two spaces, with a newline at the end.
///
/// Characters that could act on a terminal stand as escapes, which doesn't change what the document says.
pub fn json(report: &Report, sources: &Sources) -> String {
    let document = Document {
        schema: SCHEMA,
        tool: Tool { name: env!("CARGO_PKG_NAME"), version: env!("CARGO_PKG_VERSION") },
        verdict: report.verdict.word(),
        caution: CAUTION,
        boards: report.boards.iter().map(|board| Board::new(board, sources)).collect(),
    };
    let text = serde_json::to_string_pretty(&document).expect("structs with texts as keys always serialise");
    escape(&text) + "\n"
}

impl<'a> Board<'a> {
    fn new(board: &'a BoardReport, sources: &'a Sources) -> Board<'a> {
        Board {
            netlist: &board.netlist,
            budget: board.budget.as_deref(),
            name: board.name.as_deref(),
            verdict: board.verdict.word(),
            coverage: Counted::new(&board.coverage),
            assumed: &board.assumed,
            stages: board.stages.iter().map(|stage| stage::Stage::new(stage, &board.coverage)).collect(),
            findings: board.findings.iter().map(|finding| finding::Found::new(finding, sources)).collect(),
        }
    }
}

impl<'a> Counted<'a> {
    fn new(coverage: &'a Coverage) -> Counted<'a> {
        let skipped = coverage.skipped.iter();
        Counted {
            op_amps: coverage.op_amps,
            analysed: coverage.analysed,
            non_linear: coverage.non_linear,
            skipped: skipped.map(|(element, reason)| Skipped { element, reason }).collect(),
        }
    }
}

/// Writes what could act on a terminal as `\uXXXX`. Outside its texts JSON holds no such character
/// but the newline of the indentation, and inside them a newline is an escape already.
fn escape(json: &str) -> String {
    let mut out = String::with_capacity(json.len());
    for character in json.chars() {
        if character == '\n' || !acts(character) {
            out.push(character);
            continue;
        }
        for unit in character.encode_utf16(&mut [0; 2]) {
            out.push_str(&format!("\\u{unit:04x}"));
        }
    }
    out
}

/// What the numbers are that `null` stands for, as `worst is unlimited`; `None` where all are finite.
fn not_finite(values: &[(&str, Option<f64>)]) -> Option<String> {
    let words: Vec<String> = values
        .iter()
        .filter_map(|(name, value)| value.map(|value| (name, value)))
        .filter(|(_, value)| !value.is_finite())
        .map(|(name, value)| format!("{name} is {}", show(value, Unit::One)))
        .collect();
    (!words.is_empty()).then(|| words.join(", "))
}

/// A unit as the schema has it: `1` for a ratio.
fn unit(unit: Unit) -> &'static str {
    match unit {
        Unit::One => "1",
        _ => unit.symbol(),
    }
}
