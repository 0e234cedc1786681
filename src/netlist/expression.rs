//! Arithmetic in braces and quotes.

use super::fault::shown;
use super::{limit, number};
use nom::bytes::complete::take_while1;
use nom::error::Error;
use nom::{IResult, Parser};

/// Evaluates an expression of numbers, names, `+ - * / ^ **`, parentheses and the usual functions.
///
/// `^` and `**` bind tighter than a sign and to the right; `log` is the natural logarithm, as `ln`; `pi` is known
/// where `lookup` doesn't know it. Names are handed to `lookup` as written, for it to match them in any case.
///
/// # Errors
/// A sentence that says what is wrong: an unknown name, a missing operand, too deep a nesting, no finite result.
pub fn evaluate(text: &str, lookup: &dyn Fn(&str) -> Option<f64>) -> Result<f64, String> {
    if limit::EXPRESSION_BYTES < text.len() {
        return Err(format!(
            "the expression is too long: at most {} bytes are read",
            limit::EXPRESSION_BYTES
        ));
    }
    let mut cursor = Cursor { rest: text, lookup };
    let value = cursor.sum(0)?;
    cursor.blanks();
    if !cursor.rest.is_empty() {
        return Err(format!("expected an operator, found {}", shown(cursor.rest)));
    }
    if value.is_finite() { Ok(value) } else { Err(format!("{} has no finite value", shown(text))) }
}

struct Cursor<'a> {
    rest: &'a str,
    lookup: &'a dyn Fn(&str) -> Option<f64>,
}

impl<'a> Cursor<'a> {
    /// Moves over blanks, and over a line break with the plus sign of the line that continues.
    fn blanks(&mut self) {
        loop {
            self.rest = self.rest.trim_start_matches([' ', '\t', '\r', '\u{a0}']);
            let Some(next) = self.rest.strip_prefix('\n') else { return };
            self.rest = next.trim_start();
            // A comment between the two lines goes up to its line break.
            while self.rest.starts_with('*') {
                self.rest = self.rest.split_once('\n').map_or("", |(_, next)| next.trim_start());
            }
            self.rest = self.rest.strip_prefix('+').unwrap_or(self.rest);
        }
    }

    /// Takes a sign if it comes next.
    fn take(&mut self, sign: &str) -> bool {
        self.blanks();
        match self.rest.strip_prefix(sign) {
            Some(rest) => {
                self.rest = rest;
                true
            }
            None => false,
        }
    }

    fn sum(&mut self, depth: usize) -> Result<f64, String> {
        if limit::EXPRESSION_DEPTH <= depth {
            return Err(format!(
                "the expression is nested too deep: at most {} levels are read",
                limit::EXPRESSION_DEPTH
            ));
        }
        let mut value = self.product(depth)?;
        loop {
            if self.take("+") {
                value += self.product(depth)?;
            } else if self.take("-") {
                value -= self.product(depth)?;
            } else {
                return Ok(value);
            }
        }
    }

    fn product(&mut self, depth: usize) -> Result<f64, String> {
        let mut value = self.signed(depth)?;
        loop {
            self.blanks();
            if !self.rest.starts_with("**") && self.take("*") {
                value *= self.signed(depth)?;
            } else if self.take("/") {
                let divisor = self.signed(depth)?;
                if divisor == 0.0 {
                    return Err("division by zero".to_owned());
                }
                value /= divisor;
            } else {
                return Ok(value);
            }
        }
    }

    fn signed(&mut self, depth: usize) -> Result<f64, String> {
        let mut negative = false;
        loop {
            if self.take("-") {
                negative = !negative;
            } else if !self.take("+") {
                let value = self.power(depth)?;
                return Ok(if negative { -value } else { value });
            }
        }
    }

    fn power(&mut self, depth: usize) -> Result<f64, String> {
        let base = self.atom(depth)?;
        if !self.take("**") && !self.take("^") {
            return Ok(base);
        }
        if limit::EXPRESSION_DEPTH <= depth {
            return Err(format!(
                "the expression is nested too deep: at most {} levels are read",
                limit::EXPRESSION_DEPTH
            ));
        }
        Ok(base.powf(self.signed(depth + 1)?))
    }

    fn atom(&mut self, depth: usize) -> Result<f64, String> {
        for (open, close) in [("(", ")"), ("{", "}")] {
            if self.take(open) {
                let value = self.sum(depth + 1)?;
                return if self.take(close) { Ok(value) } else { Err(format!("expected `{close}`")) };
            }
        }
        if let Ok((rest, number)) = number::prefix(self.rest) {
            self.rest = rest;
            return Ok(number.value);
        }
        let Ok((rest, name)) = identifier(self.rest) else {
            return Err(match self.rest {
                "" => "expected a number or a name, found the end of the expression".to_owned(),
                rest => format!("expected a number or a name, found {}", shown(rest)),
            });
        };
        self.rest = rest;
        if self.take("(") {
            let (values, count) = self.arguments(depth)?;
            return call(name, &values[..count]);
        }
        let known =
            (self.lookup)(name).or_else(|| name.eq_ignore_ascii_case("pi").then_some(std::f64::consts::PI));
        known.ok_or_else(|| format!("{} is not defined", shown(name)))
    }

    /// Up to three arguments and the parenthesis that ends them.
    fn arguments(&mut self, depth: usize) -> Result<([f64; 3], usize), String> {
        let mut values = [0.0; 3];
        for count in 0..3 {
            values[count] = self.sum(depth + 1)?;
            if self.take(")") {
                return Ok((values, count + 1));
            }
            if !self.take(",") {
                return Err("expected `,` or `)` behind an argument".to_owned());
            }
        }
        Err("no function has more than three arguments".to_owned())
    }
}

fn identifier(input: &str) -> IResult<&str, &str> {
    take_while1::<_, _, Error<&str>>(|letter: char| {
        letter.is_alphanumeric() || matches!(letter, '_' | '.' | '$' | '#' | ':' | '@' | '!')
    })
    .parse(input)
}

/// A function of one to three arguments.
fn call(name: &str, values: &[f64]) -> Result<f64, String> {
    let lower = name.to_ascii_lowercase();
    Ok(match (lower.as_str(), values) {
        ("sqrt", [x]) => x.sqrt(),
        ("abs", [x]) => x.abs(),
        ("exp", [x]) => x.exp(),
        ("ln" | "log", [x]) => x.ln(),
        ("log10", [x]) => x.log10(),
        ("sin", [x]) => x.sin(),
        ("cos", [x]) => x.cos(),
        ("tan", [x]) => x.tan(),
        ("atan" | "arctan", [x]) => x.atan(),
        ("asin", [x]) => x.asin(),
        ("acos", [x]) => x.acos(),
        ("sinh", [x]) => x.sinh(),
        ("cosh", [x]) => x.cosh(),
        ("tanh", [x]) => x.tanh(),
        ("floor", [x]) => x.floor(),
        ("ceil", [x]) => x.ceil(),
        ("int", [x]) => x.trunc(),
        ("nint" | "round", [x]) => x.round(),
        ("sgn", [x]) => {
            if *x == 0.0 {
                0.0
            } else {
                x.signum()
            }
        }
        ("min", [x, y]) => x.min(*y),
        ("max", [x, y]) => x.max(*y),
        ("pow", [x, y]) => x.powf(*y),
        ("pwr", [x, y]) => x.abs().powf(*y),
        ("pwrs", [x, y]) => x.signum() * x.abs().powf(*y),
        ("atan2", [y, x]) => y.atan2(*x),
        ("hypot", [x, y]) => x.hypot(*y),
        ("limit", [x, low, high]) => x.max(low.min(*high)).min(low.max(*high)),
        _ => {
            let plural = if values.len() == 1 { "" } else { "s" };
            return Err(format!(
                "{} with {} argument{plural} is no known function",
                shown(name),
                values.len()
            ));
        }
    })
}

#[cfg(test)]
mod tests {
    use super::evaluate;

    fn value(text: &str) -> Result<f64, String> {
        evaluate(text, &|name| name.eq_ignore_ascii_case("gain").then_some(4.0))
    }

    #[test]
    fn arithmetic() {
        let cases = [
            ("1 + 2 * 3", 7.0),
            ("-2 ^ 2", -4.0),
            ("2 ** 3 ** 2", 512.0),
            ("2^-1", 0.5),
            ("10k / Gain", 2500.0),
            ("(1 + 1) * 1Meg", 2e6),
            ("{.5*10}", 5.0),
            ("sqrt(16) + max(1, 2) - abs(-3)", 3.0),
            ("limit(15, -10, 10)", 10.0),
            ("5\n+ *2", 10.0),
            ("5\n* a comment\n+ +2", 7.0),
            ("1e-3 - -1m", 2e-3),
            ("--3", 3.0),
            ("int(-2.5)", -2.0),
        ];
        for (text, expected) in cases {
            assert_eq!(value(text), Ok(expected), "{text}");
        }
    }

    #[test]
    fn faults_are_sentences() {
        for text in
            ["", "1 +", "foo", "1 / 0", "sqrt(-1)", "sqrt(1, 2)", "(1", "1 2", "V(a)", "1e308 * 10", "$"]
        {
            assert!(value(text).is_err_and(|message| !message.is_empty()), "{text}");
        }
        assert_eq!(value("foo * 2"), Err("`foo` is not defined".to_owned()));
    }

    #[test]
    fn depth_and_size_are_bounded() {
        assert!(value(&"(".repeat(10_000)).is_err());
        assert!(value(&"2^".repeat(5_000)).is_err());
        assert!(value(&"sqrt(".repeat(3_000)).is_err());
        assert!(value(&"1+".repeat(100_000)).is_err());
        assert_eq!(value(&format!("{}3", "-".repeat(5_000))), Ok(3.0));
    }
}
