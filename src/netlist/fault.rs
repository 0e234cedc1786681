//! Collects diagnostics up to a limit, and shows users' text in them.

use super::limit;
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::source::Span;

/// The diagnostics of one run.
#[derive(Debug, Default)]
pub(super) struct Faults {
    pub list: Vec<Diagnostic>,
}

impl Faults {
    /// Keeps a diagnostic; past the limit one says that there are more.
    pub fn push(&mut self, fault: Diagnostic) {
        if self.list.len() < limit::DIAGNOSTICS {
            self.list.push(fault);
        } else if self.list.len() == limit::DIAGNOSTICS {
            let message = format!("more than {} faults; the rest is left out", limit::DIAGNOSTICS);
            let span = fault.labels.first().map(|label| label.span);
            let labels = span.map(|span| Label { span, text: String::new() }).into_iter().collect();
            self.list.push(Diagnostic {
                kind: "fault-limit",
                severity: Severity::Warning,
                message,
                labels,
                help: None,
            });
        }
    }

    /// Whether nothing more is kept.
    pub fn is_full(&self) -> bool {
        limit::DIAGNOSTICS < self.list.len()
    }

    /// Keeps an error at a place.
    pub fn error(&mut self, kind: &'static str, span: Span, message: impl Into<String>) {
        self.push(Diagnostic::at(kind, Severity::Error, span, message));
    }

    /// Keeps a warning at a place.
    pub fn warning(&mut self, kind: &'static str, span: Span, message: impl Into<String>) {
        self.push(Diagnostic::at(kind, Severity::Warning, span, message));
    }

    /// Keeps a note at a place.
    pub fn note(&mut self, kind: &'static str, span: Span, message: impl Into<String>) {
        self.push(Diagnostic::at(kind, Severity::Note, span, message));
    }
}

/// Users' text as a message shows it: in backquotes, without control characters, cut where it is long.
pub(super) fn shown(text: &str) -> String {
    const LONGEST: usize = 60;
    let mut out = String::from("`");
    for (count, letter) in text.chars().enumerate() {
        if LONGEST <= count {
            out.push('\u{2026}');
            break;
        }
        if letter.is_control()
            || matches!(letter, '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}')
        {
            out.extend(letter.escape_default());
        } else {
            out.push(letter);
        }
    }
    out.push('`');
    out
}

#[cfg(test)]
mod tests {
    use super::{Faults, limit, shown};
    use crate::source::{FileId, Span};

    #[test]
    fn shown_text_is_harmless() {
        assert_eq!(shown("a\u{1b}[31mb\u{202e}"), "`a\\u{1b}[31mb\\u{202e}`");
        assert!(shown(&"x".repeat(500)).chars().count() < 70);
    }

    #[test]
    fn faults_are_bounded() {
        let mut faults = Faults::default();
        let span = Span { file: FileId(0), start: 0, end: 0 };
        for _ in 0..2 * limit::DIAGNOSTICS {
            faults.error("unknown-element", span, "x");
        }
        assert_eq!(faults.list.len(), limit::DIAGNOSTICS + 1);
        assert_eq!(faults.list.last().unwrap().kind, "fault-limit");
    }
}
