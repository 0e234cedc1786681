//! The lines that a finding points at, drawn by miette out of short harmless copies.
//!
//! miette prints source text as it is and as long as it is. So it is never given a file: each group of
//! neighbouring lines is copied, escaped and cut to the page, and the labels are moved along with it.

mod copy;

use super::paper::{Paper, broken};
use crate::diagnostic::Label;
use crate::report::harmless::short_path;
use crate::source::{FileId, Sources};
use copy::{Chunk, Mark, chunks};
use miette::{
    Diagnostic, GraphicalReportHandler, GraphicalTheme, LabeledSpan, MietteError, MietteSpanContents,
    SourceCode, SourceSpan, SpanContents, ThemeCharacters, ThemeStyles,
};

/// Most places of one finding that are drawn.
const MOST: usize = 12;

/// Narrowest column of label text beside its line.
const LABEL: usize = 24;

/// One file's lines as miette reads them; its message is the place of the main label.
#[derive(Debug, thiserror::Error)]
#[error("{place}")]
struct Excerpt {
    place: String,
    chunks: Vec<Chunk>,
    labels: Vec<LabeledSpan>,
}

impl Diagnostic for Excerpt {
    fn source_code(&self) -> Option<&dyn SourceCode> {
        Some(self)
    }

    fn labels(&self) -> Option<Box<dyn Iterator<Item = LabeledSpan> + '_>> {
        Some(Box::new(self.labels.iter().cloned()))
    }
}

impl SourceCode for Excerpt {
    /// The whole chunk around a span. A span over two chunks is refused, which keeps them apart.
    fn read_span<'a>(
        &'a self,
        span: &SourceSpan,
        _before: usize,
        _after: usize,
    ) -> Result<Box<dyn SpanContents<'a> + 'a>, MietteError> {
        let end = span.offset() + span.len();
        let holds = |chunk: &&Chunk| chunk.offset <= span.offset() && end <= chunk.offset + chunk.text.len();
        let chunk = self.chunks.iter().find(holds).ok_or(MietteError::OutOfBounds)?;
        let covered = SourceSpan::from((chunk.offset, chunk.text.len()));
        let (text, line) = (chunk.text.as_bytes(), chunk.line as usize - 1);
        Ok(Box::new(MietteSpanContents::new(text, covered, line, 0, chunk.lines)))
    }
}

/// Draws the places, file by file, the main label's first.
pub(super) fn write(paper: &mut Paper, labels: &[Label], sources: &Sources) {
    let shown = &labels[..labels.len().min(MOST)];
    let mut files: Vec<FileId> = Vec::new();
    for label in shown {
        if !files.contains(&label.span.file) {
            files.push(label.span.file);
        }
    }
    let handler = handler(paper);
    for file in files {
        let those = shown.iter().filter(|label| label.span.file == file);
        let excerpt = excerpt(&those.collect::<Vec<_>>(), sources, paper.width());
        // Writing to a string can't fail, and every label lies in a chunk.
        let mut drawn = String::new();
        if handler.render_report(&mut drawn, &excerpt).is_ok() {
            drawn.lines().for_each(|line| paper.line(line));
        }
    }
    if shown.len() < labels.len() {
        paper.line(&format!("  and {} more places", labels.len() - shown.len()));
    }
}

/// One file's lines; `labels` aren't empty.
fn excerpt(labels: &[&Label], sources: &Sources, width: usize) -> Excerpt {
    let marks: Vec<Mark> = labels.iter().map(|label| Mark::new(label, sources)).collect();
    let last = marks.iter().map(|mark| mark.line).max().unwrap_or(1);
    let gutter = last.to_string().len() + 4;
    let room = width.saturating_sub(gutter).max(LABEL);
    let place = labels.first().map_or(String::new(), |label| place(label, sources, width));
    let file = labels.first().map_or("", |label| sources.file(label.span.file).text.as_str());
    let (chunks, spans) = chunks(file, marks, room);
    let labels =
        spans.into_iter().map(|span| LabeledSpan::new(beside(&span, room), span.offset, span.length));
    Excerpt { place, labels: labels.collect(), chunks }
}

/// A label's text in lines that end at the page's edge, where there is room at all.
fn beside(span: &copy::Moved, room: usize) -> Option<String> {
    let left = room.saturating_sub(span.middle + 5).max(LABEL);
    (!span.text.is_empty()).then(|| broken(&span.text, left).join("\n"))
}

/// `board.cir:31:1`.
fn place(label: &Label, sources: &Sources, width: usize) -> String {
    let place = sources.place(label.span);
    let numbers = format!(":{}:{}", place.line, place.column);
    let room = width.saturating_sub("  at ".len() + numbers.len());
    short_path(&sources.file(label.span.file).path, room) + &numbers
}

/// The drawing: thin lines, the accent under what is meant, line numbers dim.
fn handler(paper: &Paper) -> GraphicalReportHandler {
    let characters = ThemeCharacters {
        ltop: '┌',
        lbot: '└',
        vbar_break: '│',
        uarrow: '┬',
        error: "at".to_owned(),
        ..ThemeCharacters::unicode()
    };
    let (plain, coloured) = (ThemeStyles::none(), ThemeStyles::ansi());
    let styles = match paper.style.colour {
        true => ThemeStyles { highlights: vec![coloured.advice], linum: coloured.linum, ..plain },
        false => plain,
    };
    GraphicalReportHandler::new_themed(GraphicalTheme { characters, styles })
        .with_links(false)
        .with_wrap_lines(false)
        .without_cause_chain()
        .without_primary_span_start()
        .without_syntax_highlighting()
        .with_width(paper.width())
}
