//! Tests of the room: a table of names, made-up boards, load errors, verdicts and the laws.

mod built_in;
mod built_in_verdicts;
mod fake;
mod hostile;
mod laws;
mod load;
mod verdicts;
