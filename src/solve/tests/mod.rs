//! Tests of the solver against closed forms of textbooks; the source stands beside each.

#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a test that meets what it does not expect fails")]

mod closed_forms;
mod hard;
mod loops;
mod matrix;
mod models;
mod moving;
mod programmable_shunt;

/// That a value is as it should be, as a share of it.
fn close(value: f64, wanted: f64, share: f64) {
    assert!((value - wanted).abs() <= share * wanted.abs(), "{value:e} against {wanted:e}");
}
