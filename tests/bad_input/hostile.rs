//! Names and lines made to hurt: terminals, tables, memory.

use crate::bad_input::bench::{Bench, board};

#[test]
fn control_characters_make_a_file_binary() {
    let outcome = Bench::new(board("R\u{1b}[31m9 in 0 1k\n")).check();
    outcome.is(2, &["error unreadable-file board.cir:1:1"]);
}

#[test]
fn hostile_names_go_through_every_format() {
    let names = [
        "\u{9b}31mq",
        "\u{202e}gnp.exe",
        "<b>*in*</b>",
        "`n`|x",
        "[a](javascript:b)",
        "\u{200f}r\u{2066}",
        "a\u{301}\u{301}",
        "--rules",
        "\u{feff}x",
    ];
    for name in names {
        let stage = format!(
            "XU{name} in {name} vcc vee o{name} OP07C\nR{name}a {name} 0 1k\nR{name}b o{name} {name} 1k\nR{name}c {name}\nX{name}d a {name} {name}\n"
        );
        let outcome = Bench::new(board(&stage)).check();
        outcome.covers(2, 2, 0).sound();
        assert!(
            outcome.said().iter().any(|line| line == "error missing-node board.cir:11:1"),
            "{:?}",
            outcome.said()
        );
        let ids: Vec<&str> = outcome.board["stages"]
            .as_array()
            .expect("stages")
            .iter()
            .filter_map(|stage| stage["id"].as_str())
            .collect();
        assert_eq!(ids, ["XU1", &format!("XU{name}")]);
    }
}

#[test]
fn hostile_names_in_a_budget() {
    let budget = "board: \"\\e[31m\\u202e\"\nsignals:\n  \"\\e]0;x\\a\": { range: 0 V .. 1 V }\nabsent: [\"\\u009b\"]\n";
    let outcome = Bench::new(board("")).budget(budget).check();
    assert_eq!(outcome.status, 2);
    outcome.sound();
}

#[test]
fn hostile_paths() {
    let bench = Bench::new(board("")).file("a\u{1b}[31m\u{202e}b.cir", board("R7 a\n"));
    bench.check_path("a\u{1b}[31m\u{202e}b.cir").covers(1, 1, 0).sound();
    assert_eq!(bench.check_path("gone\u{1b}[31m.cir").status, 2);
}

#[test]
fn long_names_and_lines() {
    let name = "x".repeat(100_000);
    let outcome = Bench::new(board(&format!("R{name} a b 1k\nR5 {name} 0 1k\n"))).check();
    outcome
        .is(1, &["error name-length-limit board.cir:8:1", "error name-length-limit board.cir:9:4"])
        .sound();
    let outcome = Bench::new(board(&format!("* {name}\nR5 a b {}\n", "1".repeat(2_000_000)))).check();
    outcome.is(1, &["error line-length-limit board.cir:9:1"]).sound();
    // The longest name that is read goes through.
    let name = "y".repeat(500);
    let outcome = Bench::new(board(&format!("XU{name} in {name} vcc vee {name} OP07C\n"))).check();
    outcome.is(0, &[]).covers(2, 2, 0).sound();
}

#[test]
fn many_faults_are_cut_short() {
    let outcome = Bench::new(board(&"R7 a\n".repeat(5_000))).check();
    assert_eq!(outcome.status, 1);
    let said = outcome.said();
    assert!(said.len() <= 1_010, "{}", said.len());
    outcome.sound();
    outcome.message("fault-limit");
}
