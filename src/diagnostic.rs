//! A fault as data: what was found, where, and what helps. Prints nothing.

mod kinds;

pub use kinds::KindDoc;

use crate::source::Span;

/// How much a finding weighs, lightest first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Severity {
    /// Advice, or what could not be judged.
    Note,
    /// Must be looked at.
    Warning,
    /// Fails a gate.
    Error,
}

impl Severity {
    /// The word that reports print.
    pub fn word(self) -> &'static str {
        match self {
            Severity::Note => "note",
            Severity::Warning => "warning",
            Severity::Error => "error",
        }
    }

    /// One step lighter; a note stays a note.
    pub fn lower(self) -> Severity {
        match self {
            Severity::Error => Severity::Warning,
            Severity::Warning | Severity::Note => Severity::Note,
        }
    }
}

/// A place in a text with a few words about it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Label {
    /// Where.
    pub span: Span,
    /// What is there; may be empty.
    pub text: String,
}

/// Something wrong in a text that was read: a netlist, a budget, a profile or a rule pack.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    /// Slug of the kind of fault, such as `missing-value`.
    pub kind: &'static str,
    /// How much it weighs.
    pub severity: Severity,
    /// One sentence: what was expected, what was found. No full stop.
    pub message: String,
    /// Places, the main one first.
    pub labels: Vec<Label>,
    /// What to write instead, where that is known.
    pub help: Option<String>,
}

impl Diagnostic {
    /// A fault at a place.
    pub fn at(kind: &'static str, severity: Severity, span: Span, message: impl Into<String>) -> Self {
        let labels = vec![Label { span, text: String::new() }];
        Diagnostic { kind, severity, message: message.into(), labels, help: None }
    }

    /// The same fault with advice.
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
}
