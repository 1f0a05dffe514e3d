//! TOML with positions: typed access to the keys of a file, each value with its span, problems collected.
//!
//! A [`Document`] is parsed from a [`Source`](super::Source); its [`Table`]s remember which keys were asked for, so that
//! [`Table::finish`] can refuse the others with the nearest right name. A value of the wrong type is reported where it
//! stands and taken as missing, so that one reading finds every problem.

mod document;
mod near;
mod table;
mod value;

pub use document::Document;
pub use near::nearest;
pub use table::Table;
pub use value::{Date, Spanned, Text, Value};
