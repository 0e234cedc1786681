//! The values of a budget: texts into numbers that make sense there.

use crate::quantity::{
    Celsius, Farads, Hertz, Ohms, QuantityFault, Unit, parse, parse_any, parse_range, parse_share,
};
use crate::source::quote;

/// Figures whose limit may be a share of the output span.
const OF_SPAN: [&str; 3] = ["bias-error", "offset-error", "common-error"];

/// A limit as a budget states it: value, unit, and whether it is a share of the output span.
pub(super) fn stated(text: &str, figure: &str) -> Result<(f64, Unit, bool), QuantityFault> {
    let Some(share) = text.trim().strip_suffix("of span") else {
        return parse_any(text).map(|(value, unit)| (value, unit, false));
    };
    if !OF_SPAN.contains(&figure) {
        let message =
            format!("a limit of {} can't be a share of the span, found {}", quote(figure), quote(text));
        return Err(QuantityFault::new(message));
    }
    parse_share(share).map(|value| (value, Unit::One, true))
}

pub(super) fn temperature(text: &str) -> Result<(Celsius, Celsius), QuantityFault> {
    let (least, greatest) = parse_range(text, Unit::Celsius)?;
    if -273.15 <= least { Ok((Celsius(least), Celsius(greatest))) } else { Err(below(text, "-273.15 degC")) }
}

pub(super) fn resistance(text: &str) -> Result<Ohms, QuantityFault> {
    magnitude(text, Unit::Ohm).map(Ohms)
}

pub(super) fn capacitance(text: &str) -> Result<Farads, QuantityFault> {
    magnitude(text, Unit::Farad).map(Farads)
}

pub(super) fn band(text: &str) -> Result<(Hertz, Hertz), QuantityFault> {
    let (least, greatest) = parse_range(text, Unit::Hertz)?;
    let help = "write both ends: `0 Hz .. 200 Hz`";
    match () {
        () if 0.0 <= least && least < greatest => Ok((Hertz(least), Hertz(greatest))),
        () if 0.0 <= least => {
            Err(QuantityFault::new(format!("expected two ends of a band, found {}", quote(text))).help(help))
        }
        () => Err(below(text, "0 Hz")),
    }
}

pub(super) fn travel(text: &str) -> Result<(f64, f64), QuantityFault> {
    let (least, greatest) = parse_range(text, Unit::One)?;
    if 0.0 <= least && greatest <= 1.0 {
        return Ok((least, greatest));
    }
    let message = format!("expected a travel within `0 % .. 100 %`, found {}", quote(text));
    Err(QuantityFault::new(message))
}

/// A relative tolerance: at least nothing, less than all.
pub(super) fn deviation(text: &str) -> Result<f64, QuantityFault> {
    let text = text.trim();
    let value = parse_share(text.strip_prefix("+/-").or(text.strip_prefix('\u{b1}')).unwrap_or(text))?;
    if (0.0..1.0).contains(&value) {
        return Ok(value);
    }
    Err(QuantityFault::new(format!("expected a tolerance from 0 to below 100 %, found {}", quote(text))))
}

pub(super) fn magnitude(text: &str, unit: Unit) -> Result<f64, QuantityFault> {
    let value = parse(text, unit)?;
    if 0.0 <= value { Ok(value) } else { Err(below(text, "0")) }
}

fn below(text: &str, least: &str) -> QuantityFault {
    QuantityFault::new(format!("expected at least {least}, found {}", quote(text)))
}

/// A day as `YYYY-MM-DD`, kept as text.
pub(super) fn date(text: &str) -> Result<String, QuantityFault> {
    let fault = || {
        QuantityFault::new(format!("expected a day such as `2027-06-30`, found {}", quote(text)))
            .help("write year, month and day as `YYYY-MM-DD`")
    };
    let form = text.len() == 10
        && text.bytes().enumerate().all(|(at, byte)| match at {
            4 | 7 => byte == b'-',
            _ => byte.is_ascii_digit(),
        });
    if !form {
        return Err(fault());
    }
    let number = |from: usize, to: usize| text[from..to].parse::<u32>().unwrap_or(0);
    let (year, month, day) = (number(0, 4), number(5, 7), number(8, 10));
    let leap = year % 4 == 0 && (year % 100 != 0 || year % 400 == 0);
    let days = match month {
        2 if leap => 29,
        2 => 28,
        4 | 6 | 9 | 11 => 30,
        1 | 3 | 5 | 7 | 8 | 10 | 12 => 31,
        _ => 0,
    };
    if 1 <= day && day <= days { Ok(text.to_string()) } else { Err(fault()) }
}
