//! R, C and L: two nodes, perhaps a model, a value, and what exporters hang on it.

use super::element::{is_device, missing_node, part, places};
use super::fault::{Faults, shown};
use super::line::{Token, TokenKind};
use super::name::same_name;
use super::number::{Number, number, unit};
use super::phrase::{Nodes, Phrase};
use super::remark::percentage;
use super::{Kind, Passive, Value, Word};
use smallvec::smallvec;

/// Reads a resistor, capacitor or inductor.
pub(super) fn read(phrase: &Phrase, letter: u8, faults: &mut Faults) -> Option<(Nodes, Kind)> {
    let words = phrase.positional();
    if words.len() < 2 {
        missing_node(phrase, 2, faults);
        return None;
    }
    let mut passive = Passive::default();
    let found = value_at(phrase, words);
    let (nodes, behind) = match found.map(|(at, _)| at) {
        Some(2) => (places(phrase, &words[..2]), 2),
        Some(3) if !shows_blank(phrase, words) => {
            passive.model = Some(phrase.word(&words[2]));
            (places(phrase, &words[..2]), 3)
        }
        Some(at) if phrase.sheet => (blank_nodes(phrase, &words[..at], faults)?, at),
        Some(_) => return Some(part(phrase)),
        None => return without_value(phrase, letter, faults),
    };
    let literal = found.and_then(|(_, literal)| literal);
    passive.value = Some(value(phrase, &words[behind], literal, &mut passive));
    remarks(phrase, &words[behind + 1..], &mut passive, faults);
    keys(phrase, letter, &mut passive);
    check(phrase, letter, &passive, faults);
    Some((nodes, kind(letter, passive)))
}

fn kind(letter: u8, passive: Passive) -> Kind {
    match letter {
        b'R' => Kind::Resistor(passive),
        b'C' => Kind::Capacitor(passive),
        _ => Kind::Inductor(passive),
    }
}

/// Where the value stands: the first word behind two nodes that is one, with the number it is unless it is an
/// expression. Where a sheet's name with a blank has moved the words, the last of several numbers.
fn value_at(phrase: &Phrase, words: &[Token]) -> Option<(usize, Option<Number>)> {
    let value = |at: usize| match words[at].kind {
        TokenKind::Expression => Some((at, None)),
        _ => number(phrase.of(&words[at])).map(|number| (at, Some(number))),
    };
    let first = (2..words.len()).find_map(value)?;
    let moved = phrase.sheet && words[..2].iter().any(|word| phrase.of(word).starts_with('/'));
    if moved { (first.0..words.len()).rev().find_map(value) } else { Some(first) }
}

/// Whether three words before a value can't be two nodes and a model: one of the nodes begins with `/` and the word
/// that would be the model is a net by its look.
fn shows_blank(phrase: &Phrase, words: &[Token]) -> bool {
    let third = phrase.of(&words[2]);
    let net = third.starts_with(['/', '+', '-']) || number(third).is_some();
    phrase.sheet && words[..3].iter().any(|word| phrase.of(word).starts_with('/')) && net
}

/// Joins words into two nodes where a name that begins with `/` holds blanks.
fn blank_nodes(phrase: &Phrase, words: &[Token], faults: &mut Faults) -> Option<Nodes> {
    let sheet = |word: &Token| phrase.of(word).starts_with('/');
    let join = |words: &[Token]| {
        let whole = Token { end: words[words.len() - 1].end, ..words[0] };
        (!phrase.of(&whole).contains('\n')).then(|| phrase.word(&whole))
    };
    // A word that begins with `/` begins a node, and only such a node has blanks.
    let split = match words {
        [first, .., last] if sheet(first) => match words.iter().skip(1).position(sheet) {
            Some(at) => at + 1,
            None if !sheet(last) => words.len() - 1,
            None => 1,
        },
        [_, second, ..] if sheet(second) => 1,
        _ => 0,
    };
    let (left, right) = words.split_at(split);
    let whole = |words: &[Token]| words.len() == 1 || words.iter().skip(1).all(|word| !sheet(word));
    if split != 0
        && whole(left)
        && whole(right)
        && let (Some(left), Some(right)) = (join(left), join(right))
    {
        return Some(smallvec![left, right]);
    }
    let message = format!(
        "{} has more words than it allows, and names with blanks leave more than one reading",
        shown(phrase.of(&phrase.tokens[0]))
    );
    faults.error("blank-in-name", phrase.span, message);
    None
}

/// The value of a word, with the tolerance and the rating that it carries.
fn value(phrase: &Phrase, word: &Token, literal: Option<Number>, passive: &mut Passive) -> Value {
    let Some(Number { value, tolerance, rating, .. }) = literal else { return phrase.value(word) };
    passive.tolerance = passive.tolerance.or(tolerance);
    passive.rating = passive.rating.or(rating);
    Value::Number(value, phrase.word(word))
}

/// Words behind the value: a tolerance, the unit behind a blank, a model.
fn remarks(phrase: &Phrase, words: &[Token], passive: &mut Passive, faults: &mut Faults) {
    for word in words {
        let text = phrase.of(word);
        if let Some(tolerance) = percentage(text) {
            passive.tolerance = Some(tolerance);
        } else if let (Some(factor), Some(Value::Number(value, place))) = (unit(text), passive.value)
            && place.end < word.start
            && phrase.text[place.end as usize..word.start as usize].trim().is_empty()
            && phrase.text[place.start as usize..place.end as usize]
                .bytes()
                .all(|byte| byte.is_ascii_digit() || byte == b'.')
        {
            let whole = Word { end: word.end, ..place };
            passive.value = Some(Value::Number(value * factor, whole));
            let text = &phrase.text[whole.start as usize..whole.end as usize];
            faults.warning(
                "blank-in-value",
                whole,
                format!("a blank inside the value {}; read as one", shown(text)),
            );
        } else if word.kind == TokenKind::Bare && number(text).is_none() && passive.model.is_none() {
            passive.model = Some(phrase.word(word));
        } else {
            faults.warning(
                "unread-word",
                phrase.word(word),
                format!("unexpected {} behind the value", shown(text)),
            );
        }
    }
}

/// `key = value` pairs: the value itself, tolerance, rating, number of parts in parallel.
fn keys(phrase: &Phrase, letter: u8, passive: &mut Passive) {
    let mut parallel = None;
    for (key, word) in phrase.pairs(phrase.first_key()) {
        let text = phrase.of(&word);
        let literal = if word.kind == TokenKind::Expression { None } else { number(text) };
        let amount = literal.map(|number| number.value);
        match phrase.of(&key) {
            key if is_value_key(key, letter) => {
                passive.value = Some(value(phrase, &word, literal, passive));
            }
            key if same_name(key, "tol") => {
                passive.tolerance =
                    percentage(text).or(amount.map(|percent| percent / 100.0)).or(passive.tolerance);
            }
            key if letter == b'R' && (same_name(key, "pwr") || same_name(key, "power")) => {
                passive.rating = amount.or(passive.rating);
            }
            key if letter == b'C' && same_name(key, "v") => passive.rating = amount.or(passive.rating),
            key if same_name(key, "m") => parallel = amount,
            _ => {}
        }
    }
    if let (Some(count), Some(Value::Number(value, word))) = (parallel, passive.value)
        && 0.0 < count
    {
        let value = if letter == b'C' { value * count } else { value / count };
        passive.value = Some(Value::Number(value, word));
    }
}

fn is_value_key(key: &str, letter: u8) -> bool {
    key.len() == 1 && key.as_bytes()[0].eq_ignore_ascii_case(&letter)
        || ["value", "val"].iter().any(|name| same_name(key, name))
        || same_name(
            key,
            match letter {
                b'R' => "res",
                b'C' => "cap",
                _ => "ind",
            },
        )
}

/// A passive without a literal value behind its nodes: a value given by a key, the name of a parameter or of a model,
/// or none.
fn without_value(phrase: &Phrase, letter: u8, faults: &mut Faults) -> Option<(Nodes, Kind)> {
    let words = phrase.positional();
    if let Some(last) = words.get(3..).and_then(<[Token]>::last)
        && is_device(phrase.of(last))
    {
        return Some(part(phrase));
    }
    let nodes = if 3 < words.len() && phrase.sheet {
        blank_nodes(phrase, words, faults)?
    } else {
        places(phrase, &words[..2])
    };
    let mut passive = Passive { model: words.get(2).map(|word| phrase.word(word)), ..Passive::default() };
    keys(phrase, letter, &mut passive);
    if passive.value.is_none() {
        valueless(phrase, words.get(2), &mut passive, faults);
    }
    check(phrase, letter, &passive, faults);
    Some((nodes, kind(letter, passive)))
}

/// Says at once what can be said without knowing the parameters and models of the whole netlist.
fn valueless(phrase: &Phrase, third: Option<&Token>, passive: &mut Passive, faults: &mut Faults) {
    let name = shown(phrase.of(&phrase.tokens[0]));
    let Some(third) = third else {
        faults.error("missing-value", phrase.span, format!("{name} has no value"));
        return;
    };
    let text = phrase.of(third);
    if text.starts_with(|first: char| first.is_ascii_digit() || matches!(first, '.' | '+' | '-')) {
        let message =
            format!("expected the value of {name}, found {}, which can't be read as a number", shown(text));
        faults.error("unreadable-number", phrase.word(third), message);
        passive.model = None;
    } else if text.contains(['*', '(', '+']) {
        passive.model = None;
        passive.value = Some(Value::Expression(phrase.word(third)));
    }
}

/// A literal value below zero is an error; a resistance of zero is a link.
fn check(phrase: &Phrase, letter: u8, passive: &Passive, faults: &mut Faults) {
    if let Some(Value::Number(value, word)) = passive.value {
        if 0.0 <= value {
            return;
        }
        let what = match letter {
            b'R' => "resistance",
            b'C' => "capacitance",
            _ => "inductance",
        };
        let name = shown(phrase.of(&phrase.tokens[0]));
        faults.error(
            "not-positive-value",
            word,
            format!("{what} of {name} is {value}; expected a positive value"),
        );
    }
}
