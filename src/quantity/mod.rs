//! Figures as ranges with units and with what they rest on.
//!
//! SI units inside: volts, amperes, ohms, farads, seconds, kelvins as differences and degrees Celsius as levels.

mod arithmetic;
mod dimension;
mod evidence;
mod explore;
mod figure;
mod ledger;
mod pair;
mod range;
mod searched;
mod text;

pub use dimension::Dimension;
pub use evidence::{Evidence, Grade, Key, Settle, Table};
pub use figure::{Guess, Quantity, Slope};
pub use pair::Pair;
pub use range::{Range, RangeError};
pub use text::{
    ComponentKind, ComponentText, ReadError, print_amount, print_range, read_amount, read_component, read_gain,
    read_range, read_typical_maximum,
};
