//! Difference and instrumentation amplifiers: rejection and common-mode error against closed forms.

mod support;

use support::{check, stage};

const RAILS: &str =
    "* difference amplifier\nV1 VCC 0 15\nV2 0 VEE 15\nVA INN 0 SIN(0 1 1k)\nVB INP 0 SIN(0 1 1k)\n";

/// An op amp so good that resistors alone decide.
const IDEAL: &str = "- device: ALMOST_IDEAL\n  technology: jfet\n  sections: 1\n  source: assumed\n  parameters:\n    \
    open-loop-gain: { min: 1e12, typ: 1e12 }\n    input-resistance: { min: 1e15 ohm, typ: 1e15 ohm }\n    \
    common-mode-resistance: { min: 1e16 ohm, typ: 1e16 ohm }\n    output-resistance: { min: 1 uohm, typ: 1 uohm, max: 1 uohm }\n";

fn rejection(resistors: [&str; 4], tolerance: &str, key: &str) -> f64 {
    let [r1, r2, r3, r4] = resistors;
    let netlist = format!(
        "{RAILS}R1 INN N1 {r1}\nR2 OUT N1 {r2}\nR3 INP N2 {r3}\nR4 N2 0 {r4}\nXU1 N2 N1 VCC VEE OUT ALMOST_IDEAL\n.end\n"
    );
    let budget = format!("tolerance: {{ resistor: {tolerance} }}\n");
    let board = check(&netlist, &budget, IDEAL);
    let figure = &stage(&board, "XU1")["figures"]["rejection"];
    figure[key].as_f64().unwrap_or_else(|| panic!("no {key}: {figure:#}"))
}

/// Worst rejection of four resistors with tolerance t at gain G is (1 + G) / 4t to first order (S. Franco,
/// Design with Operational Amplifiers and Analog Integrated Circuits, 3rd ed., McGraw-Hill 2002, p. 79);
/// with 1 % and 0.1 % at a gain of one 33.98 and 53.98 dB.
#[test]
fn worst_rejection_of_four_resistors() {
    let one = ["10k", "10k", "10k", "10k"];
    let ten = ["10k", "100k", "10k", "100k"];
    for (resistors, tolerance, decibel) in
        [(one, "5 %", 20.00), (one, "1 %", 33.98), (one, "0.1 %", 53.98), (ten, "1 %", 48.79)]
    {
        let found = rejection(resistors, tolerance, "worst");
        assert!((found - decibel).abs() < 0.01, "{tolerance}: {found} dB, expected {decibel} dB");
    }
}

/// A hundred ohm too much in one leg of 10 kohm: (1 + G) R1 / dR, 46.04 dB at a gain of one and 60.83 dB at ten.
#[test]
fn nominal_rejection_of_a_mismatch() {
    for (feedback, decibel) in [("10k", 46.04), ("100k", 60.83)] {
        let found = rejection(["10.1k", feedback, "10k", feedback], "0 %", "nominal");
        assert!((found - decibel).abs() < 0.1, "{feedback}: {found} dB, expected {decibel} dB");
    }
}

/// The worst output for a common range is |Hp + Hn| times half of it: for four 1 % resistors at a gain of one
/// 0.0202 to 0.0198 of it by the exact corner.
#[test]
fn common_error_of_a_declared_pair() {
    let netlist = format!(
        "{RAILS}R1 INN N1 10k\nR2 OUT N1 10k\nR3 INP N2 10k\nR4 N2 0 10k\nXU1 N2 N1 VCC VEE OUT ALMOST_IDEAL\n.end\n"
    );
    let budget = "pairs:\n  SENSE: { positive: INP, negative: INN, difference: +/- 100 mV, common: -1 V .. 1 V }\n\
                  tolerance: { resistor: 1 % }\n";
    let board = check(&netlist, budget, IDEAL);
    let worst =
        stage(&board, "XU1")["figures"]["common-error"]["worst"].as_f64().expect("it has a worst case");
    // R4/(R3+R4) (1 + R2/R1) - R2/R1 with each resistor at the end that hurts.
    let (high, low) = (1.01, 0.99);
    let exact = |r1: f64, r2: f64, r3: f64, r4: f64| (r4 / (r3 + r4) * (1.0 + r2 / r1) - r2 / r1).abs();
    let expected = exact(low, high, high, low).max(exact(high, low, low, high));
    assert!((worst - expected).abs() < 1e-6 * expected, "{worst} V, expected {expected} V");
}

/// RSS against the law of propagation of uncertainty (JCGM 100:2008, equation 10) on three stages: with each
/// tolerance as the uncertainty of its resistor, the gain's is the root of the sum of squares of (df/dx) dx.
#[test]
fn rss_follows_the_law_of_propagation() {
    let stages = [
        // 1 + Rf/Rg: (Rf/Rg)/(1 + Rf/Rg) times each tolerance.
        ("RG N1 0 1k\nRF OUT N1 9k\nXU1 INP N1 VCC VEE OUT ALMOST_IDEAL", 0.9 * 0.001 * 2f64.sqrt()),
        // -Rf/Rin: each tolerance in full.
        ("RI INP N1 10k\nRF OUT N1 20k\nXU1 0 N1 VCC VEE OUT ALMOST_IDEAL", 0.001 * 2f64.sqrt()),
        // Two equal resistors before a follower: half of each tolerance.
        ("RA INP N1 10k\nRB N1 0 10k\nXU1 N1 OUT VCC VEE OUT ALMOST_IDEAL", 0.5 * 0.001 * 2f64.sqrt()),
    ];
    for (network, expected) in stages {
        let board = check(&format!("{RAILS}{network}\n.end\n"), "tolerance: { resistor: 0.1 % }\n", IDEAL);
        let found = stage(&board, "XU1")["figures"]["gain-spread"]["rss"].as_f64().expect("it has an RSS");
        // The ledger is taken to the corner, not at the nominal point: they differ by the tolerance itself.
        assert!((found - expected).abs() < 2e-3 * expected, "{network}: {found}, expected {expected}");
    }
}
