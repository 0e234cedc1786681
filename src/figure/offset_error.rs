//! Offset error: what offset voltages, their drift, common mode and rails make at the output.

use crate::figure::range::Drive;
use crate::figure::stage::Stage;
use crate::figure::{Bad, Doc, Figure, Kind};
use crate::quantity::Unit;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "offset-error",
    title: "output error from offsets",
    unit: Unit::Volt,
    bad: Bad::High,
    physics: "An op amp's inputs are never equal at rest. The difference drifts with temperature and moves with the common mode and with the rails; all of it is multiplied by the noise gain, which may be far above the signal gain.",
    formula: "Noise gain times the sum of |Vos|, drift times the distance from 25 degC to the farther end of the ambient range, |resting common mode - middle of the supplies| / CMRR, and the deviation of the rails / PSRR; a ledger line each, over every op amp of the block.",
    source: "S. Franco, Design with Operational Amplifiers and Analog Integrated Circuits, 3rd ed., McGraw-Hill 2002, chapter 5 (input error voltage as a sum of these terms).",
    worse: "A high noise gain (T networks, many summing inputs), a wide temperature range, a common mode far from mid-supply.",
    cure: "lower the noise gain, or take an op amp with less offset and drift",
};

pub(super) fn compute(stage: &Stage, drive: &Drive) -> Figure {
    match stage.offsets(&drive.rest) {
        Ok(extras) => stage.magnitude(Kind::OffsetError, extras),
        Err(reason) => Figure::unknown(Kind::OffsetError, reason),
    }
}
