//! Reading a device file.

use std::collections::BTreeMap;

use super::family::{DeviceFamily, StandsFor};
use super::model::{DeviceModel, ModelKind, SetError, parameter_dimension};
use crate::knowledge::cite::{Cite, read_sources, word};
use crate::knowledge::family::read_steps;
use crate::knowledge::names::{VOLTAGE_CODE, check_pattern};
use crate::knowledge::{Cited, SourceNote};
use crate::quantity::{Dimension, Range};
use crate::source::toml::{Document, Table, Value};
use crate::source::{Problem, Source};

/// Parses and reads a device file whose path below `rules/` is `file`.
///
/// # Errors
/// Every problem of the file.
pub(in crate::knowledge) fn device_of(source: &Source, file: &str) -> Result<DeviceFamily, Vec<Problem>> {
    let document = Document::parse(source).map_err(|problem| vec![*problem])?;
    let family = read_device(&document, file);
    let problems = document.into_problems();
    family.filter(|_| problems.is_empty()).ok_or(problems)
}

fn read_device(document: &Document, file: &str) -> Option<DeviceFamily> {
    let mut root = document.root();
    let sources = read_sources(&mut root);
    let name = root.require("device").and_then(|value| value.text());
    let kind = root.require("kind").and_then(|value| word(&value.text()?, "kind of device", ModelKind::ALL));
    let note = root.text("note").map(|text| text.as_str().to_owned());
    let stands_for = kind.and_then(|kind| read_stands_for(&mut root, kind));
    let names = read_names(&mut root, stands_for.is_some());
    let mut family = DeviceFamily {
        name: name.map_or("", |text| text.as_str()).to_owned(),
        kind: kind?,
        names,
        stands_for,
        parameters: BTreeMap::new(),
        by_voltage: BTreeMap::new(),
        tolerance: None,
        note,
        sources: Vec::new(),
        file: file.to_owned(),
        of_user: false,
    };
    read_parameters(&mut root, &sources, &mut family);
    if family.parameters.is_empty() && !document.has_problems() {
        let names: Vec<&str> = family.kind.parameters().iter().map(|(name, _)| *name).collect();
        root.refuse("the device has no parameter", "in this file", format!("give some of: {}", names.join(", ")));
    }
    root.finish();
    family.sources = sources;
    (!document.has_problems()).then_some(family)
}

/// Which parts of unknown number the family stands for; those that the kind does not have are refused.
fn read_stands_for(root: &mut Table<'_>, kind: ModelKind) -> Option<StandsFor> {
    let text = root.text("stands_for")?;
    let known: Vec<(StandsFor, &str)> = StandsFor::of(kind).iter().map(|one| (*one, one.name())).collect();
    word(&text, &format!("sort of {}", kind.name()), &known)
}

/// The name patterns; a family has some, or it stands for parts without a known name.
fn read_names(root: &mut Table<'_>, nameless: bool) -> Vec<String> {
    let Some(value) = root.take("names") else {
        if !nameless && !root.document().has_problems() {
            root.refuse(
                "the device has no name pattern",
                "`names` is missing",
                "add the order codes' common part, or say with `stands_for` for which unknown parts it stands",
            );
        }
        return Vec::new();
    };
    if nameless {
        value.refuse("what stands for unknown parts has no names", "beside `stands_for`", "leave one of the two out");
    }
    let mut names = Vec::new();
    for name in value.texts().unwrap_or_default() {
        if let Some(at) = name.as_str().find(VOLTAGE_CODE) {
            let place = name.part(at..at + VOLTAGE_CODE.len());
            let help = "write `*` in its place: the voltage is read from the part's own text";
            name.document().refuse(place, "a device has no voltage code", "not in device files", help);
        } else if check_pattern(&name) {
            names.push(name.as_str().to_owned());
        }
    }
    if names.is_empty() && !root.document().has_problems() {
        value.refuse("the device has no name pattern", "`names` is empty", "add the order codes' common part");
    }
    names
}

/// Reads the parameters that the kind has, and the tolerance of the voltage where it has one.
fn read_parameters(root: &mut Table<'_>, sources: &[SourceNote], family: &mut DeviceFamily) {
    let cite = Cite::of_file(root, sources);
    let breaks = matches!(family.kind, ModelKind::Zener | ModelKind::Shunt);
    let mut keys: Vec<&str> = Vec::new();
    for (name, _) in family.kind.parameters() {
        keys.push(name);
        let Some(value) = root.take(name) else { continue };
        let steps = if value.is_list() && breaks {
            read_steps(value, parameter_dimension(name), &cite)
        } else {
            let figure = cite.figure(value, parameter_dimension(name));
            figure.map(|figure| (f64::INFINITY, figure)).into_iter().collect()
        };
        for (_, figure) in &steps {
            check(value, family.kind, name, figure.value);
        }
        let Some((_, first)) = steps.first() else { continue };
        let hull = steps.iter().fold(first.value, |hull, (_, figure)| hull.union(figure.value));
        family.parameters.insert(name, Cited { value: hull, ..first.clone() });
        if value.is_list() {
            family.by_voltage.insert(name, steps);
        }
    }
    if breaks {
        keys.push("tolerance");
        family.tolerance = root.take("tolerance").and_then(|value| read_tolerance(value, &cite));
    }
    Cite::check_keys(root, &keys);
}

fn read_tolerance(value: Value<'_>, cite: &Cite<'_>) -> Option<Cited<Range>> {
    let tolerance = cite.figure(value, Dimension::ONE)?;
    if tolerance.value.low() < 0.0 || tolerance.value.high() >= 1.0 {
        value.refuse("no part has such a tolerance", "not from 0 to 100 %", "write \"5 %\"");
    }
    Some(tolerance)
}

/// Refuses values that the parameter cannot have.
fn check(value: Value<'_>, kind: ModelKind, name: &'static str, range: Range) {
    let finite = range.low().is_finite() && range.high().is_finite();
    match DeviceModel::new(kind).set(name, range) {
        Ok(()) if finite => {}
        Err(SetError::Refused(allowed)) => {
            value.refuse(
                format!("`{name}` cannot be this"),
                "not possible",
                format!("it must be {}", allowed.words()),
            );
        }
        _ => value.refuse(format!("`{name}` has no bound"), "not finite", "write both ends of the range"),
    }
}
