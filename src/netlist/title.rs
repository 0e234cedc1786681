//! The first line of a file: its title, or the sign that the file is no netlist of this kind.

use super::directive::is_directive;
use super::fault::{Faults, shown};
use super::line::{line_end, skip_blanks};
use super::name::same_name;
use super::number::number;
use crate::source::{FileId, Span};

/// File name endings of libraries, which have no title line.
const LIBRARIES: [&str; 4] = [".lib", ".sub", ".mod", ".inc"];

/// Takes the title off the first line: gives it, where it isn't empty, and where the statements begin.
pub(super) fn take(text: &str, path: &str, file: FileId, faults: &mut Faults) -> (Option<Span>, usize) {
    let end = line_end(text, 0);
    let start = skip_blanks(text.as_bytes(), 0);
    let line = text[start.min(end)..end].trim_end();
    let ending = path.rfind('.').map_or("", |at| &path[at..]);
    let library = LIBRARIES.iter().any(|library| same_name(library, ending));
    let first = line.split_whitespace().next().unwrap_or("");
    if library || [".subckt", ".macro", ".model", ".title"].iter().any(|word| same_name(word, first)) {
        return (None, 0);
    }
    let span = |text_of: &str| {
        let start = text_of.as_ptr() as usize - text.as_ptr() as usize;
        Span { file, start: start as u32, end: (start + text_of.len()) as u32 }
    };
    if is_statement(line) && !is_foreign(text) {
        let message = format!("the first line is the title, yet it looks like a statement: {}", shown(line));
        faults.warning("title-statement", span(line), message);
    }
    let title = line.trim_start_matches(['*', ' ', '\t']).trim_end_matches(['*', ' ', '\t']);
    // A line of dashes or stars is an ornament.
    (title.contains(char::is_alphanumeric).then(|| span(title)), end)
}

/// Whether a title reads as a whole statement.
fn is_statement(line: &str) -> bool {
    let mut words = line.split_whitespace();
    let Some(name) = words.next() else { return false };
    if name.starts_with('.') {
        return is_directive(name);
    }
    let count = line.split_whitespace().count();
    let value = |word: Option<&str>| {
        let word = word.unwrap_or("");
        number(word).is_some() || word.starts_with(['{', '\''])
    };
    match name.as_bytes()[0].to_ascii_uppercase() {
        // `RC filter, revision 2` is a title, `RF a b 10k` is not.
        b'R' | b'C' | b'L' => {
            let third = words.nth(2);
            value(third) && (has_digit(name) || third.is_some_and(|third| third.parse::<f64>().is_err()))
        }
        b'V' | b'I' => {
            let third = words.nth(2);
            4 <= count && (value(third) || is_waveform(third.unwrap_or("")))
        }
        b'X' | b'U' | b'Q' | b'D' | b'M' | b'J' => 4 <= count && has_digit(name),
        b'E' | b'G' | b'F' | b'H' => 5 <= count && has_digit(name),
        _ => false,
    }
}

fn is_waveform(word: &str) -> bool {
    let name = word.split('(').next().unwrap_or("");
    ["DC", "AC", "SIN", "SINE", "PULSE", "PWL", "EXP"].iter().any(|wave| same_name(wave, name))
}

fn has_digit(name: &str) -> bool {
    name.bytes().any(|byte| byte.is_ascii_digit())
}

/// Whether a comment is a statement that was commented out, so that a continuation behind it belongs to it.
pub(super) fn was_statement(comment: &str) -> bool {
    let text = comment.trim_start_matches('*');
    let glued = !text.starts_with([' ', '\t']) && comment.starts_with('*');
    let text = text.trim();
    let Some(name) = text.split_whitespace().next() else { return false };
    if name.starts_with('.') {
        return is_directive(name);
    }
    let letter = name.starts_with(|first: char| first.is_ascii_alphabetic());
    let enough = 3 <= text.split_whitespace().count();
    is_statement(text) || (glued && letter && enough && has_digit(name))
}

/// The sign that a whole file is written in another language, said in a few words.
pub(super) fn foreign(text: &str) -> Option<&'static str> {
    let text = text.trim_start();
    let next = text.chars().nth(1).unwrap_or(' ');
    match text.chars().next() {
        Some('<') if next.is_alphabetic() || matches!(next, '?' | '!') => {
            Some("a document in angle brackets (XML)")
        }
        Some('(') if is_nested(text) => Some("nested lists in parentheses (S-expressions)"),
        Some('{') if text[1..].trim_start().starts_with(['"', '}']) => Some("a JSON document"),
        Some('[') if text[1..].trim_start().starts_with(['"', '{', '[']) => Some("a JSON document"),
        _ => None,
    }
}

/// Whether a text that begins with a parenthesis goes on in nested lists.
fn is_nested(text: &str) -> bool {
    let first = text.lines().next().unwrap_or("");
    let second = text.lines().skip(1).map(str::trim_start).find(|line| !line.is_empty());
    1 < first.matches('(').count() || second.is_some_and(|line| line.starts_with(['(', ')']))
}

/// Words that begin statements of languages whose statements have no leading dot.
const DOTLESS: [&str; 17] = [
    "simulator",
    "subckt",
    "ends",
    "parameters",
    "inline",
    "section",
    "endsection",
    "library",
    "endlibrary",
    "statistics",
    "ahdl_include",
    "module",
    "endmodule",
    "entity",
    "architecture",
    "include",
    "global",
];

/// Whether a statement begins with a word of such a language.
pub(super) fn is_dotless(name: &str) -> bool {
    let first = name.bytes().next().map(|first| first.to_ascii_lowercase());
    DOTLESS.iter().any(|word| word.bytes().next() == first && same_name(word, name))
}

/// Whether one of the first lines of a file, the title among them, is such a statement.
fn is_foreign(text: &str) -> bool {
    let dotless = |line: &str| line.split_whitespace().next().is_some_and(is_dotless);
    let listed = |line: &str| line.split_whitespace().nth(1).is_some_and(|second| second.starts_with('('));
    text.lines().take(20).filter(|line| dotless(line) || listed(line)).count() > 1
}

#[cfg(test)]
mod tests {
    use super::{foreign, is_statement, was_statement};

    #[test]
    fn titles_that_look_like_statements() {
        for line in ["R1 a b 10k", "V1 in 0 SIN(0 1 1k)", "XU1 a b c d e TL072", ".include parts.lib"] {
            assert!(is_statement(line), "{line}");
        }
        for line in [
            "RC filter, revision 2",
            "Low pass filter",
            "",
            "circuit",
            "Variable gain amplifier",
            "X marks it",
        ] {
            assert!(!is_statement(line), "{line}");
        }
    }

    #[test]
    fn commented_statements_keep_their_continuations() {
        assert!(was_statement("*V_V3 N01056 0  AC 0"));
        assert!(was_statement("* .model x npn(is=1"));
        assert!(!was_statement("* Node assignments"));
        assert!(!was_statement("*****************"));
        assert!(!was_statement("; note"));
    }

    #[test]
    fn other_documents_show_at_once() {
        assert!(foreign("<?xml version=\"1.0\"?>").is_some());
        assert!(foreign("(export (version D)\n  (design").is_some());
        assert!(foreign("{ \"netlist\": 1 }").is_some());
        assert!(foreign("* (a) filter\nR1 a b 1k").is_none());
        assert!(foreign("(c) somebody\nR1 a b 1k").is_none());
    }
}
