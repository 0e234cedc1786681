//! Random boards: stages of every kind, one after another, each fed by signals, by outputs that are there
//! already, or by unbuffered networks that several of them share.

use super::sketch::Sketch;
use crate::nodal::{Element, Net, OpAmp};

/// A generator of random numbers that gives the same ones on every machine (SplitMix64: G. L. Steele,
/// D. Lea, C. H. Flood, Fast Splittable Pseudorandom Number Generators, OOPSLA 2014).
pub struct Dice(pub u64);

impl Dice {
    fn roll(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// Below `end`, evenly.
    pub fn below(&mut self, end: usize) -> usize {
        (self.roll() % end as u64) as usize
    }

    fn chance(&mut self, one_in: usize) -> bool {
        self.below(one_in) == 0
    }

    /// Between two values, evenly in their logarithm.
    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        let share = (self.roll() >> 11) as f64 / (1u64 << 53) as f64;
        low * (high / low).powf(share)
    }
}

/// A board while it grows.
pub struct Grower {
    pub dice: Dice,
    pub sketch: Sketch,
    signals: Vec<Net>,
    /// Outputs so far.
    outputs: Vec<Net>,
    /// Nets of unbuffered networks, to be shared.
    soft: Vec<Net>,
    /// Resistors span this, ohm.
    span: (f64, f64),
}

/// Kinds of stages.
pub const KINDS: usize = 15;

impl Grower {
    pub fn new(seed: u64) -> Grower {
        let mut dice = Dice(seed);
        // Half of the boards have usual values, the others any.
        let span = if dice.chance(2) { (10.0, 1e8) } else { (1e3, 1e6) };
        let (signals, outputs, soft) = (Vec::new(), Vec::new(), Vec::new());
        Grower { dice, sketch: Sketch::default(), signals, outputs, soft, span }
    }

    /// A board of some stages, of whatever kinds.
    pub fn board(mut self) -> Sketch {
        self.sources();
        for _ in 0..1 + self.dice.below(7) {
            let kind = self.dice.below(KINDS);
            self.stage(kind);
        }
        self.loads();
        self.sketch
    }

    /// A board of one stage of that kind.
    pub fn stage_alone(mut self, kind: usize) -> Sketch {
        self.sources();
        self.stage(kind);
        self.sketch
    }

    fn sources(&mut self) {
        for at in 0..1 + self.dice.below(3) {
            let net = self.sketch.net();
            if 0 < at && self.dice.chance(3) {
                self.sketch.fixed.push(self.sketch.elements.len());
            }
            self.sketch.elements.push(Element::Source(net, 0));
            self.signals.push(net);
        }
    }

    fn ohms(&mut self) -> f64 {
        self.dice.between(self.span.0, self.span.1)
    }

    fn resistor(&mut self, a: Net, b: Net) -> f64 {
        let ohms = self.ohms();
        self.sketch.elements.push(Element::Resistor(a, b, ohms));
        ohms
    }

    /// A new net behind a resistor.
    fn behind(&mut self, from: Net) -> Net {
        let net = self.sketch.net();
        self.resistor(from, net);
        net
    }

    /// A new net behind a resistor and a floating source.
    fn battery(&mut self, from: Net) -> Net {
        let (middle, net) = (self.behind(from), self.sketch.net());
        self.sketch.fixed.push(self.sketch.elements.len());
        self.sketch.elements.push(Element::Source(middle, net));
        net
    }

    fn model(&mut self) -> OpAmp {
        OpAmp {
            gain: self.dice.between(1e3, 1e7),
            differential: self.dice.between(1e4, 1e12),
            common: self.dice.between(1e6, 1e13),
            output: if self.dice.chance(4) { 0.0 } else { self.dice.between(1.0, 5e3) },
        }
    }

    /// An op amp with a new output.
    fn op_amp(&mut self, plus: Net, minus: Net) -> Net {
        let output = self.sketch.net();
        let model = self.model();
        self.sketch.elements.push(Element::OpAmp(plus, minus, output, model));
        self.outputs.push(output);
        output
    }

    /// Something that drives: a signal or an output, now and then an unbuffered net.
    fn driver(&mut self) -> Net {
        if !self.soft.is_empty() && self.dice.chance(3) {
            return self.soft[self.dice.below(self.soft.len())];
        }
        let at = self.dice.below(self.signals.len() + self.outputs.len());
        *self.signals.get(at).unwrap_or_else(|| &self.outputs[at - self.signals.len()])
    }

    fn stage(&mut self, kind: usize) {
        match kind {
            0 => self.follower(),
            1 | 2 => self.non_inverting(),
            3 | 4 => self.summing(),
            5 => self.summing_non_inverting(),
            6 => self.t_network(),
            7 => self.difference(),
            8 => self.instrumentation(),
            9 => self.transimpedance(),
            10 => self.composite(),
            11 => self.integrators(),
            12 => self.current_pump(),
            13 => self.divider(),
            _ => self.controlled(),
        }
    }

    fn follower(&mut self) {
        let mut plus = self.driver();
        if self.dice.chance(2) {
            plus = self.behind(plus);
        }
        let minus = self.sketch.net();
        let output = self.op_amp(plus, minus);
        self.resistor(output, minus);
    }

    fn non_inverting(&mut self) {
        let mut plus = self.driver();
        if self.dice.chance(2) {
            plus = self.behind(plus);
            if self.dice.chance(2) {
                self.resistor(plus, 0);
            }
        }
        let minus = self.sketch.net();
        self.resistor(minus, 0);
        let output = self.op_amp(plus, minus);
        self.resistor(output, minus);
    }

    /// Inverting where it has one input.
    fn summing(&mut self) {
        let minus = self.sketch.net();
        for _ in 0..1 + self.dice.below(3) {
            let mut from = self.driver();
            if self.dice.chance(6) {
                from = self.battery(from);
            }
            self.resistor(from, minus);
        }
        let plus = if self.dice.chance(2) { 0 } else { self.behind(0) };
        let output = self.op_amp(plus, minus);
        self.resistor(output, minus);
    }

    /// Fed by signals alone: an output that fed an unbuffered net might close a loop.
    fn summing_non_inverting(&mut self) {
        let plus = self.sketch.net();
        for at in 0..self.signals.len() {
            self.resistor(self.signals[at], plus);
        }
        if self.dice.chance(2) {
            self.soft.push(plus);
        }
        let minus = self.sketch.net();
        self.resistor(minus, 0);
        let output = self.op_amp(plus, minus);
        self.resistor(output, minus);
    }

    fn t_network(&mut self) {
        let from = self.driver();
        let minus = self.behind(from);
        let middle = self.behind(minus);
        self.resistor(middle, 0);
        let output = self.op_amp(0, minus);
        self.resistor(middle, output);
    }

    fn difference(&mut self) {
        let (above, below) = (self.driver(), self.driver());
        self.difference_of(above, below);
    }

    fn difference_of(&mut self, above: Net, below: Net) {
        let (plus, minus) = (self.behind(above), self.behind(below));
        self.resistor(plus, 0);
        let output = self.op_amp(plus, minus);
        self.resistor(output, minus);
    }

    fn instrumentation(&mut self) {
        let (first, second) = (self.driver(), self.driver());
        let left = self.sketch.net();
        let right = self.behind(left);
        let outputs = [self.op_amp(first, left), self.op_amp(second, right)];
        self.resistor(outputs[0], left);
        self.resistor(outputs[1], right);
        self.difference_of(outputs[0], outputs[1]);
    }

    fn transimpedance(&mut self) {
        let minus = self.sketch.net();
        self.sketch.elements.push(Element::Current(minus, 0));
        match self.dice.below(3) {
            0 => {}
            1 => drop(self.resistor(minus, 0)),
            _ => {
                let from = self.driver();
                self.resistor(from, minus);
            }
        }
        let output = self.op_amp(0, minus);
        self.resistor(output, minus);
    }

    /// A second op amp with a gain of its own inside the loop of the first.
    fn composite(&mut self) {
        let from = self.driver();
        let minus = self.behind(from);
        let inner_plus = self.op_amp(0, minus);
        let inner_minus = self.sketch.net();
        self.resistor(inner_minus, 0);
        let output = self.op_amp(inner_plus, inner_minus);
        self.resistor(output, inner_minus);
        self.resistor(output, minus);
    }

    /// Two integrators and an inverter in one loop: at DC each integrator has its open-loop gain.
    fn integrators(&mut self) {
        let from = self.driver();
        let first = self.behind(from);
        let mut minus = first;
        for at in 0..3 {
            let output = self.op_amp(0, minus);
            if at < 2 {
                self.sketch.elements.push(Element::Capacitor(output, minus));
                minus = self.behind(output);
            } else {
                self.resistor(output, minus);
                self.resistor(output, first);
            }
        }
    }

    /// Positive feedback that stays below the negative: a current pump into a load.
    fn current_pump(&mut self) {
        let from = self.driver();
        let (minus, plus) = (self.sketch.net(), self.sketch.net());
        let to_ground = self.resistor(minus, 0);
        let output = self.op_amp(plus, minus);
        let Some(Element::OpAmp(.., model)) = self.sketch.elements.last().copied() else { return };
        let feedback = self.resistor(output, minus);
        let input = self.resistor(from, plus);
        let load = self.resistor(plus, 0);
        let beside = |ohms: f64| 1.0 / (1.0 / ohms + 1.0 / model.common);
        let even = feedback / beside(to_ground) / (1.0 / input + 1.0 / load + 1.0 / model.common);
        let back = even * self.dice.between(1.2, 20.0);
        self.sketch.elements.push(Element::Resistor(output, plus, back));
    }

    /// An unbuffered divider that later stages share.
    fn divider(&mut self) {
        let from = self.driver();
        let middle = if self.dice.chance(4) { self.battery(from) } else { self.behind(from) };
        self.resistor(middle, 0);
        self.soft.push(middle);
        for _ in 0..self.dice.below(3) {
            let minus = self.sketch.net();
            let output = self.op_amp(middle, minus);
            self.resistor(output, minus);
            if self.dice.chance(2) {
                self.resistor(minus, 0);
            }
        }
    }

    fn controlled(&mut self) {
        let (plus, minus) = (self.driver(), if self.dice.chance(2) { 0 } else { self.driver() });
        if plus == minus {
            return;
        }
        let output = self.sketch.net();
        let gain = self.dice.between(0.1, 10.0) * if self.dice.chance(3) { -1.0 } else { 1.0 };
        self.sketch.elements.push(Element::Gain(output, plus, minus, gain));
        self.outputs.push(output);
    }

    /// Loads to ground, to signals, and between outputs.
    fn loads(&mut self) {
        for at in 0..self.outputs.len() {
            if self.dice.chance(3) {
                self.resistor(self.outputs[at], 0);
            }
            let other = self.outputs[self.dice.below(self.outputs.len())];
            if self.dice.chance(3) && other != self.outputs[at] {
                let from =
                    if self.dice.chance(4) { self.battery(self.outputs[at]) } else { self.outputs[at] };
                self.resistor(from, other);
            }
            if self.dice.chance(8) {
                self.sketch.elements.push(Element::Current(self.outputs[at], 0));
            }
            if self.dice.chance(8) {
                let signal = self.signals[self.dice.below(self.signals.len())];
                self.resistor(self.outputs[at], signal);
            }
        }
    }
}
