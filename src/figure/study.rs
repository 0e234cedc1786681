//! Nominal, worst case, RSS and ledger of any quantity, from its values and gradients alone.

use crate::device::Rank;
use crate::figure::Bad;

/// Something that depends on the values of a stage.
pub(super) trait Quantity {
    /// The quantity at a point; writes its gradient. `None` where the equations have no solution there.
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64>;
}

/// One value that a quantity depends on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Axis {
    /// Value at the ledger's base.
    pub base: f64,
    /// Nominal value.
    pub nominal: f64,
    /// What it usually is: nominal, or the typical magnitude of a value of either sign.
    pub typical: f64,
    /// Least value.
    pub low: f64,
    /// Greatest value.
    pub high: f64,
    /// How far its range can be trusted.
    pub rank: Rank,
}

/// What a study finds.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Study {
    /// Value at the nominal point.
    pub nominal: f64,
    /// Value at the base point.
    pub base: f64,
    /// Value at the worst corner.
    pub worst: f64,
    /// Effect of each axis from base to worst corner.
    pub effects: Vec<f64>,
    /// The worst corner.
    pub corner: Vec<f64>,
}

/// Nodes and weights of the five-point Gauss-Legendre rule on 0..1
/// (Abramowitz and Stegun, Handbook of Mathematical Functions, table 25.4).
const GAUSS: [(f64, f64); 5] = [
    (0.046_910_077_030_668_0, 0.118_463_442_528_094_5),
    (0.230_765_344_947_158_45, 0.239_314_335_249_683_23),
    (0.5, 0.284_444_444_444_444_44),
    (0.769_234_655_052_841_6, 0.239_314_335_249_683_23),
    (0.953_089_922_969_332, 0.118_463_442_528_094_5),
];

/// Corners are read again this often where a sign turns at the corner found.
const REREADS: usize = 4;

/// Studies a quantity: corners by the signs of its sensitivities, both ways where either way may be
/// the bad one, and the ledger from the base to the worse corner.
pub(super) fn study(quantity: &dyn Quantity, axes: &[Axis], bad: Bad) -> Option<Study> {
    let mut gradient = vec![0.0; axes.len()];
    let start: Vec<f64> = axes.iter().map(|axis| axis.nominal).collect();
    let nominal = quantity.at(&start, &mut gradient)?;
    let up = |gradient: &[f64]| corner(quantity, axes, gradient, 1.0);
    let down = |gradient: &[f64]| corner(quantity, axes, gradient, -1.0);
    let found = match bad {
        Bad::High => up(&gradient)?,
        Bad::Low => down(&gradient)?,
        Bad::Either => {
            let (low, high) = (down(&gradient)?, up(&gradient)?);
            if low.0.abs() > high.0.abs() { low } else { high }
        }
    };
    // A corner without a number must not leave the nominal standing for it.
    if !(nominal.is_finite() && found.0.is_finite()) {
        return None;
    }
    let worse = match bad {
        Bad::High => found.0 >= nominal,
        Bad::Low => found.0 <= nominal,
        Bad::Either => found.0.abs() >= nominal.abs(),
    };
    let (worst, corner) = if worse { found } else { (nominal, start) };
    let base_point: Vec<f64> = axes.iter().map(|axis| axis.base).collect();
    let from_nominal = axes.iter().all(|axis| axis.base == axis.nominal);
    let base = if from_nominal { nominal } else { quantity.at(&base_point, &mut gradient)? };
    let effects = along(quantity, &base_point, &corner)?;
    Some(Study { nominal, base, worst, effects, corner })
}

/// The corner that the signs of a gradient give in one direction, read again where signs turn there.
fn corner(
    quantity: &dyn Quantity,
    axes: &[Axis],
    gradient: &[f64],
    direction: f64,
) -> Option<(f64, Vec<f64>)> {
    let mut gradient = gradient.to_vec();
    let mut best = toward(axes, &gradient, direction);
    let mut reached = quantity.at(&best, &mut gradient)?;
    for _ in 1..REREADS {
        let point = toward(axes, &gradient, direction);
        if point == best {
            break;
        }
        let value = quantity.at(&point, &mut gradient)?;
        if reached * direction <= value * direction {
            (reached, best) = (value, point);
            continue;
        }
        // All turned signs together were no gain; one of them alone may be.
        let before = reached;
        for at in 0..axes.len() {
            let kept = std::mem::replace(&mut best[at], point[at]);
            if kept == point[at] {
                continue;
            }
            let value = quantity.at(&best, &mut gradient)?;
            if reached * direction < value * direction {
                reached = value;
            } else {
                best[at] = kept;
            }
        }
        if reached == before {
            break;
        }
        quantity.at(&best, &mut gradient)?;
    }
    Some((reached, best))
}

/// The corner that the signs of a gradient give in one direction.
fn toward(axes: &[Axis], gradient: &[f64], direction: f64) -> Vec<f64> {
    let end = |(axis, slope): (&Axis, &f64)| {
        let slope = slope * direction;
        if slope > 0.0 {
            axis.high
        } else if slope < 0.0 {
            axis.low
        } else {
            axis.nominal
        }
    };
    axes.iter().zip(gradient).map(end).collect()
}

/// Effect of every axis along the straight line between two points.
fn along(quantity: &dyn Quantity, from: &[f64], to: &[f64]) -> Option<Vec<f64>> {
    let mut effects = vec![0.0; from.len()];
    let mut gradient = vec![0.0; from.len()];
    for (node, weight) in GAUSS {
        let point: Vec<f64> = from.iter().zip(to).map(|(a, b)| a + node * (b - a)).collect();
        quantity.at(&point, &mut gradient)?;
        for (at, effect) in effects.iter_mut().enumerate() {
            *effect += weight * gradient[at] * (to[at] - from[at]);
        }
    }
    Some(effects)
}

#[cfg(test)]
mod tests {
    use super::{Axis, Quantity, study};
    use crate::device::Rank;
    use crate::figure::Bad;

    struct Root;

    impl Quantity for Root {
        fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
            gradient[0] = 1.0;
            Some(point[0].sqrt())
        }
    }

    /// A corner that has no number makes the figure unknown; the nominal never stands for it.
    #[test]
    fn a_corner_without_a_number_is_no_worst_case() {
        let axis =
            |low| Axis { base: 1.0, nominal: 1.0, typical: 1.0, low, high: 2.0, rank: Rank::Guaranteed };
        assert_eq!(study(&Root, &[axis(-1.0)], Bad::Low), None);
        assert!(study(&Root, &[axis(0.5)], Bad::Low).is_some());
    }
}
