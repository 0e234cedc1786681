//! Elements by their first letter; the forms that a letter allows, and letters that lie.

use super::fault::{Faults, shown};
use super::line::{Token, TokenKind};
use super::name::same_name;
use super::phrase::{Nodes, Phrase};
use super::{Kind, controlled, passive, wave};

/// Reads one element; `None` where it can't be kept, which `faults` says.
pub(super) fn read(phrase: &Phrase, faults: &mut Faults) -> Option<(Nodes, Kind)> {
    let name = phrase.of(&phrase.tokens[0]);
    match name.as_bytes()[0].to_ascii_uppercase() {
        letter @ (b'R' | b'C' | b'L') => passive::read(phrase, letter, faults),
        b'V' | b'I' => wave::read(phrase, faults),
        letter @ (b'E' | b'G' | b'F' | b'H' | b'B') => controlled::read(phrase, letter, faults),
        b'X' => call(phrase, faults),
        b'D' => Some(diode(phrase)),
        letter @ (b'Q' | b'J' | b'M') => Some(transistor(phrase, letter)),
        letter @ (b'S' | b'W' | b'T' | b'O' | b'K') => Some(kept(phrase, letter)),
        _ if name.starts_with(|first: char| first.is_ascii_alphabetic()) => Some(part(phrase)),
        _ => unknown(phrase, faults),
    }
}

/// Says that a statement has too few nodes.
pub(super) fn missing_node(phrase: &Phrase, expected: usize, faults: &mut Faults) {
    let found = phrase.positional().len();
    let message = format!("{} needs {expected} nodes, found {found}", shown(phrase.of(&phrase.tokens[0])));
    faults.error("missing-node", phrase.span, message);
}

/// X: the model is the last bare word before the first parameter; a lone slash before it is no node.
fn call(phrase: &Phrase, faults: &mut Faults) -> Option<(Nodes, Kind)> {
    let words = bare_words(phrase);
    let Some((model, nodes)) = words.split_last() else {
        let message = format!("{} names no subcircuit", shown(phrase.of(&phrase.tokens[0])));
        faults.error("missing-node", phrase.span, message);
        return None;
    };
    let nodes = nodes.iter().filter(|word| phrase.of(word) != "/").map(|word| phrase.word(word)).collect();
    Some((nodes, called(phrase, model)))
}

/// The positional words of a statement up to `params:`.
fn bare_words<'a>(phrase: &Phrase<'a>) -> &'a [Token] {
    let words = phrase.positional();
    let end = words
        .iter()
        .position(|word| {
            let text = phrase.of(word);
            text.ends_with(':') && same_name(text, "params:")
        })
        .unwrap_or(words.len());
    let words = &words[..end];
    let end = words.iter().rposition(|word| word.kind != TokenKind::Expression).map_or(0, |last| last + 1);
    &words[..end]
}

fn called(phrase: &Phrase, model: &Token) -> Kind {
    Kind::Call { model: phrase.word(model), parameters: phrase.assignments(phrase.first_key()) }
}

/// D: two nodes and a model; with more pins it is some other part.
fn diode(phrase: &Phrase) -> (Nodes, Kind) {
    match phrase.positional() {
        [anode, cathode] => (places(phrase, &[*anode, *cathode]), Kind::Diode { model: None }),
        [anode, cathode, model, rest @ ..] if rest.iter().all(|word| is_remark(phrase, word)) => {
            (places(phrase, &[*anode, *cathode]), Kind::Diode { model: Some(phrase.word(model)) })
        }
        _ => part(phrase),
    }
}

/// An area or a start condition behind a model.
fn is_remark(phrase: &Phrase, word: &Token) -> bool {
    let text = phrase.of(word);
    word.kind == TokenKind::Expression
        || same_name(text, "off")
        || text.bytes().all(|byte| byte.is_ascii_digit() || matches!(byte, b'.' | b'e' | b'E' | b'-'))
}

/// Q, J, M: three to five nodes and a model, but in board exports `J1` is as likely a connector.
fn transistor(phrase: &Phrase, letter: u8) -> (Nodes, Kind) {
    let words = phrase.positional();
    let model = words.iter().skip(3).rposition(|word| !is_remark(phrase, word)).map(|at| at + 3);
    let most = if letter == b'J' { 3 } else { 5 };
    match model {
        Some(at) if at <= most && !is_connector(phrase.of(&words[at])) => {
            (places(phrase, &words[..at]), Kind::Transistor { model: Some(phrase.word(&words[at])) })
        }
        // Bare numbers may be nodes, so a model can be missing only where nothing but three nodes is there.
        None if words.len() == 3 && letter != b'J' => {
            (places(phrase, words), Kind::Transistor { model: None })
        }
        _ => part(phrase),
    }
}

/// Switches, lines and coupled inductors: kept with their nodes alone. In board exports `SW1` and `TP1` are
/// switches of any kind and test points, so that a line of another length keeps all its words.
fn kept(phrase: &Phrase, letter: u8) -> (Nodes, Kind) {
    let words = phrase.positional();
    let keyed = phrase.first_key() < phrase.tokens.len();
    let count = match letter {
        b'S' | b'O' if 5 <= words.len() => 4,
        b'T' if 4 <= words.len() && keyed => 4,
        b'W' if words.len() == 4 => 2,
        b'K' if words.last().is_some_and(|last| super::number(phrase.of(last)).is_some()) => 0,
        _ => return part(phrase),
    };
    (places(phrase, &words[..count]), Kind::Unmodelled)
}

/// A statement whose letter says nothing: a call where the last word names a device, else unmodelled.
pub(super) fn part(phrase: &Phrase) -> (Nodes, Kind) {
    let words = bare_words(phrase);
    match words.split_last() {
        Some((last, nodes)) if is_connector(phrase.of(last)) => (places(phrase, nodes), Kind::Unmodelled),
        Some((last, nodes)) if 3 <= nodes.len() && is_device(phrase.of(last)) => {
            (places(phrase, nodes), called(phrase, last))
        }
        _ => (places(phrase, words), Kind::Unmodelled),
    }
}

/// A statement that doesn't begin with a letter.
fn unknown(phrase: &Phrase, faults: &mut Faults) -> Option<(Nodes, Kind)> {
    let name = phrase.of(&phrase.tokens[0]);
    let message = format!("expected an element name that begins with a letter, found {}", shown(name));
    faults.warning("unknown-element", phrase.span, message);
    let numbered = name.starts_with(char::is_alphanumeric) && 2 <= phrase.positional().len();
    numbered.then(|| part(phrase))
}

/// The places of some words.
pub(super) fn places(phrase: &Phrase, words: &[Token]) -> Nodes {
    words.iter().map(|word| phrase.word(word)).collect()
}

/// Whether a word looks like the name of a device: letters and digits from a letter on, or a registered number such
/// as `2N3904`; not like the name of a net.
pub(super) fn is_device(word: &str) -> bool {
    let lower = |count: usize| word.get(..count).unwrap_or("");
    let net = ["net", "vcc", "vdd", "vee", "vss", "gnd", "unc"].iter().any(|net| same_name(net, lower(3)))
        || (same_name("n", lower(1)) && word[1..].bytes().all(|byte| byte.is_ascii_digit() || byte == b'_'));
    let registered =
        ["1n", "2n", "2sa", "2sb", "2sc", "2sd", "2sk"].iter().any(|head| same_name(head, lower(head.len())));
    let letter = word.starts_with(|first: char| first.is_ascii_alphabetic());
    let digit = word.bytes().any(|byte| byte.is_ascii_digit());
    let clean = word
        .bytes()
        .all(|byte| byte.is_ascii_alphanumeric() || matches!(byte, b'-' | b'_' | b'.' | b'/' | b'+'));
    let amplifier = ["opamp", "op-amp", "op_amp"].iter().any(|name| contains(word, name));
    clean && !net && 4 <= word.len() && ((letter && digit) || registered || amplifier)
}

/// Whether a word names a connector.
pub(super) fn is_connector(word: &str) -> bool {
    ["conn", "jack", "header", "screw_term", "terminal", "barrel"].iter().any(|name| contains(word, name))
}

/// Whether a text holds a name, in any case.
fn contains(text: &str, name: &str) -> bool {
    text.as_bytes().windows(name.len()).any(|part| part.eq_ignore_ascii_case(name.as_bytes()))
}

#[cfg(test)]
mod tests {
    use super::{is_connector, is_device};

    #[test]
    fn device_names_are_told_from_nets() {
        for word in ["TL074", "LM358N", "OP07", "2N3904", "level.2", "LM324/301", "My_OpAmp"] {
            assert!(is_device(word), "{word}");
        }
        for word in ["N001", "Net-_U1-Pad2_", "VCC", "GND", "/OUT1", "OTA", "N0_12", "unconnected-1", "+12V"]
        {
            assert!(!is_device(word), "{word}");
        }
        assert!(is_connector("Conn_01x05"));
    }
}
