//! Results as bytes: text for people, JSON for programs. Every text that comes from a file passes through [`inert`].

mod board;
mod excerpt;
mod figures;
mod finding;
mod inert;
mod json;
mod json_text;
mod json_value;
mod layout;
mod look;
mod problem;
mod settle;
mod text;

pub use board::BoardResult;
pub use inert::{acts, guarded, inert, inert_short};
pub use json::check as check_json;
pub use look::Look;
pub use problem::{problem, problems};
pub use text::{TextOptions, check as check_text};
