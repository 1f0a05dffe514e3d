//! The LU factors, by what is left when their solution is put in.

use num_complex::Complex64;
use proptest::prelude::*;

use crate::solve::matrix::{LARGEST, Lu, Matrix, bits};

/// A matrix with entries at random places, and more on the diagonal or not.
fn matrices() -> impl Strategy<Value = (usize, Vec<(usize, usize, f64)>)> {
    (2..=LARGEST).prop_flat_map(|order| {
        let entry = (0..order, 0..order, prop_oneof![-1.0..1.0, -1e6..1e6, -1e-6..1e-6]);
        (Just(order), prop::collection::vec(entry, order..order * 5))
    })
}

proptest! {
    #[test]
    fn solutions_solve((order, entries) in matrices(), with_diagonal in any::<bool>()) {
        let mut matrix = Matrix::new(order);
        for (row, column, value) in &entries {
            matrix.add(*row, *column, *value);
        }
        if with_diagonal {
            (0..order).for_each(|place| matrix.add(place, place, 1.0 + place as f64));
        }
        let wanted: Vec<f64> = (0..order).map(|place| (place as f64 * 0.7).sin() + 1.5).collect();
        let mut lu = Lu::new(order);
        // Twice: the second time with the order of pivots of the first.
        for _ in 0..2 {
            if lu.factor(&matrix).is_err() {
                // A row or column without entries, or one that is a multiple of others.
                prop_assert!(!with_diagonal || entries.iter().any(|(row, column, _)| row == column));
                return Ok(());
            }
            let product = |x: &[f64]| -> Vec<f64> {
                (0..order).map(|row| matrix.row(row).map(|(column, value)| value * x[column]).sum()).collect()
            };
            let right_side = product(&wanted);
            let mut solution = vec![0.0; order];
            lu.solve(&mut right_side.clone(), &mut solution);
            let largest = solution.iter().fold(0.0_f64, |most, value| most.max(value.abs()));
            for (row, (own, other)) in product(&solution).iter().zip(&right_side).enumerate() {
                let size: f64 = matrix.row(row).map(|(_, value)| value.abs() * largest).sum();
                // Elimination may let entries grow, which costs digits.
                prop_assert!((own - other).abs() <= 1e-7 * size + 1e-9, "row {row}: {own} against {other}");
            }
        }
    }
}

#[test]
fn complex_factors_solve_too() {
    let mut matrix = Matrix::new(2);
    let i = Complex64::i();
    for (row, column, value) in [(0, 0, i), (0, 1, Complex64::new(2.0, 0.0)), (1, 0, 1.0 - i), (1, 1, 3.0 * i)] {
        matrix.add(row, column, value);
    }
    let mut lu = Lu::new(2);
    lu.factor(&matrix).unwrap();
    let mut solution = [Complex64::default(); 2];
    // For x = (1, i): i + 2i = 3i, and 1 − i − 3 = −2 − i.
    lu.solve(&mut [3.0 * i, -2.0 - i], &mut solution);
    assert!((solution[0] - 1.0).norm() < 1e-14 && (solution[1] - i).norm() < 1e-14, "{solution:?}");
}

#[test]
fn what_is_not_determined_is_told() {
    let mut lu = Lu::new(2);
    let mut matrix = Matrix::new(2);
    matrix.add(0, 0, 1.0);
    matrix.add(1, 0, 1.0);
    assert_eq!(lu.factor(&matrix), Err(1));
    // The same unknown once more, after a matrix that could be factored.
    matrix.add(1, 1, 1.0);
    assert_eq!(lu.factor(&matrix), Ok(()));
    matrix.add(1, 1, f64::NAN);
    assert_eq!(lu.factor(&matrix), Err(1));
}

#[test]
fn bits_come_lowest_first() {
    assert_eq!(bits(0b1010_0001).collect::<Vec<_>>(), [0, 5, 7]);
    assert_eq!(bits(u64::MAX).count(), 64);
}
