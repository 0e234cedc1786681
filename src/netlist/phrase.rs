//! One statement as its reader sees it: words by place, positional ones first, then `key = value` pairs.

use super::line::{Token, TokenKind};
use super::number::{literal, number};
use super::{Assignment, Value, Word};
use crate::source::{FileId, Span};
use smallvec::SmallVec;

/// The nets of a statement.
pub(super) type Nodes = SmallVec<[Word; 4]>;

/// A statement before it is understood.
#[derive(Debug, Clone, Copy)]
pub(super) struct Phrase<'a> {
    pub text: &'a str,
    pub file: FileId,
    pub tokens: &'a [Token],
    /// From its first to its last character, on its first line.
    pub span: Span,
    /// Whether a word begins with `/`.
    pub sheet: bool,
    /// Whether an expression goes over a line break.
    pub crossed: bool,
}

impl<'a> Phrase<'a> {
    /// The place of a token.
    pub fn word(&self, token: &Token) -> Word {
        Span { file: self.file, start: token.start, end: token.end }
    }

    /// The text of a token.
    pub fn of(&self, token: &Token) -> &'a str {
        token.of(self.text)
    }

    /// The place of a piece of this statement's text.
    pub fn place(&self, piece: &str) -> Word {
        let start = piece.as_ptr() as usize - self.text.as_ptr() as usize;
        Span { file: self.file, start: start as u32, end: (start + piece.len()) as u32 }
    }

    /// The tokens behind the name and before the first `key = value`.
    pub fn positional(&self) -> &'a [Token] {
        &self.tokens[1..self.first_key()]
    }

    /// The index of the first key, or the number of tokens.
    pub fn first_key(&self) -> usize {
        let equals = self.tokens.iter().position(|token| token.kind == TokenKind::Equals);
        equals.map_or(self.tokens.len(), |at| at.saturating_sub(1).max(1))
    }

    /// The `key = value` pairs from a token on; what stands between them is left out.
    pub fn pairs(&self, from: usize) -> impl Iterator<Item = (Token, Token)> + use<'a> {
        self.tokens[from.min(self.tokens.len())..].windows(3).filter_map(|three| match three {
            [key, equals, value]
                if equals.kind == TokenKind::Equals
                    && key.kind == TokenKind::Bare
                    && value.kind != TokenKind::Equals =>
            {
                Some((*key, *value))
            }
            _ => None,
        })
    }

    /// The pairs from a token on as assignments.
    pub fn assignments(&self, from: usize) -> Vec<Assignment> {
        let pair =
            |(key, value): (Token, Token)| Assignment { name: self.word(&key), value: self.word(&value) };
        self.pairs(from).map(pair).collect()
    }

    /// A token as a value: a number where it is one, else an expression.
    pub fn value(&self, token: &Token) -> Value {
        let text = self.of(token);
        let found = match token.kind {
            TokenKind::Expression => literal(text),
            _ => number(text).map(|number| number.value),
        };
        let word = self.word(token);
        found.map_or(Value::Expression(word), |value| Value::Number(value, word))
    }
}
