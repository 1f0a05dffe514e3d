//! Regulators of two boards: which is which, what each became, where its pins lie now.

use std::collections::{BTreeMap, BTreeSet};

use super::Change;
use super::matcher::Matcher;
use super::pairs::{Group, Pairs};
use crate::circuit::{Device, NetId, Pin};
use crate::facts::Facts;
use crate::knowledge::{Pass, Sign};
use crate::recognize::{Design, Mode, Regulator};

/// A pin of a regulator that lies on another net than it did; of another symbol than before, an end.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Moved {
    /// Its number; `None` for an end.
    pub pin: Option<String>,
    /// Its name; empty where it has none. Of an end: `input`, `output`, `ground`.
    pub name: String,
    /// The net that it was on; `None` for none.
    pub was: Option<String>,
    /// The net that it is on.
    pub is: Option<String>,
}

/// Pairs of regulators: those in pairs of parts, then those that alone lie between a pair of inputs and a pair of
/// outputs, whatever the part is now.
pub(super) fn pairs(matcher: &Matcher<'_>, old: &Design, new: &Design) -> Pairs {
    let mut pairs = Pairs::new(old.regulators.len(), new.regulators.len());
    let of_part: BTreeMap<(usize, usize), usize> = (new.regulators.iter().enumerate())
        .filter_map(|(at, one)| Some(((matcher.new.device_place(one.device)?, one.output_index), at)))
        .collect();
    for (at, one) in old.regulators.iter().enumerate() {
        let part = matcher.old.device_place(one.device).and_then(|place| matcher.devices.new_of(place));
        if let Some(other) = part.and_then(|part| of_part.get(&(part, one.output_index))) {
            pairs.join(at, *other);
        }
    }
    let mut between: BTreeMap<(Option<usize>, usize), Group> = BTreeMap::new();
    let net_old = |net: Option<NetId>| net.and_then(|net| matcher.nets.new_of(matcher.old.net_place(net)?));
    let net_new = |net: Option<NetId>| net.and_then(|net| matcher.new.net_place(net));
    for at in pairs.left_old() {
        let Some(one) = old.regulators.get(at) else { continue };
        if let Some(output) = net_old(one.output_net) {
            between.entry((net_old(one.input_net), output)).or_default().0.push(at);
        }
    }
    for at in pairs.left_new() {
        let Some(one) = new.regulators.get(at) else { continue };
        if let Some(output) = net_new(one.output_net) {
            between.entry((net_new(one.input_net), output)).or_default().1.push(at);
        }
    }
    for (old, new) in between.into_values() {
        if let ([old], [new]) = (&old[..], &new[..]) {
            pairs.join(*old, *new);
        }
    }
    pairs
}

/// What a regulator is, as far as that changed.
pub(super) fn identity(old: &Facts<'_>, new: &Facts<'_>, was: &Regulator, is: &Regulator) -> Vec<Change<String>> {
    let words = |facts: &Facts<'_>, one: &Regulator| {
        let pass = one.pass.map(Pass::name);
        [
            ("value", Some(facts.part_of(one).value.trim().to_owned())),
            ("family", facts.families(one).next().map(|family| family.name.clone())),
            ("kind", Some(one.kind.name().to_owned())),
            ("polarity", Some(if one.polarity == Sign::Positive { "positive" } else { "negative" }.to_owned())),
            ("mode", Some(if one.mode == Mode::Fixed { "fixed" } else { "adjustable" }.to_owned())),
            ("pass", pass.map(str::to_owned)),
        ]
    };
    let both = words(old, was).into_iter().zip(words(new, is));
    both.filter(|((_, was), (_, is))| was != is).map(|((name, was), (_, is))| Change { name, was, is }).collect()
}

/// What lies on other nets than it did: of the same symbol its pins, in the new part's order, those that only the old
/// part has last; of another symbol, whose pins have other numbers, its ends.
pub(super) fn moved(matcher: &Matcher<'_>, was: &Regulator, is: &Regulator) -> Vec<Moved> {
    let (old, new) = (matcher.old.circuit.device(was.device), matcher.new.circuit.device(is.device));
    if old.symbol() != new.symbol() {
        let ends = [
            ("input", was.input_net, is.input_net),
            ("output", was.output_net, is.output_net),
            ("ground", was.ground_net, is.ground_net),
        ];
        return ends.into_iter().filter_map(|(name, lay, lies)| moved_to(matcher, None, name, lay, lies)).collect();
    }
    let (before, now) = (by_number(old), by_number(new));
    let only_old = old.pins.iter().filter(|pin| !now.contains_key(pin.number.as_str()));
    let mut told = BTreeSet::new();
    let pins = new.pins.iter().chain(only_old).filter(|pin| told.insert(pin.number.as_str()));
    let net = |pins: &BTreeMap<&str, &Pin>, pin: &Pin| pins.get(pin.number.as_str()).and_then(|pin| pin.net);
    pins.filter_map(|pin| moved_to(matcher, Some(&pin.number), &pin.name, net(&before, pin), net(&now, pin)))
        .collect()
}

fn moved_to(
    matcher: &Matcher<'_>,
    pin: Option<&String>,
    name: &str,
    lay: Option<NetId>,
    lies: Option<NetId>,
) -> Option<Moved> {
    let there = |net: NetId| matcher.nets.new_of(matcher.old.net_place(net)?);
    let stays = match (lay, lies) {
        (None, None) => true,
        (Some(lay), Some(lies)) => there(lay).is_some() && there(lay) == matcher.new.net_place(lies),
        _ => false,
    };
    (!stays).then(|| Moved {
        pin: pin.cloned(),
        name: name.to_owned(),
        was: lay.map(|net| matcher.old.circuit.net(net).name.clone()),
        is: lies.map(|net| matcher.new.circuit.net(net).name.clone()),
    })
}

/// The pins of a part by number; the first where several have one.
fn by_number(device: &Device) -> BTreeMap<&str, &Pin> {
    device.pins.iter().rev().map(|pin| (pin.number.as_str(), pin)).collect()
}
