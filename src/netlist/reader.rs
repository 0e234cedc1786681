//! The loop over files and logical lines, and the scopes that statements go to.

use super::directive::{self, Request};
use super::element;
use super::fault::{Faults, shown};
use super::line::{Line, TokenKind, next_line};
use super::name::same_name;
use super::phrase::Phrase;
use super::{Assignment, Include, Model, Netlist, Scope, Statement, Subcircuit, Word};
use super::{limit, sheet, title};
use crate::source::{FileId, Sources, Span};

/// What is known while the files are read.
#[derive(Debug, Default)]
pub(super) struct Reader {
    pub netlist: Netlist,
    pub faults: Faults,
    /// Definitions that are open, outermost first.
    open: Vec<usize>,
    /// The directive that ends a block that is passed over.
    skip: Option<&'static str>,
    /// What is known of the file that is being read.
    current: State,
    statements: usize,
    bytes: usize,
    stopped: bool,
}

/// What is known of one file while it is read.
#[derive(Debug, Default)]
struct State {
    /// The section wanted of it.
    section: Option<String>,
    /// Whether it defines sections, once that is known.
    sections: Option<bool>,
    /// Whether a statement of another language was reported.
    foreign: bool,
    /// Whether the rest of it is left unread.
    ended: bool,
}

/// Bytes of a long line of an export; so many lines at least are made room for at once, which is given back.
const TYPICAL_LINE: usize = 48;

/// A file that is being read, and how far.
struct Frame {
    file: FileId,
    at: usize,
    state: State,
}

type Load<'a> = &'a mut dyn FnMut(&mut Sources, &str, FileId) -> Include;

impl Reader {
    /// Reads a file and all that it includes.
    pub fn run(&mut self, sources: &mut Sources, file: FileId, load: Load) {
        let mut line = Line::default();
        let mut frames = vec![Frame { file, at: self.begin(sources, file), state: State::default() }];
        let first = sources.file(file);
        if frames[0].at < first.text.len() {
            let (title, at) = title::take(&first.text, &first.path, file, &mut self.faults);
            self.netlist.title = title;
            frames[0].at = at;
        }
        self.netlist.top.elements.reserve_exact(first.text.len() / TYPICAL_LINE);
        while let Some(frame) = frames.last_mut() {
            self.current = std::mem::take(&mut frame.state);
            let request = self.file(&sources.file(frame.file).text, frame, &mut line);
            frame.state = std::mem::take(&mut self.current);
            match request {
                Some((path, section, span)) => {
                    let section = section.map(|section| sources.text(section).to_owned());
                    if let Some(file) = self.include(sources, &frames, path, span, load) {
                        let at = self.begin(sources, file);
                        frames.push(Frame { file, at, state: State { section, ..State::default() } });
                    }
                }
                None => {
                    frames.pop();
                }
            }
        }
        self.finish_scopes(sources);
    }

    /// Where a file's statements begin; at its end where it isn't read.
    fn begin(&mut self, sources: &Sources, file: FileId) -> usize {
        let text = &sources.file(file).text;
        let span = Span { file, start: 0, end: 0 };
        self.bytes = self.bytes.saturating_add(text.len());
        if limit::FILE_BYTES < text.len() || limit::TOTAL_BYTES < self.bytes {
            let message = format!(
                "the text is too long: at most {} bytes a file and {} bytes in all are read",
                limit::FILE_BYTES,
                limit::TOTAL_BYTES
            );
            self.faults.error("file-size-limit", span, message);
            return text.len();
        }
        if let Some(found) = title::foreign(text) {
            self.faults.error("not-a-netlist", span, format!("expected a netlist, found {found}"));
            return text.len();
        }
        0
    }

    /// Reads on in one file up to an include line or its end.
    fn file(&mut self, text: &str, frame: &mut Frame, line: &mut Line) -> Option<(Word, Option<Word>, Span)> {
        while !self.stopped && !self.current.ended && next_line(text, &mut frame.at, line) {
            let span = Span { file: frame.file, start: line.start as u32, end: line.first_end as u32 };
            let Some(first) = line.tokens.first().copied() else { continue };
            let word = first.of(text);
            if let Some(end) = self.skip {
                if same_name(word, end) {
                    self.skip = None;
                }
                continue;
            }
            if line.sheet {
                sheet::join(text, frame.file, &mut line.tokens, &mut self.faults);
            }
            let phrase = Phrase {
                text,
                file: frame.file,
                tokens: &line.tokens,
                span,
                sheet: line.sheet,
                crossed: line.crossed,
            };
            if !self.readable(&phrase, line) {
                continue;
            }
            if !word.starts_with('.') {
                self.element(&phrase);
                continue;
            }
            match directive::read(self, &phrase) {
                Request::Go => {}
                Request::Skip(end) => self.skip = Some(end),
                Request::Include { path, section } => return Some((path, section, span)),
            }
        }
        None
    }

    /// Whether a statement can be read at all.
    fn readable(&mut self, phrase: &Phrase, line: &Line) -> bool {
        if line.long {
            let message = format!("the line is too long: at most {} bytes are read", limit::LINE_BYTES);
            self.faults.error("line-length-limit", phrase.span, message);
            return false;
        }
        let first = &phrase.tokens[0];
        let word = phrase.of(first);
        if let Some(at) = line.unclosed {
            let start = at as u32;
            let span = Span { file: phrase.file, start, end: start + 1 };
            self.faults.error(
                "unclosed-expression",
                span,
                "nothing closes the brace or quote that opens here",
            );
        }
        if first.kind != TokenKind::Bare
            || phrase.tokens.get(1).is_some_and(|next| next.kind == TokenKind::Equals)
        {
            let message = format!("expected an element or a directive, found {}", shown(word));
            self.faults.warning("unknown-element", phrase.span, message);
            return false;
        }
        let listed = phrase.tokens.get(1).is_some_and(|next| phrase.of(next).starts_with('('));
        let controlled =
            matches!(word.as_bytes()[0].to_ascii_uppercase(), b'E' | b'G' | b'F' | b'H' | b'B' | b'.');
        let dotless = title::is_dotless(word);
        if (listed && !controlled) || dotless {
            if !self.current.foreign {
                let message = format!(
                    "expected a netlist, found a statement of another language: {}",
                    shown(&phrase.text[phrase.span.start as usize..phrase.span.end as usize])
                );
                self.faults.error("not-a-netlist", phrase.span, message);
            }
            self.current.foreign = true;
            // Without its definitions the rest would be read into the wrong scope.
            self.current.ended |= dotless;
            return false;
        }
        true
    }

    fn element(&mut self, phrase: &Phrase) {
        if !self.room(phrase) {
            return;
        }
        let Some((nodes, kind)) = element::read(phrase, &mut self.faults) else { return };
        let name = phrase.word(&phrase.tokens[0]);
        if !nodes.iter().chain([&name]).all(|word| self.short(*word)) {
            return;
        }
        let whole = |word: &Word| {
            let text = &phrase.text[word.start as usize..word.end as usize];
            !text.is_empty() && (!phrase.crossed || !text.contains('\n'))
        };
        if let Some(node) = nodes.iter().find(|node| !whole(node)) {
            let message = format!("expected the name of a net of {}", shown(phrase.of(&phrase.tokens[0])));
            self.faults.error("unreadable-name", *node, message);
            return;
        }
        grow(&mut self.scope().elements).push(Statement { name, nodes, kind, span: phrase.span });
    }

    /// Counts a statement; past the limit reading stops.
    fn room(&mut self, phrase: &Phrase) -> bool {
        self.statements += 1;
        if self.statements <= limit::STATEMENTS {
            return true;
        }
        self.stopped = true;
        let message = format!("too many statements: at most {} are read", limit::STATEMENTS);
        self.faults.error("statement-limit", phrase.span, message);
        false
    }

    /// Whether a name keeps its limit.
    fn short(&mut self, name: Word) -> bool {
        if (name.end - name.start) as usize <= limit::NAME_BYTES {
            return true;
        }
        let message = format!("the name is too long: at most {} bytes are read", limit::NAME_BYTES);
        self.faults.error("name-length-limit", name, message);
        false
    }

    /// The innermost open scope.
    fn scope(&mut self) -> &mut Scope {
        match self.open.last() {
            Some(open) => &mut self.netlist.subcircuits[*open].body,
            None => &mut self.netlist.top,
        }
    }

    /// Begins a definition.
    pub fn open(&mut self, name: Word, ports: Vec<Word>, defaults: Vec<Assignment>, phrase: &Phrase) {
        if !self.room(phrase) {
            return;
        }
        if limit::SUBCIRCUIT_DEPTH <= self.open.len() {
            let message = format!(
                "definitions are nested too deep: at most {} levels are read",
                limit::SUBCIRCUIT_DEPTH
            );
            self.faults.error("nesting-limit", phrase.span, message);
            self.stopped = true;
            return;
        }
        let all_short = std::iter::once(&name).chain(&ports).all(|word| self.short(*word));
        let ports = if all_short { ports } else { Vec::new() };
        let index = self.netlist.subcircuits.len();
        let parent = self.open.last().copied();
        self.scope().definitions.push(index);
        self.netlist.subcircuits.push(Subcircuit { name, ports, defaults, body: Scope::default(), parent });
        self.open.push(index);
    }

    /// Ends a definition: the innermost one, or by its name an outer one and those inside it.
    pub fn close(&mut self, phrase: &Phrase, name: Option<Word>) {
        let text = |word: Word| &phrase.text[word.start as usize..word.end as usize];
        let Some(innermost) = self.open.pop() else {
            self.faults.error(
                "unbalanced-subckt",
                phrase.span,
                "`.ends` without a `.subckt` that it could end",
            );
            return;
        };
        let Some(name) = name else { return };
        let same_file = |open: &usize| self.netlist.subcircuits[*open].name.file == phrase.file;
        let called = |open: &usize| {
            same_file(open) && same_name(text(self.netlist.subcircuits[*open].name), text(name))
        };
        if !same_file(&innermost) || called(&innermost) {
            return;
        }
        match self.open.iter().rposition(called) {
            Some(outer) => {
                let message = format!("{} ends while a definition inside it is open", shown(text(name)));
                self.faults.error("unbalanced-subckt", phrase.span, message);
                self.open.truncate(outer);
            }
            None => {
                let open = text(self.netlist.subcircuits[innermost].name);
                let message =
                    format!("expected `.ends` of {}, found that of {}", shown(open), shown(text(name)));
                self.faults.warning("unbalanced-subckt", name, message);
            }
        }
    }

    /// Keeps parameters in the open scope.
    pub fn parameters(&mut self, list: Vec<Assignment>) {
        for assignment in list {
            self.statements += 1;
            if self.short(assignment.name) {
                self.scope().parameters.push(assignment);
            }
        }
    }

    /// Keeps a model in the open scope.
    pub fn model(&mut self, model: Model) {
        self.statements += 1;
        if self.short(model.name) {
            self.scope().models.push(model);
        }
    }

    /// Whether the section that begins here is the one that the include line asks for.
    pub fn wants(&self, section: &str) -> bool {
        self.current.section.as_deref().is_some_and(|wanted| same_name(wanted, section))
    }

    /// Whether the file that is being read defines sections.
    pub fn has_sections(&mut self, phrase: &Phrase) -> bool {
        *self.current.sections.get_or_insert_with(|| {
            let first =
                |line: &str| line.split_whitespace().next().is_some_and(|word| same_name(word, ".endl"));
            phrase.text.lines().any(first)
        })
    }

    /// Answers an include line: the file to read, or why there is none.
    fn include(
        &mut self,
        sources: &mut Sources,
        frames: &[Frame],
        path: Word,
        span: Span,
        load: Load,
    ) -> Option<FileId> {
        let from = path.file;
        let text = sources.text(path).to_owned();
        let name = shown(&text);
        if limit::INCLUDE_DEPTH <= frames.len() {
            let message = format!(
                "files include one another too deep: at most {} levels are read",
                limit::INCLUDE_DEPTH
            );
            self.faults.error("include-limit", span, message);
            return None;
        }
        if limit::INCLUDES <= self.netlist.includes.len() {
            let message = format!("too many include lines: at most {} are followed", limit::INCLUDES);
            self.faults.error("include-limit", span, message);
            return None;
        }
        match load(sources, &text, from) {
            Include::Found(file) => {
                let same = |frame: &Frame| {
                    frame.file == file || sources.file(frame.file).path == sources.file(file).path
                };
                if frames.iter().any(same) {
                    self.faults.error("include-loop", span, format!("{name} includes itself"));
                    return None;
                }
                self.netlist.includes.push((file, span));
                Some(file)
            }
            Include::Missing(reason) => {
                self.faults.note("missing-include", span, format!("{name} isn't there: {reason}"));
                None
            }
            Include::Refused(reason) => {
                self.faults.error("include-refused", span, format!("{name} is not read: {reason}"));
                None
            }
        }
    }

    /// Says which definitions nothing ends, and gives back memory that isn't used.
    fn finish_scopes(&mut self, sources: &Sources) {
        for open in std::mem::take(&mut self.open) {
            let name = self.netlist.subcircuits[open].name;
            let message =
                format!("nothing ends the definition of {}; expected `.ends`", shown(sources.text(name)));
            self.faults.error("unbalanced-subckt", name, message);
        }
        self.netlist.top.elements.shrink_to_fit();
        for subcircuit in &mut self.netlist.subcircuits {
            subcircuit.body.elements.shrink_to_fit();
        }
    }
}

/// Makes room for one more by a quarter of the length, where doubling would waste memory on large netlists.
fn grow<T>(list: &mut Vec<T>) -> &mut Vec<T> {
    if list.len() == list.capacity() {
        list.reserve_exact((list.len() / 4).max(4));
    }
    list
}
