//! Reach: what a stage can do where nothing is declared.
//!
//! *Linear input range*: the values of the main port, other ports at rest, for which the output stays inside its
//! guaranteed swing and both input pins inside their common-mode range. Every voltage and the output current are
//! straight lines in the value of the main port, `v = v0 + s (x - x0)`, so each limit gives one end of an interval
//! and the range is what all intervals have in common. The swing is that at the output current which flows there.
//!
//! *Least load*: the resistance to ground that with the feedback network takes just the rated output current where
//! the output stands at the end of its swing, `|V| / (Irated - Ifeedback)`, the larger of both ends.
//!
//! Transfers and rails are nominal, limits of the device the guaranteed ones; offsets, bias currents and tolerances
//! are left out. Source: straight lines through two solutions (nodal analysis); common practice in datasheets, which
//! state swing, common-mode range and load in this way.

use crate::device::{Key, Rank};
use crate::figure::linear::{Linear, Reading, axes};
use crate::figure::rated::rated;
use crate::figure::stage::{Main, Stage};
use crate::figure::study::Quantity;
use crate::solve::{Excitation, Node, Solved};

/// What a stage can do.
#[derive(Debug, Clone, PartialEq)]
pub struct Reach {
    /// Range of the main port, volt or ampere, or why it can't be told.
    pub input: Result<InputRange, String>,
    /// Least load to ground in ohm, or why it can't be told.
    pub load: Result<f64, String>,
    /// How far the figures of the device and its supplies can be trusted that both rest on.
    pub rank: Rank,
}

/// A linear input range; an end without a limit is infinite.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InputRange {
    /// Lower end.
    pub low: f64,
    /// What ends it below.
    pub low_by: Edge,
    /// Upper end.
    pub high: f64,
    /// What ends it above.
    pub high_by: Edge,
}

/// What ends a range.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Edge {
    /// The output at the end of its swing.
    Swing,
    /// An input pin at the end of the common-mode range.
    CommonMode,
    /// Nothing.
    Nothing,
}

/// Slopes below this are none, volt for a volt or an ampere.
const FLAT: f64 = 1e-12;

/// A quantity as a straight line in the value of the main port, counted from its rest.
#[derive(Debug, Clone, Copy)]
struct Straight {
    rest: f64,
    slope: f64,
}

impl Reach {
    /// Nothing can be told, for a reason.
    pub fn unknown(reason: impl Into<String>) -> Reach {
        let reason = reason.into();
        Reach { input: Err(reason.clone()), load: Err(reason), rank: Rank::Guaranteed }
    }
}

impl Straight {
    fn at(self, step: f64) -> f64 {
        self.rest + self.slope * step
    }

    /// The step at which it reaches a value; `None` where it doesn't move.
    fn step_to(self, value: f64) -> Option<f64> {
        (FLAT < self.slope.abs()).then(|| (value - self.rest) / self.slope)
    }
}

/// Everything that is needed of the block's solutions.
struct Lines {
    main: f64,
    plus: Straight,
    minus: Straight,
    out: Straight,
    leaving: Straight,
    feedback: Straight,
}

/// A device's limits as they are looked up, with the worst rank of those that were.
struct Limits<'s, 'b> {
    stage: &'s Stage<'b>,
    positive: f64,
    negative: f64,
    rank: Rank,
}

impl Limits<'_, '_> {
    /// The guaranteed distance that a key gives at an output current.
    fn kept(&mut self, key: Key, current: f64) -> Result<f64, String> {
        let found = self.stage.spread(key, current).ok_or_else(|| self.stage.missing(key))?;
        self.rank = self.rank.max(found.rank);
        Ok(found.high)
    }

    fn top(&mut self, current: f64) -> Result<f64, String> {
        Ok(self.positive - self.kept(Key::SwingBelowPositive, current)?)
    }

    fn bottom(&mut self, current: f64) -> Result<f64, String> {
        Ok(self.negative + self.kept(Key::SwingAboveNegative, current)?)
    }
}

/// The reach of a stage whose block has a solution; `main` is the port that figures refer to.
pub(super) fn compute(stage: &Stage, main: Option<Main>, rest: &Excitation<f64>) -> Reach {
    let Some(main) = main else { return Reach::unknown("no signal port") };
    let Some(supply) = stage.device().supply else {
        return Reach::unknown(format!("the supplies of {} are not known", stage.part().name));
    };
    let Some(lines) = lines(stage, main, rest) else {
        return Reach::unknown("its equations have no solution");
    };
    let mut limits =
        Limits { stage, positive: supply.positive, negative: supply.negative, rank: supply.rank };
    let input = input(&mut limits, &lines);
    let load = load(&mut limits, &lines);
    Reach { input, load, rank: limits.rank }
}

fn lines(stage: &Stage, main: Main, rest: &Excitation<f64>) -> Option<Lines> {
    let model = stage.model();
    let solved = Solved::new(&model.network, model.nominal.clone()).ok()?;
    let unit = stage.unit(main);
    let (still, moved) = (solved.forward(rest), solved.forward(&unit));
    let volts = |node: Node| Straight { rest: still.volts(node), slope: moved.volts(node) };
    let leaving = |state| solved.leaving(state)[stage.member];
    let (plus, minus) = stage.inputs();
    Some(Lines {
        main: at_rest(main, rest),
        plus: volts(plus),
        minus: volts(minus),
        out: volts(stage.output()),
        leaving: Straight { rest: leaving(&still), slope: leaving(&moved) },
        feedback: Straight { rest: feedback(stage, rest)?, slope: feedback(stage, &unit)? },
    })
}

/// The value of the main port at rest.
fn at_rest(main: Main, rest: &Excitation<f64>) -> f64 {
    let port = |at: usize| rest.ports.get(at).copied().unwrap_or(0.0);
    match main {
        Main::Port(at) => port(at),
        Main::Pair(_, positive, negative) => port(positive) - port(negative),
        // Each current stands there twice: into one net, out of another.
        Main::Current(at) => rest.injections.get(2 * at).map_or(0.0, |(_, amps)| *amps),
    }
}

/// The current that leaves the output into its feedback network.
fn feedback(stage: &Stage, excitation: &Excitation<f64>) -> Option<f64> {
    let model = stage.model();
    let linear = Linear {
        model,
        twin: false,
        reading: Reading::Current { from: stage.output(), branches: model.feedback_branches, whole: false },
        constant: 0.0,
        sign: 1.0,
        excitation: excitation.clone(),
        extras: Vec::new(),
    };
    let point: Vec<f64> = axes(model, false).iter().map(|axis| axis.nominal).collect();
    linear.at(&point, &mut vec![0.0; point.len()])
}

/// What all limits have in common.
fn input(limits: &mut Limits, lines: &Lines) -> Result<InputRange, String> {
    let mut steps = InputRange {
        low: f64::NEG_INFINITY,
        low_by: Edge::Nothing,
        high: f64::INFINITY,
        high_by: Edge::Nothing,
    };
    let (bottom, top) = swing(limits, lines)?;
    narrow(&mut steps, lines.out, (bottom, top), Edge::Swing)?;
    let low = limits.negative + limits.kept(Key::InputAboveNegative, 0.0)?;
    let high = limits.positive - limits.kept(Key::InputBelowPositive, 0.0)?;
    for pin in [lines.plus, lines.minus] {
        narrow(&mut steps, pin, (low, high), Edge::CommonMode)?;
    }
    if steps.low <= steps.high {
        Ok(InputRange { low: lines.main + steps.low, high: lines.main + steps.high, ..steps })
    } else {
        Err("no input keeps output and inputs inside their ranges".to_owned())
    }
}

/// The swing at the currents that flow where the lightest load's swing would end: at the end itself less flows.
fn swing(limits: &mut Limits, lines: &Lines) -> Result<(f64, f64), String> {
    let current = |end: f64| lines.out.step_to(end).map_or(lines.leaving.rest, |step| lines.leaving.at(step));
    let (bottom, top) = (limits.bottom(0.0)?, limits.top(0.0)?);
    Ok((limits.bottom(-current(bottom))?, limits.top(current(top))?))
}

/// Cuts a range of steps to those that keep a quantity inside an interval.
fn narrow(steps: &mut InputRange, line: Straight, (low, high): (f64, f64), edge: Edge) -> Result<(), String> {
    let (Some(to_low), Some(to_high)) = (line.step_to(low), line.step_to(high)) else {
        let inside = low <= line.rest && line.rest <= high;
        let pin = if edge == Edge::Swing { "its output rests" } else { "an input rests" };
        return if inside { Ok(()) } else { Err(format!("{pin} outside its guaranteed range")) };
    };
    let (least, most) = if to_low <= to_high { (to_low, to_high) } else { (to_high, to_low) };
    let empty = high < low;
    if empty {
        return Err("the supplies leave no guaranteed range".to_owned());
    }
    if steps.low < least {
        (steps.low, steps.low_by) = (least, edge);
    }
    if most < steps.high {
        (steps.high, steps.high_by) = (most, edge);
    }
    Ok(())
}

/// The least resistance to ground.
fn load(limits: &mut Limits, lines: &Lines) -> Result<f64, String> {
    let stage = limits.stage;
    let rated = rated(stage)
        .ok_or_else(|| format!("the profile of {} gives no output current", stage.part().name))?;
    limits.rank = limits.rank.max(rated.rank);
    let (mut bottom, mut top) = (limits.bottom(0.0)?, limits.top(0.0)?);
    // A load to ground draws current out of the pin above ground and into it below.
    if bottom < 0.0 {
        bottom = limits.bottom(rated.low)?;
    }
    if 0.0 < top {
        top = limits.top(rated.low)?;
    }
    let mut least = 0.0f64;
    for end in [bottom, top] {
        let step = lines.out.step_to(end).ok_or("no signal moves its output")?;
        let taken = (lines.feedback.at(step) * end.signum()).max(0.0);
        let left = rated.low - taken;
        if left <= 0.0 {
            return Err("its feedback network alone takes the rated current".to_owned());
        }
        least = least.max(end.abs() / left);
    }
    Ok(least)
}
