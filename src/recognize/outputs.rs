//! The outputs of a part, and which pins belong to which of them.

use crate::circuit::{Device, NetId};
use crate::knowledge::RoleName;

use super::model::{EnablePin, Roles};
use super::pin_name::PinName;

/// One output of a part.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Rail {
    pub(super) pins: Vec<usize>,
    pub(super) label: Option<char>,
    pub(super) net: Option<NetId>,
}

/// Groups output pins into rails: pins on different nets with different labels are different outputs; everything else,
/// stacked and unconnected pins among them, is one.
pub(super) fn rails(device: &Device, names: &[PinName], roles: &[RoleName], output: RoleName) -> Vec<Rail> {
    let mut rails: Vec<Rail> = Vec::new();
    let mut open = Vec::new();
    for (index, _) in roles.iter().enumerate().filter(|(_, role)| **role == output) {
        let label = names.get(index).and_then(|name| name.label);
        let Some(net) = device.pins.get(index).and_then(|pin| pin.net) else {
            open.push((index, label));
            continue;
        };
        let known = rails.iter_mut().find(|rail| rail.net == Some(net) || rail.label == label);
        match known {
            Some(rail) => rail.pins.push(index),
            None => rails.push(Rail { pins: vec![index], label, net: Some(net) }),
        }
    }
    for (index, label) in open {
        let at = rails.iter().position(|rail| rail.label == label).unwrap_or(0);
        match rails.get_mut(at) {
            Some(rail) => rail.pins.push(index),
            None => rails.push(Rail { pins: vec![index], label, net: None }),
        }
    }
    rails.sort_by_key(|rail| rail.label.map(order));
    for rail in &mut rails {
        rail.pins.sort_unstable();
    }
    rails
}

/// `P` is the first of a pair with `N`.
fn order(label: char) -> (u8, char) {
    match label {
        'P' => (0, label),
        'N' => (1, label),
        other => (0, other),
    }
}

/// The pins of one rail by role: those with its label, and those that belong to no rail in particular.
pub(super) fn roles_of(
    rail: &Rail,
    rails: &[Rail],
    names: &[PinName],
    roles: &[RoleName],
    shunt_output: RoleName,
) -> Roles {
    let mut found = Roles { output: rail.pins.clone(), ..Roles::default() };
    let labels: Vec<char> = rails.iter().filter_map(|rail| rail.label).collect();
    for (index, role) in roles.iter().enumerate() {
        let name = names.get(index);
        let label = name.and_then(|name| name.label).filter(|label| labels.contains(label));
        let mine = rails.len() < 2 || label.is_none() || label == rail.label;
        if !mine || *role == shunt_output {
            continue;
        }
        match role {
            RoleName::Input => found.input.push(index),
            RoleName::Ground => found.ground.push(index),
            RoleName::Adjust => found.adjust.push(index),
            RoleName::Enable => {
                let active_low = name.and_then(PinName::enable).unwrap_or(false);
                found.enable.push(EnablePin { pin: index, active_low });
            }
            RoleName::Sense => found.sense.push(index),
            RoleName::Bypass => found.bypass.push(index),
            RoleName::Bias => found.bias.push(index),
            RoleName::PowerGood => found.power_good.push(index),
            // The pole of a shunt that is not its output lies on its ground.
            RoleName::Cathode | RoleName::Anode => found.ground.push(index),
            RoleName::Other => found.other.push(index),
            RoleName::Output | RoleName::NotConnected => {}
        }
    }
    found
}
