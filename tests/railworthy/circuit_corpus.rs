//! Circuits of real exports. Files are named by their number only.

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::Path;

use railworthy::circuit::{Circuit, DeviceKind, PinType};
use railworthy::netlist::{self, Format, Netlist};

use crate::shared::shared_folder;

fn boards(shared: &Path) -> Vec<(String, Netlist)> {
    let mut names: Vec<String> = fs::read_dir(shared.join("corpus/files"))
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .collect();
    names.sort();
    let read = |name: String| {
        let bytes = fs::read(shared.join("corpus/files").join(&name)).unwrap();
        (name[..3].to_owned(), netlist::read(&name, &bytes).unwrap())
    };
    names.into_iter().map(read).collect()
}

#[test]
fn every_node_of_a_real_board_is_a_pin_of_its_circuit() {
    let Some(shared) = shared_folder() else { return };
    let boards = boards(&shared);
    assert_eq!(boards.len(), 99);
    for (number, netlist) in boards {
        let (circuit, problems) = Circuit::build(&netlist);
        let references: BTreeSet<&str> = netlist.components.iter().map(|part| part.reference.as_str()).collect();
        assert!(circuit.devices().len() >= netlist.components.len(), "{number}");
        assert_eq!(circuit.nets().len(), netlist.nets.len(), "{number}");
        let nodes: BTreeSet<(&str, &str, usize)> = (netlist.nets.iter().enumerate())
            .flat_map(|(index, net)| {
                net.nodes.iter().map(move |node| (node.reference.as_str(), node.pin.as_str(), index))
            })
            .collect();
        let open = |name: &str| name.trim_start_matches('/').starts_with("unconnected-(");
        let connected: usize = circuit.nets().map(|net| circuit.pins_on(net).count()).sum();
        let left_open = netlist.nets.iter().filter(|net| open(&net.name) && net.nodes.len() == 1).count();
        assert_eq!(connected + left_open, nodes.len(), "{number}");
        let used =
            circuit.devices().flat_map(|id| circuit.pins_of(id)).filter(|(_, pin)| pin.span.length() > 0).count();
        assert_eq!(used, nodes.len(), "{number}");
        let unknown: BTreeSet<&str> =
            nodes.iter().map(|node| node.0).filter(|node| !references.contains(node)).collect();
        let told = problems.iter().filter(|problem| problem.message().ends_with("which is no part")).count();
        assert_eq!(told, unknown.len(), "{number}: {problems:?}");
    }
}

#[test]
fn pins_have_the_types_and_names_that_nodes_state() {
    let Some(shared) = shared_folder() else { return };
    let mut seen = 0;
    for (number, netlist) in boards(&shared).into_iter().filter(|(_, netlist)| netlist.format != Format::D) {
        let (circuit, _) = Circuit::build(&netlist);
        let mut node_types: BTreeMap<(usize, usize), (&str, &str)> = BTreeMap::new();
        for node in netlist.nets.iter().flat_map(|net| &net.nodes).filter(|node| !node.kind.is_empty()) {
            node_types.insert((node.span.start(), node.span.end()), (&node.kind, &node.function));
        }
        for id in circuit.devices() {
            for (_, pin) in circuit.pins_of(id) {
                let Some((kind, function)) = node_types.get(&(pin.span.start(), pin.span.end())) else { continue };
                assert_eq!(pin.kind, PinType::read(kind), "{number}");
                let suffixed = format!("{}_{}", pin.name, pin.number);
                assert!(
                    pin.name == *function || suffixed == *function || pin.name.is_empty(),
                    "{number}: {function}"
                );
                seen += 1;
            }
        }
    }
    assert!(seen > 700, "{seen}");
}

#[test]
fn version_10_names_pins_as_its_library_does() {
    let Some(shared) = shared_folder() else { return };
    for (number, netlist) in boards(&shared).into_iter().filter(|(_, netlist)| netlist.tool.contains("10.")) {
        let (circuit, _) = Circuit::build(&netlist);
        for id in circuit.devices() {
            let device = circuit.device(id);
            let part = netlist.parts.iter().find(|part| part.library == device.library && part.part == device.part);
            for pin in part.map_or(&[][..], |part| &part.pins) {
                let own = &device.pins[device.pin_numbered(&pin.number).unwrap()];
                let name = if pin.name == "~" { "" } else { &pin.name };
                assert_eq!(own.name, name, "{number}");
            }
        }
    }
}

#[test]
fn real_boards_have_a_ground_and_parts_of_every_plain_kind() {
    let Some(shared) = shared_folder() else { return };
    let (mut kinds, mut grounded, mut unread) = (BTreeMap::<DeviceKind, usize>::new(), 0, BTreeSet::new());
    let mut without = Vec::new();
    for (number, netlist) in boards(&shared) {
        let (circuit, _) = Circuit::build(&netlist);
        match circuit.grounds().next() {
            Some(_) => grounded += 1,
            None => without.push(number.clone()),
        }
        for device in circuit.devices().map(|id| circuit.device(id)) {
            *kinds.entry(device.kind).or_default() += 1;
            if device.kind.has_amount() && device.amount.is_none() && device.is_fitted() {
                unread.insert(format!("{:?} {}", device.kind, device.value));
            }
            if device.kind == DeviceKind::Unknown {
                unread.insert(format!("Unknown {number} {}:{} {}", device.library, device.part, device.reference));
            }
        }
    }
    #[allow(clippy::print_stderr, reason = "the counts are the result of the test")]
    {
        eprintln!("{kinds:?}\nno ground: {without:?}\nunread: {unread:#?}");
    }
    assert!(grounded >= 90, "{without:?}");
    assert!(kinds[&DeviceKind::Resistor] > 1500 && kinds[&DeviceKind::Capacitor] > 900);
}
