//! Logical lines: comments away, continuations joined, words cut; nothing is copied.

use super::limit;
use nom::bytes::complete::take_while;
use nom::error::Error;
use nom::{IResult, Parser};

/// What a token is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum TokenKind {
    /// A word.
    Bare,
    /// What stands in braces or single quotes, without them.
    Expression,
    /// What stands in double quotes, without them.
    Quoted,
    /// An equals sign.
    Equals,
}

/// A word, expression or sign by its place in the text.
#[derive(Debug, Clone, Copy)]
pub(super) struct Token {
    pub start: u32,
    pub end: u32,
    pub kind: TokenKind,
}

impl Token {
    /// Its text.
    pub fn of<'a>(&self, text: &'a str) -> &'a str {
        &text[self.start as usize..self.end as usize]
    }
}

/// One logical line; the token list is used again for the next.
#[derive(Debug, Default)]
pub(super) struct Line {
    pub tokens: Vec<Token>,
    /// First byte of the first word.
    pub start: usize,
    /// One past the last word on the first physical line, closing quotes included.
    pub first_end: usize,
    /// Where a brace or quote opens that nothing closes.
    pub unclosed: Option<usize>,
    /// Whether it goes on past the limit, where it was cut off.
    pub long: bool,
    /// Whether an expression goes over a line break.
    pub crossed: bool,
    /// Whether a word begins with `/`, so that a name may hold blanks.
    pub sheet: bool,
}

/// Reads the next logical line from `at` on and moves `at` behind it; `false` at the end of the text.
pub(super) fn next_line(text: &str, at: &mut usize, line: &mut Line) -> bool {
    let bytes = text.as_bytes();
    line.tokens.clear();
    (line.unclosed, line.long, line.crossed, line.sheet) = (None, false, false, false);
    loop {
        *at = skip_blanks(bytes, *at);
        match bytes.get(*at) {
            None => return false,
            // A continuation that stands here continues a comment, for those of statements were taken with them.
            Some(b'\n') => *at += 1,
            Some(b'+') => *at = line_end(text, *at),
            Some(_) if is_comment(bytes, *at) => *at = line_end(text, *at),
            Some(_) => break,
        }
    }
    line.start = *at;
    *at = cut(text, *at, line);
    line.first_end = first_end(text, line);
    while continued(text, at) && !line.long {
        *at = cut(text, *at, line);
    }
    true
}

/// Moves over blank lines and comments to the next line that says something. Where it continues the line before,
/// moves behind its plus sign and says so.
fn continued(text: &str, at: &mut usize) -> bool {
    let bytes = text.as_bytes();
    let mut comment = None;
    loop {
        *at = skip_blanks(bytes, *at);
        match bytes.get(*at) {
            Some(b'\n') => *at += 1,
            Some(b'+') if comment.is_none_or(|comment| !super::title::was_statement(comment)) => {
                *at += 1;
                return true;
            }
            Some(_) if is_comment(bytes, *at) => {
                let end = line_end(text, *at);
                comment = Some(&text[*at..end]);
                *at = end;
            }
            _ => return false,
        }
    }
}

/// Whether a comment begins at the first word of a line.
fn is_comment(bytes: &[u8], at: usize) -> bool {
    match bytes[at] {
        b'*' | b';' => true,
        b'$' => ends_word(bytes, at + 1),
        b'/' => bytes.get(at + 1) == Some(&b'/'),
        _ => false,
    }
}

/// Cuts the words of one physical line; gives the place of its line break or of the end of the text.
fn cut(text: &str, from: usize, line: &mut Line) -> usize {
    let bytes = text.as_bytes();
    let mut at = from;
    loop {
        at = skip_blanks(bytes, at);
        let Some(first) = bytes.get(at) else { return at };
        if limit::LINE_BYTES < at - line.start {
            line.long = true;
            return line_end(text, at);
        }
        match first {
            b'\n' => return at,
            b';' => return line_end(text, at),
            b'$' if ends_word(bytes, at + 1) => return line_end(text, at),
            b'/' if bytes.get(at + 1) == Some(&b'/') && ends_word(bytes, at + 2) => {
                return line_end(text, at);
            }
            b',' => at += 1,
            b'=' => at = push(line, TokenKind::Equals, at, at + 1),
            b'{' => at = enclosed(text, at, b'}', line),
            b'\'' => at = enclosed(text, at, b'\'', line),
            b'"' => at = quoted(text, at, line),
            _ => {
                line.sheet |= *first == b'/';
                let rest = word(&bytes[at..]).map_or(0, |(rest, _)| rest.len());
                let end = bytes.len() - rest;
                let trimmed = if bytes[end - 1] == b',' { trim_commas(bytes, at, end) } else { end };
                push(line, TokenKind::Bare, at, trimmed);
                at = end;
            }
        }
    }
}

fn push(line: &mut Line, kind: TokenKind, start: usize, end: usize) -> usize {
    line.tokens.push(Token { start: start as u32, end: end as u32, kind });
    end
}

/// A word that begins here: all up to a blank, an equals sign, a comment, or a brace behind a parenthesis.
fn word(input: &[u8]) -> IResult<&[u8], &[u8]> {
    let mut end = 0;
    loop {
        let (rest, _) = take_while::<_, _, Error<&[u8]>>(is_plain).parse(&input[end..])?;
        end = input.len() - rest.len();
        match rest {
            [0xC2, next, ..] if *next != 0xA0 => end += 1,
            [b'{', ..] if 0 < end && !matches!(input[end - 1], b'(' | b',') => end += 1,
            _ => return Ok((rest, &input[..end])),
        }
    }
}

/// Bytes that never end a word; 0xC2 begins a non-breaking space in UTF-8, and other letters.
fn is_plain(byte: u8) -> bool {
    const PLAIN: [bool; 256] = {
        let mut plain = [true; 256];
        let mut at = 0;
        let ends = b" \t\r\n\x0b\x0c;={\xC2";
        while at < ends.len() {
            plain[ends[at] as usize] = false;
            at += 1;
        }
        plain
    };
    PLAIN[byte as usize]
}

fn trim_commas(bytes: &[u8], start: usize, end: usize) -> usize {
    let kept = bytes[start..end].iter().rposition(|byte| *byte != b',');
    kept.map_or(end, |last| start + last + 1)
}

/// What stands in braces or quotes, over continuation lines too.
fn enclosed(text: &str, open: usize, close: u8, line: &mut Line) -> usize {
    let bytes = text.as_bytes();
    let mut depth = 0usize;
    let mut at = open + 1;
    loop {
        match bytes.get(at) {
            Some(byte) if *byte == close => {
                if depth == 0 {
                    push(line, TokenKind::Expression, open + 1, at);
                    return at + 1;
                }
                depth -= 1;
                at += 1;
            }
            Some(b'{') if close == b'}' => {
                depth += 1;
                at += 1;
            }
            Some(b'\n' | b';') | None => {
                let mut next = line_end(text, at);
                if !continued(text, &mut next) || limit::LINE_BYTES < next - open {
                    line.unclosed = Some(open);
                    push(line, TokenKind::Expression, open + 1, at);
                    return line_end(text, at);
                }
                line.crossed = true;
                at = next;
            }
            Some(_) => at += 1,
        }
    }
}

/// What stands in double quotes on this line; without a closing quote the rest of the line.
fn quoted(text: &str, open: usize, line: &mut Line) -> usize {
    let rest = &text.as_bytes()[open + 1..];
    let length = rest.iter().position(|byte| matches!(byte, b'"' | b'\n')).unwrap_or(rest.len());
    let end = push(line, TokenKind::Quoted, open + 1, open + 1 + length);
    if rest.get(length) == Some(&b'"') {
        return end + 1;
    }
    line.unclosed = Some(open);
    end
}

/// Where the words of the first physical line end, closing quotes included.
fn first_end(text: &str, line: &Line) -> usize {
    let Some(last) = line.tokens.last() else { return line.start };
    if line.crossed {
        let end = line_end(text, line.start);
        return line.start + text[line.start..end].trim_end().len();
    }
    let quoted = matches!(last.kind, TokenKind::Expression | TokenKind::Quoted) && line.unclosed.is_none();
    last.end as usize + usize::from(quoted)
}

/// The place of the line break at or behind a byte, or the end of the text.
pub(super) fn line_end(text: &str, at: usize) -> usize {
    text.as_bytes()[at..].iter().position(|byte| *byte == b'\n').map_or(text.len(), |length| at + length)
}

/// Whether nothing but a blank, a line break or the end of the text stands here.
fn ends_word(bytes: &[u8], at: usize) -> bool {
    bytes.get(at).is_none_or(|byte| *byte == b'\n') || skip_blanks(bytes, at) != at
}

/// Behind the blanks that begin here; a non-breaking space is one.
pub(super) fn skip_blanks(bytes: &[u8], mut at: usize) -> usize {
    loop {
        match bytes.get(at) {
            Some(b' ' | b'\t' | b'\r' | 0x0b | 0x0c) => at += 1,
            Some(0xC2) if bytes.get(at + 1) == Some(&0xA0) => at += 2,
            _ => return at,
        }
    }
}
