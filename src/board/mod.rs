//! What a netlist cannot hold: the board file, the house file above it, and facts in fields on symbols.
//!
//! [`find`] tells where the two files lie, [`read_source`] reads one, [`Board::merge`] lays one over the other, and
//! the `resolve` and `check` functions look up the names that they use. Every value is a [`Declared`] and knows its
//! place.

mod declared;
mod device_model;
mod fault;
mod files;
mod merge;
mod model;
mod resolve;

pub use declared::{Declared, Place};
pub use device_model::{Allowed, DeviceModel, ModelKind};
pub use fault::TextFault;
pub use files::{FileError, HOUSE_FILE, LARGEST_FILE, Links, find, find_house, find_own, read_source};
pub use model::{
    Accept, Board, Esr, LoadEntry, LoadKind, PartEntry, RailEntry, SettingValue, Slack, Standard, StandardVoltage,
    SupplyEntry, SupplyNodes,
};
