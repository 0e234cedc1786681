//! Boards that read well and can't work: the stage at fault is named, the others are analysed.

use crate::bad_input::bench::{Bench, Outcome, board};
use gainsay::block::lay_out;
use gainsay::budget::Budget;
use gainsay::circuit::build;
use gainsay::device::{Catalogue, read_profiles};
use gainsay::netlist::{self, Include};
use gainsay::source::Sources;

fn check(more: &str) -> Outcome {
    let outcome = Bench::new(board(more)).check();
    outcome.sound();
    outcome
}

#[test]
fn joined_outputs() {
    let outcome = check(
        "XU2 in a vcc vee o OP07C\nXU3 in b vcc vee o OP07C\nR3 o a 1k\nR4 o b 1k\nR5 a 0 1k\nR6 b 0 1k\n",
    );
    outcome
        .is(1, &["error joined-outputs board.cir:8:1", "error joined-outputs board.cir:9:1"])
        .covers(3, 1, 0);
    outcome.skips("XU2", "2 outputs are joined on o");
}

#[test]
fn shorted_outputs() {
    for (net, reason) in [
        ("0", "its output is tied to ground"),
        ("vcc", "its output is tied to the source or rail on vcc"),
        ("in", "its output is tied to the source or rail on in"),
    ] {
        let outcome = check(&format!("XU2 in a vcc vee {net} OP07C\nR3 {net} a 1k\nR4 a 0 1k\n"));
        outcome.is(1, &["error shorted-output board.cir:8:1"]).covers(2, 1, 0).skips("XU2", reason);
    }
    check("XU2 in a vcc vee o OP07C\nR3 o a 1k\nR4 a 0 1k\nR5 o 0 0\n")
        .is(1, &["error shorted-output board.cir:8:1"])
        .skips("XU2", "its output is tied to ground");
}

#[test]
fn missing_supplies() {
    for call in ["XU2 in a o OP07C", "XU2 in a p q o OP07C"] {
        let outcome = check(&format!("{call}\nR3 o a 1k\nR4 a 0 1k\n"));
        outcome.is(0, &[]).has("note unjudged board.cir:8:1").covers(2, 2, 0);
        let headroom = &outcome.board["stages"][1]["figures"]["output-headroom"];
        assert_eq!(headroom["reason"], "the supplies of XU2 are not known");
    }
}

#[test]
fn floating_inputs() {
    let outcome = check("XU2 p a vcc vee o OP07C\nC1 in p 1u\nR3 o a 1k\nR4 a 0 1k\n");
    outcome
        .is(1, &["error bias-path board.cir:8:1"])
        .covers(2, 1, 0)
        .skips("XU2", "no DC path to the input on net p");
}

#[test]
fn no_transfer_at_dc() {
    let outcome = check("XU2 0 a vcc vee o OP07C\nR3 in a 10k\nC1 o a 100n\n");
    outcome.is(0, &["warning dc-loop board.cir:8:1"]).covers(2, 1, 0);
    assert_eq!(outcome.board["verdict"], "incomplete");
}

#[test]
fn comparators_are_counted_apart() {
    let outcome = check("XU2 in ref vcc vee o OP07C\nR3 vcc ref 10k\nR4 ref 0 10k\n");
    outcome.is(0, &[]).has("note open-loop board.cir:8:1").covers(2, 1, 1);
    assert_eq!(outcome.board["verdict"], "within-budget");
}

#[test]
fn a_missing_loop_into_a_network_warns() {
    let outcome = check("XU2 in 0 vcc vee o OP07C\nR3 o a 10k\nR4 a b 10k\nXU3 0 a vcc vee b OP07C\n");
    outcome.is(0, &["warning open-loop board.cir:8:1"]).covers(3, 2, 1);
}

#[test]
fn exchanged_inputs() {
    let outcome = check("XU2 a in vcc vee o OP07C\nR3 o a 10k\nR4 a 0 1k\n");
    outcome.is(0, &["warning feedback-polarity board.cir:8:1"]).covers(2, 1, 0);
    let figures = outcome.board["stages"][1]["figures"].as_object().expect("a stage has figures");
    assert!(
        !figures.is_empty() && figures.values().all(|figure| figure["status"] == "unknown"),
        "{figures:#?}"
    );
}

#[test]
fn rectifiers_are_non_linear_by_intent() {
    let outcome = check("XU2 in a vcc vee o OP07C\nD1 o a DX\nR4 a 0 10k\n");
    outcome.is(0, &[]).has("note not-analysed board.cir:8:1").covers(2, 1, 1);
    assert!(outcome.message("not-analysed").contains("D1"));
}

#[test]
fn loops_through_transistors() {
    // The emitter on the input itself, behind a resistor, and with a load of its own.
    for network in [
        "R4 a 0 10k\nQ1 vcc o a QX\n",
        "R3 e a 10k\nR4 a 0 10k\nQ1 vcc o e QX\n",
        "R3 e a 10k\nR4 a 0 10k\nR5 e 0 1k\nQ1 vcc o e QX\n",
    ] {
        let outcome = check(&format!("XU2 in a vcc vee o OP07C\n{network}"));
        outcome.is(0, &["warning not-analysed board.cir:8:1"]).covers(2, 1, 0);
        outcome.skips("XU2", "its loop closes through Q1, which is not modelled");
    }
}

#[test]
fn transistors_beside_the_loop_leave_it_alone() {
    check("XU2 in a vcc vee o OP07C\nR3 o a 10k\nR4 a 0 1k\nR5 o b 1k\nQ1 vcc b 0 QX\n")
        .is(0, &[])
        .covers(2, 2, 0);
}

#[test]
fn voltage_sources_in_a_loop() {
    let outcome = check("V7 p q 1\nV8 p q 2\nXU2 in a vcc vee o OP07C\nR3 p a 1k\nR4 q o 1k\nR5 a 0 1k\n");
    outcome.is(0, &["warning not-analysed board.cir:10:1"]).covers(2, 1, 0);
    outcome
        .skips("XU2", "V8 closes a loop of voltage sources or inductors, or ties two held voltages together");
}

#[test]
fn sources_that_tie_a_net_twice() {
    check("V7 p 0 1\nV8 p 0 2\nXU2 p o vcc vee o OP07C\n")
        .is(1, &["error source-loop board.cir:9:1"])
        .covers(2, 2, 0);
    check("V7 p 0 1\nV8 p 0 1\nXU2 p o vcc vee o OP07C\n")
        .is(0, &[])
        .has("note source-loop board.cir:9:1")
        .covers(2, 2, 0);
    check("V7 p p 1\nV8 0 0 1\n").has("error source-loop board.cir:9:1");
}

#[test]
fn inductors_in_parallel_are_one() {
    check("L7 p q 1m\nL8 p q 2m\nXU2 in a vcc vee o OP07C\nR3 p a 1k\nR4 q o 1k\nR5 a 0 1k\n")
        .is(0, &[])
        .covers(2, 2, 0);
}

#[test]
fn floating_islands_are_left_aside() {
    let outcome =
        check("XU2 in a vcc vee o OP07C\nR3 o a 1k\nR4 a 0 1k\nR5 x y 1k\nR6 x y 2k\nC1 x a 1n\nV9 x z 3\n");
    outcome.is(0, &[]).covers(2, 2, 0);
}

#[test]
fn every_pin_on_one_net() {
    let outcome = check("XU2 a a a a a OP07C\nXU3 0 0 0 0 0 OP07C\n");
    outcome.covers(3, 1, 0).skips("XU3", "its output is tied to ground");
}

/// Cut without recursion, which would exhaust the stack; checking so many stages would take minutes here.
#[test]
fn a_long_cascade_is_cut_stage_by_stage() {
    const STAGES: usize = 60_000;
    let mut netlist = "a cascade\nV1 s0 0 SIN(0 1 1k)\n".to_owned();
    (0..STAGES).for_each(|at| netlist.push_str(&format!("XU{at} s{at} s{0} s{0} OP07C\n", at + 1)));
    let mut sources = Sources::default();
    let file = sources.add(
        "own.yaml",
        "- { device: OP07C, technology: bipolar, sections: 1, source: memory }\n".to_owned(),
    );
    let (profiles, _) = read_profiles(&sources, file);
    let catalogue = Catalogue { profiles, ..Catalogue::default() };
    let file = sources.add("board.cir", netlist);
    let (netlist, _) = netlist::read(&mut sources, file, &mut |_, _, _| Include::Missing(String::new()));
    let (mut circuit, _) = build(&sources, &netlist, &Budget::default(), &catalogue);
    let layout = lay_out(&mut circuit);
    assert_eq!((circuit.op_amps.len(), layout.blocks.len()), (STAGES, STAGES));
    let order = layout.blocks.iter().map(|block| block.members[0].0 as usize);
    assert!(order.eq(0..STAGES));
}
