//! Findings: a rule that a stage breaks, or a fault of the input, with its lines.

use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::quantity::Unit;

/// Who answers for a finding that is waived.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Waived {
    /// Why.
    pub reason: String,
    /// Who signed.
    pub by: String,
    /// Last day, where one is given.
    pub until: Option<String>,
}

/// One finding.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// Slug of the figure, the fact or the kind of fault.
    pub rule: String,
    /// How much it weighs.
    pub severity: Severity,
    /// The stage it is about, where it is about one.
    pub stage: Option<String>,
    /// The value that breaks the limit.
    pub value: Option<f64>,
    /// The limit.
    pub limit: Option<f64>,
    /// Unit of both.
    pub unit: Option<Unit>,
    /// In words: the stage, the figure, the number, the limit and the verdict. No full stop.
    pub message: String,
    /// Which quantity must change and which way.
    pub cure: Option<String>,
    /// Who answers for it, where someone does.
    pub waived: Option<Waived>,
    /// Lines that cause it, the main one first.
    pub labels: Vec<Label>,
}

impl From<Diagnostic> for Finding {
    fn from(fault: Diagnostic) -> Finding {
        Finding {
            rule: fault.kind.to_owned(),
            severity: fault.severity,
            stage: None,
            value: None,
            limit: None,
            unit: None,
            message: fault.message,
            cure: fault.help,
            waived: None,
            labels: fault.labels,
        }
    }
}
