//! Reading a supply file.

use std::collections::BTreeMap;

use super::Supply;
use super::cite::{Cite, read_sources};
use crate::quantity::Dimension;
use crate::source::toml::Document;
use crate::source::{Problem, Source};

/// Parses and reads a supply file whose path below `rules/` is `file`.
///
/// # Errors
/// Every problem of the file.
pub(super) fn supply_of(source: &Source, file: &str) -> Result<Supply, Vec<Problem>> {
    let document = Document::parse(source).map_err(|problem| vec![*problem])?;
    let supply = read_supply(&document, file);
    let problems = document.into_problems();
    supply.filter(|_| problems.is_empty()).ok_or(problems)
}

fn read_supply(document: &Document, file: &str) -> Option<Supply> {
    let mut root = document.root();
    let sources = read_sources(&mut root);
    let cite = Cite::of_file(&mut root, &sources);
    let name = root.require("supply").and_then(|value| value.text());
    let words = root.texts("words").iter().map(|word| word.as_str().to_lowercase()).collect();
    let voltage = root.require("voltage").and_then(|value| cite.figure(value, Dimension::VOLTAGE));
    let nets = root.texts("nets").iter().map(|net| net.as_str().to_owned()).collect();
    let mut figures = BTreeMap::new();
    for (key, dimension, _) in Supply::FIGURES {
        if let Some(figure) = root.take(key).and_then(|value| cite.figure(value, *dimension)) {
            figures.insert((*key).to_owned(), figure);
        }
    }
    let mut keys: Vec<&str> = Supply::FIGURES.iter().map(|(key, ..)| *key).collect();
    keys.push("voltage");
    Cite::check_keys(&mut root, &keys);
    root.finish();
    let (name, voltage) = (name?.as_str().to_owned(), voltage?);
    Some(Supply { name, words, voltage, nets, figures, sources, file: file.to_owned() })
}
