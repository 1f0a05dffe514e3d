//! `railworthy accept`: what it drafts is read back, and accepts just what was found.

use std::fs;
use std::path::Path;

use serde_json::Value;

use super::cli::{board, folder_with};
use super::program::{Run, examples, run, run_with};

const REASON: &str = "as built, revision B in the field";

fn accept(folder: &Path, more: &[&str]) -> Run {
    run(folder, &[&["accept", "gauge.net", "--reason", REASON], more].concat())
}

/// The draft gauge as `gauge.net`, with its board file or without.
fn gauge(with_board_file: bool) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::copy(examples().join("gauge-draft.net"), folder.path().join("gauge.net")).unwrap();
    if with_board_file {
        let file = folder.path().join("gauge.railworthy.toml");
        fs::copy(examples().join("gauge-draft.railworthy.toml"), file).unwrap();
    }
    folder
}

fn judged(folder: &Path) -> Value {
    let told = run(folder, &["check", "gauge.net", "--format", "json"]);
    serde_json::from_str::<Value>(&told.out).unwrap()["boards"][0].clone()
}

fn count(board: &Value, name: &str) -> u64 {
    board["counts"][name].as_u64().unwrap()
}

#[test]
fn an_old_board_is_adopted_in_one_step_and_keeps_what_stood_in_its_file() {
    let folder = gauge(true);
    let file = folder.path().join("gauge.railworthy.toml");
    let (stood, before) = (fs::read_to_string(&file).unwrap(), judged(folder.path()));
    let told = accept(folder.path(), &["--write", "--until", "2027-06-30"]);
    let open = count(&before, "fails") + count(&before, "doubtful");
    assert_eq!((told.status, told.out.as_str()), (Some(0), ""), "{}", told.err);
    assert_eq!(told.err, format!("{open} findings accepted in gauge.railworthy.toml\n"));
    let text = fs::read_to_string(&file).unwrap();
    assert!(text.starts_with(&stood));
    assert_eq!(text.matches("[[accept]]").count() as u64, open);
    let after = judged(folder.path());
    assert_eq!((count(&after, "fails"), count(&after, "doubtful")), (0, 0));
    assert_eq!((count(&after, "accepted"), count(&after, "review")), (open, 0));
    assert_eq!(count(&after, "tight"), count(&before, "tight"), "notes are not accepted unasked");
    assert_eq!(run(folder.path(), &["check", "gauge.net"]).status, Some(0));
    // Once more: there is nothing left, and nothing is written.
    let again = accept(folder.path(), &["--write"]);
    assert_eq!((again.status, again.out.as_str()), (Some(0), ""));
    assert!(again.err.starts_with("nothing to accept"), "{}", again.err);
    assert_eq!(fs::read_to_string(&file).unwrap(), text);
}

#[test]
fn the_entries_are_drafted_under_comments_that_say_what_they_accept() {
    insta::assert_snapshot!(accept(gauge(true).path(), &["--check", "output-capacitor", "--check", "headroom"]).out);
}

#[test]
fn what_is_printed_can_be_put_into_the_board_file_as_it_is() {
    let folder = gauge(false);
    let drafted = accept(folder.path(), &["--least", "note"]);
    assert_eq!(drafted.status, Some(0), "{}", drafted.err);
    let file = folder.path().join("gauge.railworthy.toml");
    assert!(!file.exists(), "nothing is written unasked");
    fs::write(&file, &drafted.out).unwrap();
    let board = judged(folder.path());
    assert_eq!(board["complete"], true, "{board:#}");
    for name in ["fails", "doubtful", "tight", "unknown", "review"] {
        assert_eq!(count(&board, name), 0, "{name}");
    }
    assert_eq!(run(folder.path(), &["check", "gauge.net", "--fail-on", "note"]).status, Some(0));
}

#[test]
fn a_file_that_is_not_there_is_made_and_line_ends_are_kept() {
    let folder = gauge(false);
    assert_eq!(accept(folder.path(), &["--write"]).status, Some(0));
    assert_eq!(run(folder.path(), &["check", "gauge.net"]).status, Some(0));
    let file = folder.path().join("gauge.railworthy.toml");
    fs::write(&file, "[board]\r\ntitle = \"x\"").unwrap();
    assert_eq!(accept(folder.path(), &["--write"]).status, Some(0));
    let text = fs::read_to_string(&file).unwrap();
    assert!(text.starts_with("[board]\r\ntitle = \"x\"\r\n\r\n# Accepted on "), "{text}");
    assert_eq!(text.matches('\n').count(), text.matches("\r\n").count());
    assert_eq!(run(folder.path(), &["check", "gauge.net"]).status, Some(0));
}

#[test]
fn renumbering_the_board_changes_nothing_about_what_is_accepted() {
    let folder = gauge(true);
    assert_eq!(accept(folder.path(), &["--write"]).status, Some(0));
    let before = judged(folder.path());
    // The numbers that the board file uses stay: its other entries go by them.
    let file = folder.path().join("gauge.net");
    let mut text = fs::read_to_string(&file).unwrap();
    for (old, new) in [("U2", "U102"), ("U5", "U105"), ("U3", "U5"), ("U102", "U3")] {
        text = text
            .replace(&format!("\"{old}\""), &format!("\"{new}\""))
            .replace(&format!("({old}-"), &format!("({new}-"));
    }
    fs::write(&file, format!("\n\n{text}")).unwrap();
    let after = judged(folder.path());
    assert_eq!(count(&after, "accepted"), count(&before, "accepted"), "{after:#}");
    assert_eq!((count(&after, "fails"), count(&after, "doubtful"), count(&after, "review")), (0, 0, 0));
}

#[test]
fn one_check_or_one_part_may_be_accepted_alone() {
    let folder = gauge(true);
    let before = judged(folder.path());
    assert_eq!(accept(folder.path(), &["--write", "--part", "U2", "--least", "error"]).status, Some(0));
    let after = judged(folder.path());
    assert_eq!(count(&after, "accepted"), 1);
    assert_eq!(count(&after, "fails") + 1, count(&before, "fails"));
    let told = accept(folder.path(), &["--part", "U2", "--least", "error"]);
    assert!(told.err.starts_with("nothing to accept: no open finding at error"), "{}", told.err);
}

#[test]
fn names_that_would_act_come_out_as_toml_that_reads_back() {
    for net in ["a\"b\\c", "x ##[error]forged", "::error::x", "\u{1b}[2J\u{202e}é", " ", "'''\"\"\"", "#"] {
        let folder = folder_with("board.net", &board(net).replace("\"U1\"", "\"U1 ##[group]\\\"x\\\"\""));
        let reason = format!("looked at: {net}");
        let drafted = run(folder.path(), &["accept", "board.net", "--reason", &reason, "--least", "note"]);
        assert_eq!(drafted.status, Some(0), "{}", drafted.err);
        assert!(!drafted.out.contains("##[") && !drafted.out.contains('\u{1b}'), "{}", drafted.out);
        assert!(drafted.out.contains("[[accept]]"), "{net}: {}", drafted.err);
        fs::write(folder.path().join("board.railworthy.toml"), &drafted.out).unwrap();
        let told = run(folder.path(), &["check", "board.net", "--fail-on", "note", "--format", "json"]);
        assert_eq!(told.status, Some(0), "{net}: {}", told.out);
        let result: Value = serde_json::from_str(&told.out).unwrap();
        let findings = result["boards"][0]["findings"].as_array().unwrap();
        assert!(findings.iter().all(|found| found["accepted"]["reason"] == reason.trim()), "{findings:#?}");
    }
}

#[test]
fn what_makes_no_sense_is_refused() {
    let folder = gauge(true);
    let file = folder.path().join("gauge.railworthy.toml");
    let stood = fs::read_to_string(&file).unwrap();
    let refused = |arguments: &[&str], why: &str| {
        let told = run(folder.path(), &[&["accept", "gauge.net", "--write"], arguments].concat());
        assert_eq!((told.status, told.out.as_str()), (Some(2), ""), "{arguments:?}");
        assert!(told.err.contains(why), "{}", told.err);
        assert_eq!(fs::read_to_string(&file).unwrap(), stood);
    };
    refused(&[], "--reason");
    refused(&["--reason", "  ok  "], "the reason is too short");
    refused(&["--reason", REASON, "--until", "tomorrow"], "write a date: 2027-06-30");
    refused(&["--reason", REASON, "--until", "2026-11-30"], "has gone by");
    let standard = run_with(
        folder.path(),
        &["accept", "-", "--reason", REASON, "--write"],
        &fs::read(folder.path().join("gauge.net")).unwrap(),
    );
    assert_eq!(standard.status, Some(2));
    assert!(standard.err.contains("name one with `--board`"), "{}", standard.err);
}

#[test]
fn a_board_that_was_not_judged_wholly_is_not_written_about() {
    let folder = gauge(true);
    let netlist = folder.path().join("gauge.net");
    let text = fs::read_to_string(&netlist).unwrap();
    fs::write(&netlist, text.replacen("(comp (ref \"U3\")", "(comp (fer \"U3\")", 1)).unwrap();
    let file = folder.path().join("gauge.railworthy.toml");
    let stood = fs::read_to_string(&file).unwrap();
    let told = accept(folder.path(), &["--write"]);
    assert_eq!(told.status, Some(2));
    assert!(told.err.contains("not judged wholly"), "{}", told.err);
    assert_eq!(fs::read_to_string(&file).unwrap(), stood);
    let printed = accept(folder.path(), &[]);
    assert_eq!(printed.status, Some(2));
    assert!(printed.out.contains("[[accept]]"));
}

#[test]
fn entries_that_cannot_stand_behind_what_is_there_are_not_written() {
    let folder = gauge(false);
    let file = folder.path().join("gauge.railworthy.toml");
    let stood = "accept = []\n";
    fs::write(&file, stood).unwrap();
    let told = accept(folder.path(), &["--write"]);
    assert_eq!(told.status, Some(2), "{}", told.err);
    assert!(told.err.contains("cannot stand behind"), "{}", told.err);
    assert_eq!(fs::read_to_string(&file).unwrap(), stood);
}

#[test]
fn findings_of_the_review_are_not_accepted_but_told() {
    let folder = gauge(true);
    let file = folder.path().join("gauge.railworthy.toml");
    let entry = "[[accept]]\ncheck = \"headroom\"\npart = \"U4\"\nreason = \"stale\"\n";
    fs::write(&file, fs::read_to_string(&file).unwrap() + entry).unwrap();
    let told = accept(folder.path(), &["--write"]);
    assert_eq!(told.status, Some(0));
    assert!(told.err.contains("accepts nothing") && told.err.contains("(accept-unused)"), "{}", told.err);
    let board = judged(folder.path());
    assert_eq!((count(&board, "fails"), count(&board, "doubtful"), count(&board, "review")), (0, 0, 1));
}
