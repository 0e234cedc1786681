//! The list of figures; what each one is stands beside its code.

use crate::figure::{
    Bad, bias_error, common_error, feedback_loading, feedback_resistance, gain_error, gain_spread,
    input_headroom, input_resistance, loop_gain, offset_error, output_current, output_headroom,
    output_resistance, rejection, resistor_power, source_loading,
};
use crate::quantity::Unit;

/// What a figure is, in the words that every report and `explain` use.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Doc {
    /// Its name in files.
    pub slug: &'static str,
    /// Its name in sentences.
    pub title: &'static str,
    /// Its unit.
    pub unit: Unit,
    /// Which way it turns bad.
    pub bad: Bad,
    /// What happens in the circuit.
    pub physics: &'static str,
    /// How it is computed.
    pub formula: &'static str,
    /// Where the formula comes from.
    pub source: &'static str,
    /// What makes it worse.
    pub worse: &'static str,
    /// Which quantity must change and which way.
    pub cure: &'static str,
}

/// A figure.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Kind {
    /// See `DOC` in `figure/gain_error.rs`.
    GainError,
    /// See `DOC` in `figure/loop_gain.rs`.
    LoopGain,
    /// See `DOC` in `figure/feedback_resistance.rs`.
    FeedbackResistance,
    /// See `DOC` in `figure/feedback_loading.rs`.
    FeedbackLoading,
    /// See `DOC` in `figure/output_current.rs`.
    OutputCurrent,
    /// See `DOC` in `figure/bias_error.rs`.
    BiasError,
    /// See `DOC` in `figure/offset_error.rs`.
    OffsetError,
    /// See `DOC` in `figure/output_headroom.rs`.
    OutputHeadroom,
    /// See `DOC` in `figure/input_headroom.rs`.
    InputHeadroom,
    /// See `DOC` in `figure/input_resistance.rs`.
    InputResistance,
    /// See `DOC` in `figure/source_loading.rs`.
    SourceLoading,
    /// See `DOC` in `figure/output_resistance.rs`.
    OutputResistance,
    /// See `DOC` in `figure/gain_spread.rs`.
    GainSpread,
    /// See `DOC` in `figure/rejection.rs`.
    Rejection,
    /// See `DOC` in `figure/common_error.rs`.
    CommonError,
    /// See `DOC` in `figure/resistor_power.rs`.
    ResistorPower,
}

impl Kind {
    /// Every figure, in the order of reports.
    pub const ALL: &'static [Kind] = &[
        Kind::GainError,
        Kind::LoopGain,
        Kind::FeedbackResistance,
        Kind::FeedbackLoading,
        Kind::OutputCurrent,
        Kind::BiasError,
        Kind::OffsetError,
        Kind::OutputHeadroom,
        Kind::InputHeadroom,
        Kind::InputResistance,
        Kind::SourceLoading,
        Kind::OutputResistance,
        Kind::GainSpread,
        Kind::Rejection,
        Kind::CommonError,
        Kind::ResistorPower,
    ];

    /// What it is.
    pub fn doc(self) -> &'static Doc {
        match self {
            Kind::GainError => &gain_error::DOC,
            Kind::LoopGain => &loop_gain::DOC,
            Kind::FeedbackResistance => &feedback_resistance::DOC,
            Kind::FeedbackLoading => &feedback_loading::DOC,
            Kind::OutputCurrent => &output_current::DOC,
            Kind::BiasError => &bias_error::DOC,
            Kind::OffsetError => &offset_error::DOC,
            Kind::OutputHeadroom => &output_headroom::DOC,
            Kind::InputHeadroom => &input_headroom::DOC,
            Kind::InputResistance => &input_resistance::DOC,
            Kind::SourceLoading => &source_loading::DOC,
            Kind::OutputResistance => &output_resistance::DOC,
            Kind::GainSpread => &gain_spread::DOC,
            Kind::Rejection => &rejection::DOC,
            Kind::CommonError => &common_error::DOC,
            Kind::ResistorPower => &resistor_power::DOC,
        }
    }

    /// The figure of a slug.
    pub fn by_slug(slug: &str) -> Option<Kind> {
        Kind::ALL.iter().copied().find(|kind| kind.doc().slug == slug)
    }
}
