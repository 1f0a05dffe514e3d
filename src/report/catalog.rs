//! What is known, as lists and one by one.

use std::collections::BTreeMap;

pub use super::catalog_device::{device, devices};
pub use super::catalog_part::{lacking_figures, part, parts};
use super::figures::title;
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use super::part_rows::shown;
use crate::checks::Checks;
use crate::facts::{DEFINITIONS, Definition, ValueKind};
use crate::knowledge::{Cited, Knowledge, SourceNote, Supply, Technology};
use crate::quantity::{Dimension, Range, print_range};
use crate::review::REVIEW_CHECKS;

/// Every check with its question, by group.
#[must_use]
pub fn checks(checks: &Checks, look: Look) -> String {
    let mut groups: BTreeMap<&str, Vec<Vec<String>>> = BTreeMap::new();
    for check in checks.iter() {
        let row = vec![inert(&check.name).into_owned(), inert(&check.asks).into_owned()];
        groups.entry(check.group.as_deref().unwrap_or("other")).or_default().push(row);
    }
    for check in REVIEW_CHECKS {
        groups.entry(check.group).or_default().push(vec![check.name.to_owned(), check.asks.to_owned()]);
    }
    let mut text = String::new();
    for (group, rows) in groups {
        text.push_str(&look.bold(&inert(group)));
        text.push('\n');
        text.push_str(&table(&rows, "  ", look.width()));
    }
    super::guarded(&text)
}

fn figures(
    list: &BTreeMap<String, Cited<Range>>,
    keys: &[(&'static str, Dimension, &'static str)],
) -> Vec<Vec<String>> {
    let row = |(key, dimension, _): &(&'static str, Dimension, &'static str)| {
        let figure = list.get(*key)?;
        Some(vec![key.replace('_', " "), shown(key, figure.value, *dimension), title(&figure.source)])
    };
    keys.iter().filter_map(row).collect()
}

/// The sources of a file, with its name.
pub(super) fn sources(sources: &[SourceNote], file: &str, look: Look) -> String {
    let mut text = String::new();
    for source in sources {
        let read = if source.read { "" } else { " (not read: recalled)" };
        text.push_str(&wrapped(&format!("{}{read}", inert(&source.title)), "  source: ", "          ", look.width()));
    }
    text.push_str(&format!("  file: {}\n", inert(file)));
    text
}

/// Every standard supply in a line.
#[must_use]
pub fn supplies(knowledge: &Knowledge, look: Look) -> String {
    let row = |supply: &Supply| {
        vec![
            inert(&supply.name).into_owned(),
            print_range(supply.voltage.value, Dimension::VOLTAGE),
            inert(&supply.words.join(", ")).into_owned(),
        ]
    };
    super::guarded(&table(&knowledge.supplies.iter().map(row).collect::<Vec<_>>(), "", look.width()))
}

/// A standard supply in full; `None` where none has the name.
#[must_use]
pub fn supply(knowledge: &Knowledge, name: &str, look: Look) -> Option<String> {
    let supply = knowledge.supply(name)?;
    let mut text = look.bold(&inert(&supply.name)) + "\n";
    let voltage = print_range(supply.voltage.value, Dimension::VOLTAGE);
    let mut rows = vec![vec!["voltage".to_owned(), voltage, title(&supply.voltage.source)]];
    rows.extend(figures(&supply.figures, Supply::FIGURES));
    text.push_str(&table(&rows, "  ", look.width()));
    if !supply.nets.is_empty() {
        text.push_str(&wrapped(&inert(&supply.nets.join(" ")), "  nets: ", "        ", look.width()));
    }
    text.push_str(&sources(&supply.sources, &supply.file, look));
    Some(super::guarded(&text))
}

/// Every capacitor technology in a line.
#[must_use]
pub fn technologies(knowledge: &Knowledge, look: Look) -> String {
    let row = |technology: &Technology| {
        vec![inert(&technology.name).into_owned(), inert(&technology.words.join(", ")).into_owned()]
    };
    super::guarded(&table(&knowledge.technologies.iter().map(row).collect::<Vec<_>>(), "", look.width()))
}

/// A capacitor technology in full; `None` where none has the name.
#[must_use]
pub fn technology(knowledge: &Knowledge, name: &str, look: Look) -> Option<String> {
    let technology = knowledge.technology(&name.to_lowercase())?;
    let mut text = look.bold(&inert(&technology.name)) + "\n";
    text.push_str(&wrapped(&inert(&technology.words.join(", ")), "  also: ", "        ", look.width()));
    let mut rows = figures(&technology.figures, Technology::FIGURES);
    for (name, dimension, _) in Technology::TABLES {
        for (row, figure) in technology.tables.get(*name).into_iter().flatten() {
            let what = format!("{}, {}", name.replace('_', " "), inert(row));
            rows.push(vec![what, shown(name, figure.value, *dimension), title(&figure.source)]);
        }
    }
    text.push_str(&table(&rows, "  ", look.width()));
    text.push_str(&sources(&technology.sources, &technology.file, look));
    Some(super::guarded(&text))
}

/// Every name of the check language: what it is a figure of, its unit, its meaning, where it is defined.
#[must_use]
pub fn quantities(look: Look) -> String {
    let rows: Vec<Vec<String>> = definitions().map(quantity_row).collect();
    super::guarded(&table(&rows, "", look.width()))
}

/// One name of the check language for each kind of subject that has it; `None` where it is not defined.
#[must_use]
pub fn quantity(name: &str, look: Look) -> Option<String> {
    let rows: Vec<Vec<String>> = definitions()
        .filter(|definition| definition.name == name)
        .map(|definition| {
            let mut row = quantity_row(definition);
            row.insert(3, definition.defined_in.to_owned());
            row
        })
        .collect();
    (!rows.is_empty()).then(|| super::guarded(&table(&rows, "", look.width())))
}

fn definitions() -> impl Iterator<Item = &'static Definition> {
    DEFINITIONS.iter().flat_map(|file| file.iter())
}

fn quantity_row(definition: &Definition) -> Vec<String> {
    let unit = match definition.kind {
        ValueKind::Figure(dimension) => match dimension.symbol() {
            Some("") => "number".to_owned(),
            Some(symbol) => symbol.to_owned(),
            None => dimension.to_string(),
        },
        ValueKind::Word([]) => "name".to_owned(),
        ValueKind::Word(_) => "word".to_owned(),
        ValueKind::Flag => "yes or no".to_owned(),
        ValueKind::Group(of) => format!("each {}", of.name()),
    };
    let meaning = match definition.kind {
        ValueKind::Word(words) if !words.is_empty() => format!("{}: {}", definition.meaning, words.join(", ")),
        _ => definition.meaning.to_owned(),
    };
    vec![definition.name.to_owned(), definition.of.name().to_owned(), unit, meaning]
}
