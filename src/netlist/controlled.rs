//! E, G, F, H and B: the linear two-port voltage source is read whole; other forms keep their nodes.

use super::element::missing_node;
use super::fault::{Faults, shown};
use super::line::{Token, TokenKind};
use super::name::same_name;
use super::number::number;
use super::phrase::{Nodes, Phrase};
use super::{Kind, Value, Word, limit};

/// Words that begin a form that is no linear two-port source.
const FORMS: [&str; 12] = [
    "poly",
    "table",
    "laplace",
    "value",
    "freq",
    "chebyshev",
    "vol",
    "cur",
    "opamp",
    "transformer",
    "delay",
    "pwl",
];

/// Nodes and the words behind them, parentheses and commas away.
struct Operands {
    words: Nodes,
    /// A value in braces or quotes that ends the list.
    expression: Option<Token>,
    /// The token that begins another form, with its index.
    form: Option<usize>,
}

/// Reads a controlled source.
pub(super) fn read(phrase: &Phrase, letter: u8, faults: &mut Faults) -> Option<(Nodes, Kind)> {
    let operands = operands(phrase);
    if operands.words.len() < 2 {
        missing_node(phrase, 2, faults);
        return None;
    }
    if letter == b'E'
        && operands.form.is_none()
        && let Some(gain) = gain(phrase, &operands)
    {
        return Some((operands.words[..4].into(), Kind::VoltageGain(gain)));
    }
    let mut nodes: Nodes = operands.words[..2].into();
    match operands.form {
        Some(form) => {
            // `POLY(2)` names its control nets before its coefficients; they count for voltages alone.
            if let Some(count) = dimension(phrase, form)
                && matches!(letter, b'E' | b'G')
            {
                nodes.extend(control_nets(phrase, form, count));
            }
        }
        None if matches!(letter, b'E' | b'G') => nodes.extend(operands.words.iter().skip(2).take(2).copied()),
        None => {}
    }
    sensed(phrase, &mut nodes);
    let name = shown(phrase.of(&phrase.tokens[0]));
    if letter == b'E' {
        faults.note(
            "not-modelled",
            phrase.span,
            format!("{name} is no linear two-port source; its nodes are kept"),
        );
    }
    Some((nodes, Kind::Unmodelled))
}

/// The gain of a linear source: the fifth word, an expression, or `gain = value` behind four nodes.
fn gain(phrase: &Phrase, operands: &Operands) -> Option<Value> {
    if operands.words.len() < 4 {
        return None;
    }
    if let Some(word) = operands.words.get(4) {
        let text = &phrase.text[word.start as usize..word.end as usize];
        return Some(
            number(text).map_or(Value::Expression(*word), |number| Value::Number(number.value, *word)),
        );
    }
    if let Some(expression) = operands.expression {
        return Some(phrase.value(&expression));
    }
    let mut pairs = phrase.pairs(phrase.first_key());
    pairs.find(|(key, _)| same_name(phrase.of(key), "gain")).map(|(_, value)| phrase.value(&value))
}

fn operands(phrase: &Phrase) -> Operands {
    let mut found = Operands { words: Nodes::new(), expression: None, form: None };
    for (at, token) in phrase.tokens.iter().enumerate().take(phrase.first_key()).skip(1) {
        let text = phrase.of(token);
        if token.kind != TokenKind::Bare {
            found.expression = Some(*token);
            break;
        }
        // The word says no more than the letter does.
        if 2 <= found.words.len() && same_name(text, "vcvs") {
            continue;
        }
        if 2 <= found.words.len() && is_form(text) {
            found.form = Some(at);
            break;
        }
        found.words.extend(pair(text).map(|part| phrase.place(part)).filter(|word| word.start < word.end));
    }
    // `VALUE = {...}` is a pair, so its key ends the list.
    let key = phrase.first_key();
    if found.form.is_none()
        && found.expression.is_none()
        && phrase.tokens.get(key).is_some_and(|key| is_form(phrase.of(key)))
    {
        found.form = Some(key);
    }
    found
}

fn is_form(text: &str) -> bool {
    let name = text.split('(').next().unwrap_or("");
    FORMS.iter().any(|form| same_name(form, name))
}

/// The parts of `(a,b)`, `(a`, `b)` or a bare word; parentheses inside a name stay.
fn pair(text: &str) -> impl Iterator<Item = &str> {
    let listed = text.starts_with('(');
    let mut inner = if listed { &text[1..] } else { text };
    let opened = inner.matches('(').count();
    if inner.ends_with(')') && opened < inner.matches(')').count() {
        inner = &inner[..inner.len() - 1];
    }
    let cut = inner.len() < text.len();
    inner.split(move |letter| cut && letter == ',')
}

/// How many controls a `POLY(n)` has; `None` for another form.
fn dimension(phrase: &Phrase, form: usize) -> Option<usize> {
    let text = phrase.of(&phrase.tokens[form]);
    if !same_name(text.get(..4)?, "poly") {
        return None;
    }
    let behind = if text.len() == 4 {
        phrase.tokens.get(form + 1).map_or("", |next| phrase.of(next))
    } else {
        &text[4..]
    };
    let count = behind.trim_matches(['(', ')']).parse::<usize>();
    Some(count.unwrap_or(1).min(limit::SENSED_NETS / 2))
}

/// The nets in pairs behind `POLY(n)`.
fn control_nets(phrase: &Phrase, form: usize, count: usize) -> Vec<Word> {
    let apart = phrase.of(&phrase.tokens[form]).len() == 4;
    let rest = phrase.tokens.iter().skip(form + 1 + usize::from(apart));
    let words =
        rest.take_while(|token| token.kind == TokenKind::Bare).flat_map(|token| pair(phrase.of(token)));
    words.filter(|word| !word.is_empty()).map(|word| phrase.place(word)).take(2 * count).collect()
}

/// Adds the nets inside `V(a)` and `V(a,b)` of a behavioural form.
fn sensed(phrase: &Phrase, nodes: &mut Nodes) {
    let mut calls = 0;
    for token in phrase.tokens.iter().skip(3) {
        let text = phrase.of(token);
        for (at, _) in text.match_indices(['v', 'V']) {
            let inside = text[..at].ends_with(|before: char| before.is_alphanumeric() || before == '_');
            let Some(list) = text[at + 1..].trim_start().strip_prefix('(') else { continue };
            if inside {
                continue;
            }
            calls += 1;
            if 4 * limit::SENSED_NETS < calls {
                return;
            }
            for net in list[..closing(list)].split(',').map(str::trim).filter(|net| !net.is_empty()) {
                let known =
                    |word: &Word| same_name(net, &phrase.text[word.start as usize..word.end as usize]);
                if nodes.len() < limit::SENSED_NETS && !nodes.iter().any(known) && !net.contains('\n') {
                    nodes.push(phrase.place(net));
                }
            }
        }
    }
}

/// Where the list that a parenthesis opened ends; at its beginning where no end is near.
fn closing(list: &str) -> usize {
    let mut depth = 0usize;
    for (at, letter) in list.char_indices().take(2 * limit::NAME_BYTES) {
        match letter {
            '(' => depth += 1,
            ')' if depth == 0 => return at,
            ')' => depth -= 1,
            _ => {}
        }
    }
    0
}
