//! What the YAML crate objects to, in words that help someone who writes a budget.

use super::load::DEEPEST;
use crate::diagnostic::{Diagnostic, Severity};
use crate::source::{FileId, Span, quote};
use serde_yaml::granit_parser::{ErrorKind, ScanError};

/// Characters that mean something to YAML where a plain value begins.
const MARKS: [char; 6] = ['*', '&', '!', '%', '@', '`'];

/// A text that isn't YAML.
pub(super) fn syntax(error: &ScanError, text: &str, file: FileId) -> Diagnostic {
    let at = floor(text, error.marker().byte_offset().unwrap_or(0));
    let directive = *error.kind() == ErrorKind::DirectiveDisallowed;
    if let Some(start) = mark(text, at).filter(|_| !directive) {
        return marked_word(text, file, start);
    }
    let span = Span { file, start: at as u32, end: at as u32 };
    let (message, help) = describe(error.kind());
    let fault = Diagnostic::at("yaml-syntax", Severity::Error, span, message);
    match help {
        Some(help) => fault.help(help),
        None => fault,
    }
}

/// A plain value that begins with a mark of YAML's.
pub(super) fn marked_word(text: &str, file: FileId, start: usize) -> Diagnostic {
    let start = floor(text, start);
    let rest = &text[start..];
    let length = rest.find([' ', '\t', '\r', '\n', ',', '}', ']']).unwrap_or(rest.len()).max(1);
    let word = rest.get(..length).unwrap_or("");
    let span = Span { file, start: start as u32, end: (start + word.len()) as u32 };
    let message =
        format!("expected a value, found {}, which begins with a mark that YAML keeps", quote(word));
    let shown = quote(word);
    Diagnostic::at("yaml-syntax", Severity::Error, span, message)
        .help(format!("put it in quotes: \"{}\"", &shown[1..shown.len() - 1]))
}

/// Where a marked word begins that the crate objects to: at the place it gives, or just before.
fn mark(text: &str, at: usize) -> Option<usize> {
    let line = text[..at].rfind('\n').map_or(0, |newline| newline + 1);
    if text[at..].starts_with(MARKS) {
        return Some(at);
    }
    let before = text[line..at].rfind([' ', ',', '[', '{']).map_or(line, |blank| line + blank + 1);
    (before < at && text[before..at].starts_with(MARKS)).then_some(before)
}

/// The nearest character boundary at or below a byte.
fn floor(text: &str, at: usize) -> usize {
    let mut at = at.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}

/// Message and help for a kind of fault.
fn describe(kind: &ErrorKind) -> (String, Option<&'static str>) {
    let blanks = Some("indent with blanks, the same number for entries of one list or mapping");
    match kind {
        ErrorKind::TabNotAllowed
        | ErrorKind::TabInBlockIndentation
        | ErrorKind::TabInIndentation
        | ErrorKind::TabInPlainScalar => ("found a tab where YAML wants blanks".to_string(), blanks),
        ErrorKind::InvalidIndentation
        | ErrorKind::ExpectedBlockMappingKey
        | ErrorKind::ExpectedBlockSequenceEntry
        | ErrorKind::BlockSequenceEntryNotAllowed => (
            "expected another entry of the list or mapping above, at the same indentation".to_string(),
            blanks,
        ),
        ErrorKind::SimpleKeyExpected | ErrorKind::InvalidSimpleKey => {
            ("expected `key: value`, found no colon".to_string(), None)
        }
        ErrorKind::MappingValueNotAllowed | ErrorKind::MappingKeyNotAllowed => (
            "a colon with a blank behind it begins a value, but none can stand here".to_string(),
            Some("put text that holds `: ` in quotes"),
        ),
        ErrorKind::UnexpectedEofFlowSequence | ErrorKind::ExpectedFlowSequenceSeparator => {
            ("expected `,` or `]` in this list".to_string(), None)
        }
        ErrorKind::UnexpectedEofFlowMapping
        | ErrorKind::UnexpectedEofImplicitFlowMapping
        | ErrorKind::ExpectedFlowMappingSeparator => {
            ("expected `,` or `}` in this mapping".to_string(), None)
        }
        ErrorKind::InvalidColonPlacement => {
            ("a colon can't stand here".to_string(), Some("a bracket or quote before it may be left open"))
        }
        ErrorKind::UnclosedFlowCollection { open } => (format!("the bracket `{open}` isn't closed"), None),
        ErrorKind::MismatchedFlowCollectionEnd { open, close } => {
            (format!("the bracket `{open}` is closed by `{close}`"), None)
        }
        ErrorKind::MisplacedFlowCollectionEnd => ("this bracket closes nothing".to_string(), None),
        ErrorKind::UnclosedQuotedScalar => ("the quote isn't closed".to_string(), None),
        ErrorKind::UnknownQuotedScalarEscape | ErrorKind::InvalidQuotedScalarHexEscape => {
            ("unknown escape behind `\\`".to_string(), Some("in single quotes a backslash stands for itself"))
        }
        ErrorKind::DirectiveDisallowed => ("YAML directives aren't read here".to_string(), None),
        ErrorKind::RecursionLimitExceeded => (format!("expected at most {DEEPEST} levels of nesting"), None),
        ErrorKind::UnexpectedCharacter { character } => (
            format!("found {} where a value should begin", quote(&character.to_string())),
            Some("put it in quotes"),
        ),
        other => (format!("this isn't YAML: {other}"), None),
    }
}
