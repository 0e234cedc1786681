//! Numbers of the text report: one way to print each.

use crate::figure::Bad;
use crate::quantity::{Unit, percent, show};

/// Digits of a number that stands beside one that it hardly differs from.
const FINE: i32 = 7;

/// Prefixes from femto to tera, by three powers of ten.
const PREFIXES: [&str; 10] = ["f", "p", "n", "u", "m", "", "k", "M", "G", "T"];

/// A figure's value: shares and relative errors as percentages. What turns bad when it falls, a loop gain or
/// a damping ratio, is a plain ratio.
pub(super) fn value(value: f64, unit: Unit, bad: Bad) -> String {
    match (unit, bad) {
        (Unit::One, Bad::Either | Bad::High) => percent(value),
        _ => show(value, unit),
    }
}

/// A value where there is one.
pub(super) fn optional(number: Option<f64>, unit: Unit, bad: Bad) -> String {
    number.map_or_else(|| "none".to_owned(), |number| value(number, unit, bad))
}

/// Seven digits, so that a real transfer or voltage differs visibly from its twin's: `100.9898`, `-999.95 kohm`.
/// A ratio has an empty symbol or `V/V`.
pub(super) fn fine(value: f64, symbol: &str) -> String {
    let ratio = matches!(symbol, "" | "V/V");
    if !value.is_finite() {
        return show(value, Unit::One);
    }
    let rounded = format!("{value:.*e}", FINE as usize - 1);
    let exponent: i32 = rounded.split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or(0);
    if value == 0.0 {
        return if ratio { "0".to_owned() } else { format!("0 {symbol}") };
    }
    match exponent {
        -4..=6 if ratio => trimmed(value, FINE - 1 - exponent),
        -15..=14 if !ratio => {
            let group = exponent.div_euclid(3) * 3;
            let digits = trimmed(value / 10f64.powi(group), FINE - 1 - (exponent - group));
            format!("{digits} {}{symbol}", PREFIXES[(group / 3 + 5) as usize])
        }
        _ if ratio => format!("{value:e}"),
        _ => format!("{value:e} {symbol}"),
    }
}

/// A number with so many decimals, zeros at the end left out.
fn trimmed(value: f64, decimals: i32) -> String {
    let digits = format!("{value:.*}", decimals.max(0) as usize);
    match digits.contains('.') {
        true => digits.trim_end_matches('0').trim_end_matches('.').to_owned(),
        false => digits,
    }
}

#[cfg(test)]
mod tests {
    use super::{fine, value};
    use crate::figure::Bad;
    use crate::quantity::Unit;

    #[test]
    fn prints_shares_as_percentages_and_loop_gains_bare() {
        assert_eq!(value(-0.021, Unit::One, Bad::Either), "-2.1 %");
        assert_eq!(value(1.3, Unit::One, Bad::High), "130 %");
        assert_eq!(value(0.5, Unit::One, Bad::Low), "0.5");
        assert_eq!(value(0.25, Unit::Volt, Bad::Low), "250 mV");
    }

    #[test]
    fn shows_how_little_two_numbers_differ() {
        assert_eq!(fine(101.0, "V/V"), "101");
        assert_eq!(fine(100.9898, "V/V"), "100.9898");
        assert_eq!(fine(-1e-9, "V/V"), "-1e-9");
        assert_eq!(fine(-999_950.0, "ohm"), "-999.95 kohm");
        assert_eq!(fine(0.01999798, "V"), "19.99798 mV");
        assert_eq!(fine(999.99999, "V"), "1 kV");
        assert_eq!(fine(0.0, "V"), "0 V");
        assert_eq!(fine(f64::INFINITY, "ohm"), "unlimited");
        assert_eq!(fine(f64::NAN, "V/V"), "undefined");
        assert_eq!(fine(1e300, "V"), "1e300 V");
    }
}
