//! One quantity out of one text: a number, perhaps a prefix, and the unit that is expected.

use super::{QuantityFault, Unit, unit};
use crate::source::quote;

/// Longest text that is looked at; no honest quantity comes near.
const LONGEST: usize = 200;

/// Every unit, for texts that may hold any.
const ANY: [Unit; 18] = [
    Unit::One,
    Unit::Volt,
    Unit::Ampere,
    Unit::Ohm,
    Unit::Farad,
    Unit::Henry,
    Unit::Hertz,
    Unit::Second,
    Unit::Watt,
    Unit::Celsius,
    Unit::Decibel,
    Unit::Degree,
    Unit::VoltPerSecond,
    Unit::VoltPerKelvin,
    Unit::AmperePerKelvin,
    Unit::PerKelvin,
    Unit::VoltPerRootHertz,
    Unit::AmperePerRootHertz,
];

/// Reads a quantity of the expected unit; the value comes back in that unit, without prefix.
///
/// A number without unit is a ratio. `10k` and `4k7` serve for resistances and the like, where the
/// letter can mean one thing only.
///
/// # Errors
/// The text isn't a number with a unit, or the unit measures something else; the fault says what to write.
pub fn parse(text: &str, expected: Unit) -> Result<f64, QuantityFault> {
    parse_one_of(text, &[expected]).map(|(value, _)| value)
}

/// Reads a quantity of whatever unit it states; a bare number is a ratio.
///
/// # Errors
/// The text isn't a number with a known unit.
pub fn parse_any(text: &str) -> Result<(f64, Unit), QuantityFault> {
    parse_one_of(text, &ANY)
}

/// Reads a ratio that must say how it is meant, with `%` or `ppm`: a bare `1` could be all or a hundredth.
///
/// # Errors
/// As [`parse`]; and a bare number other than 0, with both spellings.
pub fn parse_share(text: &str) -> Result<f64, QuantityFault> {
    let value = parse(text, Unit::One)?;
    let bare = Parts::split(text.trim()).is_some_and(|parts| parts.unit.is_empty());
    if !bare || value == 0.0 {
        return Ok(value);
    }
    let text = text.trim();
    Err(QuantityFault::new(format!("{} lacks a unit: it could be a ratio or a percentage", quote(text)))
        .help(format!("write {} or {}", quote(&format!("{text} %")), quote(&super::percent(value)))))
}

/// Reads an open-loop gain: a ratio (`200000`, `200 V/mV`) or a level in decibel, by 20 log10.
///
/// # Errors
/// As [`parse`].
pub fn parse_gain(text: &str) -> Result<f64, QuantityFault> {
    match parse_one_of(text, &[Unit::One, Unit::Decibel])? {
        (level, Unit::Decibel) => {
            let ratio = 10f64.powf(level / 20.0);
            if ratio.is_normal() { Ok(ratio) } else { Err(too_large(text.trim())) }
        }
        (ratio, _) => Ok(ratio),
    }
}

/// Reads a quantity of one of several units, the likeliest first.
///
/// # Errors
/// As [`parse`].
pub fn parse_one_of(text: &str, expected: &[Unit]) -> Result<(f64, Unit), QuantityFault> {
    let text = text.trim();
    if LONGEST < text.len() {
        return Err(unreadable(text, expected));
    }
    let parts = Parts::split(text).ok_or_else(|| unreadable(text, expected))?;
    if parts.unit.is_empty() {
        return without_unit(text, &parts, expected);
    }
    if let Some(written) = unit::read(parts.unit).filter(|written| expected.contains(&written.unit)) {
        let value = parts.value(written.power).ok_or_else(|| too_large(text))?;
        return Ok((value + written.offset, written.unit));
    }
    if let Some(result) = short_form(text, &parts, expected) {
        return result;
    }
    Err(wrong_unit(text, &parts, expected))
}

/// A text cut into number and unit.
struct Parts<'a> {
    /// Sign and digits, perhaps with a point.
    digits: String,
    /// Power of ten written behind them.
    exponent: i32,
    /// What follows.
    unit: &'a str,
}

impl<'a> Parts<'a> {
    /// Splits a text; `None` where it doesn't begin with a number.
    fn split(text: &'a str) -> Option<Self> {
        let (sign, rest) = match text.strip_prefix(['-', '\u{2212}']) {
            Some(rest) => ("-", rest),
            None => ("", text.strip_prefix('+').unwrap_or(text)),
        };
        let end = rest.find(|c: char| !c.is_ascii_digit() && c != '.').unwrap_or(rest.len());
        let (number, mut rest) = rest.split_at(end);
        let points = number.bytes().filter(|byte| *byte == b'.').count();
        if 1 < points || points == number.len() {
            return None;
        }
        let mut exponent = 0;
        if let Some(after) = rest.strip_prefix(['e', 'E']) {
            let signed = after.strip_prefix(['-', '+', '\u{2212}']).unwrap_or(after);
            let length = signed.find(|c: char| !c.is_ascii_digit()).unwrap_or(signed.len());
            if 0 < length {
                let size: i32 = signed[..length].parse().unwrap_or(i32::MAX).min(10_000);
                exponent = if after.starts_with(['-', '\u{2212}']) { -size } else { size };
                rest = &signed[length..];
            }
        }
        Some(Parts { digits: format!("{sign}{number}"), exponent, unit: rest.trim_start() })
    }

    /// The number times a power of ten, correctly rounded; `None` beyond what a double holds.
    fn value(&self, power: i32) -> Option<f64> {
        let value: f64 = format!("{}e{}", self.digits, self.exponent + power).parse().ok()?;
        let zero = self.digits.bytes().all(|byte| !byte.is_ascii_digit() || byte == b'0');
        let held = value.is_normal() || (zero && value == 0.0);
        // Minus zero would print and compare like zero but flip signs of what is divided by it.
        held.then_some(value + 0.0)
    }
}

/// A number alone: a ratio, or nought, which is the same in every unit with a true zero.
fn without_unit(text: &str, parts: &Parts<'_>, expected: &[Unit]) -> Result<(f64, Unit), QuantityFault> {
    let value = parts.value(0).ok_or_else(|| too_large(text))?;
    if expected.contains(&Unit::One) {
        return Ok((value, Unit::One));
    }
    let unit = expected.first().copied().unwrap_or(Unit::One);
    if value == 0.0 && expected.len() == 1 && unit != Unit::Celsius {
        return Ok((0.0, unit));
    }
    let written: Vec<String> = expected
        .iter()
        .flat_map(|unit| spellings(*unit))
        .map(|unit| quote(&format!("{text} {unit}")))
        .collect();
    Err(QuantityFault::new(format!("{} lacks a unit, expected {}", quote(text), nouns(expected)))
        .help(format!("write {}", written.join(" or "))))
}

/// The ways to complete a number that lacks its unit.
fn spellings(unit: Unit) -> Vec<&'static str> {
    if unit.usual() == unit.symbol() || unit.symbol().contains('/') {
        vec![unit.usual()]
    } else {
        vec![unit.usual(), unit.symbol()]
    }
}

/// `10k`, `4k7`, `100n`: a prefix in place of the unit. `None` where the text has another form.
fn short_form(
    text: &str,
    parts: &Parts<'_>,
    expected: &[Unit],
) -> Option<Result<(f64, Unit), QuantityFault>> {
    let [unit] = *expected else { return None };
    let mut letters = parts.unit.chars();
    let letter = letters.next()?;
    let decimals = letters.as_str();
    let infix = !decimals.is_empty();
    if !decimals.bytes().all(|byte| byte.is_ascii_digit()) || (infix && parts.digits.contains('.')) {
        return None;
    }
    let allowed = match unit {
        Unit::Ohm => "RkKMGTm",
        Unit::Farad | Unit::Henry => "fpnu\u{b5}\u{3bc}m",
        Unit::Hertz => "kKMGm",
        Unit::One => "kK",
        _ => "",
    };
    if !allowed.contains(letter) || (parts.exponent != 0 && infix) {
        return None;
    }
    // Netlists read either case as milli; a bare letter therefore says nothing, but 4M7 is IEC 60062.
    if letter == 'm' || (letter == 'M' && !infix) {
        let symbol = unit.symbol();
        let number = if infix { format!("{}.{decimals}", parts.digits) } else { parts.digits.clone() };
        return Some(Err(QuantityFault::new(format!("{} can be read as milli or as mega", quote(text)))
            .help(format!("write `{number} m{symbol}` or `{number} M{symbol}`"))));
    }
    let power = if letter == 'R' { 0 } else { unit::prefix(letter)? };
    let digits = if infix { format!("{}.{decimals}", parts.digits) } else { parts.digits.clone() };
    let whole = Parts { digits, exponent: parts.exponent, unit: "" };
    Some(whole.value(power).map(|value| (value, unit)).ok_or_else(|| too_large(text)))
}

/// What was expected, in words: `a voltage such as `10 mV``.
pub(super) fn nouns(expected: &[Unit]) -> String {
    if expected.len() == ANY.len() {
        return "a quantity such as `0.5 %` or `10 mV`".to_string();
    }
    let one = |unit: &Unit| match unit {
        Unit::Celsius => "a temperature such as `25 degC`".to_string(),
        Unit::One => "a ratio such as `0.5 %` or `0.5`".to_string(),
        unit => format!("{} such as `10 {}`", unit.noun(), unit.usual()),
    };
    expected.iter().map(one).collect::<Vec<_>>().join(" or ")
}

fn unreadable(text: &str, expected: &[Unit]) -> QuantityFault {
    let found = if text.is_empty() { "nothing".to_string() } else { quote(text) };
    QuantityFault::new(format!("expected {}, found {found}", nouns(expected)))
}

fn wrong_unit(text: &str, parts: &Parts<'_>, expected: &[Unit]) -> QuantityFault {
    let fault = match unit::read(parts.unit) {
        Some(found) if !expected.contains(&found.unit) => {
            let noun = found.unit.noun();
            return QuantityFault::new(format!(
                "expected {}, found {noun}, {}",
                nouns(expected),
                quote(text)
            ));
        }
        _ => QuantityFault::new(format!(
            "expected {}, found {} with the unknown unit {}",
            nouns(expected),
            quote(text),
            quote(parts.unit)
        )),
    };
    let number = text[..text.len() - parts.unit.len()].trim_end();
    let better = expected.iter().find_map(|unit| unit::respell(parts.unit, *unit));
    match better {
        Some(unit) => fault.help(format!("write {}", quote(&format!("{number} {unit}")))),
        None => fault,
    }
}

fn too_large(text: &str) -> QuantityFault {
    QuantityFault::new(format!("{} is beyond the numbers that can be held", quote(text)))
}

#[cfg(test)]
mod tests;
