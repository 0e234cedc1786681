//! What a person reads: snapshots of the text report, and what it must keep whatever it is given.

mod sample;

use gainsay::diagnostic::{Label, Severity};
use gainsay::report::{Report, Style, ledger_text, text};
use gainsay::rule::Finding;
use gainsay::source::{Sources, Span};
use proptest::prelude::{any, prop, prop_assert_eq, proptest};

const PLAIN: Style = Style { colour: false, width: 100, all: false };

#[test]
fn a_board_that_fails() {
    let (report, sources) = sample::fermenter();
    insta::assert_snapshot!(text(&report, &sources, PLAIN));
}

#[test]
fn a_board_that_fails_with_all_notes() {
    let (report, sources) = sample::fermenter();
    insta::assert_snapshot!(text(&report, &sources, Style { all: true, ..PLAIN }));
}

#[test]
fn a_narrow_page() {
    let (report, sources) = sample::fermenter();
    insta::assert_snapshot!(text(&report, &sources, Style { width: 64, ..PLAIN }));
}

#[test]
fn a_stage_in_full() {
    insta::assert_snapshot!(ledger_text(&sample::pressure_stage(), PLAIN));
}

#[test]
fn several_boards_of_hostile_text() {
    let (report, sources) = sample::hostile();
    insta::assert_snapshot!(text(&report, &sources, PLAIN));
}

#[test]
fn an_accent_changes_no_words() {
    let (report, sources) = sample::fermenter();
    let mut coloured = text(&report, &sources, Style { colour: true, ..PLAIN });
    assert!(coloured.contains("\u{1b}[36merror:\u{1b}[0m XU1"));
    while let Some(at) = coloured.find('\u{1b}') {
        let end = coloured[at..].find('m').expect("the sequence ends");
        coloured.replace_range(at..=at + end, "");
    }
    assert_eq!(coloured, text(&report, &sources, PLAIN));
}

#[test]
fn lines_end_at_the_page() {
    let (report, sources) = sample::fermenter();
    for width in [64, 80, 100, 160] {
        let style = Style { width, all: true, ..PLAIN };
        // Numbers are never cut, so the table of voltages asks for more than 64 columns.
        let ledger = ledger_text(&sample::pressure_stage(), Style { width: width.max(80), ..style });
        let page = text(&report, &sources, style) + if width < 80 { "" } else { &ledger };
        let long: Vec<&str> = page.lines().filter(|line| width < line.chars().count()).collect();
        assert_eq!(long, Vec::<&str>::new(), "at width {width}");
    }
}

/// A report of one finding with so many places.
fn pointing_at(labels: Vec<Label>) -> Report {
    let (mut report, _) = sample::fermenter();
    let finding = Finding { labels, ..sample::finding("lone-net", Severity::Error, None, "look here") };
    report.boards[0].findings = vec![finding];
    report
}

#[test]
fn far_lines_stand_apart_with_their_numbers() {
    let lines: String = (1..=5_000).map(|number| format!("R{number} a b 1k\n")).collect();
    let mut sources = Sources::default();
    let file = sources.add("long.cir", lines.clone());
    let words = sample::Words { file, text: lines };
    let labels =
        vec![words.label("R4999", "the other end"), words.label("R9 ", ""), words.label("R11 ", "near")];
    let page = text(&pointing_at(labels), &sources, PLAIN);
    assert!(page.contains("  at long.cir:4999:1\n"), "{page}");
    for line in [" 9 │ R9 a b 1k", " 10 │ R10 a b 1k", " 11 │ R11 a b 1k", " 4999 │ R4999 a b 1k"] {
        assert!(page.contains(line), "{page}");
    }
    assert!(!page.contains("│ R12 a b"), "{page}");
    assert!(!page.contains("│ R8 a b"), "{page}");
}

#[test]
fn a_line_of_a_million_letters_is_cut_around_what_is_meant() {
    let line = format!("{} HERE {}", "a".repeat(500_000), "b".repeat(500_000));
    let mut sources = Sources::default();
    let file = sources.add("wide.cir", line.clone());
    let labels = vec![sample::Words { file, text: line }.label("HERE", "this")];
    let page = text(&pointing_at(labels), &sources, PLAIN);
    let shown = page.lines().find(|line| line.contains("HERE")).expect("the line is shown");
    assert!(shown.starts_with(" 1 │ …aaaaaaaaaaa HERE bbb") && shown.ends_with("b…"), "{shown}");
    assert_eq!(shown.chars().count(), 100);
}

#[test]
fn many_places_are_counted() {
    let mut sources = Sources::default();
    let line = "R1 a b 1k\n".repeat(10_000);
    let file = sources.add("many.cir", line);
    let spans = (0..10_000).map(|number| Span { file, start: 10 * number, end: 10 * number + 2 });
    let labels: Vec<Label> = spans.map(|span| Label { span, text: "one".to_owned() }).collect();
    let page = text(&pointing_at(labels), &sources, PLAIN);
    assert!(page.contains("  and 9988 more places\n"), "{page}");
}

proptest! {
    /// Whatever a file holds and wherever labels lie, nothing on the page acts, and the labels' texts are there.
    #[test]
    fn any_text_is_drawn_harmless(
        source in "(\\PC|\\pC|[\n\r\t\u{1b}é漢\u{301}]){0,300}",
        places in prop::collection::vec((any::<prop::sample::Index>(), any::<prop::sample::Index>()), 1..6),
        width in 0usize..200,
    ) {
        let bounds: Vec<u32> =
            source.char_indices().map(|(at, _)| at as u32).chain([source.len() as u32]).collect();
        let mut sources = Sources::default();
        let file = sources.add("any.cir", source);
        let labels: Vec<Label> = places
            .iter()
            .map(|(one, other)| (*one.get(&bounds), *other.get(&bounds)))
            .map(|(one, other)| Span { file, start: one.min(other), end: one.max(other) })
            .map(|span| Label { span, text: "LABELLED".to_owned() })
            .collect();
        let number = labels.len();
        let page = text(&pointing_at(labels), &sources, Style { width, ..PLAIN });
        prop_assert_eq!(page.find(|character: char| character != '\n' && character.is_control()), None);
        prop_assert_eq!(page.find(['\u{202e}', '\u{200f}', '\u{2066}', '\u{feff}', '\u{2028}']), None);
        prop_assert_eq!(page.matches("LABELLED").count(), number);
    }
}
