//! Files that are no netlists, and paths that lead to none.

use crate::bad_input::bench::{Bench, board};

#[test]
fn a_sound_board_is_quiet() {
    Bench::new(board("")).check().is(0, &[]).covers(1, 1, 0).sound();
}

#[test]
fn binary_files() {
    let outcome = Bench::new(b"PK\x03\x04\0\0\0\x01stored").check();
    outcome.is(2, &["error unreadable-file board.cir:1:1"]).covers(0, 0, 0);
    assert!(outcome.errors.contains("board.cir"), "{}", outcome.errors);
}

#[test]
fn other_languages_are_no_netlists() {
    for text in ["<?xml version=\"1.0\"?>\n<export/>\n", "(export (version D)\n  (design (source x)))\n"] {
        Bench::new(text).check().is(2, &["error not-a-netlist board.cir:1:1"]);
    }
}

#[test]
fn empty_files_stand_at_their_own_first_line() {
    for text in ["", "\n\n\n", "only a title\n", "* a\n* b\n.end\n"] {
        Bench::new(text).check().is(2, &["error empty-netlist board.cir:1:1"]);
    }
}

#[test]
fn missing_files_and_folders() {
    for path in ["gone.cir", "gone/board.cir", "board.cir/x.cir"] {
        let outcome = Bench::new(board("")).check_path(path);
        assert_eq!(outcome.status, 2);
        assert_eq!(outcome.board["findings"][0]["rule"], "unreadable-file");
        assert!(outcome.errors.contains(path), "{}", outcome.errors);
    }
}

#[test]
fn folders_without_netlists() {
    let bench = Bench::new(board("")).file("empty/notes.txt", "R1 a b 1k\n");
    let outcome = bench.check_path("empty");
    assert_eq!((outcome.status, outcome.report["boards"].as_array().map(Vec::len)), (2, Some(0)));
    assert!(outcome.errors.contains("empty: no netlist in it"), "{}", outcome.errors);
    assert_eq!(outcome.report["verdict"], "incomplete");
}

#[test]
fn one_bad_file_leaves_the_others_checked() {
    let bench = Bench::new(board("")).file("a.cir", "").file("z.net", "<xml/>\n");
    let output = bench.program(&[".", "--format", "json"]);
    assert_eq!(output.status.code(), Some(2));
    let report: serde_json::Value = serde_json::from_slice(&output.stdout).expect("the report is JSON");
    let analysed: Vec<u64> = report["boards"]
        .as_array()
        .expect("a report has boards")
        .iter()
        .map(|board| board["coverage"]["analysed"].as_u64().expect("coverage counts"))
        .collect();
    assert_eq!(analysed, [0, 1, 0]);
}

#[test]
fn boards_without_op_amps() {
    let outcome = Bench::new("a filter\nR1 a b 1k\nC1 b 0 1n\n").check();
    outcome.is(2, &[]).covers(0, 0, 0);
}

#[cfg(unix)]
#[test]
fn what_is_no_plain_file() {
    let bench = Bench::new(board(""));
    let output = bench.program(&["/dev/zero", "--format", "json"]);
    assert_eq!(output.status.code(), Some(2));
}
