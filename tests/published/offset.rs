//! Topic: output errors from offset voltage, bias and offset current, drift, common mode and supplies.

use super::case::{Ask, BLANK, Case, Within};
use super::source::{COUGHLIN, FIORE, FRANCO, GAYAKWAD, MAX4100, Print};

const BIAS: Ask = Ask::Effect("XU1", "bias-error", "bias current");
const OFFSET_CURRENT: Ask = Ask::Effect("XU1", "bias-error", "offset current");
const OFFSET_VOLTAGE: Ask = Ask::Effect("XU1", "offset-error", "offset voltage");
const DRIFT: Ask = Ask::Effect("XU1", "offset-error", "offset drift");
const SUPPLY: Ask = Ask::Effect("XU1", "offset-error", "supply rejection");

/// Currents of the first example of Franco's chapter 5.
const FRANCO_5_1: &[(&str, &str)] = &[("bias-current", "80 nA"), ("offset-current", "20 nA")];
/// The same network ten times smaller, with the compensating resistor.
const FRANCO_5_1_SMALL: &[&str] =
    &["V1 i 0 AC 1", "R1 i m 2200", "R2 m o 220k", "Rp p 0 2178.22", "XU1 p m VCC VEE o OPX"];

const GAYAKWAD_470: &[&str] = &["V1 i 0 AC 1", "R1 i m 470", "Rf m o 47k", "XU1 0 m VCC VEE o OPX"];
const GAYAKWAD_1K: &[&str] = &["V1 i 0 AC 1", "R1 i m 1k", "Rf m o 100k", "XU1 0 m VCC VEE o OPX"];

/// Drifts over 50 K; the offset current's is stated as what it comes to.
const COUGHLIN_9_6: &[&str] =
    &["V1 i 0 AC 1", "Ri i m 10k", "Rf m o 1Meg", "Rp p 0 9900.99", "XU1 p m VCC VEE o OPX"];

const FRANCO_5_5: &[&str] = &["V1 i 0 AC 1", "R1 i m 100", "R2 m o 100k", "XU1 0 m VCC VEE o OPX"];

/// Drift over 45 K, a resting input of 1 V, both supplies 5 % off; worst and typical device.
const FRANCO_5_6: &[&str] = &["V1 i 0 1", "R1 m 0 1k", "R2 o m 4k", "XU1 i m VCC VEE o OPX"];
const FRANCO_5_6_RAILS: &str = "{ VCC: 15 V +/- 5 %, VEE: -15 V +/- 5 % }";

/// A row of Gayakwad's chapter 4.
const fn gayakwad(
    (id, place): (&'static str, &'static str),
    netlist: &'static [&'static str],
    device: &'static [(&'static str, &'static str)],
    ask: Ask,
    (printed, digit): (f64, f64),
) -> Case {
    Case { id, source: GAYAKWAD, place, netlist, device, ask, printed, within: Within::Digit(digit), ..BLANK }
}

/// A row of Franco's chapter 5.
const fn franco(
    (id, place): (&'static str, &'static str),
    netlist: &'static [&'static str],
    device: &'static [(&'static str, &'static str)],
    ask: Ask,
    (printed, digit): (f64, f64),
) -> Case {
    Case { id, source: FRANCO, place, netlist, device, ask, printed, within: Within::Digit(digit), ..BLANK }
}

/// The rows.
pub const CASES: &[Case] = &[
    Case {
        // The book prints 175 mV; 2.2 Mohm times 80 nA is 176 mV.
        print: Print::Corrected,
        ..franco(
            ("O1a", "example 5.1a, p. 219"),
            &["V1 i 0 AC 1", "R1 i m 22k", "R2 m o 2.2Meg", "XU1 0 m VCC VEE o OPX"],
            FRANCO_5_1,
            BIAS,
            (0.176, 0.001),
        )
    },
    franco(
        ("O1b", "example 5.1b, p. 219"),
        &["V1 i 0 AC 1", "R1 i m 22k", "R2 m o 2.2Meg", "Rp p 0 21782.2", "XU1 p m VCC VEE o OPX"],
        FRANCO_5_1,
        Ask::Worst("XU1", "bias-error"),
        (0.044, 0.001),
    ),
    franco(
        ("O1c", "example 5.1c, p. 219"),
        FRANCO_5_1_SMALL,
        FRANCO_5_1,
        Ask::Worst("XU1", "bias-error"),
        (4.4e-3, 0.1e-3),
    ),
    franco(
        // Exactly 0.66 mV, printed with one digit.
        ("O1d", "example 5.1d, p. 219"),
        FRANCO_5_1_SMALL,
        &[("bias-current", "80 nA"), ("offset-current", "3 nA")],
        Ask::Worst("XU1", "bias-error"),
        (0.7e-3, 0.1e-3),
    ),
    gayakwad(
        ("O2-470-vos", "example 4.4, p. 127"),
        GAYAKWAD_470,
        &[("offset-voltage", "6 mV")],
        Ask::Worst("XU1", "offset-error"),
        (0.606, 0.001),
    ),
    gayakwad(
        ("O2-470-ib", "example 4.4, p. 127"),
        GAYAKWAD_470,
        &[("bias-current", "500 nA")],
        Ask::Worst("XU1", "bias-error"),
        (23.5e-3, 0.1e-3),
    ),
    gayakwad(
        ("O2-1k-vos", "example 4.5"),
        GAYAKWAD_1K,
        &[("offset-voltage", "6 mV")],
        Ask::Worst("XU1", "offset-error"),
        (0.606, 0.001),
    ),
    gayakwad(
        ("O2-1k-ib", "example 4.5"),
        GAYAKWAD_1K,
        &[("bias-current", "500 nA")],
        Ask::Worst("XU1", "bias-error"),
        (50e-3, 1e-3),
    ),
    gayakwad(
        // The mean of the bias currents, whatever it is, cancels.
        ("O3-ios", "example 4.6"),
        &["V1 i 0 AC 1", "R1 i m 1k", "Rf m o 100k", "Rp p 0 990.099", "XU1 p m VCC VEE o OPX"],
        &[("bias-current", "500 nA"), ("offset-current", "200 nA")],
        Ask::Worst("XU1", "bias-error"),
        (20e-3, 1e-3),
    ),
    Case {
        id: "O6",
        source: FIORE,
        place: "chapter 5, example 5.11, p. 161",
        // 200 pA/K over 55 K are 11 nA of offset current.
        netlist: &["V1 i 0 AC 1", "Ri i m 1k", "Rf m o 10k", "Roff p 0 909", "XU1 p m VCC VEE o OPX"],
        device: &[("offset-drift", "5 uV/K"), ("offset-current", "11 nA")],
        budget: "temperature: 25 degC .. 80 degC",
        ask: Ask::Sum(&[DRIFT, OFFSET_CURRENT]),
        printed: 3.135e-3,
        within: Within::Digit(0.001e-3),
        ..BLANK
    },
    Case {
        id: "O7",
        source: MAX4100,
        place: "p. 10, DC error calculation",
        print: Print::Seen,
        netlist: &["V1 i 0 AC 1", "RG i m 200", "RF m o 200", "RS p 0 100", "XU1 p m VCC VEE o OPX"],
        // The sheet takes 3 uA as the part of the current that doesn't cancel, at the inverting input.
        device: &[("offset-voltage", "1 mV"), ("offset-current", "3 uA")],
        ask: Ask::Sum(&[OFFSET_VOLTAGE, OFFSET_CURRENT]),
        printed: 2.6e-3,
        within: Within::Digit(0.1e-3),
        ..BLANK
    },
    Case {
        id: "O8-vos",
        source: COUGHLIN,
        place: "chapter 9, example 9.6, p. 268",
        netlist: COUGHLIN_9_6,
        device: &[("offset-drift", "20 uV/K")],
        budget: "temperature: 25 degC .. 75 degC",
        ask: DRIFT,
        printed: 0.101,
        within: Within::Digit(0.001),
        ..BLANK
    },
    Case {
        id: "O8-ios",
        source: COUGHLIN,
        place: "chapter 9, example 9.6, p. 268",
        netlist: COUGHLIN_9_6,
        device: &[("offset-current", "5 nA")],
        ask: OFFSET_CURRENT,
        printed: 5e-3,
        within: Within::Digit(1e-3),
        ..BLANK
    },
    Case {
        // 30 uV/V; the ripple of 0.1 V from peak to peak stands on one supply.
        rails: "{ VCC: 15 V +/- 0.1 V, VEE: -15 V +/- 0 V }",
        within: Within::Loose(0.004e-3, "the book takes 1000 for the noise gain of 1001"),
        ..franco(
            ("O9-psrr-typ", "example 5.5, p. 229"),
            FRANCO_5_5,
            &[("supply-rejection", "90.457574905606751 dB")],
            SUPPLY,
            (3e-3, 0.0),
        )
    },
    Case {
        // 150 uV/V.
        rails: "{ VCC: 15 V +/- 0.1 V, VEE: -15 V +/- 0 V }",
        within: Within::Loose(0.02e-3, "the book takes 1000 for the noise gain of 1001"),
        ..franco(
            ("O9-psrr-max", "example 5.5, p. 229"),
            FRANCO_5_5,
            &[("supply-rejection", "76.478174818886374 dB")],
            SUPPLY,
            (15e-3, 0.0),
        )
    },
    Case {
        rails: "{ VCC: 15 V +/- 1 V, VEE: -15 V +/- 1 V }",
        ..gayakwad(
            ("O10-psrr", "example 4.11a"),
            GAYAKWAD_1K,
            &[("supply-rejection", "96 dB")],
            SUPPLY,
            (3.2e-3, 0.1e-3),
        )
    },
    Case {
        // Referred to the input: the three offsets by the noise gain of 5, the missing voltage of the gain
        // error by the gain of 5 and the input of 1 V.
        rails: FRANCO_5_6_RAILS,
        budget: "temperature: 25 degC .. 70 degC",
        ..franco(
            ("E4-wc", "example 5.6, p. 230"),
            FRANCO_5_6,
            &[
                ("open-loop-gain", "1e4"),
                ("offset-drift", "3 uV/K"),
                ("common-mode-rejection", "80 dB"),
                ("supply-rejection", "80 dB"),
            ],
            Ask::Sum(&[
                Ask::Times(0.2, &Ask::Worst("XU1", "offset-error")),
                Ask::Times(-1.0, &Ask::Nominal("XU1", "gain-error")),
            ]),
            (885e-6, 1e-6),
        )
    },
    Case {
        rails: FRANCO_5_6_RAILS,
        budget: "temperature: 25 degC .. 70 degC",
        ..franco(
            ("E4-rss", "example 5.6, p. 230"),
            FRANCO_5_6,
            &[
                ("open-loop-gain", "1e5"),
                ("offset-drift", "3 uV/K"),
                ("common-mode-rejection", "100 dB"),
                ("supply-rejection", "100 dB"),
            ],
            Ask::RootSumSquare(&[
                Ask::Times(0.2, &Ask::Rss("XU1", "offset-error")),
                Ask::Nominal("XU1", "gain-error"),
            ]),
            (145e-6, 1e-6),
        )
    },
];
