//! Checks of a user's own, about nets and capacitors too.

use std::collections::BTreeMap;

use railworthy::board::{Board, Options};
use railworthy::checks::{Checks, DefinedNames, Verdict};
use railworthy::knowledge::Knowledge;
use railworthy::review::examine;
use railworthy::source::Source;

use crate::judge::TODAY;
use crate::small_board::{Part, netlist};

/// What a check comes to on a small board, by the names of its subjects.
fn verdicts(name: &str, text: &str) -> BTreeMap<String, Verdict> {
    let folders = BTreeMap::from([(name.to_owned(), BTreeMap::from([("check.toml".to_owned(), text.to_owned())]))]);
    let (checks, problems) = Checks::load(&folders, &DefinedNames);
    assert!(problems.is_empty(), "{problems:?}");
    let regulator = Part {
        reference: "U1",
        value: "LP5907MFX-3.3".to_owned(),
        symbol: ("Regulator_Linear", "LP5907MFX-3.3", "Low dropout regulator, 3.3 V"),
        pins: vec![
            ("1", "IN", "power_in", "+5V"),
            ("2", "GND", "power_in", "GND"),
            ("3", "EN", "input", "+5V"),
            ("5", "OUT", "power_out", "+3V3"),
        ],
    };
    let parts = [
        regulator,
        Part::two_ended("C1", "1uF/6V", ("+5V", "GND")),
        Part::two_ended("C2", "1uF/16V", ("+3V3", "GND")),
    ];
    let board = "[[supply]]\nnet = \"+5V\"\nvoltage = \"4.75 .. 5.25 V\"\n";
    let (board, problems) = Board::read(&Source::new("small.railworthy.toml", board), Options::default());
    assert!(problems.is_empty());
    let found =
        examine("small.net", netlist(&parts).as_bytes(), board, &Knowledge::built_in(), &checks, TODAY).unwrap();
    found.told.into_iter().map(|told| (told.subject, told.verdict)).collect()
}

#[test]
fn a_check_about_nets_is_asked_of_every_supply_net() {
    let found = verdicts(
        "low-rails",
        "name = \"low-rails\"\nabout = \"net\"\nasks = \"Is every rail under 4 V?\"\nholds = \"voltage <= 4 V\"\n\
         [says]\nfails = \"{subject} reaches {voltage.high}\"\n[[sources]]\ncommon_practice = true\n",
    );
    let expected = [("+3V3", Verdict::Holds), ("+5V", Verdict::Fails)];
    assert_eq!(found, expected.map(|(net, verdict)| (net.to_owned(), verdict)).into());
}

#[test]
fn a_check_about_capacitors_is_asked_of_those_at_inputs_and_outputs() {
    let found = verdicts(
        "half-rating",
        "name = \"half-rating\"\nabout = \"capacitor\"\nasks = \"Is every capacitor used at half its rating?\"\n\
         holds = \"rating >= 2 * voltage\"\n[says]\nfails = \"{subject} sees {voltage.high}\"\n\
         [[sources]]\ncommon_practice = true\n",
    );
    let expected = [("C1", Verdict::Fails), ("C2", Verdict::Holds)];
    assert_eq!(found, expected.map(|(part, verdict)| (part.to_owned(), verdict)).into());
}
