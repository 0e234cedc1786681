//! Feedback loading: how much of the rated output current the feedback network takes.

use crate::figure::{Bad, Doc};
use crate::quantity::Unit;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "feedback-loading",
    title: "feedback loading",
    unit: Unit::One,
    bad: Bad::High,
    physics: "The feedback network is a load like any other. What it takes is missing for the real load, heats the output stage, and lowers swing and open-loop gain.",
    formula: "Peak current from the output into the network that reaches the inputs, over the ranges of all signals, as a share of the rated output current: the current at which the swing is guaranteed; else the guaranteed swing over the rated load; else half the least short-circuit current.",
    source: "Common practice; rated current from the device's datasheet.",
    worse: "Feedback resistors far below the rated load, large swings, low-power op amps.",
    cure: "raise the resistances of the feedback network, all by the same factor",
};
