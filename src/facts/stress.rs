//! How a capacitor is used: what of its rating, and which way round.

use super::capacitor::{entry, of};
use super::{Definition, Facts, RailOrigin, Value, ValueKind};
use crate::circuit::{DeviceId, DeviceKind, NetId};
use crate::knowledge::Sign;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::{Regulator, RegulatorKind};

/// Series resistance, in ohms for each volt, from which a solid capacitor on a supply is safe from the current of the
/// first moment (common practice).
const SAFE_OHMS_PER_VOLT: f64 = 1.0;
/// The part of its rating that a solid tantalum capacitor bears behind such a resistance, or behind a regulator that
/// limits the current (common practice).
const LIMITED: f64 = 0.8;
/// Libraries whose unnamed pin 1 of a polarized capacitor is the positive one.
const LIBRARIES: &[&str] = &["device", "device_additional"];

pub(super) const DEFINITIONS: &[Definition] = &[
    entry("net", ValueKind::Word(&[]), "the net whose voltage is across it", |facts, subject| {
        of(subject, |_, net| Value::word(&facts.circuit().net(net).name))
    }),
    entry(
        "usable_part",
        ValueKind::Figure(Dimension::ONE),
        "the part of its rating that its technology may be used at where it lies",
        |facts, subject| {
            of(subject, |device, net| match facts.usable_part(device, net) {
                Some(part) => Value::Figure(part),
                None => Value::inapplicable("its technology is not known"),
            })
        },
    ),
    entry(
        "on_supply",
        ValueKind::Flag,
        "nothing limits the current into it: no regulator, no resistor",
        |facts, subject| of(subject, |_, net| Value::flag(facts.is_stiff(net))),
    ),
    entry(
        "forward_voltage",
        ValueKind::Figure(Dimension::VOLTAGE),
        "the voltage from the positive pin of a polarized capacitor to the other, signed",
        |facts, subject| {
            of(subject, |device, net| match facts.forward_voltage(device, net) {
                Some(volts) => Value::Figure(volts),
                None => Value::inapplicable("it has no polarity, or what is across it is not known"),
            })
        },
    ),
    entry("positive_net", ValueKind::Word(&[]), "the net of its positive pin", |facts, subject| {
        of(subject, |device, _| facts.pole(device, |(plus, _)| plus))
    }),
    entry("negative_net", ValueKind::Word(&[]), "the net of its negative pin", |facts, subject| {
        of(subject, |device, _| facts.pole(device, |(_, minus)| minus))
    }),
];

impl Facts<'_> {
    /// Whether the net can drive a surge: it is neither regulated nor fed through a resistor that is large enough.
    fn is_stiff(&self, net: NetId) -> bool {
        let limits = |regulator: &Regulator| regulator.kind != RegulatorKind::Switching;
        if self.feeding(net).any(limits) {
            return false;
        }
        let rail = self.rail(net);
        let RailOrigin::Through { device, from } = rail.origin else { return true };
        if self.circuit().device(device).kind != DeviceKind::Resistor {
            return !self.feeding(from).any(limits);
        }
        let volts = self.rail(from).voltage.magnitude().nominal().unwrap_or(0.0);
        let ohms = self.resistance(device).nominal().unwrap_or(0.0);
        ohms < volts * SAFE_OHMS_PER_VOLT && !self.feeding(from).any(limits)
    }

    /// What its technology file says; a solid tantalum capacitor bears more where the current is limited.
    fn usable_part(&self, device: DeviceId, net: NetId) -> Option<Quantity> {
        let told = self.technology(device)?;
        let reference = &self.circuit().device(device).reference;
        let what = format!("usable part of the rating of {reference}");
        let (range, mut evidence) = if told.technology.name == "tantalum" && !self.is_stiff(net) {
            (
                Range::exactly(LIMITED),
                Evidence::new(Grade::Inferred, what, "common practice where current is limited"),
            )
        } else {
            let cited = told.technology.figures.get("voltage_factor")?;
            let grade = if cited.recalled { Grade::Inferred } else { Grade::Published };
            (cited.value, Evidence::new(grade, what, cited.source.clone()))
        };
        if !told.evidence.grade.is_fact() {
            evidence = evidence.at_most(told.evidence.grade);
        }
        if !evidence.grade.is_fact() {
            evidence = evidence.settled_by(Settle::new(Table::Part, reference, "technology", "tantalum"));
        }
        Some(Quantity::given(Dimension::ONE, range, Pair::new(0.0, 1.0), evidence))
    }

    /// The rating of a tantalum capacitor that is worth asking for: one on a supply whose voltage is known.
    pub(super) fn wanted_rating(&self, device: DeviceId, net: NetId) -> Option<Quantity> {
        let told = self.technology(device)?;
        let surely = told.technology.name == "tantalum" && told.evidence.grade.is_fact();
        if !surely || !self.is_stiff(net) || self.voltage_across(device, net).is_missing() {
            return None;
        }
        let reference = &self.circuit().device(device).reference;
        let evidence = Evidence::new(Grade::Assumed, format!("rating of {reference}"), "nothing tells it")
            .settled_by(Settle::new(Table::Part, reference, "rating", "25 V"));
        Some(Quantity::missing(Dimension::VOLTAGE, Pair::NOT_NEGATIVE, evidence))
    }

    /// The nets of the positive and the negative pin of a polarized capacitor, and what tells which is which.
    fn poles(&self, device: DeviceId) -> Option<((NetId, NetId), Evidence)> {
        let part = self.circuit().device(device);
        if !part.polarized || part.pins.len() != 2 {
            return None;
        }
        let at = |wanted: fn(&str, &str) -> bool| part.pins.iter().position(|pin| wanted(&pin.name, &pin.number));
        let plus = at(|name, _| matches!(name, "+" | "POS" | "P" | "+V"));
        let minus = at(|name, _| matches!(name, "-" | "NEG" | "N" | "-V"));
        let other = |index: usize| 1_usize.checked_sub(index);
        let what = format!("polarity of {}", part.reference);
        let (index, evidence) = match plus.or_else(|| minus.and_then(other)) {
            Some(index) => (index, Evidence::new(Grade::Drawn, what, "names of its pins")),
            None => {
                let index = at(|_, number| number == "1")?;
                let known = LIBRARIES.contains(&part.library.to_lowercase().as_str());
                let grade = if known { Grade::Described } else { Grade::Inferred };
                (index, Evidence::new(grade, what, "pin 1 of a polarized symbol is its positive one"))
            }
        };
        let net = |index: usize| part.pins.get(index).and_then(|pin| pin.net);
        Some(((net(index)?, net(other(index)?)?), evidence))
    }

    fn pole(&self, device: DeviceId, pick: fn((NetId, NetId)) -> NetId) -> Value {
        match self.poles(device) {
            Some((nets, _)) => Value::word(&self.circuit().net(pick(nets)).name),
            None => Value::inapplicable("it has no polarity, or one end is open"),
        }
    }

    fn forward_voltage(&self, device: DeviceId, net: NetId) -> Option<Quantity> {
        let ((plus, minus), evidence) = self.poles(device)?;
        // Behind a series resistor the end is a node of its own at the voltage of the bank's net.
        let at =
            |end: NetId, other: NetId| self.potential(end).or_else(|| self.potential(net).filter(|_| other != net));
        let forward = at(plus, minus)?.minus(&at(minus, plus)?);
        let told = Quantity::given(Dimension::ONE, Range::exactly(1.0), Pair::new(-1.0, 1.0), evidence);
        Some(forward.times(&told))
    }

    /// The voltage of a net, or where only its sign is known that of what it must at least be.
    fn potential(&self, net: NetId) -> Option<Quantity> {
        let rail = self.rail(net);
        if !rail.voltage.is_missing() {
            return Some(rail.voltage);
        }
        let regulators: Vec<&Regulator> = self
            .fed_by(net)
            .chain(self.feeding(net))
            .filter(|regulator| regulator.kind == RegulatorKind::Series)
            .collect();
        let first = regulators.first()?;
        let positive = first.polarity == Sign::Positive;
        if regulators.iter().any(|other| other.polarity != first.polarity) {
            return None;
        }
        let least = self.output_voltage(first).magnitude().nominal()?;
        let name = &self.circuit().net(net).name;
        let evidence = Evidence::new(Grade::Assumed, format!("sign of {name}"), "what the regulator on it needs")
            .settled_by(Settle::new(Table::Supply, name, "voltage", "10.8 .. 14.4 V"));
        let (volts, limits) =
            if positive { (least, Pair::NOT_NEGATIVE) } else { (-least, Pair::new(f64::NEG_INFINITY, 0.0)) };
        Some(Quantity::given(Dimension::VOLTAGE, Range::exactly(volts), limits, evidence))
    }
}
