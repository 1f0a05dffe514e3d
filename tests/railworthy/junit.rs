//! Results as JUnit XML: a suite a board, a case a check.

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

use roxmltree::{Document, Node};

use super::program::{Run, examples, run};
use super::sarif::{hostile_board, tripping_boards};

fn junit(folder: &Path, arguments: &[&str]) -> Run {
    let all: Vec<&str> = ["check", "--format", "junit"].iter().chain(arguments).copied().collect();
    run(folder, &all)
}

fn elements<'a>(node: Node<'a, 'a>, name: &'a str) -> Vec<Node<'a, 'a>> {
    node.children().filter(|child| child.has_tag_name(name)).collect()
}

/// The cases of a suite, each by what it came to.
fn outcomes(suite: Node<'_, '_>) -> BTreeMap<String, &'static str> {
    let outcome = |case: Node<'_, '_>| {
        let known = ["failure", "error", "skipped"];
        let found: Vec<&str> =
            known.into_iter().filter(|name| case.children().any(|child| child.has_tag_name(*name))).collect();
        assert!(found.len() <= 1, "{found:?}");
        found.first().copied().unwrap_or("passed")
    };
    let cases = suite.children().filter(|child| child.has_tag_name("testcase"));
    cases.map(|case| (case.attribute("name").unwrap().to_owned(), outcome(case))).collect()
}

/// Every count of a document is that of what it holds.
fn assert_counts(document: &Document<'_>) {
    let whole = document.root_element();
    let mut sums = BTreeMap::from([("tests", 0), ("failures", 0), ("errors", 0)]);
    for suite in elements(whole, "testsuite") {
        let found = outcomes(suite);
        let count = |name: &str| found.values().filter(|outcome| **outcome == name).count();
        let counts = [
            ("tests", elements(suite, "testcase").len()),
            ("failures", count("failure")),
            ("errors", count("error")),
            ("skipped", count("skipped")),
        ];
        for (name, wanted) in counts {
            assert_eq!(suite.attribute(name).unwrap(), wanted.to_string(), "{name}");
            if let Some(sum) = sums.get_mut(name) {
                *sum += wanted;
            }
        }
    }
    for (name, sum) in sums {
        assert_eq!(whole.attribute(name).unwrap(), sum.to_string(), "{name}");
    }
}

#[test]
fn the_draft_gauge_fails_where_its_checks_do() {
    let run = junit(&examples(), &["gauge-draft.net"]);
    assert_eq!(run.status, Some(1));
    assert_counts(&Document::parse(&run.out).unwrap());
    // A check that is added and passes, and with it the count, changes nothing of this.
    let told: String = run.out.split_inclusive('\n').filter(|line| !line.ends_with("\"/>\n")).collect();
    let told = regex::Regex::new("tests=\"[0-9]+\"").unwrap().replace_all(&told, "tests=\"ALL\"").into_owned();
    insta::assert_snapshot!(told);
}

#[test]
fn the_released_gauge_passes() {
    let run = junit(&examples(), &["gauge-release.net"]);
    assert_eq!(run.status, Some(0));
    let document = Document::parse(&run.out).unwrap();
    assert_counts(&document);
    let found = outcomes(elements(document.root_element(), "testsuite")[0]);
    assert!(found.len() > 8, "{found:?}");
    assert!(found.values().all(|outcome| *outcome == "passed"), "{found:?}");
}

#[test]
fn a_finding_is_a_failure_where_it_fails_the_run() {
    for (level, status) in [("error", Some(1)), ("never", Some(0))] {
        let run = junit(&examples(), &["gauge-draft.net", "--fail-on", level]);
        assert_eq!(run.status, status);
        let document = Document::parse(&run.out).unwrap();
        assert_counts(&document);
        let suite = elements(document.root_element(), "testsuite")[0];
        let found = outcomes(suite);
        // Only a warning about it is in the draft.
        assert_eq!(found["headroom"], "passed");
        assert_eq!(found["set-point"], if level == "error" { "failure" } else { "passed" });
        let headroom =
            elements(suite, "testcase").into_iter().find(|case| case.attribute("name") == Some("headroom"));
        let told = headroom.unwrap().children().find(|child| child.has_tag_name("system-out")).unwrap();
        let told = told.text().unwrap();
        assert!(told.contains("gauge-draft.net:") && told.contains(": warning: U1 may drop out"), "{told}");
    }
}

#[test]
fn accepted_findings_alone_make_a_case_that_is_skipped_with_their_reason() {
    let folder = tempfile::tempdir().unwrap();
    fs::copy(examples().join("gauge-draft.net"), folder.path().join("gauge.net")).unwrap();
    let board = fs::read_to_string(examples().join("gauge-draft.railworthy.toml")).unwrap();
    let accept =
        "[[accept]]\ncheck = \"set-point\"\npart = \"U1\"\nreason = \"trimmed <by hand> & \\\"measured\\\"\"\n";
    fs::write(folder.path().join("gauge.railworthy.toml"), board + accept).unwrap();
    let run = junit(folder.path(), &["gauge.net"]);
    let document = Document::parse(&run.out).unwrap();
    assert_counts(&document);
    let skipped: Vec<Node<'_, '_>> = document.descendants().filter(|node| node.has_tag_name("skipped")).collect();
    assert_eq!(skipped.len(), 1);
    assert_eq!(skipped[0].attribute("message"), Some("accepted: trimmed <by hand> & \"measured\""));
    assert_eq!(skipped[0].parent().unwrap().attribute("name"), Some("set-point"));
}

#[test]
fn what_could_not_be_read_is_an_error_and_the_rest_is_still_judged() {
    let folder = tempfile::tempdir().unwrap();
    let text = fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    fs::write(folder.path().join("cut.net"), &text[..text.find("(net (code \"5\")").unwrap() + 40]).unwrap();
    let run = junit(folder.path(), &["cut.net", "gone.net"]);
    assert_eq!(run.status, Some(2));
    let document = Document::parse(&run.out).unwrap();
    assert_counts(&document);
    let suites = elements(document.root_element(), "testsuite");
    let [cut, gone] = [outcomes(suites[0]), outcomes(suites[1])];
    assert_eq!((cut["all was read"], gone["all was read"]), ("error", "error"));
    assert!(cut.len() > 3, "{cut:?}");
    assert_eq!(gone.len(), 1);
    let error = document.descendants().find(|node| node.has_tag_name("error")).unwrap();
    assert!(error.text().unwrap().starts_with("cut.net:"), "{error:?}");
}

#[test]
fn nothing_from_a_file_acts() {
    let folder = tempfile::tempdir().unwrap();
    let name = "::error <a> \"&\" ]]>.net";
    fs::write(folder.path().join(name), hostile_board()).unwrap();
    let run = junit(folder.path(), &[name]);
    let document = Document::parse(&run.out).unwrap_or_else(|error| panic!("{error}: {}", run.out));
    assert_counts(&document);
    assert!(document.descendants().any(|node| node.has_tag_name("failure")), "{}", run.out);
    assert!(!run.out.replace('\n', "").contains(railworthy::report::acts), "{}", run.out);
    assert!(!run.out.contains("##["), "{}", run.out);
    assert!(run.out.lines().all(|line| !line.trim_start().starts_with("::")), "{}", run.out);
}

#[test]
fn every_board_is_a_suite_in_the_order_given() {
    let folder = tempfile::tempdir().unwrap();
    let boards = tripping_boards(folder.path());
    let boards: Vec<&str> = boards.iter().map(String::as_str).collect();
    let run = junit(folder.path(), &boards);
    let document = Document::parse(&run.out).unwrap();
    assert_counts(&document);
    let names: Vec<&str> = elements(document.root_element(), "testsuite")
        .into_iter()
        .map(|suite| suite.attribute("name").unwrap())
        .collect();
    assert_eq!(names, boards);
}
