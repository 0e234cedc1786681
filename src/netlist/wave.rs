//! V and I: two nodes, then DC, AC and transient values in any order.

use super::element::{is_device, missing_node, part, places};
use super::fault::Faults;
use super::line::TokenKind;
use super::name::same_name;
use super::number::{literal, number};
use super::phrase::{Nodes, Phrase};
use super::{Kind, Value, Waveform, evaluate};
use smallvec::SmallVec;

/// Waveforms whose span can be told.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Shape {
    Sine,
    Pulse,
    Points,
    Modulated,
    Other,
}

const SHAPES: [(&str, Shape); 15] = [
    ("sin", Shape::Sine),
    ("sine", Shape::Sine),
    ("sffm", Shape::Sine),
    ("pulse", Shape::Pulse),
    ("exp", Shape::Pulse),
    ("pwl", Shape::Points),
    ("am", Shape::Modulated),
    ("noise", Shape::Other),
    ("trnoise", Shape::Other),
    ("trrandom", Shape::Other),
    ("rand", Shape::Other),
    ("pat", Shape::Other),
    ("file", Shape::Other),
    ("wavefile", Shape::Other),
    ("external", Shape::Other),
];

/// A word, a part of one between parentheses and commas, an expression or an equals sign.
#[derive(Debug, Clone, Copy)]
struct Piece<'a> {
    text: &'a str,
    kind: TokenKind,
}

/// Reads an independent source.
pub(super) fn read(phrase: &Phrase, faults: &mut Faults) -> Option<(Nodes, Kind)> {
    let words = phrase.positional();
    if words.len() < 2 {
        missing_node(phrase, 2, faults);
        return None;
    }
    let name = phrase.of(&phrase.tokens[0]);
    if lies(phrase) {
        return Some(part(phrase));
    }
    let pieces = pieces(phrase);
    let wave = waveform(phrase, &pieces);
    let voltage = name.starts_with(['V', 'v']);
    let kind = if voltage { Kind::VoltageSource(wave) } else { Kind::CurrentSource(wave) };
    Some((places(phrase, &words[..2]), kind))
}

/// Whether the statement is no source at all, such as an integrated circuit `IC1` of a board export.
fn lies(phrase: &Phrase) -> bool {
    let words = phrase.positional();
    let Some((last, nodes)) = words.split_last() else { return false };
    let text = phrase.of(last);
    let plain = phrase.first_key() == phrase.tokens.len() && last.kind == TokenKind::Bare;
    plain
        && 3 <= nodes.len()
        && is_device(text)
        && nodes[2..].iter().all(|word| shape(phrase.of(word)).is_none())
}

/// Everything behind the two nodes.
fn pieces<'a>(phrase: &Phrase<'a>) -> SmallVec<[Piece<'a>; 8]> {
    let mut pieces = SmallVec::new();
    for token in phrase.tokens.iter().skip(3) {
        let text = phrase.of(token);
        if token.kind == TokenKind::Bare {
            let parts = text.split(['(', ')', ',']).filter(|part| !part.is_empty());
            pieces.extend(parts.map(|text| Piece { text, kind: TokenKind::Bare }));
        } else {
            pieces.push(Piece { text, kind: token.kind });
        }
    }
    pieces
}

fn shape(text: &str) -> Option<Shape> {
    let name = text.split('(').next().unwrap_or("");
    SHAPES.iter().find(|(word, _)| same_name(word, name)).map(|(_, shape)| *shape)
}

impl Piece<'_> {
    fn is(&self, word: &str) -> bool {
        self.kind == TokenKind::Bare && same_name(self.text, word)
    }

    fn is_value(&self) -> bool {
        self.kind == TokenKind::Expression || (self.kind == TokenKind::Bare && number(self.text).is_some())
    }

    /// Its value; an expression has one here where it holds no names.
    fn number(&self) -> Option<f64> {
        match self.kind {
            TokenKind::Expression => evaluate(self.text, &|_| None).ok(),
            _ => number(self.text).map(|number| number.value),
        }
    }

    fn value(&self, phrase: &Phrase) -> Value {
        let place = phrase.place(self.text);
        let found = if self.kind == TokenKind::Expression { literal(self.text) } else { self.number() };
        found.map_or(Value::Expression(place), |value| Value::Number(value, place))
    }
}

fn waveform(phrase: &Phrase, pieces: &[Piece]) -> Waveform {
    let mut wave = Waveform::default();
    let mut at = 0;
    while let Some(piece) = pieces.get(at) {
        at += 1;
        let equals = pieces.get(at).is_some_and(|next| next.kind == TokenKind::Equals);
        if piece.is("dc") || (equals && piece.is("value")) {
            at += usize::from(equals);
            if let Some(next) = pieces.get(at).filter(|next| shape(next.text).is_none() && !next.is("ac")) {
                wave.dc = Some(next.value(phrase));
                at += 1;
            }
        } else if piece.is("ac") {
            at += usize::from(equals);
            let magnitude = pieces.get(at).filter(|next| next.is_value());
            wave.ac = magnitude.is_none_or(|magnitude| magnitude.number() != Some(0.0));
            at += pieces[at..].iter().take(2).take_while(|next| next.is_value()).count();
        } else if piece.is("stimulus")
            || (piece.kind == TokenKind::Bare && shape(piece.text) == Some(Shape::Other))
        {
            wave.unknown = true;
            break;
        } else if let Some(shape) = shape(piece.text).filter(|_| piece.kind == TokenKind::Bare) {
            let rest = &pieces[at..];
            let count = rest.iter().position(|next| !next.is_value()).unwrap_or(rest.len());
            wave.span = span(shape, &rest[..count]);
            // A list that ends in words (a file, a repetition) holds more than was read.
            let ended = rest
                .get(count)
                .is_none_or(|next| ["ac", "dc"].iter().any(|word| next.is(word)) || is_key(rest, count));
            wave.unknown |= wave.span.is_none() || !ended;
            at += if ended { count } else { rest.len() };
        } else if equals {
            at += 2;
        } else if piece.kind != TokenKind::Equals && wave.dc.is_none() {
            wave.dc = Some(piece.value(phrase));
        }
    }
    wave
}

/// Whether the piece at an index is the key of a `key = value`.
fn is_key(pieces: &[Piece], at: usize) -> bool {
    pieces.get(at + 1).is_some_and(|next| next.kind == TokenKind::Equals)
}

/// Lowest and highest value of a waveform with literal arguments.
fn span(shape: Shape, arguments: &[Piece]) -> Option<(f64, f64)> {
    let argument = |at: usize| arguments.get(at).and_then(Piece::number);
    let around = |middle: f64, reach: f64| (middle - reach.abs(), middle + reach.abs());
    match shape {
        Shape::Sine => Some(around(argument(0)?, argument(1)?)),
        Shape::Pulse => {
            let (first, second) = (argument(0)?, argument(1)?);
            Some((first.min(second), first.max(second)))
        }
        Shape::Modulated => Some(around(0.0, argument(0)? * (1.0 + argument(1)?.abs()))),
        Shape::Points => {
            let values = arguments.chunks(2).map(|pair| pair.get(1).and_then(Piece::number));
            let mut range: Option<(f64, f64)> = None;
            for value in values {
                let value = value?;
                let (low, high) = range.unwrap_or((value, value));
                range = Some((low.min(value), high.max(value)));
            }
            range
        }
        Shape::Other => None,
    }
}
