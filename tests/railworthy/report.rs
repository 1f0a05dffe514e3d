//! What the program prints for the demo boards and for a damaged file, line by line.

use std::fs;

use super::program::{examples, run};

#[test]
fn the_draft_gauge_is_reported_with_all_its_faults() {
    insta::assert_snapshot!(run(&examples(), &["check", "gauge-draft.net"]).out);
}

#[test]
fn the_released_gauge_is_quiet() {
    insta::assert_snapshot!(run(&examples(), &["check", "gauge-release.net"]).out);
}

#[test]
fn a_board_without_board_file_stays_readable() {
    let folder = tempfile::tempdir().unwrap();
    fs::copy(examples().join("gauge-draft.net"), folder.path().join("gauge.net")).unwrap();
    insta::assert_snapshot!(run(folder.path(), &["check", "gauge.net"]).out);
}

#[test]
fn a_damaged_file_is_told_with_its_place() {
    let folder = tempfile::tempdir().unwrap();
    let text = fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    fs::write(folder.path().join("cut.net"), &text[..text.find("(net (code \"5\")").unwrap() + 40]).unwrap();
    insta::assert_snapshot!(run(folder.path(), &["check", "cut.net"]).out);
}

#[test]
fn the_supply_tree_is_shown() {
    let text = run(&examples(), &["rails", "gauge-draft.net"]).out;
    let tree: String = text.split("\n\n").take(2).collect::<Vec<_>>().join("\n\n");
    insta::assert_snapshot!(tree);
}

#[test]
fn an_accepted_finding_is_one_line_and_no_longer_fails_the_run() {
    let folder = tempfile::tempdir().unwrap();
    fs::copy(examples().join("gauge-release.net"), folder.path().join("gauge.net")).unwrap();
    let board = fs::read_to_string(examples().join("gauge-draft.railworthy.toml")).unwrap();
    // The tolerated band of +3V3 is made one that the part cannot keep.
    let board = board.replace("voltage = \"3.3 V ± 5 %\"\noff_board", "voltage = \"3.3 V ± 0.1 %\"\noff_board");
    fs::write(folder.path().join("gauge.railworthy.toml"), &board).unwrap();
    let open = run(folder.path(), &["check", "gauge.net", "--fail-on", "error"]);
    assert_eq!(open.status, Some(1), "{}", open.out);
    let accept = "[[accept]]\ncheck = \"set-point\"\npart = \"U3\"\nreason = \"trimmed in the test\"\n";
    fs::write(folder.path().join("gauge.railworthy.toml"), board + accept).unwrap();
    let accepted = run(folder.path(), &["check", "gauge.net", "--fail-on", "error"]);
    assert_eq!(accepted.status, Some(0), "{}", accepted.out);
    let words: Vec<&str> = accepted.out.split_whitespace().collect();
    assert!(words.join(" ").contains("(set-point): trimmed in the test"), "{}", accepted.out);
    assert!(accepted.out.contains("1 accepted"), "{}", accepted.out);
}
