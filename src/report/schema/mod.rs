//! JSON Schemas of the files that people write and of the results that programs read.

mod board;
mod compare;
mod node;
mod result;
mod rules;

use serde_json::Value;

/// A schema: its name, what it is of, and what makes it.
type Entry = (&'static str, &'static str, fn() -> Value);

/// Every schema.
const ALL: &[Entry] = &[
    ("board", "board files", board::schema),
    ("check", "checks", rules::check),
    ("part", "part files", rules::part),
    ("device", "device files", rules::device),
    ("result", "the result of `check` as JSON", result::check),
    ("rails", "the result of `rails` as JSON", result::rails),
    ("compare", "the result of `compare` as JSON", compare::schema),
];

/// The names of the schemas, each with what it is of.
pub fn schemas() -> impl Iterator<Item = (&'static str, &'static str)> {
    ALL.iter().map(|(name, about, _)| (*name, *about))
}

/// A schema as text; `None` where there is none of that name.
#[must_use]
pub fn schema(name: &str) -> Option<String> {
    let (.., make) = ALL.iter().find(|(known, ..)| *known == name)?;
    serde_json::to_string_pretty(&make()).ok().map(|text| text + "\n")
}
