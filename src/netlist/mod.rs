//! Reads a netlist export and keeps the position of everything in it.
//!
//! [`read()`] takes the bytes of a file. What is no netlist is refused by name (`refuse`). A scanner, one for
//! S-expressions (`scan`) and one for XML (`xml`), walks the text once and cuts it into islands (`island`): one
//! component, library part or net each (a long net in several pieces). `build` turns an island into a thing of the
//! [`model`](Netlist), and `verify` looks at how these fit together.

mod atoms;
mod build;
mod form;
mod island;
pub mod limits;
mod model;
mod problems;
mod read;
mod refuse;
mod scan;
#[cfg(test)]
mod tests;
mod variants;
mod verify;
mod xml;
mod xml_tree;

#[doc(hidden)]
pub use island::islands;
pub use model::{Component, ComponentVariant, Field, Format, LibraryPart, NetEntry, NetNode, Netlist, PartPin};
pub use read::read;
pub use refuse::{FIRST_BYTES, begins_export};
