//! `explain BOARD PART`: a part from what it is taken for and where its power comes from to the verdict of each check.

use std::fs;

use railworthy::checks::{ask, trace};
use railworthy::facts::Facts;

use crate::cli::assert_inert;
use crate::judge::Rules;
use crate::program::{Run, examples, run};
use crate::small_board::{Part, netlist};

fn explained(part: &str) -> String {
    let run = run(&examples(), &["explain", "gauge-draft.net", part]);
    assert_eq!((run.status, run.err.as_str()), (Some(0), ""));
    run.out
}

/// What is explained without the list of figures, which grows with every figure that is defined.
fn without_figures(text: &str) -> String {
    let (before, rest) = text.split_once("\nFigures\n").unwrap();
    let (_, requirements) = rest.split_once("\nRequirements\n").unwrap();
    format!("{before}\n…\n\nRequirements\n{requirements}")
}

#[test]
fn a_regulator_is_explained_from_the_source_to_its_verdicts() {
    insta::assert_snapshot!(without_figures(&explained("U1")));
}

#[test]
fn a_shunt_reference_is_explained() {
    insta::assert_snapshot!(without_figures(&explained("D4")));
}

#[test]
fn every_figure_cites_what_it_rests_on() {
    let text = explained("U1");
    let (figures, grounds) = text.split_once("\nFacts and guesses\n").unwrap();
    let number = |what: &str| {
        let line = grounds.lines().find(|line| line.contains(what)).unwrap();
        line.split_whitespace().next().unwrap().to_owned()
    };
    let words: Vec<&str> = figures.split("\n  headroom ").nth(1).unwrap().split_whitespace().collect();
    let headroom = words.join(" ");
    let drop = number("assumed    forward drop of D1, usual for its kind");
    assert!(headroom.contains(&format!("guess {drop} moves it by ")), "{headroom}");
    let supply = number("declared   voltage of BATT+, gauge-draft.railworthy.toml:9");
    assert!(supply.parse::<usize>().is_ok() && figures.contains("\n  set point "), "{text}");
}

#[test]
fn a_capacitor_is_explained_with_the_regulators_that_have_it() {
    insta::assert_snapshot!(explained("C10"));
}

#[test]
fn other_parts_are_explained_by_what_they_do_for_supplies() {
    let all: Vec<String> = ["F1", "D1", "R2", "J1"].iter().map(|part| explained(part)).collect();
    insta::assert_snapshot!(all.join("\n----\n"));
}

/// A source behind a diode, a 5 V regulator, a diode and a 3.3 V regulator.
fn chain() -> String {
    let fixed = |reference, value: &str, symbol, input, output| Part {
        reference,
        value: value.to_owned(),
        symbol: ("Regulator_Linear", symbol, "1A low dropout regulator, positive, fixed output"),
        pins: vec![("1", "GND", "power_in", "GND"), ("2", "VO", "power_out", output), ("3", "VI", "power_in", input)],
    };
    let diode = |reference, anode, cathode| Part {
        reference,
        value: "1N5819".to_owned(),
        symbol: ("Device", "D_Schottky", "Schottky diode"),
        pins: vec![("1", "K", "passive", cathode), ("2", "A", "passive", anode)],
    };
    netlist(&[
        diode("D1", "VIN", "/IN"),
        fixed("U1", "AMS1117-5.0", "AMS1117-5.0", "/IN", "+5V"),
        diode("D2", "+5V", "/MID"),
        fixed("U2", "AMS1117-3.3", "AMS1117-3.3", "/MID", "+3V3"),
        Part::two_ended("C1", "10uF", ("/IN", "GND")),
        Part::two_ended("C2", "22uF", ("+5V", "GND")),
        Part::two_ended("C3", "10uF", ("/MID", "GND")),
        Part::two_ended("C4", "22uF", ("+3V3", "GND")),
    ])
}

fn run_chain(arguments: &[&str]) -> Run {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("a.net"), chain()).unwrap();
    let board =
        "[[supply]]\nnet = \"VIN\"\nvoltage = \"6.5 .. 9 V\"\n[[load]]\nnet = \"+3V3\"\ncurrent = \"5 .. 80 mA\"\n";
    let accept = "[[accept]]\ncheck = \"headroom\"\npart = \"U1\"\nreason = \"tried at the lowest input\"\n";
    fs::write(folder.path().join("a.railworthy.toml"), format!("{board}{accept}")).unwrap();
    run(folder.path(), arguments)
}

#[test]
fn a_chain_is_followed_from_the_source_through_every_step() {
    let text = run_chain(&["explain", "a.net", "U2"]).out;
    let supply = text.split("Supply, from its source\n").nth(1).unwrap().split("\n\n").next().unwrap();
    let nets = ["VIN", "/IN", "+5V", "/MID"].map(|net| supply.find(&format!(" {net} ")).unwrap());
    assert!(nets.is_sorted(), "{supply}");
    insta::assert_snapshot!(without_figures(&text));
}

#[test]
fn an_accepted_finding_is_told_with_its_reason() {
    let text = run_chain(&["explain", "a.net", "U1"]).out;
    assert!(text.contains("accepted: tried at the lowest input"), "{text}");
    assert!(text.contains("U2 hangs on it, behind /MID"), "{text}");
}

#[test]
fn a_part_that_is_not_there_is_told_with_the_nearest() {
    let run = run_chain(&["explain", "a.net", "U22"]);
    assert_eq!((run.status, run.out.as_str()), (Some(2), ""));
    assert!(run.err.contains("no part of the board is called `U22`; did you mean `U2`?"), "{}", run.err);
}

#[test]
fn every_part_of_the_demo_board_is_explained_and_acts_on_nothing() {
    let text = fs::read_to_string(examples().join("gauge-draft.net")).unwrap();
    let name = "+5V\u{1b}[2J\u{202e}";
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("a.net"), text.replace("\"+5V\"", &format!("\"{name}\""))).unwrap();
    for part in ["U1", "U2", "U3", "U4", "U5", "D1", "D4", "C8", "F1", "FB1", "J2", "R2"] {
        let run = run(folder.path(), &["explain", "a.net", part]);
        assert_eq!(run.status, Some(0), "{part}: {}", run.err);
        assert_inert(&run.out, part);
    }
}

#[test]
fn what_is_explained_is_what_was_judged() {
    let rules = Rules::built_in();
    let found = rules.judge(&examples().join("gauge-draft.net"));
    let facts = Facts::new(&found.design, &found.board, &rules.knowledge);
    let mut asked = 0;
    for check in found.checks.iter() {
        for subject in facts.subjects(check.about) {
            let judged = ask(check, subject, &facts).map(|(outcome, _)| outcome.verdict);
            assert_eq!(trace(check, subject, &facts).verdict(), judged, "{} {subject:?}", check.name);
            asked += usize::from(judged.is_some());
        }
    }
    assert!(asked >= found.counts.requirements, "{asked}");
}
