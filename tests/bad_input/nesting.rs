//! Subcircuits that call themselves, or stand for more than any machine holds.

use crate::bad_input::bench::{Bench, board};
use std::time::{Duration, Instant};

/// Checks a board and asserts that the program takes little time and, where that can be bounded, memory.
fn quick(more: &str) -> crate::bad_input::bench::Outcome {
    let bench = Bench::new(board(more));
    let start = Instant::now();
    let output = bench.confined(&["board.cir"]);
    let took = start.elapsed();
    assert!(took < Duration::from_secs(2), "{took:?} {output:?}");
    assert!(output.status.code().is_some_and(|status| status <= 2), "{output:?}");
    bench.check()
}

/// Definitions each of which calls the next one several times, and the last.
fn tower(height: usize, width: usize, last: &str) -> String {
    let mut text = String::new();
    for level in 0..height {
        text.push_str(&format!(".subckt S{level} a b\n"));
        (0..width).for_each(|call| text.push_str(&format!("X{call} a b S{}\n", level + 1)));
        text.push_str(".ends\n");
    }
    text.push_str(&format!(".subckt S{height} a b\n{last}.ends\n"));
    text
}

#[test]
fn recursion_is_said_where_it_is_called() {
    let outcome = quick("X9 out 0 A\n.subckt A x y\nR1 x y 1k\nX1 x y A\n.ends\n");
    outcome.is(1, &["error recursive-subcircuit board.cir:11:1"]).covers(1, 1, 0).sound();
}

#[test]
fn recursion_by_way_of_others_is_said_once() {
    let a = ".subckt A x y\nX1 x y B\nX2 x y B\n.ends\n";
    let b = ".subckt B x y\nX1 x y A\nX2 x y A\nR1 x y 1k\n.ends\n";
    let outcome = quick(&format!("{a}{b}X9 out 0 A\nX10 out 0 B\n"));
    outcome.is(1, &["error recursive-subcircuit board.cir:9:1"]).covers(1, 1, 0).sound();
}

#[test]
fn exponential_nesting_is_refused_before_it_is_expanded() {
    for last in ["R1 a b 1k\n", "", "XU1 a b vcc vee c OP07C\n"] {
        let outcome = quick(&format!("X9 out 0 S0\n{}", tower(32, 4, last)));
        outcome.is(1, &["error too-large board.cir:8:1"]).covers(1, 1, 0).sound();
    }
    // A body that isn't linear and holds no op amp is one part, however much it stands for.
    quick(&format!("X9 in 0 S0\n{}", tower(32, 4, "D1 a b D\n"))).is(0, &[]).covers(1, 1, 0).sound();
}

#[test]
fn nesting_within_reason_is_expanded() {
    let outcome = quick(&format!("X9 in 0 S0\n{}", tower(6, 2, "XU1 a c vcc vee c OP07C\nR1 b 0 1k\n")));
    outcome.covers(65, 65, 0).sound();
}

#[test]
fn long_chains_of_calls_end() {
    let outcome = quick(&format!("X9 in 0 S0\n{}", tower(5_000, 1, "R1 a b 1k\n")));
    // Line 9 begins the first definition, each has three lines, and the fortieth holds the call too many.
    outcome.is(1, &["error too-large board.cir:127:1"]).sound();
}

#[test]
fn a_call_that_is_refused_leaves_room_for_others() {
    let good = ".subckt follow a b\nXU1 a b vcc vee b OP07C\n.ends\nX10 in o2 follow\n";
    let outcome = quick(&format!("X9 out 0 S0\n{good}{}", tower(32, 2, "R1 a b 1k\n")));
    outcome.is(1, &["error too-large board.cir:8:1"]).covers(2, 2, 0).sound();
}
