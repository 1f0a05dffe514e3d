//! `draft`: from an unknown part to a part file that makes it known.

use std::fs;
use std::path::Path;

use railworthy::checks::{Checks, DefinedNames};
use railworthy::circuit::Circuit;
use railworthy::knowledge::Knowledge;
use railworthy::netlist;
use railworthy::recognize::{NoSketch, recognize, sketch};
use railworthy::report;

use crate::program::{Run, examples, run};
use crate::project::text;
use crate::shared::shared_folder;
use crate::small_board::{Part, netlist as netlist_of};

type Pins = Vec<(&'static str, &'static str, &'static str, &'static str)>;

fn regulator(value: &str, description: &'static str, pins: Pins) -> Part {
    Part { reference: "U1", value: value.to_owned(), symbol: ("Regulator_Linear", "REG", description), pins }
}

fn fixed_pins() -> Pins {
    vec![
        ("1", "VIN", "power_in", "+5V"),
        ("2", "GND", "power_in", "GND"),
        ("3", "EN", "input", "+5V"),
        ("5", "VOUT", "power_out", "+3V3"),
    ]
}

/// A folder with a board of one regulator, two capacitors and a resistor.
fn board(part: Part) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    let parts = [
        part,
        Part::two_ended("C1", "1u", ("+5V", "GND")),
        Part::two_ended("C2", "1u", ("+3V3", "GND")),
        Part::two_ended("R1", "1k", ("+3V3", "GND")),
    ];
    fs::write(folder.path().join("a.net"), netlist_of(&parts)).unwrap();
    folder
}

fn known_part() -> Part {
    regulator("QX10-33AAB", "Low dropout linear regulator", fixed_pins())
}

fn draft(folder: &Path, part: &str) -> Run {
    run(folder, &["draft", "a.net", part])
}

/// Saves a text as a part file of a rules folder.
fn save(folder: &Path, text: &str) {
    fs::create_dir_all(folder.join("house/parts")).unwrap();
    fs::write(folder.join("house/parts/qx10.toml"), text).unwrap();
}

/// A text whose wrapped lines are one.
fn one_line(text: &str) -> String {
    text.split_whitespace().collect::<Vec<_>>().join(" ")
}

#[test]
fn a_draft_tells_what_symbol_and_pins_tell_and_asks_for_the_rest() {
    let folder = board(known_part());
    let found = draft(folder.path(), "U1");
    assert_eq!((found.status, found.err.as_str()), (Some(0), ""), "{}", found.err);
    insta::assert_snapshot!(found.out);
}

#[test]
fn a_draft_loads_as_it_stands_and_makes_the_part_known() {
    let folder = board(known_part());
    save(folder.path(), &draft(folder.path(), "U1").out);
    let vetted = run(folder.path(), &["vet", "house"]);
    assert_eq!(vetted.status, Some(0), "{}", vetted.out);
    assert!(
        one_line(&vetted.out).contains("headroom: rated_current, input_min, tolerance, dropout"),
        "{}",
        vetted.out
    );
    let rails = run(folder.path(), &["rails", "--rules", "house", "a.net"]);
    assert!(rails.out.contains("taken for QX10 "), "{}", rails.out);
    let again = run(folder.path(), &["draft", "--rules", "house", "a.net", "U1"]);
    assert_eq!(again.status, Some(2));
    assert!(again.err.contains("known already as `QX10`; change the file `qx10.toml`"), "{}", again.err);
}

#[test]
fn a_completed_draft_is_judged_on_its_figures() {
    let folder = board(known_part());
    let mut text = draft(folder.path(), "U1").out;
    fs::write(
        folder.path().join("a.railworthy.toml"),
        "[[supply]]\nnet = \"+5V\"\nvoltage = \"3.4 .. 3.6 V\"\n[[load]]\nnet = \"+3V3\"\ncurrent = \"0.1 .. 0.3 A\"\n",
    )
    .unwrap();
    for (from, to) in [
        ("# rated_current = \"? A\"", "rated_current = \"0.3 A\""),
        ("# tolerance = \"? %\"", "tolerance = \"2 %\""),
        (
            "# [[dropout]]\n# at = \"? A\"\n# drop = \"? / ? V\"",
            "[[dropout]]\nat = \"0.3 A\"\ndrop = \"0.3 / 0.5 V\"",
        ),
        ("# [output_capacitor]\n# minimum = \"? uF\"", "[output_capacitor]\nminimum = \"10 uF\""),
        ("# kind = \"required\"", "kind = \"required\""),
    ] {
        assert!(text.contains(from), "{from}");
        text = text.replacen(from, to, 1);
    }
    // With the source as it was drafted the figures are recalled: a minimum that binds must have been read.
    save(folder.path(), &text.replacen("kind = \"required\"", "kind = \"recalled\"", 1));
    let guessed = run(folder.path(), &["check", "--rules", "house", "a.net"]);
    assert_eq!(guessed.status, Some(1), "{}", guessed.out);
    assert!(guessed.out.contains("QX10 data sheet") && !guessed.out.contains("error:"), "{}", guessed.out);
    save(folder.path(), &text.replace("read  = false", "read  = true"));
    assert_eq!(run(folder.path(), &["vet", "house"]).status, Some(0));
    let judged = run(folder.path(), &["check", "--rules", "house", "a.net"]);
    assert_eq!(judged.status, Some(1), "{}", judged.out);
    for text in ["error: U1 cannot hold 3.3 V", "500 mV needed", "error: U1 has too little output capacitance"] {
        assert!(judged.out.contains(text), "{text}: {}", judged.out);
    }
}

#[test]
fn a_place_that_was_not_filled_is_told_when_the_file_is_read() {
    let folder = board(known_part());
    save(folder.path(), &draft(folder.path(), "U1").out.replace("# rated_current", "rated_current"));
    let vetted = run(folder.path(), &["vet", "house"]);
    assert_eq!(vetted.status, Some(2));
    assert!(vetted.out.contains("not readable as a figure"), "{}", vetted.out);
}

#[test]
fn kinds_polarity_mode_and_enable_follow_the_drawing() {
    let adjustable = regulator(
        "QX20-ADJ",
        "Adjustable low dropout regulator",
        vec![
            ("1", "VIN", "power_in", "+5V"),
            ("2", "GND", "power_in", "GND"),
            ("3", "~{SHDN}", "input", "+5V"),
            ("4", "FB", "input", "FB"),
            ("5", "VOUT", "power_out", "+3V3"),
        ],
    );
    let text = draft(board(adjustable).path(), "U1").out;
    for part in [
        "family = \"QX20\"",
        "\"QX20-{V}*\"",
        "adjust = \"ground\"",
        "# reference = \"? / ? / ? V\"",
        "\"4\" = \"adjust\"",
    ] {
        assert!(text.contains(part), "{part}: {text}");
    }
    let negative = regulator(
        "QX88-05",
        "Negative 5V linear regulator",
        vec![("1", "GND", "power_in", "GND"), ("2", "VI", "power_in", "+5V"), ("3", "VO", "power_out", "+3V3")],
    );
    let text = draft(board(negative).path(), "U1").out;
    assert!(text.contains("polarity = \"negative\"") && text.contains("voltages = [\"5 V\"]"), "{text}");
    let shunt = Part {
        reference: "U1",
        value: "QX4040-2.5".to_owned(),
        symbol: ("Reference_Voltage", "REF", "2.5V precision shunt voltage reference"),
        pins: vec![("1", "K", "passive", "+3V3"), ("2", "A", "passive", "GND")],
    };
    let text = draft(board(shunt).path(), "U1").out;
    for part in ["kind = \"shunt\"", "# bias_min = \"? A\"", "\"1\" = \"cathode\", \"2\" = \"anode\""] {
        assert!(text.contains(part), "{part}: {text}");
    }
    assert!(!text.contains("dropout") && !text.contains("output_capacitor"), "{text}");
}

#[test]
fn a_voltage_that_only_a_net_tells_is_not_made_one_of_the_part() {
    let folder = board(regulator("QX30A", "Low dropout linear regulator", fixed_pins()));
    let text = draft(folder.path(), "U1").out;
    assert!(text.contains("fixed = true") && text.contains("# 3.3 V by the net name +3V3"), "{text}");
    assert!(text.contains("names = [\"QX30A*\"]"), "{text}");
    save(folder.path(), &text);
    assert_eq!(run(folder.path(), &["vet", "house"]).status, Some(0));
}

#[test]
fn a_known_part_begins_from_its_family() {
    let folder = examples();
    let found = run(&folder, &["draft", "gauge-release.net", "U3"]);
    assert_eq!(found.status, Some(0));
    assert!(found.err.contains("U3, LM1117IMP-3.3, is known already as `1117 / LM1117`"), "{}", found.err);
    assert!(found.out.starts_with("# U3, LM1117IMP-3.3, is known already"), "{}", found.out);
    assert!(found.out.ends_with(&text("rules/parts/1117-lm.toml")), "the file as it stands");
}

#[test]
fn what_cannot_be_drafted_is_told_with_the_reason() {
    let folder = examples();
    for (part, told) in [
        ("U44", "no part of the board is called `U44`; did you mean `U4`?"),
        ("R1", "R1 is no regulator or reference, but a resistor"),
        ("C8", "C8 is no regulator or reference, but a capacitor"),
    ] {
        let found = run(&folder, &["draft", "gauge-release.net", part]);
        assert_eq!((found.status, found.out.as_str()), (Some(2), ""), "{part}");
        assert!(found.err.contains(told), "{part}: {}", found.err);
    }
    let nameless = board(regulator("LDO", "Low dropout linear regulator", fixed_pins()));
    let found = draft(nameless.path(), "U1");
    assert_eq!(found.status, Some(2));
    assert!(found.err.contains("U1 is called `LDO`, which names no part"), "{}", found.err);
}

#[test]
fn names_from_the_board_are_harmless_in_the_file() {
    let folder = board(regulator("QX10-33\\u{1b}[31m\\\\nkind=", "Low dropout linear regulator", fixed_pins()));
    let found = draft(folder.path(), "U1");
    assert_eq!(found.status, Some(0), "{}", found.err);
    assert!(!found.out.contains('\u{1b}'));
    save(folder.path(), &found.out);
    assert_eq!(run(folder.path(), &["vet", "house"]).status, Some(0), "{}", found.out);
}

#[test]
fn a_draft_is_written_to_a_file_whole_or_not_at_all() {
    let folder = board(known_part());
    let printed = draft(folder.path(), "U1").out;
    let written = run(folder.path(), &["draft", "a.net", "U1", "--output", "qx10.toml"]);
    assert_eq!((written.status, written.out.as_str()), (Some(0), ""), "{}", written.err);
    assert_eq!(fs::read_to_string(folder.path().join("qx10.toml")).unwrap(), printed);
    let refused = run(folder.path(), &["draft", "a.net", "R1", "--output", "r1.toml"]);
    assert_eq!((refused.status, folder.path().join("r1.toml").exists()), (Some(2), false));
    assert_eq!(run(folder.path(), &["draft", "a.net", "U1", "--output", "no/qx10.toml"]).status, Some(2));
}

/// A real board whose parts are called by numbers that nobody makes: those on the collected boards are all known.
fn renamed(path: &Path) -> Vec<u8> {
    let text = String::from_utf8_lossy(&fs::read(path).unwrap()).into_owned();
    let known = ["AP2114H", "NCP4620", "MIC5365", "TPS7A49", "ADP3335", "ADP3336", "MCP1725", "MCP1700"];
    let renamed = known.iter().fold(text, |text, name| text.replace(name, &format!("QX{}", &name[name.len() - 4..])));
    renamed.into_bytes()
}

#[test]
#[allow(clippy::print_stderr, reason = "what is drafted is for the reader to inspect")]
fn drafts_of_real_boards_load_and_make_their_parts_known() {
    let Some(shared) = shared_folder() else { return };
    let built_in = Knowledge::built_in();
    let (checks, _) = Checks::load(&built_in.checks, &DefinedNames);
    let house = tempfile::tempdir().unwrap();
    let mut boards = Vec::new();
    let mut written = std::collections::BTreeSet::new();
    for entry in fs::read_dir(shared.join("corpus/files")).unwrap().map(Result::unwrap) {
        let name = entry.file_name().into_string().unwrap();
        let Ok(read) = netlist::read(&name, &renamed(&entry.path())) else { continue };
        let design = recognize(Circuit::build(&read).0, &(), &built_in);
        for regulator in &design.regulators {
            let reference = &design.circuit.device(regulator.device).reference;
            let found = match sketch(&design, &built_in, reference) {
                Ok(found) => found,
                Err(why) => {
                    assert!(
                        matches!(why, NoSketch::Known(..) | NoSketch::Nameless(_) | NoSketch::NotJudged(_)),
                        "{why:?}"
                    );
                    continue;
                }
            };
            eprintln!(
                "{} {reference}: {} as {:?} {:?}",
                name.split('-').next().unwrap(),
                found.name,
                found.family.names,
                found.family.voltages
            );
            boards.push((entry.path(), reference.clone(), found.name.clone()));
            if written.insert(found.family.name.clone()) {
                let file = house.path().join(format!("{}.toml", written.len()));
                fs::write(file, report::draft(&found, &name, reference, &checks)).unwrap();
            }
        }
    }
    assert!(!written.is_empty());
    let (knowledge, problems) = Knowledge::load(&[house.path().to_owned()]);
    assert!(problems.is_empty(), "{problems:?}");
    assert_eq!(knowledge.families.len(), built_in.families.len() + written.len());
    for (path, reference, name) in boards {
        let read = netlist::read(&name, &renamed(&path)).unwrap();
        let design = recognize(Circuit::build(&read).0, &(), &knowledge);
        let of_part =
            |each: &&railworthy::recognize::Regulator| design.circuit.device(each.device).reference == reference;
        let regulator = design.regulators.iter().find(of_part).unwrap();
        assert!(!regulator.identity.families.is_empty(), "{reference} {name}");
    }
}
