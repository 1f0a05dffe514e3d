//! The house rules, as far as a test can tell.

use std::collections::{BTreeMap, BTreeSet};

use railworthy::facts::{DEFINITIONS, ValueKind};

use crate::project::{files, rooms, text};

/// Most lines of a file, its inline tests left out.
const LONGEST_FILE: usize = 400;
/// Most lines of a function.
const LONGEST_FUNCTION: usize = 60;

/// Files that may be longer, each with the reason.
const LONGER_FILES: &[(&str, &str)] = &[
    ("src/board/tests/reading.rs", "tests of one reader, which share their boards"),
    ("src/knowledge/model.rs", "declarations alone, one after another"),
    ("src/netlist/scan.rs", "one automaton, whose states belong together"),
    ("src/netlist/tests.rs", "tests of one reader, which share their texts"),
];

/// What stands in the project's folder, beside the hidden files of tools; anything else belongs elsewhere.
const TOP_LEVEL: &[&str] = &[
    ".ci",
    ".pre-commit-hooks.yaml",
    "Cargo.lock",
    "Cargo.toml",
    "DEVELOPERS.md",
    "LICENSE-APACHE",
    "LICENSE-MIT",
    "README.md",
    "benches",
    "clippy.toml",
    "examples",
    "fuzz",
    "rules",
    "rustfmt.toml",
    "src",
    "tests",
];

/// Whether a source file holds tests alone.
fn is_test_file(file: &str) -> bool {
    file.contains("/tests/") || file.ends_with("/tests.rs")
}

/// The lines of a source file ahead of its inline tests.
fn code(file: &str) -> Vec<String> {
    let lines: Vec<String> = text(file).lines().map(str::to_owned).collect();
    let tests = lines.windows(2).position(|pair| pair[0] == "#[cfg(test)]" && pair[1].starts_with("mod tests {"));
    lines[..tests.unwrap_or(lines.len())].to_vec()
}

fn sources() -> Vec<String> {
    let mut sources = files("src");
    sources.retain(|file| file.ends_with(".rs"));
    sources
}

#[test]
fn each_room_uses_only_those_before_it() {
    let rooms = rooms();
    let place = |room: &str| rooms.iter().position(|known| known == room);
    let path = regex::Regex::new(r"\bcrate::(\{|\w+)").unwrap();
    let mut wrong = Vec::new();
    for file in sources().iter().filter(|file| !is_test_file(file)) {
        let Some(room) = file.strip_prefix("src/").and_then(|path| path.split_once('/')).map(|(room, _)| room) else {
            continue;
        };
        let own = place(room).unwrap_or_else(|| panic!("the room `{room}` is not listed in src/lib.rs"));
        for (number, line) in code(file).iter().enumerate() {
            let line = line.split("//").next().unwrap();
            for found in path.captures_iter(line) {
                // A group would hide the room from this test.
                if place(&found[1]).is_none_or(|other| other > own) {
                    wrong.push(format!("{file}:{}: {}", number + 1, line.trim()));
                }
            }
        }
    }
    assert!(wrong.is_empty(), "against the flow, or not one room a line:\n{}", wrong.join("\n"));
}

#[test]
fn files_are_short() {
    let mut wrong = Vec::new();
    for file in sources() {
        let lines = code(&file).len();
        let excused = LONGER_FILES.iter().any(|(longer, reason)| *longer == file && !reason.is_empty());
        if (lines > LONGEST_FILE) != excused {
            wrong.push(format!("{file} has {lines} lines{}", if excused { " and needs no excuse" } else { "" }));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn functions_are_short() {
    let head = regex::Regex::new(r"^( *)(?:pub(?:\([^)]*\))? )?(?:const )?fn (\w+)").unwrap();
    let mut wrong = Vec::new();
    for file in sources().iter().filter(|file| !is_test_file(file)) {
        let lines = code(file);
        for (number, line) in lines.iter().enumerate() {
            let Some(found) = head.captures(line) else { continue };
            // The formatter sets the closing brace under the `fn`, but for what fits on one line.
            let close = format!("{}}}", &found[1]);
            let is_one_line = line.ends_with('}') || line.ends_with(';');
            let rest = if is_one_line { 0 } else { lines[number..].iter().position(|line| *line == close).unwrap() };
            let length = rest + 1;
            if length > LONGEST_FUNCTION {
                wrong.push(format!("{file}:{}: `{}` has {length} lines", number + 1, &found[2]));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn the_manifest_forbids_unsafe_code_and_names_the_chosen_crates() {
    let manifest: toml_edit::DocumentMut = text("Cargo.toml").parse().unwrap();
    assert_eq!(manifest["lints"]["rust"]["unsafe_code"].as_str(), Some("forbid"));
    for (table, name) in [
        ("dependencies", "clap"),
        ("dependencies", "miette"),
        ("dependencies", "petgraph"),
        ("dependencies", "serde_json"),
        ("dependencies", "sexp"),
        ("dev-dependencies", "insta"),
    ] {
        assert!(manifest[table].as_table().unwrap().contains_key(name), "{name} is no dependency");
    }
    assert_eq!(manifest["package"]["license"].as_str(), Some("MIT OR Apache-2.0"));
}

#[test]
fn nothing_stands_in_the_project_folder_that_belongs_elsewhere() {
    let files = files("");
    let strange: BTreeSet<&str> = files
        .iter()
        .map(|file| file.split('/').next().unwrap())
        .filter(|entry| !TOP_LEVEL.contains(entry) && !entry.starts_with('.'))
        .collect();
    assert!(strange.is_empty(), "{strange:?}");
}

#[test]
fn the_project_speaks_of_itself_alone() {
    // Cut in two, so that this file does not hold them.
    let words = [
        concat!("/wo", "rk/"),
        concat!("/far", "m/"),
        concat!("../sha", "red"),
        concat!("DES", "IGN.md"),
        concat!("JUDGE", "MENT"),
        concat!("this ses", "sion"),
        concat!("crates", ".io"),
        concat!("py", "pi.org"),
        concat!("np", "mjs"),
    ];
    let mut wrong = Vec::new();
    // What builds and editors leave is not the project's; the lock file names where crates come from.
    let own = |file: &&String| TOP_LEVEL.contains(&file.split('/').next().unwrap()) && *file != "Cargo.lock";
    for file in files("").iter().filter(own) {
        // A clone with the shared data beside it is what the script is made for.
        let allowed = |word: &str| file == ".ci/run" && word.starts_with("..");
        let Ok(text) = std::fs::read_to_string(crate::project::root().join(file)) else { continue };
        for (number, line) in text.lines().enumerate() {
            for word in words.iter().filter(|word| line.contains(**word) && !allowed(word)) {
                wrong.push(format!("{file}:{} speaks of {word}", number + 1));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

fn is_kebab(name: &str) -> bool {
    !name.is_empty()
        && name.split('-').all(|part| {
            !part.is_empty() && part.bytes().all(|byte| byte.is_ascii_lowercase() || byte.is_ascii_digit())
        })
}

fn check_files() -> BTreeMap<String, toml_edit::DocumentMut> {
    let checks: BTreeMap<String, _> = files("rules/checks")
        .iter()
        .filter_map(|file| file.strip_suffix("/check.toml"))
        .map(|folder| (folder.to_owned(), text(&format!("{folder}/check.toml")).parse().unwrap()))
        .collect();
    assert!(checks.len() >= 8);
    checks
}

#[test]
fn every_check_has_a_kebab_case_name_of_its_own_and_cases_of_both_kinds() {
    let rules = files("rules/checks");
    let mut wrong = Vec::new();
    let mut names = BTreeSet::new();
    for (folder, check) in check_files() {
        let name = check["name"].as_str().unwrap().to_owned();
        if !is_kebab(&name) || folder != format!("rules/checks/{name}") || !names.insert(name.clone()) {
            wrong.push(format!("{folder}: the name {name}"));
        }
        for kind in ["bad", "good"] {
            let mut cases = rules.iter().filter(|file| file.starts_with(&format!("{folder}/{kind}-")));
            if !cases.any(|file| file.ends_with(".net")) {
                wrong.push(format!("{folder}: no {kind} case"));
            }
        }
    }
    for file in &rules {
        let folder = file.rsplit_once('/').unwrap().0;
        if !rules.contains(&format!("{folder}/check.toml")) {
            wrong.push(format!("{file}: its folder is no check"));
        }
        let stem = file.rsplit('/').next().unwrap().split('.').next().unwrap();
        if !is_kebab(stem) {
            wrong.push(format!("{file}: not kebab-case"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

/// Every sentence of a check with where it stands: its messages, and the lines of its hints.
fn sentences(check: &toml_edit::Table) -> Vec<(String, String)> {
    let mut found = Vec::new();
    let texts = |table: &dyn toml_edit::TableLike, key: &str, found: &mut Vec<(String, String)>| {
        if let Some(says) = table.get("says") {
            match says.as_table_like() {
                Some(says) => found.extend(
                    says.iter().map(|(verdict, text)| (format!("says.{verdict}"), text.as_str().unwrap().to_owned())),
                ),
                None => found.push(("says".to_owned(), says.as_str().unwrap().to_owned())),
            }
        }
        let lines = table.get("hints").and_then(|hints| if key.is_empty() { Some(hints) } else { hints.get(key) });
        for line in lines.and_then(|lines| lines.as_array()).into_iter().flatten() {
            found.push(("hints".to_owned(), line.as_str().unwrap().to_owned()));
        }
    };
    texts(check, "lines", &mut found);
    for rule in check.get("requires").and_then(|rules| rules.as_array_of_tables()).into_iter().flatten() {
        texts(rule, "", &mut found);
    }
    found
}

#[test]
fn messages_begin_small_and_have_no_full_stop() {
    let mut wrong = Vec::new();
    let mut count = 0;
    for (folder, check) in check_files() {
        for (place, sentence) in sentences(check.as_table()) {
            count += 1;
            let begins = sentence.starts_with(|first: char| first == '{' || first.is_lowercase());
            if !begins || sentence.ends_with(['.', '!']) || sentence != sentence.trim() {
                wrong.push(format!("{folder} {place}: {sentence}"));
            }
        }
        let asks = check["asks"].as_str().unwrap();
        if !asks.ends_with('?') || !asks.starts_with(char::is_uppercase) {
            wrong.push(format!("{folder} asks: {asks}"));
        }
    }
    assert!(count >= 30, "{count}");
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_figure_has_a_snake_case_name_of_its_own_and_says_what_it_means() {
    let mut known = BTreeSet::new();
    for definition in DEFINITIONS.iter().flat_map(|file| file.iter()) {
        let name = definition.name;
        let allowed = |byte: u8| byte.is_ascii_lowercase() || byte.is_ascii_digit() || byte == b'_';
        assert!(name.starts_with(|first: char| first.is_ascii_lowercase()) && name.bytes().all(allowed), "{name}");
        assert!(known.insert((definition.of, name)), "{name} is defined twice");
        assert!(!definition.meaning.is_empty() && !definition.meaning.ends_with('.'), "{name}");
        assert!(crate::project::root().join(definition.defined_in).is_file(), "{name}: {}", definition.defined_in);
        if let ValueKind::Word(words) = definition.kind {
            assert!(words.iter().all(|word| is_kebab(word)), "{name}: {words:?}");
        }
    }
    assert!(known.len() >= 50);
}

#[test]
fn every_rule_file_names_its_sources() {
    let mut wrong = Vec::new();
    let mut count = 0;
    let rules = files("rules");
    for file in rules.iter().filter(|file| file.ends_with(".toml")) {
        if file.starts_with("rules/checks/") && !file.ends_with("/check.toml") {
            continue;
        }
        count += 1;
        let document: toml_edit::DocumentMut = text(file).parse().unwrap();
        let sources = document.get("sources").and_then(|sources| sources.as_array_of_tables());
        let named = |source: &toml_edit::Table| {
            let filled =
                |key: &str| source.get(key).and_then(|text| text.as_str()).is_some_and(|text| text.len() > 3);
            filled("title") || source.get("common_practice").and_then(|flag| flag.as_bool()) == Some(true)
        };
        if !sources.is_some_and(|sources| !sources.is_empty() && sources.iter().all(named)) {
            wrong.push(file.as_str());
        }
    }
    assert!(count >= 150, "{count}");
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}
