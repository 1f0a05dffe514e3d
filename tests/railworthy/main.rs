//! Tests over the whole library, and over collections of real data that lie outside the project.

#![allow(clippy::unwrap_used, clippy::indexing_slicing, reason = "a test that meets what it does not expect fails")]

mod accept_command;
mod accepted;
mod archive;
mod check_values;
mod circuit_corpus;
mod cli;
mod compare;
mod corpus_verdicts;
mod declared_parts;
mod devices_symbols;
mod documents;
mod draft;
mod exported;
mod failures;
mod field_failures;
mod fingerprints;
mod hostile_formats;
mod house_rules;
mod judge;
mod made_board;
mod makers;
mod many_boards;
mod netlist_corpus;
mod netlist_hostile;
mod order_codes;
mod part_files;
mod parts_page;
mod program;
mod project;
mod recognition_corpus;
mod recognition_symbols;
mod reference_tokens;
mod regulator_sheets;
mod report;
mod result_json;
mod schemas;
mod shared;
mod sheets;
mod small_board;
mod spoiled;
mod sweeps;
mod text_formats;
mod user_checks;
mod wiring;
