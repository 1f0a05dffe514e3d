//! The checks of the wiring keep silent on circuits that are right, and tell of those whose pins were exchanged.

use railworthy::board::Board;
use railworthy::checks::Level;
use railworthy::netlist::{self, Netlist};
use railworthy::review::{Examination, examine_netlist};

use crate::archive::unpack;
use crate::judge::{Rules, TODAY};
use crate::shared::shared_folder;

const WIRING: [&str; 2] = ["pin-meaning", "open-pin"];

/// Of the circuits whose outer pins were exchanged, so many at least must be told.
const TOLD: usize = 400;

fn examined(rules: &Rules, netlist: Netlist) -> Examination {
    examine_netlist(netlist, Board::default(), &rules.knowledge, &rules.checks, TODAY)
}

/// The findings of the wiring at warning or error.
fn loud(found: &Examination) -> Vec<String> {
    found
        .findings
        .iter()
        .filter(|reviewed| reviewed.finding.level != Level::Note)
        .filter(|reviewed| WIRING.contains(&reviewed.finding.check.as_str()))
        .map(|reviewed| format!("{} {}", reviewed.parts.join(" "), reviewed.finding.message))
        .collect()
}

/// Exchanges the numbers of pins 1 and 3 of `U1`, in its symbol and on its nets.
fn exchanged(mut netlist: Netlist) -> Netlist {
    let swap = |number: &mut String| match number.as_str() {
        "1" => *number = "3".to_owned(),
        "3" => *number = "1".to_owned(),
        _ => {}
    };
    let symbol = netlist.components.iter().find(|component| component.reference == "U1").unwrap().part.clone();
    for part in netlist.parts.iter_mut().filter(|part| part.part == symbol) {
        part.pins.iter_mut().for_each(|pin| swap(&mut pin.number));
    }
    let nodes = netlist.nets.iter_mut().flat_map(|net| &mut net.nodes);
    nodes.filter(|node| node.reference == "U1").for_each(|node| swap(&mut node.pin));
    netlist
}

#[test]
fn circuits_of_a_public_library_are_wired_right_and_with_outer_pins_exchanged_they_are_not() {
    let Some(folder) = shared_folder().map(|shared| shared.join("symbols")) else { return };
    let rules = Rules::built_in();
    let (mut wrong, mut asked, mut told) = (Vec::new(), 0, 0);
    let files = unpack(&folder.join("circuits.tar.xz"));
    for (name, bytes) in files.iter().filter(|(name, _)| name.contains("E/") && name.ends_with(".net")) {
        let netlist = netlist::read(name, bytes).unwrap();
        let sound = examined(&rules, netlist.clone());
        wrong.extend(loud(&sound).into_iter().map(|message| format!("{name}: {message}")));
        asked += 1;
        told += usize::from(!loud(&examined(&rules, exchanged(netlist))).is_empty());
    }
    assert!(wrong.is_empty(), "{} are told for nothing:\n{}", wrong.len(), wrong.join("\n"));
    assert!(asked > 1000 && told >= TOLD, "{told} of {asked} are told");
}
