//! The figures about one subject, each computed once, on demand.

mod definition;
mod value;

pub use definition::{Definition, ValueKind};
pub use value::{Flag, Subject, SubjectKind, Value, Word};
