//! Models of single parts, as a list and one by one.

use super::catalog::sources;
use super::figures::title;
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use crate::knowledge::{Cited, DeviceFamily, Knowledge, parameter_dimension, parameter_unit};
use crate::quantity::{Dimension, Range, print_amount};

/// Every family of single parts in a line: its name, its kind, the names of its parts.
#[must_use]
pub fn devices(knowledge: &Knowledge, look: Look) -> String {
    let row = |family: &DeviceFamily| {
        let names = match family.stands_for {
            Some(of) => format!("unknown parts: {}", of.name()),
            None => inert(&family.names.join(" ")).into_owned(),
        };
        vec![inert(&family.name).into_owned(), family.kind.name().to_owned(), names]
    };
    super::guarded(&table(&knowledge.devices.iter().map(row).collect::<Vec<_>>(), "", look.width()))
}

/// A family of single parts in full; `None` where none has the name, in any case.
#[must_use]
pub fn device(knowledge: &Knowledge, name: &str, look: Look) -> Option<String> {
    let family = knowledge.devices.iter().find(|family| family.name.eq_ignore_ascii_case(name.trim()))?;
    let mut text = look.bold(&inert(&family.name)) + "\n";
    let mut rows = vec![vec!["kind".to_owned(), family.kind.name().to_owned(), String::new()]];
    for (name, _) in family.kind.parameters() {
        match family.by_voltage.get(name) {
            Some(steps) => rows.extend(steps.iter().map(|(limit, figure)| step(name, *limit, figure))),
            None => rows.extend(family.parameters.get(name).map(|figure| row((*name).to_owned(), name, figure))),
        }
    }
    if let Some(tolerance) = &family.tolerance {
        let percent = format!("{} %", print_amount(tolerance.value.high() * 100.0, Dimension::ONE));
        rows.push(vec!["tolerance of BV".to_owned(), percent, title(&tolerance.source)]);
    }
    if family.sources.len() == 1 {
        // The one source stands below.
        rows.iter_mut().for_each(|row| row.truncate(2));
    }
    text.push_str(&table(&rows, "  ", look.width()));
    if !family.names.is_empty() {
        text.push_str(&wrapped(&inert(&family.names.join(" ")), "  names: ", "         ", look.width()));
    }
    if let Some(note) = &family.note {
        text.push_str(&wrapped(&inert(note), "  note: ", "        ", look.width()));
    }
    text.push_str(&sources(&family.sources, &family.file, look));
    Some(super::guarded(&text))
}

fn step(name: &str, limit: f64, figure: &Cited<Range>) -> Vec<String> {
    let what = match limit.is_finite() {
        true => format!("{name} to {}", print_amount(limit, Dimension::VOLTAGE)),
        false => format!("{name} above"),
    };
    row(what, name, figure)
}

fn row(what: String, name: &str, figure: &Cited<Range>) -> Vec<String> {
    vec![what, low_nominal_high(figure.value, name), title(&figure.source)]
}

/// `lowest / nominal / highest`, or one value.
fn low_nominal_high(range: Range, name: &str) -> String {
    let dimension = parameter_dimension(name);
    let (unit, one) = parameter_unit(name);
    let amount = |value: f64| {
        if dimension.symbol().is_none() {
            return format!("{} {unit}", print_amount(value / one, Dimension::ONE));
        }
        match value != 0.0 && value.abs() < LEAST_PREFIXED {
            // Saturation currents go below every prefix.
            true => format!("{value:e} {unit}"),
            false => print_amount(value, dimension),
        }
    };
    if range.is_exact() {
        return amount(range.nominal());
    }
    [range.low(), range.nominal(), range.high()].map(amount).join(" / ")
}

/// Below this an amount is written with an exponent.
const LEAST_PREFIXED: f64 = 1e-13;
