//! Tables in aligned columns that fit the page.

use super::paper::Paper;
use crate::report::harmless::short;
use textwrap::core::display_width;

/// Columns between columns.
const GAP: usize = 2;

/// Widest that a cell may be before the page is asked.
const WIDEST: usize = 60;

/// Narrowest that a column is made.
const NARROWEST: usize = 6;

/// A table: headings, and rows of as many cells.
pub(super) struct Table<const N: usize> {
    headings: [&'static str; N],
    /// Whether the column holds numbers, which stand to the right.
    right: [bool; N],
    rows: Vec<[String; N]>,
}

impl<const N: usize> Table<N> {
    /// An empty table; a heading that begins with `>` stands to the right, as its numbers do.
    pub fn new(headings: [&'static str; N]) -> Table<N> {
        Table {
            headings: headings.map(|heading| heading.trim_start_matches('>')),
            right: headings.map(|heading| heading.starts_with('>')),
            rows: Vec::new(),
        }
    }

    /// Adds a row; its cells are made harmless and cut.
    pub fn row(&mut self, cells: [String; N]) {
        self.rows.push(cells.map(|cell| short(&cell, WIDEST)));
    }

    /// Writes it, indented.
    pub fn write(&self, paper: &mut Paper, indent: usize) {
        let widths = self.widths(paper.width().saturating_sub(indent + GAP * (N - 1)));
        let headings = self.headings.map(str::to_owned);
        for row in std::iter::once(&headings).chain(&self.rows) {
            let cells: Vec<String> = (0..N).map(|at| self.cell(&row[at], widths[at], at)).collect();
            paper.line(&format!("{}{}", " ".repeat(indent), cells.join(&" ".repeat(GAP))));
        }
    }

    /// Widths of the columns. Where the page is too narrow, the widest column of words gives way, the last one,
    /// which holds the verdict, after the others; numbers are never cut.
    fn widths(&self, room: usize) -> [usize; N] {
        let mut widths = self.headings.map(display_width);
        for row in &self.rows {
            for (width, cell) in widths.iter_mut().zip(row) {
                *width = display_width(cell).max(*width);
            }
        }
        for columns in [0..N - 1, N - 1..N] {
            while room < widths.iter().sum() {
                let words = columns.clone().filter(|at| !self.right[*at]);
                match words.max_by_key(|at| widths[*at]) {
                    Some(at) if NARROWEST < widths[at] => widths[at] -= 1,
                    _ => break,
                }
            }
        }
        widths
    }

    fn cell(&self, text: &str, width: usize, at: usize) -> String {
        let text = short(text, width);
        let space = " ".repeat(width.saturating_sub(display_width(&text)));
        if self.right[at] { space + &text } else { text + &space }
    }
}
