//! Monte Carlo as a cross-check of worst case and RSS, after JCGM 101:2008 (Propagation of distributions
//! using a Monte Carlo method): every value is rectangular over its range (6.4.2), all are independent.

use crate::figure::study::{Axis, Quantity};
use rand::{RngExt, SeedableRng};
use rand_chacha::ChaCha8Rng;

/// Where trials of every figure begin: the same numbers at every run.
const SEED: u64 = 101;

/// Percentiles of a figure over random trials.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Percentiles {
    /// How many trials.
    pub trials: u32,
    /// 2.5 % of the trials lie below.
    pub low: f64,
    /// Half of them.
    pub median: f64,
    /// 97.5 %.
    pub high: f64,
    /// The lowest and the highest.
    pub span: (f64, f64),
}

/// Draws trials of a quantity; `magnitude` where its sign carries no meaning. `None` where none had a
/// solution, or none was asked for.
pub(super) fn trials(
    quantity: &dyn Quantity,
    axes: &[Axis],
    count: u32,
    magnitude: bool,
) -> Option<Percentiles> {
    let mut random = ChaCha8Rng::seed_from_u64(SEED);
    let mut gradient = vec![0.0; axes.len()];
    let mut values: Vec<f64> = (0..count)
        .filter_map(|_| {
            let draw = |axis: &Axis| axis.low + (axis.high - axis.low) * random.random::<f64>();
            let point: Vec<f64> = axes.iter().map(draw).collect();
            let value = quantity.at(&point, &mut gradient)?;
            Some(if magnitude { value.abs() } else { value })
        })
        .collect();
    values.sort_by(f64::total_cmp);
    let at = |share: f64| values[((share * values.len() as f64) as usize).min(values.len() - 1)];
    (!values.is_empty()).then(|| Percentiles {
        trials: count,
        low: at(0.025),
        median: at(0.5),
        high: at(0.975),
        span: (values[0], values[values.len() - 1]),
    })
}

#[cfg(test)]
mod tests {
    use super::trials;
    use crate::device::Rank;
    use crate::figure::study::{Axis, Quantity};

    struct Sum;

    impl Quantity for Sum {
        fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
            gradient.fill(1.0);
            Some(point.iter().sum())
        }
    }

    /// JCGM 101:2008, 9.2.3: the sum of four rectangular quantities of mean 0 and standard deviation 1
    /// has the 95 % coverage interval -3.88 to 3.88 (cited from memory).
    #[test]
    fn sum_of_four_rectangular_quantities() {
        let half = 3f64.sqrt();
        let axis =
            Axis { base: 0.0, nominal: 0.0, typical: 0.0, low: -half, high: half, rank: Rank::Guaranteed };
        let found = trials(&Sum, &[axis; 4], 200_000, false).expect("a sum has a value everywhere");
        assert!((found.high - 3.88).abs() < 0.03, "{found:?}");
        assert!((found.low + 3.88).abs() < 0.03, "{found:?}");
    }
}
