//! A finding's identity, which survives renumbering of parts, lines and net codes.
//!
//! It rests on the check; on the subject by the names that people gave: value and symbol of a part, names of its input
//! and output net; and on what tells the part from its like: the unique id of its symbol and of the sheet that it
//! stands on, which an export keeps whatever the references are. Where an export has no ids, its place in the circuit
//! stands for them: the names of the nets on its pins, and on nets that nobody named the parts there. References, net
//! codes, made-up net names, lines and the order of things in the file take no part.

use std::collections::BTreeMap;

use sha2::{Digest, Sha256};

use crate::checks::Finding;
use crate::circuit::{DeviceId, NetId, is_made_up};
use crate::facts::{Facts, Subject};
use crate::netlist::{Component, Netlist};

/// How many hexadecimal digits a fingerprint has.
const DIGITS: usize = 16;
/// Most pins of an unnamed net whose parts tell what it is; a larger one is only unnamed.
const MOST_PINS: usize = 64;

/// The fingerprint of each finding. It does not depend on what else was found, but where two findings are alike in all
/// that it rests on: those are told apart by their order, for nothing else is left to tell them by.
pub(super) fn fingerprints(facts: &Facts<'_>, netlist: &Netlist, findings: &[&Finding]) -> Vec<String> {
    let mut alike: BTreeMap<String, usize> = BTreeMap::new();
    let maker = Maker { facts, netlist };
    let mut prints = Vec::new();
    for finding in findings {
        let identity = maker.identity(finding);
        let earlier = alike.entry(identity.clone()).or_default();
        prints.push(match *earlier {
            0 => identity,
            position => digest(&[identity, position.to_string()]),
        });
        *earlier += 1;
    }
    prints
}

#[derive(Debug, Clone, Copy)]
struct Maker<'a> {
    facts: &'a Facts<'a>,
    netlist: &'a Netlist,
}

impl Maker<'_> {
    fn identity(self, finding: &Finding) -> String {
        let mut words = vec![finding.check.clone()];
        words.extend(self.subject_words(finding.subject));
        // Members of a group that are alike are one to the finding, whichever of them it names.
        if let Some(Subject::Capacitor { device, net }) = finding.member {
            words.extend(self.kind_words(device));
            words.push(self.net_word(Some(net)));
        }
        digest(&words)
    }

    fn subject_words(self, subject: Subject) -> Vec<String> {
        match subject {
            Subject::Regulator(_) => {
                let Some(regulator) = self.facts.regulator(subject) else { return Vec::new() };
                let mut words = self.device_words(regulator.device);
                words.push(regulator.output_index.to_string());
                words.extend([regulator.input_net, regulator.output_net].map(|net| self.net_word(net)));
                words
            }
            Subject::Net(net) => vec![self.net_word(Some(net)), self.place_of_net(net)],
            Subject::Board => Vec::new(),
            Subject::Capacitor { device, net } => {
                let mut words = self.device_words(device);
                words.push(self.net_word(Some(net)));
                words
            }
        }
    }

    fn device_words(self, device: DeviceId) -> Vec<String> {
        let mut words = self.kind_words(device);
        words.push(self.symbol_id(device).unwrap_or_else(|| self.place_of_part(device)));
        words
    }

    fn kind_words(self, device: DeviceId) -> Vec<String> {
        let part = self.facts.circuit().device(device);
        vec![part.value.clone(), part.part.clone()]
    }

    /// The unique id of a symbol with that of its sheet: a sheet that is used twice holds each symbol twice.
    fn symbol_id(self, device: DeviceId) -> Option<String> {
        let component = self.netlist.components.get(self.facts.circuit().device(device).component)?;
        let Component { ids, sheet_ids, .. } = component;
        // Of several units the least, for their order is not fixed. Old editors wrote zeros for no id.
        let id = ids.iter().filter(|id| id.contains(|sign| !matches!(sign, '0' | '-'))).min()?;
        Some(digest(&[sheet_ids.clone(), id.clone()]))
    }

    /// What is around a part without an id.
    fn place_of_part(self, device: DeviceId) -> String {
        let circuit = self.facts.circuit();
        let mut words = vec![circuit.device(device).sheet.clone()];
        let mut pins: Vec<(&str, Option<NetId>)> =
            circuit.pins_of(device).map(|(_, pin)| (pin.number.as_str(), pin.net)).collect();
        pins.sort_unstable_by_key(|(number, _)| *number);
        for (number, net) in pins {
            let around = net.map(|net| self.place_of_net(net)).unwrap_or_default();
            words.extend([number.to_owned(), self.net_word(net), around]);
        }
        digest(&words)
    }

    /// The pins on a net that nobody named; empty for one that has a name, or more pins than such a net should have.
    fn place_of_net(self, net: NetId) -> String {
        let circuit = self.facts.circuit();
        if !is_made_up(&circuit.net(net).name) || circuit.pin_count(net) > MOST_PINS {
            return String::new();
        }
        let mut pins: Vec<Vec<String>> = circuit
            .pins_on(net)
            .map(|(device, pin)| {
                let number = circuit.device(device).pins.get(pin).map(|pin| pin.number.clone()).unwrap_or_default();
                let mut words = self.kind_words(device);
                words.extend([number, self.symbol_id(device).unwrap_or_default()]);
                words
            })
            .collect();
        pins.sort_unstable();
        digest(&pins.concat())
    }

    /// A net by the name that people gave it; names that are made of references and codes change with them.
    fn net_word(self, net: Option<NetId>) -> String {
        let Some(net) = net else { return String::new() };
        let name = &self.facts.circuit().net(net).name;
        if is_made_up(name) { "~".to_owned() } else { name.clone() }
    }
}

/// Length-prefixed, so that no two lists of words read alike.
pub(super) fn digest(words: &[String]) -> String {
    let mut hash = Sha256::new();
    for word in words {
        hash.update(word.len().to_le_bytes());
        hash.update(word.as_bytes());
    }
    let hex: String = hash.finalize().iter().map(|byte| format!("{byte:02x}")).collect();
    hex.chars().take(DIGITS).collect()
}
