//! Real boards spoiled on purpose: what was sound is reported once it is not.

use std::path::PathBuf;

use railworthy::board::{Board, Options};
use railworthy::checks::Level;
use railworthy::facts::{Facts, Subject};
use railworthy::netlist::{self, NetEntry, Netlist};
use railworthy::quantity::Quantity;
use railworthy::recognize::{Regulator, RegulatorKind};
use railworthy::review::{Examination, examine_netlist};
use railworthy::source::Source;

use crate::judge::{Rules, TODAY};
use crate::shared::shared_folder;

/// A sound regulator of a real board, with what a spoiler needs to know of it.
struct Sound {
    reference: String,
    input: String,
    output: String,
    /// Number of the enable pin.
    enable: Option<String>,
    /// References of the output's capacitors.
    capacitors: Vec<String>,
    volts: Option<f64>,
    named_volts: bool,
    needs_capacitor: bool,
    has_dropout: bool,
}

fn files() -> Option<Vec<PathBuf>> {
    let folder = shared_folder()?.join("corpus/files");
    let mut files: Vec<PathBuf> = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.sort();
    Some(files)
}

fn examined(rules: &Rules, netlist: Netlist, board: &str) -> Examination {
    let (board, problems) = Board::read(&Source::new("spoiled.railworthy.toml", board), Options::default());
    assert!(problems.is_empty(), "{problems:?}");
    examine_netlist(netlist, board, &rules.knowledge, &rules.checks, TODAY)
}

fn sound(rules: &Rules, found: &Examination) -> Vec<Sound> {
    let facts = Facts::new(&found.design, &found.board, &rules.knowledge);
    let circuit = facts.circuit();
    let name = |net| circuit.net(net).name.clone();
    facts
        .regulators()
        .filter(|(_, regulator)| regulator.kind == RegulatorKind::Series && regulator.output_index == 0)
        .filter_map(|(id, regulator): (_, &Regulator)| {
            let subject = Subject::Regulator(id);
            let (input, output) = (regulator.input_net?, regulator.output_net?);
            let bank = railworthy::recognize::bank(circuit, output);
            let part = circuit.device(regulator.device);
            let enable = regulator.roles.enable.first().map(|enable| part.pins[enable.pin].number.clone());
            Some(Sound {
                reference: part.reference.clone(),
                input: name(input),
                output: name(output),
                enable,
                capacitors: bank
                    .branches
                    .iter()
                    .map(|branch| circuit.device(branch.capacitor).reference.clone())
                    .collect(),
                volts: facts.figure(subject, "set_point").and_then(|volts| volts.nominal()),
                named_volts: matches!(facts.value(subject, "name_voltage"), railworthy::facts::Value::Figure(_)),
                needs_capacitor: facts.figure(subject, "minimum_capacitance").is_some(),
                has_dropout: facts.figure(subject, "dropout").as_ref().and_then(Quantity::nominal).is_some(),
            })
        })
        .collect()
}

fn is_told(found: &Examination, reference: &str, checks: &[&str]) -> bool {
    found.findings.iter().any(|reviewed| {
        reviewed.finding.level != Level::Note
            && checks.contains(&reviewed.finding.check.as_str())
            && reviewed.parts.iter().any(|part| part == reference)
    })
}

/// Spoils every regulator of every board in one way and gives how many were told, of how many, with the silent ones.
fn spoil(
    spoiler: impl Fn(&mut Netlist, &Sound) -> Option<String>,
    checks: &[&str],
) -> Option<(usize, usize, Vec<String>)> {
    let rules = Rules::built_in();
    let (mut told, mut all, mut silent) = (0, 0, Vec::new());
    for file in files()? {
        let bytes = std::fs::read(&file).unwrap();
        let number = file.file_name().unwrap().to_string_lossy()[..3].to_owned();
        let whole = netlist::read("board.net", &bytes).unwrap();
        for sound in sound(&rules, &examined(&rules, whole.clone(), "")) {
            let mut spoiled = whole.clone();
            let Some(board) = spoiler(&mut spoiled, &sound) else { continue };
            all += 1;
            if is_told(&examined(&rules, spoiled, &board), &sound.reference, checks) {
                told += 1;
            } else {
                silent.push(format!("{number} {}", sound.reference));
            }
        }
    }
    Some((told, all, silent))
}

fn assert_share(found: Option<(usize, usize, Vec<String>)>, least: f64) {
    let Some((told, all, silent)) = found else { return };
    assert!(all >= 20, "only {all} regulators to spoil");
    #[allow(clippy::cast_precision_loss, reason = "counts of boards are small")]
    let share = told as f64 / all as f64;
    assert!(share >= least, "{told} of {all} told; silent: {silent:?}");
}

#[test]
fn a_regulator_without_any_output_capacitor_is_told() {
    let spoiler = |netlist: &mut Netlist, sound: &Sound| {
        if sound.capacitors.is_empty() || !sound.needs_capacitor {
            return None;
        }
        for net in &mut netlist.nets {
            net.nodes.retain(|node| !sound.capacitors.contains(&node.reference));
        }
        netlist.components.retain(|component| !sound.capacitors.contains(&component.reference));
        Some(String::new())
    };
    assert_share(spoil(spoiler, &["output-capacitor"]), 1.0);
}

/// Puts the enable pin on a net of its own.
fn free_enable(netlist: &mut Netlist, sound: &Sound) -> Option<netlist::NetNode> {
    let pin = sound.enable.as_ref()?;
    let mut freed = None;
    for net in &mut netlist.nets {
        let mine = |node: &netlist::NetNode| node.reference == sound.reference && node.pin == *pin;
        freed = net.nodes.iter().find(|node| mine(node)).cloned().or(freed);
        net.nodes.retain(|node| !mine(node));
    }
    freed
}

#[test]
fn an_enable_input_that_hangs_on_its_own_output_is_told() {
    let spoiler = |netlist: &mut Netlist, sound: &Sound| {
        let node = free_enable(netlist, sound)?;
        netlist.nets.iter_mut().find(|net| net.name == sound.output)?.nodes.push(node);
        Some(String::new())
    };
    assert_share(spoil(spoiler, &["reference-startup"]), 1.0);
}

#[test]
fn an_enable_input_that_is_left_open_is_told() {
    let spoiler = |netlist: &mut Netlist, sound: &Sound| {
        let node = free_enable(netlist, sound)?;
        let code = "90001".to_owned();
        netlist.nets.push(NetEntry { code, name: "spoiled".to_owned(), nodes: vec![node], ..NetEntry::default() });
        Some(String::new())
    };
    // Parts whose open enable input switches them on are sound all the same.
    assert_share(spoil(spoiler, &["enable-level"]), 0.85);
}

#[test]
fn an_input_a_tenth_of_a_volt_above_the_output_is_told() {
    let spoiler = |_: &mut Netlist, sound: &Sound| {
        let volts = sound.volts.filter(|_| sound.has_dropout && sound.input != sound.output)?;
        let input = if volts < 0.0 { volts - 0.1 } else { volts + 0.1 };
        Some(format!("[[supply]]\nnet = {:?}\nvoltage = \"{input} V\"\n", sound.input))
    };
    assert_share(spoil(spoiler, &["headroom"]), 0.85);
}

#[test]
fn a_net_name_a_fifth_off_the_set_point_is_told() {
    let spoiler = |netlist: &mut Netlist, sound: &Sound| {
        let volts = sound.volts.filter(|_| sound.named_volts)?;
        let net = netlist.nets.iter_mut().find(|net| net.name == sound.output)?;
        net.name = format!("{:+.2}V", volts * 1.2);
        Some(String::new())
    };
    assert_share(spoil(spoiler, &["set-point"]), 1.0);
}
