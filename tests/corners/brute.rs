//! Every corner of a stage, solved whole.

use super::part::{
    AWAY, BIAS, COMMON, DEVIATION, DIFFERENTIAL, DRIFT, GAIN, INPUT, OFFSET, OUTPUT, RAIL, RATED, REJECTION,
    SWING, TOLERANCE, VOS,
};
use super::stage::{PINS, Stage, TYPICAL};
use crate::nodal::{Element, Nodal, OpAmp};

/// The ideal op amp.
const TWIN: OpAmp =
    OpAmp { gain: f64::INFINITY, differential: f64::INFINITY, common: f64::INFINITY, output: 0.0 };

/// A stage at one corner.
pub struct Corner<'s> {
    stage: &'s Stage,
    model: OpAmp,
    factors: Vec<f64>,
    real: Nodal,
    twin: Nodal,
}

/// What a figure is at a corner, and which way it is bad.
pub type Figure = (&'static str, Bad, fn(&Corner, &Corner) -> f64);

/// Which way a figure is bad.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Bad {
    Either,
    Low,
    High,
}

/// The figures: at a corner, with the nominal stage beside it.
pub const FIGURES: &[Figure] = &[
    ("gain-error", Bad::Either, |corner, _| corner.gain(&corner.real) / corner.gain(&corner.twin) - 1.0),
    ("loop-gain", Bad::Low, |corner, _| corner.loop_gain()),
    ("bias-error", Bad::High, |corner, _| corner.bias(PINS.2)),
    ("offset-error", Bad::High, |corner, nominal| corner.offset(PINS.2, nominal)),
    ("output-headroom", Bad::Low, |corner, nominal| corner.output_headroom(nominal)),
    ("input-headroom", Bad::Low, |corner, nominal| corner.input_headroom(nominal)),
    ("feedback-loading", Bad::High, |corner, nominal| corner.peak(nominal, false) / RATED),
    ("output-current", Bad::High, |corner, nominal| corner.peak(nominal, true) / RATED),
    ("output-resistance", Bad::High, |corner, _| corner.output_resistance()),
];

impl<'s> Corner<'s> {
    fn new(stage: &'s Stage, model: OpAmp, factors: Vec<f64>) -> Corner<'s> {
        let nodal = |model| Nodal::new(stage.nets, &stage.elements(model, &factors));
        Corner { stage, model, real: nodal(model), twin: nodal(TWIN), factors }
    }

    /// The nominal stage.
    pub fn nominal(stage: &'s Stage) -> Corner<'s> {
        Corner::new(stage, TYPICAL, vec![1.0; stage.resistors.len()])
    }

    /// Every corner of op amp and resistors; `whole` false leaves the op amp typical.
    pub fn all(stage: &'s Stage, whole: bool) -> impl Iterator<Item = Corner<'s>> {
        let count = stage.resistors.len();
        let op_amps = if whole { 16 } else { 1 };
        (0..op_amps << count).map(move |corner: usize| {
            let bit = |at: usize| corner >> at & 1;
            let tolerance = |at| if bit(at) == 0 { 1.0 - TOLERANCE } else { 1.0 + TOLERANCE };
            let pick = |values: [f64; 3], at: usize| values[2 * bit(count + at)];
            let model = OpAmp {
                gain: pick(GAIN, 0),
                differential: pick(DIFFERENTIAL, 1),
                common: pick(COMMON, 2),
                output: pick(OUTPUT, 3),
            };
            Corner::new(stage, if whole { model } else { TYPICAL }, (0..count).map(tolerance).collect())
        })
    }

    /// The gain from the main signal with the real op amp.
    pub fn real_gain(&self) -> f64 {
        self.gain(&self.real)
    }

    fn gain(&self, nodal: &Nodal) -> f64 {
        nodal.voltages(&[(self.stage.main, 1.0)])[PINS.2]
    }

    /// The element that is the op amp, which stands behind the signals.
    fn op_amp(&self) -> usize {
        self.stage.signals.len()
    }

    /// The return ratio from the input difference that a volt in series with the input leaves.
    fn loop_gain(&self) -> f64 {
        let volts = self.real.voltages(&[(self.op_amp(), 1.0)]);
        let left = volts[PINS.0] - volts[PINS.1];
        (-left / (1.0 + left)).abs()
    }

    /// What a current of one ampere out of a net makes at another.
    fn transresistance(&self, out_of: usize, at: usize) -> f64 {
        let mut elements = self.stage.elements(self.model, &self.factors);
        elements.push(Element::Current(0, out_of));
        let nodal = Nodal::new(self.stage.nets, &elements);
        nodal.voltages(&[(elements.len() - 1, 1.0)])[at]
    }

    /// What bias currents make at a net in the worst case.
    fn bias(&self, at: usize) -> f64 {
        let (plus, minus) = (self.transresistance(PINS.0, at), self.transresistance(PINS.1, at));
        BIAS * (plus + minus).abs() + OFFSET / 2.0 * (plus - minus).abs()
    }

    /// What offsets make at a net in the worst case; the common mode is that of the nominal stage at rest.
    fn offset(&self, at: usize, nominal: &Corner) -> f64 {
        let rest: Vec<(usize, f64)> =
            self.stage.signals.iter().enumerate().map(|(at, (_, a, b))| (at, (a + b) / 2.0)).collect();
        let resting = nominal.real.voltages(&rest);
        let common = ((resting[PINS.0] + resting[PINS.1]) / 2.0).abs();
        let series = VOS + AWAY * DRIFT + (common + 2.0 * DEVIATION) / REJECTION;
        self.real.voltages(&[(self.op_amp(), 1.0)])[at].abs() * series
    }

    /// The signals where the nominal stage drives a reading lowest and highest.
    fn ends(&self, read: impl Fn(&[f64]) -> f64) -> [Vec<(usize, f64)>; 2] {
        let signals = self.stage.signals.iter().enumerate();
        let (low, high) = signals
            .map(|(at, (_, least, greatest))| {
                let rises = 0.0 <= read(&self.real.voltages(&[(at, 1.0)]));
                let (down, up) = if rises { (*least, *greatest) } else { (*greatest, *least) };
                ((at, down), (at, up))
            })
            .unzip();
        [low, high]
    }

    /// The least distance of a net from its limits, with what else moves it.
    fn distance(&self, nominal: &Corner, net: usize, kept: f64, moved: f64) -> f64 {
        let [low, high] = nominal.ends(|volts| volts[net]);
        let limit = RAIL - DEVIATION - kept;
        let (low, high) = (self.real.voltages(&low)[net], self.real.voltages(&high)[net]);
        (low - moved + limit).min(limit - high - moved)
    }

    fn output_headroom(&self, nominal: &Corner) -> f64 {
        let moved = self.bias(PINS.2) + self.offset(PINS.2, nominal);
        self.distance(nominal, PINS.2, SWING, moved)
    }

    /// Offsets and bias currents move no input of these stages by 50 mV, so they don't count.
    fn input_headroom(&self, nominal: &Corner) -> f64 {
        let pin = |net| self.distance(nominal, net, INPUT, 0.0);
        pin(PINS.0).min(pin(PINS.1))
    }

    /// The current out of the output, into the feedback network or into everything.
    fn current(&self, volts: &[f64], whole: bool) -> f64 {
        let resistors = self.stage.resistors.iter().zip(&self.factors).enumerate();
        let counted = resistors.filter(|(at, _)| whole || !self.stage.loads.contains(at));
        counted
            .map(|(_, ((a, b, ohms), factor))| match (*a == PINS.2, *b == PINS.2) {
                (true, false) => (volts[*a] - volts[*b]) / (ohms * factor),
                (false, true) => (volts[*b] - volts[*a]) / (ohms * factor),
                _ => 0.0,
            })
            .sum()
    }

    /// The same at the end of the ranges where the nominal stage has its peak.
    fn peak(&self, nominal: &Corner, whole: bool) -> f64 {
        let ends = nominal.ends(|volts| nominal.current(volts, whole));
        let nominals = ends.clone().map(|end| nominal.current(&nominal.real.voltages(&end), whole).abs());
        let end = if nominals[1] < nominals[0] { &ends[0] } else { &ends[1] };
        self.current(&self.real.voltages(end), whole).abs()
    }

    /// Volts at the output for an ampere into it, loads taken away.
    fn output_resistance(&self) -> f64 {
        let stage = self.stage;
        let kept = |at: &usize| !stage.loads.contains(at);
        let pick = |at: usize| (stage.resistors[at], self.factors[at]);
        let (resistors, factors): (Vec<_>, Vec<f64>) =
            (0..stage.resistors.len()).filter(kept).map(pick).unzip();
        let bare = Stage { resistors, ..stage.clone() };
        let mut elements = bare.elements(self.model, &factors);
        elements.push(Element::Current(PINS.2, 0));
        Nodal::new(bare.nets, &elements).voltages(&[(elements.len() - 1, 1.0)])[PINS.2]
    }
}
