//! Quantities, ranges and tolerances as people write them.

use super::super::{percent, show};
use super::{ANY, parse, parse_any, parse_gain, parse_share};
use crate::quantity::Unit;
use proptest::prelude::{Strategy, any, prop_assert, proptest};

#[test]
fn reads_quantities() {
    let cases = [
        ("0.5 %", Unit::One, 0.005),
        ("50 ppm", Unit::One, 50e-6),
        ("101", Unit::One, 101.0),
        ("-2.5", Unit::One, -2.5),
        ("10k", Unit::One, 10e3),
        ("200 V/mV", Unit::One, 200e3),
        ("2.2 kohm", Unit::Ohm, 2.2e3),
        ("2.2KOhm", Unit::Ohm, 2.2e3),
        ("2.2 k\u{3a9}", Unit::Ohm, 2.2e3),
        ("10k", Unit::Ohm, 10e3),
        ("4k7", Unit::Ohm, 4.7e3),
        ("4M7", Unit::Ohm, 4.7e6),
        ("4R7", Unit::Ohm, 4.7),
        ("4n7", Unit::Farad, 4.7e-9),
        ("100n", Unit::Farad, 100e-9),
        ("10 mV", Unit::Volt, 10e-3),
        ("10 MV", Unit::Volt, 10e6),
        ("\u{2212}10 \u{b5}V", Unit::Volt, -10e-6),
        ("10 \u{3bc}V", Unit::Volt, 10e-6),
        ("0", Unit::Volt, 0.0),
        ("2.5e-9 A", Unit::Ampere, 2.5e-9),
        ("2.5E-3nA", Unit::Ampere, 2.5e-12),
        ("20 kHz", Unit::Hertz, 20e3),
        ("100 dB", Unit::Decibel, 100.0),
        ("45 degree", Unit::Degree, 45.0),
        ("25 degC", Unit::Celsius, 25.0),
        ("25 \u{b0}C", Unit::Celsius, 25.0),
        ("0.3 V/us", Unit::VoltPerSecond, 0.3e6),
        ("10 nV/rtHz", Unit::VoltPerRootHertz, 10e-9),
        ("0.12 pA/rtHz", Unit::AmperePerRootHertz, 0.12e-12),
        ("1.3 uV/K", Unit::VoltPerKelvin, 1.3e-6),
        ("1.3 uV/\u{b0}C", Unit::VoltPerKelvin, 1.3e-6),
        ("100 ppm/K", Unit::PerKelvin, 100e-6),
        ("0.01 %/K", Unit::PerKelvin, 1e-4),
        ("250 mW", Unit::Watt, 0.25),
        ("5 us", Unit::Second, 5e-6),
    ];
    for (text, unit, value) in cases {
        assert_eq!(parse(text, unit), Ok(value), "{text}");
    }
    assert!((parse("298.15 K", Unit::Celsius).unwrap() - 25.0).abs() < 1e-9);
}

#[test]
fn reads_gains_in_decibel() {
    assert!((parse_gain("120 dB").unwrap() / 1e6 - 1.0).abs() < 1e-12);
    assert_eq!(parse_gain("200 V/mV"), Ok(200e3));
    assert_eq!(parse_gain("200000"), Ok(200e3));
    assert!(parse_gain("100000 dB").is_err());
}

#[test]
fn reads_any_unit() {
    assert_eq!(parse_any("250 mV"), Ok((0.25, Unit::Volt)));
    assert_eq!(parse_any("0.2 %"), Ok((0.002, Unit::One)));
    assert_eq!(parse_any("10"), Ok((10.0, Unit::One)));
    assert_eq!(parse_any("45 degree"), Ok((45.0, Unit::Degree)));
}

#[test]
fn faults_say_what_was_expected_and_the_correction() {
    let cases = [
        ("10 mA", Unit::Volt, "expected a voltage such as `10 mV`, found a current, `10 mA`", None),
        (
            "10",
            Unit::Volt,
            "`10` lacks a unit, expected a voltage such as `10 mV`",
            Some("write `10 mV` or `10 V`"),
        ),
        (
            "25",
            Unit::Celsius,
            "`25` lacks a unit, expected a temperature such as `25 degC`",
            Some("write `25 degC`"),
        ),
        (
            "0",
            Unit::Celsius,
            "`0` lacks a unit, expected a temperature such as `25 degC`",
            Some("write `0 degC`"),
        ),
        ("ten", Unit::Volt, "expected a voltage such as `10 mV`, found `ten`", None),
        ("", Unit::Ohm, "expected a resistance such as `10 kohm`, found nothing", None),
        ("3 dB", Unit::One, "expected a ratio such as `0.5 %` or `0.5`, found a level, `3 dB`", None),
        ("10M", Unit::Ohm, "`10M` can be read as milli or as mega", Some("write `10 mohm` or `10 Mohm`")),
        ("4m7", Unit::Ohm, "`4m7` can be read as milli or as mega", Some("write `4.7 mohm` or `4.7 Mohm`")),
        (
            "20 KHZ",
            Unit::Hertz,
            "expected a frequency such as `10 kHz`, found `20 KHZ` with the unknown unit `KHZ`",
            Some("write `20 kHz`"),
        ),
        (
            "5 parsecs",
            Unit::Volt,
            "expected a voltage such as `10 mV`, found `5 parsecs` with the unknown unit `parsecs`",
            None,
        ),
        ("1e999 V", Unit::Volt, "`1e999 V` is beyond the numbers that can be held", None),
        ("1e-999 V", Unit::Volt, "`1e-999 V` is beyond the numbers that can be held", None),
    ];
    for (text, unit, message, help) in cases {
        let fault = parse(text, unit).expect_err(text);
        assert_eq!(fault.message, message);
        assert_eq!(fault.help.as_deref(), help, "{text}");
    }
}

#[test]
fn shares_must_say_how_they_are_meant() {
    assert_eq!(parse_share("1 %"), Ok(0.01));
    assert_eq!(parse_share("0"), Ok(0.0));
    let fault = parse_share("1").unwrap_err();
    assert_eq!(fault.message, "`1` lacks a unit: it could be a ratio or a percentage");
    assert_eq!(fault.help.unwrap(), "write `1 %` or `100 %`");
}

#[test]
fn odd_texts_are_faults() {
    for text in [
        "1.2.3 V", ".", "-", "+-1 V", "--1 V", "nan", "inf", "1e", "1 e3 V", "4k7k", "4.7k7", "1e3k3", "V",
        "1 V V",
    ] {
        assert!(parse(text, Unit::Volt).is_err(), "{text}");
        assert!(parse(text, Unit::Ohm).is_err(), "{text}");
    }
    assert!(parse(&"9".repeat(100_000), Unit::One).is_err());
}

/// Numbers over every decade that a prefix or an exponent can show.
fn numbers() -> impl Strategy<Value = f64> {
    (any::<bool>(), 1.0..10.0, -24..24).prop_map(|(negative, mantissa, exponent)| {
        let value: f64 = mantissa * 10f64.powi(exponent);
        if negative { -value } else { value }
    })
}

proptest! {
    #[test]
    fn printed_and_read_again_is_the_same_to_the_printed_digits(value in numbers()) {
        for unit in ANY {
            let text = show(value, unit);
            let again = parse(&text, unit).unwrap();
            prop_assert!((again / value - 1.0).abs() <= 5.1e-4, "{} {}", value, text);
            prop_assert!(show(again, unit) == text, "{} {}", text, show(again, unit));
        }
        let again = parse_share(&percent(value)).unwrap();
        prop_assert!((again / value - 1.0).abs() <= 5.1e-4);
    }

    #[test]
    fn any_text_is_read_or_diagnosed(text in "\\PC{0,40}") {
        for unit in ANY {
            if let Ok(value) = parse(&text, unit) {
                prop_assert!(value.is_finite());
            }
            let _ = super::super::parse_range(&text, unit);
            let _ = super::super::parse_toleranced(&text, unit);
        }
    }

    #[test]
    fn likely_texts_are_read_or_diagnosed(text in "[-+]?[0-9.]{0,4}(e-?[0-9]{1,3})?[ ]?[kmMun]?(V|A|ohm|%|/|dB|\\.\\.|\\+/-)?[0-9]{0,2}") {
        for unit in ANY {
            if let Ok(value) = parse(&text, unit) {
                prop_assert!(value.is_finite());
            }
            if let Ok((least, greatest)) = super::super::parse_range(&text, unit) {
                prop_assert!(least <= greatest);
            }
        }
    }
}
