//! A quantity that is one linear reading over another.

use crate::figure::linear::Linear;
use crate::figure::study::Quantity;

/// `offset + over / under`, both read at the same point.
pub(super) struct Ratio<'m> {
    pub over: Linear<'m>,
    pub under: Linear<'m>,
    pub offset: f64,
}

impl Quantity for Ratio<'_> {
    fn at(&self, point: &[f64], gradient: &mut [f64]) -> Option<f64> {
        let over = self.over.at(point, gradient)?;
        let mut slopes = vec![0.0; gradient.len()];
        let under = self.under.at(point, &mut slopes)?;
        let ratio = over / under;
        gradient
            .iter_mut()
            .zip(slopes)
            .for_each(|(slope, under_slope)| *slope = (*slope - ratio * under_slope) / under);
        Some(self.offset + ratio)
    }
}
