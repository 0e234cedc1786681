//! Copies of source lines: escaped, cut to a width, with the marks moved along.

use crate::diagnostic::Label;
use crate::report::harmless::{columns, push, short};
use crate::source::Sources;
use textwrap::core::display_width;

/// Unmarked lines that are still shown between two marked ones.
const BETWEEN: u32 = 1;

/// Columns that are kept before the first mark of a line that is cut at its front.
const BEFORE: usize = 12;

/// Spaces that a tabulator becomes.
const TAB: &str = "    ";

/// Longest text of a label.
const TEXT: usize = 300;

/// A label on its line, in bytes of the file.
#[derive(Debug)]
pub(super) struct Mark {
    /// The line, from 1.
    pub line: u32,
    begin: usize,
    start: usize,
    end: usize,
    text: String,
}

impl Mark {
    /// A label's first line with what it marks there.
    pub fn new(label: &Label, sources: &Sources) -> Mark {
        let text = sources.file(label.span.file).text.as_str();
        let start = boundary(text, label.span.start as usize);
        let begin = text[..start].rfind('\n').map_or(0, |at| at + 1);
        let end = boundary(text, label.span.end as usize).clamp(start, line_end(text, start));
        Mark { line: sources.place(label.span).line, begin, start, end, text: short(&label.text, TEXT) }
    }
}

/// Neighbouring lines, each with a newline behind it, at an offset that no other chunk of the file has.
#[derive(Debug)]
pub(super) struct Chunk {
    /// Where it begins among all chunks.
    pub offset: usize,
    /// Number of its first line, from 1.
    pub line: u32,
    /// How many lines it has.
    pub lines: usize,
    /// The lines.
    pub text: String,
}

/// A mark in the copy.
#[derive(Debug)]
pub(super) struct Moved {
    /// Its first byte among all chunks.
    pub offset: usize,
    /// Its length in bytes.
    pub length: usize,
    /// Column of its middle.
    pub middle: usize,
    /// What is said of it.
    pub text: String,
}

/// Copies the marked lines of a file, each cut to so many columns.
pub(super) fn chunks(file: &str, mut marks: Vec<Mark>, room: usize) -> (Vec<Chunk>, Vec<Moved>) {
    marks.sort_by_key(|mark| (mark.line, mark.start, mark.end));
    let (mut chunks, mut moved) = (Vec::<Chunk>::new(), Vec::new());
    for on_line in marks.chunk_by(|left, right| left.line == right.line) {
        let first = &on_line[0];
        let near = chunks.last().is_some_and(|chunk| first.line <= chunk.line + chunk.lines as u32 + BETWEEN);
        if !near {
            // The byte left free between two chunks keeps a mark at an end out of the next one.
            let offset = chunks.last().map_or(0, |chunk| chunk.offset + chunk.text.len() + 1);
            chunks.push(Chunk { offset, line: first.line, lines: 0, text: String::new() });
        }
        let Some(chunk) = chunks.last_mut() else { continue };
        chunk.fill(file, first, room);
        let copy = Copy::new(file, on_line, room);
        let base = chunk.offset + chunk.text.len();
        moved.extend(on_line.iter().map(|mark| copy.moved(mark, base)));
        chunk.add(&copy.text);
    }
    (chunks, moved)
}

impl Chunk {
    /// Adds the unmarked lines before a marked one.
    fn fill(&mut self, file: &str, until: &Mark, room: usize) {
        let missing = until.line.saturating_sub(self.line + self.lines as u32) as usize;
        let before = file[..until.begin].strip_suffix('\n').unwrap_or("");
        let mut lines: Vec<&str> = before.rsplit('\n').take(missing).collect();
        lines.reverse();
        for line in lines {
            let mut shown = String::new();
            line.trim_end_matches('\r').chars().take(room).for_each(|character| write(&mut shown, character));
            self.add(&short(&shown, room));
        }
    }

    /// Adds a line; an empty one as a space, for a drawing needs something to stand under.
    fn add(&mut self, line: &str) {
        self.text.push_str(if line.is_empty() { " " } else { line });
        self.text.push('\n');
        self.lines += 1;
    }
}

/// A harmless copy of one line, or of a stretch of it.
struct Copy {
    text: String,
    /// Bytes of the file with their places in the copy, in order; the last is where the copy ends.
    places: Vec<(usize, usize)>,
}

impl Copy {
    fn new(file: &str, marks: &[Mark], room: usize) -> Copy {
        let (begin, first) = (marks[0].begin, marks[0].start);
        let end = line_end(file, first);
        let whole = Copy::from(file, begin, end, room);
        let needed = marks.iter().map(|mark| mark.end).max().unwrap_or(end);
        if whole.places.last().is_some_and(|(at, _)| needed <= *at) {
            return whole;
        }
        let before =
            file[begin..first].char_indices().rev().nth(BEFORE - 1).map_or(begin, |(at, _)| begin + at);
        Copy::from(file, before, end, room)
    }

    /// Copies from a byte on until the line or the room ends; ellipses stand where something is left out.
    fn from(file: &str, from: usize, end: usize, room: usize) -> Copy {
        let cut_before = !file[..from].is_empty() && !file[..from].ends_with('\n');
        let mut copy = Copy { text: String::new(), places: Vec::new() };
        if cut_before {
            copy.text.push('…');
        }
        let mut used = 4 * usize::from(cut_before);
        for (at, character) in file[from..end].char_indices() {
            copy.places.push((from + at, copy.text.len()));
            let start = copy.text.len();
            write(&mut copy.text, character);
            // As in `short`: what has no width counts a quarter of a column.
            used += copy.text[start..].chars().map(|shown| (4 * columns(shown)).max(1)).sum::<usize>();
            let more = from + at + character.len_utf8() < end;
            if 4 * room.saturating_sub(usize::from(more)) < used {
                copy.text.truncate(start);
                copy.text.push('…');
                return copy;
            }
        }
        copy.places.push((end, copy.text.len()));
        copy
    }

    /// Where a byte of the file stands in the copy; what was cut away stands at the ellipsis.
    fn place(&self, byte: usize) -> usize {
        let after = self.places.partition_point(|(at, _)| *at < byte);
        self.places.get(after).map_or(self.text.len(), |(_, place)| *place)
    }

    fn moved(&self, mark: &Mark, base: usize) -> Moved {
        let last = self.places.last().map_or(0, |(_, place)| *place);
        let start = self.place(mark.start).min(last);
        let end = self.place(mark.end).max(start);
        let middle = (display_width(&self.text[..start]) + display_width(&self.text[..end])) / 2;
        Moved { offset: base + start, length: end - start, middle, text: mark.text.clone() }
    }
}

/// Appends a character of a source line.
fn write(out: &mut String, character: char) {
    match character {
        '\t' => out.push_str(TAB),
        _ => push(out, character),
    }
}

/// Where the line around a byte ends, its line end left out.
fn line_end(text: &str, at: usize) -> usize {
    let end = text[at..].find('\n').map_or(text.len(), |newline| at + newline);
    let trimmed = text[at..end].trim_end_matches('\r');
    at + trimmed.len()
}

/// The nearest place at or before a byte where a character begins.
fn boundary(text: &str, at: usize) -> usize {
    let at = at.min(text.len());
    (0..=at).rev().find(|at| text.is_char_boundary(*at)).unwrap_or(0)
}
