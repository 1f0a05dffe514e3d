//! Checks as files: the language they are written in, what they ask, and the verdicts.

pub mod cases;
mod check;
mod figures;
mod finding;
mod judge;
pub mod language;
mod load;
mod merge;
mod set;
mod template;
mod trace;
mod verdict;
mod wording;

pub use check::{Check, Citation, Points, Rule, Says};
pub use figures::DefinedNames;
pub use finding::{Counts, Finding, Judgement, Outcome, Point};
pub use judge::{ask, judge, judge_apart, natural, worst_level};
pub use language::{Figures, Names};
pub use load::read;
pub use merge::{tell, told_together};
pub use set::{Checks, Override};
pub use template::Template;
pub use trace::{Asked, Trace, trace};
pub use verdict::{Level, Verdict};
pub use wording::{Filling, Sentence, missing};

#[cfg(test)]
mod tests;
