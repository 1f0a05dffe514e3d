//! Tests over the whole library, and over collections of real data that lie outside the project.

mod netlist_corpus;
mod netlist_hostile;
mod reference_tokens;
mod shared;
