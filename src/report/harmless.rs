//! Text written by users made harmless: what could act on a terminal is written out as an escape.

use textwrap::core::display_width;

/// Whether a character could act on a terminal, or make it show another text than the file holds.
pub(super) fn acts(character: char) -> bool {
    character.is_control()
        || matches!(
            character,
            '\u{ad}'
                | '\u{61c}'
                | '\u{180e}'
                | '\u{200b}'..='\u{200f}'
                | '\u{2028}'..='\u{202e}'
                | '\u{2060}'..='\u{206f}'
                | '\u{feff}'
                | '\u{fff9}'..='\u{fffb}'
                | '\u{e0000}'..='\u{e007f}'
        )
}

/// Appends a character, escaped where it could act.
pub(super) fn push(out: &mut String, character: char) {
    match character {
        '\n' | '\r' | '\t' => out.extend(character.escape_debug()),
        _ if acts(character) => out.extend(character.escape_unicode()),
        _ => out.push(character),
    }
}

/// The text with everything escaped that could act.
pub(crate) fn harmless(text: &str) -> String {
    let mut shown = String::with_capacity(text.len());
    text.chars().for_each(|character| push(&mut shown, character));
    shown
}

/// How many columns a character takes.
pub(super) fn columns(character: char) -> usize {
    display_width(character.encode_utf8(&mut [0; 4]))
}

/// The harmless text, cut with an ellipsis where it takes more columns than there are.
///
/// Characters without a width of their own count a quarter of a column, so that a pile of accents ends too.
pub(super) fn short(text: &str, width: usize) -> String {
    let mut shown = String::new();
    let (mut quarters, mut fits) = (0, 0);
    for character in text.chars() {
        let start = shown.len();
        push(&mut shown, character);
        quarters += shown[start..].chars().map(|shown| (4 * columns(shown)).max(1)).sum::<usize>();
        if quarters <= 4 * width.saturating_sub(1) {
            fits = shown.len();
        }
        if 4 * width < quarters {
            shown.truncate(fits);
            shown.push('…');
            break;
        }
    }
    shown
}

/// The harmless text with its beginning cut away instead: the end of a path tells more than its start.
pub(super) fn short_path(path: &str, width: usize) -> String {
    let tail: Vec<char> = path.chars().rev().take(4 * width).collect();
    let whole: String = tail.iter().rev().collect();
    let shown = harmless(&whole);
    if whole.len() == path.len() && display_width(&shown) <= width {
        return shown;
    }
    let mut left = width.saturating_sub(1);
    let mut kept: Vec<char> = Vec::new();
    for character in shown.chars().rev() {
        match left.checked_sub(columns(character)) {
            Some(rest) => left = rest,
            None => break,
        }
        kept.push(character);
    }
    kept.push('…');
    kept.iter().rev().collect()
}

#[cfg(test)]
mod tests {
    use super::{harmless, short, short_path};

    #[test]
    fn escapes_what_acts_and_nothing_else() {
        assert_eq!(harmless("R1 4k7 Ω µ 漢"), "R1 4k7 Ω µ 漢");
        assert_eq!(harmless("a\u{1b}[31m\u{9b}\n"), "a\\u{1b}[31m\\u{9b}\\n");
        assert_eq!(harmless("a\u{202e}b\u{2066}\u{feff}"), "a\\u{202e}b\\u{2066}\\u{feff}");
        let once = harmless("\u{1b}\u{200f}");
        assert_eq!(harmless(&once), once);
    }

    #[test]
    fn cuts_at_columns() {
        assert_eq!(short("abcdef", 6), "abcdef");
        assert_eq!(short("abcdefg", 6), "abcde…");
        assert_eq!(short("漢漢漢漢", 6), "漢漢…");
        assert_eq!(short("\u{1b}\u{1b}", 6), "…");
        assert!(short(&"\u{301}".repeat(100_000), 10).chars().count() <= 41);
    }

    #[test]
    fn keeps_the_end_of_a_path() {
        assert_eq!(short_path("a/board.cir", 11), "a/board.cir");
        assert_eq!(short_path("long/a/board.cir", 11), "…/board.cir");
        assert_eq!(
            short_path(&"x/".repeat(100_000), 5),
            "…/x/x/".chars().take(1).chain("x/x/".chars()).collect::<String>()
        );
    }
}
