//! A finding's identity, which survives renumbering of parts, lines and net codes.

use std::collections::BTreeMap;

use sha2::{Digest, Sha256};

use crate::checks::Finding;
use crate::circuit::{DeviceId, NetId};
use crate::facts::{Facts, Subject};
use crate::netlist::Netlist;

/// How many hexadecimal digits a fingerprint has.
const DIGITS: usize = 16;

/// The fingerprint of each finding: a hash of its check and of what it is about by the names that people gave.
/// Findings that are alike in all of this are told apart in the order of their symbols' unique ids, which an export
/// keeps whatever the references are.
pub(super) fn fingerprints(facts: &Facts<'_>, netlist: &Netlist, findings: &[&Finding]) -> Vec<String> {
    let identities: Vec<String> = findings.iter().map(|finding| identity(facts, finding)).collect();
    let mut alike: BTreeMap<&str, Vec<(&str, usize)>> = BTreeMap::new();
    for (index, (finding, identity)) in findings.iter().zip(&identities).enumerate() {
        let id = symbol_id(facts, netlist, finding.member.unwrap_or(finding.subject));
        alike.entry(identity).or_default().push((id, index));
    }
    let mut earlier: BTreeMap<usize, usize> = BTreeMap::new();
    for same in alike.values_mut() {
        same.sort_unstable();
        earlier.extend(same.iter().enumerate().map(|(position, (_, index))| (*index, position)));
    }
    identities
        .iter()
        .enumerate()
        .map(|(index, identity)| match earlier.get(&index) {
            None | Some(0) => identity.clone(),
            Some(position) => digest(&[identity.clone(), position.to_string()]),
        })
        .collect()
}

fn identity(facts: &Facts<'_>, finding: &Finding) -> String {
    let mut words = vec![finding.check.clone()];
    for subject in std::iter::once(finding.subject).chain(finding.member) {
        words.extend(subject_words(facts, subject));
    }
    digest(&words)
}

fn symbol_id<'n>(facts: &Facts<'_>, netlist: &'n Netlist, subject: Subject) -> &'n str {
    let device = match subject {
        Subject::Regulator(_) => facts.regulator(subject).map(|regulator| regulator.device),
        Subject::Capacitor { device, .. } => Some(device),
        Subject::Net(_) | Subject::Board => None,
    };
    let component = device.and_then(|device| netlist.components.get(facts.circuit().device(device).component));
    component.and_then(|component| component.ids.first()).map_or("", String::as_str)
}

fn subject_words(facts: &Facts<'_>, subject: Subject) -> Vec<String> {
    match subject {
        Subject::Regulator(_) => match facts.regulator(subject) {
            Some(regulator) => {
                let mut words = device_words(facts, regulator.device);
                words.push(regulator.output_index.to_string());
                words.extend([regulator.input_net, regulator.output_net].map(|net| net_word(facts, net)));
                words
            }
            None => Vec::new(),
        },
        Subject::Net(net) => vec![net_word(facts, Some(net))],
        Subject::Board => Vec::new(),
        Subject::Capacitor { device, net } => {
            let mut words = device_words(facts, device);
            words.push(net_word(facts, Some(net)));
            words
        }
    }
}

fn device_words(facts: &Facts<'_>, device: DeviceId) -> Vec<String> {
    let part = facts.circuit().device(device);
    vec![part.value.clone(), part.part.clone()]
}

/// A net by the name that people gave it; names that are made of references and codes change with them.
fn net_word(facts: &Facts<'_>, net: Option<NetId>) -> String {
    let Some(net) = net else { return String::new() };
    let name = &facts.circuit().net(net).name;
    let made = ["Net-(", "unconnected-(", "net "].iter().any(|start| name.starts_with(start));
    if made { "~".to_owned() } else { name.clone() }
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
