//! Part families, as a list and one by one, and what they lack.

use super::figures::title;
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use super::part_rows::{PartRow, part_rows};
use crate::checks::Checks;
use crate::facts::{SheetFigure, lacking};
use crate::knowledge::{Family, Knowledge, Sign};
use crate::quantity::{Dimension, print_amount};
use crate::recognize::{Named, families_of_name};

/// Every part family in a line.
#[must_use]
pub fn parts(knowledge: &Knowledge, look: Look) -> String {
    let rows: Vec<Vec<String>> = knowledge
        .families
        .iter()
        .map(|family| {
            vec![
                inert(&family.name).into_owned(),
                kind(family),
                inert(&family.maker).into_owned(),
                inert(&family.names.join(" ")).into_owned(),
            ]
        })
        .collect();
    super::guarded(&table(&rows, "", look.width()))
}

fn kind(family: &Family) -> String {
    let negative = if family.polarity == Sign::Negative { ", negative" } else { "" };
    format!("{}{negative}", family.kind.name())
}

/// A part family in full, by its own name or by that of a part; `None` where no family has it.
#[must_use]
pub fn part(knowledge: &Knowledge, checks: &Checks, name: &str, look: Look) -> Option<String> {
    if let Some(family) = knowledge.family(name) {
        return Some(super::guarded(&in_full(family, checks, look)));
    }
    let found = families_of_name(name, knowledge);
    let first = knowledge.families.get(found.first()?.family)?;
    let rows: Vec<Vec<String>> = found.iter().filter_map(|named| fitting(knowledge, *named)).collect();
    let mut text = format!("{} fits\n{}\n", inert(name), table(&rows, "  ", look.width()));
    text.push_str(&in_full(first, checks, look));
    Some(super::guarded(&text))
}

/// A family that a name fits: the voltage that the part would get, and what must be named for it.
fn fitting(knowledge: &Knowledge, named: Named) -> Option<Vec<String>> {
    let family = knowledge.families.get(named.family)?;
    let volts = match (named.volts, named.adjustable) {
        (Some(volts), _) => print_amount(volts, Dimension::VOLTAGE),
        (None, true) => "adjustable".to_owned(),
        (None, false) => "no voltage in the name".to_owned(),
    };
    let words = || family.maker_words.join(", ");
    let when = if named.by_maker { format!("where a field names the maker: {}", words()) } else { String::new() };
    Some(vec![inert(&family.name).into_owned(), volts, inert(&when).into_owned()])
}

fn in_full(family: &Family, checks: &Checks, look: Look) -> String {
    let mut text = format!("{} · {} · {}\n", look.bold(&inert(&family.name)), inert(&family.maker), kind(family));
    text.push_str(&wrapped(&inert(&family.names.join(" ")), "  names: ", "         ", look.width()));
    if let Some(parent) = &family.version_of {
        let line = format!("taken in place of {parent} where a field names the maker");
        text.push_str(&wrapped(&inert(&line), "  ", "    ", look.width()));
    }
    let rows = part_rows(family);
    // What needs no source stands ahead of the table, whose columns long texts would tear apart.
    for row in rows.iter().filter(|row| row.recalled.is_none()) {
        let line = format!("{}: {}", inert(&row.what), inert(&row.figure));
        text.push_str(&wrapped(&line, "  ", "    ", look.width()));
    }
    let figures: Vec<Vec<String>> = rows.iter().filter_map(figure_row).collect();
    text.push_str(&table(&figures, "  ", look.width()));
    for (check, keys) in lacks(family, checks) {
        text.push_str(&wrapped(&format!("{check} asks for {keys}"), "  lacks: ", "         ", look.width()));
    }
    if let Some(note) = &family.note {
        text.push_str(&wrapped(&inert(note), "  note: ", "        ", look.width()));
    }
    text.push_str(&super::catalog::sources(&family.sources, &family.file, look));
    text
}

/// A figure with its source, in a line of the table.
fn figure_row(row: &PartRow) -> Option<Vec<String>> {
    let source = title(&row.source);
    let source = if row.recalled? { format!("recalled: {source}") } else { source };
    Some(vec![inert(&row.what).into_owned(), inert(&row.figure).into_owned(), source])
}

/// The checks whose figures a family does not state, each with the keys that it lacks.
fn lacks(family: &Family, checks: &Checks) -> Vec<(String, String)> {
    let of_check = |check: &crate::checks::Check| {
        let figures = check.figures();
        let keys: Vec<&str> = lacking(family, &figures).map(|entry: &SheetFigure| entry.key).collect();
        (!keys.is_empty()).then(|| (inert(&check.name).into_owned(), keys.join(", ")))
    };
    checks.iter().filter_map(of_check).collect()
}

/// What families lack, by check: a line for each that lacks anything.
#[must_use]
pub fn lacking_figures(families: &[&Family], checks: &Checks, look: Look) -> String {
    let rows: Vec<Vec<String>> = families
        .iter()
        .filter_map(|family| {
            let lacks: Vec<String> =
                lacks(family, checks).iter().map(|(check, keys)| format!("{check}: {keys}")).collect();
            (!lacks.is_empty()).then(|| vec![inert(&family.name).into_owned(), lacks.join("; ")])
        })
        .collect();
    if rows.is_empty() {
        return String::new();
    }
    let count = rows.len();
    let head = format!("{count} of {} part files lack figures that checks ask for", families.len());
    super::guarded(&format!("{}\n{}", look.bold(&head), table(&rows, "  ", look.width())))
}
