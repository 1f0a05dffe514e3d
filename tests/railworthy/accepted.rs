//! Accepted findings: what an entry accepts, and what is told of entries that no longer do.

use std::fs;
use std::path::Path;

use serde_json::Value;

use super::program::{Run, examples, run};

/// A folder with the draft gauge as `gauge.net`, its board file followed by some entries.
fn gauge(entries: &str) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::copy(examples().join("gauge-draft.net"), folder.path().join("gauge.net")).unwrap();
    append(folder.path(), entries);
    folder
}

/// Writes the board file of the draft gauge with some entries behind it.
fn append(folder: &Path, entries: &str) {
    let board = fs::read_to_string(examples().join("gauge-draft.railworthy.toml")).unwrap();
    fs::write(folder.join("gauge.railworthy.toml"), format!("{board}\n{entries}")).unwrap();
}

fn check(folder: &Path, more: &[&str]) -> Run {
    run(folder, &[&["check", "gauge.net"], more].concat())
}

fn board(folder: &Path) -> Value {
    let result: Value = serde_json::from_str(&check(folder, &["--format", "json"]).out).unwrap();
    result["boards"][0].clone()
}

fn findings(board: &Value) -> Vec<&Value> {
    board["findings"].as_array().unwrap().iter().collect()
}

/// The finding of a check about a part.
fn finding<'b>(board: &'b Value, check: &str, subject: &str) -> &'b Value {
    let mut found = findings(board).into_iter().filter(|each| each["check"] == check && each["subject"] == subject);
    found.next().unwrap_or_else(|| panic!("no {check} of {subject}: {board:#}"))
}

fn of_check<'b>(board: &'b Value, check: &str) -> Vec<&'b Value> {
    findings(board).into_iter().filter(|each| each["check"] == check).collect()
}

fn entry(check: &str, key: &str, more: &str) -> String {
    format!("[[accept]]\ncheck = \"{check}\"\n{key}\nreason = \"as built, revision B\"\n{more}\n")
}

fn sum(board: &Value) -> u64 {
    let names = ["fails", "doubtful", "tight", "unknown", "holds", "accepted"];
    names.iter().map(|name| board["counts"][name].as_u64().unwrap()).sum()
}

#[test]
fn an_accepted_finding_stays_in_the_list_and_in_the_counts() {
    let open = board(gauge("").path());
    let folder = gauge(&entry("output-capacitor", "part = \"U2\"", "until = 2027-06-30"));
    let with = board(folder.path());
    let accepted = &finding(&with, "output-capacitor", "U2")["accepted"];
    assert_eq!(
        (accepted["reason"].as_str(), accepted["until"].as_str()),
        (Some("as built, revision B"), Some("2027-06-30"))
    );
    assert_eq!(accepted["position"]["file"], "gauge.railworthy.toml");
    assert_eq!(with["counts"]["accepted"], 1);
    assert_eq!(with["counts"]["requirements"], open["counts"]["requirements"]);
    assert_eq!(sum(&with), with["counts"]["requirements"].as_u64().unwrap());
    assert_eq!(with["counts"]["fails"].as_u64().unwrap() + 1, open["counts"]["fails"].as_u64().unwrap());
    assert_eq!(with["counts"]["review"], 0);
}

#[test]
fn what_is_found_of_entries_is_told_with_their_places() {
    let entries = [
        entry("output-capacitor", "part = \"U2\"", "until = 2026-11-30"),
        entry("enable-level", "part = \"U4\"", "until = 2026-12-01"),
        entry("headroom", "part = \"U4\"", ""),
        entry("set-point", "finding = \"0123456789abcdef\"", "until = 2026-01-31"),
    ];
    let told = check(gauge(&entries.concat()).path(), &[]).out;
    let is_ours = |block: &&str| block.contains("accept-") || block.contains("  accepted:");
    insta::assert_snapshot!(told.split("\n\n").filter(is_ours).collect::<Vec<_>>().join("\n\n"));
    let words: Vec<&str> = told.split_whitespace().collect();
    assert!(words.join(" ").contains("1 accepted; 3 findings of the review"), "{told}");
}

#[test]
fn an_entry_that_ran_out_opens_its_finding_and_is_a_warning() {
    let folder = gauge(&entry("output-capacitor", "part = \"U2\"", "until = 2026-11-30"));
    let board = board(folder.path());
    assert!(finding(&board, "output-capacitor", "U2")["accepted"].is_null());
    let expired = finding(&board, "accept-expired", "U2");
    assert_eq!((expired["verdict"].as_str(), expired["level"].as_str()), (Some("doubtful"), Some("warning")));
    assert!(expired["message"].as_str().unwrap().contains("2026-11-30"), "{expired}");
    assert_eq!(expired["position"]["file"], "gauge.railworthy.toml");
    assert!(of_check(&board, "accept-unused").is_empty());
    assert_eq!(board["counts"]["review"], 1);
    assert_eq!(sum(&board), board["counts"]["requirements"].as_u64().unwrap());
}

#[test]
fn an_entry_without_a_finding_is_a_warning_that_fails_the_run() {
    let folder = tempfile::tempdir().unwrap();
    for file in ["gauge-release.net", "gauge-release.railworthy.toml"] {
        fs::copy(examples().join(file), folder.path().join(file)).unwrap();
    }
    let path = folder.path().join("gauge-release.railworthy.toml");
    assert_eq!(run(folder.path(), &["check", "gauge-release.net"]).status, Some(0));
    let text = fs::read_to_string(&path).unwrap() + &entry("headroom", "part = \"U2\"", "until = 2026-01-31");
    fs::write(&path, &text).unwrap();
    let told = run(folder.path(), &["check", "gauge-release.net"]);
    assert_eq!(told.status, Some(1), "{}", told.out);
    assert_eq!(told.out.matches("accept-unused ·").count(), 1, "{}", told.out);
    assert!(!told.out.contains("accept-expired"), "told once: {}", told.out);
    assert_eq!(run(folder.path(), &["check", "gauge-release.net", "--fail-on", "error"]).status, Some(0));
    // The house file is written for other boards too.
    fs::write(folder.path().join("railworthy.toml"), entry("headroom", "part = \"U2\"", "")).unwrap();
    fs::copy(examples().join("gauge-release.railworthy.toml"), &path).unwrap();
    let told = run(folder.path(), &["check", "gauge-release.net"]);
    assert_eq!(told.status, Some(0), "{}", told.out);
}

#[test]
fn an_entry_of_a_check_that_was_asked_of_nothing_is_not_told_and_that_of_no_check_is_refused() {
    let bias = entry("reference-bias", "part = \"U2\"", "");
    let folder = gauge(&bias);
    assert_eq!(of_check(&board(folder.path()), "accept-unused").len(), 1);
    // Without its shunt references, and without the transistor of the one that is a regulator's own, the board is not
    // asked.
    let ignored = ["D4", "D5", "Q2"].map(|part| format!("[[part]]\nref = \"{part}\"\nrole = \"ignore\"\n"));
    append(folder.path(), &format!("{}{bias}", ignored.concat()));
    assert!(of_check(&board(folder.path()), "accept-unused").is_empty());
    append(folder.path(), &entry("reference-bais", "part = \"U2\"", ""));
    let refused = check(folder.path(), &[]);
    assert_eq!(refused.status, Some(2));
    assert!(refused.out.contains("did you mean `reference-bias`?"), "{}", refused.out);
}

#[test]
fn what_is_found_of_acceptances_cannot_be_accepted() {
    for name in ["accept-unused", "accept-expired"] {
        let refused = check(gauge(&entry(name, "part = \"U2\"", "")).path(), &[]);
        assert_eq!(refused.status, Some(2));
        assert!(refused.out.contains(&format!("what `{name}` finds cannot be accepted")), "{}", refused.out);
    }
}

#[test]
fn nothing_is_called_unused_where_part_of_the_netlist_was_lost() {
    let folder = gauge(&entry("headroom", "part = \"U4\"", ""));
    assert_eq!(of_check(&board(folder.path()), "accept-unused").len(), 1);
    let path = folder.path().join("gauge.net");
    let text = fs::read_to_string(&path).unwrap();
    fs::write(&path, text.replacen("(comp (ref \"U3\")", "(comp (fer \"U3\")", 1)).unwrap();
    let damaged = board(folder.path());
    assert_eq!(damaged["complete"], false);
    assert!(of_check(&damaged, "accept-unused").is_empty(), "{damaged:#}");
}

#[test]
fn a_finding_that_has_worsened_opens_again_and_says_so() {
    // 22 µF are needed and 8.2 µF drawn.
    let folder = gauge(&entry("output-capacitor", "part = \"U2\"", "slack = \"-10 uF\""));
    let worse = board(folder.path());
    let found = finding(&worse, "output-capacitor", "U2");
    assert!(found["accepted"].is_null());
    assert_eq!(found["reopened"]["slack"]["unit"], "F");
    assert!((found["reopened"]["slack"]["value"].as_f64().unwrap() + 10e-6).abs() < 1e-12);
    let hints: Vec<&str> = found["remedies"].as_array().unwrap().iter().filter_map(Value::as_str).collect();
    assert!(hints.iter().any(|hint| hint.contains("accepted at a slack of -10 µF")), "{hints:?}");
    assert!(of_check(&worse, "accept-unused").is_empty());
    append(folder.path(), &entry("output-capacitor", "part = \"U2\"", "slack = \"-20 uF\""));
    assert!(finding(&board(folder.path()), "output-capacitor", "U2")["accepted"].is_object());
    // A slack in another unit is that of another requirement.
    append(folder.path(), &entry("output-capacitor", "part = \"U2\"", "slack = \"-20 V\""));
    assert!(finding(&board(folder.path()), "output-capacitor", "U2")["reopened"].is_object());
}

#[test]
fn an_entry_accepts_one_requirement_and_not_what_the_same_missing_figure_leaves_unknown_beside_it() {
    let folder = tempfile::tempdir().unwrap();
    fs::copy(examples().join("gauge-draft.net"), folder.path().join("gauge.net")).unwrap();
    let open = board(folder.path());
    let merged = |found: &&&Value| found["message"].as_str().unwrap().contains("; nor can ");
    let all = findings(&open);
    let found = *all.iter().find(merged).expect("a note that tells of several");
    let key = format!("finding = \"{}\"", found["fingerprint"].as_str().unwrap());
    let text = entry(found["check"].as_str().unwrap(), &key, "");
    fs::write(folder.path().join("gauge.railworthy.toml"), text).unwrap();
    let with = board(folder.path());
    assert_eq!(with["counts"]["accepted"], 1);
    assert_eq!(with["counts"]["unknown"].as_u64().unwrap() + 1, open["counts"]["unknown"].as_u64().unwrap());
    let accepted: Vec<&Value> = findings(&with).into_iter().filter(|each| !each["accepted"].is_null()).collect();
    assert!(!accepted[0]["message"].as_str().unwrap().contains("; nor can "), "{}", accepted[0]);
    assert_eq!(findings(&with).len(), findings(&open).len() + 1, "the next one tells of the others");
}

#[test]
fn checks_of_the_review_are_listed_and_explained() {
    let list = run(&examples(), &["catalog", "checks"]).out;
    for name in ["accept-expired", "accept-unused"] {
        assert!(list.contains(name), "{list}");
        let explained = run(&examples(), &["explain", name]);
        assert_eq!(explained.status, Some(0), "{}", explained.err);
        assert_eq!(run(&examples(), &["catalog", "checks", name]).out, explained.out);
    }
    assert!(run(&examples(), &["explain", "accept-unsued"]).err.contains("did you mean `accept-unused`?"));
    insta::assert_snapshot!(run(&examples(), &["explain", "accept-unused"]).out);
}

#[test]
fn no_check_folder_may_have_the_name_of_a_check_of_the_review() {
    let folder = gauge("");
    let check = folder.path().join("house/checks/accept-unused");
    fs::create_dir_all(&check).unwrap();
    let text = "name = \"accept-unused\"\nabout = \"regulator\"\nasks = \"Is it?\"\nholds = \"load >= 0 A\"\n\
                [says]\nfails = \"no\"\n[[sources]]\ncommon_practice = true\n";
    fs::write(check.join("check.toml"), text).unwrap();
    let refused = run(folder.path(), &["check", "gauge.net", "--rules", "house"]);
    assert_eq!(refused.status, Some(2));
    assert!(refused.out.contains("has the name of a check of the review"), "{}", refused.out);
}
