//! `railworthy` judges the linear regulators and voltage references of a schematic netlist.
//!
//! Data flows one way through the modules below, in the order in which they are listed: each uses only those
//! before it.

pub mod source;

pub mod quantity;

pub mod netlist;

pub mod board;
pub mod circuit;
pub mod facts;
pub mod knowledge;
pub mod recognize;

pub mod checks;
