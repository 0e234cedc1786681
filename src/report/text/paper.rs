//! The page that a text report is written on: its width, its accent, and harmless paragraphs.

use super::Style;
use crate::quantity::parse_any;
use crate::report::harmless::{harmless, short, short_path};
use textwrap::core::display_width;
use textwrap::{Options, WordSeparator, WordSplitter, fill};

/// Narrowest page that lines are laid out for.
const NARROWEST: usize = 40;

/// Longest paragraph, in columns; no honest message comes near.
const LONGEST: usize = 2_000;

/// Stands for a space at which no line ends; the line-breaking algorithm only breaks at plain spaces.
const GLUE: &str = "\u{a0}";

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
        let options = options(self.width()).initial_indent(first).subsequent_indent(rest);
        let filled = fill(&glued(&short(text, LONGEST)), options);
        filled.lines().for_each(|line| self.line(&line.replace(GLUE, " ")));
    }

    /// The name of what follows, with a line to the page's edge.
    pub fn title(&mut self, name: &str) {
        let name = short_path(name, self.width().saturating_sub(6));
        let rule = "─".repeat(self.width().saturating_sub(display_width(&name) + 4));
        let line = format!("── {} {rule}", self.accent(&name));
        self.line(&line);
    }

    /// What was written.
    pub fn done(self) -> String {
        self.out
    }
}

/// How text is broken into lines: at spaces, never inside a slug or a path that has room.
fn options<'a>(width: usize) -> Options<'a> {
    Options::new(width).word_separator(WordSeparator::AsciiSpace).word_splitter(WordSplitter::NoHyphenation)
}

/// A text in harmless lines of so many columns.
pub(super) fn broken(text: &str, width: usize) -> Vec<String> {
    let glued = glued(&harmless(text));
    let lines = textwrap::wrap(&glued, options(width));
    lines.into_iter().map(|line| line.replace(GLUE, " ")).collect()
}

/// The text with a glue for each space where no line should end: inside what is to be typed, which stands in
/// backticks, and between a number and its unit.
fn glued(text: &str) -> String {
    let paired = text.matches('`').count().is_multiple_of(2);
    let mut quoted = false;
    let mut before = "";
    let mut out = String::with_capacity(text.len());
    for (at, word) in text.split(' ').enumerate() {
        if 0 < at {
            out.push_str(if quoted && paired || is_unit(before, word) { GLUE } else { " " });
        }
        out.push_str(word);
        quoted ^= word.matches('`').count() % 2 == 1;
        before = word;
    }
    out
}

/// Whether a word is the unit of the number before it.
fn is_unit(number: &str, word: &str) -> bool {
    let unit = word.trim_end_matches(|letter: char| letter.is_ascii_punctuation() && letter != '%');
    number.ends_with(|digit: char| digit.is_ascii_digit())
        && !unit.is_empty()
        && parse_any(&format!("1 {unit}")).is_ok()
}

/// `1 error`, `2 errors`.
pub(super) fn count(number: usize, word: &str) -> String {
    format!("{number} {word}{}", if number == 1 { "" } else { "s" })
}

#[cfg(test)]
mod tests {
    use super::broken;

    #[test]
    fn keeps_together_what_belongs_together() {
        assert_eq!(broken("a gain of 10 %, or less", 14), ["a gain of", "10 %, or less"]);
        assert_eq!(broken("write `gain: 10 % of it` there", 20), ["write", "`gain: 10 % of it`", "there"]);
        assert_eq!(broken("an odd ` is no quotation", 12), ["an odd ` is", "no quotation"]);
        assert_eq!(broken("abcdefgh", 4), ["abcd", "efgh"]);
    }
}
