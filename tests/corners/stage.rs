//! Small stages as lists of elements, with their netlists.

use super::part::{BUDGET, COMMON, DIFFERENTIAL, GAIN, OUTPUT};
use crate::nodal::{Element, Net, OpAmp};

/// A stage of one op amp. Net 1 is the non-inverting input, net 2 the inverting one, net 3 the output.
#[derive(Debug, Clone)]
pub struct Stage {
    /// What it is.
    pub topology: &'static str,
    /// The number of nets.
    pub nets: usize,
    /// Resistors: ends and value.
    pub resistors: Vec<(Net, Net, f64)>,
    /// Which of them are loads.
    pub loads: Vec<usize>,
    /// Signals: the net, least and greatest value; a current's net is an input.
    pub signals: Vec<(Net, f64, f64)>,
    /// Whether the signals are currents.
    pub currents: bool,
    /// The signal that the gain is taken from.
    pub main: usize,
}

/// The inputs and the output of every stage.
pub const PINS: (Net, Net, Net) = (1, 2, 3);

/// The typical op amp.
pub const TYPICAL: OpAmp =
    OpAmp { gain: GAIN[1], differential: DIFFERENTIAL[1], common: COMMON[1], output: OUTPUT[1] };

impl Stage {
    /// All elements with an op amp and resistors by their factors; signals first, then the op amp.
    pub fn elements(&self, model: OpAmp, factors: &[f64]) -> Vec<Element> {
        let (plus, minus, output) = PINS;
        let signal = |(net, ..): &(Net, f64, f64)| match self.currents {
            true => Element::Current(*net, 0),
            false => Element::Source(*net, 0),
        };
        let grounded = !self.resistors.iter().any(|(a, b, _)| [*a, *b].contains(&plus));
        let driven = self.signals.iter().any(|(net, ..)| *net == plus);
        let held = (grounded && !driven).then_some(Element::Source(plus, 0));
        let resistors = self.resistors.iter().zip(factors);
        self.signals
            .iter()
            .map(signal)
            .chain([Element::OpAmp(plus, minus, output, model)])
            .chain(resistors.map(|((a, b, ohms), factor)| Element::Resistor(*a, *b, ohms * factor)))
            .chain(held)
            .collect()
    }

    /// The netlist.
    pub fn netlist(&self) -> String {
        let net = |net: Net| if net == 0 { "0".to_owned() } else { format!("n{net}") };
        let grounded = matches!(self.elements(TYPICAL, &[1.0; 8]).last(), Some(Element::Source(1, 0)))
            && !self.signals.iter().any(|(net, ..)| *net == 1);
        let plus = if grounded { "0" } else { "n1" };
        let resistors = self.resistors.iter().enumerate();
        let lines: Vec<String> = resistors
            .map(|(at, (a, b, ohms))| format!("R{} {} {} {ohms:e}\n", at + 1, net(*a), net(*b)))
            .collect();
        format!("corners\nVP VCC 0 12\nVN VEE 0 -12\n{}XU1 {plus} n2 VCC VEE n3 PART\n.end\n", lines.concat())
    }

    /// The budget.
    pub fn budget(&self) -> String {
        let unit = if self.currents { "A" } else { "V" };
        let signals: Vec<String> = self
            .signals
            .iter()
            .map(|(net, low, high)| format!("  n{net}: {{ range: {low:e} {unit} .. {high:e} {unit} }}\n"))
            .collect();
        format!("{BUDGET}{}", signals.concat())
    }
}

/// The stages.
pub fn stages() -> Vec<Stage> {
    let stage =
        |topology, nets, resistors: &[(Net, Net, f64)], loads: &[usize], signals: &[(Net, f64, f64)]| Stage {
            topology,
            nets,
            resistors: resistors.to_vec(),
            loads: loads.to_vec(),
            signals: signals.to_vec(),
            currents: false,
            main: 0,
        };
    vec![
        stage("non-inverting", 4, &[(4, 1, 10e3), (2, 0, 1e3), (3, 2, 20e3)], &[], &[(4, -0.1, 0.3)]),
        stage(
            "non-inverting",
            4,
            &[(4, 1, 10e3), (2, 0, 5e3), (3, 2, 5e3), (3, 0, 1e3)],
            &[3],
            &[(4, -1.0, 3.0)],
        ),
        stage("inverting", 4, &[(4, 2, 2e3), (3, 2, 100e3), (3, 0, 2e3)], &[2], &[(4, -0.15, 0.1)]),
        stage("inverting", 4, &[(4, 2, 50e3), (3, 2, 20e3), (1, 0, 15e3)], &[], &[(4, -8.0, 5.0)]),
        stage(
            "inverting",
            5,
            &[(4, 2, 20e3), (2, 5, 50e3), (5, 3, 30e3), (5, 0, 1e3)],
            &[],
            &[(4, -0.05, 0.07)],
        ),
        stage("follower", 4, &[(4, 1, 50e3), (3, 2, 10e3), (3, 0, 2e3)], &[2], &[(4, -4.0, 7.0)]),
        Stage {
            main: 1,
            ..stage(
                "summing",
                5,
                &[(4, 2, 30e3), (5, 2, 10e3), (3, 2, 60e3)],
                &[],
                &[(4, -1.0, 1.5), (5, -0.3, 0.4)],
            )
        },
        Stage {
            main: 1,
            ..stage(
                "difference",
                5,
                &[(4, 1, 10e3), (1, 0, 40e3), (5, 2, 10e3), (3, 2, 40e3)],
                &[],
                &[(4, -0.5, 1.0), (5, -1.0, 0.6)],
            )
        },
        Stage {
            currents: true,
            ..stage("transimpedance", 3, &[(3, 2, 200e3), (3, 0, 3e3)], &[1], &[(2, 0.0, 20e-6)])
        },
    ]
}
