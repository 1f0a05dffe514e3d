//! Square matrices of at most 64 unknowns, and their LU factors.
//!
//! The matrix of a circuit is small and mostly zeros. Each row keeps the pattern of its entries as the bits of one
//! word, so that elimination touches nothing but entries that are there; nothing is allocated after the first use.

#![allow(clippy::indexing_slicing, reason = "every index is a bit of a pattern, which lies below the order")]

use std::fmt::Debug;
use std::ops::{Add, AddAssign, Div, Mul, Sub, SubAssign};

use num_complex::Complex64;

/// Most unknowns of a circuit: the bits of a row's pattern.
pub const LARGEST: usize = 64;

/// A pivot is taken where no entry below it is larger by more than this.
const PIVOT_SHARE: f64 = 0.1;
/// An order of pivots is kept as long as no entry below a pivot is larger by more than this.
const KEPT_SHARE: f64 = 1e-3;

/// A number that a matrix holds.
pub(super) trait Scalar:
    Copy
    + Debug
    + Default
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + AddAssign
    + SubAssign
    + From<f64>
{
    /// How large it is, for the choice of pivots.
    fn size(self) -> f64;
}

impl Scalar for f64 {
    fn size(self) -> f64 {
        self.abs()
    }
}

impl Scalar for Complex64 {
    fn size(self) -> f64 {
        self.re.abs() + self.im.abs()
    }
}

/// The places of the bits of a word, lowest first.
pub(super) fn bits(mut word: u64) -> impl Iterator<Item = usize> {
    std::iter::from_fn(move || {
        let place = word.trailing_zeros() as usize;
        (word != 0).then(|| {
            word &= word - 1;
            place
        })
    })
}

/// A word with its lowest bits set.
fn lowest(count: usize) -> u64 {
    if count >= LARGEST { u64::MAX } else { (1 << count) - 1 }
}

/// A square matrix.
#[derive(Debug, Clone)]
pub(super) struct Matrix<T> {
    order: usize,
    values: Vec<T>,
    rows: Vec<u64>,
}

impl<T: Scalar> Matrix<T> {
    /// A matrix of zeros; the order is at most [`LARGEST`].
    pub(super) fn new(order: usize) -> Self {
        debug_assert!(order <= LARGEST);
        Self { order, values: vec![T::default(); order * order], rows: vec![0; order] }
    }

    /// The number of its rows.
    pub(super) fn order(&self) -> usize {
        self.order
    }

    /// Takes the entries of another matrix of the same order.
    pub(super) fn copy_from(&mut self, other: &Self) {
        self.values.copy_from_slice(&other.values);
        self.rows.copy_from_slice(&other.rows);
    }

    /// Adds to an entry; what lies outside, as ground does, is left out.
    pub(super) fn add(&mut self, row: usize, column: usize, value: T) {
        if row < self.order && column < self.order {
            self.values[row * self.order + column] += value;
            self.rows[row] |= 1 << column;
        }
    }

    /// An entry that lies inside.
    pub(super) fn get(&self, row: usize, column: usize) -> T {
        self.values[row * self.order + column]
    }

    /// The entries of a row that are there, with their columns.
    pub(super) fn row(&self, row: usize) -> impl Iterator<Item = (usize, T)> {
        let start = row * self.order;
        bits(self.rows[row]).map(move |column| (column, self.values[start + column]))
    }

    /// Adds a multiple of another matrix of the same order.
    pub(super) fn add_scaled(&mut self, other: &Self, factor: T) {
        for row in 0..self.order {
            self.rows[row] |= other.rows[row];
            for (column, value) in other.row(row) {
                self.values[row * self.order + column] += value * factor;
            }
        }
    }
}

impl Matrix<Complex64> {
    /// Becomes `conductance + i · omega · capacitance`, all of the same order.
    pub(super) fn set_pencil(&mut self, conductance: &Matrix<f64>, capacitance: &Matrix<f64>, omega: f64) {
        for row in 0..self.order {
            self.rows[row] = conductance.rows[row] | capacitance.rows[row];
            for column in bits(self.rows[row]) {
                let place = row * self.order + column;
                self.values[place] = Complex64::new(conductance.values[place], omega * capacitance.values[place]);
            }
        }
    }
}

/// One step of the elimination: its pivot, the rows that it was taken from, and the columns that it reaches.
#[derive(Debug, Clone, Copy)]
struct Step<T> {
    row: usize,
    column: usize,
    below: u64,
    right: u64,
    inverse: T,
}

/// LU factors of a matrix, with the order of pivots that the last ones had.
///
/// Pivots have the least Markowitz count among those that are large enough in their column (threshold pivoting: Duff,
/// Erisman, Reid, *Direct Methods for Sparse Matrices*, chapter 7). The order is kept from one matrix to the next, as
/// long as its pivots stay large enough.
#[derive(Debug, Clone)]
pub(super) struct Lu<T> {
    work: Matrix<T>,
    columns: Vec<u64>,
    steps: Vec<Step<T>>,
    has_order: bool,
}

impl<T: Scalar> Lu<T> {
    /// Space for matrices of an order.
    pub(super) fn new(order: usize) -> Self {
        let nothing = Step { row: 0, column: 0, below: 0, right: 0, inverse: T::default() };
        Self { work: Matrix::new(order), columns: vec![0; order], steps: vec![nothing; order], has_order: false }
    }

    /// Factors a matrix.
    ///
    /// # Errors
    /// The column of an unknown that the matrix does not determine.
    pub(super) fn factor(&mut self, matrix: &Matrix<T>) -> Result<(), usize> {
        if self.has_order && self.eliminate(matrix, false).is_ok() {
            return Ok(());
        }
        self.has_order = false;
        self.eliminate(matrix, true)?;
        self.has_order = true;
        Ok(())
    }

    fn load(&mut self, matrix: &Matrix<T>) {
        self.work.copy_from(matrix);
        self.columns.fill(0);
        for (row, pattern) in self.work.rows.iter().enumerate() {
            for column in bits(*pattern) {
                self.columns[column] |= 1 << row;
            }
        }
    }

    fn eliminate(&mut self, matrix: &Matrix<T>, search: bool) -> Result<(), usize> {
        self.load(matrix);
        let order = self.work.order;
        let (mut rows, mut columns) = (lowest(order), lowest(order));
        for number in 0..order {
            let (row, column) =
                if search { self.pivot(rows, columns)? } else { (self.steps[number].row, self.steps[number].column) };
            let pivot = self.work.get(row, column);
            rows &= !(1 << row);
            columns &= !(1 << column);
            let below = self.columns[column] & rows;
            let least = bits(below).map(|other| self.work.get(other, column).size()).fold(0.0, f64::max) * KEPT_SHARE;
            // Also refuses what is no number.
            if !(pivot.size() > 0.0 && pivot.size() >= least && pivot.size().is_finite()) {
                return Err(column);
            }
            let inverse = T::from(1.0) / pivot;
            let right = self.work.rows[row] & columns;
            self.steps[number] = Step { row, column, below, right, inverse };
            for other in bits(below) {
                self.reduce(row, other, column, inverse, right);
            }
        }
        Ok(())
    }

    /// Takes a multiple of the pivot's row from another, and keeps the multiple in its place.
    fn reduce(&mut self, pivot_row: usize, row: usize, column: usize, inverse: T, right: u64) {
        let order = self.work.order;
        let (from, to) = (pivot_row * order, row * order);
        let multiple = self.work.values[to + column] * inverse;
        self.work.values[to + column] = multiple;
        let filled = right & !self.work.rows[row];
        for place in bits(filled) {
            self.columns[place] |= 1 << row;
        }
        self.work.rows[row] |= right;
        for place in bits(right) {
            let value = self.work.values[from + place];
            self.work.values[to + place] -= multiple * value;
        }
    }

    /// The pivot to take among the rows and columns that are left.
    fn pivot(&self, rows: u64, columns: u64) -> Result<(usize, usize), usize> {
        let mut best: Option<(u32, f64, usize, usize)> = None;
        let mut empty = 0;
        for column in bits(columns) {
            let within = self.columns[column] & rows;
            let largest = bits(within).map(|row| self.work.get(row, column).size()).fold(0.0, f64::max);
            if !(largest > 0.0 && largest.is_finite()) {
                empty = column;
                best = None;
                break;
            }
            for row in bits(within) {
                let size = self.work.get(row, column).size();
                let count = ((self.work.rows[row] & columns).count_ones() - 1) * (within.count_ones() - 1);
                let better = best.is_none_or(|(least, most, ..)| count < least || (count == least && size > most));
                if size >= largest * PIVOT_SHARE && better {
                    best = Some((count, size, row, column));
                }
            }
        }
        best.map(|(_, _, row, column)| (row, column)).ok_or(empty)
    }

    /// Solves for a right side, which is used up; both have the matrix's order at least.
    pub(super) fn solve(&self, right_side: &mut [T], solution: &mut [T]) {
        let order = self.work.order;
        for step in &self.steps {
            let value = right_side[step.row];
            for row in bits(step.below) {
                let multiple = self.work.values[row * order + step.column];
                right_side[row] -= multiple * value;
            }
        }
        for step in self.steps.iter().rev() {
            let mut value = right_side[step.row];
            let start = step.row * order;
            for column in bits(step.right) {
                value -= self.work.values[start + column] * solution[column];
            }
            solution[step.column] = value * step.inverse;
        }
    }
}
