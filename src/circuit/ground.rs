//! Which nets are grounds.

use std::collections::BTreeSet;

use super::model::{Circuit, DeviceKind, NetId, Node};
use super::supply_name::supply_name;

/// Words that make a net a ground where one of them stands in its name.
const WORDS: &[&str] = &[
    "GND", "GROUND", "EARTH", "AGND", "DGND", "PGND", "SGND", "CGND", "IGND", "GNDA", "GNDD", "GNDP", "GNDS",
    "GNDPWR", "GNDREF", "GNDIO", "GNDISO", "0V", "0VDC", "0VA", "0VD", "AGNDA", "DGNDD",
];

/// Words that make one on a board that has no net of the first kind: beside a ground they may be a negative supply.
const SECOND_CHOICE: &[&str] =
    &["VSS", "VSSA", "AVSS", "DVSS", "VSSD", "COM", "COMMON", "MASSE", "MASSA", "MASS", "0"];

/// Words beside a ground's that say that the net is something else: a sense line, a switched or a virtual ground.
const OTHERWISE: &[&str] = &[
    "SENSE", "SNS", "DET", "DETECT", "EN", "ENABLE", "SW", "SWITCH", "SWITCHED", "CTRL", "FB", "VIRTUAL", "LED",
    "TEST", "LIFT", "FAULT", "LOSS",
];

pub(super) fn mark_grounds(circuit: &mut Circuit) {
    let mut found = nets_where(circuit, |name| has_word(name, WORDS));
    if found.is_empty() {
        found = nets_where(circuit, |name| has_word(name, SECOND_CHOICE));
    }
    let enough = if found.is_empty() { 1 } else { 2 };
    found.extend(circuit.nets().filter(|net| ground_by_pins(circuit, *net, enough)));
    for id in found {
        if let Some(Node::Net(net)) = circuit.graph.node_weight_mut(id.0) {
            net.ground = true;
        }
    }
}

fn nets_where(circuit: &Circuit, test: impl Fn(&str) -> bool) -> BTreeSet<NetId> {
    circuit.nets().filter(|net| test(&circuit.net(*net).name)).collect()
}

/// Whether the editor made a net's name, of a part's reference and pin or of the net's code: it changes with them.
#[must_use]
pub fn is_made_up(name: &str) -> bool {
    ["Net-(", "unconnected-(", "net "].iter().any(|start| name.trim_start_matches('/').starts_with(start))
}

/// The last part of a sheet path. Names that were made from a pin (`Net-(U1-GND)`) say how that pin is called, not what
/// the net is.
fn own_name(name: &str) -> Option<&str> {
    let made = is_made_up(name);
    if made { None } else { name.rsplit('/').find(|part| !part.is_empty()) }
}

fn has_word(name: &str, words: &[&str]) -> bool {
    let Some(name) = own_name(name).filter(|name| supply_name(name).is_none()) else { return false };
    let upper = name.to_uppercase();
    let mut found = false;
    for token in upper.split(|letter: char| !letter.is_alphanumeric() && !matches!(letter, '+' | '.')) {
        // `GND1`, `AGND2`; `0V` keeps its own digit because only those at the end go.
        let bare = token.trim_end_matches(|letter: char| letter.is_ascii_digit());
        if OTHERWISE.contains(&token) {
            return false;
        }
        found |= words.contains(&token) || words.contains(&bare);
    }
    found
}

/// Whether enough integrated parts have their ground pin on a net whose name does not say that it is a supply.
fn ground_by_pins(circuit: &Circuit, net: NetId, enough: usize) -> bool {
    let name = &circuit.net(net).name;
    let upper = name.to_uppercase();
    if upper.contains("BAT") || upper.contains("VEE") || supply_name(name).is_some() {
        return false;
    }
    let mut devices = BTreeSet::new();
    for (id, index) in circuit.pins_on(net) {
        let device = circuit.device(id);
        let Some(pin) = device.pins.get(index) else { continue };
        if device.kind == DeviceKind::Integrated && pin.kind.is_power() && is_ground_pin(&pin.name) {
            devices.insert(id);
            if devices.len() >= enough {
                return true;
            }
        }
    }
    false
}

fn is_ground_pin(name: &str) -> bool {
    let bare = name.trim_end_matches(|letter: char| letter.is_ascii_digit());
    ["GND", "AGND", "DGND", "PGND", "SGND", "GNDA", "GNDD"].iter().any(|word| bare.eq_ignore_ascii_case(word))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn grounds_are_known_by_name() {
        let grounds =
            ["GND", "Earth", "AGND", "GNDD", "GNDPWR", "PGND", "GNDA", "GNDREF", "/0VDC", "0V", "DGND", "SGND"];
        for name in
            grounds.iter().chain(&["/x/GND", "GND1", "GND_ISO", "/Power/Earth_Protective", "gnd", "GND-A", "A_GND"])
        {
            assert!(has_word(name, WORDS), "{name}");
        }
        let others = [
            "VSS",
            "GND_SENSE",
            "VGND",
            "-BATT",
            "+10V",
            "Net-(U1-GND)",
            "GNDDETECT",
            "10V",
            "+3V3",
            "GND_SW",
            "/5_0V",
            "5.0V",
            "",
        ];
        for name in others {
            assert!(!has_word(name, WORDS), "{name}");
        }
        assert!(has_word("/VSS", SECOND_CHOICE));
    }
}
