//! Net names with blanks, which come from the names of sheets: `/Low EQ/Filter/Out`.

use super::fault::{Faults, shown};
use super::line::{Token, TokenKind};
use super::number::number;
use crate::source::{FileId, Span};

/// Joins the words of a net name that begins with `/` and whose sheet's name holds blanks: behind the blank a `/`
/// still follows, inside a word. Only where the line has more words than its element allows.
pub(super) fn join(text: &str, file: FileId, tokens: &mut Vec<Token>, faults: &mut Faults) {
    let equals = tokens.iter().position(|token| token.kind == TokenKind::Equals);
    let end = equals.map_or(tokens.len(), |at| at.saturating_sub(1));
    let letter = tokens[0].of(text).bytes().next().unwrap_or(b'.').to_ascii_uppercase();
    let most = match letter {
        b'.' => return,
        b'R' | b'C' | b'L' | b'V' | b'I' | b'D' => 4,
        b'E' | b'G' => 6,
        b'F' | b'H' => 5,
        _ => 2,
    };
    // The last word is the value or the model, which may hold a slash of its own.
    let last = end.saturating_sub(1);
    if end <= most {
        return;
    }
    let mut kept = 1;
    let mut at = 1;
    while at < tokens.len() {
        let close = if at < last { name_end(text, tokens, at, last) } else { at };
        let whole = Token { end: tokens[close].end, ..tokens[at] };
        if at < close {
            let span = Span { file, start: whole.start, end: whole.end };
            faults.note("blank-in-name", span, format!("read as one net name: {}", shown(whole.of(text))));
        }
        tokens[kept] = whole;
        kept += 1;
        at = close + 1;
    }
    tokens.truncate(kept);
}

/// The last word of the name that begins at a word; itself where the name has no blanks.
fn name_end(text: &str, tokens: &[Token], at: usize, last: usize) -> usize {
    let bare = |index: usize| tokens[index].kind == TokenKind::Bare;
    let begins = |index: usize| bare(index) && tokens[index].of(text).starts_with('/');
    if !begins(at) {
        return at;
    }
    let goes_on = |index: &usize| {
        let word = tokens[*index].of(text);
        bare(*index) && word.contains('/') && number(word).is_none()
    };
    let close = (at + 1..last).take_while(|index| !begins(*index)).filter(goes_on).last().unwrap_or(at);
    let line_break = text[tokens[at].start as usize..tokens[close].end as usize].contains('\n');
    if line_break { at } else { close }
}
