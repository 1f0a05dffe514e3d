//! `railworthy` judges the linear regulators and voltage references of a schematic netlist.
//!
//! Data flows one way through the modules below, in the order in which they are listed: each uses only those
//! before it.

// Blank lines keep this order, which is that of the flow.
pub mod source;

pub mod quantity;

pub mod netlist;

pub mod circuit;

pub mod knowledge;

pub mod board;

pub mod recognize;

pub mod solve;

pub mod facts;

pub mod checks;

pub mod sheet;

pub mod review;

pub mod report;

pub mod cli;
