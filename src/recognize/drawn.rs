//! What a symbol says of its pins, by their names alone: not by nets, nor by what the part is known to be.

use super::model::RegulatorKind;
use super::pin_name::{self, Word};
use crate::circuit::Device;
use crate::knowledge::RoleName;

/// What the name of a pin says.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct DrawnPin {
    /// The roles that it may mean; none where the name says nothing that is sure.
    pub roles: Vec<RoleName>,
    /// Whether it is drawn as the tab or the pad under the part.
    pub tab: bool,
}

/// What the names of a part's pins say, in order of `Device::pins`.
#[must_use]
pub fn drawn_pins(device: &Device, kind: RegulatorKind) -> Vec<DrawnPin> {
    let drawn = |pin: &crate::circuit::Pin| {
        let name = pin_name::read(&pin.name, &pin.number);
        // `-VIN` is the return of a positive part and the input of a negative one; `V+` may be either.
        let signed = kind != RegulatorKind::Shunt && pin.name.contains(['+', '-']);
        let mut roles: Vec<RoleName> = Vec::new();
        for word in name.words.iter().filter(|_| !signed) {
            let told = if kind == RegulatorKind::Shunt { shunt(*word) } else { series(*word, kind) };
            roles.extend_from_slice(told);
        }
        DrawnPin { roles, tab: name.is(Word::Tab) }
    };
    device.pins.iter().map(drawn).collect()
}

fn series(word: Word, kind: RegulatorKind) -> &'static [RoleName] {
    match word {
        Word::Input => &[RoleName::Input],
        Word::Supply => &[RoleName::Input, RoleName::Bias],
        Word::Output => &[RoleName::Output],
        Word::ReferenceOutput if kind == RegulatorKind::Reference => &[RoleName::Output],
        Word::Ground => &[RoleName::Ground],
        Word::Adjust => &[RoleName::Adjust],
        Word::Enable(_) => &[RoleName::Enable],
        Word::Sense => &[RoleName::Sense],
        Word::Bypass => &[RoleName::Bypass],
        Word::Bias => &[RoleName::Bias],
        Word::PowerGood | Word::FaultFlag => &[RoleName::PowerGood],
        Word::NotConnected => &[RoleName::NotConnected],
        _ => &[],
    }
}

fn shunt(word: Word) -> &'static [RoleName] {
    match word {
        Word::Cathode | Word::Plus | Word::Output | Word::Input => &[RoleName::Cathode],
        Word::Anode | Word::Minus | Word::Ground => &[RoleName::Anode],
        Word::Reference | Word::Adjust => &[RoleName::Adjust],
        Word::NotConnected => &[RoleName::NotConnected],
        _ => &[],
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::circuit::Circuit;
    use crate::netlist;

    fn drawn(names: &[&str], kind: RegulatorKind) -> Vec<DrawnPin> {
        let pins: String = names
            .iter()
            .enumerate()
            .map(|(at, name)| format!("(pin (num {}) (name {name}) (type input))", at + 1))
            .collect();
        let text = format!(
            "(export (version D) (components (comp (ref U1) (value X) (libsource (lib l) (part p)))) \
             (libparts (libpart (lib l) (part p) (pins {pins}))) (nets))"
        );
        let (circuit, _) = Circuit::build(&netlist::read("drawn.net", text.as_bytes()).unwrap());
        drawn_pins(circuit.device(circuit.device_named("U1").unwrap()), kind)
    }

    #[test]
    fn names_tell_roles_and_signed_names_tell_none() {
        let roles = |names: &[&str]| -> Vec<Vec<RoleName>> {
            drawn(names, RegulatorKind::Series).into_iter().map(|pin| pin.roles).collect()
        };
        assert_eq!(roles(&["VI", "GND", "VO"]), [[RoleName::Input], [RoleName::Ground], [RoleName::Output]]);
        assert_eq!(roles(&["ADJ/GND", "-VIN", "~"]), [vec![RoleName::Adjust, RoleName::Ground], vec![], vec![]]);
        assert!(drawn(&["TAB"], RegulatorKind::Series).iter().all(|pin| pin.tab && pin.roles.is_empty()));
    }

    #[test]
    fn the_poles_of_a_shunt_are_told_by_their_letters_and_signs() {
        let roles: Vec<Vec<RoleName>> =
            drawn(&["K", "REF", "A", "+"], RegulatorKind::Shunt).into_iter().map(|pin| pin.roles).collect();
        assert_eq!(roles, [[RoleName::Cathode], [RoleName::Adjust], [RoleName::Anode], [RoleName::Cathode]]);
    }
}
