//! Regulators built from transistors and amplifiers, found by structure.
//!
//! A pass transistor bridges two supply nets (`pass`, `supply`). From its control terminal the network that drives it is
//! followed backwards with the sign of each stage (`drive`), up to an amplifier one of whose inputs senses the output
//! and the other a reference (`sense`, `reference`), or to a reference that holds the control terminal itself. Only a
//! loop that counteracts a change of the output regulates: switches, level shifters, drivers and latches have none.

mod cut_out;
mod drive;
mod find;
mod model;
mod network;
mod opamp;
mod outboard;
mod pass;
mod reference;
mod sense;
mod supply;
mod transistor;

#[cfg(test)]
mod tests;

pub(super) use find::add;
pub use model::{Amplifier, AmplifierKind, BuiltUp, Duty, Junction, Reference, ReferenceFeed, ReferenceKind};
pub use opamp::{OpAmpUnit, op_amps};
pub use transistor::{Transistor, transistors};
