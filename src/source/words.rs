//! Words written by users: how a message shows them, and which known word was probably meant.

/// Longest text that a message repeats, in characters.
const SHOWN: usize = 60;

/// A text of the user's in backticks, control characters escaped, long ones cut.
pub fn quote(text: &str) -> String {
    let mut shown = String::from("`");
    for (at, character) in text.chars().enumerate() {
        if SHOWN <= at {
            shown.push('…');
            break;
        }
        match character {
            // Directional marks could make a terminal show another text than the file holds.
            '\u{200e}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}' => {
                shown.extend(character.escape_unicode());
            }
            _ if character.is_control() => shown.extend(character.escape_debug()),
            _ => shown.push(character),
        }
    }
    shown.push('`');
    shown
}

/// The known word nearest to one that isn't known, where one is near enough to be meant.
/// Of equally near words the first counts; case doesn't.
pub fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let word: Vec<char> = word.chars().take(SHOWN + 1).flat_map(char::to_lowercase).collect();
    if SHOWN < word.len() {
        return None;
    }
    let allowed = word.len().div_ceil(3);
    let mut best: Option<(usize, &str)> = None;
    for candidate in known {
        let letters: Vec<char> = candidate.chars().flat_map(char::to_lowercase).collect();
        if allowed < letters.len().abs_diff(word.len()) {
            continue;
        }
        let distance = edits(&word, &letters);
        if distance <= allowed && best.is_none_or(|(least, _)| distance < least) {
            best = Some((distance, candidate));
        }
    }
    best.map(|(_, candidate)| candidate)
}

/// Least number of letters to insert, remove or replace that turns one word into the other.
fn edits(from: &[char], to: &[char]) -> usize {
    let mut row: Vec<usize> = (0..=to.len()).collect();
    for (done, letter) in from.iter().enumerate() {
        let mut diagonal = row[0];
        row[0] = done + 1;
        for (at, other) in to.iter().enumerate() {
            let replaced = diagonal + usize::from(letter != other);
            diagonal = row[at + 1];
            row[at + 1] = replaced.min(row[at] + 1).min(diagonal + 1);
        }
    }
    row[to.len()]
}

#[cfg(test)]
mod tests {
    use super::{edits, nearest, quote};

    fn distance(from: &str, to: &str) -> usize {
        edits(&from.chars().collect::<Vec<_>>(), &to.chars().collect::<Vec<_>>())
    }

    #[test]
    fn counts_edits() {
        assert_eq!(distance("", "abc"), 3);
        assert_eq!(distance("abc", "abc"), 0);
        assert_eq!(distance("tolerence", "tolerance"), 1);
        assert_eq!(distance("kitten", "sitting"), 3);
    }

    #[test]
    fn finds_the_word_that_was_meant() {
        let known = ["signals", "stages", "loads"];
        assert_eq!(nearest("signal", known), Some("signals"));
        assert_eq!(nearest("Stage", known), Some("stages"));
        assert_eq!(nearest("temperature", known), None);
        assert_eq!(nearest("", known), None);
        assert_eq!(nearest(&"s".repeat(100_000), known), None);
    }

    #[test]
    fn shows_text_without_letting_it_act() {
        assert_eq!(quote("10 mV"), "`10 mV`");
        assert_eq!(quote("a\u{1b}[31m\n"), "`a\\u{1b}[31m\\n`");
        assert_eq!(quote("a\u{202e}b"), "`a\\u{202e}b`");
        assert_eq!(quote(&"x".repeat(1000)).chars().count(), 63);
    }
}
