//! Reads a netlist export and keeps the position of everything in it.

mod model;

pub use model::{Component, Field, Format, LibraryPart, NetEntry, NetNode, Netlist, PartPin};
