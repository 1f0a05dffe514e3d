//! The JSON Schemas that editors take: kept current, and held against what the reader takes and what the program writes.
//! The validator here knows just the words that the schemas use; another one holds them where it is installed.

use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;

use serde_json::Value;

use railworthy::board::{Board, Options};
use railworthy::source::Source;

use crate::program::run;
use crate::project::root;

fn schema(name: &str) -> Value {
    let printed = run(root(), &["schema", name]);
    assert_eq!(printed.status, Some(0), "{}", printed.err);
    serde_json::from_str(&printed.out).unwrap()
}

/// What of a value does not fit a schema, as `path: why`.
fn misfits(root: &Value, schema: &Value, value: &Value, path: &str, told: &mut Vec<String>) {
    if let Some(name) = schema["$ref"].as_str() {
        return misfits(root, root.pointer(name.trim_start_matches('#')).unwrap(), value, path, told);
    }
    if let Some(all) = schema["anyOf"].as_array() {
        let fits = all.iter().any(|one| {
            let mut inner = Vec::new();
            misfits(root, one, value, path, &mut inner);
            inner.is_empty()
        });
        if !fits {
            told.push(format!("{path}: {value} fits none"));
        }
        return;
    }
    let kind = match value {
        Value::Null => "null",
        Value::Bool(_) => "boolean",
        Value::Number(number) if number.is_u64() || number.is_i64() => "integer",
        Value::Number(_) => "number",
        Value::String(_) => "string",
        Value::Array(_) => "array",
        Value::Object(_) => "object",
    };
    let is = |wanted: &str| wanted == kind || (wanted == "number" && kind == "integer");
    let fits = match &schema["type"] {
        Value::Null => true,
        Value::String(wanted) => is(wanted),
        several => several.as_array().unwrap().iter().any(|wanted| is(wanted.as_str().unwrap())),
    };
    if !fits {
        told.push(format!("{path}: a {kind}"));
    }
    if schema["enum"].as_array().is_some_and(|words| !words.contains(value)) {
        told.push(format!("{path}: {value} is no such word"));
    }
    if schema.get("const").is_some_and(|only| only != value) {
        told.push(format!("{path}: {value} is not {}", schema["const"]));
    }
    if let Some(map) = value.as_object() {
        for key in schema["required"].as_array().into_iter().flatten() {
            if !map.contains_key(key.as_str().unwrap()) {
                told.push(format!("{path}: lacks {key}"));
            }
        }
        for (key, inner) in map {
            let path = format!("{path}/{key}");
            match (&schema["properties"][key], &schema["additionalProperties"]) {
                (Value::Null, Value::Bool(false)) => told.push(format!("{path}: not a key")),
                (Value::Null, Value::Null) => {}
                (Value::Null, each) => misfits(root, each, inner, &path, told),
                (known, _) => misfits(root, known, inner, &path, told),
            }
        }
    }
    if let (Some(list), Some(each)) = (value.as_array(), schema.get("items")) {
        for (at, inner) in list.iter().enumerate() {
            misfits(root, each, inner, &format!("{path}/{at}"), told);
        }
    }
}

fn fits(schema: &Value, value: &Value) -> Vec<String> {
    let mut told = Vec::new();
    misfits(schema, schema, value, "", &mut told);
    told
}

/// A TOML file as JSON.
fn toml(text: &str) -> Value {
    fn item(value: &toml_edit::Value) -> Value {
        match value {
            toml_edit::Value::String(text) => Value::from(text.value().as_str()),
            toml_edit::Value::Integer(number) => Value::from(*number.value()),
            toml_edit::Value::Float(number) => Value::from(*number.value()),
            toml_edit::Value::Boolean(flag) => Value::from(*flag.value()),
            toml_edit::Value::Datetime(day) => Value::from(day.value().to_string()),
            toml_edit::Value::Array(list) => list.iter().map(item).collect(),
            toml_edit::Value::InlineTable(table) => {
                table.iter().map(|(key, value)| (key.to_owned(), item(value))).collect()
            }
        }
    }
    fn table_of(table: &toml_edit::Table) -> Value {
        let entries = table.iter().map(|(key, value)| {
            let value = match value {
                toml_edit::Item::Value(value) => item(value),
                toml_edit::Item::Table(inner) => table_of(inner),
                toml_edit::Item::ArrayOfTables(all) => all.iter().map(table_of).collect(),
                toml_edit::Item::None => Value::Null,
            };
            (key.to_owned(), value)
        });
        entries.collect()
    }
    table_of(text.parse::<toml_edit::DocumentMut>().unwrap().as_table())
}

fn files(folder: &Path, end: &str) -> Vec<PathBuf> {
    let mut found: Vec<PathBuf> = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    found.retain(|path| path.to_string_lossy().ends_with(end));
    found.sort();
    found
}

#[test]
fn the_schemas_in_the_rules_folder_are_those_that_the_program_prints() {
    let listed = run(root(), &["schema"]).out;
    let names: Vec<&str> = listed.lines().filter_map(|line| line.split_whitespace().next()).collect();
    assert_eq!(names, ["board", "check", "part", "device", "result", "rails", "compare"]);
    for name in names {
        let path = root().join(format!("rules/schemas/{name}.schema.json"));
        let printed = run(root(), &["schema", name]).out;
        if std::env::var_os("RAILWORTHY_UPDATE").is_some() {
            fs::write(&path, &printed).unwrap();
        }
        let kept = fs::read_to_string(&path).unwrap();
        assert!(kept == printed, "{} is not current, run this test with RAILWORTHY_UPDATE=1", path.display());
    }
}

#[test]
fn every_file_of_the_rules_and_every_board_file_fits_its_schema() {
    let (board, check, part, device) = (schema("board"), schema("check"), schema("part"), schema("device"));
    let mut wrong = Vec::new();
    let mut held = 0;
    let mut hold = |schema: &Value, path: &Path| {
        held += 1;
        let told = fits(schema, &toml(&fs::read_to_string(path).unwrap()));
        wrong.extend(told.into_iter().map(|why| format!("{}{why}", path.file_name().unwrap().to_string_lossy())));
    };
    for path in files(&root().join("rules/parts"), ".toml") {
        hold(&part, &path);
    }
    for path in files(&root().join("rules/devices"), ".toml") {
        hold(&device, &path);
    }
    for folder in files(&root().join("rules/checks"), "") {
        hold(&check, &folder.join("check.toml"));
        files(&folder, ".railworthy.toml").iter().for_each(|path| hold(&board, path));
    }
    files(&root().join("examples"), ".railworthy.toml").iter().for_each(|path| hold(&board, path));
    assert!(wrong.is_empty(), "{wrong:#?}");
    assert!(held > 300, "{held}");
}

/// The keys that the reader names where it meets one that it does not know.
fn keys_of_the_reader(text: &str, table: &str) -> BTreeSet<String> {
    let (_, problems) = Board::read(&Source::new("x.railworthy.toml", text), Options { shared: false, case: true });
    let start = format!("keys {table}: ");
    let named = problems.iter().filter_map(|problem| problem.advice()?.strip_prefix(&start).map(str::to_owned));
    let named: Vec<String> = named.collect();
    assert_eq!(named.len(), 1, "{text}: {problems:?}");
    named[0].split(", ").map(str::to_owned).collect()
}

#[test]
fn the_schema_of_a_board_file_has_the_keys_of_the_reader() {
    let schema = schema("board");
    let keys = |pointer: &str| -> BTreeSet<String> {
        schema.pointer(pointer).unwrap().as_object().unwrap().keys().cloned().collect()
    };
    let strange = "zzqqxxyyzzqq = 1\n";
    assert_eq!(keys("/properties"), keys_of_the_reader(strange, "here"));
    for (table, needed) in [("board", ""), ("rules", "")] {
        let text = format!("[{table}]\n{needed}{strange}");
        let properties = format!("/properties/{table}/properties");
        assert_eq!(keys(&properties), keys_of_the_reader(&text, &format!("in `{table}`")), "{table}");
    }
    let accept = "check = \"headroom\"\nreason = \"as measured\"\npart = \"U1\"\n";
    for (table, needed) in
        [("supply", "net = \"A\"\n"), ("load", "net = \"A\"\n"), ("rail", "net = \"A\"\n"), ("accept", accept)]
    {
        let text = format!("[[{table}]]\n{needed}{strange}");
        let properties = format!("/properties/{table}/items/properties");
        assert_eq!(keys(&properties), keys_of_the_reader(&text, &format!("in `{table}`")), "{table}");
    }
    let text = format!("[[part]]\nref = \"U1\"\n{strange}");
    assert_eq!(keys("/properties/part/items/properties"), keys_of_the_reader(&text, "in `part`"));
}

#[test]
fn what_the_program_writes_fits_its_schemas() {
    let (result, rails, compare) = (schema("result"), schema("rails"), schema("compare"));
    let folder = tempfile::tempdir().unwrap();
    let netlist = fs::read_to_string(root().join("examples/gauge-draft.net")).unwrap();
    fs::write(folder.path().join("damaged.net"), &netlist[..netlist.len() / 2]).unwrap();
    fs::write(folder.path().join("bare.net"), &netlist).unwrap();
    for (place, board) in [
        (root(), "examples/gauge-draft.net"),
        (root(), "examples/gauge-release.net"),
        (folder.path(), "damaged.net"),
        (folder.path(), "bare.net"),
        (folder.path(), "none.net"),
    ] {
        let written = run(place, &["check", "--format", "json", board]).out;
        assert_eq!(fits(&result, &serde_json::from_str(&written).unwrap()), Vec::<String>::new(), "{board}");
        let written = run(place, &["rails", "--format", "json", board]).out;
        assert_eq!(fits(&rails, &serde_json::from_str(&written).unwrap()), Vec::<String>::new(), "{board}");
        let released = root().join("examples/gauge-release.net");
        let written = run(place, &["compare", released.to_str().unwrap(), board, "--format", "json"]).out;
        assert_eq!(fits(&compare, &serde_json::from_str(&written).unwrap()), Vec::<String>::new(), "{board}");
    }
}

#[test]
fn a_misspelt_key_or_word_does_not_fit() {
    let board = schema("board");
    let told = fits(&board, &toml("[[load]]\nnet = \"+5V\"\ncurent = \"1 A\"\nkind = \"steady\"\n[[rail]]\n"));
    assert_eq!(told.len(), 3, "{told:?}");
}

#[test]
fn an_independent_validator_takes_the_schemas() {
    let Some(validator) = std::env::var_os("RAILWORTHY_JSONSCHEMA") else {
        crate::shared::tell_skipped("RAILWORTHY_JSONSCHEMA names no check-jsonschema program");
        return;
    };
    let schemas = files(&root().join("rules/schemas"), ".json");
    assert_eq!(schemas.len(), 7);
    let meta = Command::new(&validator).arg("--check-metaschema").args(&schemas).output().unwrap();
    assert!(meta.status.success(), "{}", String::from_utf8_lossy(&meta.stdout));
    let board = root().join("rules/schemas/board.schema.json");
    let boards = files(&root().join("examples"), ".railworthy.toml");
    let held = Command::new(&validator).arg("--schemafile").arg(board).args(boards).output().unwrap();
    assert!(held.status.success(), "{}", String::from_utf8_lossy(&held.stdout));
}

#[test]
fn completions_and_manual_pages_tell_of_every_command_and_option() {
    let help = run(root(), &["--help"]).out;
    let commands: Vec<&str> = help
        .lines()
        .skip_while(|line| *line != "Commands:")
        .skip(1)
        .take_while(|line| !line.is_empty())
        .filter_map(|line| line.split_whitespace().next())
        .collect();
    assert!(commands.len() >= 9, "{commands:?}");
    let page = run(root(), &["manual"]).out;
    for shell in ["bash", "zsh", "fish", "powershell", "elvish"] {
        let script = run(root(), &["completions", shell]);
        assert_eq!(script.status, Some(0), "{}", script.err);
        for command in &commands {
            assert!(script.out.contains(command), "{shell}: {command}");
        }
        assert!(script.out.contains("fail-on"), "{shell}");
    }
    for command in &commands {
        assert!(page.contains(command), "{command}");
        let own = run(root(), &["manual", command]);
        assert!(own.status == Some(0) && own.out.starts_with(".ie"), "{command}: {}", own.err);
        assert!(own.out.contains(&format!(".TH railworthy-{command} 1")), "{command}: {}", own.out);
    }
    assert_eq!(run(root(), &["manual", "chek"]).status, Some(2));
    assert_eq!(run(root(), &["schema", "bord"]).status, Some(2));
}
