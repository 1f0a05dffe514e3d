//! The checks that come with the program.

use std::collections::BTreeMap;
use std::path::Path;

use crate::checks::{Checks, DefinedNames};

fn folders() -> BTreeMap<String, BTreeMap<String, String>> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("rules/checks");
    let mut folders = BTreeMap::new();
    for entry in std::fs::read_dir(root).unwrap() {
        let path = entry.unwrap().path();
        let Ok(text) = std::fs::read_to_string(path.join("check.toml")) else { continue };
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        folders.insert(name, BTreeMap::from([("check.toml".to_owned(), text)]));
    }
    folders
}

/// The built-in checks.
pub(super) fn built_in() -> Checks {
    Checks::load(&folders(), &DefinedNames).0
}

#[test]
fn every_built_in_check_loads() {
    let folders = folders();
    let (checks, problems) = Checks::load(&folders, &DefinedNames);
    let told: Vec<String> = problems
        .iter()
        .map(|problem| {
            let line = problem.place().map(|(source, span)| {
                format!("{}:{} {}", source.name(), source.position(span.start()).line, source.slice(span))
            });
            format!("{line:?} {}", problem.message())
        })
        .collect();
    assert!(told.is_empty(), "{told:#?}");
    assert_eq!(checks.len(), folders.len());
    assert!(checks.len() >= 8);
}
