//! What a netlist cannot hold: the board file, the house file above it, and facts in fields on symbols.
//!
//! [`Board::open`] does it all for a netlist: [`find`] tells where the two files lie, [`read_source`] reads one, [`Board::read`] understands it,
//! [`Board::merge`] lays one over the other, [`Board::with_symbol_fields`] adds what the fields tell, and the
//! `resolve` and `check` functions look up the names that they use. Every value is a [`Declared`] and knows its place.

mod declared;
mod fields;
mod files;
mod merge;
mod model;
mod outline;
mod read;
mod read_entries;
mod read_part;
mod reader;
mod resolve;
mod simulation;
#[cfg(test)]
mod tests;
mod texts;

pub use crate::knowledge::{Allowed, DeviceModel, ModelKind};
pub use crate::source::TextFault;
pub use declared::{Declared, Place};
pub use files::{FileError, HOUSE_FILE, LARGEST_FILE, Links, find, find_house, find_own, own_file, read_source};
pub(crate) use files::{exists, parent};
pub use model::{
    Accept, Board, Esr, LoadEntry, LoadKind, PartEntry, RailEntry, SettingValue, Slack, Standard, StandardVoltage,
    SupplyEntry, SupplyNodes,
};
pub use outline::Outline;
pub use read::Options;
