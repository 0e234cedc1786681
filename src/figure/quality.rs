//! What of an op amp a line of a ledger is about, and how its coordinate reads as a datasheet's value.

use crate::device::Key;
use crate::quantity::Unit;

/// A quality of an op amp.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Quality {
    /// Open-loop gain at DC; its coordinate is 1/A.
    OpenLoopGain,
    /// Differential input resistance; its coordinate is 1/Rid.
    InputResistance,
    /// Resistance of each input to ground; its coordinate is 1/Rcm.
    CommonModeResistance,
    /// Open-loop output resistance.
    OutputResistance,
    /// Mean of both input currents.
    BiasCurrent,
    /// Current of the non-inverting input, where no offset current is known.
    BiasPlus,
    /// Current of the inverting input.
    BiasMinus,
    /// Difference of both input currents.
    OffsetCurrent,
    /// Offset voltage.
    OffsetVoltage,
    /// Its drift.
    OffsetDrift,
    /// Common-mode rejection; its coordinate is 1/CMRR.
    CommonModeRejection,
    /// Supply rejection; its coordinate is 1/PSRR.
    SupplyRejection,
    /// How near the output comes to the positive rail.
    SwingBelowPositive,
    /// How near the output comes to the negative rail.
    SwingAboveNegative,
    /// How near the inputs may come to the positive rail.
    InputBelowPositive,
    /// How near the inputs may come to the negative rail.
    InputAboveNegative,
    /// Rated output current.
    RatedCurrent,
}

impl Quality {
    /// Its name in ledgers.
    pub fn label(self) -> &'static str {
        match self {
            Quality::OpenLoopGain => "open-loop gain",
            Quality::InputResistance => "input resistance",
            Quality::CommonModeResistance => "common-mode resistance",
            Quality::OutputResistance => "output resistance",
            Quality::BiasCurrent => "bias current",
            Quality::BiasPlus => "bias current of in+",
            Quality::BiasMinus => "bias current of in-",
            Quality::OffsetCurrent => "offset current",
            Quality::OffsetVoltage => "offset voltage",
            Quality::OffsetDrift => "offset drift",
            Quality::CommonModeRejection => "common-mode rejection",
            Quality::SupplyRejection => "supply rejection",
            Quality::SwingBelowPositive => "swing below V+",
            Quality::SwingAboveNegative => "swing above V-",
            Quality::InputBelowPositive => "input range below V+",
            Quality::InputAboveNegative => "input range above V-",
            Quality::RatedCurrent => "rated output current",
        }
    }

    /// The parameter of a profile behind it.
    pub fn key(self) -> Key {
        match self {
            Quality::OpenLoopGain => Key::OpenLoopGain,
            Quality::InputResistance => Key::InputResistance,
            Quality::CommonModeResistance => Key::CommonModeResistance,
            Quality::OutputResistance => Key::OutputResistance,
            Quality::BiasCurrent | Quality::BiasPlus | Quality::BiasMinus => Key::BiasCurrent,
            Quality::OffsetCurrent => Key::OffsetCurrent,
            Quality::OffsetVoltage => Key::OffsetVoltage,
            Quality::OffsetDrift => Key::OffsetDrift,
            Quality::CommonModeRejection => Key::CommonModeRejection,
            Quality::SupplyRejection => Key::SupplyRejection,
            Quality::SwingBelowPositive => Key::SwingBelowPositive,
            Quality::SwingAboveNegative => Key::SwingAboveNegative,
            Quality::InputBelowPositive => Key::InputBelowPositive,
            Quality::InputAboveNegative => Key::InputAboveNegative,
            Quality::RatedCurrent => Key::OutputCurrent,
        }
    }

    /// The quality that keeps a pin away from a rail.
    pub(super) fn distance(key: Key) -> Quality {
        match key {
            Key::SwingBelowPositive => Quality::SwingBelowPositive,
            Key::SwingAboveNegative => Quality::SwingAboveNegative,
            Key::InputBelowPositive => Quality::InputBelowPositive,
            _ => Quality::InputAboveNegative,
        }
    }

    /// The unit that its values are read in.
    pub fn unit(self) -> Unit {
        self.key().unit()
    }

    /// A coordinate of the ledger as a datasheet states it.
    pub(super) fn natural(self, coordinate: f64) -> f64 {
        match self {
            Quality::OpenLoopGain | Quality::InputResistance | Quality::CommonModeResistance => {
                1.0 / coordinate
            }
            Quality::CommonModeRejection | Quality::SupplyRejection => -20.0 * coordinate.abs().log10(),
            // Currents and offsets are magnitudes; which way they act is the corner's matter.
            Quality::BiasCurrent
            | Quality::BiasPlus
            | Quality::BiasMinus
            | Quality::OffsetCurrent
            | Quality::OffsetVoltage
            | Quality::OffsetDrift => coordinate.abs(),
            _ => coordinate,
        }
    }
}
