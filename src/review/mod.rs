//! One board from its bytes to reviewed findings: what was accepted, what to declare first.

mod accept;
mod concern;
mod examine;
mod fingerprint;
mod settle;

pub use accept::Accepted;
pub use examine::{Examination, Reviewed, examine, examine_netlist, examine_with_sheets};
pub use settle::{Decisive, declare_first};
