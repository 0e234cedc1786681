//! Events of the YAML crate into nodes, within bounds.

use super::{Kind, Name, Node, fault};
use crate::diagnostic::{Diagnostic, Label, Severity};
use crate::source::{FileId, Sources, Span, quote};
use serde_yaml::granit_parser::{Event, Options, Parser, ScalarStyle, Span as Marked, StrInput};
use std::collections::BTreeMap;

/// Longest text that is read, in bytes.
const LONGEST: usize = 8 << 20;
/// Most nodes of one text.
const MOST_NODES: usize = 200_000;
/// Deepest nesting in brackets, and as deep again by indentation; bounds the recursion below.
pub(super) const DEEPEST: usize = 32;

/// Reads a text as one YAML document; `None` where it holds nothing.
///
/// # Errors
/// The first fault of shape: not YAML, a key twice, an anchor, alias or tag, too large or too deep.
pub fn read(sources: &Sources, file: FileId) -> Result<Option<Node>, Diagnostic> {
    let text = &sources.file(file).text;
    if LONGEST < text.len() {
        let span = Span { file, start: 0, end: 0 };
        let message = format!("expected at most {} MB of YAML, found {} bytes", LONGEST >> 20, text.len());
        return Err(too_large(span, message));
    }
    let mut options = Options::default();
    options.emit_anchor_events = true;
    options.emit_unresolved_aliases = true;
    options.disallow_directives = true;
    options.set_emit_comments(false);
    options.flow_nesting_limit = DEEPEST;
    options.block_nesting_limit = DEEPEST;
    let parser = Parser::new_from_str_with_options(text, options);
    Loader { parser, text, file, nodes: 0 }.document()
}

struct Loader<'a> {
    parser: Parser<'a, StrInput<'a>>,
    text: &'a str,
    file: FileId,
    nodes: usize,
}

impl<'a> Loader<'a> {
    fn document(&mut self) -> Result<Option<Node>, Diagnostic> {
        let mut root = None;
        while let Some((event, marked)) = self.next()? {
            match event {
                Event::DocumentStart(..) if root.is_some() => {
                    let span = self.span(&marked);
                    return Err(shape(span, "expected one YAML document, found a second one"));
                }
                Event::StreamStart | Event::StreamEnd | Event::DocumentStart(..) | Event::DocumentEnd => {}
                event => root = Some(self.node(event, &marked)?),
            }
        }
        Ok(root.filter(|node| node.kind != Kind::Empty))
    }

    fn next(&mut self) -> Result<Option<(Event<'a>, Marked)>, Diagnostic> {
        match self.parser.next_event() {
            None => Ok(None),
            Some(Ok(event)) => Ok(Some(event)),
            Some(Err(error)) => Err(fault::syntax(&error, self.text, self.file)),
        }
    }

    fn expect(&mut self, inside: Span) -> Result<(Event<'a>, Marked), Diagnostic> {
        self.next()?.ok_or_else(|| shape(inside, "the text ends inside a list or mapping"))
    }

    fn node(&mut self, event: Event<'a>, marked: &Marked) -> Result<Node, Diagnostic> {
        let span = self.span(marked);
        self.nodes += 1;
        if MOST_NODES < self.nodes {
            return Err(too_large(span, format!("expected at most {MOST_NODES} values in one file")));
        }
        if let (Some(start), Event::Scalar(..) | Event::SequenceStart(..) | Event::MappingStart(..)) =
            (marked.tag_start, &event)
        {
            return Err(fault::marked_word(self.text, self.file, start.byte_offset().unwrap_or(0)));
        }
        match event {
            Event::Scalar(text, style, ..) => self.scalar(text.into_owned(), style, span),
            Event::SequenceStart(..) => self.list(span),
            Event::MappingStart(..) => self.map(span),
            Event::Anchor(..) | Event::Alias(..) | Event::UnresolvedAlias(..) => {
                Err(fault::marked_word(self.text, self.file, span.start as usize))
            }
            _ => Err(shape(span, "expected a value")),
        }
    }

    fn scalar(&mut self, text: String, style: ScalarStyle, span: Span) -> Result<Node, Diagnostic> {
        let plain = matches!(style, ScalarStyle::Plain);
        // The crate gives a value that isn't there the text `~`; only its span tells it from a written one.
        if plain && span.start == span.end {
            return Ok(Node { kind: Kind::Empty, span });
        }
        if plain && matches!(text.as_str(), "~" | "null" | "Null" | "NULL") {
            let found = format!("expected a value, found {}, which is nothing in YAML", quote(&text));
            return Err(shape(span, found)
                .help(format!("leave the key out, or write \"{text}\" in quotes if it is a name")));
        }
        Ok(Node { kind: Kind::Scalar(text), span })
    }

    fn list(&mut self, span: Span) -> Result<Node, Diagnostic> {
        let mut items = Vec::new();
        loop {
            match self.expect(span)? {
                (Event::SequenceEnd, _) => return Ok(Node { kind: Kind::List(items), span }),
                (event, marked) => items.push(self.node(event, &marked)?),
            }
        }
    }

    fn map(&mut self, span: Span) -> Result<Node, Diagnostic> {
        let mut entries: Vec<(Name, Node)> = Vec::new();
        let mut places = BTreeMap::new();
        loop {
            let (event, marked) = self.expect(span)?;
            if let Event::MappingEnd = event {
                return Ok(Node { kind: Kind::Map(entries), span });
            }
            let key = self.node(event, &marked)?;
            let Kind::Scalar(text) = key.kind else {
                let found = format!("expected a name as key, found {}", key.noun());
                return Err(shape(key.span, found).help("text that begins with `{` or `[` wants quotes"));
            };
            if let Some(first) = places.insert(text.clone(), key.span) {
                return Err(twice(&text, first, key.span));
            }
            let (event, marked) = self.expect(span)?;
            let value = self.node(event, &marked)?;
            entries.push((Name { text, span: key.span }, value));
        }
    }

    /// A collection's marks give its start alone; then the span is empty.
    fn span(&self, marked: &Marked) -> Span {
        let limit = self.text.len();
        let start = marked.start.byte_offset().unwrap_or(0).min(limit);
        let end = marked.end.byte_offset().unwrap_or(start).clamp(start, limit);
        Span { file: self.file, start: start as u32, end: end as u32 }
    }
}

fn shape(span: Span, message: impl Into<String>) -> Diagnostic {
    Diagnostic::at("yaml-shape", Severity::Error, span, message)
}

fn too_large(span: Span, message: String) -> Diagnostic {
    Diagnostic::at("yaml-size", Severity::Error, span, message)
}

fn twice(key: &str, first: Span, second: Span) -> Diagnostic {
    let message = format!("the key {} stands here a second time", quote(key));
    let mut fault = Diagnostic::at("duplicate-key", Severity::Error, second, message);
    fault.labels.push(Label { span: first, text: "first here".to_string() });
    fault
}
