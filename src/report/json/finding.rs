//! Findings in the JSON report.

use super::{not_finite, unit};
use crate::diagnostic::Label;
use crate::rule::{Finding, Waived};
use crate::source::Sources;
use serde::Serialize;

/// One finding.
#[derive(Serialize)]
pub(super) struct Found<'a> {
    rule: &'a str,
    severity: &'static str,
    stage: Option<&'a str>,
    value: Option<f64>,
    limit: Option<f64>,
    unit: Option<&'static str>,
    message: &'a str,
    cure: Option<&'a str>,
    waived: Option<Waiver<'a>>,
    spans: Vec<Span<'a>>,
    #[serde(skip_serializing_if = "Option::is_none")]
    reason: Option<String>,
}

#[derive(Serialize)]
struct Waiver<'a> {
    reason: &'a str,
    by: &'a str,
    until: Option<&'a str>,
}

/// A place: lines and columns from 1, columns in characters, `end_column` one past the last on that line.
#[derive(Serialize)]
struct Span<'a> {
    file: &'a str,
    line: u32,
    column: u32,
    end_column: u32,
    label: &'a str,
}

impl<'a> Found<'a> {
    pub(super) fn new(finding: &'a Finding, sources: &'a Sources) -> Found<'a> {
        Found {
            rule: &finding.rule,
            severity: finding.severity.word(),
            stage: finding.stage.as_deref(),
            value: finding.value,
            limit: finding.limit,
            unit: finding.unit.map(unit),
            message: &finding.message,
            cure: finding.cure.as_deref(),
            waived: finding.waived.as_ref().map(Waiver::new),
            spans: finding.labels.iter().map(|label| Span::new(label, sources)).collect(),
            reason: not_finite(&[("value", finding.value), ("limit", finding.limit)]),
        }
    }
}

impl<'a> Waiver<'a> {
    fn new(waived: &'a Waived) -> Waiver<'a> {
        Waiver { reason: &waived.reason, by: &waived.by, until: waived.until.as_deref() }
    }
}

impl<'a> Span<'a> {
    fn new(label: &'a Label, sources: &'a Sources) -> Span<'a> {
        let place = sources.place(label.span);
        Span {
            file: &sources.file(label.span.file).path,
            line: place.line,
            column: place.column,
            end_column: place.end_column,
            label: &label.text,
        }
    }
}
