//! Text made to break a reader: it ends in bounded time with diagnostics, and every span lies in the text.

use super::show::{Read, board, file};
use gainsay::netlist::{Kind, Scope, Value, evaluate, limit, number};
use gainsay::source::{Span, decode};
use proptest::prelude::*;

/// Asks for the text of every span, which panics where it lies outside or inside a character.
fn spans_lie_in_the_text(read: &Read) {
    let word = |span: Span| {
        assert!(span.start <= span.end);
        let _ = read.text(span);
        let _ = read.sources.place(span);
    };
    let value = |value: Option<Value>| match value {
        Some(Value::Number(_, span) | Value::Expression(span)) => word(span),
        None => {}
    };
    let scope = |scope: &Scope| {
        for element in &scope.elements {
            [element.name, element.span].into_iter().chain(element.nodes.iter().copied()).for_each(word);
            for node in &element.nodes {
                assert!(!read.text(*node).contains('\n') && !read.text(*node).is_empty());
            }
            assert!(!read.text(element.span).contains('\n'));
            match &element.kind {
                Kind::Resistor(passive) | Kind::Capacitor(passive) | Kind::Inductor(passive) => {
                    value(passive.value);
                    passive.model.into_iter().for_each(word);
                }
                Kind::VoltageSource(wave) | Kind::CurrentSource(wave) => value(wave.dc),
                Kind::VoltageGain(gain) => value(Some(*gain)),
                Kind::Call { model, parameters } => {
                    word(*model);
                    parameters.iter().for_each(|pair| [pair.name, pair.value].into_iter().for_each(word));
                }
                Kind::Diode { model } | Kind::Transistor { model } => model.iter().copied().for_each(word),
                Kind::Unmodelled => {}
            }
        }
        scope.parameters.iter().for_each(|pair| [pair.name, pair.value].into_iter().for_each(word));
        for model in &scope.models {
            [model.name, model.kind].into_iter().for_each(word);
            model.parameters.iter().for_each(|pair| [pair.name, pair.value].into_iter().for_each(word));
        }
    };
    scope(&read.netlist.top);
    for subcircuit in &read.netlist.subcircuits {
        word(subcircuit.name);
        subcircuit.ports.iter().copied().for_each(word);
        subcircuit.defaults.iter().for_each(|pair| [pair.name, pair.value].into_iter().for_each(word));
        scope(&subcircuit.body);
    }
    read.netlist.title.into_iter().chain(read.netlist.globals.iter().copied()).for_each(word);
    for fault in &read.faults {
        fault.labels.iter().for_each(|label| word(label.span));
    }
}

#[test]
fn long_lines_names_and_nestings_are_refused() {
    let line = board(&format!("X1 {} m\nR1 a b 1k\n", "a ".repeat(limit::LINE_BYTES)));
    assert_eq!((line.kinds(), line.lines().len()), (vec!["line-length-limit"], 1));
    let name = board(&format!("R1 {} b 1k\nR2 a b 1k\n", "n".repeat(limit::NAME_BYTES + 1)));
    assert_eq!((name.kinds(), name.lines().len()), (vec!["name-length-limit"], 1));
    let nested = board(&".subckt x a\n".repeat(limit::SUBCIRCUIT_DEPTH + 1));
    assert_eq!(nested.kinds()[0], "nesting-limit");
    for read in [line, name, nested] {
        spans_lie_in_the_text(&read);
    }
}

#[test]
fn a_file_past_the_limit_is_not_read() {
    let read = board(&"R1 a b 1k\n".repeat(limit::FILE_BYTES / 10 + 1));
    assert_eq!(read.kinds(), ["file-size-limit"]);
    assert!(read.netlist.top.elements.is_empty());
}

#[test]
fn repeated_text_stays_linear() {
    let bits = [
        "R1 a b {",
        "+",
        "*R1 a b c\n+",
        "V(V(",
        "/a b/c ",
        "(",
        "=",
        "'",
        "\"",
        "a=",
        ".lib x\n",
        ".subckt\n",
        "x\n",
        "{\n+",
        "E1 a b VALUE={v(",
        ".param a=1,",
        "PWL ",
        "\u{a0}",
        "§",
        ",",
        "$ ",
        "K1 ",
        "?",
        "1k",
        "R1 a b c 1k\n",
        "R1 a b x\n",
    ];
    for bit in bits {
        for text in [
            bit.repeat(20_000),
            format!("B1 a b {}", bit.repeat(20_000)),
            format!("X1 {} m", bit.repeat(20_000)),
        ] {
            let read = board(&text);
            spans_lie_in_the_text(&read);
            assert!(read.faults.len() <= limit::DIAGNOSTICS + 1);
        }
    }
}

/// Words that netlists are made of, and some that break them.
fn word() -> impl Strategy<Value = String> {
    let known = prop::sample::select(vec![
        "R1", "C2", "L3", "V4", "I5", "E6", "XU7", "Q8", "U9", "K1", "A1", "M§Q1", "a", "b", "0", "/Low",
        "EQ/Out", "?", "10k", "4k7", "1Meg", "2.2µ", "{x*2}", "'y", "{", "}", "(", ")", "(a,b)", "POLY(2)",
        "VALUE=", "=", "TC=0,0", "SIN(", "PWL", "DC", "AC", ".subckt", ".ends", ".param", ".model",
        ".include", ".lib", ".control", ".endc", ".end", ".global", "params:", "\n", "\n+", "\n*", "\n+ ",
        ";", "$", "//", "\"", ",", "%", "1%", "nF", "\u{a0}", "V(p,n)", "TL074", "Conn_2", "subckt", "\r\n",
        "RES(R=1", "-5", "1e999",
    ]);
    prop_oneof![8 => known.prop_map(str::to_owned), 1 => any::<String>(), 1 => "[ -~]{0,12}"]
}

proptest! {
    #[test]
    fn reading_never_panics(words in prop::collection::vec((word(), prop::bool::weighted(0.8)), 0..60), library: bool) {
        let text: String = words.iter().flat_map(|(word, blank)| [word.as_str(), if *blank { " " } else { "" }]).collect();
        let read = file(if library { "x.lib" } else { "x.cir" }, &text);
        spans_lie_in_the_text(&read);
    }

    #[test]
    fn decoding_never_panics(bytes in prop::collection::vec(any::<u8>(), 0..200)) {
        if let Ok(text) = decode(&bytes) {
            spans_lie_in_the_text(&file("x.cir", &text));
        }
    }

    #[test]
    fn values_and_expressions_never_panic(text in prop_oneof![any::<String>(), "[-+*/^(){}0-9a-zA-Z.,%_µ ]{0,40}"]) {
        if let Some(found) = number(&text) {
            prop_assert!(found.value.is_finite());
        }
        if let Ok(value) = evaluate(&text, &|_| Some(2.0)) {
            prop_assert!(value.is_finite());
        }
    }

    #[test]
    fn a_printed_number_is_read_again(value in -1e12f64..1e12) {
        prop_assert_eq!(number(&format!("{value}")).map(|number| number.value), Some(value));
        let short = format!("{value:.3e}");
        prop_assert_eq!(number(&short).map(|number| number.value), short.parse().ok());
    }
}
