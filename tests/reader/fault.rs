//! Faults are data, and reading goes on.

use super::show::{board, file};
use gainsay::diagnostic::Severity;

#[test]
fn unbalanced_definitions() {
    let extra = board(".ends\nR1 a b 1k\n");
    assert_eq!((extra.kinds(), extra.lines().len()), (vec!["unbalanced-subckt"], 1));
    let open = board(".subckt x a\nR1 a 0 1k\n");
    assert_eq!(open.kinds(), ["unbalanced-subckt"]);
    assert_eq!(open.text(open.faults[0].labels[0].span), "x");
    let crossed = board(".subckt x a\n.subckt y b\n.ends x\nR1 a b 1k\n");
    assert_eq!((crossed.kinds(), crossed.lines().len()), (vec!["unbalanced-subckt"], 1));
    let other = board(".subckt x a\n.ends z\nR1 a b 1k\n");
    assert_eq!((other.faults[0].severity, other.lines().len()), (Severity::Warning, 1));
}

#[test]
fn designators_used_twice() {
    let read = board("R1 a b 1k\nr1 a b 2k\nR2 a b 1k\n.subckt s a b\nR1 a b 1k\n.ends\n");
    assert_eq!(read.kinds(), ["duplicate-designator"]);
    let labels = &read.faults[0].labels;
    assert_eq!((read.text(labels[0].span), read.text(labels[1].span)), ("r1", "R1"));
}

#[test]
fn pin_counts_against_the_definition_in_scope() {
    let read = board(
        ".subckt amp a b c\n.ends\n.subckt outer x\n.subckt AMP p q\n.ends\nX1 x 0 amp\nX2 x 0 x amp\n.ends\nX1 a b c Amp\nX2 a b amp\nX3 a b other\n",
    );
    let wrong: Vec<&str> = read.faults.iter().map(|fault| read.text(fault.labels[0].span)).collect();
    assert_eq!(wrong, ["X2 a b amp", "X2 x 0 x amp"]);
    assert!(read.kinds().iter().all(|kind| *kind == "pin-count"));
}

#[test]
fn definitions_given_twice() {
    assert_eq!(board(".subckt x a\n.ends\n.subckt X a\n.ends\n").kinds(), ["duplicate-subckt"]);
}

#[test]
fn other_languages_are_refused() {
    let cases = [
        "<?xml version=\"1.0\"?>\n<export/>\n",
        "(export (version D)\n  (design (source x)))\n",
        "simulator lang=x\nglobal 0 vdd!\nsubckt a b c\nR1 (a b) resistor r=1k\nends a\n",
        "MM1 (a b c d) pmos4\nMM2 (a b c d) pmos4\n",
        "{ \"nets\": [] }\n",
    ];
    for text in cases {
        let read = file("a.net", text);
        assert_eq!(read.kinds(), ["not-a-netlist"], "{text}");
        assert_eq!(read.faults[0].severity, Severity::Error);
        assert!(read.netlist.top.elements.is_empty());
    }
}

#[test]
fn empty_files() {
    for text in ["", "\n\n", "title only", "* a\n* b\n.end\n"] {
        let read = file("a.cir", text);
        assert_eq!(read.kinds(), ["empty-netlist"], "{text:?}");
    }
}

#[test]
fn lines_that_are_nothing() {
    let read = board("!x a b\n= 5\n{x}\n\"quoted\"\n1R a b 1k\nR1 a b 1k\n");
    assert_eq!(read.kinds(), ["unknown-element"; 5]);
    assert_eq!(read.lines(), ["1R [a | b | 1k] unmodelled", "R1 [a | b] R 1e3"]);
}

#[test]
fn braces_that_nothing_closes() {
    let read = board("R1 a b {1k\nR2 a b '2k\nR3 a b 3k\n");
    assert_eq!(read.kinds(), ["unclosed-expression", "unclosed-expression"]);
    assert_eq!(read.lines()[2], "R3 [a | b] R 3e3");
}

#[test]
fn messages_show_text_escaped_and_without_a_full_stop() {
    let read = board("R1 a b\nR\u{1b}[31m a b\n.foo\nX1\n");
    assert!(!read.faults.is_empty());
    for fault in &read.faults {
        assert!(!fault.message.ends_with('.') && !fault.message.contains('\u{1b}'), "{}", fault.message);
    }
}
