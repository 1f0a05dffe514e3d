//! Finding the regulators and references of a board.

use std::collections::BTreeSet;

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, NetId, supply_name};
use crate::knowledge::{Family, Knowledge, RoleName, Sign};
use crate::quantity::Grade;

use super::built_up;
use super::divider::{self, Ends};
use super::family_match::Matcher;
use super::feed;
use super::identity::{self, Known, Sources};
use super::in_place::{InPlace, Overrides};
use super::kind::{Candidate, regulates, worth_looking};
use super::model::{Design, Divider, Mode, Nominal, NotJudged, Regulator, RegulatorKind, Roles};
use super::nominal::{self, Told};
use super::order::natural;
use super::outputs::{Rail, rails, roles_of};
use super::pin_name::{self, PinName, Word};
use super::programming::programming_pins;
use super::roles::{self, Hints};
use super::walk::SAMPLE;
use super::words;

/// Finds every regulator and reference of a board, packaged or built up, with its pins, nets, divider and feed.
#[must_use]
pub fn recognize(circuit: Circuit, overrides: &dyn Overrides, knowledge: &Knowledge) -> Design {
    let matcher = Matcher::new(&knowledge.families);
    let mut found = Found::default();
    for id in circuit.devices() {
        let device = circuit.device(id);
        let in_place = overrides.in_place(&device.reference);
        let worth = worth_looking(device.kind) || in_place.says_anything();
        if !device.is_fitted() || !worth || device.pins.len() < 2 {
            continue;
        }
        if overrides.ignored(&device.reference) {
            found.not_judged.push(NotJudged { device: id, reason: "ignored by the board file".to_owned() });
            continue;
        }
        let finder = Finder { circuit: &circuit, id, device, overrides, in_place, knowledge };
        finder.find(&matcher, &mut found);
    }
    built_up::add(&circuit, &|part| overrides.ignored(part), &mut found);
    let Found { mut regulators, mut not_judged, .. } = found;
    let order = |id: DeviceId| natural(&circuit.device(id).reference);
    regulators.sort_by_cached_key(|regulator: &Regulator| (order(regulator.device), regulator.output_index));
    not_judged.sort_by_cached_key(|each| order(each.device));
    Design { regulators, not_judged, circuit }
}

/// What has been found so far.
#[derive(Debug, Default)]
pub(super) struct Found {
    pub(super) regulators: Vec<Regulator>,
    pub(super) not_judged: Vec<NotJudged>,
    /// Programmable shunts that do not hold what they sense; also listed as not judged.
    pub(super) error_amplifiers: Vec<Regulator>,
}

struct Finder<'a> {
    circuit: &'a Circuit,
    id: DeviceId,
    device: &'a Device,
    overrides: &'a dyn Overrides,
    in_place: InPlace<'a>,
    knowledge: &'a Knowledge,
}

/// What is common to all outputs of a part.
struct Part<'a> {
    kind: RegulatorKind,
    names: &'a [PinName],
    roles: &'a [RoleName],
    told: &'a Told,
    known: &'a Known,
    family: Option<&'a Family>,
    sign: Option<Sign>,
    text_fixed: bool,
}

impl Finder<'_> {
    fn find(&self, matcher: &Matcher<'_>, found: &mut Found) {
        let device = self.device;
        // Most parts of a board have neither a known name nor pins of interest; their text need not be read.
        let names: Vec<PinName> = device.pins.iter().map(|pin| pin_name::read(&pin.name, &pin.number)).collect();
        let regulating = || regulates(device, &names);
        let sources = Sources { matcher, knowledge: self.knowledge, regulating: &regulating };
        let mut known = identity::identify(device, self.overrides.family(&device.reference), sources);
        if known.identity.families.is_empty() && !of_interest(&names) && !self.in_place.says_anything() {
            return;
        }
        let text = words::read(&device.description, &device.keywords, &device.library);
        let candidate = Candidate { circuit: self.circuit, id: self.id, names, text, known: known.clone() };
        let family = known.identity.families.first().and_then(|index| self.knowledge.families.get(*index));
        let Some(kind) = self.kind(&candidate, &known, family) else { return };
        let told = nominal::read(device, &known, &candidate.text, self.knowledge);
        known.identity.remarks.extend(told.remark.clone());
        let hints = Hints {
            kind,
            fixed: !told.adjustable && (told.volts.is_some() || candidate.text.fixed),
            adjustable: told.adjustable,
            family,
            nominal: told.volts.as_ref().map(|nominal| nominal.volts),
        };
        let mut roles = roles::assign(self.circuit, self.id, &candidate.names, hints);
        self.in_place.assign(device, &mut roles);
        let sign = self.in_place.polarity.or_else(|| nominal::sign(device, &known, &candidate.text, family));
        let part = Part {
            kind,
            names: &candidate.names,
            roles: &roles,
            told: &told,
            known: &known,
            family,
            sign,
            text_fixed: candidate.text.fixed,
        };
        if kind == RegulatorKind::Shunt {
            self.shunt(&part, found);
        } else {
            self.series(&part, found);
        }
    }

    /// What the part is: declared, of a declared family, else as its names, pins and text tell.
    fn kind(&self, candidate: &Candidate<'_>, known: &Known, family: Option<&Family>) -> Option<RegulatorKind> {
        let declared = family.filter(|_| known.identity.grade == Grade::Declared);
        let of_family = || RegulatorKind::of_family(declared?.kind);
        self.in_place.kind.or_else(of_family).or_else(|| candidate.kind(self.knowledge))
    }

    fn nets(&self, pins: &[usize]) -> Vec<NetId> {
        let mut nets: Vec<NetId> = Vec::new();
        for net in pins.iter().filter_map(|index| self.device.pins.get(*index)?.net) {
            if !nets.contains(&net) {
                nets.push(net);
            }
        }
        nets
    }

    fn series(&self, part: &Part<'_>, to: &mut Found) {
        let mut found = rails(self.device, part.names, part.roles, RoleName::Output);
        if found.is_empty() && part.kind == RegulatorKind::Switching {
            found.push(Rail { pins: Vec::new(), label: None, net: None });
        }
        if part.kind == RegulatorKind::Switching {
            to.not_judged.push(NotJudged { device: self.id, reason: "switching converter".to_owned() });
        }
        for (index, rail) in found.iter().enumerate() {
            let roles = roles_of(rail, &found, part.names, part.roles, RoleName::Output);
            if part.kind != RegulatorKind::Switching && roles.input.is_empty() && roles.adjust.is_empty() {
                continue;
            }
            to.regulators.push(self.series_output(part, index, found.len(), rail, roles));
        }
    }

    fn series_output(&self, part: &Part<'_>, index: usize, count: usize, rail: &Rail, roles: Roles) -> Regulator {
        let grounds = self.nets(&roles.ground);
        let mut output_net = rail.net;
        let divider = self.divider(&roles, output_net, &grounds);
        if part.kind == RegulatorKind::Switching && output_net.is_none_or(|net| self.is_switch_node(net)) {
            output_net = self.beyond_inductor(part).or_else(|| divider.as_ref().and_then(|divider| divider.senses));
        }
        let mode = self.mode(part, &roles, divider.as_ref());
        let sign = self.sign(part, rail, count, output_net);
        let nominal = if mode == Mode::Fixed { self.nominal(part, index, count, sign, output_net) } else { None };
        let ground_net = pick_ground(self.circuit, &grounds)
            .or_else(|| divider.as_ref().filter(|_| roles.ground.is_empty()).and_then(|divider| divider.returns));
        Regulator {
            device: self.id,
            output_index: index,
            identity: part.known.identity.clone(),
            kind: part.kind,
            polarity: sign,
            mode,
            pass: self
                .in_place
                .pass
                .or_else(|| part.family.and_then(|family| family.pass.as_ref()).map(|pass| pass.value)),
            nominal,
            input_net: self.nets(&roles.input).first().copied(),
            output_net,
            ground_net,
            divider: divider.filter(|_| mode == Mode::Adjustable),
            feed: None,
            roles,
            built_up: None,
        }
    }

    fn divider(&self, roles: &Roles, output: Option<NetId>, grounds: &[NetId]) -> Option<Divider> {
        let adjust = self.nets(&roles.adjust).first().copied()?;
        let ends = Ends { output, grounds, has_ground: !roles.ground.is_empty() };
        Some(divider::read(self.circuit, adjust, ends))
    }

    /// Fixed or adjustable. A part whose voltage is told is adjustable only where resistors set it: dual-mode parts have
    /// their set pin on ground, on the output or on an internal tap to be fixed.
    fn mode(&self, part: &Part<'_>, roles: &Roles, divider: Option<&Divider>) -> Mode {
        if self.in_place.volts.is_some() {
            return Mode::Fixed;
        }
        if part.told.volts.is_none() && !programming_pins(self.device).is_empty() {
            return Mode::Adjustable;
        }
        let Some(divider) = divider else {
            return if roles.adjust.is_empty() || part.told.volts.is_some() { Mode::Fixed } else { Mode::Adjustable };
        };
        if divider::has_resistors(divider) {
            return Mode::Adjustable;
        }
        // A feedback pin on ground makes no sense but in a dual-mode part, which is fixed then.
        let dual = !roles.ground.is_empty() && divider.returns.is_some() && !part.told.adjustable;
        let can_be_fixed = part.family.is_none_or(|family| family.fixed);
        if dual && can_be_fixed && part.kind != RegulatorKind::Switching {
            return Mode::Fixed;
        }
        let told = part.told.volts.is_some() || part.text_fixed && !part.told.adjustable;
        if told { Mode::Fixed } else { Mode::Adjustable }
    }

    fn sign(&self, part: &Part<'_>, rail: &Rail, count: usize, output: Option<NetId>) -> Sign {
        if rail.label == Some('N') {
            return Sign::Negative;
        }
        // A part with a positive and a negative output names them so.
        if count > 1 && part.names.iter().any(|name| name.label == Some('N')) {
            return Sign::Positive;
        }
        part.sign.unwrap_or_else(|| {
            let named = output.and_then(|net| supply_name(&self.circuit.net(net).name)).map(|name| name.volts);
            // The name of the net, then how its capacitors are polarized.
            let reversed = || named.is_none() && output.is_some_and(|net| self.holds_capacitors_reversed(net));
            if named.is_some_and(|volts| volts < 0.0) || reversed() { Sign::Negative } else { Sign::Positive }
        })
    }

    /// Whether polarized capacitors on the net have their positive end on ground, as on a negative rail.
    fn holds_capacitors_reversed(&self, net: NetId) -> bool {
        let mut reversed = 0_i32;
        for (device, other) in self.circuit.neighbours(net).take(SAMPLE) {
            let part = self.circuit.device(device);
            if part.kind != DeviceKind::Capacitor || !part.polarized || !self.circuit.net(other).ground {
                continue;
            }
            let named = part.pins.iter().find(|pin| pin.name == "+");
            let positive = named.or_else(|| part.pins.iter().find(|pin| pin.number == "1"));
            reversed += if positive.and_then(|pin| pin.net) == Some(other) { 1 } else { -1 };
        }
        reversed > 0
    }

    /// The nominal voltage of a fixed output: declared, told by the part, or last by the net's name.
    fn nominal(
        &self,
        part: &Part<'_>,
        index: usize,
        count: usize,
        sign: Sign,
        output: Option<NetId>,
    ) -> Option<Nominal> {
        let signed = |volts: f64| if sign == Sign::Negative { -volts.abs() } else { volts.abs() };
        if let Some(volts) = self.in_place.volts {
            let source = "declared for the part".to_owned();
            return Some(Nominal { volts: signed(volts), grade: Grade::Declared, source });
        }
        let pair = part.told.pair.as_ref().filter(|_| count == 2).and_then(|pair| pair.get(index));
        let told = pair.or(part.told.volts.as_ref());
        let name = output.map_or("", |net| self.circuit.net(net).name.as_str());
        let named = supply_name(name);
        let sure = |_: &&Nominal| pair.is_some() || !part.told.unsure;
        if let Some(told) = told.filter(sure) {
            return Some(Nominal { volts: signed(told.volts), ..told.clone() });
        }
        if let Some(volts) = self.overrides.output_voltage(name) {
            return Some(Nominal { volts, grade: Grade::Declared, source: format!("declared for {name}") });
        }
        if let Some(told) =
            told.filter(|_| part.kind != RegulatorKind::Switching || named.is_some() && !part.told.faint)
        {
            // Among the readings of a code the net's name may choose.
            let near = |volts: f64| named.is_some_and(|named| (named.volts.abs() / volts - 1.0).abs() < 0.05);
            let fitting =
                std::iter::once(told.volts).chain(part.told.others.iter().copied()).find(|volts| near(*volts));
            if let Some(volts) = fitting.or((named.is_none() || !part.told.faint).then_some(told.volts)) {
                return Some(Nominal { volts: signed(volts), ..told.clone() });
            }
        }
        let named = named?;
        Some(Nominal { volts: named.volts, grade: Grade::Inferred, source: format!("net name {name}") })
    }

    /// Whether a pin called output is in fact the switch node: an inductor and no capacitor to ground is on it.
    fn is_switch_node(&self, net: NetId) -> bool {
        let kind = |device: DeviceId| self.circuit.device(device).kind;
        let inductor =
            self.circuit.neighbours(net).take(SAMPLE).any(|(device, _)| kind(device) == DeviceKind::Inductor);
        let held = |(device, other)| kind(device) == DeviceKind::Capacitor && self.circuit.net(other).ground;
        inductor && !self.circuit.neighbours(net).take(SAMPLE).any(held)
    }

    /// The rail of a switching part without an output pin: the net beyond the inductor on its switch node.
    fn beyond_inductor(&self, part: &Part<'_>) -> Option<NetId> {
        let node = |name: &PinName| name.is(Word::Switching) || name.is(Word::Output);
        let switch = part.names.iter().zip(&self.device.pins).filter(|(name, _)| node(name));
        let nets: BTreeSet<NetId> = switch.filter_map(|(_, pin)| pin.net).collect();
        let inputs: Vec<NetId> = self.nets(&pins_of(part.roles, RoleName::Input));
        nets.iter().find_map(|net| {
            let inductor = |device: &DeviceId| self.circuit.device(*device).kind == DeviceKind::Inductor;
            self.circuit
                .neighbours(*net)
                .find(|(device, other)| inductor(device) && !inputs.contains(other))
                .map(|(_, other)| other)
        })
    }

    fn shunt(&self, part: &Part<'_>, to: &mut Found) {
        let cathodes = pins_of(part.roles, RoleName::Cathode);
        let anodes = pins_of(part.roles, RoleName::Anode);
        let (cathode, anode) = (self.nets(&cathodes).first().copied(), self.nets(&anodes).first().copied());
        // With the cathode on ground and the anode not, it holds a negative rail.
        let grounded = |net: Option<NetId>| net.is_some_and(|net| self.circuit.net(net).ground);
        let negative = grounded(cathode) && !grounded(anode);
        let output = if negative { RoleName::Anode } else { RoleName::Cathode };
        let (output_net, ground_net) = if negative { (anode, cathode) } else { (cathode, anode) };
        let rail = Rail { pins: if negative { anodes } else { cathodes }, label: None, net: output_net };
        let roles = roles_of(&rail, &[], part.names, part.roles, output);
        let grounds: Vec<NetId> = ground_net.into_iter().collect();
        let divider = self.divider(&roles, output_net, &grounds);
        let comparator = self.comparator(divider.as_ref(), output_net);
        let mode = self.mode(part, &roles, divider.as_ref());
        let sign = if negative { Sign::Negative } else { Sign::Positive };
        let mut apart = grounds;
        apart.extend(self.nets(&roles.adjust));
        let feed = output_net.and_then(|net| feed::read(self.circuit, net, &apart));
        let nominal = if mode == Mode::Fixed { self.nominal(part, 0, 1, sign, output_net) } else { None };
        let shunt = Regulator {
            device: self.id,
            output_index: 0,
            identity: part.known.identity.clone(),
            kind: RegulatorKind::Shunt,
            polarity: sign,
            mode,
            pass: None,
            nominal,
            input_net: feed.as_ref().map(|feed| feed.from),
            output_net,
            ground_net,
            divider: divider.filter(|_| mode == Mode::Adjustable),
            feed,
            roles,
            built_up: None,
        };
        if let Some(reason) = comparator {
            to.not_judged.push(NotJudged { device: self.id, reason });
            to.error_amplifiers.push(shunt);
        } else {
            to.regulators.push(shunt);
        }
    }

    /// A programmable shunt whose divider senses another net than the one it holds is a comparator or an error
    /// amplifier; it regulates something that is not seen here.
    fn comparator(&self, divider: Option<&Divider>, held: Option<NetId>) -> Option<String> {
        let senses = divider?.senses?;
        if Some(senses) == held {
            return None;
        }
        let name = &self.circuit.net(senses).name;
        Some(format!("used as a comparator or error amplifier: its divider senses {name}"))
    }
}

fn pins_of(roles: &[RoleName], role: RoleName) -> Vec<usize> {
    roles.iter().enumerate().filter(|(_, each)| **each == role).map(|(index, _)| index).collect()
}

/// Of several grounded nets the one that is a ground by name.
fn pick_ground(circuit: &Circuit, nets: &[NetId]) -> Option<NetId> {
    nets.iter().find(|net| circuit.net(**net).ground).or(nets.first()).copied()
}

/// Whether any pin name is that of a regulator; a cheap test before text is read. Parts without pin names pass.
fn of_interest(names: &[PinName]) -> bool {
    let output = |name: &PinName| name.is(Word::Output) || name.is(Word::ReferenceOutput) || name.is(Word::Cathode);
    let other = |name: &PinName| {
        name.is(Word::Plus) || name.is(Word::Unnamed) || name.is(Word::Switching) || name.is(Word::Adjust)
    };
    names.iter().any(output) || names.iter().any(other)
}
