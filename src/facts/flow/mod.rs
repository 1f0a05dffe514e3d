//! The board as a supply system: where power enters, through what it flows, what it is worth at every net.
//!
//! First the structure (`graph`): a directed graph of supply nets, from the places where power enters through series
//! elements and regulators. Then the currents (`current`), summed from the loads upwards, and the voltages (`voltage`),
//! carried from the sources downwards, less what the elements on the way take (`drop`).

mod current;
mod drop;
mod element;
mod graph;
mod rectify;
mod seeds;
#[cfg(test)]
mod tests;
mod voltage;

pub use graph::{Flow, Link};
pub use rectify::Reservoir;
pub use voltage::{Rail, RailOrigin};

pub(super) use current::Drawn;
pub(super) use voltage::{Rails, propagate};
