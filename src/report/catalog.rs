//! What is known, as lists and one by one.

use std::collections::BTreeMap;

use super::figures::title;
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use crate::checks::Checks;
use crate::facts::{DEFINITIONS, Definition, ValueKind};
use crate::knowledge::{
    Basis, CapacitorDemand, Cited, Dropout, Family, Knowledge, MinimumKind, Pass, Sign, SourceNote, Supply,
    Technology,
};
use crate::quantity::{Dimension, Range, print_amount, print_range};

/// Every check with its question, by group.
#[must_use]
pub fn checks(checks: &Checks, look: Look) -> String {
    let mut groups: BTreeMap<&str, Vec<Vec<String>>> = BTreeMap::new();
    for check in checks.iter() {
        let row = vec![inert(&check.name).into_owned(), inert(&check.asks).into_owned()];
        groups.entry(check.group.as_deref().unwrap_or("other")).or_default().push(row);
    }
    let mut text = String::new();
    for (group, rows) in groups {
        text.push_str(&look.bold(&inert(group)));
        text.push('\n');
        text.push_str(&table(&rows, "  ", look.width()));
    }
    super::guarded(&text)
}

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

/// A part family in full; `None` where no family has the name.
#[must_use]
pub fn part(knowledge: &Knowledge, name: &str, look: Look) -> Option<String> {
    let family = knowledge.families.iter().find(|family| family.name.eq_ignore_ascii_case(name))?;
    let mut text = format!("{} · {} · {}\n", look.bold(&inert(&family.name)), inert(&family.maker), kind(family));
    text.push_str(&wrapped(&inert(&family.names.join(" ")), "  names: ", "         ", look.width()));
    let mut rows = Vec::new();
    if let Some(pass) = &family.pass {
        rows.push(vec!["pass".to_owned(), Pass::name(pass.value).to_owned(), title(&pass.source)]);
    }
    rows.extend(figures(&family.figures, Family::FIGURES));
    rows.extend(family.dropout.iter().flat_map(dropout));
    let demands = [("input capacitor", &family.input_capacitor), ("output capacitor", &family.output_capacitor)];
    for (what, demand) in demands {
        rows.extend(demand.iter().map(|demand| capacitor(what, demand)));
    }
    for (name, package) in &family.packages {
        let heat = package.junction_to_ambient.as_ref();
        rows.extend(heat.map(|heat| {
            let shown = print_amount(heat.value, Dimension::THERMAL_RESISTANCE);
            vec![inert(name).into_owned(), shown, title(&heat.source)]
        }));
    }
    text.push_str(&table(&rows, "  ", look.width()));
    if let Some(note) = &family.note {
        text.push_str(&wrapped(&inert(note), "  note: ", "        ", look.width()));
    }
    text.push_str(&sources(&family.sources, &family.file, look));
    Some(super::guarded(&text))
}

fn figures(
    list: &BTreeMap<String, Cited<Range>>,
    keys: &[(&'static str, Dimension, &'static str)],
) -> Vec<Vec<String>> {
    let row = |(key, dimension, _): &(&'static str, Dimension, &'static str)| {
        let figure = list.get(*key)?;
        Some(vec![key.replace('_', " "), print_range(figure.value, *dimension), title(&figure.source)])
    };
    keys.iter().filter_map(row).collect()
}

fn dropout(dropout: &Dropout) -> Vec<Vec<String>> {
    let point = |cited: &Cited<crate::knowledge::DropoutPoint>| {
        let point = cited.value;
        let top = point.maximum.unwrap_or(point.typical);
        let shown = print_range(Range::between(point.typical, top), Dimension::VOLTAGE);
        let from = if point.from_output > 0.0 {
            format!(", outputs from {}", print_amount(point.from_output, Dimension::VOLTAGE))
        } else {
            String::new()
        };
        let load = print_amount(point.load, Dimension::CURRENT);
        vec!["dropout".to_owned(), format!("{shown} at {load}{from}"), title(&cited.source)]
    };
    dropout.points.iter().map(point).collect()
}

fn capacitor(what: &str, demand: &CapacitorDemand) -> Vec<String> {
    let kind = match demand.kind {
        MinimumKind::Required => "required",
        MinimumKind::Recommended => "recommended",
        MinimumKind::Recalled => "recalled",
        MinimumKind::Optional => "optional",
    };
    let basis = match demand.basis {
        Basis::Nominal => "as marked",
        Basis::Effective => "as left under bias",
    };
    let minimum = demand.minimum.as_ref();
    let shown = minimum.map_or_else(String::new, |cited| {
        format!("{} or more {basis}, ", print_amount(cited.value, Dimension::CAPACITANCE))
    });
    let source = minimum.map(|cited| title(&cited.source)).unwrap_or_default();
    vec![what.to_owned(), format!("{shown}{kind}"), source]
}

fn sources(sources: &[SourceNote], file: &str, look: Look) -> String {
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
            rows.push(vec![what, print_range(figure.value, *dimension), title(&figure.source)]);
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
