//! How long each step of the road takes on boards of 1,000 and 10,000 stages.

mod boards;

use gainsay::block::{Layout, lay_out};
use gainsay::budget::Budget;
use gainsay::check::{Options, Outcome, run};
use gainsay::circuit::{Circuit, build};
use gainsay::device::Catalogue;
use gainsay::netlist::{Include, Netlist, read};
use gainsay::solve::Board;
use gainsay::source::Sources;

const SIZES: [usize; 2] = [1_000, 10_000];

fn main() {
    divan::main();
}

fn parsed(stages: usize) -> (Sources, Netlist) {
    let mut sources = Sources::default();
    let file = sources.add("board.cir", boards::netlist(stages));
    let (netlist, faults) = read(&mut sources, file, &mut |_, _, _| Include::Missing(String::new()));
    assert!(faults.is_empty(), "{faults:?}");
    (sources, netlist)
}

fn cut(stages: usize, catalogue: &Catalogue) -> (Circuit, Layout) {
    let (sources, netlist) = parsed(stages);
    let (mut circuit, _) = build(&sources, &netlist, &Budget::default(), catalogue);
    let layout = lay_out(&mut circuit);
    assert_eq!(layout.amps.len(), stages);
    (circuit, layout)
}

/// A loop that only splits the text into lines and blanks: what reading is measured against.
#[divan::bench(args = SIZES)]
fn split_only(bencher: divan::Bencher, stages: usize) {
    let text = boards::netlist(stages);
    bencher.bench(|| text.lines().map(|line| line.split_ascii_whitespace().count()).sum::<usize>());
}

#[divan::bench(args = SIZES)]
fn reading(bencher: divan::Bencher, stages: usize) {
    bencher.bench(|| parsed(stages));
}

#[divan::bench(args = SIZES)]
fn cutting(bencher: divan::Bencher, stages: usize) {
    let catalogue = gainsay::check::catalogue();
    bencher.bench(|| cut(stages, &catalogue));
}

#[divan::bench(args = SIZES)]
fn solving(bencher: divan::Bencher, stages: usize) {
    let catalogue = gainsay::check::catalogue();
    let (circuit, layout) = cut(stages, &catalogue);
    let supplies: Vec<_> = circuit.op_amps.iter().map(|part| (part.positive, part.negative)).collect();
    bencher.bench(|| Board::new(&circuit, &layout, &catalogue, supplies.clone()).rows.len());
}

#[divan::bench(args = SIZES)]
fn check(bencher: divan::Bencher, stages: usize) {
    let folder = tempfile::tempdir().expect("a temporary folder can be made");
    let path = folder.path().join("board.cir");
    std::fs::write(&path, boards::netlist(stages)).expect("the folder can be written to");
    let options = Options { paths: vec![path], ..Options::default() };
    bencher.bench(|| -> Outcome {
        let outcome = run(&options);
        assert_eq!(outcome.report.boards[0].coverage.analysed, stages);
        outcome
    });
}
