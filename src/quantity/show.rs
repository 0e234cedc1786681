//! Numbers as people read them: four significant digits, an SI prefix, the unit.

use super::Unit;

/// Significant digits of a printed number.
const DIGITS: usize = 4;

/// Prefixes by power of ten.
const PREFIXES: [(i32, &str); 10] = [
    (-15, "f"),
    (-12, "p"),
    (-9, "n"),
    (-6, "u"),
    (-3, "m"),
    (0, ""),
    (3, "k"),
    (6, "M"),
    (9, "G"),
    (12, "T"),
];

/// Prints a value with its unit, four significant digits and an SI prefix: `4.7 kohm`, `-12.5 mV`.
/// A ratio prints bare: `0.5`, `101`, `1.2e6`; [`percent`] is the other way to print one.
/// Infinity prints as `unlimited`, what isn't a number as `undefined`.
pub fn show(value: f64, unit: Unit) -> String {
    if let Some(word) = word(value) {
        return word.to_string();
    }
    match unit {
        Unit::One => bare(value),
        Unit::Celsius | Unit::Decibel | Unit::Degree => format!("{} {}", bare(value), unit.symbol()),
        // Slew rates and drifts have a customary scale that a prefix would hide.
        Unit::VoltPerSecond => format!("{} V/us", bare_shifted(value, -6)),
        Unit::PerKelvin => format!("{} ppm/K", bare_shifted(value, 6)),
        _ => prefixed(value, unit.symbol()),
    }
}

/// Prints a ratio as a percentage with four significant digits: `0.5 %`, `-0.0101 %`.
pub fn percent(value: f64) -> String {
    match word(value) {
        Some(word) => word.to_string(),
        None => format!("{} %", bare_shifted(value, 2)),
    }
}

/// The word for a value that no digits can show.
fn word(value: f64) -> Option<&'static str> {
    match value {
        _ if value.is_finite() => None,
        _ if value.is_nan() => Some("undefined"),
        _ if 0.0 < value => Some("unlimited"),
        _ => Some("-unlimited"),
    }
}

/// A finite number rounded to four significant digits, as its digits and the power of ten of the first.
struct Decimal {
    negative: bool,
    digits: String,
    exponent: i32,
}

impl Decimal {
    fn round(value: f64) -> Self {
        let text = format!("{:.*e}", DIGITS - 1, value.abs());
        let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
        Decimal {
            negative: value < 0.0,
            digits: mantissa.chars().filter(char::is_ascii_digit).collect(),
            exponent: exponent.parse().unwrap_or(0),
        }
    }

    fn is_zero(&self) -> bool {
        self.digits.bytes().all(|digit| digit == b'0')
    }

    /// Writes the digits with `whole` of them before the point, without trailing zeros.
    fn write(&self, whole: i32) -> String {
        let sign = if self.negative { "-" } else { "" };
        let digits = self.digits.trim_end_matches('0');
        let zeros = |count: i32| "0".repeat(count.max(0) as usize);
        if whole <= 0 {
            return format!("{sign}0.{}{digits}", zeros(-whole));
        }
        let whole = whole as usize;
        if digits.len() <= whole {
            return format!("{sign}{digits}{}", zeros((whole - digits.len()) as i32));
        }
        format!("{sign}{}.{}", &digits[..whole], &digits[whole..])
    }
}

fn prefixed(value: f64, symbol: &str) -> String {
    let number = Decimal::round(value);
    if number.is_zero() {
        return format!("0 {symbol}");
    }
    let group = number.exponent.div_euclid(3) * 3;
    match PREFIXES.iter().find(|(power, _)| *power == group) {
        Some((power, prefix)) => format!("{} {prefix}{symbol}", number.write(number.exponent - power + 1)),
        None => format!("{}e{} {symbol}", number.write(1), number.exponent),
    }
}

fn bare(value: f64) -> String {
    bare_shifted(value, 0)
}

/// Prints `value * 10^shift` without prefix, with an exponent where plain digits would be hard to count.
fn bare_shifted(value: f64, shift: i32) -> String {
    let mut number = Decimal::round(value);
    if number.is_zero() {
        return "0".to_string();
    }
    number.exponent += shift;
    match number.exponent {
        -7..=4 => number.write(number.exponent + 1),
        _ => format!("{}e{}", number.write(1), number.exponent),
    }
}

#[cfg(test)]
mod tests {
    use super::{percent, show};
    use crate::quantity::Unit;

    #[test]
    fn prints_engineering_notation() {
        let cases = [
            (4_700.0, Unit::Ohm, "4.7 kohm"),
            (-0.0125, Unit::Volt, "-12.5 mV"),
            (2.2e-6, Unit::Ampere, "2.2 uA"),
            (20e3, Unit::Hertz, "20 kHz"),
            (999.96, Unit::Ohm, "1 kohm"),
            (1_234_567.0, Unit::Ohm, "1.235 Mohm"),
            (100e9, Unit::Ohm, "100 Gohm"),
            (3e-12, Unit::Farad, "3 pF"),
            (3e-20, Unit::Farad, "3e-20 F"),
            (5e17, Unit::Ohm, "5e17 ohm"),
            (0.0, Unit::Volt, "0 V"),
            (-0.0, Unit::Volt, "0 V"),
            (86.02, Unit::Decibel, "86.02 dB"),
            (45.0, Unit::Degree, "45 degree"),
            (-40.0, Unit::Celsius, "-40 degC"),
            (0.3e6, Unit::VoltPerSecond, "0.3 V/us"),
            (1.3e-6, Unit::VoltPerKelvin, "1.3 uV/K"),
            (1e-4, Unit::PerKelvin, "100 ppm/K"),
            (10e-9, Unit::VoltPerRootHertz, "10 nV/rtHz"),
            (0.12e-12, Unit::AmperePerRootHertz, "120 fA/rtHz"),
        ];
        for (value, unit, text) in cases {
            assert_eq!(show(value, unit), text);
        }
    }

    #[test]
    fn prints_ratios_bare_or_as_percentage() {
        let cases =
            [(0.5, "0.5"), (101.0, "101"), (1.2e6, "1.2e6"), (-2.0 / 3.0, "-0.6667"), (12_346.0, "12350")];
        for (value, text) in cases {
            assert_eq!(show(value, Unit::One), text);
        }
        assert_eq!(percent(0.005), "0.5 %");
        assert_eq!(percent(-0.000101), "-0.0101 %");
        assert_eq!(percent(2.5e-7), "0.000025 %");
        assert_eq!(percent(1.0), "100 %");
        assert_eq!(percent(0.0), "0 %");
        assert_eq!(percent(1e-12), "1e-10 %");
    }

    #[test]
    fn names_what_is_not_a_number() {
        assert_eq!(show(f64::INFINITY, Unit::Decibel), "unlimited");
        assert_eq!(show(f64::NEG_INFINITY, Unit::Decibel), "-unlimited");
        assert_eq!(show(f64::NAN, Unit::Volt), "undefined");
        assert_eq!(percent(f64::NAN), "undefined");
    }
}
