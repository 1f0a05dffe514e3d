//! Finds a part of the netlist in the schematic sheet that it was drawn on, so that a finding points where people work.
//!
//! A netlist names the file of each sheet and the unique id of each symbol. [`Sheets::beside`] looks for the files in
//! folders that belong to the netlist (`find`; `names` says which paths a name may mean), and a scanner for either
//! layout (`lists`, `lines`) notes where the symbol of each id stands. Nothing else is taken from a sheet: what is
//! judged stands in the netlist alone.

mod find;
mod lines;
mod lists;
mod names;
mod sheets;
mod symbols;
#[cfg(test)]
mod tests;

pub use find::{LARGEST_SHEET, MOST_BYTES};
pub use sheets::{Sheet, Sheets};
pub use symbols::MOST_SYMBOLS;
