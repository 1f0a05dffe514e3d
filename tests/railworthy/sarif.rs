//! Results as SARIF: what each object holds, that places are those of the file, and that nothing from a file acts.

use std::collections::{BTreeMap, BTreeSet};
use std::fmt::Write;
use std::fs;
use std::path::Path;

use railworthy::review::REVIEW_CHECKS;
use serde_json::Value;
use sha2::{Digest, Sha256};

use super::program::{Run, examples, run, run_with};
use super::sheets::drawn_board;
use super::small_board::{self, Part};

/// A run whose result is read as SARIF.
pub(crate) fn log(folder: &Path, arguments: &[&str]) -> (Value, Run) {
    let all: Vec<&str> = ["check", "--format", "sarif"].iter().chain(arguments).copied().collect();
    let run = run(folder, &all);
    let log = serde_json::from_str(&run.out).unwrap_or_else(|error| panic!("{error}: {}{}", run.out, run.err));
    (log, run)
}

fn results(log: &Value) -> &Vec<Value> {
    log["runs"][0]["results"].as_array().unwrap()
}

fn number(value: &Value) -> usize {
    usize::try_from(value.as_u64().unwrap()).unwrap()
}

/// Every text of a log.
fn texts(value: &Value) -> Vec<&str> {
    let (mut found, mut rest) = (Vec::new(), vec![value]);
    while let Some(value) = rest.pop() {
        match value {
            Value::String(text) => found.push(text.as_str()),
            Value::Array(list) => rest.extend(list),
            Value::Object(map) => rest.extend(map.values()),
            _ => {}
        }
    }
    found
}

/// The demo boards in a project of their own, whatever holds that of the tests.
fn demo() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::create_dir(folder.path().join(".git")).unwrap();
    for name in ["gauge-draft", "gauge-release"] {
        for file in [format!("{name}.net"), format!("{name}.railworthy.toml")] {
            fs::copy(examples().join(&file), folder.path().join(&file)).unwrap();
        }
    }
    folder
}

/// The draft board beside its board file in a folder of its own.
fn copied(folder: &Path, spoil: impl Fn(String) -> String) {
    let text = fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    fs::write(folder.join("gauge.net"), spoil(text)).unwrap();
    fs::copy(examples().join("gauge-draft.railworthy.toml"), folder.join("gauge.railworthy.toml")).unwrap();
}

#[test]
fn the_draft_gauge_has_its_findings_one_a_line() {
    let (log, run) = log(demo().path(), &["gauge-draft.net"]);
    assert_eq!(run.status, Some(1));
    let mut lines = String::new();
    for result in results(&log) {
        let place = &result["locations"][0]["physicalLocation"];
        let (uri, region) = (&place["artifactLocation"]["uri"], &place["region"]);
        let (line, column) = (number(&region["startLine"]), number(&region["startColumn"]));
        let text = result["message"]["text"].as_str().unwrap();
        let _ = writeln!(
            lines,
            "{}:{line}:{column} {} {} {}\n    {text}",
            uri.as_str().unwrap(),
            result["ruleId"].as_str().unwrap(),
            result["level"].as_str().unwrap(),
            result["properties"]["verdict"].as_str().unwrap(),
        );
    }
    insta::assert_snapshot!(lines);
}

#[test]
fn a_result_has_place_names_identity_and_figures() {
    let (log, _) = log(demo().path(), &["gauge-draft.net"]);
    let result = results(&log).iter().find(|result| result["ruleId"] == "esr-window").unwrap();
    let mut result = result.clone();
    // Its place in the list of rules changes with every check that is added.
    result.as_object_mut().unwrap().remove("ruleIndex");
    insta::assert_snapshot!(serde_json::to_string_pretty(&result).unwrap());
}

#[test]
fn a_clean_board_has_a_run_without_results() {
    let (mut log, run) = log(demo().path(), &["gauge-release.net"]);
    assert_eq!(run.status, Some(0));
    let netlist = log["runs"][0]["artifacts"][0].as_object_mut().unwrap();
    let bytes = fs::read(examples().join("gauge-release.net")).unwrap();
    assert_eq!(netlist.remove("length"), Some(bytes.len().into()));
    let hash: String = Sha256::digest(&bytes).iter().map(|byte| format!("{byte:02x}")).collect();
    assert_eq!(netlist.remove("hashes").unwrap()["sha-256"], hash);
    let driver = &mut log["runs"][0]["tool"]["driver"];
    for key in ["version", "semanticVersion"] {
        assert_eq!(driver[key], env!("CARGO_PKG_VERSION"));
        driver[key] = "VERSION".into();
    }
    let rules = driver["rules"].as_array().unwrap().len();
    assert_eq!(rules, rule_names().len());
    driver["rules"].as_array_mut().unwrap().retain(|rule| rule["id"] == "esr-window");
    insta::assert_snapshot!(serde_json::to_string_pretty(&log).unwrap());
}

fn check_names() -> BTreeSet<String> {
    let files = super::project::files("rules/checks");
    let names = files.iter().filter_map(|file| file.strip_prefix("rules/checks/")?.strip_suffix("/check.toml"));
    names.map(str::to_owned).collect()
}

/// The checks of the folders and those of the review.
fn rule_names() -> BTreeSet<String> {
    let review = REVIEW_CHECKS.iter().map(|check| check.name.to_owned());
    check_names().into_iter().chain(review).collect()
}

#[test]
fn every_check_is_a_rule_and_every_result_names_its_own() {
    let (log, _) = log(&examples(), &["gauge-draft.net"]);
    let rules = log["runs"][0]["tool"]["driver"]["rules"].as_array().unwrap();
    let ids: Vec<String> = rules.iter().map(|rule| rule["id"].as_str().unwrap().to_owned()).collect();
    assert_eq!(ids, rule_names().into_iter().collect::<Vec<_>>());
    for rule in rules {
        for text in [&rule["shortDescription"]["text"], &rule["fullDescription"]["text"], &rule["help"]["text"]] {
            assert!(text.as_str().unwrap().ends_with(['.', '?']), "{text}");
        }
        assert!(["error", "warning", "note"].map(Value::from).contains(&rule["defaultConfiguration"]["level"]));
    }
    for result in results(&log) {
        assert_eq!(rules[number(&result["ruleIndex"])]["id"], result["ruleId"]);
    }
}

#[test]
fn it_tells_what_the_result_for_programs_tells() {
    let (log, _) = log(&examples(), &["gauge-draft.net"]);
    let json = run(&examples(), &["check", "gauge-draft.net", "--format", "json"]).out;
    let json: Value = serde_json::from_str(&json).unwrap();
    let findings = json["boards"][0]["findings"].as_array().unwrap();
    let key = |check: &Value, level: &Value, print: &Value, line: &Value, column: &Value, slack: &Value| {
        [check, level, print, line, column, slack].map(Value::to_string).join(" ")
    };
    let told: BTreeSet<String> = results(&log)
        .iter()
        .map(|result| {
            let region = &result["locations"][0]["physicalLocation"]["region"];
            let print = &result["partialFingerprints"]["findingIdentity/v1"];
            let slack = &result["properties"]["slack"];
            key(&result["ruleId"], &result["level"], print, &region["startLine"], &region["startColumn"], slack)
        })
        .collect();
    let wanted: BTreeSet<String> = findings
        .iter()
        .map(|found| {
            let at = &found["position"];
            key(&found["check"], &found["level"], &found["fingerprint"], &at["line"], &at["column"], &found["slack"])
        })
        .collect();
    assert!(findings.len() > 5);
    assert_eq!(results(&log).len(), findings.len());
    assert_eq!(told, wanted);
}

/// The span of a region in characters of a text, by each of the three ways that it is told.
fn spans(region: &Value, bytes: &[u8]) -> [(usize, usize); 3] {
    let text = std::str::from_utf8(bytes).unwrap().trim_start_matches('\u{feff}');
    let mark = bytes.len() - text.len();
    let at = |line: &Value, column: &Value| {
        let before: usize = text.split_inclusive('\n').take(number(line) - 1).map(|line| line.chars().count()).sum();
        before + number(column) - 1
    };
    let lines = (at(&region["startLine"], &region["startColumn"]), at(&region["endLine"], &region["endColumn"]));
    let start = number(&region["charOffset"]);
    let byte = number(&region["byteOffset"]) - mark;
    let count = |to: usize| text[..to].chars().count();
    [
        lines,
        (start, start + number(&region["charLength"])),
        (count(byte), count(byte + number(&region["byteLength"]))),
    ]
}

#[test]
fn regions_name_the_part_whatever_the_line_ends_and_the_mark_at_the_start() {
    for spoil in [str::to_owned, |text: &str| format!("\u{feff}{}", text.replace('\n', "\r\n"))] {
        let folder = tempfile::tempdir().unwrap();
        copied(folder.path(), |text| spoil(&text));
        let bytes = fs::read(folder.path().join("gauge.net")).unwrap();
        let text: Vec<char> = std::str::from_utf8(&bytes).unwrap().trim_start_matches('\u{feff}').chars().collect();
        let (log, _) = log(folder.path(), &["gauge.net"]);
        assert!(results(&log).len() > 5);
        for result in results(&log) {
            let related = result.get("relatedLocations").and_then(Value::as_array).into_iter().flatten();
            for location in result["locations"].as_array().unwrap().iter().chain(related) {
                let [lines, characters, bytes] = spans(&location["physicalLocation"]["region"], &bytes);
                assert_eq!((lines, lines), (characters, bytes), "{location}");
                assert!(lines.1 > lines.0);
            }
            let own = &result["locations"][0];
            let [(from, to), ..] = spans(&own["physicalLocation"]["region"], &bytes);
            let shown: String = text[from..to].iter().collect();
            assert_eq!(shown.trim_matches('"'), own["logicalLocations"][0]["name"].as_str().unwrap());
        }
    }
}

#[test]
fn a_finding_stands_in_the_sheet_where_that_is_beside_and_the_netlist_is_told_too() {
    let folder = tempfile::tempdir().unwrap();
    drawn_board(folder.path());
    let (log, _) = log(folder.path(), &["gauge.net"]);
    assert!(results(&log).len() > 5);
    for result in results(&log) {
        let own = &result["locations"][0];
        let netlist = &result["relatedLocations"][0];
        assert_eq!((&netlist["id"], &netlist["message"]["text"]), (&1.into(), &"in the netlist.".into()));
        for (location, end) in [(own, ".kicad_sch"), (netlist, "gauge.net")] {
            let place = &location["physicalLocation"];
            let uri = place["artifactLocation"]["uri"].as_str().unwrap();
            assert!(uri.ends_with(end), "{uri}");
            let text = fs::read_to_string(folder.path().join(uri)).unwrap();
            let (at, length) = (number(&place["region"]["byteOffset"]), number(&place["region"]["byteLength"]));
            let part = own["logicalLocations"][0]["name"].as_str().unwrap();
            assert_eq!(text[at..at + length].trim_matches('"'), part);
        }
    }
}

#[test]
fn an_accepted_finding_is_suppressed_with_its_reason_and_the_others_are_not() {
    let folder = tempfile::tempdir().unwrap();
    copied(folder.path(), |text| text);
    let file = folder.path().join("gauge.railworthy.toml");
    let accept =
        "[[accept]]\ncheck = \"set-point\"\npart = \"U1\"\nreason = \"trimmed {by hand}\"\nuntil = 2099-01-31\n";
    fs::write(&file, fs::read_to_string(&file).unwrap() + accept).unwrap();
    let (log, _) = log(folder.path(), &["gauge.net"]);
    let mut accepted = 0;
    for result in results(&log) {
        let suppressions = result["suppressions"].as_array().unwrap();
        let is_meant =
            result["ruleId"] == "set-point" && result["locations"][0]["logicalLocations"][0]["name"] == "U1";
        assert_eq!(suppressions.len(), usize::from(is_meant), "{result}");
        for suppression in suppressions {
            accepted += 1;
            assert_eq!((&suppression["kind"], &suppression["status"]), (&"external".into(), &"accepted".into()));
            assert_eq!(suppression["justification"], "trimmed {{by hand}}");
            assert_eq!(suppression["properties"]["until"], "2099-01-31");
            let place = &suppression["location"]["physicalLocation"];
            assert_eq!(place["artifactLocation"]["uri"], "gauge.railworthy.toml");
            assert!(number(&place["region"]["startLine"]) > 10, "{place}");
        }
    }
    assert_eq!(accepted, 1);
}

#[test]
fn a_finding_of_the_review_points_into_the_board_file() {
    let folder = tempfile::tempdir().unwrap();
    copied(folder.path(), |text| text);
    let file = folder.path().join("gauge.railworthy.toml");
    let accept = "[[accept]]\ncheck = \"set-point\"\npart = \"U1\"\nreason = \"trimmed\"\nuntil = 2020-01-31\n";
    fs::write(&file, fs::read_to_string(&file).unwrap() + accept).unwrap();
    let (log, _) = log(folder.path(), &["gauge.net"]);
    let found: Vec<&Value> = results(&log).iter().filter(|result| result["ruleId"] == "accept-expired").collect();
    assert_eq!(found.len(), 1);
    let place = &found[0]["locations"][0]["physicalLocation"];
    assert_eq!(place["artifactLocation"]["uri"], "gauge.railworthy.toml");
}

#[test]
fn what_is_damaged_is_told_at_its_place_and_the_run_did_not_succeed() {
    let folder = tempfile::tempdir().unwrap();
    copied(folder.path(), |text| text[..text.find("(net (code \"5\")").unwrap() + 40].to_owned());
    let file = folder.path().join("gauge.railworthy.toml");
    fs::write(&file, fs::read_to_string(&file).unwrap().replace("[[rail]]", "[[rali]]")).unwrap();
    let (log, run) = log(folder.path(), &["gauge.net", "gone.net"]);
    assert_eq!(run.status, Some(2));
    let invocation = &log["runs"][0]["invocations"][0];
    assert_eq!(invocation["executionSuccessful"], false);
    let kinds = log["runs"][0]["tool"]["driver"]["notifications"].as_array().unwrap();
    let told = |list: &str| -> Vec<(String, String, bool)> {
        let list = invocation[list].as_array().unwrap().iter();
        list.map(|notice| {
            let place = &notice["locations"][0]["physicalLocation"];
            assert_eq!(kinds[number(&notice["descriptor"]["index"])]["id"], notice["descriptor"]["id"]);
            let uri = place["artifactLocation"]["uri"].as_str().unwrap().to_owned();
            (notice["level"].as_str().unwrap().to_owned(), uri, place.get("region").is_some())
        })
        .collect()
    };
    let error = |file: &str, placed: bool| ("error".to_owned(), file.to_owned(), placed);
    assert!(told("toolExecutionNotifications").contains(&error("gauge.net", true)));
    assert!(told("toolExecutionNotifications").contains(&error("gone.net", false)));
    assert!(told("toolConfigurationNotifications").contains(&error("gauge.railworthy.toml", true)));
}

#[test]
fn a_whole_board_is_a_run_that_succeeded() {
    let (log, _) = log(&examples(), &["gauge-draft.net"]);
    let invocation = &log["runs"][0]["invocations"][0];
    assert_eq!(invocation["executionSuccessful"], true);
    assert_eq!(invocation["toolExecutionNotifications"], Value::Array(Vec::new()));
}

#[test]
fn the_bytes_are_the_same_wherever_it_runs_in_the_project_and_whatever_the_order_of_boards() {
    let folder = tempfile::tempdir().unwrap();
    let hw = folder.path().join("hw one");
    fs::create_dir_all(&hw).unwrap();
    fs::create_dir(folder.path().join(".git")).unwrap();
    copied(&hw, |text| text);
    fs::copy(examples().join("gauge-release.net"), hw.join("release.net")).unwrap();
    let above = log(folder.path(), &["hw one/gauge.net", "hw one/release.net"]);
    let within = log(&hw, &["release.net", "./gauge.net"]);
    let absolute = hw.join("gauge.net").display().to_string();
    let typed_whole = log(&hw, &["release.net", &absolute]);
    assert!(above.1.out.contains("\"hw%20one/gauge.net\""), "{}", above.1.out);
    assert_eq!(above.1.out, within.1.out);
    assert_eq!(above.1.out, typed_whole.1.out);
}

#[test]
fn no_path_of_the_machine_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let (inside, outside) = (folder.path().join("project"), folder.path().join("elsewhere"));
    fs::create_dir_all(&inside).unwrap();
    fs::create_dir_all(&outside).unwrap();
    copied(&outside, |text| text.replacen("(nets", "(nots", 1));
    let machine = folder.path().display().to_string();
    let files = ["gauge.net", "gone.net"].map(|file| outside.join(file).display().to_string());
    let (log, run) = log(&inside, &[&files[0], &files[1]]);
    assert!(!run.out.contains(&machine), "{}", run.out);
    let files = log["runs"][0]["artifacts"].as_array().unwrap().iter();
    let files: Vec<&Value> = files.map(|file| &file["location"]).collect();
    assert!(files.len() >= 3);
    assert!(files.iter().all(|location| location["uriBaseId"] == "OUTSIDE"), "{files:?}");
    assert!(files.iter().any(|location| location["uri"] == "gone.net"), "{files:?}");
}

#[test]
fn standard_input_is_named_as_such() {
    let text = fs::read(examples().join("gauge-draft.net")).unwrap();
    let run = run_with(&examples(), &["check", "-", "--format", "sarif"], &text);
    let log: Value = serde_json::from_str(&run.out).unwrap();
    let place = &results(&log)[0]["locations"][0]["physicalLocation"]["artifactLocation"];
    assert_eq!((&place["uri"], &place["uriBaseId"]), (&"%3Cstdin%3E".into(), &"OUTSIDE".into()));
}

/// A board whose names are made to act on whatever shows them.
pub(crate) fn hostile_board() -> String {
    let linear = ("Regulator_Linear", "AMS1117-3.3", "1A low dropout regulator, 3.3 V fixed");
    let input = "{0}](0)[x](1) </a>]]>\u{1b}[2J\u{202e}##[error] ::error::%0A";
    let pins =
        vec![("1", "GND", "power_in", "GND"), ("2", "VO", "power_out", "+3V3"), ("3", "VI", "power_in", input)];
    let part = Part { reference: "U1\u{7}&<{1}", value: "AMS1117-3.3".to_owned(), symbol: linear, pins };
    small_board::netlist(&[part])
}

#[test]
fn nothing_from_a_file_acts_or_is_taken_for_a_link_or_a_placeholder() {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("a[0] {b}.net"), hostile_board()).unwrap();
    let (log, run) = log(folder.path(), &["a[0] {b}.net"]);
    assert!(!results(&log).is_empty(), "{}", run.err);
    assert!(run.out.contains("\\u{{1b}}"), "the name is shown all the same: {}", run.out);
    assert!(!run.out.replace('\n', "").contains(railworthy::report::acts));
    for text in texts(&log) {
        // The line ends that the format asks to be named are no text from a file.
        assert!(!text.replace('\n', "").contains(railworthy::report::acts) || text == "\r\n", "{text:?}");
    }
    for result in results(&log) {
        let message = result["message"]["text"].as_str().unwrap();
        assert!(!message.replace("{{", "").replace("}}", "").contains(['{', '}']), "{message}");
        assert!(!message.contains("]("), "{message}");
        assert!(message.ends_with(['.', '?', '!']), "{message}");
    }
    assert!(!run.out.contains("##["), "{}", run.out);
}

/// The cases of every check that trip it, in a folder of their own; their board files without what they expect.
pub(crate) fn tripping_boards(folder: &Path) -> Vec<String> {
    let files = super::project::files("rules/checks");
    let mut boards = Vec::new();
    for file in files.iter().filter(|file| file.contains("/bad-") && file.ends_with(".net")) {
        let name = file.strip_prefix("rules/checks/").unwrap().replace('/', "-");
        fs::copy(super::project::root().join(file), folder.join(&name)).unwrap();
        let settings = file.replace(".net", ".railworthy.toml");
        if files.contains(&settings) {
            let text = super::project::text(&settings);
            let kept = text.split("[expect]").next().unwrap();
            fs::write(folder.join(name.replace(".net", ".railworthy.toml")), kept).unwrap();
        }
        boards.push(name);
    }
    boards
}

#[test]
fn every_check_and_every_verdict_comes_through() {
    let folder = tempfile::tempdir().unwrap();
    let boards = tripping_boards(folder.path());
    let boards: Vec<&str> = boards.iter().map(String::as_str).collect();
    let (log, run) = log(folder.path(), &boards);
    assert_eq!(run.status, Some(1), "{}", run.err);
    let mut found: BTreeMap<String, BTreeSet<String>> = BTreeMap::new();
    for result in results(&log) {
        let text = |value: &Value| value.as_str().unwrap().to_owned();
        found.entry(text(&result["ruleId"])).or_default().insert(text(&result["properties"]["verdict"]));
    }
    assert_eq!(found.keys().cloned().collect::<BTreeSet<_>>(), check_names());
    let verdicts: BTreeSet<&str> = found.values().flatten().map(String::as_str).collect();
    assert_eq!(verdicts.into_iter().collect::<Vec<_>>(), ["doubtful", "fails", "tight", "unknown"]);
}
