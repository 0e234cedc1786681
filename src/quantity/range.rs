//! Ranges and tolerances: `-10 mV .. 60 mV`, `+/- 20 mV`, `5 V +/- 2 %`, `5 V +/- 100 mV`.

use super::parse::nouns;
use super::{QuantityFault, Unit, parse, parse_one_of};
use crate::source::quote;

/// Reads a range of one unit, least end first. A single value is a range without width.
///
/// # Errors
/// An end isn't a quantity of the unit, or the ends are exchanged.
pub fn parse_range(text: &str, unit: Unit) -> Result<(f64, f64), QuantityFault> {
    parse_range_of(text, &[unit]).map(|(least, greatest, _)| (least, greatest))
}

/// Reads a range whose unit may be one of several, both ends in the same.
///
/// # Errors
/// As [`parse_range`]; and ends of different units.
pub fn parse_range_of(text: &str, units: &[Unit]) -> Result<(f64, f64, Unit), QuantityFault> {
    if let Some((middle, deviation)) = split_deviation(text) {
        if middle.is_empty() {
            let (deviation, unit) = parse_one_of(deviation, units)?;
            return Ok((-magnitude(deviation, text)?, deviation, unit));
        }
        let (middle, unit) = parse_one_of(middle, units)?;
        let deviation = around(middle, deviation, unit, text)?;
        return Ok((middle - deviation, middle + deviation, unit));
    }
    let Some((least, greatest)) = text.split_once("..") else {
        let (value, unit) = parse_one_of(text, units)?;
        return Ok((value, value, unit));
    };
    let (least, greatest) = (least.trim(), greatest.trim());
    let (top, unit) = parse_one_of(greatest, units)?;
    let (bottom, other) = parse_end(least, greatest, unit, units)?;
    if other != unit {
        let text = quote(text.trim());
        return Err(QuantityFault::new(format!("expected both ends in the same unit, found {text}")));
    }
    if bottom <= top {
        return Ok((bottom, top, unit));
    }
    Err(QuantityFault::new(format!("expected the lower end first, found {}", quote(text.trim())))
        .help(format!("write {}", quote(&format!("{greatest} .. {least}")))))
}

/// Reads the lower end. Where it lacks its unit, the correction is the unit of the other end.
fn parse_end(text: &str, other: &str, unit: Unit, units: &[Unit]) -> Result<(f64, Unit), QuantityFault> {
    // Nought needs no unit, whichever of several units the other end has.
    if let Ok(0.0) = parse(text, unit) {
        return Ok((0.0, unit));
    }
    parse_one_of(text, units).map_err(|fault| {
        let bare = text.parse::<f64>().is_ok();
        let suffix = other.trim_start_matches(|c: char| c.is_ascii_digit() || "+-.".contains(c)).trim_start();
        if bare {
            fault.help(format!("write {}", quote(&format!("{text} {suffix} .. {other}"))))
        } else {
            fault
        }
    })
}

/// Reads a nominal value with the absolute deviation that it may have to either side.
/// A range is read as its middle and half its width.
///
/// # Errors
/// As [`parse_range`].
pub fn parse_toleranced(text: &str, unit: Unit) -> Result<(f64, Option<f64>), QuantityFault> {
    if let Some((nominal, deviation)) = split_deviation(text) {
        if nominal.is_empty() {
            let fault =
                QuantityFault::new(format!("expected {}, found {}", nouns(&[unit]), quote(text.trim())));
            return Err(fault.help("write the nominal value before `+/-`"));
        }
        let nominal = parse(nominal, unit)?;
        return Ok((nominal, Some(around(nominal, deviation, unit, text)?)));
    }
    if text.contains("..") {
        let (least, greatest) = parse_range(text, unit)?;
        let middle = least / 2.0 + greatest / 2.0;
        return Ok((middle, Some(greatest - middle)));
    }
    Ok((parse(text, unit)?, None))
}

/// Cuts a text at its `+/-`.
fn split_deviation(text: &str) -> Option<(&str, &str)> {
    let (before, after) = text.split_once("+/-").or_else(|| text.split_once('\u{b1}'))?;
    Some((before.trim(), after.trim()))
}

/// The deviation around a nominal value: in its own unit, or a percentage of it.
fn around(nominal: f64, text: &str, unit: Unit, whole: &str) -> Result<f64, QuantityFault> {
    let (deviation, found) = parse_one_of(text, &[unit, Unit::One])?;
    let percentage = text.ends_with('%') || text.ends_with("ppm");
    match found {
        Unit::One if unit != Unit::One && !percentage && deviation != 0.0 => {
            let usual = unit.usual();
            Err(QuantityFault::new(format!("{} lacks a unit", quote(text)))
                .help(format!("write `+/- {text} %` or `+/- {text} {usual}`")))
        }
        Unit::One if percentage => Ok(magnitude(deviation, whole)? * nominal.abs()),
        _ => magnitude(deviation, whole),
    }
}

fn magnitude(deviation: f64, whole: &str) -> Result<f64, QuantityFault> {
    if 0.0 <= deviation {
        return Ok(deviation);
    }
    Err(QuantityFault::new(format!("expected a deviation of 0 or more, found {}", quote(whole.trim()))))
}

#[cfg(test)]
mod tests {
    use super::{parse_range, parse_range_of, parse_toleranced};
    use crate::quantity::Unit;

    #[test]
    fn reads_ranges() {
        let volts = |text| parse_range(text, Unit::Volt);
        assert_eq!(volts("-10 mV .. 60 mV"), Ok((-0.01, 0.06)));
        assert_eq!(volts("0 .. 2.5 V"), Ok((0.0, 2.5)));
        assert_eq!(volts("-1V..1V"), Ok((-1.0, 1.0)));
        assert_eq!(volts("+/- 20 mV"), Ok((-0.02, 0.02)));
        assert_eq!(volts("\u{b1}20 mV"), Ok((-0.02, 0.02)));
        assert_eq!(volts("5 V +/- 100 mV"), Ok((4.9, 5.1)));
        assert_eq!(volts("5 V +/- 2 %"), Ok((4.9, 5.1)));
        assert_eq!(volts("2.5 V"), Ok((2.5, 2.5)));
        assert_eq!(parse_range("-40 degC .. 85 degC", Unit::Celsius), Ok((-40.0, 85.0)));
        assert_eq!(parse_range("0 % .. 100 %", Unit::One), Ok((0.0, 1.0)));
    }

    #[test]
    fn reads_ranges_of_several_units() {
        let either = |text| parse_range_of(text, &[Unit::Volt, Unit::Ampere]);
        assert_eq!(either("0 uA .. 2 uA"), Ok((0.0, 2e-6, Unit::Ampere)));
        assert_eq!(either("0 .. 2 uA"), Ok((0.0, 2e-6, Unit::Ampere)));
        assert_eq!(either("+/- 20 mV"), Ok((-0.02, 0.02, Unit::Volt)));
        assert!(either("0 V .. 2 uA").is_err_and(|fault| fault.message.contains("same unit")));
    }

    #[test]
    fn reads_toleranced_values() {
        let volts = |text| parse_toleranced(text, Unit::Volt);
        assert_eq!(volts("5 V +/- 5 %"), Ok((5.0, Some(0.25))));
        assert_eq!(volts("-5 V +/- 5 %"), Ok((-5.0, Some(0.25))));
        assert_eq!(volts("5 V +/- 100 mV"), Ok((5.0, Some(0.1))));
        assert_eq!(volts("3.3 V"), Ok((3.3, None)));
        assert_eq!(volts("4.5 V .. 5.5 V"), Ok((5.0, Some(0.5))));
    }

    #[test]
    fn faults_give_the_correction() {
        let help = |text| parse_range(text, Unit::Volt).unwrap_err().help.unwrap_or_default();
        assert_eq!(help("-10 .. 60 mV"), "write `-10 mV .. 60 mV`");
        assert_eq!(help("60 mV .. -10 mV"), "write `-10 mV .. 60 mV`");
        assert_eq!(help("5 V +/- 2"), "write `+/- 2 %` or `+/- 2 mV`");
        assert_eq!(
            parse_toleranced("+/- 5 V", Unit::Volt).unwrap_err().help.unwrap(),
            "write the nominal value before `+/-`"
        );
        assert!(parse_range("5 V +/- -2 V", Unit::Volt).is_err());
        assert!(
            parse_range("1 V .. 2 A", Unit::Volt).is_err_and(|fault| fault.message.contains("a current"))
        );
        assert!(parse_range("..", Unit::Volt).is_err());
        assert!(parse_range("", Unit::Volt).is_err());
    }
}
