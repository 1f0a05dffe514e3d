//! What the input must endure: its highest voltage, transients, a reversed supply, plugging in live.

use std::f64::consts::PI;

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, RailOrigin, Subject, SubjectKind, Value, ValueKind};
use crate::board::SupplyEntry;
use crate::circuit::{DeviceId, DeviceKind, NetId};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorKind, Side};

/// Inductance of a pair of leads, henries a metre: low, nominal, high (common practice: about 1 µH/m).
const LEAD: (f64, f64, f64) = (0.4e-6, 0.8e-6, 1.2e-6);
/// Resistance of source, plug and leads where none is declared, ohms.
const CONTACTS: (f64, f64, f64) = (0.03, 0.1, 0.3);
/// A capacitor with losses damps the ceramics beside it from this many times their capacitance up (common practice).
const DAMPING: f64 = 2.0;
/// Winding resistance of an inductor in a supply line, ohms (common practice).
const WINDING: (f64, f64, f64) = (0.02, 0.1, 0.5);

pub(super) const DEFINITIONS: &[Definition] = &[
    volts("highest_input", "the highest magnitude at the input, with the declared surge", |facts, subject| {
        series(facts, subject, |facts, regulator| Value::Figure(facts.highest_input(regulator)))
    }),
    volts("input_limit", "the absolute maximum of the input against ground", |facts, subject| {
        series(facts, subject, |facts, regulator| facts.limit(regulator, "input_max", "largest input"))
    }),
    volts("highest_difference", "the highest input above the lowest output", |facts, subject| {
        series(facts, subject, |facts, regulator| {
            let output = facts.output_voltage(regulator).magnitude();
            Value::Figure(facts.highest_input(regulator).minus(&output.at_low()))
        })
    }),
    volts("difference_limit", "the absolute maximum of input against output", |facts, subject| {
        series(facts, subject, |facts, regulator| {
            facts.limit(regulator, "difference_max", "largest input against output")
        })
    }),
    flag(
        "supply_reversible",
        "the supply of the input is declared as one that can be connected the wrong way round",
        |facts, subject| {
            series(facts, subject, |facts, regulator| {
                let entry = facts.entry_of(regulator);
                Value::flag(entry.is_some_and(|entry| entry.reverse.as_ref().is_some_and(|is| is.value)))
            })
        },
    ),
    flag(
        "reverse_blocked",
        "a diode, bridge or transistor between supply and input, or a fuse and a diode, stops a reversed supply",
        |facts, subject| series(facts, subject, |facts, regulator| Value::flag(facts.reverse_blocked(regulator))),
    ),
    volts(
        "hot_plug_peak",
        "the peak at the input when leads of some inductance are plugged in live",
        |facts, subject| series(facts, subject, |facts, regulator| facts.hot_plug_peak(regulator)),
    ),
    volts(
        "filter_peak",
        "the peak at the input when a supply is switched onto an inductor and the input capacitors",
        |facts, subject| series(facts, subject, |facts, regulator| facts.filter_peak(regulator)),
    ),
    Definition {
        name: "filter_quality",
        of: SubjectKind::Regulator,
        kind: ValueKind::Figure(Dimension::ONE),
        meaning: "the quality of an inductor with the input capacitors, √(L / C) / R",
        defined_in: file!(),
        compute: |facts, subject| {
            series(facts, subject, |facts, regulator| match facts.input_filter(regulator) {
                Some((inductance, capacitance, resistance)) => {
                    Value::Figure(quality(&inductance, &capacitance, &resistance))
                }
                None => Value::inapplicable("no inductor lies ahead of the input"),
            })
        },
    },
];

const fn volts(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::VOLTAGE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

const fn flag(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind: ValueKind::Flag, meaning, defined_in: file!(), compute }
}

fn series(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Facts<'_>, &Regulator) -> Value) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Series | RegulatorKind::Reference => compute(facts, regulator),
        _ => Value::inapplicable("nothing passes through it"),
    })
}

/// `√(L / C) / R`, the quality of a series resonant circuit.
fn quality(inductance: &Quantity, capacitance: &Quantity, resistance: &Quantity) -> Quantity {
    let inputs = [(inductance, Slope::Rising), (capacitance, Slope::Falling), (resistance, Slope::Falling)];
    Quantity::monotone(Dimension::ONE, &inputs, |v| match v {
        [inductance, capacitance, resistance] if *capacitance > 0.0 && *resistance > 0.0 => {
            (inductance / capacitance).sqrt() / resistance
        }
        _ => 0.0,
    })
}

/// The part by which a step overshoots in a series resonant circuit of this quality: `exp(−π ζ / √(1 − ζ²))` with
/// `ζ = 1 / (2 Q)` (step response of a second-order system, any text on control).
#[must_use]
pub fn overshoot(quality: f64) -> f64 {
    let damping = 0.5 / quality.max(f64::MIN_POSITIVE);
    if damping >= 1.0 { 0.0 } else { (-PI * damping / (1.0 - damping * damping).sqrt()).exp() }
}

impl Facts<'_> {
    /// The first fitted diode of some kinds between a net and ground, looked for once: many parts share an input.
    fn diode_to_ground(&self, net: NetId) -> Option<DeviceId> {
        if let Some(known) = self.clamps.borrow().get(&net) {
            return *known;
        }
        let circuit = self.circuit();
        let is_diode = |device: DeviceId| {
            matches!(circuit.device(device).kind, DeviceKind::Diode | DeviceKind::Schottky | DeviceKind::Zener)
        };
        // A clamp is told ahead of a plain diode, which only stops a reversed supply.
        let mut found: Vec<DeviceId> = circuit
            .neighbours(net)
            .filter(|(device, to)| circuit.net(*to).ground && is_diode(*device))
            .map(|(device, _)| device)
            .collect();
        found.sort_by_key(|device| circuit.device(*device).kind != DeviceKind::Zener);
        let first = found.first().copied();
        self.clamps.borrow_mut().insert(net, first);
        first
    }

    fn limit(&self, regulator: &Regulator, key: &'static str, noun: &'static str) -> Value {
        let ask = Ask { key, noun, dimension: Dimension::VOLTAGE, limits: Pair::NOT_NEGATIVE };
        match self.family_figure(regulator, ask) {
            Some(limit) => Value::Figure(limit.magnitude()),
            None => Value::inapplicable("no limit is known"),
        }
    }

    /// The nets and elements from a regulator's input up to where power enters.
    fn path_of(&self, regulator: &Regulator) -> Vec<(NetId, Option<DeviceId>)> {
        regulator.input_net.map(|net| self.path_up(net)).unwrap_or_default()
    }

    /// The declared supply that a regulator's input hangs on.
    pub(super) fn entry_of(&self, regulator: &Regulator) -> Option<&SupplyEntry> {
        let path = self.path_of(regulator);
        let (source, _) = path.last()?;
        self.board().supply(&self.circuit().net(*source).name)
    }

    fn highest_input(&self, regulator: &Regulator) -> Quantity {
        let highest = self.input_magnitude(regulator).at_high();
        let Some(surge) = self.entry_of(regulator).and_then(|entry| entry.surge.as_ref()) else { return highest };
        let name = self.about(regulator, "surge at the input");
        let range = Range::exactly(surge.value.high().abs().max(surge.value.low().abs()));
        let surge = match self.clamp_on(regulator) {
            None => Quantity::fact(Dimension::VOLTAGE, range, surge.evidence(name)),
            Some(clamp) => {
                // At what voltage the clamp holds a surge, its value seldom says.
                let at_rest = highest.nominal().unwrap_or(0.0);
                let source = format!("clamped by {clamp}");
                let evidence = Evidence::new(Grade::Assumed, name, source);
                let range = Range::clamped(at_rest.min(range.high()), at_rest.min(range.high()), range.high());
                Quantity::given(Dimension::VOLTAGE, range, Pair::new(0.0, range.high()), evidence)
            }
        };
        highest.greatest(&surge)
    }

    /// A suppressor or zener diode to ground on the way to the input.
    fn clamp_on(&self, regulator: &Regulator) -> Option<String> {
        let circuit = self.circuit();
        self.path_of(regulator).into_iter().find_map(|(net, _)| {
            let part = circuit.device(self.diode_to_ground(net)?);
            (part.kind == DeviceKind::Zener).then(|| part.reference.clone())
        })
    }

    fn reverse_blocked(&self, regulator: &Regulator) -> bool {
        let circuit = self.circuit();
        let path = self.path_of(regulator);
        let kinds = path.iter().filter_map(|(_, device)| *device).map(|device| circuit.device(device).kind);
        let kinds: Vec<DeviceKind> = kinds.collect();
        let one_way = [DeviceKind::Diode, DeviceKind::Schottky, DeviceKind::Mosfet, DeviceKind::Bridge];
        if kinds.iter().any(|kind| one_way.contains(kind)) {
            return true;
        }
        if path.last().is_some_and(|(net, _)| matches!(self.rail(*net).origin, RailOrigin::Rectified(_))) {
            return true;
        }
        // A diode from ground conducts when the supply is reversed, and blows the fuse.
        let shorts = |net: NetId| self.diode_to_ground(net).is_some();
        kinds.contains(&DeviceKind::Fuse) && path.iter().any(|(net, _)| shorts(*net))
    }

    /// The input capacitors as one: the ceramics, unless others with losses outweigh and damp them.
    fn undamped(&self, regulator: &Regulator) -> Option<(Quantity, Quantity)> {
        let bank = self.bank_of(regulator, Side::Input)?;
        let farads =
            |device: DeviceId| self.circuit().device(device).amount.as_ref().map_or(0.0, |amount| amount.amount);
        let lossless = |device: DeviceId, has_resistor: bool| self.is_ceramic(device) && !has_resistor;
        let (mut ceramic, mut lossy) = (Vec::new(), 0.0);
        for branch in &bank.branches {
            if lossless(branch.capacitor, !branch.series.is_empty()) {
                ceramic.push(branch.capacitor);
            } else {
                lossy += farads(branch.capacitor);
            }
        }
        let drawn: f64 = ceramic.iter().map(|device| farads(*device)).sum();
        if drawn <= 0.0 || lossy >= DAMPING * drawn {
            return None;
        }
        let zero = Quantity::constant(Dimension::CAPACITANCE, 0.0);
        let capacitance =
            ceramic.iter().fold(zero, |sum, device| sum.plus(&self.effective_capacitance(*device, bank.net)));
        let largest = ceramic.iter().copied().max_by(|one, other| farads(*one).total_cmp(&farads(*other)))?;
        Some((capacitance, self.capacitor_esr(largest)))
    }

    fn hot_plug_peak(&self, regulator: &Regulator) -> Value {
        let Some(entry) = self.entry_of(regulator) else { return Value::inapplicable("no supply is declared") };
        if !entry.hot_plug.as_ref().is_some_and(|hot| hot.value) {
            return Value::inapplicable("the supply is not plugged in live");
        }
        if let Some(clamp) = self.clamp_on(regulator) {
            return Value::inapplicable(format!("{clamp} clamps the input"));
        }
        let Some((capacitance, esr)) = self.undamped(regulator) else {
            return Value::inapplicable("the input capacitors damp it");
        };
        let target = entry.nodes.value.nets().next().unwrap_or_default();
        let length = match &entry.lead_length {
            Some(length) => length.quantity(Dimension::LENGTH, format!("lead length of {target}")),
            None => {
                let evidence = Evidence::new(Grade::Assumed, format!("lead length of {target}"), "none declared")
                    .settled_by(Settle::new(Table::Supply, target, "lead_length", "1.5 m"));
                Quantity::given(Dimension::LENGTH, Range::clamped(0.5, 1.0, 2.0), Pair::NOT_NEGATIVE, evidence)
            }
        };
        let per_metre = usual(Dimension::INDUCTANCE, "inductance of the leads", LEAD, None);
        let inputs = [(&length, Slope::Rising), (&per_metre, Slope::Rising)];
        let inductance = Quantity::monotone(Dimension::INDUCTANCE, &inputs, |v| match v {
            [length, per_metre] => length * per_metre,
            _ => f64::NAN,
        });
        let source = match &entry.resistance {
            Some(resistance) => resistance.quantity(Dimension::RESISTANCE, format!("source resistance of {target}")),
            None => {
                let settle = Settle::new(Table::Supply, target, "resistance", "50 .. 200 mΩ");
                usual(Dimension::RESISTANCE, "resistance of source and leads", CONTACTS, Some(settle))
            }
        };
        Value::Figure(self.peak(regulator, &quality(&inductance, &capacitance, &source.plus(&esr))))
    }

    fn peak(&self, regulator: &Regulator, quality: &Quantity) -> Quantity {
        let highest = self.input_magnitude(regulator).at_high();
        let inputs = [(&highest, Slope::Rising), (quality, Slope::Rising)];
        Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [highest, quality] => highest * (1.0 + overshoot(*quality)),
            _ => f64::NAN,
        })
    }

    /// An inductor with a value in the way to the input, with the capacitors behind it and the resistance that damps
    /// the two.
    fn input_filter(&self, regulator: &Regulator) -> Option<(Quantity, Quantity, Quantity)> {
        let path = self.path_of(regulator);
        let device = path.iter().filter_map(|(_, device)| *device).find(|device| {
            let part = self.circuit().device(*device);
            part.kind == DeviceKind::Inductor && part.amount.is_some()
        })?;
        let part = self.circuit().device(device);
        let amount = part.amount.as_ref()?;
        let evidence =
            Evidence::new(Grade::Drawn, format!("inductance of {}", part.reference), format!("value {}", part.value));
        let inductance = Quantity::fact(Dimension::INDUCTANCE, Range::exactly(amount.amount), evidence);
        let (capacitance, esr) = self.undamped(regulator)?;
        let settle = Settle::new(Table::Part, &part.reference, "resistance", "20 .. 50 mΩ");
        let winding = match self.board().part(&part.reference).and_then(|entry| entry.resistance.as_ref()) {
            Some(declared) => declared.quantity(Dimension::RESISTANCE, format!("resistance of {}", part.reference)),
            None => usual(Dimension::RESISTANCE, &format!("resistance of {}", part.reference), WINDING, Some(settle)),
        };
        Some((inductance, capacitance, winding.plus(&esr)))
    }

    fn filter_peak(&self, regulator: &Regulator) -> Value {
        if let Some(clamp) = self.clamp_on(regulator) {
            return Value::inapplicable(format!("{clamp} clamps the input"));
        }
        match self.input_filter(regulator) {
            Some((inductance, capacitance, resistance)) => {
                Value::Figure(self.peak(regulator, &quality(&inductance, &capacitance, &resistance)))
            }
            None => Value::inapplicable("no undamped inductor lies ahead of the input"),
        }
    }
}

fn usual(
    dimension: Dimension,
    what: &str,
    (low, nominal, high): (f64, f64, f64),
    settle: Option<Settle>,
) -> Quantity {
    let mut evidence = Evidence::new(Grade::Assumed, what, "usual for its kind");
    if let Some(settle) = settle {
        evidence = evidence.settled_by(settle);
    }
    Quantity::given(dimension, Range::clamped(low, nominal, high), Pair::NOT_NEGATIVE, evidence)
}
