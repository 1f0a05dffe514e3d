//! Reading a capacitor technology file.

use std::collections::BTreeMap;

use super::Technology;
use super::cite::{Cite, read_sources};
use crate::source::toml::Document;
use crate::source::{Problem, Source};

/// The technologies that the tool tells apart.
pub const TECHNOLOGIES: &[&str] = &["ceramic-1", "ceramic-2", "electrolytic", "film", "polymer", "tantalum"];

/// Parses and reads a technology file whose path below `rules/` is `file`.
///
/// # Errors
/// Every problem of the file.
pub(super) fn technology_of(source: &Source, file: &str) -> Result<Technology, Vec<Problem>> {
    let document = Document::parse(source).map_err(|problem| vec![*problem])?;
    let technology = read_technology(&document, file);
    let problems = document.into_problems();
    technology.filter(|_| problems.is_empty()).ok_or(problems)
}

fn read_technology(document: &Document, file: &str) -> Option<Technology> {
    let mut root = document.root();
    let sources = read_sources(&mut root);
    let cite = Cite::of_file(&mut root, &sources);
    let name = root.require("technology").and_then(|value| value.text());
    if let Some(name) = name.filter(|name| !TECHNOLOGIES.contains(&name.as_str())) {
        let help = format!("one of: {}", TECHNOLOGIES.join(", "));
        name.refuse(format!("`{}` is no technology", name.as_str()), "an unknown technology", help);
    }
    let words = root.texts("words").iter().map(|word| word.as_str().to_lowercase()).collect();
    let mut figures = BTreeMap::new();
    for (key, dimension, _) in Technology::FIGURES {
        if let Some(figure) = root.take(key).and_then(|value| cite.figure(value, *dimension)) {
            figures.insert((*key).to_owned(), figure);
        }
    }
    let keys: Vec<&str> = Technology::FIGURES.iter().map(|(key, ..)| *key).collect();
    Cite::check_keys(&mut root, &keys);
    let mut tables = BTreeMap::new();
    if let Some(mut group) = root.table("tables") {
        for (key, dimension, _) in Technology::TABLES {
            let Some(mut table) = group.table(key) else { continue };
            let cite = cite.within(&mut table);
            let mut rows = BTreeMap::new();
            let entries = table.entries();
            let names: Vec<&str> = entries.iter().map(|row| row.key()).collect();
            for row in &entries {
                if let Some(figure) = cite.figure(*row, *dimension) {
                    rows.insert(row.key().to_owned(), figure);
                }
            }
            Cite::check_keys(&mut table, &names);
            tables.insert((*key).to_owned(), rows);
        }
        group.finish();
    }
    root.finish();
    Some(Technology { name: name?.as_str().to_owned(), words, figures, tables, sources, file: file.to_owned() })
}
