//! The demo boards in every format that is not shown elsewhere; of what is long, a part that has something of all.

use serde_json::Value;

use super::program::{examples, run};

const DRAFT: &str = "gauge-draft.net";
const RELEASE: &str = "gauge-release.net";

/// What a run prints, its version left out.
fn printed(arguments: &[&str], status: i32) -> String {
    let run = run(&examples(), arguments);
    assert_eq!(run.status, Some(status), "{}{}", run.out, run.err);
    run.out.replace(env!("CARGO_PKG_VERSION"), "VERSION")
}

/// A result in JSON of which each list keeps one entry: the first that has the value, else the first.
fn thinned(text: &str, value: &str) -> String {
    let mut result: Value = serde_json::from_str(text).unwrap();
    let mut rest = vec![&mut result];
    while let Some(next) = rest.pop() {
        match next {
            Value::Array(list) => {
                let is_it = |entry: &Value| entry.as_object().is_some_and(|map| map.values().any(|one| one == value));
                let kept = list.iter().position(is_it).unwrap_or(0);
                if kept < list.len() {
                    list.swap(0, kept);
                    list.truncate(1);
                }
                rest.extend(list);
            }
            Value::Object(map) => rest.extend(map.values_mut()),
            _ => {}
        }
    }
    serde_json::to_string_pretty(&result).unwrap()
}

/// The lines of a text up to the first that begins with something.
fn ahead(text: &str, of: &str) -> String {
    assert!(text.lines().any(|line| line.starts_with(of)), "{text}");
    text.lines().take_while(|line| !line.starts_with(of)).map(|line| format!("{line}\n")).collect()
}

#[test]
fn a_check_as_lines() {
    insta::assert_snapshot!(printed(&["check", DRAFT, "--format", "line"], 1));
    assert_eq!(printed(&["check", RELEASE, "--format", "line"], 0), "");
}

#[test]
fn a_check_as_a_comment() {
    insta::assert_snapshot!(printed(&["check", DRAFT, "--format", "markdown"], 1));
}

#[test]
fn a_clean_check_as_a_comment() {
    insta::assert_snapshot!(printed(&["check", RELEASE, "--format", "markdown"], 0));
}

#[test]
fn a_check_as_json() {
    insta::assert_snapshot!(thinned(&printed(&["check", DRAFT, "--format", "json"], 1), "esr-window"));
}

#[test]
fn a_clean_check_as_json() {
    let mut result: Value = serde_json::from_str(&printed(&["check", RELEASE, "--format", "json"], 0)).unwrap();
    let board = &mut result["boards"][0];
    assert_eq!(board["findings"], serde_json::json!([]));
    // The regulators are those of the draft in all but their values.
    board.as_object_mut().unwrap().remove("regulators").unwrap();
    insta::assert_snapshot!(serde_json::to_string_pretty(&result).unwrap());
}

#[test]
fn a_clean_check_as_junit() {
    let text = printed(&["check", RELEASE, "--format", "junit"], 0);
    // A check that is added and passes, and with it the count, changes nothing of this.
    let told: String =
        text.split_inclusive('\n').filter(|line| !line.trim_start().starts_with("<testcase")).collect();
    insta::assert_snapshot!(regex::Regex::new("tests=\"[0-9]+\"").unwrap().replace_all(&told, "tests=\"ALL\""));
}

#[test]
fn figures_of_a_regulator() {
    let text = printed(&["rails", RELEASE], 0);
    let block = text.split("\n\n").find(|block| block.starts_with("U3 ")).unwrap();
    // The further ones change whenever a figure is added.
    insta::assert_snapshot!(block.lines().take(4).collect::<Vec<_>>().join("\n"));
}

#[test]
fn figures_as_json() {
    let text = thinned(&printed(&["rails", DRAFT, "--format", "json"], 0), "U3");
    let mut result: Value = serde_json::from_str(&text).unwrap();
    let facts = result["boards"][0]["regulators"][0]["facts"].as_object_mut().unwrap();
    assert!(facts.len() > 10);
    // The further ones change whenever a figure is added.
    facts.retain(|name, _| ["dropout", "esr_window", "load", "set_point"].contains(&name.as_str()));
    insta::assert_snapshot!(serde_json::to_string_pretty(&result).unwrap());
}

#[test]
fn a_comparison_for_people() {
    let text = printed(&["compare", DRAFT, RELEASE], 0);
    assert!(text.lines().any(|line| line.starts_with("U5 ")), "{text}");
    // One regulator stands for all.
    insta::assert_snapshot!(ahead(&text, "U1 "));
}

#[test]
fn a_comparison_as_lines() {
    assert_eq!(printed(&["compare", DRAFT, RELEASE, "--format", "line"], 0), "");
    insta::assert_snapshot!(printed(&["compare", RELEASE, DRAFT, "--format", "line"], 1));
}

#[test]
fn a_comparison_as_a_comment() {
    insta::assert_snapshot!(ahead(&printed(&["compare", DRAFT, RELEASE, "--format", "markdown"], 0), "```text"));
}

#[test]
fn a_comparison_as_json() {
    insta::assert_snapshot!(thinned(&printed(&["compare", RELEASE, DRAFT, "--format", "json"], 1), "esr-window"));
}

#[test]
fn the_grounds_of_a_check() {
    insta::assert_snapshot!(printed(&["explain", "esr-window"], 0));
}
