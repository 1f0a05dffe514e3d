//! A part that nothing tells, or that is taken for the wrong one, is corrected in the board file at once.

use railworthy::board::{Board, Options};
use railworthy::checks::Verdict;
use railworthy::review::{Examination, examine};
use railworthy::source::Source;

use crate::judge::{Rules, TODAY};
use crate::small_board::{Part, netlist};

/// A part with pins that say nothing, between +5V and +3V3.
fn nameless(value: &str) -> Vec<Part> {
    vec![
        Part {
            reference: "U1",
            value: value.to_owned(),
            symbol: ("house", "BLACK_BOX", ""),
            pins: vec![("1", "A", "passive", "GND"), ("2", "B", "passive", "+3V3"), ("3", "C", "passive", "+5V")],
        },
        Part::two_ended("C1", "10uF", ("+5V", "GND")),
        Part::two_ended("C2", "10uF", ("+3V3", "GND")),
    ]
}

fn judged(parts: &[Part], board: &str) -> Examination {
    let rules = Rules::built_in();
    let (board, problems) = Board::read(&Source::new("small.railworthy.toml", board), Options::default());
    assert!(problems.is_empty(), "{problems:?}");
    let text = netlist(parts);
    let found = examine("small.net", text.as_bytes(), board, &rules.knowledge, &rules.checks, TODAY).unwrap();
    assert!(found.problems.is_empty(), "{:?}", found.problems);
    found
}

fn verdict(found: &Examination, check: &str) -> Option<Verdict> {
    found.told.iter().find(|told| told.check == check).map(|told| told.verdict)
}

const PINS: &str = "pins = { 1 = \"ground\", 2 = \"output\", 3 = \"input\" }\n";

#[test]
fn a_part_that_nothing_tells_is_judged_by_the_figures_declared_in_its_place() {
    let parts = nameless("ZZ9");
    assert!(judged(&parts, "").design.regulators.is_empty());
    let declared = format!(
        "[[supply]]\nnet = \"+5V\"\nvoltage = \"4.75 .. 5.25 V\"\n[[part]]\nref = \"U1\"\nkind = \"series\"\n{PINS}\
         output_voltage = \"3.3 V ± 2 %\"\ndropout = \"1.6 V at 0.3 A\"\nrated_current = \"0.3 A\"\n\
         minimum_output_capacitance = \"100 uF\"\n"
    );
    let found = judged(&parts, &declared);
    assert_eq!(found.design.regulators.len(), 1);
    assert_eq!(verdict(&found, "output-capacitor"), Some(Verdict::Fails));
    assert_eq!(verdict(&found, "headroom"), Some(Verdict::Fails));
}

#[test]
fn a_declared_family_wins_over_the_value_and_over_pins_that_say_nothing() {
    let declared =
        format!("[[part]]\nref = \"U1\"\nfamily = \"1117 / LM1117\"\n{PINS}output_voltage = \"3.3 V ± 2 %\"\n");
    let found = judged(&nameless("ZZ9"), &declared);
    assert_eq!(found.design.regulators.len(), 1);
    // The ceramic at the output of an LM1117 has too little ESR.
    assert_eq!(verdict(&found, "esr-window"), Some(Verdict::Doubtful));
}

#[test]
fn a_part_with_the_role_ignore_is_named_as_not_judged() {
    let mut parts = nameless("LM1117-3.3");
    parts[0].symbol = ("Regulator_Linear", "LM1117-3.3", "Low dropout regulator, 3.3 V");
    parts[0].pins =
        vec![("1", "GND", "power_in", "GND"), ("2", "VO", "power_out", "+3V3"), ("3", "VI", "power_in", "+5V")];
    assert_eq!(judged(&parts, "").design.regulators.len(), 1);
    let found = judged(&parts, "[[part]]\nref = \"U1\"\nrole = \"ignore\"\n");
    assert!(found.design.regulators.is_empty());
    assert_eq!(found.design.not_judged.len(), 1);
}
