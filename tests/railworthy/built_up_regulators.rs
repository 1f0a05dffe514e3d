//! Regulators built from single parts: those of circuits that were made for it are recognized, and on real boards
//! nothing is that a reader does not find there too.

use std::path::Path;

use railworthy::circuit::{Circuit, NetId};
use railworthy::facts::{Facts, Subject};
use railworthy::knowledge::{Knowledge, Pass};
use railworthy::netlist;
use railworthy::recognize::{Design, RegulatorId, recognize};

use crate::judge::{Rules, loud};
use crate::shared::shared_folder;

fn design(file: &Path, knowledge: &Knowledge) -> Design {
    let bytes = std::fs::read(file).unwrap();
    let name = file.display().to_string();
    recognize(Circuit::build(&netlist::read(&name, &bytes).unwrap()).0, &(), knowledge)
}

/// `Q1 npn-follower VBAT>+5V, op-amp, shunt reference from input`.
fn told(design: &Design) -> Vec<String> {
    let circuit = &design.circuit;
    let net = |net: NetId| circuit.net(net).name.as_str();
    let built = design.regulators.iter().filter_map(|one| Some((one, one.built_up.as_ref()?)));
    built
        .map(|(one, built)| {
            let pass: Vec<&str> = built.pass.iter().map(|id| circuit.device(*id).reference.as_str()).collect();
            format!(
                "{} {} {}>{}, {}, {} from {}",
                pass.join("+"),
                one.pass.map_or("?", Pass::name),
                net(built.input),
                net(built.output),
                built.amplifier.as_ref().map_or("none", |amplifier| amplifier.kind.name()),
                built.reference.kind.name(),
                built.feed.map_or("?", |feed| feed.name()),
            )
        })
        .collect()
}

pub(crate) fn told_of(folder: &Path, name: &str, knowledge: &Knowledge) -> Vec<String> {
    told(&design(&folder.join(name), knowledge))
}

#[test]
fn circuits_that_a_simulator_was_run_on_are_recognized() {
    let Some(shared) = shared_folder() else { return };
    let (folder, knowledge) = (shared.join("oracle/nets"), Knowledge::built_in());
    let bootstrapped = "Q1 pmos VBAT>+10V, op-amp, shunt reference from output";
    for (name, expected) in [
        ("c1", "Q1 npn-follower +BATT>+5V, none, zener diode from input"),
        ("c2a", "Q1 npn-follower VBAT>+5V, op-amp, shunt reference from input"),
        ("c2a+cer", "Q1 npn-follower VBAT>+5V, op-amp, shunt reference from input"),
        ("c4", "Q1 pmos VBAT>+10V, op-amp, shunt reference from input"),
        ("c4+cer", "Q1 pmos VBAT>+10V, op-amp, shunt reference from input"),
        ("c5", bootstrapped),
        ("c5_leak", bootstrapped),
        ("c5_leak640", bootstrapped),
        ("c5_su", bootstrapped),
    ] {
        assert_eq!(told_of(&folder, &format!("{name}.net"), &knowledge), [expected], "{name}");
    }
    let failures = shared.join("failures");
    for name in ["L01-bad.net", "L01-good.net"] {
        let expected = "Q1+Q2 pnp-darlington VIN>VOUT, op-amp, shunt reference from input";
        assert_eq!(told_of(&failures, name, &knowledge), [expected], "{name}");
    }
}

/// The outputs that the simulator found are those of the figures, within 2 %: drops of junctions are guesses.
#[test]
fn set_points_agree_with_a_simulator() {
    let Some(shared) = shared_folder() else { return };
    let rules = Rules::built_in();
    for (name, volts) in [("c1", 4.98568), ("c2a", 5.018), ("c4", 10.0366), ("c5_su", 10.0403)] {
        let examination = rules.judge(&shared.join(format!("oracle/nets/{name}.net")));
        let facts = Facts::new(&examination.design, &examination.board, &rules.knowledge);
        let own = examination.design.regulators.iter().position(|one| one.built_up.is_some()).unwrap();
        let mut ids = facts.regulators().map(|(id, _)| id);
        let subject = Subject::Regulator(ids.nth(own).unwrap_or(RegulatorId::first()));
        let figure = facts.figure(subject, "set_point").unwrap();
        let nominal = figure.nominal().unwrap();
        assert!((nominal / volts - 1.0).abs() < 0.02, "{name}: {nominal}");
        assert!(figure.shown().unwrap().low() < volts && figure.shown().unwrap().high() > volts, "{name}");
        // Heat is the same whatever drives a transistor, and these have no heatsink declared; at 0.3 Ω some loops ring.
        let quiet = [" dissipation ", " esr-window ", " phase-margin "];
        let others = loud(&examination).into_iter().filter(|told| !quiet.iter().any(|check| told.contains(check)));
        assert_eq!(others.collect::<Vec<_>>(), Vec::<String>::new(), "{name}");
    }
}

/// Every built-up regulator on the collected boards: their transistors switch, shift levels and drive.
const REAL: &[&str] = &[];

#[test]
#[allow(clippy::print_stderr, reason = "what is found is for the reader to inspect")]
fn real_boards_hold_those_that_a_reader_finds() {
    let Some(folder) = shared_folder().map(|shared| shared.join("corpus/files")) else { return };
    let knowledge = Knowledge::built_in();
    let mut files: Vec<_> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.sort();
    assert_eq!(files.len(), 99);
    let mut found = Vec::new();
    for file in files {
        let number = file.file_name().unwrap().to_string_lossy()[..3].to_owned();
        found.extend(told(&design(&file, &knowledge)).into_iter().map(|told| format!("{number} {told}")));
    }
    for each in &found {
        eprintln!("{each}");
    }
    assert_eq!(found, REAL);
}
