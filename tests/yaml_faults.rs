//! Every kind of fault in a YAML file, at its line and column; hostile files end early.

use gainsay::budget;
use gainsay::device;
use gainsay::diagnostic::Diagnostic;
use gainsay::quantity::Unit;
use gainsay::rule;
use gainsay::source::Sources;
use proptest::prelude::{ProptestConfig, prop_assert, proptest};
use std::time::{Duration, Instant};

/// A budget without faults, to be spoilt.
const BUDGET: &str = "\
rails: { VCC: 5 V +/- 5 %, VEE: -5 V +/- 5 % }
tolerance: { resistor: 1 %, resistor-drift: 100 ppm/K }
parts:
  - { match: [R10, RN1*], tolerance: 0.1 % }
signals:
  IN: { net: J3.1, range: 0 uA .. 2 uA, band: 0 Hz .. 1 kHz }
stages:
  - match: XU1
    gain: { IN_A: -1, IN_B: -2 }
    limits: { gain-error: 0.2 %, bias-error: 1 % of span }
waivers:
  - { rule: noise, match: XU1, reason: \"quiet: measured\", by: me, until: 2027-06-30 }
";

/// Writes each fault as `line:column kind: message; help`.
fn written(sources: &Sources, faults: &[Diagnostic]) -> Vec<String> {
    let one = |fault: &Diagnostic| {
        let place = sources.place(fault.labels[0].span);
        let help = fault.help.as_ref().map_or(String::new(), |help| format!("; {help}"));
        format!("{}:{} {}: {}{help}", place.line, place.column, fault.kind, fault.message)
    };
    faults.iter().map(one).collect()
}

/// The faults of a budget.
fn faults(text: &str) -> Vec<String> {
    let mut sources = Sources::default();
    let file = sources.add("board.budget.yaml", text.to_string());
    let (_, faults) = budget::read(&sources, file);
    written(&sources, &faults)
}

/// Asserts that a budget has one fault, which begins as given.
fn fault(text: &str, expected: &str) {
    let found = faults(text);
    assert!(
        found.len() == 1 && found[0].starts_with(expected),
        "{text}\nexpected {expected}\nfound {found:#?}"
    );
}

#[test]
fn the_budget_to_be_spoilt_is_sound() {
    assert_eq!(faults(BUDGET), [""; 0]);
    assert_eq!(faults(&BUDGET.replace('\n', "\r\n")), [""; 0]);
    assert_eq!(faults(&format!("\u{feff}{BUDGET}")), [""; 0]);
}

#[test]
fn marks_of_yaml_want_quotes() {
    let cases = [
        ("stages:\n  - match: *\n", "2:12 yaml-syntax: expected a value, found `*`"),
        ("stages:\n  - match: *A\n", "2:12 yaml-syntax: expected a value, found `*A`"),
        ("absent: [R1, *]\n", "1:14 yaml-syntax: expected a value, found `*`"),
        ("grounds: &GND\n", "1:10 yaml-syntax: expected a value, found `&GND`"),
        ("grounds: [!GND, A]\n", "1:11 yaml-syntax: expected a value, found `!GND`"),
        ("grounds: [%GND]\n", "1:11 yaml-syntax: expected a value, found `%GND`"),
        ("grounds: @GND\n", "1:10 yaml-syntax: expected a value, found `@GND`"),
    ];
    for (text, expected) in cases {
        fault(text, expected);
        assert!(faults(text)[0].contains("which begins with a mark that YAML keeps; put it in quotes: \""));
    }
    let quotes = "text that begins with `[` or `{` wants quotes";
    fault(
        "grounds: {GND}\n",
        &format!("1:10 yaml-shape: expected a single value, found a mapping; {quotes}"),
    );
    fault("board: [a]\n", &format!("1:8 yaml-shape: expected a single value, found a list; {quotes}"));
    for word in ["null", "~", "NULL"] {
        fault(
            &format!("absent:\n  - R1\n  - {word}\n"),
            &format!(
                "3:5 yaml-shape: expected a value, found `{word}`, which is nothing in YAML; leave the key out"
            ),
        );
        assert_eq!(faults(&format!("absent: [\"{word}\"]\n")), [""; 0]);
    }
}

#[test]
fn what_is_not_yaml_is_said_at_its_place() {
    let cases = [
        ("%YAML 1.2\n---\nboard: x\n", "1:1 yaml-syntax: YAML directives aren't read here"),
        ("grounds: [A}\n", "1:10 yaml-syntax: the bracket `[` is closed by `}`"),
        (
            "grounds: [A\nboard: x\n",
            "2:6 yaml-syntax: a colon can't stand here; a bracket or quote before it",
        ),
        ("board: \"x\nrails: {}\n", "1:8 yaml-syntax: the quote isn't closed"),
        ("board: x: y\n", "1:9 yaml-syntax: a colon with a blank behind it begins a value"),
        ("rails:\n\tVCC: 5 V\n", "2:2 yaml-syntax: found a tab where YAML wants blanks"),
        (
            "parts:\n  - match: R1\n - match: R2\n",
            "3:2 yaml-syntax: expected another entry of the list or mapping",
        ),
        ("board: \"a\\qb\"\n", "1:8 yaml-syntax: unknown escape behind `\\`"),
        ("board: x\n---\nboard: y\n", "2:1 yaml-shape: expected one YAML document, found a second one"),
    ];
    for (text, expected) in cases {
        fault(text, expected);
    }
}

#[test]
fn columns_count_characters() {
    fault(
        "board: Gärtank µ\nrails: { ÜB: 5 A }\n",
        "2:14 bad-value: expected a voltage such as `10 mV`, found a current",
    );
}

#[test]
fn shape_is_checked() {
    let cases = [
        ("board x\n", "1:1 yaml-shape: expected a mapping for a budget, found `board x`"),
        ("- a\n", "1:1 yaml-shape: expected a mapping for a budget, found a list"),
        ("board: x\nrails: 5 V\n", "2:8 yaml-shape: expected a mapping for `rails`, found `5 V`"),
        ("stages: XU1\n", "1:9 yaml-shape: expected a list for `stages`, found `XU1`"),
        ("stages: [XU1]\n", "1:10 yaml-shape: expected a mapping for an entry of `stages`, found `XU1`"),
        ("? [a, b]\n: c\n", "1:3 yaml-shape: expected a name as key, found a list"),
    ];
    for (text, expected) in cases {
        fault(text, expected);
    }
}

#[test]
fn a_fault_of_shape_ends_the_reading() {
    let text = "temperature: 20\nrails: 5 V\ngrounds: { A: 1 }\n";
    let found = faults(text);
    assert_eq!(found.len(), 2, "{found:#?}");
    assert!(found[0].starts_with("1:14 bad-value") && found[1].starts_with("2:8 yaml-shape"));
}

#[test]
fn keys_are_checked() {
    fault("board: x\nboard: y\n", "2:1 duplicate-key: the key `board` stands here a second time");
    fault("rails: { A: 5 V, B: 1 V, A: 6 V }\n", "1:26 duplicate-key: the key `A` stands here a second time");
    fault("sginals: {}\n", "1:1 unknown-key: a budget has no key `sginals`; did you mean `signals`?");
    fault(
        "parts: [{ match: R1, tolerence: 1 % }]\n",
        "1:22 unknown-key: an entry of `parts` has no key `tolerence`; did",
    );
    fault(
        "tolerance: { colour: 1 % }\n",
        "1:14 unknown-key: `tolerance` has no key `colour`; known keys: resistor,",
    );
    fault("parts:\n  - tolerance: 1 %\n", "2:5 missing-key: an entry of `parts` lacks the key `match`");
    fault("pairs:\n  P: { positive: A }\n", "2:8 missing-key: a pair lacks the key `negative`");
}

#[test]
fn a_key_given_twice_shows_both_places() {
    let mut sources = Sources::default();
    let file = sources.add("b", "board: x\nboard: y\n".to_string());
    let (_, faults) = budget::read(&sources, file);
    assert_eq!(sources.place(faults[0].labels[1].span).line, 1);
    assert_eq!(faults[0].labels[1].text, "first here");
}

#[test]
fn every_fault_of_value_is_reported() {
    let text = "\
temperature: 50 degC .. 0 degC
rails: { VCC: 5, VEE: -5 A }
tolerance: { resistor: 1, capacitor: 100 % }
parts:
  - { match: R1, travel: -1 % .. 50 %, power: -1 W }
signals:
  A: { net: J3 1, range: 0 V .. 2 uA, source: 10M, band: 1 kHz }
devices:
  B: { technology: bipola, pins: [output, inverted] }
stages:
  - { match: \"XU1, XU2\", gain: 40 dB, limits: { noise: 1 % of span }, supply: [VCC], zero: used }
waivers:
  - { rule: noise, match: X, reason: r, by: b, until: 2027-02-30 }
";
    let expected = [
        "1:14 bad-value: expected the lower end first, found `50 degC .. 0 degC`; write `0 degC .. 50 degC`",
        "2:15 bad-value: `5` lacks a unit, expected a voltage such as `10 mV`; write `5 mV` or `5 V`",
        "2:23 bad-value: expected a voltage such as `10 mV`, found a current, `-5 A`",
        "3:24 bad-value: `1` lacks a unit: it could be a ratio or a percentage; write `1 %` or `100 %`",
        "3:38 bad-value: expected a tolerance from 0 to below 100 %, found `100 %`",
        "5:26 bad-value: expected a travel within `0 % .. 100 %`, found `-1 % .. 50 %`",
        "5:47 bad-value: expected at least 0, found `-1 W`",
        "7:13 bad-name: expected a name, found `J3 1`; for several names write a list: `[J3, 1]`",
        "7:26 bad-value: expected both ends in the same unit, found `0 V .. 2 uA`",
        "7:47 bad-value: `10M` can be read as milli or as mega; write `10 mohm` or `10 Mohm`",
        "7:58 bad-value: expected two ends of a band, found `1 kHz`; write both ends: `0 Hz .. 200 Hz`",
        "9:20 bad-value: expected a technology (bipolar, jfet, cmos), found `bipola`; did you mean `bipolar`?",
        "9:43 bad-value: expected a pin (non-inverting, inverting, positive-supply, negative-supply, output), \
         found `inverted`; did you mean `inverting`?",
        "11:14 bad-name: expected a name, found `XU1, XU2`; for several names write a list: `[XU1, XU2]`",
        "11:32 bad-value: expected a ratio such as `0.5 %` or `0.5`, found a level, `40 dB`",
        "11:56 bad-value: a limit of `noise` can't be a share of the span, found `1 % of span`",
        "11:79 bad-value: expected the positive and the negative supply net, found 1 name(s); write `[VCC, VEE]`",
        "11:92 bad-value: expected a word for the zero end (unused), found `used`; did you mean `unused`?",
        "13:55 bad-value: expected a day such as `2027-06-30`, found `2027-02-30`; write year, month and day as \
         `YYYY-MM-DD`",
    ];
    assert_eq!(faults(text), expected);
}

#[test]
fn profiles_and_packs_say_where() {
    let mut sources = Sources::default();
    let file = sources.add(
        "d",
        "- device: a\n  technology: cmos\n  source: memory\n  parameters:\n    slew-rate: 1 V\n".to_string(),
    );
    let (profiles, faults) = device::read_profiles(&sources, file);
    assert_eq!(profiles.len(), 1);
    let expected = "5:16 bad-value: expected a slew rate such as `10 V/us`, found a voltage, `1 V`";
    assert_eq!(written(&sources, &faults), [expected]);
    let file = sources.add("r", "- figure: noise\n  limit: 1 mA\n  severity: eror\n".to_string());
    let (rules, faults) = rule::read_pack(&sources, file, &[("noise", Some(Unit::Volt))]);
    assert!(rules.is_empty());
    let expected = [
        "1:3 missing-key: a rule lacks the key `reason`",
        "1:3 missing-key: a rule lacks the key `source`",
        "2:10 bad-value: expected a voltage such as `10 mV`, found a current, `1 mA`",
        "3:13 bad-value: expected a severity (error, warning, note), found `eror`; did you mean `error`?",
    ];
    assert_eq!(written(&sources, &faults), expected);
}

#[test]
fn text_of_the_file_cannot_act_in_a_message() {
    let found = faults("board: x\n\"\\e[31m\": 1\n");
    assert!(found[0].starts_with("2:1 unknown-key: a budget has no key `\\u{1b}[31m`"), "{found:?}");
}

#[test]
fn hostile_texts_end_early() {
    let many = |word: &str, times: usize| word.repeat(times);
    let bomb: String = (1..40).map(|at| format!("a{at}: &a{at} [*a{0}, *a{0}]\n", at - 1)).collect();
    let keys: String = (0..300_000).map(|at| format!("k{at}: 1\n")).collect();
    let texts = [
        many("[", 1_000_000),
        many("{a: ", 500_000),
        many("- ", 1_000_000),
        many("? ", 1_000_000),
        (0..2_000).map(|at| format!("{}a:\n", many(" ", at))).collect(),
        format!("a0: &a0 [x]\n{bomb}"),
        keys,
        format!("rails: [{}]\n", many("x, ", 400_000)),
        format!("board: {}\nsignals: []\n", many("x", 5_000_000)),
        format!("absent: [\"{}\"]\n", many("\\u00e9 ", 500_000)),
        format!("{}: 1\n", many("k", 1_000_000)),
        many("# comment\n", 500_000) + "rails: 1\n",
        many("---\n", 500_000),
        many("x\n", 4_200_000),
        format!("absent: {}x", many("[[]", 300_000)),
    ];
    for text in texts {
        let begin = Instant::now();
        let found = faults(&text);
        let shown: String = text.chars().take(20).collect();
        assert!(!found.is_empty(), "{shown}");
        assert!(found.iter().all(|fault| fault.len() < 1_000), "{shown}");
        assert!(begin.elapsed() < Duration::from_secs(10), "{shown} took {:?}", begin.elapsed());
    }
}

#[test]
fn sizes_are_named() {
    let deep = format!("absent: {}{}", "[".repeat(40), "]".repeat(40));
    fault(&deep, "1:41 yaml-syntax: expected at most 32 levels of nesting");
    let wide = format!("absent: [{}]", "R1, ".repeat(250_000));
    assert!(faults(&wide)[0].contains("yaml-size: expected at most 200000 values in one file"));
    assert!(faults(&"#".repeat(9 << 20))[0].starts_with("1:1 yaml-size: expected at most 8 MB of YAML"));
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn a_spoilt_budget_is_read_or_diagnosed(at in 0..BUDGET.len(), length in 0_usize..12, put in "[-\\[\\]{}:,*&!%#'\"|> \\n\\tµx0-9.]{0,6}") {
        let mut text = BUDGET.to_string();
        let end = (at + length).min(text.len());
        text.replace_range(at..end, &put);
        let mut sources = Sources::default();
        let file = sources.add("b", text.clone());
        let (_, faults) = budget::read(&sources, file);
        for label in faults.iter().flat_map(|fault| &fault.labels) {
            let span = label.span;
            prop_assert!(text.get(span.start as usize..span.end as usize).is_some(), "{:?}", span);
            prop_assert!(1 <= sources.place(span).column);
        }
        let _ = device::read_profiles(&sources, file);
        let _ = device::read_assumed(&sources, file);
        let _ = rule::read_pack(&sources, file, &[("noise", Some(Unit::Volt))]);
    }
}
