//! Bias of shunt references, and of the references of built-up regulators.

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceId, DeviceKind, NetId, PinType};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorKind};

/// What a supply pin on a reference is taken to draw (amperes): low, nominal, high.
const SUPPLY_PIN: (f64, f64, f64) = (0.0, 1e-3, 5e-3);
/// The part of its bias, or of what it can give, that signal pins on a reference may draw, at worst.
const SIGNAL_SHARE: f64 = 0.25;
/// Minimum bias of a shunt that no family knows (amperes): low, nominal, high (common practice).
const MINIMUM_BIAS: (f64, f64, f64) = (0.05e-3, 0.5e-3, 1e-3);

pub(super) const DEFINITIONS: &[Definition] = &[
    amperes(
        "reference_bias",
        "the current that a shunt reference itself gets, its feed less its load; of a built-up regulator that of its reference",
        |facts, subject| {
            of(facts, subject, |regulator| match regulator.kind {
                RegulatorKind::Shunt => facts.bias(regulator),
                _ => facts.solved_bias(regulator),
            })
        },
    ),
    amperes(
        "reference_bias_highest",
        "the current through a shunt reference when nothing is drawn from it",
        |facts, subject| {
            of(facts, subject, |regulator| match (regulator.kind, facts.feed_current(regulator)) {
                (RegulatorKind::Shunt, Some(current)) => Value::Figure(current),
                (RegulatorKind::Shunt, None) => Value::inapplicable("it is not fed through a resistor"),
                // Its range is that over all inputs and loads.
                _ => facts.value(subject, "reference_bias"),
            })
        },
    ),
    amperes("reference_load", "the current drawn from a reference", |facts, subject| {
        of(facts, subject, |regulator| match regulator.kind {
            RegulatorKind::Shunt | RegulatorKind::Reference => Value::Figure(facts.reference_load(regulator)),
            _ => Value::inapplicable("not a reference"),
        })
    }),
    amperes("bias_minimum", "the least current at which such a reference regulates", |facts, subject| {
        of(facts, subject, |regulator| match (regulator.kind, facts.shunt_inside(regulator)) {
            (RegulatorKind::Shunt, _) => Value::Figure(facts.least_bias(regulator)),
            (_, Some(shunt)) => Value::Figure(facts.least_bias(shunt)),
            _ => facts.knee(regulator),
        })
    }),
    amperes("bias_maximum", "the most current that a shunt reference may carry", |facts, subject| {
        of(facts, subject, |regulator| {
            let shunt =
                if regulator.kind == RegulatorKind::Shunt { Some(regulator) } else { facts.shunt_inside(regulator) };
            let most = shunt.and_then(|shunt| facts.family_figure(shunt, bias("bias_max", "maximum bias")));
            most.map_or_else(|| Value::inapplicable("no maximum is known"), Value::Figure)
        })
    }),
    Definition {
        name: "reference_is_judged_itself",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "the reference of a built-up regulator is a packaged one, which is a subject of its own",
        defined_in: file!(),
        compute: |facts, subject| {
            of(facts, subject, |regulator| Value::flag(facts.shunt_inside(regulator).is_some()))
        },
    },
];

const fn amperes(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::CURRENT);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

const fn bias(key: &'static str, noun: &'static str) -> Ask<'static> {
    Ask { key, noun, dimension: Dimension::CURRENT, limits: Pair::NOT_NEGATIVE }
}

impl Facts<'_> {
    fn least_bias(&self, regulator: &Regulator) -> Quantity {
        self.family_figure(regulator, bias("bias_min", "minimum bias")).unwrap_or_else(|| {
            let (low, nominal, high) = MINIMUM_BIAS;
            let evidence =
                Evidence::new(Grade::Assumed, self.about(regulator, "minimum bias"), self.no_sheet(regulator))
                    .settled_by(self.which_family(regulator));
            Quantity::fact(Dimension::CURRENT, Range::clamped(low, nominal, high), evidence)
        })
    }

    /// `(Vs - Vref) / R`, whatever is drawn: magnitudes, so that a negative shunt reads alike.
    fn feed_current(&self, regulator: &Regulator) -> Option<Quantity> {
        let feed = regulator.feed.as_ref()?;
        let supply = self.rail(feed.from).voltage.magnitude();
        let output = self.output_voltage(regulator).magnitude();
        let resistance = self.network(&feed.resistors, &feed.parallel)?;
        let inputs = [(&supply, Slope::Rising), (&output, Slope::Falling), (&resistance, Slope::Falling)];
        Some(Quantity::monotone(Dimension::CURRENT, &inputs, |v| match v {
            [supply, output, resistance] => (supply - output) / resistance,
            _ => f64::NAN,
        }))
    }

    fn bias(&self, regulator: &Regulator) -> Value {
        // A pass transistor on the reference itself takes a part of its current, which the circuit tells.
        let followed = self.design().regulators.iter().find(|own| {
            let built = own.built_up.as_ref().filter(|built| built.amplifier.is_none());
            built.is_some_and(|built| built.reference.devices.contains(&regulator.device))
        });
        if let Some(solved @ Value::Figure(_)) = followed.map(|own| self.solved_bias(own)) {
            return solved;
        }
        match self.feed_current(regulator) {
            Some(current) => Value::Figure(current.minus(&self.reference_load(regulator))),
            None => Value::inapplicable("it is not fed through a resistor"),
        }
    }

    /// The load on a reference: declared, else drawn resistors, and guesses for the pins on its net.
    fn reference_load(&self, regulator: &Regulator) -> Quantity {
        let zero = Quantity::constant(Dimension::CURRENT, 0.0);
        let Some(net) = regulator.output_net else { return zero };
        if let Some(declared) = self.declared_load(&self.circuit().net(net).name) {
            return declared;
        }
        self.resistor_load(regulator, net).plus(&self.pin_load(regulator, net))
    }

    fn resistor_load(&self, regulator: &Regulator, net: NetId) -> Quantity {
        let circuit = self.circuit();
        let output = self.output_voltage(regulator).magnitude();
        let feed: Vec<DeviceId> = regulator
            .feed
            .iter()
            .flat_map(|feed| feed.resistors.iter().chain(feed.parallel.iter().flatten()))
            .copied()
            .collect();
        let grounded = |device| circuit.other_end(device, net).is_some_and(|far| circuit.net(far).ground);
        let mut load = Quantity::constant(Dimension::CURRENT, 0.0);
        for device in circuit.devices_on(net).filter(|device| circuit.device(*device).is_fitted()) {
            let kind = circuit.device(device).kind;
            let drawn = match kind {
                DeviceKind::Resistor if grounded(device) && !feed.contains(&device) => self.resistance(device),
                DeviceKind::Potentiometer => self.resistance(device),
                _ => continue,
            };
            if !drawn.is_missing() {
                load = load.plus(&output.times(&drawn.reciprocal()));
            }
        }
        match &regulator.divider {
            // The part's own divider, from output through the reference input to ground.
            Some(divider) if divider.senses == Some(net) => {
                let upper = self.network(&divider.upper, &divider.upper_parallel);
                let lower = self.network(&divider.lower, &divider.lower_parallel);
                match (upper, lower) {
                    (Some(upper), Some(lower)) => load.plus(&output.times(&upper.plus(&lower).reciprocal())),
                    _ => load,
                }
            }
            _ => load,
        }
    }

    fn pin_load(&self, regulator: &Regulator, net: NetId) -> Quantity {
        let circuit = self.circuit();
        let (mut supply_pins, mut signal_pins) = (0.0, 0.0);
        for (device, pin) in circuit.fitted_on(net).filter(|(device, _)| *device != regulator.device) {
            let part = circuit.device(device);
            let kind = part.pins.get(pin).map_or(PinType::Unspecified, |pin| pin.kind);
            match part.kind {
                DeviceKind::Integrated if kind == PinType::PowerIn => supply_pins += 1.0,
                DeviceKind::Integrated | DeviceKind::OpAmp | DeviceKind::Unknown => signal_pins += 1.0,
                _ => {}
            }
        }
        let name = &circuit.net(net).name;
        let evidence = Evidence::new(Grade::Assumed, format!("load on {name}"), "no load declared")
            .settled_by(Settle::new(Table::Load, name, "current", "0 .. 50 µA"));
        let (low, nominal, high) = SUPPLY_PIN;
        let most = self.feed_current(regulator).or_else(|| self.largest_load(regulator));
        let most = most.and_then(|most| most.shown()).map_or(0.0, |most| most.nominal().abs());
        let signals = if signal_pins > 0.0 { most * SIGNAL_SHARE } else { 0.0 };
        let range = Range::clamped(low * supply_pins, nominal * supply_pins, (high * supply_pins + signals).max(0.0));
        Quantity::given(Dimension::CURRENT, range, Pair::NOT_NEGATIVE, evidence)
    }
}
