//! Statements that begin with a dot.

use super::fault::shown;
use super::line::{Token, TokenKind};
use super::name::same_name;
use super::phrase::Phrase;
use super::reader::Reader;
use super::{Assignment, Model, Word};
use crate::source::Span;

/// What a directive asks of the loop that reads the files.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Request {
    /// Nothing: read on.
    Go,
    /// Read another file here, or one section of it.
    Include {
        /// Its path as written.
        path: Word,
        /// The section of a library.
        section: Option<Word>,
    },
    /// Pass over everything up to this directive.
    Skip(&'static str),
}

/// Statements without meaning for the circuit's static and small-signal limits.
const PASSED: [&str; 76] = [
    ".ac",
    ".aliases",
    ".alter",
    ".backanno",
    ".biaschk",
    ".connect",
    ".csparam",
    ".data",
    ".dc",
    ".del",
    ".dellib",
    ".distribution",
    ".disto",
    ".end",
    ".endaliases",
    ".endc",
    ".enddata",
    ".endl",
    ".endmachine",
    ".env",
    ".extern",
    ".fft",
    ".four",
    ".func",
    ".function",
    ".graph",
    ".hb",
    ".hdl",
    ".ic",
    ".if",
    ".elseif",
    ".else",
    ".endif",
    ".let",
    ".lin",
    ".loadbias",
    ".lstb",
    ".machine",
    ".malias",
    ".marker",
    ".mc",
    ".meas",
    ".measure",
    ".net",
    ".nodeset",
    ".noise",
    ".op",
    ".opt",
    ".option",
    ".options",
    ".plot",
    ".print",
    ".probe",
    ".protect",
    ".pss",
    ".pz",
    ".save",
    ".savebias",
    ".scale",
    ".sens",
    ".set",
    ".shape",
    ".sp",
    ".step",
    ".stimlib",
    ".stimulus",
    ".temp",
    ".text",
    ".tf",
    ".tran",
    ".unprotect",
    ".vector",
    ".watch",
    ".wave",
    ".wcase",
    ".width",
];

/// Statements that are read.
const READ: [&str; 16] = [
    ".subckt",
    ".macro",
    ".ends",
    ".eom",
    ".param",
    ".params",
    ".parameter",
    ".model",
    ".global",
    ".include",
    ".inc",
    ".incl",
    ".lib",
    ".title",
    ".control",
    ".prot",
];

/// Blocks that are passed over whole, and what ends them.
const BLOCKS: [(&str, &str); 4] =
    [(".control", ".endc"), (".aliases", ".endaliases"), (".data", ".enddata"), (".machine", ".endmachine")];

/// Whether a word is a directive that is known.
pub(super) fn is_directive(word: &str) -> bool {
    PASSED.iter().chain(&READ).any(|known| same_name(known, word))
}

/// Reads one directive.
pub(super) fn read(reader: &mut Reader, phrase: &Phrase) -> Request {
    let word = phrase.of(&phrase.tokens[0]);
    let is = |name: &str| same_name(word, name);
    if is(".subckt") || is(".macro") {
        open(reader, phrase);
    } else if is(".ends") || is(".eom") {
        let name = phrase.tokens.get(1).map(|name| phrase.word(name));
        reader.close(phrase, name);
    } else if is(".param") || is(".params") || is(".parameter") {
        let list = wide_assignments(phrase);
        reader.parameters(list);
    } else if is(".model") {
        model(reader, phrase);
    } else if is(".global") {
        reader.netlist.globals.extend(phrase.tokens[1..].iter().map(|name| phrase.word(name)));
    } else if is(".include") || is(".inc") || is(".incl") {
        return include(reader, phrase);
    } else if is(".lib") {
        return library(reader, phrase);
    } else if is(".title") {
        reader.netlist.title = whole(phrase, &phrase.tokens[1..]).or(reader.netlist.title);
    } else if let Some((_, end)) = BLOCKS.iter().find(|(begin, _)| is(begin)) {
        return Request::Skip(end);
    } else if !is_directive(word) {
        let message = format!("unknown directive {}; passed over", shown(word));
        reader.faults.warning("unknown-directive", phrase.word(&phrase.tokens[0]), message);
    }
    Request::Go
}

/// `.subckt name ports [params: key=value ...]`.
fn open(reader: &mut Reader, phrase: &Phrase) {
    let Some((name, ports)) = phrase.positional().split_first() else {
        reader.faults.error(
            "missing-name",
            phrase.span,
            "expected the name of the subcircuit behind `.subckt`",
        );
        reader.open(phrase.word(&phrase.tokens[0]), Vec::new(), Vec::new(), phrase);
        return;
    };
    let marks = |word: &&Token| {
        !["params:", "optional:", "text:"].iter().any(|mark| same_name(phrase.of(word), mark))
    };
    let ports = ports.iter().take_while(marks).filter(|port| !matches!(phrase.of(port), "(" | ")"));
    let ports = ports
        .map(|port| phrase.place(phrase.of(port).trim_start_matches('(')))
        .map(|port| trimmed(phrase, port));
    let ports = ports.collect();
    reader.open(phrase.word(name), ports, phrase.assignments(phrase.first_key()), phrase);
}

/// A port without a parenthesis that closes the list around it.
fn trimmed(phrase: &Phrase, port: Word) -> Word {
    let text = &phrase.text[port.start as usize..port.end as usize];
    let unbalanced = text.ends_with(')') && text.matches('(').count() < text.matches(')').count();
    Word { end: port.end - u32::from(unbalanced), ..port }
}

/// `.model name type(key=value ...)`, with or without parentheses.
fn model(reader: &mut Reader, phrase: &Phrase) {
    let [_, name, kind, ..] = phrase.tokens else {
        reader.faults.error("missing-name", phrase.span, "expected a name and a type behind `.model`");
        return;
    };
    let type_name = phrase.of(kind).split('(').next().unwrap_or("");
    let parameters = model_parameters(phrase);
    reader.model(Model { name: phrase.word(name), kind: phrase.place(type_name), parameters });
}

/// The pairs of a model, parentheses and commas around them cut off.
fn model_parameters(phrase: &Phrase) -> Vec<Assignment> {
    let pair = |(key, value): (Token, Token)| {
        let key = phrase.of(&key).rsplit(['(', ',']).next().unwrap_or("");
        let mut text = phrase.of(&value);
        if value.kind == TokenKind::Bare {
            text = text.split(',').next().unwrap_or("");
            if text.matches('(').count() < text.matches(')').count() {
                text = text.trim_end_matches(')');
            }
        }
        (!key.is_empty()).then(|| Assignment { name: phrase.place(key), value: phrase.place(text) })
    };
    phrase.pairs(2).filter_map(pair).collect()
}

/// `.param` assignments, whose values may hold blanks: `a = 2 * b  c = 1`.
fn wide_assignments(phrase: &Phrase) -> Vec<Assignment> {
    let tokens = phrase.tokens;
    let equals: Vec<usize> = (2..tokens.len()).filter(|at| tokens[*at].kind == TokenKind::Equals).collect();
    let mut list = Vec::with_capacity(equals.len());
    for (place, at) in equals.iter().enumerate() {
        let (name, Some(first)) = (&tokens[at - 1], tokens.get(at + 1)) else { break };
        if name.kind != TokenKind::Bare || first.kind == TokenKind::Equals {
            continue;
        }
        let next = equals.get(place + 1).map_or(tokens.len(), |next| next - 1);
        let value = if next == at + 1 {
            // In `a=1,b=2` the word `1,b` holds the next name.
            phrase.place(phrase.of(first).split(',').next().unwrap_or(""))
        } else {
            let last = if first.kind == TokenKind::Bare { &tokens[next - 1] } else { first };
            Span { end: last.end, ..phrase.word(first) }
        };
        let name = phrase.of(name).rsplit(',').next().unwrap_or("");
        list.push(Assignment { name: phrase.place(name), value });
    }
    list
}

/// All from the first to the last of some tokens, where they stand on one line.
fn whole(phrase: &Phrase, tokens: &[Token]) -> Option<Word> {
    let (first, last) = (tokens.first()?, tokens.last()?);
    let word = Word { end: last.end, ..phrase.word(first) };
    (!phrase.text[word.start as usize..word.end as usize].contains('\n')).then_some(word)
}

/// `.include path`; without quotes the path may hold blanks.
fn include(reader: &mut Reader, phrase: &Phrase) -> Request {
    let rest = &phrase.tokens[1..];
    let quoted = rest.first().filter(|first| matches!(first.kind, TokenKind::Quoted | TokenKind::Expression));
    match quoted.map(|path| phrase.word(path)).or_else(|| whole(phrase, rest)) {
        Some(path) => Request::Include { path, section: None },
        None => {
            reader.faults.error("missing-name", phrase.span, "expected a path behind the include");
            Request::Go
        }
    }
}

/// `.lib path [section]`, or inside a library `.lib section`, which `.endl` ends.
fn library(reader: &mut Reader, phrase: &Phrase) -> Request {
    let rest = &phrase.tokens[1..];
    let looks_like_path = |token: &Token| phrase.of(token).contains(['.', '/', '\\']);
    match rest {
        [] => {
            reader.faults.error("missing-name", phrase.span, "expected a path or a section behind `.lib`");
            Request::Go
        }
        [section]
            if section.kind == TokenKind::Bare
                && !looks_like_path(section)
                && reader.has_sections(phrase) =>
        {
            if reader.wants(phrase.of(section)) {
                Request::Go
            } else {
                Request::Skip(".endl")
            }
        }
        [path, section] if path.kind != TokenKind::Bare || !looks_like_path(section) => {
            Request::Include { path: phrase.word(path), section: Some(phrase.word(section)) }
        }
        _ => include(reader, phrase),
    }
}
