//! The page that a text report is written on: its width, its accent, and harmless paragraphs.

use super::Style;
use crate::report::harmless::{harmless, short};
use textwrap::core::display_width;
use textwrap::{Options, WordSeparator, WordSplitter, fill};

/// Narrowest page that lines are laid out for.
const NARROWEST: usize = 40;

/// Longest paragraph, in columns; no honest message comes near.
const LONGEST: usize = 2_000;

/// A page that is being written.
pub(super) struct Paper {
    /// What stands on it.
    pub out: String,
    /// How it is laid out.
    pub style: Style,
}

impl Paper {
    /// An empty page.
    pub fn new(style: Style) -> Paper {
        Paper { out: String::new(), style: Style { width: style.width.max(NARROWEST), ..style } }
    }

    /// Columns of the page.
    pub fn width(&self) -> usize {
        self.style.width
    }

    /// Words in the accent colour, where there is one.
    pub fn accent(&self, words: &str) -> String {
        if self.style.colour { format!("\u{1b}[36m{words}\u{1b}[0m") } else { words.to_owned() }
    }

    /// An empty line, unless the page is empty or ends in one.
    pub fn blank(&mut self) {
        if !self.out.is_empty() && !self.out.ends_with("\n\n") {
            self.out.push('\n');
        }
    }

    /// One line as it is; the caller made it harmless and short enough.
    pub fn line(&mut self, line: &str) {
        self.out.push_str(line.trim_end());
        self.out.push('\n');
    }

    /// Text of users, harmless and wrapped, behind `first`, further lines behind `rest`.
    pub fn paragraph(&mut self, first: &str, rest: &str, text: &str) {
        let options = self.options().initial_indent(first).subsequent_indent(rest);
        let filled = fill(&short(text, LONGEST), options);
        filled.lines().for_each(|line| self.line(line));
    }

    /// The name of what follows, with a line to the page's edge.
    pub fn title(&mut self, name: &str) {
        let name = crate::report::harmless::short_path(name, self.width().saturating_sub(6));
        let rule = "─".repeat(self.width().saturating_sub(display_width(&name) + 4));
        let line = format!("── {} {rule}", self.accent(&name));
        self.line(&line);
    }

    /// How text is broken into lines: at spaces, never inside a slug or a path that has room.
    fn options(&self) -> Options<'static> {
        Options::new(self.width())
            .word_separator(WordSeparator::AsciiSpace)
            .word_splitter(WordSplitter::NoHyphenation)
    }

    /// A text in lines of so many columns.
    pub fn broken(text: &str, width: usize) -> Vec<String> {
        let options = Options::new(width)
            .word_separator(WordSeparator::AsciiSpace)
            .word_splitter(WordSplitter::NoHyphenation);
        textwrap::wrap(&harmless(text), options).into_iter().map(String::from).collect()
    }

    /// What was written.
    pub fn done(self) -> String {
        self.out
    }
}

/// `1 error`, `2 errors`.
pub(super) fn count(number: usize, word: &str) -> String {
    format!("{number} {word}{}", if number == 1 { "" } else { "s" })
}
