//! A declaration as it stands in a board file.

use super::inert::inert;
use crate::quantity::{Settle, Table};

/// The thing to declare in a few words, harmless.
pub(super) fn phrase(settle: &Settle) -> String {
    inert(&settle.phrase()).into_owned()
}

/// The lines of a board file that declare it, with an example for a value.
pub(super) fn lines(settle: &Settle) -> Vec<String> {
    let mut lines = vec![header(settle.table)];
    lines.extend(target_key(settle.table).map(|key| format!("{key} = {}", text(&settle.target))));
    lines.push(format!("{} = {}", settle.key, value(settle.example)));
    lines
}

/// The header of an entry.
pub(super) fn header(table: Table) -> String {
    match table {
        Table::Board => "[board]".to_owned(),
        table => format!("[[{}]]", table.name()),
    }
}

/// The key that says what an entry is about.
pub(super) fn target_key(table: Table) -> Option<&'static str> {
    match table {
        Table::Board => None,
        Table::Part => Some("ref"),
        Table::Supply | Table::Load | Table::Rail => Some("net"),
    }
}

/// A TOML string that acts on nothing, and that [`super::guarded`] leaves as it is.
pub(super) fn text(value: &str) -> String {
    let mut out = String::from('"');
    let mut last = '"';
    for sign in value.chars() {
        match sign {
            '#' if last == '#' => out.push_str("\\u0023"),
            '"' | '\\' => {
                out.push('\\');
                out.push(sign);
            }
            _ if super::acts(sign) => out.push_str(&format!("\\U{:08x}", u32::from(sign))),
            _ => out.push(sign),
        }
        last = sign;
    }
    out.push('"');
    out
}

/// An example as TOML: flags, tables and what is quoted already stay as they are.
pub(super) fn value(example: &str) -> String {
    let is_value = matches!(example, "true" | "false") || example.starts_with(['{', '[', '"']);
    if is_value { example.to_owned() } else { text(example) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_declaration_is_toml_whatever_the_name() {
        let settle = Settle::new(Table::Load, "a\"b\\c\u{1b}\u{202e}", "current", "2 .. 180 mA");
        let text = lines(&settle).join("\n");
        let read: toml_edit::DocumentMut = text.parse().unwrap();
        assert_eq!(read["load"][0]["net"].as_str(), Some("a\"b\\c\u{1b}\u{202e}"));
        assert!(!text.contains('\u{1b}'));
        assert_eq!(lines(&Settle::new(Table::Rail, "A", "may_sag", "true"))[2], "may_sag = true");
        assert_eq!(
            lines(&Settle::new(Table::Board, "", "ambient", "-20 .. 55 °C")),
            ["[board]", "ambient = \"-20 .. 55 °C\""]
        );
    }
    #[test]
    fn every_declaration_that_is_asked_for_is_one_that_a_board_file_takes() {
        use crate::board::{Board, Options};
        use crate::checks::{Checks, DefinedNames, cases};
        use crate::knowledge::Knowledge;
        use crate::source::Source;
        let knowledge = Knowledge::built_in();
        let (checks, _) = Checks::load(&knowledge.checks, &DefinedNames);
        let mut seen = std::collections::BTreeSet::new();
        for (check, files) in &knowledge.checks {
            // Without their board files, so that as much as can be is to be declared.
            for case in cases::find(check, files).0 {
                let bytes = case.netlist.text().as_bytes();
                let Ok(found) =
                    crate::review::examine("x.net", bytes, Board::default(), &knowledge, &checks, "2026-01-01")
                else {
                    continue;
                };
                let settles = found.findings.iter().flat_map(|reviewed| &reviewed.finding.settle);
                for settle in settles.filter(|settle| seen.insert((settle.table, settle.key))) {
                    let text = lines(settle).join("\n");
                    let (_, problems) = Board::read(&Source::new("x.toml", text.as_str()), Options::default());
                    let told: Vec<_> = problems.iter().map(crate::source::Problem::message).collect();
                    assert!(told.is_empty(), "{text}: {told:?}");
                }
            }
        }
        assert!(seen.len() > 5, "{seen:?}");
    }
}
