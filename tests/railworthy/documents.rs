//! The documents: what they show is what the tool does, what they print can be used as it stands.

use std::collections::BTreeMap;
use std::fmt::Write;
use std::fs;
use std::path::Path;

use railworthy::board::{self, Board, ModelKind, Options};
use railworthy::checks::{Checks, DefinedNames};
use railworthy::cli;
use railworthy::facts::{DEFINITIONS, SubjectKind, ValueKind};
use railworthy::knowledge::{self, Family, FigureKey, Knowledge, Pass, RoleName, Supply, Technology, parameter_unit};
use railworthy::netlist::limits as netlist;
use railworthy::quantity::Dimension;
use railworthy::report;
use railworthy::review::REVIEW_CHECKS;
use railworthy::source::{Problem, Source};

use crate::program::run;
use crate::project::{files, rooms, root, text};

/// Set to anything, has the tests write the generated parts in place of comparing them.
const UPDATE: &str = "RAILWORTHY_UPDATE";

/// The text of a document with its generated parts as they should be.
fn regenerated(document: &str, parts: &[(&str, String)]) -> String {
    let mut text = text(document);
    for (name, wanted) in parts {
        let open = format!("<!-- generated: {name} -->\n");
        let start = text.find(&open).unwrap_or_else(|| panic!("{document} has no part `{name}`")) + open.len();
        let length = text[start..].find("<!-- end -->").unwrap_or_else(|| panic!("`{name}` does not end"));
        text.replace_range(start..start + length, wanted);
    }
    let marked = text.matches("<!-- generated: ").count();
    // The one more is the sentence that tells of them.
    assert!(marked == parts.len() || marked == parts.len() + 1, "{document} has parts that nothing generates");
    text
}

fn hold(document: &str, parts: &[(&str, String)]) {
    let wanted = regenerated(document, parts);
    if std::env::var_os(UPDATE).is_some() {
        fs::write(root().join(document), wanted).unwrap();
        return;
    }
    let (wanted, found) = (wanted.lines(), text(document));
    let strange = found.lines().zip(wanted).find(|(found, wanted)| found != wanted);
    assert!(strange.is_none(), "{document} is not current, run this test with {UPDATE}=1: {strange:#?}");
    assert_eq!(found, regenerated(document, parts), "{document} is not current, run this test with {UPDATE}=1");
}

/// What the program prints in the project's folder.
fn printed(arguments: &[&str]) -> String {
    run(root(), arguments).out
}

#[test]
fn the_readme_shows_what_the_tool_prints() {
    let draft = printed(&["check", "examples/gauge-draft.net"]);
    let findings: Vec<&str> = draft.split("\n\n").collect();
    let (first, last) = (findings[..3].join("\n\n"), findings.last().unwrap().trim_end());
    let command = "$ railworthy check examples/gauge-draft.net";
    let run = format!("```console\n{command}\n{first}\n\n  …\n\n{last}\n```\n");
    let help = printed(&["-h"]);
    let commands = help.lines().skip_while(|line| *line != "Commands:").skip(1).take_while(|line| !line.is_empty());
    let commands: String = commands.map(|line| format!("{line}\n")).collect();
    hold("README.md", &[("run", run), ("commands", format!("```text\n{commands}```\n")), ("checks", check_names())]);
}

fn checks() -> Checks {
    let (checks, problems) = Checks::load(&Knowledge::built_in().checks, &DefinedNames);
    assert!(problems.is_empty());
    checks
}

/// The names of the checks, a line for each group.
fn check_names() -> String {
    let checks = checks();
    let mut groups: BTreeMap<&str, Vec<String>> = BTreeMap::new();
    for check in checks.iter() {
        let group = check.group.as_deref().unwrap_or_else(|| panic!("{} is in no group", check.name));
        groups.entry(group).or_default().push(format!("`{}`", check.name));
    }
    for check in REVIEW_CHECKS {
        groups.entry(check.group).or_default().push(format!("`{}`", check.name));
    }
    groups.iter().map(|(group, names)| format!("- {group}: {}\n", names.join(", "))).collect()
}

fn checks_table() -> String {
    let checks = checks();
    let mut table = String::from("| check | question | settings |\n| --- | --- | --- |\n");
    for check in checks.iter() {
        let settings: Vec<String> =
            check.settings_text.iter().map(|(name, value)| format!("`{name} = \"{value}\"`")).collect();
        let _ = writeln!(table, "| `{}` | {} | {} |", check.name, check.asks, settings.join(", "));
    }
    for check in REVIEW_CHECKS {
        let _ = writeln!(table, "| `{}` | {} |  |", check.name, check.asks);
    }
    table
}

#[test]
fn the_tables_for_developers_are_those_of_the_code() {
    let list = |names: Vec<&str>| {
        let names: Vec<String> = names.iter().map(|name| format!("`{name}`")).collect();
        format!("{}\n", names.join(", "))
    };
    let mut others = String::from("| technology file | unit | meaning |\n| --- | --- | --- |\n");
    others += &figure_rows(Technology::FIGURES, "");
    others += &figure_rows(Technology::TABLES, "tables.");
    others += "\n| supply file | unit | meaning |\n| --- | --- | --- |\n";
    others += &figure_rows(Supply::FIGURES, "");
    let part = format!("| key | unit | meaning |\n| --- | --- | --- |\n{}", figure_rows(Family::FIGURES, ""));
    hold(
        "DEVELOPERS.md",
        &[
            ("checks", checks_table()),
            ("roles", list(RoleName::ALL.iter().map(|(_, name)| *name).collect())),
            ("pass", list(Pass::ALL.iter().map(|(_, name)| *name).collect())),
            ("part-figures", part),
            ("other-figures", others),
            ("figures", figures()),
            ("models", models()),
            ("model-units", model_units()),
            ("limits", limits()),
        ],
    );
}

fn unit(dimension: Dimension) -> String {
    if dimension == Dimension::ONE { "–".to_owned() } else { dimension.to_string() }
}

fn figure_rows(keys: &[FigureKey], prefix: &str) -> String {
    keys.iter()
        .map(|(key, dimension, meaning)| format!("| `{prefix}{key}` | {} | {meaning} |\n", unit(*dimension)))
        .collect()
}

fn figures() -> String {
    let mut tables = String::new();
    for (of, name) in SubjectKind::ALL {
        let entries: Vec<_> =
            DEFINITIONS.iter().flat_map(|file| file.iter()).filter(|entry| entry.of == *of).collect();
        if entries.is_empty() {
            continue;
        }
        if !tables.is_empty() {
            tables.push('\n');
        }
        let _ = writeln!(tables, "| of a {name} | | meaning | in `src/facts/` |\n| --- | --- | --- | --- |");
        for entry in entries {
            let (kind, words) = match entry.kind {
                ValueKind::Figure(dimension) => (unit(dimension), String::new()),
                ValueKind::Word([]) => ("name".to_owned(), String::new()),
                ValueKind::Word(words) => ("word".to_owned(), format!(": `{}`", words.join("`, `"))),
                ValueKind::Flag => ("flag".to_owned(), String::new()),
                ValueKind::Group(_) => ("group".to_owned(), String::new()),
            };
            let file = entry.defined_in.rsplit(['/', '\\']).next().unwrap();
            let _ = writeln!(tables, "| `{}` | {kind} | {}{words} | `{file}` |", entry.name, entry.meaning);
        }
    }
    tables
}

/// A number with its thousands apart.
fn grouped(count: usize) -> String {
    let digits = count.to_string();
    let groups: Vec<&str> =
        digits.as_bytes().rchunks(3).rev().map(|group| std::str::from_utf8(group).unwrap()).collect();
    groups.join(" ")
}

fn limits() -> String {
    let size = |bytes: usize| format!("{} MiB", bytes >> 20);
    let large = |bytes: u64| size(usize::try_from(bytes).unwrap());
    let rows = [
        ("netlist", "`netlist::limits::MAX_BYTES`", size(netlist::MAX_BYTES)),
        ("nesting in a netlist", "`netlist::limits::MAX_DEPTH`", grouped(netlist::MAX_DEPTH)),
        ("components", "`netlist::limits::MAX_COMPONENTS`", grouped(netlist::MAX_COMPONENTS)),
        ("library parts", "`netlist::limits::MAX_PARTS`", grouped(netlist::MAX_PARTS)),
        ("nets", "`netlist::limits::MAX_NETS`", grouped(netlist::MAX_NETS)),
        ("pins on nets", "`netlist::limits::MAX_NODES`", grouped(netlist::MAX_NODES)),
        ("texts and lists in one entry", "`netlist::limits::MAX_ITEMS`", grouped(netlist::MAX_ITEMS)),
        ("fields of a component", "`netlist::limits::MAX_FIELDS`", grouped(netlist::MAX_FIELDS)),
        ("attributes of an XML element", "`netlist::limits::MAX_ATTRIBUTES`", grouped(netlist::MAX_ATTRIBUTES)),
        (
            "errors, and warnings, of a board told one by one",
            "`netlist::limits::MAX_PROBLEMS`",
            grouped(netlist::MAX_PROBLEMS),
        ),
        ("board file", "`board::LARGEST_FILE`", large(board::LARGEST_FILE)),
        ("file of a rule folder", "`knowledge::LARGEST_RULE_FILE`", large(knowledge::LARGEST_RULE_FILE)),
        ("all rule folders of a board", "`knowledge::LARGEST_RULES`", large(knowledge::LARGEST_RULES)),
        ("entries of one rule folder", "`knowledge::MOST_RULE_FILES`", grouped(knowledge::MOST_RULE_FILES)),
        ("depth of folders below one that is named", "`cli::DEEPEST_FOLDER`", grouped(cli::DEEPEST_FOLDER)),
        ("files and folders below one that is named", "`cli::MOST_ENTRIES`", grouped(cli::MOST_ENTRIES)),
        ("boards below one that is named", "`cli::MOST_BOARDS`", grouped(cli::MOST_BOARDS)),
        (
            "variants and second sources judged",
            "`review::MOST_ASSEMBLIES`",
            grouped(railworthy::review::MOST_ASSEMBLIES),
        ),
        ("characters of a comment in Markdown", "`report::LONGEST_PAGE`", grouped(report::LONGEST_PAGE)),
    ];
    let rows = rows.iter().map(|(what, name, most)| format!("| {what} | {most} | {name} |\n"));
    format!("| of | at most | constant |\n| --- | --- | --- |\n{}", rows.collect::<String>())
}

fn models() -> String {
    let mut table = String::from("| kind | parameters |\n| --- | --- |\n");
    // Kinds with the same parameters share a row, in the order of the code.
    let mut rows: Vec<(Vec<&str>, String)> = Vec::new();
    for (kind, name) in ModelKind::ALL {
        let parameters = kind.parameters().iter().map(|(name, _)| *name).collect::<Vec<_>>().join(" ");
        match rows.iter_mut().find(|(_, known)| *known == parameters) {
            Some((names, _)) => names.push(name),
            None => rows.push((vec![name], parameters)),
        }
    }
    for (names, parameters) in rows {
        let _ = writeln!(table, "| `{}` | `{parameters}` |", names.join("`, `"));
    }
    table
}

/// The units in which device files state the parameters.
fn model_units() -> String {
    let mut by_unit: BTreeMap<&str, Vec<&str>> = BTreeMap::new();
    for (name, _) in ModelKind::ALL.iter().flat_map(|(kind, _)| kind.parameters()) {
        let names = by_unit.entry(parameter_unit(name).0).or_default();
        if !names.contains(name) {
            names.push(name);
        }
    }
    let rows = by_unit.iter().map(|(unit, names)| {
        let unit = if unit.is_empty() { "–" } else { unit };
        format!("| {unit} | `{}` |\n", names.join(" "))
    });
    format!("| unit | parameters |\n| --- | --- |\n{}", rows.collect::<String>())
}

#[test]
fn the_map_lists_every_room_in_the_order_of_the_flow() {
    let developers = text("DEVELOPERS.md");
    let listed: Vec<String> = developers
        .lines()
        .skip_while(|line| *line != "## The rooms")
        .take_while(|line| *line != "## What must stay true")
        .filter_map(|line| line.strip_prefix("| `")?.split_once('`').map(|(room, _)| room.to_owned()))
        .collect();
    assert_eq!(listed, rooms());
}

/// The TOML blocks of a document.
fn blocks(document: &str) -> Vec<String> {
    let text = text(document);
    let blocks: Vec<String> = text
        .split("\n```toml\n")
        .skip(1)
        .map(|rest| rest.split("\n```\n").next().unwrap().to_owned() + "\n")
        .collect();
    assert!(!blocks.is_empty(), "{document}");
    blocks
}

fn messages(problems: &[Problem]) -> Vec<String> {
    problems.iter().map(|problem| problem.message().to_owned()).collect()
}

/// Writes a check, a part file or a device file into a rules folder, where the README has it.
fn save(folder: &Path, block: &str) -> Option<String> {
    let top = || block.lines().take_while(|line| !line.starts_with('['));
    let value = |key: &str| {
        let is_key = |line: &&str| line.strip_prefix(key).is_some_and(|rest| rest.trim_start().starts_with('='));
        top().find(is_key)?.split('"').nth(1)
    };
    if let Some(device) = value("device") {
        let path = folder.join("devices/one.toml");
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, block).unwrap();
        return Some(device.to_owned());
    }
    let (file, name) = match (value("family"), value("holds")) {
        (Some(family), None) => ("parts/one.toml".to_owned(), family),
        (None, Some(_)) => (format!("checks/{}/check.toml", value("name")?), value("name")?),
        _ => return None,
    };
    let path = folder.join(file);
    fs::create_dir_all(path.parent().unwrap()).unwrap();
    fs::write(path, block).unwrap();
    Some(name.to_owned())
}

#[test]
fn every_file_that_the_documents_print_is_read_without_a_problem() {
    let mut kinds: BTreeMap<&str, usize> = BTreeMap::new();
    for block in blocks("README.md").into_iter().chain(blocks("DEVELOPERS.md")) {
        let folder = tempfile::tempdir().unwrap();
        if let Some(name) = save(folder.path(), &block) {
            let (knowledge, problems) = Knowledge::load(&[folder.path().to_owned()]);
            assert_eq!(messages(&problems), Vec::<String>::new(), "{name}");
            let (checks, problems) = Checks::load(&knowledge.checks, &DefinedNames);
            assert_eq!(messages(&problems), Vec::<String>::new(), "{name}");
            let device = knowledge.devices.iter().any(|device| device.name == name);
            assert!(checks.get(&name).is_some() || knowledge.family(&name).is_some() || device, "{name}");
            *kinds.entry("rule").or_default() += 1;
        } else {
            let (mut board, problems) = Board::read(&Source::new("board.toml", block.as_str()), Options::default());
            assert_eq!(messages(&problems), Vec::<String>::new(), "{block}");
            assert_eq!(messages(&board.resolve(Knowledge::shared())), Vec::<String>::new(), "{block}");
            *kinds.entry("board").or_default() += 1;
        }
    }
    assert!(kinds["rule"] >= 4 && kinds["board"] >= 1, "{kinds:?}");
}

#[test]
fn the_check_and_the_part_of_the_readme_work_as_printed() {
    let folder = tempfile::tempdir().unwrap();
    let readme = text("README.md");
    let mut saved = Vec::new();
    for told in readme.split("Save this as `").skip(1) {
        let (file, rest) = told.split_once('`').unwrap();
        let block = rest.split_once("```toml\n").unwrap().1.split_once("```\n").unwrap().0;
        let path = folder.path().join(file);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, block).unwrap();
        saved.push((file.to_owned(), block.to_owned()));
    }
    let files: Vec<&str> = saved.iter().map(|(file, _)| file.as_str()).collect();
    assert_eq!(files, ["house/checks/one-microfarad/check.toml", "house/parts/qx10.toml"]);
    let lines = saved[0].1.lines().filter(|line| !line.is_empty()).count();
    assert!(lines < 15, "the check has {lines} lines");
    assert!(readme.contains("railworthy check --rules house board.net"));

    let house = folder.path().join("house");
    let judged = |board: &str| run(root(), &["check", "--rules", house.to_str().unwrap(), board]);
    let draft = judged("examples/gauge-draft.net");
    assert_eq!(draft.status, Some(1), "{}", draft.err);
    assert!(draft.out.contains("U1 has 0 F on VBAT, and this house wants 1 µF"), "{}", draft.out);
    let release = judged("examples/gauge-release.net");
    assert_eq!((release.status, release.out.contains("this house")), (Some(0), false), "{}", release.out);
    let asked =
        |text: &str| text.split(" requirements").next().unwrap().rsplit(' ').next().unwrap().parse::<u32>().unwrap();
    let without = asked(&printed(&["check", "examples/gauge-release.net"]));
    assert!(asked(&release.out) > without, "the check is asked there too: {}", release.out);

    // The part file makes a part known that was not.
    let netlist = fs::read_to_string(root().join("examples/gauge-release.net")).unwrap();
    fs::write(folder.path().join("board.net"), netlist.replace("LP5907MFX-3.3/NOPB", "QX10-33AAB")).unwrap();
    let rails = run(folder.path(), &["rails", "--rules", "house", "board.net"]);
    assert!(rails.out.contains("taken for QX10 "), "{}", rails.out);
}

/// The names that some source files read from a table.
fn keys(sources: &[&str]) -> Vec<String> {
    let read = regex::Regex::new(
        r#"(?:\.(?:take|text|texts|boolean|table|tables|require)\(|\b(?:table|root), |\b(?:flag|line|farads|figure)\()"([a-z_]+)""#,
    )
    .unwrap();
    let mut keys: Vec<String> = sources
        .iter()
        .flat_map(|file| {
            let text = text(file);
            let found: Vec<String> = read.captures_iter(&text).map(|found| found[1].to_owned()).collect();
            assert!(!found.is_empty(), "{file}");
            found
        })
        .collect();
    keys.sort();
    keys.dedup();
    keys
}

#[test]
fn every_key_of_a_file_that_users_write_is_documented() {
    let board = ["src/board/read.rs", "src/board/read_entries.rs", "src/board/read_part.rs"];
    let rules = [
        "src/knowledge/cite.rs",
        "src/knowledge/demand.rs",
        "src/knowledge/devices/read.rs",
        "src/knowledge/family.rs",
        "src/knowledge/supply.rs",
        "src/knowledge/technology.rs",
        "src/checks/load.rs",
    ];
    for (document, sources, least) in [("README.md", &board[..], 40), ("DEVELOPERS.md", &rules[..], 50)] {
        let (text, keys) = (text(document), keys(sources));
        assert!(keys.len() >= least, "{document}: {keys:?}");
        let told = |key: &String| {
            ["`{}`", "[{}]", "`{} =", "[{}."].iter().any(|form| text.contains(&form.replace("{}", key)))
                || text.lines().any(|line| line.split('=').next().unwrap().trim() == key)
        };
        // What the cases of checks say stands in the other document.
        let missing: Vec<&String> = keys.iter().filter(|key| !told(key) && *key != "expect").collect();
        assert!(missing.is_empty(), "{document} does not tell of {missing:?}");
    }
}

#[test]
fn links_between_documents_lead_somewhere() {
    let link = regex::Regex::new(r"\]\(([^)#]+)\)").unwrap();
    let mut count = 0;
    for document in ["README.md", "DEVELOPERS.md"] {
        for found in link.captures_iter(&text(document)) {
            assert!(root().join(&found[1]).exists(), "{document}: {}", &found[1]);
            count += 1;
        }
    }
    assert!(count >= 3);
    let named = regex::Regex::new(r"`((?:src|tests|examples|rules)/[a-z0-9_/.-]+)`").unwrap();
    let all = files("");
    for document in ["README.md", "DEVELOPERS.md"] {
        for found in named.captures_iter(&text(document)) {
            let place = found[1].trim_end_matches('/');
            assert!(all.iter().any(|file| file.starts_with(place)), "{document} names {place}");
        }
    }
}

#[test]
fn the_two_commands_of_the_readme_are_those_of_the_script() {
    let (readme, script) = (text("README.md"), text(".ci/run"));
    assert!(readme.contains("\ncargo run --release -- check examples/gauge-draft.net\n"));
    assert!(readme.contains("\ncargo test\n") && script.contains("\ncargo test"));
}
