//! Whether a device is a regulator or reference, and of which kind.
//!
//! A known family settles it. Without one, the pins must be those of a regulator and something must speak for it: the
//! symbol's text, a voltage in the name, power types on the pins, nets that are supplies. A part with a pin that no
//! linear regulator has (a bus, a flying capacitor, a switch node) is none, whatever its text says: many parts hold a
//! small regulator inside and mention it.

use crate::circuit::{Circuit, Device, DeviceId, DeviceKind, PinType, supply_name};
use crate::knowledge::{FamilyKind, Knowledge};

use super::identity::{Known, Place};
use super::model::RegulatorKind;
use super::pin_name::{PinName, Word};
use super::voltage_code::{self, Plainness};
use super::walk::SAMPLE;
use super::words::TextSigns;

/// A device that may be a regulator, with what was read of it.
pub(super) struct Candidate<'a> {
    pub(super) circuit: &'a Circuit,
    pub(super) id: DeviceId,
    pub(super) names: Vec<PinName>,
    pub(super) text: TextSigns,
    pub(super) known: Known,
}

/// Kinds of device that can turn out to be a regulator. References are often drawn as diodes, regulators in transistor
/// cases sometimes as transistors; those need a known name.
pub(super) fn worth_looking(kind: DeviceKind) -> bool {
    matches!(kind, DeviceKind::Integrated | DeviceKind::Unknown) || drawn_discrete(kind)
}

fn drawn_discrete(kind: DeviceKind) -> bool {
    matches!(kind, DeviceKind::Zener | DeviceKind::Diode | DeviceKind::Bipolar | DeviceKind::OtherSemiconductor)
}

/// Whether pins or text are those of a regulator or a reference, whatever the part is called.
pub(super) fn regulates(device: &Device, names: &[PinName]) -> bool {
    let has = |word: Word| names.iter().any(|name| name.is(word));
    let ends = (has(Word::Input) || has(Word::Supply)) && (has(Word::Output) || has(Word::ReferenceOutput));
    let series = ends && (has(Word::Ground) || has(Word::Adjust) || has(Word::Reference));
    let shunt = has(Word::Cathode) && has(Word::Anode) && (has(Word::Reference) || has(Word::Adjust));
    if has(Word::Alien) || has(Word::Switching) || has(Word::Pump) {
        return false;
    }
    series || shunt || {
        let text = super::words::read(&device.description, &device.keywords, &device.library);
        (text.linear || text.reference) && !text.foreign && !text.switching
    }
}

/// Reference prefixes of parts that are no regulators: connectors, filters, oscillators, switches, microphones, motors.
const FOREIGN_PREFIXES: &[&str] = &[
    "J", "P", "X", "CN", "CON", "K", "RLY", "L", "FL", "FB", "F", "Y", "XTAL", "MK", "MIC", "SW", "S", "RV", "RN",
    "R", "C", "BT", "BAT", "TP", "H", "MH", "LS", "BZ", "ANT", "AE", "LED", "ISO", "OK", "JP", "M",
];

/// How much must speak for a part that no text calls a regulator. Strong pin names and one more sign are enough.
const ENOUGH: f64 = 2.0;

impl Candidate<'_> {
    fn pin_kind(&self, index: usize) -> PinType {
        self.circuit.device(self.id).pins.get(index).map_or(PinType::Unspecified, |pin| pin.kind)
    }

    /// Whether a pin exists whose name says this.
    pub(super) fn has(&self, word: Word) -> bool {
        self.names.iter().any(|name| name.is(word))
    }

    fn count(&self, word: Word) -> usize {
        self.names.iter().filter(|name| name.is(word)).count()
    }

    /// Decides. `None`: no regulator.
    pub(super) fn kind(&self, knowledge: &Knowledge) -> Option<RegulatorKind> {
        let device = self.circuit.device(self.id);
        if let Some(family) = self.known.identity.families.first().and_then(|index| knowledge.families.get(*index)) {
            let kind = match family.kind {
                FamilyKind::Series => Some(RegulatorKind::Series),
                FamilyKind::Shunt => Some(RegulatorKind::Shunt),
                FamilyKind::Reference => Some(RegulatorKind::Reference),
                FamilyKind::Switching => Some(RegulatorKind::Switching),
                FamilyKind::Other => None,
            };
            // A name that is told by value, number or board file is trusted over what the symbol looks like.
            if self.known.place != Place::Symbol || self.known.symbol_agrees {
                return kind.filter(|kind| self.could_be(*kind));
            }
        }
        if drawn_discrete(device.kind) && !(self.text.reference || self.text.shunt || self.text.linear) {
            return None;
        }
        let prefix: String = device.reference.chars().take_while(|each| each.is_ascii_alphabetic()).collect();
        let foreign_prefix = FOREIGN_PREFIXES.contains(&prefix.to_ascii_uppercase().as_str());
        if foreign_prefix && !(self.text.linear || self.text.reference) {
            return None;
        }
        if self.is_shunt() {
            return Some(RegulatorKind::Shunt);
        }
        self.series_kind()
    }

    /// Whether the pins can be those of such a part: patterns of order codes also fit transistors and diodes.
    fn could_be(&self, kind: RegulatorKind) -> bool {
        let named = self.names.iter().any(|name| !name.is(Word::Unnamed));
        let poles = self.has(Word::Cathode) || self.has(Word::Plus) || self.has(Word::Anode);
        let discrete = drawn_discrete(self.circuit.device(self.id).kind);
        match kind {
            RegulatorKind::Shunt => !discrete || poles || self.has(Word::Reference),
            RegulatorKind::Switching => {
                !discrete && (!named || self.has_output() || self.has(Word::Switching) || self.has(Word::Adjust))
            }
            _ => !discrete || self.has_output(),
        }
    }

    /// A two-pole with a cathode and an anode, perhaps with a reference pin.
    fn is_shunt(&self) -> bool {
        let diode = self.has(Word::Cathode) && self.has(Word::Anode);
        let poles = self.has(Word::Plus) && self.has(Word::Minus);
        if !diode && !poles || self.has(Word::Output) || self.has(Word::Input) || self.has(Word::Supply) {
            return false;
        }
        let named = self.names.iter().filter(|name| !name.is(Word::NotConnected) && !name.is(Word::Unnamed));
        let mut controlled = false;
        for name in named {
            match name.words.first() {
                Some(Word::Cathode | Word::Anode | Word::Plus | Word::Minus) => {}
                Some(Word::Reference | Word::Adjust) => controlled = true,
                Some(Word::Auxiliary | Word::Unknown) if self.text.reference || self.text.shunt => {}
                _ => return false,
            }
        }
        if self.text.reference || self.text.shunt {
            return true;
        }
        // Three poles named cathode, anode and reference are the common programmable shunt, text or not.
        diode && controlled && !self.text.foreign
    }

    fn series_kind(&self) -> Option<RegulatorKind> {
        let text = &self.text;
        let linear = text.linear || text.reference && !text.switching;
        // A separate return of the output is that of an isolated converter.
        if (self.is_module_by_name() || self.has(Word::IsolatedReturn)) && !text.linear {
            return self.has_output().then_some(RegulatorKind::Switching);
        }
        if self.has(Word::Switching) || self.has(Word::Pump) {
            let converter = text.switching || text.regulator || self.has(Word::Adjust);
            let real = !text.foreign || text.switching;
            // A series part in whose text nothing switches may carry such a pin as an option.
            let optional = text.linear && !text.switching && !self.has(Word::Pump) && self.has_strong_core();
            if !optional {
                return (converter && real && self.has_input()).then_some(RegulatorKind::Switching);
            }
        }
        if text.switching && !text.linear {
            let output = self.has_output() || self.has(Word::Adjust);
            return (output && self.has_input() && !self.has(Word::Alien)).then_some(RegulatorKind::Switching);
        }
        if !self.has_output() || !self.has_input() || !self.has_return() {
            return self.by_types_alone(linear);
        }
        if self.has(Word::Alien) && (text.foreign || !text.linear) {
            return None;
        }
        if text.foreign && !(linear && self.has_strong_core()) {
            return None;
        }
        if linear || text.regulator {
            return Some(self.reference_or_series());
        }
        if text.foreign {
            return None;
        }
        (self.score() >= ENOUGH).then(|| self.reference_or_series())
    }

    fn reference_or_series(&self) -> RegulatorKind {
        let text = &self.text;
        // A reference may call itself "low dropout"; a regulator seldom calls itself a reference.
        if text.reference && !text.regulator { RegulatorKind::Reference } else { RegulatorKind::Series }
    }

    /// Pins that say nothing, in a part that its text calls a regulator: electrical types or the nets must tell.
    fn by_types_alone(&self, linear: bool) -> Option<RegulatorKind> {
        let text = &self.text;
        let told = linear || text.regulator && !text.switching && !text.foreign;
        let plain = self.names.len() <= 6 && !self.has(Word::Alien) && !self.has(Word::Cathode);
        let named = self.value_tells_voltage();
        let unnamed = self.count(Word::Unnamed) + self.count(Word::Unknown);
        if !plain || !(told || named && unnamed >= 3) {
            return None;
        }
        let powered = self.names.iter().enumerate().any(|(index, _)| self.pin_kind(index) == PinType::PowerOut);
        (self.names.len() >= 3 && (unnamed >= 1 || powered)).then(|| self.reference_or_series())
    }

    fn value_tells_voltage(&self) -> bool {
        let name = &self.known.identity.name;
        self.known.value_names_part
            && voltage_code::read_name(name, 0).first().is_some_and(|reading| reading.plainness <= Plainness::Coded)
    }

    fn has_output(&self) -> bool {
        self.has(Word::Output) || self.has(Word::ReferenceOutput)
    }

    fn has_input(&self) -> bool {
        self.has(Word::Input) || self.has(Word::Supply)
    }

    fn has_return(&self) -> bool {
        self.has(Word::Ground) || self.has(Word::Adjust) || self.has(Word::Reference) || self.has(Word::Tab)
    }

    fn has_strong_core(&self) -> bool {
        self.has(Word::Input) && self.has(Word::Output) && self.has_return() && !self.has(Word::Alien)
    }

    /// Drop-in replacements of the 78 series that switch carry their current rating in the name: `V7805-1000`,
    /// `K7803-500`, `R-785.0-0.5`, `R-78E5.0-1.0`.
    fn is_module_by_name(&self) -> bool {
        let name = super::family_match::reduced(&self.known.identity.name);
        let Some(at) = name.find("78") else { return false };
        let before = name.get(..at).unwrap_or("");
        let rest = name.get(at..).unwrap_or("");
        let milliamps = rest.rsplit('-').next().is_some_and(|last| {
            rest.contains('-')
                && last.len() >= 3
                && last.chars().take_while(char::is_ascii_digit).count() >= 3
                && last.get(..3).is_some_and(|digits| digits.ends_with("00") || digits.ends_with("50"))
        });
        let dashed = before.ends_with('-') && before.len() <= 5 && (rest.contains('.') || rest.contains("SR"));
        before.chars().all(|each| each.is_ascii_alphabetic() || each == '-') && (milliamps || dashed)
    }

    /// What speaks for and against a part that no text calls a regulator.
    fn score(&self) -> f64 {
        let mut score = 0.0;
        let strong_in = self.has(Word::Input);
        let strong_out = self.has(Word::Output);
        score += if strong_in { 0.5 } else { -1.0 };
        // A pin called `VREF` beside a plain input is the output of a reference.
        let reference = strong_in && self.has(Word::ReferenceOutput);
        score += if strong_out || reference { 0.5 } else { -1.0 };
        // `VIN` and `VOUT` speak of a supply, `IN` and `OUT` may be signals.
        let voltage = |word: Word| {
            let pins = self.names.iter().zip(&self.circuit.device(self.id).pins);
            pins.into_iter().any(|(name, pin)| name.is(word) && pin.name.to_ascii_uppercase().contains('V'))
        };
        if voltage(Word::Input) && voltage(Word::Output) {
            score += 0.75;
        }
        if self
            .names
            .iter()
            .zip(&self.circuit.device(self.id).pins)
            .any(|(_, pin)| pin.name.eq_ignore_ascii_case("ON"))
        {
            score -= 1.5;
        }
        let typed = |word: Word, kind: PinType| {
            self.names.iter().enumerate().any(|(index, name)| name.is(word) && self.pin_kind(index) == kind)
        };
        if typed(Word::Output, PinType::PowerOut) {
            score += 1.0;
        }
        if self.value_tells_voltage() {
            score += 1.0;
        }
        let optional = [Word::Bypass, Word::Adjust, Word::Sense, Word::Reference];
        if self.names.iter().any(|name| name.enable().is_some()) || optional.iter().any(|word| self.has(*word)) {
            score += 0.5;
        }
        // Power switches have the pins of a regulator; a fault flag is the one pin that regulators seldom have.
        if self.has(Word::FaultFlag) {
            score -= if self.has(Word::Adjust) || self.has(Word::Bypass) { 1.0 } else { 3.0 };
        }
        let library = self.circuit.device(self.id).library.to_ascii_lowercase();
        if library.contains("switch") || library.contains("power_management") {
            score -= 1.0;
        }
        score -= 0.75 * (self.count(Word::Unknown) as f64);
        if self.names.len() > 24 {
            score -= 1.0;
        }
        score + self.net_score()
    }

    /// Nets speak for a regulator where its output is a supply with a capacitor and its ground pin lies on ground.
    fn net_score(&self) -> f64 {
        let device = self.circuit.device(self.id);
        let nets = |word: Word| {
            device.pins.iter().zip(&self.names).filter(move |(_, name)| name.is(word)).filter_map(|(pin, _)| pin.net)
        };
        let mut score = 0.0;
        if nets(Word::Output).any(|net| supply_name(&self.circuit.net(net).name).is_some()) {
            score += 1.0;
        }
        let held = nets(Word::Output).chain(nets(Word::ReferenceOutput)).any(|net| self.has_capacitor(net));
        let fed = nets(Word::Input).any(|net| self.has_capacitor(net));
        // Capacitors on one side only may be a filter's; on both they are those of a regulator.
        score
            + match (held, fed) {
                (true, true) => 1.25,
                (true, false) => 0.5,
                (false, true) => 0.25,
                (false, false) => 0.0,
            }
    }

    fn has_capacitor(&self, net: crate::circuit::NetId) -> bool {
        self.circuit.neighbours(net).take(SAMPLE).any(|(device, other)| {
            self.circuit.device(device).kind == DeviceKind::Capacitor && self.circuit.net(other).ground
        })
    }
}
