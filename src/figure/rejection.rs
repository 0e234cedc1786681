//! Rejection: how well a stage ignores what both of its legs have in common.

use crate::figure::legs::{CommonMode, Legs};
use crate::figure::stage::Stage;
use crate::figure::study::study;
use crate::figure::{Bad, Doc, Figure, Item, Kind};
use crate::quantity::Unit;

/// What the figure is.
pub const DOC: Doc = Doc {
    slug: "rejection",
    title: "common-mode rejection",
    unit: Unit::Decibel,
    bad: Bad::Low,
    physics: "A difference stage rejects what is common to its inputs only as well as its resistor ratios match. With 1 % parts and a gain of one that is 34 dB in the worst case, whatever the op amp.",
    formula: "20 log10 |(Hp - Hn) / (2 (Hp + Hn))| with Hp and Hn the transfers from the two legs; the op amp's own rejection is left out. The ledger lists effects on the ratio 2 (Hp + Hn) / (Hp - Hn), which decibels don't add up to.",
    source: "S. Franco, Design with Operational Amplifiers and Analog Integrated Circuits, 3rd ed., McGraw-Hill 2002, equations 2.24 to 2.26 (worst case (1 + G) / 4t).",
    worse: "Wide tolerances, unequal source resistances, a reference that is not stiff, little first-stage gain.",
    cure: "match the ratios better (tighter parts or one network), or take the gain before the difference stage",
};

/// Ratios below this are rounding: the rejection is unlimited.
const NONE: f64 = 1e-13;

pub(super) fn compute(stage: &Stage, legs: Option<Legs>) -> Figure {
    let kind = Kind::Rejection;
    let Some(legs) = legs else { return Figure::absent(kind, "no pair of legs") };
    let quantity = CommonMode { stage: *stage, legs, scale: 1.0, relative: true };
    let axes = quantity.axes();
    let Some(found) = study(&quantity, &axes, Bad::Either) else {
        return Figure::unknown(kind, "its equations have no solution at the worst corner");
    };
    let ratio = stage.figure_of(kind, &quantity, &axes, &found, &[], true);
    let decibel = |ratio: f64| (NONE < ratio.abs()).then(|| -20.0 * ratio.abs().log10());
    let mut ledger = ratio.ledger;
    // What the nominal values have of it is the base of the ratio, not an effect of a tolerance.
    if let Some(first) = ledger.iter_mut().find(|line| line.item == Item::Values) {
        first.item = Item::Nominal;
    }
    Figure {
        nominal: decibel(found.nominal),
        worst: decibel(found.worst),
        rss: ratio.rss.and_then(decibel),
        reason: decibel(found.nominal).is_none().then(|| "the nominal rejection is unlimited".to_owned()),
        ledger,
        ..Figure::absent(kind, "")
    }
}
