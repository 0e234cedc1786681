//! Dense matrices of blocks: inverted by nalgebra's pivoted LU, on the stack where they are small.

use crate::solve::{List, Scalar, Singular};
use nalgebra::{Const, DMatrix, Dim, DimMin, DimMinimum, LU, OMatrix, SMatrix, allocator::Allocator};
use smallvec::SmallVec;

/// A pivot under this share of the terms that went into it is rounding: the system is singular.
/// Found on floating islands whose values round; a sound block keeps its pivots above 1e-13.
const LEAST_PIVOT: f64 = 2e-15;

/// A square matrix, column by column.
#[derive(Debug, Clone)]
pub(super) struct Square<T> {
    size: usize,
    entries: SmallVec<[T; 25]>,
}

impl<T: Scalar> Square<T> {
    pub(super) fn zero(size: usize) -> Self {
        Square { size, entries: SmallVec::from_elem(T::zero(), size * size) }
    }

    pub(super) fn size(&self) -> usize {
        self.size
    }

    pub(super) fn at(&self, row: usize, column: usize) -> T {
        self.entries[column * self.size + row]
    }

    pub(super) fn add(&mut self, row: usize, column: usize, term: T) {
        self.entries[column * self.size + row] += term;
    }

    pub(super) fn scale_row(&mut self, row: usize, factor: f64) {
        for column in 0..self.size {
            self.entries[column * self.size + row] *= T::from_real(factor);
        }
    }

    pub(super) fn largest_in_row(&self, row: usize) -> f64 {
        (0..self.size).fold(0.0, |most, column| self.at(row, column).norm1().max(most))
    }

    /// The matrix times a vector.
    pub(super) fn times(&self, vector: &[T]) -> List<T> {
        let mut product = List::from_elem(T::zero(), self.size);
        for (column, factor) in self.entries.chunks_exact(self.size.max(1)).zip(vector) {
            for (sum, entry) in product.iter_mut().zip(column) {
                *sum += *entry * *factor;
            }
        }
        product
    }

    /// The transposed matrix times a vector.
    pub(super) fn transposed_times(&self, vector: &[T]) -> List<T> {
        let dot = |column: &[T]| column.iter().zip(vector).fold(T::zero(), |sum, (a, b)| sum + *a * *b);
        self.entries.chunks_exact(self.size.max(1)).map(dot).collect()
    }

    /// The inverse.
    ///
    /// # Errors
    /// [`Singular`] where a pivot is rounding alone.
    pub(super) fn inverse(&self) -> Result<Square<T>, Singular> {
        match self.size {
            1 => self.inverse_of::<1>(),
            2 => self.inverse_of::<2>(),
            3 => self.inverse_of::<3>(),
            4 => self.inverse_of::<4>(),
            5 => self.inverse_of::<5>(),
            size => self.inverse_by(LU::new(DMatrix::from_column_slice(size, size, &self.entries))),
        }
    }

    fn inverse_of<const N: usize>(&self) -> Result<Square<T>, Singular>
    where
        Const<N>: DimMin<Const<N>, Output = Const<N>>,
    {
        self.inverse_by(LU::new(SMatrix::<T, N, N>::from_column_slice(&self.entries)))
    }

    fn inverse_by<D: DimMin<D, Output = D>>(&self, lu: LU<T, D, D>) -> Result<Square<T>, Singular>
    where
        nalgebra::DefaultAllocator: Allocator<D, D> + Allocator<DimMinimum<D, D>>,
    {
        check_pivots(lu.lu_internal())?;
        let inverse = lu.try_inverse().ok_or(Singular { unknown: 0 })?;
        Ok(Square { size: self.size, entries: SmallVec::from_slice(inverse.as_slice()) })
    }

    /// The sign of the determinant.
    pub(super) fn sign(&self) -> f64 {
        let lu = LU::new(DMatrix::from_column_slice(self.size, self.size, &self.entries));
        lu.determinant().real().signum()
    }
}

/// Compares each pivot with the sum of the absolute terms that went into it.
fn check_pivots<T: Scalar, D: Dim>(packed: &OMatrix<T, D, D>) -> Result<(), Singular>
where
    nalgebra::DefaultAllocator: Allocator<D, D>,
{
    for at in 0..packed.nrows() {
        let pivot = packed[(at, at)].norm1();
        let terms: f64 = (0..at).map(|k| packed[(at, k)].norm1() * packed[(k, at)].norm1()).sum();
        if !(LEAST_PIVOT * (pivot + terms) < pivot && pivot.is_finite()) {
            return Err(Singular { unknown: at });
        }
    }
    Ok(())
}
