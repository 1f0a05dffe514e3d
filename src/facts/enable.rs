//! The enable input: what drives it and what it asks for.

use std::collections::BTreeSet;

use super::identity::of;
use super::{Definition, Facts, RailOrigin, Subject, SubjectKind, Value, ValueKind, Word};
use crate::circuit::{DeviceId, DeviceKind, NetId, PinType};
use crate::knowledge::{Active, Cited, EnableSpec, OpenEnable, Sign};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Slope};
use crate::recognize::{EnablePin, Regulator, RegulatorId};

/// Enable threshold of a part whose sheet is not known, volts: low, nominal, high (common practice: logic levels).
const THRESHOLD: (f64, f64, f64) = (0.4, 1.2, 2.0);

/// To what an open-collector or power-good output pulls, volts: low, nominal, high (common practice: at most 0.4 V).
const LOW_LEVEL: (f64, f64, f64) = (0.0, 0.4, 0.4);
/// No such output is at more volts when it is low.
const LOW_LIMIT: f64 = 0.8;

const HERE: &str = file!();

pub(super) const DEFINITIONS: &[Definition] = &[
    flag("enable_open", "the enable input is left open", |facts, subject| {
        with_enable(facts, subject, |_, _, drive| Value::flag(matches!(drive, Drive::Open)))
    }),
    flag(
        "enable_from_own_output",
        "the enable input is fed from nothing but the output that it controls",
        |facts, subject| with_enable(facts, subject, |_, _, drive| Value::flag(matches!(drive, Drive::OwnOutput))),
    ),
    Definition {
        name: "enable_voltage",
        of: SubjectKind::Regulator,
        kind: ValueKind::Figure(Dimension::VOLTAGE),
        meaning: "the voltage at the enable input where rails and resistors alone set it",
        defined_in: HERE,
        compute: |facts, subject| {
            with_enable(facts, subject, |regulator, _, drive| match drive {
                // The sheets of negative parts state their levels against ground in either sense.
                Drive::Level(level) if regulator.polarity == Sign::Negative => Value::Figure(level.magnitude()),
                Drive::Level(level) => Value::Figure(level.clone()),
                Drive::Open => Value::inapplicable("the enable input is open"),
                Drive::PulledDownOnly => Value::inapplicable("nothing pulls the enable input up"),
                Drive::OwnOutput => Value::inapplicable("the enable input hangs on the part's own output"),
                Drive::Elsewhere(by) => Value::inapplicable(format!("the enable input is driven by {by}")),
            })
        },
    },
    flag(
        "enable_lacks_pull_up",
        "nothing but outputs that only pull down drive the enable input",
        |facts, subject| {
            with_enable(facts, subject, |_, _, drive| Value::flag(matches!(drive, Drive::PulledDownOnly)))
        },
    ),
    threshold(
        "enable_low_voltage",
        "the level to which an open-collector or power-good output pulls the enable input",
        |facts, subject| {
            with_enable(facts, subject, |regulator, pin, _| match facts.pulled_down_by(regulator, pin).first() {
                Some((device, _)) => Value::Figure(facts.low_level(*device)),
                None => Value::inapplicable("no open-collector output drives it"),
            })
        },
    ),
    threshold("enable_on", "the level at which the part is certainly on", |facts, subject| {
        with_enable(facts, subject, |regulator, _, _| {
            Value::Figure(facts.threshold(regulator, |spec| spec.on.as_ref()))
        })
    }),
    threshold("enable_off", "the level at which the part is certainly off", |facts, subject| {
        with_enable(facts, subject, |regulator, _, _| {
            Value::Figure(facts.threshold(regulator, |spec| spec.off.as_ref()))
        })
    }),
    Definition {
        name: "enable_active",
        of: SubjectKind::Regulator,
        kind: ValueKind::Word(&["high", "low"]),
        meaning: "the level that switches the part on",
        defined_in: HERE,
        compute: |facts, subject| {
            with_enable(facts, subject, |regulator, pin, _| {
                let told = facts.first_family(regulator, |family| family.enable.as_ref().map(|spec| spec.active));
                if told.is_none() && is_bare_shutdown(facts, regulator, pin) {
                    return Value::inapplicable("whether its shutdown pin is drawn without its bar is not known");
                }
                let low = told.map_or(pin.active_low, |(_, active)| active == Active::Low);
                Value::word(if low { "low" } else { "high" })
            })
        },
    },
    Definition {
        name: "enable_when_open",
        of: SubjectKind::Regulator,
        kind: ValueKind::Word(&["on", "off", "undefined", "unknown"]),
        meaning: "what an open enable input does",
        defined_in: HERE,
        compute: |facts, subject| with_enable(facts, subject, |regulator, _, _| facts.when_open(regulator)),
    },
];

const fn flag(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind: ValueKind::Flag, meaning, defined_in: HERE, compute }
}

const fn threshold(
    name: &'static str,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    let kind = ValueKind::Figure(Dimension::VOLTAGE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: HERE, compute }
}

/// A pin that is called *shutdown* or *inhibit* without a bar: symbols often leave the bar out, and some makers' inhibit
/// pins switch on when high, so only a data sheet tells.
fn is_bare_shutdown(facts: &Facts<'_>, regulator: &Regulator, pin: &EnablePin) -> bool {
    let name = facts.part_of(regulator).pins.get(pin.pin).map_or("", |pin| pin.name.as_str());
    pin.active_low && !name.contains(['~', '#', '/', '!', '*']) && !name.to_ascii_uppercase().contains("EN")
}

/// What sets the level of an enable input.
#[derive(Debug, Clone)]
enum Drive {
    /// Nothing.
    Open,
    /// Only the output that it controls.
    OwnOutput,
    /// Rails and resistors: the level in volts.
    Level(Quantity),
    /// Outputs that only pull down, with nothing that pulls up.
    PulledDownOnly,
    /// Something that a netlist does not tell the level of.
    Elsewhere(String),
}

fn with_enable(
    facts: &Facts<'_>,
    subject: Subject,
    compute: impl FnOnce(&Regulator, &EnablePin, &Drive) -> Value,
) -> Value {
    of(facts, subject, |regulator| {
        let pins = &regulator.roles.enable;
        // A part with one enable input for each output lists them in the order of its outputs.
        let Some(pin) = pins.get(regulator.output_index).or_else(|| pins.first()) else {
            return Value::inapplicable("no enable input");
        };
        compute(regulator, pin, &facts.drive(regulator, pin))
    })
}

impl Facts<'_> {
    fn drive(&self, regulator: &Regulator, pin: &EnablePin) -> Drive {
        let Some(net) = self.circuit().net_of(regulator.device, pin.pin) else { return Drive::Open };
        if Some(net) == regulator.output_net && regulator.input_net != regulator.output_net {
            return Drive::OwnOutput;
        }
        let rail = self.rail(net);
        if rail.origin != RailOrigin::Unknown {
            return Drive::Level(rail.voltage);
        }
        if regulator.input_net == Some(net) {
            return Drive::Level(self.own_input(regulator, rail.voltage));
        }
        match self.pulls(regulator, net) {
            Ok(pulls) if pulls.is_empty() && !self.pulled_down_by(regulator, pin).is_empty() => Drive::PulledDownOnly,
            Ok(pulls) => self.pulled(regulator, &pulls),
            Err(by) => Drive::Elsewhere(by),
        }
    }

    /// The part's own input, of which nothing is known: whatever it is worth, while the part regulates it is no less than
    /// the output.
    fn own_input(&self, regulator: &Regulator, unknown: Quantity) -> Quantity {
        let Some(least) = self.set_point(regulator).magnitude().nominal() else { return unknown };
        let Some(evidence) = unknown.missing_evidence().next().cloned() else { return unknown };
        let evidence = Evidence { source: "at least the output".to_owned(), ..evidence };
        Quantity::missing(Dimension::VOLTAGE, Pair::new(least, f64::INFINITY), evidence)
    }

    /// The resistors from a net to rails. An error names a part that drives the net in a way that no netlist tells.
    fn pulls(&self, regulator: &Regulator, net: NetId) -> Result<Vec<(DeviceId, NetId)>, String> {
        let circuit = self.circuit();
        let mut pulls = Vec::new();
        for (device, pin) in circuit.fitted_on(net) {
            let part = circuit.device(device);
            if device == regulator.device || self.is_enable_of_another(device, pin) {
                continue;
            }
            match part.kind {
                DeviceKind::Capacitor | DeviceKind::Mechanical | DeviceKind::Led | DeviceKind::Zener => {}
                DeviceKind::Resistor if self.is_resistor(device) => {
                    if let Some(far) = circuit.other_end(device, net) {
                        pulls.push((device, far));
                    }
                }
                _ => {
                    let listens = part.pins.get(pin).is_some_and(|pin| pin.kind == PinType::Input);
                    if !listens && !self.pulls_down(device, pin) {
                        return Err(part.reference.clone());
                    }
                }
            }
        }
        Ok(pulls)
    }

    /// Whether a pin can only pull down: the power-good output of a regulator, an open collector or drain.
    fn pulls_down(&self, device: DeviceId, pin: usize) -> bool {
        let open = self.circuit().device(device).pins.get(pin).map(|pin| pin.kind) == Some(PinType::OpenCollector);
        open || self.in_part(device).any(|regulator| regulator.roles.power_good.contains(&pin))
    }

    /// The outputs that pull an enable input down, each with its pin.
    fn pulled_down_by(&self, regulator: &Regulator, pin: &EnablePin) -> Vec<(DeviceId, usize)> {
        let net = self.circuit().net_of(regulator.device, pin.pin);
        let pins = net.into_iter().flat_map(|net| self.circuit().fitted_on(net));
        pins.filter(|(device, pin)| *device != regulator.device && self.pulls_down(*device, *pin)).collect()
    }

    /// To what an open-collector output pulls: sheets give at most 0.4 V (common practice).
    fn low_level(&self, device: DeviceId) -> Quantity {
        let (low, nominal, high) = LOW_LEVEL;
        let reference = &self.circuit().device(device).reference;
        let evidence =
            Evidence::new(Grade::Assumed, format!("low level of {reference}"), "usual for open collectors");
        let limits = Pair::new(0.0, LOW_LIMIT);
        Quantity::given(Dimension::VOLTAGE, Range::clamped(low, nominal, high), limits, evidence)
    }

    /// The regulators whose output or power-good pin switches this one on, and nothing else does.
    pub(super) fn enabled_by(&self, regulator: &Regulator) -> BTreeSet<RegulatorId> {
        let pins = &regulator.roles.enable;
        let pin = pins.get(regulator.output_index).or_else(|| pins.first()).filter(|pin| !pin.active_low);
        let Some((pin, net)) = pin.and_then(|pin| Some((pin, self.circuit().net_of(regulator.device, pin.pin)?)))
        else {
            return BTreeSet::new();
        };
        let down = self.pulled_down_by(regulator, pin);
        let good = down.iter().flat_map(|(device, pin)| {
            let good = self.in_part(*device).any(|regulator| regulator.roles.power_good.contains(pin));
            self.ids_in_part(*device).filter(move |_| good)
        });
        let mut found: BTreeSet<RegulatorId> = good.collect();
        if self.rail(net).origin != RailOrigin::Unknown {
            found.extend(self.made_by(net));
        } else if let Ok(pulls) = self.pulls(regulator, net) {
            let rails: BTreeSet<NetId> =
                pulls.iter().map(|(_, far)| *far).filter(|far| !self.circuit().net(*far).ground).collect();
            if let (Some(only), 1) = (rails.first(), rails.len()) {
                found.extend(self.made_by(*only));
            }
        }
        found
    }

    fn is_enable_of_another(&self, device: DeviceId, pin: usize) -> bool {
        self.in_part(device).any(|other| other.roles.enable.iter().any(|enable| enable.pin == pin))
    }

    /// The level that resistors to one rail and to ground set; several rails are told by nothing.
    fn pulled(&self, regulator: &Regulator, pulls: &[(DeviceId, NetId)]) -> Drive {
        let circuit = self.circuit();
        let rails: BTreeSet<NetId> =
            pulls.iter().map(|(_, far)| *far).filter(|far| !circuit.net(*far).ground).collect();
        let branches = |ground: bool| -> Option<Quantity> {
            let chosen: Vec<Vec<DeviceId>> = pulls
                .iter()
                .filter(|(_, far)| circuit.net(*far).ground == ground)
                .map(|(device, _)| vec![*device])
                .collect();
            let (first, rest) = chosen.split_first()?;
            self.network(first, rest)
        };
        let mut rails = rails.into_iter();
        match (rails.next(), rails.next()) {
            (None, _) if pulls.is_empty() => Drive::Open,
            (None, _) => Drive::Level(Quantity::constant(Dimension::VOLTAGE, 0.0)),
            (Some(one), Some(_)) => Drive::Elsewhere(circuit.net(one).name.clone()),
            (Some(rail), None) if Some(rail) == regulator.output_net => Drive::OwnOutput,
            (Some(rail), None) => {
                let voltage = self.rail(rail).voltage;
                match (branches(false), branches(true)) {
                    (Some(upper), Some(lower)) => Drive::Level(divided(&voltage, &upper, &lower)),
                    _ => Drive::Level(voltage),
                }
            }
        }
    }

    fn threshold(&self, regulator: &Regulator, pick: fn(&EnableSpec) -> Option<&Cited<f64>>) -> Quantity {
        let what = self.about(regulator, "enable threshold");
        let found = self.first_family(regulator, |family| family.enable.as_ref().and_then(pick));
        let (range, evidence) = match found {
            Some((_, cited)) => {
                (Range::exactly(cited.value), self.cited(regulator, &cited.source, cited.recalled, what))
            }
            None => {
                let (low, nominal, high) = THRESHOLD;
                let evidence = Evidence::new(Grade::Assumed, what, self.no_sheet(regulator))
                    .settled_by(self.which_family(regulator));
                (Range::clamped(low, nominal, high), evidence)
            }
        };
        Quantity::given(Dimension::VOLTAGE, range, Pair::ANY, evidence)
    }

    fn when_open(&self, regulator: &Regulator) -> Value {
        let found = self.first_family(regulator, |family| family.enable.as_ref().map(|spec| &spec.open));
        let Some((_, open)) = found else { return Value::word("unknown") };
        let word = match open.value {
            OpenEnable::On => "on",
            OpenEnable::Off => "off",
            OpenEnable::Undefined => "undefined",
            OpenEnable::Unknown => "unknown",
        };
        let what = self.about(regulator, "open enable input");
        let evidence = self.cited(regulator, &open.source, open.recalled, what);
        Value::Word(Word { word: word.to_owned(), evidence: Some(evidence) })
    }
}

/// `V lower / (upper + lower)`.
fn divided(voltage: &Quantity, upper: &Quantity, lower: &Quantity) -> Quantity {
    let ratio = Quantity::monotone(Dimension::ONE, &[(upper, Slope::Falling), (lower, Slope::Rising)], |v| match v {
        [upper, lower] if lower.is_infinite() && upper.is_finite() => 1.0,
        [upper, lower] if upper + lower > 0.0 => lower / (upper + lower),
        _ => f64::NAN,
    });
    voltage.times(&ratio)
}
