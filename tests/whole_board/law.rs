//! The laws: both solutions agree, and a board is refused exactly where its DC feedback regenerates.

use super::composed::{Comparison, compare, compare_with};
use super::random::{Grower, KINDS};
use super::sketch::Sketch;
use crate::nodal::{Element, Nodal, OpAmp};

/// Both solutions agree to this share of a row's largest entry.
const AGREED: f64 = 1e-6;

/// Asserts that every row agrees; the number of outputs.
fn agree(what: &str, sketch: &Sketch, comparison: &Comparison) -> usize {
    for difference in comparison.outputs.iter().chain(&comparison.inner) {
        assert!(difference.share <= AGREED, "{what}: {difference:?}\n{}", sketch.netlist());
    }
    comparison.outputs.len()
}

/// Whether the whole board has an odd number of real poles in the right half-plane: its determinant has
/// another sign than with dead amplifiers.
fn regenerates(sketch: &Sketch) -> bool {
    const DEAD: f64 = 1e-12;
    let kill = |element: &Element| match *element {
        Element::OpAmp(plus, minus, output, model) => {
            Element::OpAmp(plus, minus, output, OpAmp { gain: DEAD, ..model })
        }
        Element::Gain(output, plus, minus, gain) => Element::Gain(output, plus, minus, DEAD * gain),
        other => other,
    };
    let dead: Vec<Element> = sketch.elements.iter().map(kill).collect();
    let sign = |elements: &[Element]| Nodal::new(sketch.nets, elements).sign();
    sign(&sketch.elements) != sign(&dead)
}

#[test]
fn the_composed_board_is_the_whole_board() {
    let (mut boards, mut outputs) = (0, 0);
    for seed in 0..500 {
        let sketch = Grower::new(seed).board();
        let comparison = compare(&sketch);
        assert_eq!(regenerates(&sketch), !comparison.faults.is_empty(), "board {seed}: {comparison:?}");
        if comparison.faults.is_empty() {
            boards += 1;
            outputs += agree(&format!("board {seed}"), &sketch, &comparison);
        }
    }
    assert!(480 <= boards && 2500 <= outputs, "only {boards} boards with {outputs} outputs were compared");
}

#[test]
fn every_kind_of_stage_alone() {
    for kind in 0..KINDS {
        for seed in 0..12 {
            let what = format!("kind {kind}, seed {seed}");
            let sketch = Grower::new(1000 + seed).stage_alone(kind);
            let comparison = compare(&sketch);
            assert_eq!(comparison.faults, [""; 0], "{what}\n{}", sketch.netlist());
            agree(&what, &sketch, &comparison);
        }
    }
}

/// A chain of followers behind a stage of low loop gain, its end tied to its beginning by `ohms`.
fn tied(ohms: f64) -> Sketch {
    let mut sketch = Sketch::default();
    let nets: Vec<usize> = (0..5).map(|_| sketch.net()).collect();
    let model = |gain, output| OpAmp { gain, differential: 1e6, common: 1e9, output };
    sketch.elements = vec![
        Element::Source(nets[0], 0),
        Element::OpAmp(nets[0], nets[1], nets[2], model(5e3, 500.0)),
        Element::Resistor(nets[2], nets[1], 1e8),
        Element::Resistor(nets[1], 0, 1e3),
        Element::OpAmp(nets[2], nets[3], nets[3], model(1e5, 0.0)),
        Element::OpAmp(nets[3], nets[4], nets[4], model(1e5, 0.0)),
        Element::Resistor(nets[4], nets[2], ohms),
    ];
    sketch
}

#[test]
fn outputs_tied_together_are_solved_together() {
    for ohms in [1e4, 100.0, 10.0, 1.0, 0.01] {
        let sketch = tied(ohms);
        let comparison = compare(&sketch);
        assert_eq!(comparison.faults, [""; 0], "{ohms} ohm");
        agree(&format!("{ohms} ohm"), &sketch, &comparison);
    }
}

#[test]
fn a_load_that_regenerates_is_refused() {
    let mut sketch = tied(10.0);
    let buffer = sketch.elements.len() - 2;
    let Element::OpAmp(_, last, ..) = sketch.elements[buffer] else { panic!("it is the last follower") };
    sketch.elements[buffer] = Element::Gain(last, 3, 0, 4.0);
    // The source drives the load with four times the weak stage's own output.
    sketch.elements.remove(buffer - 1);
    sketch.elements.push(Element::Resistor(4, 0, 1e3));
    assert!(regenerates(&sketch));
    let faults = compare(&sketch).faults;
    assert!(!faults.is_empty() && faults.iter().all(|fault| fault == "Regenerative"), "{faults:?}");
}

#[test]
fn a_wrong_value_would_be_noticed() {
    let sketch = tied(1e3);
    let mut other = tied(1e3);
    other.elements[2] = Element::Resistor(3, 2, 1.001e8);
    let comparison = compare_with(&sketch, &other);
    assert!(comparison.outputs.iter().any(|difference| AGREED < difference.share), "{comparison:?}");
}
