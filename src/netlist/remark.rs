//! What exporters hang on a value: `10k_1%`, `33000uF/16V`, `1K5_0.5W+`.

use super::number::{Fault, Number, decimal, is_unit};
use nom::branch::alt;
use nom::bytes::complete::{tag, take_till, take_while, take_while1};
use nom::character::complete::char;
use nom::combinator::{opt, value};
use nom::sequence::preceded;
use nom::{IResult, Parser};

/// A percentage as a ratio: `1%`, `<20%`, `+-5%`.
pub fn percentage(text: &str) -> Option<f64> {
    let (rest, amount) = preceded(bound, decimal).parse(text).ok()?;
    (rest == "%").then(|| amount.shifted(1, -2))
}

/// Signs in front of a tolerance.
fn bound(input: &str) -> IResult<&str, ()> {
    value((), opt(alt((tag("+/-"), tag("+-"), tag("\u{b1}"), tag("<="), tag("<"))))).parse(input)
}

/// Reads what hangs behind a value: tolerance and rating; other remarks (a package, a dielectric) are passed over.
/// `None` where the text doesn't end the value.
pub(super) fn read(text: &str, found: &mut Number) -> Option<()> {
    let separator = |letter: char| matches!(letter, '_' | '/' | ',' | '(' | ')' | ' ' | '\t' | '\u{a0}');
    if !text.starts_with(|first: char| separator(first) || matches!(first, '\u{b1}' | '<')) {
        return None;
    }
    let mut rest = text;
    while !rest.is_empty() {
        let item = |input| -> IResult<&str, (f64, &str)> {
            let (rest, amount) = preceded(bound, decimal).parse(input)?;
            let (rest, divisor) = opt(preceded(char('/'), decimal)).parse(rest)?;
            let (rest, unit) = alt((tag("%"), take_while1(is_unit))).parse(rest)?;
            Ok((rest, (amount.shifted(1, 0) / divisor.map_or(1.0, |divisor| divisor.shifted(1, 0)), unit)))
        };
        rest = match item(rest) {
            Ok((rest, (amount, unit))) => {
                remark(amount, unit, found);
                rest
            }
            Err(_) => take_till::<_, _, Fault>(separator)(rest).map_or("", |(rest, _)| rest),
        };
        rest = take_while::<_, _, Fault>(separator)(rest).map_or("", |(rest, _)| rest);
    }
    Some(())
}

/// Keeps one tolerance or rating.
fn remark(amount: f64, unit: &str, found: &mut Number) {
    match unit {
        "%" => found.tolerance = Some(amount / 100.0),
        "W" | "w" | "V" | "v" | "VDC" | "Vdc" => found.rating = Some(amount),
        "mW" | "mw" => found.rating = Some(amount / 1_000.0),
        "kV" | "KV" => found.rating = Some(amount * 1_000.0),
        _ => {}
    }
}

#[cfg(test)]
mod tests {
    use super::percentage;
    use crate::netlist::number;

    #[test]
    fn tolerance_and_rating_hang_behind() {
        let tail = |text| number(text).map(|number| (number.tolerance, number.rating)).unwrap();
        assert_eq!(tail("33000\u{b5}F/16V"), (None, Some(16.0)));
        assert_eq!(tail("10K_1%"), (Some(0.01), None));
        assert_eq!(tail("1K5_0.5W+"), (None, Some(0.5)));
        assert_eq!(tail("22u_<20%"), (Some(0.2), None));
        assert_eq!(tail("10k/1/4W"), (None, Some(0.25)));
        assert_eq!(tail("100n_X7R_0603"), (None, None));
        assert_eq!(tail("10k\u{b1}5%"), (Some(0.05), None));
        assert_eq!(percentage("<20%"), Some(0.2));
        assert_eq!(percentage("1"), None);
    }
}
