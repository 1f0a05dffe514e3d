//! What protects an output: against a charged output capacitor, against the opposite rail, against another supply.

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceId, DeviceKind, NetId, PinType};
use crate::knowledge::{Pass, Sign};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorKind, anode};

/// Output voltage from which a charged output harms a part whose sheet says nothing, volts: low, nominal, high (common
/// practice: the breakdown of a base-emitter junction, about 7 V).
const HARMFUL_OUTPUT: (f64, f64, f64) = (6.0, 7.0, 25.0);
/// Output capacitance from which it does, farads (common practice: some tens of microfarads).
const HARMFUL_CAPACITANCE: (f64, f64, f64) = (10e-6, 22e-6, 1000e-6);
/// How many parts of a net are looked at: on a rail with thousands a sample is enough.
const SAMPLE: usize = 1024;

pub(super) const DEFINITIONS: &[Definition] = &[
    flag("has_output_diode", "a diode leads from the output back to the input", |facts, subject| {
        series(facts, subject, |facts, regulator| Value::flag(facts.has_output_diode(regulator)))
    }),
    flag(
        "input_may_collapse",
        "the supply is declared as one that can be shorted, or collapse, while the outputs are charged",
        |facts, subject| {
            series(facts, subject, |facts, regulator| {
                let entry = facts.entry_of(regulator);
                Value::flag(entry.is_some_and(|entry| entry.may_short.as_ref().is_some_and(|may| may.value)))
            })
        },
    ),
    figure(
        "harmless_output",
        Dimension::VOLTAGE,
        "the output voltage up to which a charged output does the part no harm",
        |facts, subject| {
            series(facts, subject, |facts, regulator| {
                facts.harmless(regulator, "diode_above_output", Dimension::VOLTAGE, HARMFUL_OUTPUT)
            })
        },
    ),
    figure(
        "harmless_capacitance",
        Dimension::CAPACITANCE,
        "the output capacitance up to which a charged output does the part no harm",
        |facts, subject| {
            series(facts, subject, |facts, regulator| {
                facts.harmless(regulator, "diode_above_capacitance", Dimension::CAPACITANCE, HARMFUL_CAPACITANCE)
            })
        },
    ),
    flag(
        "loaded_to_opposite_rail",
        "a resistor or a part with both supplies lies between the output and a rail of the other sign",
        |facts, subject| series(facts, subject, |facts, regulator| Value::flag(facts.opposite(regulator).is_some())),
    ),
    flag(
        "resistor_to_opposite_rail",
        "a resistor lies between the output and a rail of the other sign",
        |facts, subject| {
            series(facts, subject, |facts, regulator| {
                Value::flag(facts.opposite(regulator).is_some_and(|(_, direct)| direct))
            })
        },
    ),
    Definition {
        name: "opposite_rail",
        of: SubjectKind::Regulator,
        kind: ValueKind::Word(&[]),
        meaning: "the rail of the other sign to which the output is loaded",
        defined_in: file!(),
        compute: |facts, subject| {
            series(facts, subject, |facts, regulator| match facts.opposite(regulator) {
                Some((net, _)) => Value::word(&facts.circuit().net(net).name),
                None => Value::inapplicable("nothing lies between the output and a rail of the other sign"),
            })
        },
    },
    flag(
        "output_clamped",
        "a diode keeps the output from being pulled beyond ground to the other sign",
        |facts, subject| series(facts, subject, |facts, regulator| Value::flag(facts.output_clamped(regulator))),
    ),
    figure(
        "injected_current",
        Dimension::CURRENT,
        "the current that resistors bring into the output from higher rails",
        |facts, subject| {
            of(facts, subject, |regulator| match facts.injected(regulator) {
                _ if !matches!(regulator.kind, RegulatorKind::Series | RegulatorKind::Reference) => {
                    Value::inapplicable("nothing passes through it")
                }
                Some(current) => Value::Figure(current),
                None => Value::inapplicable("no resistor leads to the output from a higher rail"),
            })
        },
    ),
    flag("load_is_constant", "the load is declared as a constant current", |facts, subject| {
        series(facts, subject, |facts, regulator| {
            let constant = facts.output_name(regulator).and_then(|name| {
                facts.board().load(&name)?.kind.as_ref().map(|kind| kind.value == crate::board::LoadKind::Constant)
            });
            Value::flag(constant.unwrap_or(false))
        })
    }),
    figure(
        "start_current",
        Dimension::CURRENT,
        "the current that the part gives into an output at zero volts",
        |facts, subject| {
            series(facts, subject, |facts, regulator| {
                let ask = Ask {
                    key: "short_circuit_current",
                    noun: "short-circuit current",
                    dimension: Dimension::CURRENT,
                    limits: Pair::NOT_NEGATIVE,
                };
                match facts.family_figure(regulator, ask) {
                    Some(current) => Value::Figure(current),
                    None => Value::inapplicable("its short-circuit current is not known"),
                }
            })
        },
    ),
];

const fn figure(
    name: &'static str,
    dimension: Dimension,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    let kind = ValueKind::Figure(dimension);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

const fn flag(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind: ValueKind::Flag, meaning, defined_in: file!(), compute }
}

fn series(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Facts<'_>, &Regulator) -> Value) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Series => compute(facts, regulator),
        _ => Value::inapplicable("not a series regulator"),
    })
}

impl Facts<'_> {
    /// The diodes between two nets, each with whether it conducts from the first to the second.
    fn diodes(&self, from: NetId, to: NetId) -> impl Iterator<Item = bool> {
        let circuit = self.circuit();
        circuit.neighbours(from).take(SAMPLE).filter(move |(_, far)| *far == to).filter_map(move |(device, _)| {
            let part = circuit.device(device);
            let diode = matches!(part.kind, DeviceKind::Diode | DeviceKind::Schottky);
            diode.then(|| anode(part).and_then(|pin| circuit.net_of(device, pin)) == Some(from))
        })
    }

    fn has_output_diode(&self, regulator: &Regulator) -> bool {
        let (Some(input), Some(output)) = (regulator.input_net, regulator.output_net) else { return false };
        let positive = regulator.polarity == Sign::Positive;
        self.diodes(output, input).any(|forwards| forwards == positive)
    }

    /// A limit of the sheet, else a guess for bipolar parts; field-effect parts carry the current in their body diode,
    /// and what that stands only a sheet tells.
    fn harmless(
        &self,
        regulator: &Regulator,
        key: &'static str,
        dimension: Dimension,
        usual: (f64, f64, f64),
    ) -> Value {
        let ask = Ask { key, noun: "harmless charge of the output", dimension, limits: Pair::NOT_NEGATIVE };
        if let Some(limit) = self.family_figure(regulator, ask) {
            return Value::Figure(limit.magnitude());
        }
        let bipolar = regulator.pass.is_none_or(|pass: Pass| pass.name().contains("np"));
        if !bipolar {
            return Value::inapplicable("its sheet gives no limit");
        }
        let (low, nominal, high) = usual;
        let settle = Settle::new(Table::Part, &self.part_of(regulator).reference, key, example(dimension));
        let what = self.about(regulator, "harmless charge of the output");
        let evidence = Evidence::new(Grade::Assumed, what, "usual for bipolar parts").settled_by(settle);
        Value::Figure(Quantity::given(dimension, Range::clamped(low, nominal, high), Pair::NOT_NEGATIVE, evidence))
    }

    /// A rail of the other sign to which something loads the output, and whether that is a plain resistor.
    fn opposite(&self, regulator: &Regulator) -> Option<(NetId, bool)> {
        let circuit = self.circuit();
        let output = regulator.output_net?;
        let is_opposite = |net: NetId| {
            let sign = if regulator.polarity == Sign::Positive { -1.0 } else { 1.0 };
            net != output
                && Some(net) != regulator.input_net
                && !circuit.net(net).ground
                && self.rail(net).voltage.nominal().is_some_and(|volts| volts * sign > 0.0)
        };
        let mut through_part = None;
        for (device, _) in circuit.fitted_on(output).take(SAMPLE) {
            let part = circuit.device(device);
            if device == regulator.device || self.in_part(device).next().is_some() {
                continue;
            }
            match part.kind {
                DeviceKind::Resistor => {
                    if let Some(far) = circuit.other_end(device, output).filter(|far| is_opposite(*far)) {
                        return Some((far, true));
                    }
                }
                DeviceKind::OpAmp | DeviceKind::Integrated | DeviceKind::Unknown if through_part.is_none() => {
                    let supplied = part.pins.iter().filter(|pin| pin.kind == PinType::PowerIn);
                    through_part = supplied.filter_map(|pin| pin.net).find(|net| is_opposite(*net));
                }
                _ => {}
            }
        }
        through_part.map(|net| (net, false))
    }

    fn output_clamped(&self, regulator: &Regulator) -> bool {
        let Some(output) = regulator.output_net else { return false };
        let circuit = self.circuit();
        let positive = regulator.polarity == Sign::Positive;
        let grounds = circuit.neighbours(output).take(SAMPLE).map(|(_, to)| to).filter(|to| circuit.net(*to).ground);
        let grounds: std::collections::BTreeSet<NetId> = grounds.collect();
        // From ground into a positive output, out of a negative one.
        grounds.into_iter().any(|ground| self.diodes(ground, output).any(|forwards| forwards == positive))
    }

    /// `(V_rail − V_out) / R`, summed over the resistors from rails of higher magnitude and the same sign.
    fn injected(&self, regulator: &Regulator) -> Option<Quantity> {
        let circuit = self.circuit();
        let output = regulator.output_net?;
        let held = self.output_voltage(regulator).magnitude();
        let least = held.nominal()?;
        let divider: Vec<DeviceId> = regulator
            .divider
            .iter()
            .flat_map(|divider| divider.upper.iter().chain(&divider.lower))
            .copied()
            .collect();
        let mut sum: Option<Quantity> = None;
        for (device, far) in circuit.neighbours(output).take(SAMPLE) {
            if !self.is_resistor(device) || circuit.net(far).ground || divider.contains(&device) {
                continue;
            }
            let mine = self.rail(far).voltage;
            let sign = if regulator.polarity == Sign::Positive { 1.0 } else { -1.0 };
            if Some(far) == regulator.input_net || mine.nominal().is_none_or(|volts| volts * sign <= least) {
                continue;
            }
            let (higher, resistance) = (mine.magnitude(), self.resistance(device));
            let inputs = [(&higher, Slope::Rising), (&held, Slope::Falling), (&resistance, Slope::Falling)];
            let current = Quantity::monotone(Dimension::CURRENT, &inputs, |v| match v {
                [higher, held, resistance] if *resistance > 0.0 => (higher - held).max(0.0) / resistance,
                [higher, held, _] if higher <= held => 0.0,
                _ => f64::INFINITY,
            });
            sum = Some(sum.map_or(current.clone(), |sum| sum.plus(&current)));
        }
        sum
    }
}

fn example(dimension: Dimension) -> &'static str {
    if dimension == Dimension::VOLTAGE { "7 V" } else { "25 uF" }
}
