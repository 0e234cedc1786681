//! Includes that lead nowhere, in circles, or out of the folder.

use crate::bad_input::bench::{Bench, RAILS, SOUND};

/// A board whose second line includes a path; its stage stands behind.
fn including(path: &str) -> String {
    let (title, rails) = RAILS.split_once('\n').expect("the rails follow a title");
    format!("{title}\n.include {path}\n{rails}{SOUND}")
}

#[test]
fn a_missing_include_is_a_note() {
    for path in ["gone.lib", "sub/gone.lib", "\"my models.lib\""] {
        let outcome = Bench::new(including(path)).check();
        outcome.is(0, &[]).has("note missing-include board.cir:2:1").covers(1, 1, 0).sound();
    }
}

#[test]
fn places_of_other_machines_are_missing() {
    for path in ["http://example.com/a.lib", "~/a.lib", "$HOME/a.lib", "C:\\models\\a.lib", "%TEMP%\\a.lib"] {
        let outcome = Bench::new(including(path)).check();
        outcome.is(0, &[]).has("note missing-include board.cir:2:1").sound();
    }
}

#[test]
fn nothing_outside_the_folder_is_read() {
    for path in
        ["../outside.lib", "sub/../../outside.lib", "/etc/passwd", "/dev/zero", "/dev/stdin", "/gone/x"]
    {
        let bench =
            Bench::new("x\n").file("inner/board.cir", including(path)).file("outside.lib", "R9 x y 1k\n");
        let bench = bench.file("inner/sub/a.lib", "");
        let outcome = bench.check_path("inner/board.cir");
        outcome.is(2, &["error include-refused board.cir:2:1"]).covers(1, 1, 0).sound();
        assert!(outcome.message("include-refused").contains("outside"), "{path}");
    }
}

#[cfg(unix)]
#[test]
fn links_are_followed_before_they_are_judged() {
    let bench =
        Bench::new("x\n").file("inner/board.cir", including("link.lib")).file("outside.lib", "R9 x y 1k\n");
    std::os::unix::fs::symlink("../outside.lib", bench.path("inner/link.lib")).expect("a link can be made");
    bench.check_path("inner/board.cir").is(2, &["error include-refused board.cir:2:1"]).sound();
    let bench = Bench::new(including("link.lib")).file("own.lib", "R9 in 0 1k\n");
    std::os::unix::fs::symlink("own.lib", bench.path("link.lib")).expect("a link can be made");
    bench.check().is(0, &[]).sound();
}

#[test]
fn includes_that_are_no_text() {
    let bench = Bench::new(including("a.lib")).file("a.lib", b"\0\x01\x02binary");
    bench.check().is(2, &["error include-refused board.cir:2:1"]).sound();
    Bench::new(including("sub"))
        .file("sub/a.lib", "")
        .check()
        .is(2, &["error include-refused board.cir:2:1"])
        .sound();
}

#[test]
fn loops_are_said_at_the_line_that_closes_them() {
    Bench::new(including("board.cir")).check().is(1, &["error include-loop board.cir:2:1"]).sound();
    let bench = Bench::new(including("a.lib")).file("a.lib", "* a\n.include b.lib\n");
    let bench = bench.file("b.lib", "* b\n* b\n.include a.lib\nR9 in 0 1k\n");
    bench.check().is(1, &["error include-loop b.lib:3:1"]).sound();
}

#[test]
fn a_loop_under_other_names_is_a_loop() {
    let bench = Bench::new(including("a.lib")).file("a.lib", ".include ./a.lib\n.include sub/../a.lib\n");
    let outcome = bench.file("sub/b.lib", "").check();
    outcome.is(1, &["error include-loop a.lib:1:1", "error include-loop a.lib:2:1"]).sound();
}

#[test]
fn a_chain_of_includes_ends() {
    let mut bench = Bench::new(including("0.lib"));
    for at in 0..40 {
        bench = bench.file(&format!("{at}.lib"), format!(".include {}.lib\n", at + 1));
    }
    let outcome = bench.check();
    assert_eq!(outcome.status, 1);
    outcome.sound().message("include-limit");
}
