//! Values as netlists write them: SPICE scale factors, RKM codes, and what exporters hang on them.

use super::remark;
use nom::branch::alt;
use nom::bytes::complete::{tag_no_case, take_while};
use nom::character::complete::{digit1, one_of};
use nom::combinator::{opt, value};
use nom::sequence::{pair, preceded};
use nom::{IResult, Parser};

/// A value and what was found in its text.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Number {
    /// The value in SI units.
    pub value: f64,
    /// What the scale letter or code letter multiplies by; 1 without one.
    pub scale: f64,
    /// First letter of the scale factor as written, `R` of `4R7` included; `M` stands for milli and
    /// begins `Meg`, which `scale` tells apart.
    pub multiplier: Option<char>,
    /// Whether it is an RKM code (IEC 60062): the letter stands in place of the decimal point, as in
    /// `4k7` or `R47`, or it is the bare `R` of `100R`.
    pub code: bool,
    /// Relative tolerance written behind it (`10k_1%` gives 0.01), or the letter behind an RKM code.
    pub tolerance: Option<f64>,
    /// Rated power in watt or voltage in volt written behind it (`33000uF/16V` gives 16).
    pub rating: Option<f64>,
}

/// A decimal number before it is scaled: `digits * 10^exponent`.
#[derive(Debug, Clone, Copy)]
pub(super) struct Decimal {
    digits: u64,
    exponent: i32,
    negative: bool,
    /// Has neither point nor exponent, so that an RKM letter may follow.
    whole: bool,
}

/// A scale factor: `factor * 10^exponent`, where the factor is 1 but for the mil.
#[derive(Debug, Clone, Copy)]
struct Scale {
    factor: u64,
    exponent: i32,
    letter: Option<char>,
}

/// Most digits behind the letter of an RKM code; a part number such as `2N3904` has more.
const CODE_DIGITS: usize = 3;

/// The fault type of the parsers here: nothing but 'no'.
pub(super) type Fault<'a> = nom::error::Error<&'a str>;

/// Reads a whole word as a value; `None` where it isn't one.
///
/// Scale factors are SPICE's: any case, `M` is milli, `MEG` is mega, letters behind are a unit. In an RKM code
/// `M` is mega and `m` is milli, as IEC 60062 has it.
pub fn number(text: &str) -> Option<Number> {
    // Most words that are asked about are names, and most names begin with a letter.
    let numeric = text.starts_with(|first: char| first.is_ascii_digit() || matches!(first, '.' | '+' | '-'));
    let (rest, mut found) = if numeric { prefix(text) } else { leading_code(text) }.ok()?;
    if !rest.is_empty() {
        remark::read(rest, &mut found)?;
    }
    found.value.is_finite().then_some(found)
}

/// Reads the whole text of an expression as a number, where it is nothing else; nothing may hang behind it, for there
/// `1/2` is a division.
pub(super) fn literal(text: &str) -> Option<f64> {
    let (rest, found) = prefix(text.trim()).ok()?;
    (rest.is_empty() && found.value.is_finite()).then_some(found.value)
}

/// The factor of a word that is nothing but a scale factor with or without a unit, such as `nF` behind a blank.
pub(super) fn unit(text: &str) -> Option<f64> {
    let (rest, scale) = scale(text).ok()?;
    let name =
        ["", "f", "farad", "farads", "h", "henry", "ohm", "ohms", "v", "a", "hz", "\u{3a9}", "\u{2126}"];
    let bare = scale.letter.is_some() && name.iter().any(|name| rest.eq_ignore_ascii_case(name));
    let unit = name[1..].iter().any(|name| text.eq_ignore_ascii_case(name));
    let one = Decimal { digits: 1, exponent: 0, negative: false, whole: true };
    if bare { Some(one.shifted(scale.factor, scale.exponent)) } else { unit.then_some(1.0) }
}

/// A number with scale factor or RKM code and unit letters at the start of a text.
pub(super) fn prefix(input: &str) -> IResult<&str, Number> {
    let (behind, amount) = decimal(input)?;
    if behind.is_empty() {
        let value = amount.shifted(1, 0);
        return Ok((
            "",
            Number { value, scale: 1.0, multiplier: None, code: false, tolerance: None, rating: None },
        ));
    }
    if amount.whole
        && let Ok(code) = code(behind, amount)
    {
        return Ok(code);
    }
    let (behind, scale) = scale(behind)?;
    // Digits behind letters belong to a name or a part number, so they make it no value.
    let (rest, _) = take_while(is_unit).parse(behind)?;
    if rest.starts_with(|next: char| next.is_ascii_digit()) {
        return Err(no(input));
    }
    let number = Number {
        value: amount.shifted(scale.factor, scale.exponent),
        scale: ONE.shifted(scale.factor, scale.exponent),
        multiplier: scale.letter,
        code: false,
        tolerance: None,
        rating: None,
    };
    Ok((rest, number))
}

const ONE: Decimal = Decimal { digits: 1, exponent: 0, negative: false, whole: true };

fn no(input: &str) -> nom::Err<Fault<'_>> {
    nom::Err::Error(nom::error::Error::new(input, nom::error::ErrorKind::Verify))
}

/// Digits, perhaps none.
fn digits(input: &str) -> IResult<&str, &str> {
    let end = input.bytes().position(|byte| !byte.is_ascii_digit()).unwrap_or(input.len());
    Ok((&input[end..], &input[..end]))
}

/// Digits with sign, point and exponent.
pub(super) fn decimal(input: &str) -> IResult<&str, Decimal> {
    let (rest, negative) = match input.as_bytes().first() {
        Some(b'-') => (&input[1..], true),
        Some(b'+') => (&input[1..], false),
        _ => (input, false),
    };
    let (rest, whole) = digits(rest)?;
    let (rest, fraction) = match rest.strip_prefix('.') {
        Some(rest) => digits(rest).map(|(rest, fraction)| (rest, Some(fraction)))?,
        None => (rest, None),
    };
    let part = fraction.unwrap_or("");
    if whole.is_empty() && part.is_empty() {
        return Err(no(input));
    }
    let mut amount = Decimal { digits: 0, exponent: 0, negative, whole: fraction.is_none() };
    amount.append(whole, 0);
    amount.append(part, -1);
    if !rest.starts_with(['e', 'E']) {
        return Ok((rest, amount));
    }
    let (rest, power) = opt(preceded(one_of("eE"), pair(opt(one_of("+-")), digit1))).parse(rest)?;
    if let Some((sign, power)) = power {
        let size = power.bytes().fold(0i32, |size, digit| (size * 10 + i32::from(digit - b'0')).min(10_000));
        amount.exponent += if sign == Some('-') { -size } else { size };
        amount.whole = false;
    }
    Ok((rest, amount))
}

impl Decimal {
    /// Takes more digits, each of which moves the point by `step`. Digits past the 18th are below the
    /// resolution of an `f64` and only keep their place.
    fn append(&mut self, digits: &str, step: i32) {
        for digit in digits.bytes() {
            if self.digits < 10u64.pow(17) {
                self.digits = self.digits * 10 + u64::from(digit - b'0');
                self.exponent = self.exponent.saturating_add(step);
            } else {
                self.exponent = self.exponent.saturating_add(step + 1);
            }
        }
    }

    /// The nearest `f64` to the number times `factor * 10^exponent`.
    pub(super) fn shifted(self, factor: u64, exponent: i32) -> f64 {
        let digits = self.digits.saturating_mul(factor);
        let exponent = self.exponent.saturating_add(exponent);
        // Both numbers are exact in an f64 here, so that one operation rounds once.
        let size = if digits < 1 << 53 && (-22..=22).contains(&exponent) {
            let power = POWERS[exponent.unsigned_abs() as usize];
            if exponent < 0 { digits as f64 / power } else { digits as f64 * power }
        } else {
            format!("{digits}e{exponent}").parse().unwrap_or(f64::NAN)
        };
        if self.negative { -size } else { size }
    }
}

/// Powers of ten that an `f64` holds exactly.
const POWERS: [f64; 23] = [
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18,
    1e19, 1e20, 1e21, 1e22,
];

/// A scale factor, or none.
fn scale(input: &str) -> IResult<&str, Scale> {
    let letter = input.chars().next();
    let scale = |factor, exponent| Scale { factor, exponent, letter };
    if letter.is_some_and(|letter| matches!(letter, 'm' | 'M')) {
        return alt((
            value(scale(1, 6), tag_no_case("meg")),
            value(scale(254, -7), tag_no_case("mil")),
            value(scale(1, -3), one_of("mM")),
        ))
        .parse(input);
    }
    let exponent = match letter {
        Some('t' | 'T') => 12,
        Some('g' | 'G') => 9,
        Some('k' | 'K') => 3,
        Some('n' | 'N') => -9,
        Some('p' | 'P') => -12,
        Some('f' | 'F') => -15,
        _ => match micro(input) {
            Ok((rest, ())) => return Ok((rest, scale(1, -6))),
            Err(_) => return Ok((input, Scale { factor: 1, exponent: 0, letter: None })),
        },
    };
    Ok((&input[1..], scale(1, exponent)))
}

/// The micro sign in the forms it is found in: a letter u, U+00B5, U+03BC, the mark of a lost character, and
/// the two signs in UTF-8 that were read as Windows-1252.
fn micro(input: &str) -> IResult<&str, ()> {
    let mut letters = input.chars();
    let found = match letters.next() {
        Some('u' | 'U' | '\u{b5}' | '\u{3bc}' | '\u{fffd}') => true,
        Some('\u{c2}') => letters.next() == Some('\u{b5}'),
        Some('\u{ce}') => letters.next() == Some('\u{bc}'),
        _ => false,
    };
    if found { Ok((letters.as_str(), ())) } else { Err(no(input)) }
}

/// The rest of an RKM code behind its whole part: the letter, the digits of the fraction, a tolerance letter.
fn code(input: &str, amount: Decimal) -> IResult<&str, Number> {
    let (rest, (letter, exponent)) = code_letter(input)?;
    let (rest, fraction) = digits(rest)?;
    let bare = fraction.is_empty();
    if fraction.len() > CODE_DIGITS || (bare && !matches!(letter, 'R' | 'r')) {
        return Err(no(input));
    }
    let (rest, behind) = take_while(is_unit).parse(rest)?;
    let mut amount = amount;
    amount.append(fraction, -1);
    // A name goes on in letters and digits; a code ends here.
    if rest.starts_with(|next: char| next.is_ascii_digit() || next == '.') || (bare && !behind.is_empty()) {
        return Err(no(input));
    }
    let number = Number {
        value: amount.shifted(1, exponent),
        scale: ONE.shifted(1, exponent),
        multiplier: Some(letter),
        code: true,
        tolerance: code_tolerance(behind, exponent),
        rating: None,
    };
    Ok((rest, number))
}

/// An RKM code that begins with its letter: `R47`, `n33`, `p68`.
fn leading_code(input: &str) -> IResult<&str, Number> {
    let zero = Decimal { digits: 0, exponent: 0, negative: false, whole: true };
    let (rest, _) = one_of("Rrpnu\u{b5}\u{3bc}")(input)?;
    let (rest, _) = digit1(rest)?;
    if rest.is_empty() { code(input, zero) } else { Err(no(input)) }
}

/// The letter of an RKM code and the power of ten it stands for.
fn code_letter(input: &str) -> IResult<&str, (char, i32)> {
    let letter = input.chars().next().unwrap_or(' ');
    let exponent = match letter {
        'R' | 'r' | 'V' => 0,
        'K' | 'k' => 3,
        'M' => 6,
        'G' => 9,
        'T' => 12,
        'm' | 'L' => -3,
        'n' | 'N' => -9,
        'p' | 'P' => -12,
        _ => return micro(input).map(|(rest, ())| (rest, (letter, -6))),
    };
    Ok((&input[1..], (letter, exponent)))
}

/// The tolerance that a letter behind an RKM code states (IEC 60062, symmetrical tolerances); the `F` behind a
/// capacitance is the farad.
fn code_tolerance(letter: &str, exponent: i32) -> Option<f64> {
    Some(match letter {
        "E" => 0.005e-2,
        "L" => 0.01e-2,
        "P" => 0.02e-2,
        "W" => 0.05e-2,
        "B" => 0.1e-2,
        "C" => 0.25e-2,
        "D" => 0.5e-2,
        "F" if 0 <= exponent => 1e-2,
        "G" => 2e-2,
        "H" if 0 <= exponent => 3e-2,
        "J" => 5e-2,
        "K" => 10e-2,
        "M" => 20e-2,
        "N" => 30e-2,
        _ => return None,
    })
}

/// Letters of a unit; whatever is left of an ohm sign after a wrong decoding counts as one.
pub(super) fn is_unit(letter: char) -> bool {
    letter.is_ascii_alphabetic() || (!letter.is_ascii() && letter != '\u{b1}')
}

#[cfg(test)]
mod tests {
    use super::{number, unit};

    fn value(text: &str) -> Option<f64> {
        number(text).map(|number| number.value)
    }

    #[test]
    fn scale_factors_are_spice_s() {
        let cases = [
            ("1k", 1e3),
            ("1M", 1e-3),
            ("1Meg", 1e6),
            ("1MEGOhm", 1e6),
            ("10kOhm", 1e4),
            ("159NFARAD", 159e-9),
            (".335", 0.335),
            ("1E3", 1e3),
            ("1F", 1e-15),
            ("15V", 15.0),
            ("-12.5", -12.5),
            ("1mil", 25.4e-6),
            ("4.7n", 4.7e-9),
            ("1e3k", 1e6),
            ("3T", 3e12),
            ("2G", 2e9),
            ("1e-3", 1e-3),
            ("0.1u", 0.1e-6),
            ("10k\u{2126}", 1e4),
            ("12.", 12.0),
            ("1e400", f64::INFINITY),
        ];
        for (text, expected) in cases {
            assert_eq!(value(text), expected.is_finite().then_some(expected), "{text}");
        }
    }

    #[test]
    fn codes_put_a_letter_for_the_point() {
        let cases =
            [("4k7", 4.7e3), ("4R7", 4.7), ("2n2", 2.2e-9), ("100R", 100.0), ("R47", 0.47), ("1M5", 1.5e6)];
        for (text, expected) in cases {
            let found = number(text).unwrap();
            assert_eq!((found.value, found.code), (expected, true), "{text}");
        }
        assert_eq!(number("4m7").unwrap().value, 4.7e-3);
        assert_eq!(number("4k7J").unwrap().tolerance, Some(0.05));
        assert_eq!(number("2n2F").unwrap().tolerance, None);
        assert!(!number("1Meg").unwrap().code);
    }

    #[test]
    fn every_micro_sign_is_micro() {
        for sign in ["u", "U", "\u{b5}", "\u{3bc}", "\u{fffd}", "\u{c2}\u{b5}", "\u{ce}\u{bc}"] {
            assert_eq!(value(&format!("2.2{sign}")), Some(2.2e-6), "{sign}");
            assert_eq!(value(&format!("2.2{sign}F")), Some(2.2e-6), "{sign}");
            assert_eq!(value(&format!("2{sign}2")), Some(2.2e-6), "{sign}");
        }
    }

    #[test]
    fn other_words_are_no_values() {
        for text in
            ["", "k", "2N3904", "1N4148", "1.5.3", "15-", "+", "-", "10x5", "Net1", "0x1F", "5%", "1k*2"]
        {
            assert_eq!(value(text), None, "{text}");
        }
    }

    #[test]
    fn a_unit_behind_a_blank_scales() {
        assert_eq!(unit("nF"), Some(1e-9));
        assert_eq!(unit("k"), Some(1e3));
        assert_eq!(unit("ohm"), Some(1.0));
        assert_eq!(unit("RMOD"), None);
    }
}
