//! Output current: what feedback and load together draw, as a share of the rated output current.

use crate::figure::{Bad, Doc};
use crate::quantity::Unit;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "output-current",
    title: "output current",
    unit: Unit::One,
    bad: Bad::High,
    physics: "An output gives its swing and its open-loop gain only up to its rated current. Beyond it the swing shrinks and the error grows long before the short-circuit limit is met.",
    formula: "Peak current that leaves the output, into the feedback network, the loads and the stages that follow, with its sign, over the ranges of all signals, as a share of the rated output current: the current at which the swing is guaranteed; else the guaranteed swing over the rated load; else half the least short-circuit current.",
    source: "Common practice; rated current from the device's datasheet. A short-circuit current is no rating.",
    worse: "Heavy loads, large swings, feedback networks that load the output as well.",
    cure: "lighten the load, lower the swing, or take an op amp or buffer with more output current",
};
