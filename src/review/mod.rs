//! One board from its bytes to reviewed findings: what was accepted, what to declare first.

mod accept;
mod asks;
mod assembly;
pub mod compare;
mod concern;
mod entries;
mod examine;
mod fingerprint;
mod notice;
mod settle;
mod stale;

pub use accept::{Accepted, Reopened};
pub use asks::{Ask, AskedKey, Asks, Hanging, asks};
pub use assembly::MOST_ASSEMBLIES;
pub use examine::{Examination, Reviewed, examine, examine_netlist, examine_with_sheets};
pub use notice::{REVIEW_CHECKS, ReviewCheck, review_check};
pub use settle::{Decisive, declare_first};
