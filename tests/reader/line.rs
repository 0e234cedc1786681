//! Titles, comments, continuations, encodings, and the names they leave.

use super::show::{board, file};
use gainsay::source::{DecodeFault, Span, decode};

#[test]
fn the_first_line_is_the_title() {
    let read = file("a.cir", "Low pass, revision 2\nR1 a b 1k\n");
    assert_eq!(read.netlist.title.map(|title| read.text(title)), Some("Low pass, revision 2"));
    assert_eq!(read.lines(), ["R1 [a | b] R 1e3"]);
    assert!(read.faults.is_empty());
}

#[test]
fn a_title_that_looks_like_a_statement_warns() {
    let read = file("a.cir", "R1 a b 1k\nR2 a b 2k\n");
    assert_eq!(read.lines(), ["R2 [a | b] R 2e3"]);
    assert_eq!(read.kinds(), ["title-statement"]);
    assert_eq!(file("a.cir", ".include parts.lib\nR2 a b 2k\n").kinds(), ["title-statement"]);
}

#[test]
fn libraries_have_no_title() {
    for path in ["a.lib", "a.SUB", "a.mod", "a.inc"] {
        assert_eq!(file(path, "R1 a b 1k\n").lines(), ["R1 [a | b] R 1e3"], "{path}");
    }
    let read = file("a.cir", ".SUBCKT x a b\nR1 a b 1k\n.ENDS\n");
    assert_eq!(read.netlist.subcircuits.len(), 1);
    assert_eq!(file("a.cir", ".model d d(is=1)\n").netlist.top.models.len(), 1);
}

#[test]
fn a_title_directive_names_the_title() {
    let read = file("a.cir", "* ======\n* note\n.title Sallen-Key low pass\nR1 a b 1k\n");
    assert_eq!(read.netlist.title.map(|title| read.text(title)), Some("Sallen-Key low pass"));
    let first = file("a.cir", ".title First\nR1 a b 1k\n");
    assert_eq!(first.netlist.title.map(|title| first.text(title)), Some("First"));
    assert!(first.faults.is_empty());
}

#[test]
fn comments_go() {
    let read = board(
        "* whole\n  * indented\n; whole\n$ whole\n// whole\nR1 a b 1k ; behind\nR2 a b 2k $ behind\nR3 $N_1 **OUT** 3k\nR4 a b 4k // behind\n",
    );
    assert_eq!(
        read.lines(),
        ["R1 [a | b] R 1e3", "R2 [a | b] R 2e3", "R3 [$N_1 | **OUT**] R 3e3", "R4 [a | b] R 4e3"]
    );
    assert!(read.faults.is_empty());
}

#[test]
fn continuations_in_every_form() {
    let glued = board("V3 N1 0  AC 0\n+SIN 0 2 1k 0 0 0\n");
    assert_eq!(glued.lines(), ["V3 [N1 | 0] V - -2 .. 2"]);
    let spread = board("R1 a\n  + b\n\n* between\n\t+ 1k tol=5\nR2 a b 2k\n");
    assert_eq!(spread.lines(), ["R1 [a | b] R 1e3 tolerance 0.05", "R2 [a | b] R 2e3"]);
}

#[test]
fn a_continuation_of_a_commented_statement_is_comment() {
    let read = board("R1 a b 1k\n*V3 N1 0 AC 0\n+SIN 0 2 1k\n+ 0 0 0\nR2 a b 2k\n");
    assert_eq!(read.lines(), ["R1 [a | b] R 1e3", "R2 [a | b] R 2e3"]);
    let title = file("a.cir", "Title\n+ goes on\nR1 a b 1k\n");
    assert_eq!(title.lines(), ["R1 [a | b] R 1e3"]);
    assert!(read.faults.is_empty() && title.faults.is_empty());
}

#[test]
fn words_keep_their_true_places() {
    let read = board("R1 first\n+ second 4k7\n");
    let element = &read.netlist.top.elements[0];
    assert_eq!(read.text(element.span), "R1 first");
    assert_eq!(read.text(element.nodes[1]), "second");
    assert_eq!(read.sources.place(element.nodes[1]).line, 3);
    let comment = board("R1 a b {1k * 2} ; remark\n");
    assert_eq!(comment.text(comment.netlist.top.elements[0].span), "R1 a b {1k * 2}");
}

#[test]
fn an_expression_may_go_over_lines() {
    let read = board("R1 a b {1k\n+ + 2k}\nR2 a b 'x *\n+ 2' tol=1\n");
    assert_eq!(read.lines(), ["R1 [a | b] R {1k\n+ + 2k}", "R2 [a | b] R {x *\n+ 2} tolerance 0.01"]);
    let Some(gainsay::netlist::Value::Expression(word)) = (match &read.netlist.top.elements[0].kind {
        gainsay::netlist::Kind::Resistor(passive) => passive.value,
        _ => None,
    }) else {
        panic!("an expression")
    };
    assert_eq!(gainsay::netlist::evaluate(read.text(word), &|_| None), Ok(3e3));
    assert_eq!(read.text(read.netlist.top.elements[0].span), "R1 a b {1k");
}

#[test]
fn reading_goes_on_after_the_end() {
    let read = board("R1 a b 1k\n.end\nR2 a b 2k\n.END\n");
    assert_eq!(read.lines().len(), 2);
    assert!(read.faults.is_empty());
}

#[test]
fn names_hold_almost_anything() {
    let names = [
        "Net-_U1-Pad2_",
        "Net-(U1-Pad2)",
        "/label",
        "$N_0001",
        "+12V",
        "-12V",
        "15-",
        "**OUT**",
        "3_7n",
        "net#1",
        "n<3>",
        "ib[2]",
        "a:b",
        "a&b",
        "~RST",
        "?",
        "gnd!",
        "Übertrag",
        "IN+",
    ];
    for name in names {
        let read = board(&format!("R1 {name} GND 10k\nR2 GND {name} 10k\n"));
        assert_eq!(read.lines(), [format!("R1 [{name} | GND] R 1e4"), format!("R2 [GND | {name}] R 1e4")]);
        assert!(read.faults.is_empty(), "{name}");
    }
}

#[test]
fn a_prefix_gives_the_true_letter() {
    let read = board("M§Q1 IN N003 N005 N005 BSS123\nR§R1 a b 1k\nX§U1 a b c d e LT1001\nC§C1 a b 1µ\n");
    assert_eq!(
        read.lines(),
        [
            "M§Q1 [IN | N003 | N005 | N005] transistor BSS123",
            "R§R1 [a | b] R 1e3",
            "X§U1 [a | b | c | d | e] call LT1001",
            "C§C1 [a | b] C 1e-6",
        ]
    );
}

#[test]
fn blanks_of_many_kinds() {
    let read = board("R1\ta\u{a0}b \u{a0} 1k\r\nR2 a b 2k\r\n");
    assert_eq!(read.lines(), ["R1 [a | b] R 1e3", "R2 [a | b] R 2e3"]);
}

#[test]
fn encodings_are_told_apart() {
    let text = "title\nC1 a b 2.2\u{b5}\n";
    let sixteen = |text: &str, big: bool| -> Vec<u8> {
        let bytes = |unit: u16| if big { unit.to_be_bytes() } else { unit.to_le_bytes() };
        text.encode_utf16().flat_map(bytes).collect()
    };
    let marked = format!("\u{feff}{text}");
    let cases = [
        text.as_bytes().to_vec(),
        marked.as_bytes().to_vec(),
        sixteen(text, false),
        sixteen(&marked, false),
        sixteen(&marked, true),
        text.chars().map(|letter| letter as u8).collect(),
        format!("{text}\u{1a}").into_bytes(),
        sixteen(&format!("{text}\u{1a}"), false),
    ];
    for bytes in cases {
        assert_eq!(decode(&bytes).as_deref(), Ok(text), "{bytes:?}");
    }
    assert_eq!(decode(b"M\xa7Q1").as_deref(), Ok("M\u{a7}Q1"));
    assert_eq!(decode(b"a\rb\r").as_deref(), Ok("a\nb\n"));
    assert_eq!(decode(b"").as_deref(), Ok(""));
    assert!(matches!(decode(b"\x7fELF\x02\x01\0\0"), Err(DecodeFault::Binary { byte: 0x7f, offset: 0 })));
    assert!(decode(&[0x89, b'P', b'N', b'G', b'\r', b'\n', 0x1a, b'\n', 0, 0, 0, 13]).is_err());
}

#[test]
fn places_count_from_the_decoded_text() {
    let read = board("C1 µ b 2.2µ tol=5\n");
    let element = &read.netlist.top.elements[0];
    let place = read.sources.place(Span { ..element.nodes[1] });
    assert_eq!((place.line, place.column), (2, 6));
}
