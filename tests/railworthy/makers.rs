//! A name that several makers sell: the range of all is a guess until the board or a field says whose it is.

use std::fs;

use super::program::run;
use super::small_board::{Part, netlist};

/// A 3.3 V regulator between +5V and +3V3 with ceramics at both sides; `field` goes into its component.
fn board(value: &str, field: &str) -> String {
    let regulator = Part {
        reference: "U1",
        value: value.to_owned(),
        symbol: ("mine", "IC", ""),
        pins: vec![("1", "GND", "power_in", "GND"), ("2", "VO", "power_out", "+3V3"), ("3", "VI", "power_in", "+5V")],
    };
    let parts =
        [regulator, Part::two_ended("C1", "10uF", ("+5V", "GND")), Part::two_ended("C2", "22uF", ("+3V3", "GND"))];
    netlist(&parts).replace("(ref \"U1\") (value", &format!("(ref \"U1\") {field} (value"))
}

fn told(value: &str, field: &str, arguments: &[&str]) -> String {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("board.net"), board(value, field)).unwrap();
    let arguments: Vec<&str> = arguments.iter().copied().chain(["board.net"]).collect();
    run(folder.path(), &arguments).out
}

/// The line of a figure, blanks run together.
fn line(text: &str, name: &str) -> String {
    let found = text.lines().find(|line| line.trim_start().starts_with(name)).unwrap_or_default();
    found.split_whitespace().collect::<Vec<_>>().join(" ")
}

const MAKER: &str = "(property (name \"Manufacturer\") (value \"Advanced Monolithic Systems\"))";

#[test]
fn the_maker_settles_which_versions_figures_hold() {
    let anyones = told("AMS1117-3.3", "", &["rails"]);
    assert!(line(&anyones, "dropout light").contains("guess"), "{anyones}");
    let own = told("AMS1117-3.3", MAKER, &["rails"]);
    assert!(line(&own, "dropout light").ends_with("AMS1117 data sheet"), "{own}");
    let another = MAKER.replace("Advanced Monolithic Systems", "Somebody Else");
    let anothers = told("AMS1117-3.3", &another, &["rails"]);
    assert!(anothers.contains("note: made by Somebody Else, whose data sheet is not known"), "{anothers}");
}

#[test]
fn a_finding_on_such_a_figure_names_the_versions_and_asks_for_the_family() {
    let text = told("XX1117-3.3", "", &["check", "--color", "never"]);
    let words = text.split_whitespace().filter(|word| *word != "│").collect::<Vec<_>>().join(" ");
    assert!(words.contains("other makers' versions of the name"), "{text}");
    assert!(words.contains("to settle: declare family of U1"), "{text}");
    let json = told("XX1117-3.3", "", &["check", "--format", "json"]);
    assert!(!json.replace(' ', "").contains("\"verdict\":\"fails\""), "{json}");
}

#[test]
fn what_was_odd_about_a_name_is_told_with_its_figures() {
    let text = told("AMS1171-3.3", "", &["rails"]);
    assert!(text.contains("note: the value AMS1171-3.3 is taken for a misspelling of AMS1117"), "{text}");
    let text = told("FOO9933-3.3", "", &["rails"]);
    assert!(text.contains("no part family matches") && text.contains("railworthy draft"), "{text}");
}
