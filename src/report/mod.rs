//! Results as bytes: text for people, JSON for programs. Every text that comes from a file passes through [`inert()`].

mod board;
pub mod catalog;
mod catalog_part;
mod caution;
mod draft;
mod excerpt;
mod explain;
mod figures;
mod finding;
mod inert;
mod json;
mod json_rails;
mod json_text;
mod json_value;
mod layout;
mod look;
mod overall;
mod part_rows;
mod problem;
mod rails;
mod settle;
mod text;
mod vet;

pub use board::BoardResult;
pub use draft::{draft, known as known_draft};
pub use explain::explain_check;
pub use inert::{acts, guarded, inert, inert_short};
pub use json::check as check_json;
pub use json_rails::rails as rails_json;
pub use look::Look;
pub use part_rows::{PartRow, part_rows};
pub use problem::{problem, problems};
pub use rails::{explain_part, rails as rails_text, regulator_names};
pub use text::{TextOptions, check as check_text};
pub use vet::vetted;
