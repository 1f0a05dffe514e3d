//! Texts that were read, places in them, and problems met while reading: shared by every reader.

mod fault;
mod problem;
mod text;
pub mod toml;

pub use fault::TextFault;
pub use problem::{Problem, Severity};
pub use text::{Location, Position, Source, Span};
