//! Boards beside what they were.

use std::fs;
use std::path::Path;
use std::sync::LazyLock;

use proptest::prelude::*;
use railworthy::board::Board;
use railworthy::netlist::{self, Format};
use railworthy::review::compare::{Comparison, Side, State};
use railworthy::review::{Examination, examine};
use serde_json::Value;

use crate::exported::{Dice, Exported};
use crate::judge::{Rules, TODAY};
use crate::made_board::{NEW_REGULATOR, add, board};
use crate::program::{Run, run, run_with};
use crate::shared::shared_folder;

const BOARD_FILE: &str =
    "[[load]]\nnet = \"+5V\"\ncurrent = \"10 .. 200 mA\"\n\n[[load]]\nnet = \"+3V3\"\ncurrent = \"5 .. 120 mA\"\n";

/// Loaded once for all tests.
static RULES: LazyLock<Rules> = LazyLock::new(Rules::built_in);

/// Two boards in folders of their own, with a board file each.
struct Pair(tempfile::TempDir);

impl Pair {
    fn of(old: &str, new: &str) -> Self {
        let folder = tempfile::tempdir().unwrap();
        for (side, text) in [("old", old), ("new", new)] {
            fs::create_dir(folder.path().join(side)).unwrap();
            fs::write(folder.path().join(side).join("buoy.net"), text).unwrap();
            fs::write(folder.path().join(side).join("buoy.railworthy.toml"), BOARD_FILE).unwrap();
        }
        Self(folder)
    }

    fn boards(old: &Exported, new: &Exported) -> Self {
        Self::of(&old.written(Format::E), &new.written(Format::E))
    }

    fn path(&self) -> &Path {
        self.0.path()
    }

    fn compare(&self, more: &[&str]) -> Run {
        run(self.path(), &[&["compare", "old/buoy.net", "new/buoy.net"], more].concat())
    }

    fn json(&self) -> Value {
        let run = self.compare(&["--format", "json", "--fail-on", "never"]);
        assert_eq!((run.status, run.err.as_str()), (Some(0), ""), "{}", run.out);
        let value: Value = serde_json::from_str(&run.out).unwrap();
        assert_eq!(value["schema"], "railworthy-compare/1");
        value["boards"][0].clone()
    }
}

/// Check and subject of the findings in one of some states.
fn in_state(board: &Value, states: &[&str]) -> Vec<(String, String)> {
    let all = board["findings"].as_array().unwrap().iter();
    let text = |found: &Value, key: &str| found[key].as_str().unwrap().to_owned();
    all.filter(|found| states.contains(&found["state"].as_str().unwrap()))
        .map(|found| (text(found, "check"), text(found, "subject")))
        .collect()
}

fn names<'v>(list: &'v Value, key: &str) -> Vec<&'v str> {
    list.as_array().unwrap().iter().map(|entry| entry[key].as_str().unwrap()).collect()
}

fn judged(text: &str) -> Examination {
    examine("board.net", text.as_bytes(), Board::default(), &RULES.knowledge, &RULES.checks, TODAY).unwrap()
}

/// What differs between two boards, in words.
fn differences(old: &Examination, new: &Examination) -> Vec<String> {
    let side = |examination| Side { examination, knowledge: &RULES.knowledge };
    let comparison = Comparison::new(side(old), side(new));
    let findings = comparison.findings.iter().filter(|each| each.state != State::Same);
    let findings = findings.map(|each| format!("{}: {}", each.state.name(), each.now.finding.message));
    let gone = comparison.gone.iter().map(|gone| format!("gone: {}", gone.was.finding.message));
    let regulators = comparison.regulators.iter().map(|change| format!("{change:?}"));
    let told: Vec<String> = findings.chain(gone).chain(regulators).collect();
    assert_eq!(told.is_empty(), comparison.is_empty());
    told
}

#[test]
fn the_made_board_is_like_real_ones() {
    let examination = judged(&board().written(Format::E));
    assert!(examination.is_complete(), "{:?}", examination.problems);
    assert_eq!(examination.netlist.components.len(), 58);
    assert_eq!(examination.design.regulators.len(), 8);
    assert!(examination.findings.len() > 8, "{}", examination.findings.len());
    for format in [Format::D, Format::Xml] {
        let again = judged(&board().written(format));
        assert!(again.is_complete(), "{:?}", again.problems);
        assert_eq!(again.netlist.format, format);
        assert_eq!(again.findings.len(), examination.findings.len(), "{format:?}");
    }
}

#[test]
fn a_board_renumbered_reordered_and_exported_anew_does_not_differ() {
    for (seed, format) in [(1, Format::E), (2, Format::D), (3, Format::Xml)] {
        let mut dice = Dice(seed);
        let new = board().renumbered(&mut dice).shuffled(&mut dice);
        assert_ne!(new.components[0].reference, board().components[0].reference);
        let pair = Pair::of(&board().written(Format::E), &new.written(format));
        let text = pair.compare(&["--fail-on", "note"]);
        assert_eq!(text.status, Some(0), "{}", text.out);
        assert!(text.out.contains("No difference: "), "{}", text.out);
        let json = pair.json();
        assert_eq!(json["differs"], false);
        assert_eq!(
            (&json["counts"]["new"], &json["counts"]["gone"], &json["counts"]["changed"]),
            (&0.into(), &0.into(), &0.into())
        );
        assert!(json["counts"]["same"].as_u64().unwrap() > 8);
    }
}

#[test]
fn symbols_without_ids_are_known_by_what_lies_around_them() {
    let old = judged(&board().without_ids().written(Format::E));
    for seed in 10..20 {
        let mut dice = Dice(seed);
        let new = board().renumbered(&mut dice).shuffled(&mut dice).without_ids();
        assert_eq!(differences(&old, &judged(&new.written(Format::D))), [""; 0], "seed {seed}");
    }
}

#[test]
fn names_of_nets_are_names_only() {
    let old = judged(&board().written(Format::E));
    let mut new = board();
    new.net("BATT+").name = "/Input/CELL".to_owned();
    new.net("/TX").name = "/UART/TX".to_owned();
    let found = differences(&old, &judged(&new.written(Format::E)));
    assert_eq!(found, [""; 0]);
}

#[test]
fn a_changed_capacitor_yields_just_its_consequences() {
    for (with_ids, renumber) in [(true, false), (true, true), (false, true)] {
        let mut new = board();
        let capacitor = new.components.iter().find(|one| one.value == "22uF/10V tantalum").unwrap().reference.clone();
        new.component(&capacitor).value = "1uF/10V tantalum".to_owned();
        let mut dice = Dice(7);
        let (mut old, mut new) =
            (board(), if renumber { new.renumbered(&mut dice).shuffled(&mut dice) } else { new });
        if !with_ids {
            (old, new) = (old.without_ids(), new.without_ids());
        }
        let regulator = new.components.iter().find(|one| one.value == "LM1117MP-3.3").unwrap().reference.clone();
        let pair = Pair::boards(&old, &new);
        let json = pair.json();
        let news = in_state(&json, &["new", "worse", "better", "changed"]);
        assert!(news.iter().any(|(check, _)| check == "output-capacitor"), "{news:?}");
        for (check, subject) in &news {
            assert!(["output-capacitor", "esr-window"].contains(&check.as_str()), "{check}");
            assert_eq!(subject, &regulator, "{check}");
        }
        for check in names(&json["gone"], "check") {
            assert!(["output-capacitor", "esr-window"].contains(&check), "{check}");
        }
        let changed = json["regulators"].as_array().unwrap();
        assert_eq!(changed.len(), 1, "{changed:?}");
        assert_eq!(changed[0]["new"]["part"], regulator.as_str());
        assert_eq!((&changed[0]["identity"], &changed[0]["pins"]), (&Value::Array(vec![]), &Value::Array(vec![])));
        let figures = names(&changed[0]["figures"], "name");
        assert!(figures.contains(&"output_capacitance"), "{figures:?}");
        for figure in figures {
            assert!(figure.contains("capacit") || figure.contains("esr"), "{figure}");
        }
        let text = pair.compare(&[]);
        assert_eq!(text.status, Some(1), "{}", text.out);
        assert!(text.out.contains("1 regulator changed"), "{}", text.out);
        assert_eq!(pair.compare(&["--fail-on", "never"]).status, Some(0));
    }
}

#[test]
fn lines_and_comments_tell_what_is_new() {
    let mut new = board();
    let capacitor = new.components.iter().find(|one| one.value == "22uF/10V tantalum").unwrap().reference.clone();
    new.component(&capacitor).value = "1uF/10V tantalum".to_owned();
    let pair = Pair::boards(&board(), &new);
    let lines = pair.compare(&["--format", "line"]);
    assert_eq!((lines.status, lines.out.lines().count()), (Some(1), 1), "{}", lines.out);
    assert!(lines.out.starts_with("new/buoy.net:") && lines.out.ends_with("[output-capacitor]\n"), "{}", lines.out);
    let comment = pair.compare(&["--format", "markdown"]);
    assert_eq!(comment.status, Some(1));
    assert!(comment.out.starts_with("### railworthy: 1 new or worse error, 1 gone\n"), "{}", comment.out);
    assert!(comment.out.contains("| new | error | ` U2 ` |"), "{}", comment.out);
    assert!(comment.out.contains("<summary>1 regulator changed</summary>"), "{}", comment.out);
    let same = Pair::boards(&board(), &board().renumbered(&mut Dice(2)));
    assert_eq!(same.compare(&["--format", "line"]).out, "");
    let comment = same.compare(&["--format", "markdown"]).out;
    assert!(comment.starts_with("### railworthy: nothing new\n"), "{comment}");
    assert!(!comment.contains("<details>"), "{comment}");
}

#[test]
fn code_hosts_get_each_finding_with_what_it_was() {
    let mut new = board();
    let capacitor = new.components.iter().find(|one| one.value == "22uF/10V tantalum").unwrap().reference.clone();
    new.component(&capacitor).value = "1uF/10V tantalum".to_owned();
    let pair = Pair::boards(&board(), &new);
    let read = |run: Run| -> Vec<Value> {
        let value: Value = serde_json::from_str(&run.out).unwrap();
        assert_eq!(value["version"], "2.1.0");
        value["runs"][0]["results"].as_array().unwrap().clone()
    };
    let results = read(pair.compare(&["--format", "sarif"]));
    let in_state = |state: &str| results.iter().filter(|one| one["baselineState"] == state).collect::<Vec<_>>();
    let [new, absent] = &[in_state("new"), in_state("absent")].map(|list| list[0].clone());
    assert_eq!((&new["ruleId"], &absent["ruleId"]), (&"output-capacitor".into(), &"esr-window".into()));
    assert!(in_state("unchanged").len() > 5);
    assert!(results.iter().all(|one| one["baselineState"].is_string()));
    let uri = |one: &Value| one["locations"][0]["physicalLocation"]["artifactLocation"]["uri"].clone();
    assert_eq!((uri(new), uri(absent)), ("new/buoy.net".into(), "old/buoy.net".into()));
    let lost = Pair::of("(export", &board().written(Format::E));
    let lost = read(lost.compare(&["--format", "sarif"]));
    assert!(lost.len() > 5 && lost.iter().all(|one| one.get("baselineState").is_none()));
}

#[test]
fn continuous_integration_fails_on_what_is_new_alone() {
    let mut new = board();
    let capacitor = new.components.iter().find(|one| one.value == "22uF/10V tantalum").unwrap().reference.clone();
    new.component(&capacitor).value = "1uF/10V tantalum".to_owned();
    let failing = |run: &Run| -> Vec<String> {
        let document = roxmltree::Document::parse(&run.out).unwrap();
        let cases = document.descendants().filter(|node| node.has_tag_name("testcase"));
        let failed =
            cases.filter(|case| case.children().any(|inner| matches!(inner.tag_name().name(), "failure" | "error")));
        failed.map(|case| case.attribute("name").unwrap().to_owned()).collect()
    };
    let changed = Pair::boards(&board(), &new).compare(&["--format", "junit"]);
    assert_eq!((changed.status, failing(&changed)), (Some(1), vec!["output-capacitor".to_owned()]));
    let same = Pair::boards(&board(), &board()).compare(&["--format", "junit"]);
    assert_eq!((same.status, failing(&same)), (Some(0), vec![]));
    let lost = Pair::of("(export", &board().written(Format::E)).compare(&["--format", "junit"]);
    assert!(lost.status == Some(2) && failing(&lost).contains(&"all was read of what it was".to_owned()));
}

#[test]
fn a_capacitor_that_is_taken_out_is_missed_at_its_regulator_alone() {
    let capacitor = board().components.iter().find(|one| one.value == "22uF/10V tantalum").unwrap().reference.clone();
    let regulator = board().components.iter().find(|one| one.value == "LM1117MP-3.3").unwrap().reference.clone();
    let new = board().without(&capacitor).renumbered(&mut Dice(3));
    let part = new.components.iter().find(|one| one.value == "LM1117MP-3.3").unwrap().reference.clone();
    assert_ne!(regulator, part);
    let json = Pair::boards(&board(), &new).json();
    let news = in_state(&json, &["new", "worse"]);
    assert!(!news.is_empty() && news.iter().all(|(_, subject)| *subject == part), "{news:?}");
    let changed = json["regulators"].as_array().unwrap();
    assert_eq!((changed.len(), &changed[0]["old"]["part"]), (1, &Value::from(regulator)));
}

#[test]
fn the_other_way_round_the_finding_is_gone_and_nothing_fails() {
    let mut old = board();
    let capacitor = old.components.iter().find(|one| one.value == "22uF/10V tantalum").unwrap().reference.clone();
    old.component(&capacitor).value = "1uF/10V tantalum".to_owned();
    let pair = Pair::boards(&old, &board());
    // A finding that the worse one stood before comes out, and nobody was told of it.
    let news: Vec<Value> = pair.json()["findings"].as_array().unwrap().clone();
    let uncovered = news.iter().find(|found| found["check"] == "esr-window" && found["subject"] == "U2").unwrap();
    assert_eq!((&uncovered["state"], &uncovered["behind"]), (&"new".into(), &"output-capacitor".into()));
    let covered = Pair::boards(&board(), &old).json();
    let covered =
        covered["gone"].as_array().unwrap().iter().find(|gone| gone["check"] == "esr-window").unwrap().clone();
    assert_eq!((&covered["subject"], &covered["why"]), (&"U2".into(), &"covered".into()));

    for side in ["old", "new"] {
        let esr = format!("{BOARD_FILE}\n[[part]]\nref = \"{capacitor}\"\nesr = \"0.8 .. 1.2 ohm\"\n");
        fs::write(pair.path().join(side).join("buoy.railworthy.toml"), esr).unwrap();
    }
    let json = pair.json();
    assert_eq!(in_state(&json, &["new", "worse"]), []);
    let gone = json["gone"].as_array().unwrap();
    let mended = gone.iter().find(|gone| gone["check"] == "output-capacitor").unwrap();
    assert_eq!(mended["why"], "holds");
    let text = pair.compare(&[]);
    assert_eq!(text.status, Some(0), "{}", text.out);
    assert!(text.out.contains("it holds now"), "{}", text.out);
}

#[test]
fn a_regulator_is_added_and_taken_out() {
    let mut new = board();
    add(&mut new, "/Logic/", "", NEW_REGULATOR);
    let pair = Pair::boards(&board(), &new);
    let json = pair.json();
    let added: Vec<&Value> =
        json["regulators"].as_array().unwrap().iter().filter(|one| one["state"] == "added").collect();
    assert_eq!(added.len(), 1, "{added:?}");
    assert_eq!((&added[0]["new"]["output_net"], &added[0]["old"]), (&"+1V8".into(), &Value::Null));
    let part = added[0]["new"]["part"].as_str().unwrap();
    let news = in_state(&json, &["new"]);
    assert!(news.iter().any(|(_, subject)| subject == part), "{news:?}");
    let text = pair.compare(&["--fail-on", "never"]);
    assert!(text.out.contains(&format!("added: {part} AP2112K-1.8 · +3V3 → +1V8")), "{}", text.out);

    let json = Pair::boards(&new, &board()).json();
    let removed: Vec<&Value> =
        json["regulators"].as_array().unwrap().iter().filter(|one| one["state"] == "removed").collect();
    assert_eq!((removed.len(), &removed[0]["old"]["part"]), (1, &Value::from(part)));
    let gone = json["gone"].as_array().unwrap().iter().filter(|gone| gone["subject"] == part);
    let why: Vec<&str> = gone.map(|gone| gone["why"].as_str().unwrap()).collect();
    assert!(!why.is_empty() && why.iter().all(|why| *why == "removed"), "{why:?}");
}

#[test]
fn a_part_that_was_drawn_anew_is_the_regulator_of_its_rail() {
    let mut new = board();
    let old = new.components.iter().find(|one| one.value == "LM2940CT-5.0").unwrap().reference.clone();
    let part = new.component(&old);
    part.value = "LM7805".to_owned();
    part.ids = vec!["0b0a7000-1111-4000-8000-000000000001".to_owned()];
    part.reference = "U77".to_owned();
    for node in new.nets.iter_mut().flat_map(|net| &mut net.nodes).filter(|node| node.reference == old) {
        node.reference = "U77".to_owned();
    }
    let json = Pair::boards(&board(), &new).json();
    let changed = json["regulators"].as_array().unwrap();
    let replaced = changed.iter().find(|one| one["new"]["part"] == "U77").unwrap();
    assert_eq!((&replaced["state"], &replaced["old"]["part"]), (&"changed".into(), &Value::from(old)));
    assert!(names(&replaced["identity"], "name").contains(&"value"));
    assert!(changed.iter().all(|one| one["state"] == "changed"), "none is added or removed");
}

#[test]
fn a_pin_that_lies_elsewhere_is_told() {
    let mut new = board();
    let part = new.components.iter().find(|one| one.value == "LP5907MFX-3.3").unwrap().reference.clone();
    let enable = new.nets.iter_mut().find(|net| net.name == format!("Net-({part}-EN)")).unwrap();
    let place = enable.nodes.iter().position(|node| node.reference == part).unwrap();
    let node = enable.nodes.remove(place);
    new.net("GND").nodes.push(node);
    let pair = Pair::boards(&board(), &new);
    let json = pair.json();
    let changed =
        json["regulators"].as_array().unwrap().iter().find(|one| one["new"]["part"] == part.as_str()).unwrap();
    let pins = changed["pins"].as_array().unwrap();
    assert_eq!((pins.len(), &pins[0]["name"], &pins[0]["new_net"]), (1, &"EN".into(), &"GND".into()));
    assert_eq!(in_state(&json, &["new"]), [("enable-level".to_owned(), part)]);
    assert_eq!(pair.compare(&[]).status, Some(1));
}

#[test]
fn each_board_has_its_own_board_file() {
    let pair = Pair::boards(&board(), &board());
    fs::write(pair.path().join("new/buoy.railworthy.toml"), BOARD_FILE.replace("200 mA", "900 mA")).unwrap();
    let json = pair.json();
    assert_eq!(json["differs"], true);
    let figures: Vec<&str> =
        json["regulators"].as_array().unwrap().iter().flat_map(|one| names(&one["figures"], "name")).collect();
    assert!(figures.contains(&"load"), "{figures:?}");
    let both = pair.compare(&["--board", "old/buoy.railworthy.toml"]);
    assert!(both.out.contains("No difference"), "{}", both.out);
    let each =
        ["--board", "new/buoy.railworthy.toml", "--old-board", "old/buoy.railworthy.toml", "--fail-on", "never"];
    let each = pair.compare(&each);
    assert!(!each.out.contains("No difference"), "{}", each.out);
}

#[test]
fn an_acceptance_that_goes_makes_its_finding_worse() {
    let pair = Pair::boards(&board(), &board());
    let check = run(pair.path(), &["check", "old/buoy.net", "--format", "json", "--fail-on", "never"]);
    let value: Value = serde_json::from_str(&check.out).unwrap();
    let loud = value["boards"][0]["findings"].as_array().unwrap().iter().find(|one| one["level"] != "note").unwrap();
    let (check, part) = (loud["check"].as_str().unwrap(), loud["subject"].as_str().unwrap());
    let accept = format!("{BOARD_FILE}\n[[accept]]\ncheck = \"{check}\"\npart = \"{part}\"\nreason = \"measured\"\n");
    fs::write(pair.path().join("old/buoy.railworthy.toml"), accept).unwrap();
    let worse = in_state(&pair.json(), &["worse"]);
    assert!(worse.contains(&(check.to_owned(), part.to_owned())), "{worse:?}");
    let text = pair.compare(&[]);
    assert_eq!(text.status, Some(1), "{}", text.out);
    assert!(text.out.contains("was accepted"), "{}", text.out);
    let back = run(pair.path(), &["compare", "new/buoy.net", "old/buoy.net"]);
    assert_eq!(back.status, Some(0), "{}", back.out);
    assert!(back.out.contains("accepted now: measured"), "{}", back.out);
}

#[test]
fn what_cannot_be_read_is_told_and_the_other_board_is_judged() {
    let text = board().written(Format::E);
    let pair = Pair::of("(export", &text);
    let lost = pair.compare(&[]);
    assert_eq!(lost.status, Some(2));
    assert!(lost.out.contains("not compared") && lost.out.contains("warning:"), "{}", lost.out);
    let absent = run(pair.path(), &["compare", "no-such.net", "new/buoy.net", "--format", "json"]);
    assert_eq!(absent.status, Some(2));
    let value: Value = serde_json::from_str(&absent.out).unwrap();
    assert_eq!(value["boards"][0]["compared"], false);
    assert!(value["boards"][0]["findings"].as_array().unwrap().iter().all(|found| found["state"].is_null()));
    assert!(!value["boards"][0]["old"]["problems"].as_array().unwrap().is_empty());
    let cut = Pair::of(&text, &text[..text.len() * 9 / 10]);
    let cut = cut.compare(&[]);
    assert_eq!(cut.status, Some(2));
    assert!(cut.out.contains("incomplete"), "{}", cut.out);
    for arguments in [&["compare", "-", "-"][..], &["compare", "old", "new/buoy.net"], &["compare", "old/buoy.net"]] {
        let refused = run(pair.path(), arguments);
        assert_eq!(refused.status, Some(2), "{arguments:?}");
        assert!(refused.err.contains("error:"), "{arguments:?}");
    }
}

#[test]
fn one_of_the_boards_may_come_from_standard_input() {
    let pair = Pair::boards(&board(), &board());
    let old = board().written(Format::D);
    let arguments = ["compare", "-", "new/buoy.net", "--board", "new/buoy.railworthy.toml"];
    let run = run_with(pair.path(), &arguments, old.as_bytes());
    assert_eq!(run.status, Some(0), "{}", run.out);
    assert!(run.out.contains("<stdin> → "), "{}", run.out);
}

#[test]
fn folders_are_compared_board_by_board() {
    let pair = Pair::boards(&board(), &board().renumbered(&mut Dice(5)));
    let text = board().written(Format::E);
    let put = |path: &str| {
        let path = pair.path().join(path);
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(path, &text).unwrap();
    };
    for path in ["old/gone.net", "old/a/moved.net", "new/b/moved.net"] {
        put(path);
    }
    let clean = run(pair.path(), &["compare", "old", "new"]);
    assert_eq!(clean.status, Some(0), "{}", clean.out);
    assert!(clean.out.contains("3 boards, 2 without a difference"), "{}", clean.out);
    assert!(clean.out.contains("old/gone.net is gone"), "{}", clean.out);
    put("new/added.net");
    let added = run(pair.path(), &["compare", "old", "new", "--format", "json"]);
    assert_eq!(added.status, Some(1), "{}", added.out);
    let value: Value = serde_json::from_str(&added.out).unwrap();
    let boards = value["boards"].as_array().unwrap();
    let name = |board: &Value, side: &str| board[side]["netlist"].as_str().unwrap_or("none").to_owned();
    let told: Vec<(String, String)> = boards.iter().map(|board| (name(board, "old"), name(board, "new"))).collect();
    let wanted = [
        ("none", "new/added.net"),
        ("old/a/moved.net", "new/b/moved.net"),
        ("old/buoy.net", "new/buoy.net"),
        ("old/gone.net", "none"),
    ];
    assert_eq!(told, wanted.map(|(old, new)| (old.to_owned(), new.to_owned())));
    assert!(boards[0]["findings"].as_array().unwrap().iter().all(|found| found["state"] == "new"));
}

#[test]
fn a_hostile_name_acts_on_nothing() {
    let mut new = board();
    let regulator = new.components.iter().find(|one| one.value == "LM7805" || one.value == "LM2940CT-5.0").unwrap();
    let reference = regulator.reference.clone();
    new.component(&reference).value = "LM2940CT-5.0\u{1b}[2J\n::error::x ##[error]".to_owned();
    new.net("+9V").name = "+9V\u{202e}##vso[x]".to_owned();
    let pair = Pair::boards(&board(), &new);
    for format in ["text", "line", "markdown", "json", "sarif", "junit"] {
        let out = pair.compare(&["--format", format]).out;
        assert!(!out.contains(['\u{1b}', '\u{202e}']), "{format}");
        assert!(out.lines().all(|line| !line.trim_start().starts_with("::")), "{format}");
        assert!(!out.contains("##[") && !out.contains("##vso["), "{format}");
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 24, ..ProptestConfig::default() })]

    #[test]
    fn order_never_changes_a_finding(seed in any::<u64>()) {
        let told = |text: &str| -> Vec<String> {
            let all = judged(text).findings;
            let told = all.iter().map(|one| {
                let finding = &one.finding;
                format!("{} {} {} {:?}", one.fingerprint, finding.verdict, finding.message, (&one.parts, &one.nets))
            });
            told.collect()
        };
        let plain = told(&board().written(Format::E));
        let shuffled = told(&board().shuffled(&mut Dice(seed)).written(Format::E));
        prop_assert_eq!(plain, shuffled);
    }

    #[test]
    fn numbers_and_order_never_make_a_difference(seed in any::<u64>(), with_ids in any::<bool>()) {
        let given = |board: Exported| if with_ids { board } else { board.without_ids() };
        let mut dice = Dice(seed);
        let old = judged(&given(board()).written(Format::E));
        let new = judged(&given(board()).renumbered(&mut dice).shuffled(&mut dice).written(Format::E));
        prop_assert_eq!(differences(&old, &new), Vec::<String>::new());
    }
}

#[test]
fn real_boards_do_not_differ_from_themselves_renumbered() {
    let Some(shared) = shared_folder() else { return };
    let mut files: Vec<_> =
        fs::read_dir(shared.join("corpus/files")).unwrap().map(|file| file.unwrap().path()).collect();
    files.sort();
    let (mut compared, mut regulators) = (0, 0);
    for path in files.iter().step_by(6) {
        let number: String = path.file_name().unwrap().to_string_lossy().chars().take(3).collect();
        let netlist = netlist::read(&number, &fs::read(path).unwrap()).unwrap();
        let exported = Exported::of(&netlist);
        let mut dice = Dice(compared);
        let new = exported.clone().renumbered(&mut dice).shuffled(&mut dice);
        let old = judged(&exported.written(Format::E));
        let new = judged(&new.written(Format::E));
        assert_eq!(old.netlist.components.len(), netlist.components.len(), "{number}");
        assert_eq!(differences(&old, &new), [""; 0], "{number}");
        compared += 1;
        regulators += old.design.regulators.len();
    }
    assert!(compared > 15 && regulators > 10, "{compared} boards, {regulators} regulators");
}
