//! Units by name: how each is written, read and asked for.

use super::Unit;

/// Prefixes as they are read, by power of ten; case matters, but for kilo.
const PREFIXES: [(char, i32); 13] = [
    ('f', -15),
    ('p', -12),
    ('n', -9),
    ('u', -6),
    ('\u{b5}', -6),
    ('\u{3bc}', -6),
    ('m', -3),
    ('k', 3),
    ('K', 3),
    ('M', 6),
    ('G', 9),
    ('T', 12),
    ('P', 15),
];

/// Units that take a prefix.
const SCALED: [(&str, Unit); 12] = [
    ("V", Unit::Volt),
    ("A", Unit::Ampere),
    ("ohm", Unit::Ohm),
    ("Ohm", Unit::Ohm),
    ("ohms", Unit::Ohm),
    ("\u{3a9}", Unit::Ohm),
    ("\u{2126}", Unit::Ohm),
    ("F", Unit::Farad),
    ("H", Unit::Henry),
    ("Hz", Unit::Hertz),
    ("s", Unit::Second),
    ("W", Unit::Watt),
];

/// Units that stand alone.
const PLAIN: [(&str, Unit, i32); 10] = [
    ("%", Unit::One, -2),
    ("ppm", Unit::One, -6),
    ("dB", Unit::Decibel, 0),
    ("degC", Unit::Celsius, 0),
    ("\u{b0}C", Unit::Celsius, 0),
    ("\u{2103}", Unit::Celsius, 0),
    ("degree", Unit::Degree, 0),
    ("degrees", Unit::Degree, 0),
    ("deg", Unit::Degree, 0),
    ("\u{b0}", Unit::Degree, 0),
];

impl Unit {
    /// The unit as it is written, without prefix; empty for a ratio.
    pub fn symbol(self) -> &'static str {
        match self {
            Unit::One => "",
            Unit::Volt => "V",
            Unit::Ampere => "A",
            Unit::Ohm => "ohm",
            Unit::Farad => "F",
            Unit::Henry => "H",
            Unit::Hertz => "Hz",
            Unit::Second => "s",
            Unit::Watt => "W",
            Unit::Celsius => "degC",
            Unit::Decibel => "dB",
            Unit::Degree => "degree",
            Unit::VoltPerSecond => "V/s",
            Unit::VoltPerKelvin => "V/K",
            Unit::AmperePerKelvin => "A/K",
            Unit::PerKelvin => "1/K",
            Unit::VoltPerRootHertz => "V/rtHz",
            Unit::AmperePerRootHertz => "A/rtHz",
        }
    }

    /// What the unit measures, with its article: `a voltage`.
    pub fn noun(self) -> &'static str {
        match self {
            Unit::One => "a ratio",
            Unit::Volt => "a voltage",
            Unit::Ampere => "a current",
            Unit::Ohm => "a resistance",
            Unit::Farad => "a capacitance",
            Unit::Henry => "an inductance",
            Unit::Hertz => "a frequency",
            Unit::Second => "a time",
            Unit::Watt => "a power",
            Unit::Celsius => "a temperature",
            Unit::Decibel => "a level",
            Unit::Degree => "an angle",
            Unit::VoltPerSecond => "a slew rate",
            Unit::VoltPerKelvin => "a voltage drift",
            Unit::AmperePerKelvin => "a current drift",
            Unit::PerKelvin => "a relative drift",
            Unit::VoltPerRootHertz => "a voltage noise density",
            Unit::AmperePerRootHertz => "a current noise density",
        }
    }

    /// The unit with the prefix that such values usually have.
    pub(super) fn usual(self) -> &'static str {
        match self {
            Unit::One => "%",
            Unit::Volt => "mV",
            Unit::Ampere => "mA",
            Unit::Ohm => "kohm",
            Unit::Farad => "pF",
            Unit::Henry => "mH",
            Unit::Hertz => "kHz",
            Unit::Second => "us",
            Unit::Watt => "mW",
            Unit::Celsius => "degC",
            Unit::Decibel => "dB",
            Unit::Degree => "degree",
            Unit::VoltPerSecond => "V/us",
            Unit::VoltPerKelvin => "uV/K",
            Unit::AmperePerKelvin => "pA/K",
            Unit::PerKelvin => "ppm/K",
            Unit::VoltPerRootHertz => "nV/rtHz",
            Unit::AmperePerRootHertz => "pA/rtHz",
        }
    }
}

/// A unit as written: what it measures, the power of ten to multiply by, and what to add afterwards.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Written {
    /// The unit without prefix.
    pub unit: Unit,
    /// Power of ten of its prefix.
    pub power: i32,
    /// Added after scaling; only for absolute temperatures in kelvin.
    pub offset: f64,
}

/// Reads a unit; `None` where no such unit exists.
pub(super) fn read(text: &str) -> Option<Written> {
    let found = |unit, power| Some(Written { unit, power, offset: 0.0 });
    if let Some((_, unit, power)) = PLAIN.iter().find(|(name, ..)| *name == text) {
        return found(*unit, *power);
    }
    if text == "K" {
        return Some(Written { unit: Unit::Celsius, power: 0, offset: -273.15 });
    }
    if let Some((unit, power)) = scaled(text) {
        return found(unit, power);
    }
    let (above, below) = text.split_once('/')?;
    let (above, below) = (above.trim_end(), below.trim_start());
    if matches!(below, "K" | "degC" | "\u{b0}C" | "\u{2103}") {
        return match above {
            "" | "1" => found(Unit::PerKelvin, 0),
            "%" => found(Unit::PerKelvin, -2),
            "ppm" => found(Unit::PerKelvin, -6),
            _ => match scaled(above)? {
                (Unit::Volt, power) => found(Unit::VoltPerKelvin, power),
                (Unit::Ampere, power) => found(Unit::AmperePerKelvin, power),
                _ => None,
            },
        };
    }
    let (above, power) = scaled(above)?;
    if matches!(below, "rtHz" | "sqrt(Hz)" | "\u{221a}Hz") {
        return match above {
            Unit::Volt => found(Unit::VoltPerRootHertz, power),
            Unit::Ampere => found(Unit::AmperePerRootHertz, power),
            _ => None,
        };
    }
    match (above, scaled(below)?) {
        (Unit::Volt, (Unit::Volt, below)) => found(Unit::One, power - below),
        (Unit::Volt, (Unit::Second, below)) => found(Unit::VoltPerSecond, power - below),
        _ => None,
    }
}

/// Reads a prefix alone.
pub(super) fn prefix(letter: char) -> Option<i32> {
    PREFIXES.iter().find(|(name, _)| *name == letter).map(|(_, power)| *power)
}

/// Reads a unit that may have a prefix.
fn scaled(text: &str) -> Option<(Unit, i32)> {
    let known = |text: &str| SCALED.iter().find(|(name, _)| *name == text).map(|(_, unit)| *unit);
    if let Some(unit) = known(text) {
        return Some((unit, 0));
    }
    let mut letters = text.chars();
    let power = prefix(letters.next()?)?;
    known(letters.as_str()).map(|unit| (unit, power))
}

/// The spelling that was meant by one in the wrong case, such as `kHz` for `KHZ`.
pub(super) fn respell(text: &str, expected: Unit) -> Option<String> {
    let symbol = expected.symbol();
    if text.eq_ignore_ascii_case(symbol) {
        return Some(symbol.to_string());
    }
    let mut letters = text.chars();
    let first = letters.next()?;
    prefix(first)?;
    let first = if first == 'K' { 'k' } else { first };
    letters.as_str().eq_ignore_ascii_case(symbol).then(|| format!("{first}{symbol}"))
}
