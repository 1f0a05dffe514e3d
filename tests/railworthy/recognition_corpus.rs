//! Regulators of real boards: those that a reader listed must be found, and nothing else.

use std::fs;
use std::path::Path;

use railworthy::circuit::Circuit;
use railworthy::knowledge::Knowledge;
use railworthy::netlist;
use railworthy::recognize::{Design, RegulatorKind, recognize};

use crate::shared::shared_folder;

/// The listed regulators of each file, zener diodes excepted.
fn listed(corpus: &Path) -> Vec<(String, Vec<String>)> {
    let index = fs::read_to_string(corpus.join("INDEX.tsv")).unwrap();
    let row = |line: &str| {
        let cells: Vec<&str> = line.split('\t').collect();
        let parts = cells
            .last()
            .copied()
            .unwrap_or("")
            .split("; ")
            .filter(|part| part.contains('=') && !part.contains("(zener)"));
        (cells[0].to_owned(), parts.map(|part| part.split('=').next().unwrap().trim().to_owned()).collect())
    };
    index.lines().skip(1).map(row).collect()
}

fn design(corpus: &Path, file: &str, knowledge: &Knowledge) -> Design {
    let bytes = fs::read(corpus.join("files").join(file)).unwrap();
    recognize(Circuit::build(&netlist::read(file, &bytes).unwrap()).0, &(), knowledge)
}

#[test]
#[allow(clippy::print_stderr, reason = "what is found beyond the list is for the reader to inspect")]
fn listed_regulators_of_real_boards_are_found_with_their_nets() {
    let Some(shared) = shared_folder() else { return };
    let corpus = shared.join("corpus");
    let knowledge = Knowledge::built_in();
    let mut missing = Vec::new();
    let mut seen = 0;
    for (file, wanted) in listed(&corpus) {
        let design = design(&corpus, &file, &knowledge);
        let circuit = &design.circuit;
        let number = file.split('-').next().unwrap();
        for each in &design.regulators {
            let device = circuit.device(each.device);
            let net = |net: Option<railworthy::circuit::NetId>| net.map_or("?", |net| circuit.net(net).name.as_str());
            let extra = if wanted.contains(&device.reference) { "" } else { "BEYOND " };
            eprintln!(
                "{number} {extra}{}={} [{}] {:?} {:?} {:?} in {} out {} gnd {} nominal {:?} families {:?} {:?}",
                device.reference,
                device.value,
                device.part,
                each.kind,
                each.mode,
                each.polarity,
                net(each.input_net),
                net(each.output_net),
                net(each.ground_net),
                each.nominal.as_ref().map(|nominal| (nominal.volts, nominal.grade)),
                each.identity
                    .families
                    .iter()
                    .map(|index| knowledge.families[*index].name.as_str())
                    .collect::<Vec<_>>(),
                each.identity.remarks,
            );
        }
        for reference in wanted {
            seen += 1;
            let found = design.regulators.iter().find(|each| circuit.device(each.device).reference == reference);
            let fits = found.is_some_and(|each| {
                each.kind != RegulatorKind::Switching
                    && each.input_net.is_some()
                    && each.output_net.is_some()
                    && each.ground_net.is_some()
            });
            if !fits {
                missing.push(format!("{number} {reference}"));
            }
        }
    }
    assert!(seen >= 60, "{seen}");
    assert!(missing.is_empty(), "{missing:?}");
}
