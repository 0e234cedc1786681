//! Figures: what is computed of each stage. One file a figure, with its doc, formula, source and ledger.

mod bias_error;
mod doc;
mod errors;
mod feedback_loading;
mod gain_error;
mod gain_spread;
mod headroom;
mod input_headroom;
mod linear;
mod loop_gain;
mod offset_error;
mod output_headroom;
mod range;
mod stage;
mod study;

pub use doc::{Doc, Kind};
pub use range::{Extreme, PinVoltages};
pub use stage::{Input, Main, Requirement, Review, Stage, Transfer};

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

/// One line of a ledger.
#[derive(Debug, Clone, PartialEq)]
pub struct Line {
    /// What the line is about.
    pub item: String,
    /// Its signed effect, in the figure's unit.
    pub effect: f64,
    /// How far its data can be trusted.
    pub rank: Rank,
    /// The element that it points at.
    pub element: Option<ElementId>,
    /// Whether it is the base that the other lines start from.
    pub base: bool,
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
            ledger: Vec::new(),
        }
    }

    /// Share of each line's magnitude in the sum of all; the base has none.
    pub fn shares(&self) -> Vec<Option<f64>> {
        let total: f64 = self.ledger.iter().filter(|line| !line.base).map(|line| line.effect.abs()).sum();
        let share = |line: &Line| (!line.base && 0.0 < total).then(|| line.effect.abs() / total);
        self.ledger.iter().map(share).collect()
    }
}
