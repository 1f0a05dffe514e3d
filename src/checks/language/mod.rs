//! The check language: read, typed against the defined names, evaluated over ranges.

mod eval;
mod lexer;
mod names;
mod parser;
mod refusal;
mod syntax;
mod typed;
mod types;
mod units;

pub(in crate::checks) use eval::value;
pub use eval::{Answer, Context, Decision, Judged};
pub use lexer::{KEYWORDS, MAX_TOKENS};
pub use names::{Figures, Names};
pub use parser::{MAX_DEPTH, expression, sentence};
pub use refusal::Refusal;
pub use syntax::{Each, Function, Node, NodeKind, Operator, Sentence};
pub use typed::{Condition, Figure, Loop, Path, Relation, Requirement};
pub use types::{Scope, noun};
pub use units::constant;
