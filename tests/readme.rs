//! The README promises only what exists: its files are read, its output is what is printed.

use gainsay::budget;
use gainsay::check::{Options, run};
use gainsay::device::read_profiles;
use gainsay::diagnostic::Diagnostic;
use gainsay::figure::Kind;
use gainsay::report::{CAUTION, Style, ledger_text, text};
use gainsay::rule::read_pack;
use gainsay::source::{FileId, Sources};

const README: &str = include_str!("../README.md");

/// The YAML of the README: a budget, profiles, a rule pack.
fn yaml() -> Vec<&'static str> {
    README.split("```yaml\n").skip(1).filter_map(|rest| rest.split("```").next()).collect()
}

fn read<T>(text: &str, reader: impl Fn(&Sources, FileId) -> (T, Vec<Diagnostic>)) -> T {
    let mut sources = Sources::default();
    let file = sources.add("README.md", text.to_owned());
    let (read, faults) = reader(&sources, file);
    assert_eq!(faults, [], "{text}");
    read
}

/// Words of a text, so that line breaks don't count.
fn words(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

/// The README's indented lines as one text, without indent.
fn printed() -> String {
    let lines = README.lines().filter_map(|line| line.strip_prefix("    "));
    lines.map(|line| line.to_owned() + "\n").collect()
}

#[test]
fn the_budget_is_read_and_shows_every_key() {
    let [text, ..] = yaml()[..] else { panic!("the README holds no YAML") };
    let read = read(text, budget::read);
    assert!(read.board.is_some() && read.temperature.is_some());
    assert!(!read.grounds.is_empty() && !read.absent.is_empty());
    assert_eq!((read.parts.len(), read.signals.len(), read.pairs.len()), (3, 2, 1));
    assert_eq!((read.loads.len(), read.devices.len(), read.stages.len()), (1, 2, 3));
    let keys = [
        "resistor",
        "capacitor",
        "inductor",
        "resistor-drift",
        "tolerance",
        "ratio",
        "drift",
        "power",
        "travel",
        "net",
        "range",
        "source",
        "capacitance",
        "band",
        "positive",
        "negative",
        "difference",
        "common",
        "resistance",
        "to",
        "profile",
        "technology",
        "pins",
        "match",
        "gain",
        "limits",
        "supply",
        "zero",
        "rule",
        "reason",
        "by",
        "until",
    ];
    for key in keys {
        assert!(text.contains(&format!("{key}:")), "the README's budget doesn't show `{key}`");
    }
}

#[test]
fn the_profile_and_the_rule_are_read() {
    let [_, profiles, pack] = yaml()[..] else { panic!("the README holds a budget, a profile and a rule") };
    assert_eq!(read(profiles, read_profiles).len(), 1);
    let known: Vec<_> = Kind::ALL.iter().map(|kind| (kind.doc().slug, Some(kind.doc().unit))).collect();
    assert_eq!(read(pack, |sources, file| read_pack(sources, file, &known)).len(), 1);
}

#[test]
fn the_output_is_what_is_printed() {
    let outcome = run(&Options {
        paths: vec!["examples/dryer/drum-card.cir".into()],
        detail: true,
        ..Options::default()
    });
    let style = Style { colour: false, width: 100, all: false };
    let report = text(&outcome.report, &outcome.sources, style);
    let printed = printed();
    let finding: Vec<&str> = printed.lines().skip_while(|line| !line.starts_with("error:")).take(9).collect();
    assert!(report.contains(&finding.join("\n")), "{finding:#?} is not in\n{report}");
    let stage = outcome.report.boards[0].stages.iter().find(|stage| stage.id == "XU7");
    let ledger = ledger_text(stage.expect("the example has this stage"), style);
    let lines: Vec<&str> =
        printed.lines().skip_while(|line| !line.starts_with("bias-error:")).take(6).collect();
    assert!(ledger.contains(&lines.join("\n")), "{lines:#?} is not in\n{ledger}");
}

#[test]
fn every_figure_stands_in_the_table() {
    for kind in Kind::ALL {
        assert!(README.contains(&format!("| `{}` |", kind.doc().slug)), "{}", kind.doc().slug);
    }
}

#[test]
fn the_cautions_are_whole() {
    assert!(words(README).contains(&words(CAUTION)));
}
