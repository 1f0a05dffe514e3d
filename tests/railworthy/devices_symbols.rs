//! What devices of a public symbol library are taken for, under their library's name and under a private one.

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

use railworthy::circuit::{Circuit, DeviceKind, Polarity};
use railworthy::knowledge::{Knowledge, ModelKind};
use railworthy::netlist::{Component, Format, LibraryPart, Netlist, PartPin};
use railworthy::recognize::device_match;
use railworthy::source::Source;

use crate::shared::shared_folder;

/// A table of tab-separated columns with a line of names.
fn table(path: &Path) -> Vec<BTreeMap<String, String>> {
    let text = fs::read_to_string(path).unwrap();
    let mut lines = text.lines();
    let names: Vec<&str> = lines.next().unwrap().split('\t').collect();
    let row = |line: &str| names.iter().map(ToString::to_string).zip(line.split('\t').map(str::to_owned)).collect();
    lines.map(row).collect()
}

fn pins(text: &str) -> Vec<PartPin> {
    let pin = |text: &str| {
        let (number, rest) = text.split_once(':')?;
        let (name, kind) = rest.rsplit_once(':')?;
        Some(PartPin { number: number.to_owned(), name: name.to_owned(), kind: kind.to_owned() })
    };
    text.split(' ').filter_map(pin).collect()
}

/// A board of all symbols of a table, each placed once.
fn board(rows: &[BTreeMap<String, String>], library: Option<&str>, described: bool) -> Circuit {
    let mut components = Vec::new();
    let mut parts = Vec::new();
    for (index, row) in rows.iter().enumerate() {
        let library = library.unwrap_or(&row["library"]).to_owned();
        let description = if described { row["description"].clone() } else { String::new() };
        components.push(Component {
            reference: format!("{}{}", row["reference"], index + 1),
            value: row["symbol"].clone(),
            library: library.clone(),
            part: row["symbol"].clone(),
            description: description.clone(),
            ..Component::default()
        });
        let part = row["symbol"].clone();
        parts.push(LibraryPart { library, part, description, pins: pins(&row["pins"]), ..LibraryPart::default() });
    }
    let netlist = Netlist {
        source: Source::new("symbols", ""),
        format: Format::E,
        version: "E".to_owned(),
        schematic: String::new(),
        schematic_span: railworthy::source::Span::default(),
        tool: String::new(),
        components,
        parts,
        nets: Vec::new(),
        problems: Vec::new(),
    };
    Circuit::build(&netlist).0
}

/// What each kind of the table is to be taken for; `None` where nothing is asked.
fn expected(kind: &str) -> Option<&'static [DeviceKind]> {
    use DeviceKind as D;
    Some(match kind {
        "battery" => &[D::Battery],
        "bjt" | "bjt-darlington" | "bjt-dual" | "bjt-prebiased" | "bjt-prebiased-dual" => &[D::Bipolar],
        "capacitor" | "capacitor-feedthrough" | "capacitor-polarized" | "capacitor-variable" => &[D::Capacitor],
        "circuit-breaker" | "jumper" => &[D::Switch, D::NetTie],
        "connector" => &[D::Connector],
        "crystal" => &[D::Crystal],
        "diode" => &[D::Diode],
        "diode-bridge" => &[D::Bridge],
        "diode-schottky" => &[D::Schottky],
        "diode-zener" | "tvs" | "varistor" => &[D::Zener],
        "ferrite-bead" => &[D::Ferrite],
        "fuse" | "polyfuse" => &[D::Fuse],
        "igbt" | "thyristor/triac" | "unijunction" | "phototransistor" | "solar-cell" => &[D::OtherSemiconductor],
        "inductor" => &[D::Inductor],
        "inductor-coupled" => &[D::Transformer],
        "jfet" => &[D::Jfet],
        "laser-diode" | "led" => &[D::Led],
        "mosfet" | "mosfet-dual" => &[D::Mosfet],
        "net-tie" => &[D::NetTie],
        "op-amp" => &[D::OpAmp],
        "photoresistor" | "thermistor" => &[D::Thermistor],
        "potentiometer" | "resistor-variable" => &[D::Potentiometer],
        "resistor" | "resistor-shunt-4pin" => &[D::Resistor],
        "resistor-network" => &[D::ResistorNetwork],
        "test-point" => &[D::Mechanical],
        _ => return None,
    })
}

/// Counts of right answers by kind, and the wrong ones.
fn score(rows: &[BTreeMap<String, String>], circuit: &Circuit) -> (BTreeMap<String, (usize, usize)>, Vec<String>) {
    let mut counts: BTreeMap<String, (usize, usize)> = BTreeMap::new();
    let mut wrong = Vec::new();
    for (row, id) in rows.iter().zip(circuit.devices()) {
        let Some(kinds) = expected(&row["kind"]) else { continue };
        let device = circuit.device(id);
        let count = counts.entry(row["kind"].clone()).or_default();
        count.1 += 1;
        if kinds.contains(&device.kind) {
            count.0 += 1;
        } else {
            wrong.push(format!("{}: {} {} is no {:?}", row["kind"], row["library"], row["symbol"], device.kind));
        }
    }
    (counts, wrong)
}

#[allow(clippy::print_stderr, reason = "the shares are the result of the test")]
fn report(title: &str, counts: &BTreeMap<String, (usize, usize)>, wrong: &[String]) {
    eprintln!("{title}");
    for (kind, (right, all)) in counts {
        eprintln!("  {kind}: {right} of {all}");
    }
    for line in wrong.iter().take(40) {
        eprintln!("    {line}");
    }
}

#[test]
fn devices_of_the_public_library_are_taken_for_what_they_are() {
    let Some(shared) = shared_folder() else { return };
    let rows = table(&shared.join("symbols/devices.tsv"));
    assert!(rows.len() > 3000);
    let (counts, wrong) = score(&rows, &board(&rows, None, true));
    report("under the library's name", &counts, &wrong);
    for (kind, (right, all)) in &counts {
        assert!(right * 100 >= all * 99, "{kind}: {right} of {all}");
    }
}

#[test]
fn devices_are_known_in_a_private_library_too() {
    let Some(shared) = shared_folder() else { return };
    let rows = table(&shared.join("symbols/devices.tsv"));
    for described in [true, false] {
        let (counts, wrong) = score(&rows, &board(&rows, Some("mine"), described));
        report(if described { "by name and text" } else { "by name and pins" }, &counts, &wrong);
        let right: usize = counts.values().map(|(right, _)| right).sum();
        let all: usize = counts.values().map(|(_, all)| all).sum();
        assert!(right * 100 >= all * if described { 95 } else { 75 }, "{right} of {all}");
    }
}

#[test]
fn transistors_have_their_polarity() {
    let Some(shared) = shared_folder() else { return };
    let rows = table(&shared.join("symbols/devices.tsv"));
    let circuit = board(&rows, None, true);
    let (mut right, mut all, mut wrong) = (0, 0, Vec::new());
    for (row, id) in rows.iter().zip(circuit.devices()) {
        let polarity = match row["polarity"].as_str() {
            "NPN" | "NMOS" | "NJFET" => Some(Polarity::N),
            "PNP" | "PMOS" | "PJFET" => Some(Polarity::P),
            "NPN+PNP" | "NMOS+PMOS" => None,
            _ => continue,
        };
        // The table leaves out the key words that some were read from.
        if row["kind"] == "phototransistor" || row["polarity_source"] == "keywords" {
            continue;
        }
        all += 1;
        if circuit.device(id).polarity == polarity {
            right += 1;
        } else {
            wrong.push(format!("{} {}: {:?}", row["symbol"], row["polarity"], circuit.device(id).polarity));
        }
    }
    assert!(right * 100 >= all * 99, "{right} of {all}: {wrong:?}");
}

#[test]
fn capacitors_are_polarized_as_drawn() {
    let Some(shared) = shared_folder() else { return };
    let rows = table(&shared.join("symbols/devices.tsv"));
    let circuit = board(&rows, None, true);
    for (row, id) in rows.iter().zip(circuit.devices()).filter(|(row, _)| row["kind"].starts_with("capacitor")) {
        assert_eq!(circuit.device(id).polarized, row["kind"] == "capacitor-polarized", "{}", row["symbol"]);
    }
}

#[test]
fn no_integrated_regulator_is_taken_for_another_device() {
    let Some(shared) = shared_folder() else { return };
    let rows = table(&shared.join("symbols/regulators.tsv"));
    assert!(rows.len() > 1300);
    for (library, described) in [(None, true), (Some("mine"), true), (Some("mine"), false)] {
        let circuit = board(&rows, library, described);
        let other =
            circuit.devices().map(|id| circuit.device(id)).filter(|device| device.kind != DeviceKind::Integrated);
        let other: Vec<String> = other.map(|device| format!("{} {:?}", device.part, device.kind)).collect();
        assert!(other.is_empty(), "{library:?} {described}: {} of them: {other:?}", other.len());
    }
}

#[test]
fn parts_of_the_library_find_a_device_model_of_their_polarity() {
    let Some(shared) = shared_folder() else { return };
    let rows = table(&shared.join("symbols/devices.tsv"));
    let circuit = board(&rows, None, true);
    let knowledge = Knowledge::shared();
    // Of each kind of symbol: how many are known by number, assumed, without a model.
    let mut counts: BTreeMap<&str, [usize; 3]> = BTreeMap::new();
    let mut wrong = Vec::new();
    for (row, id) in rows.iter().zip(circuit.devices()) {
        let device = circuit.device(id);
        let found = device_match(knowledge, device);
        let place = match &found {
            Some(found) if !found.assumed => 0,
            Some(_) => 1,
            None => 2,
        };
        counts.entry(&row["kind"]).or_default()[place] += 1;
        let Some(found) = found else { continue };
        let fits = match (found.model.kind(), device.polarity) {
            (ModelKind::Npn | ModelKind::Nmos, Some(polarity)) => polarity == Polarity::N,
            (ModelKind::Pnp | ModelKind::Pmos, Some(polarity)) => polarity == Polarity::P,
            _ => true,
        };
        if !fits {
            wrong.push(format!("{}: {}", row["symbol"], found.family));
        }
    }
    assert_eq!(wrong, Vec::<String>::new());
    let of = |kind: &str| counts[kind];
    assert!(of("bjt")[0] >= 110 && of("bjt")[2] <= 20, "{:?}", of("bjt"));
    assert!(of("op-amp")[0] >= 120 && of("op-amp")[2] == 0, "{:?}", of("op-amp"));
    assert!(of("mosfet")[0] >= 35 && of("mosfet")[2] <= 30, "{:?}", of("mosfet"));
    assert!(of("diode-zener")[0] >= 80 && of("tvs")[1] == 0, "{:?} {:?}", of("diode-zener"), of("tvs"));
    assert!(of("bjt-prebiased")[0] + of("bjt-prebiased")[1] == 0, "{:?}", of("bjt-prebiased"));
    for kind in ["resistor", "capacitor", "connector", "jfet", "igbt"] {
        assert_eq!(of(kind)[0] + of(kind)[1], 0, "{kind}");
    }
}
