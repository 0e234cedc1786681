//! Figures: what is computed of each stage. One file a figure, with its doc, formula, source and ledger.

mod adjust;
mod bias_error;
mod common_error;
mod deviation;
mod disturbance;
mod doc;
mod feedback_loading;
mod feedback_resistance;
mod gain_error;
mod gain_spread;
mod headroom;
mod input_headroom;
mod input_resistance;
mod ledger;
mod legs;
mod linear;
mod local;
mod loop_gain;
mod offset_error;
mod origin;
mod output_current;
mod output_headroom;
mod output_resistance;
mod quality;
mod range;
mod rated;
mod ratio;
mod reach;
mod rejection;
mod resistor_power;
mod source_loading;
mod stage;
mod study;
mod trials;
mod worked;

pub use deviation::deviations;
pub use doc::{Doc, Kind};
pub use ledger::{Item, Line};
pub use quality::Quality;
pub use range::{Extreme, PinVoltages};
pub use reach::{Edge, InputRange, Reach};
pub use stage::{Input, LegsFrom, Main, Requirement, Review, Stage, Transfer, explain};
pub use trials::Percentiles;

use crate::circuit::ElementId;
use crate::device::Rank;

/// Which way a figure turns bad.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Bad {
    /// Either way: the magnitude counts.
    Either,
    /// When it falls.
    Low,
    /// When it rises.
    High,
}

/// One figure of one stage.
#[derive(Debug, Clone, PartialEq)]
pub struct Figure {
    /// Which figure.
    pub kind: Kind,
    /// Nominal value; `None` where there is none, with the reason.
    pub nominal: Option<f64>,
    /// Worst case.
    pub worst: Option<f64>,
    /// Root sum of squares of the ledger, in the figure's own sense.
    pub rss: Option<f64>,
    /// Why a value is missing.
    pub reason: Option<String>,
    /// Sign of the return ratio at DC, for the loop gain.
    pub sign: Option<f64>,
    /// Whether it was computed for the guaranteed swing because no range is declared.
    pub bound: bool,
    /// How far that can be trusted which is no line of the ledger: rails, ranges.
    pub rests_on: Rank,
    /// Whether there is nothing to compute or judge, which the reason tells.
    pub absent: bool,
    /// A resistor without rating and what it dissipates, watt, where that needs a word.
    pub needed: Option<(ElementId, f64)>,
    /// Whether only the ground end of a single supply is the least distance.
    pub zero: bool,
    /// Random trials, where they were asked for.
    pub trials: Option<Percentiles>,
    /// What makes it up.
    pub ledger: Vec<Line>,
}

impl Figure {
    /// A figure that can't be computed.
    pub fn unknown(kind: Kind, reason: impl Into<String>) -> Figure {
        Figure {
            kind,
            nominal: None,
            worst: None,
            rss: None,
            reason: Some(reason.into()),
            sign: None,
            bound: false,
            rests_on: Rank::Guaranteed,
            absent: false,
            needed: None,
            zero: false,
            trials: None,
            ledger: Vec::new(),
        }
    }

    /// A figure that this stage doesn't have.
    pub fn absent(kind: Kind, reason: impl Into<String>) -> Figure {
        Figure { absent: true, ..Figure::unknown(kind, reason) }
    }

    /// Share of each line's magnitude in the sum of all; the base has none.
    pub fn shares(&self) -> Vec<Option<f64>> {
        let total: f64 =
            self.ledger.iter().filter(|line| line.item != Item::Nominal).map(|line| line.effect.abs()).sum();
        let share =
            |line: &Line| (line.item != Item::Nominal && 0.0 < total).then(|| line.effect.abs() / total);
        self.ledger.iter().map(share).collect()
    }
}
