//! One capacitor: its capacitance as drawn and as left, the voltage across it, its rating.

use super::circuit_values::drawn_value;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceId, NetId};
use crate::knowledge::Technology;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};

/// Tolerance of a capacitor that neither states one nor has a known technology, and the limits of that guess.
const TOLERANCE: (f64, f64) = (0.2, 0.5);
/// Body volume of a ceramic whose case nobody tells, cubic millimetres: 0402, 0805, 1210.
const CASE_VOLUME: (f64, f64, f64) = (0.25, 3.125, 20.0);
/// Farads to the microfarads in which the bias model's constant is given.
const MICRO: f64 = 1e6;
/// The bias model's exponent where the technology file gives none.
const BIAS_EXPONENT: f64 = 1.5;

pub(super) const DEFINITIONS: &[Definition] = &[
    farads("capacitance", "the capacitance as drawn", |facts, subject| {
        of(subject, |device, _| Value::Figure(facts.drawn_capacitance(device)))
    }),
    farads("effective_capacitance", "what is left of it under bias, cold and old", |facts, subject| {
        of(subject, |device, net| Value::Figure(facts.effective_capacitance(device, net)))
    }),
    entry("esr", ValueKind::Figure(Dimension::RESISTANCE), "its ESR, hot and cold, new and old", |facts, subject| {
        of(subject, |device, _| Value::Figure(facts.capacitor_esr(device)))
    }),
    entry(
        "voltage",
        ValueKind::Figure(Dimension::VOLTAGE),
        "the magnitude of the voltage across it",
        |facts, subject| of(subject, |device, net| Value::Figure(facts.voltage_across(device, net))),
    ),
    entry("rating", ValueKind::Figure(Dimension::VOLTAGE), "its rated voltage, where stated", |facts, subject| {
        of(subject, |device, net| match facts.rating(device).or_else(|| facts.wanted_rating(device, net)) {
            Some(rating) => Value::Figure(rating),
            None => Value::inapplicable("no rating is stated"),
        })
    }),
    entry("technology", ValueKind::Word(TECHNOLOGIES), "its technology", |facts, subject| {
        of(subject, |device, _| match facts.technology(device) {
            Some(told) => Value::word(&told.technology.name),
            None => Value::inapplicable("its technology is not known"),
        })
    }),
    entry("subject", ValueKind::Word(&[]), "its reference", |facts, subject| {
        of(subject, |device, _| Value::word(&facts.circuit().device(device).reference))
    }),
];

const TECHNOLOGIES: &[&str] = &["ceramic-1", "ceramic-2", "electrolytic", "tantalum", "polymer", "film"];

pub(super) const fn entry(
    name: &'static str,
    kind: ValueKind,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    Definition { name, of: SubjectKind::Capacitor, kind, meaning, defined_in: file!(), compute }
}

const fn farads(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    entry(name, ValueKind::Figure(Dimension::CAPACITANCE), meaning, compute)
}

pub(super) fn of(subject: Subject, compute: impl FnOnce(DeviceId, NetId) -> Value) -> Value {
    match subject {
        Subject::Capacitor { device, net } => compute(device, net),
        _ => Value::inapplicable("not a capacitor"),
    }
}

impl Facts<'_> {
    /// The capacitance as drawn, without tolerance.
    pub(super) fn drawn_capacitance(&self, device: DeviceId) -> Quantity {
        let part = self.circuit().device(device);
        let what = format!("capacitance of {}", part.reference);
        match &part.amount {
            Some(amount) => drawn_value(Dimension::CAPACITANCE, &part.value, amount, what),
            None => {
                let evidence = Evidence::new(Grade::Assumed, what, format!("value {:?} cannot be read", part.value));
                Quantity::missing(Dimension::CAPACITANCE, Pair::NOT_NEGATIVE, evidence)
            }
        }
    }

    /// What is left of a capacitor: drawn × tolerance × what bias, temperature and age leave. What the model takes
    /// off is a guess, whose limits are nothing and all.
    pub(super) fn effective_capacitance(&self, device: DeviceId, net: NetId) -> Quantity {
        let part = self.circuit().device(device);
        let declared = self.board().part(&part.reference).and_then(|entry| entry.effective_capacitance.as_ref());
        if let Some(declared) = declared {
            return declared.quantity(Dimension::CAPACITANCE, format!("effective capacitance of {}", part.reference));
        }
        let unbiased = self.unbiased_capacitance(device);
        match self.technology(device).map(|told| told.technology) {
            Some(technology) if part.amount.is_some() && technology.figures.contains_key("bias_k") => {
                unbiased.times(&self.left_by_bias(device, net, technology))
            }
            _ => unbiased,
        }
    }

    /// What is left of a capacitor without bias: drawn × tolerance × what temperature and age leave.
    pub(super) fn unbiased_capacitance(&self, device: DeviceId) -> Quantity {
        let part = self.circuit().device(device);
        let drawn = self.drawn_capacitance(device);
        let Some(amount) = &part.amount else { return drawn };
        let told = self.technology(device);
        let technology = told.as_ref().map(|told| told.technology);
        let usual = technology.and_then(|technology| technology.figures.get("tolerance"));
        let usual = usual.map_or(TOLERANCE, |cited| {
            let widest = cited.value.low().abs().max(cited.value.high().abs());
            (widest, widest.max(TOLERANCE.1))
        });
        let toleranced = drawn.times(&self.tolerance(device, amount, usual));
        match technology {
            Some(technology) => toleranced.times(&self.left_by_age(device, technology)),
            None => toleranced,
        }
    }

    /// The part of a ceramic's capacitance that bias leaves: `1 / (1 + (V / V50)^1.5)` with `V50 = k √(volume / C)`, a
    /// model fitted to published curves; its constants and error stand in the technology file.
    fn left_by_bias(&self, device: DeviceId, net: NetId, technology: &Technology) -> Quantity {
        let part = self.circuit().device(device);
        let capacitance = part.amount.as_ref().map_or(0.0, |amount| amount.amount) * MICRO;
        let constant = technology.figures.get("bias_k").map_or(Range::exactly(0.0), |cited| cited.value);
        let exponent = technology.figures.get("bias_exponent").map_or(BIAS_EXPONENT, |cited| cited.value.nominal());
        let case = self.case(device);
        let table = technology.tables.get("case_volume");
        let volume = case
            .as_ref()
            .and_then(|case| table?.get(case))
            .map_or_else(|| Range::clamped(CASE_VOLUME.0, CASE_VOLUME.1, CASE_VOLUME.2), |cited| cited.value);
        let half = |k: f64, volume: f64| if capacitance > 0.0 { k * (volume / capacitance).sqrt() } else { f64::MAX };
        let half = Range::clamped(
            half(constant.low(), volume.low()),
            half(constant.nominal(), volume.nominal()),
            half(constant.high(), volume.high()),
        );
        let settle = Settle::new(Table::Part, &part.reference, "effective_capacitance", "3 .. 5 uF");
        let shown = case.map_or_else(|| "of unknown case".to_owned(), |case| format!("in case {case}"));
        let evidence = Evidence::new(
            Grade::Assumed,
            format!("capacitance of {} under bias", part.reference),
            format!("bias model, ceramic {shown}; the maker's curve settles it"),
        )
        .settled_by(settle);
        let half = Quantity::given(Dimension::VOLTAGE, half, Pair::NOT_NEGATIVE, evidence);
        let voltage = self.voltage_across(device, net);
        let inputs = [(&voltage, Slope::Falling), (&half, Slope::Rising)];
        Quantity::monotone(Dimension::ONE, &inputs, |v| match v {
            [voltage, half] if *voltage <= 0.0 || half.is_infinite() => 1.0,
            [_, half] if *half <= 0.0 => 0.0,
            [voltage, half] => 1.0 / (1.0 + (voltage / half).powf(exponent)),
            _ => f64::NAN,
        })
    }

    /// The part that temperature and age leave at worst; new and at room temperature it is all.
    fn left_by_age(&self, device: DeviceId, technology: &Technology) -> Quantity {
        let part = self.circuit().device(device);
        let figure = |key: &str| technology.figures.get(key).map(|cited| cited.value);
        let dielectric = self.dielectric(device);
        let row = |table: &str| {
            let code = dielectric.as_deref()?;
            technology.tables.get(table)?.get(code).map(|cited| cited.value)
        };
        let cold = row("temperature_change").map_or(1.0, |change| 1.0 + change.low().min(0.0));
        let ageing = row("ageing").or_else(|| figure("ageing")).map_or(0.0, Range::nominal);
        let decades = figure("ageing_decades").map_or(0.0, Range::nominal);
        let life = figure("capacitance_life_change").map_or(1.0, |change| 1.0 + change.low().min(0.0));
        let frozen = figure("capacitance_cold_factor").map_or(1.0, Range::low);
        let low = (cold * (1.0 - ageing * decades) * life * frozen).clamp(0.0, 1.0);
        let evidence = Evidence::new(
            Grade::Assumed,
            format!("capacitance of {} cold and old", part.reference),
            format!("{} over temperature and life", technology.name),
        )
        .settled_by(Settle::new(Table::Part, &part.reference, "effective_capacitance", "3 .. 5 uF"));
        Quantity::given(Dimension::ONE, Range::clamped(low, 1.0, 1.0), Pair::new(0.0, 1.0), evidence)
    }

    /// The magnitude of the voltage across a capacitor in the bank of a net.
    pub(super) fn voltage_across(&self, device: DeviceId, net: NetId) -> Quantity {
        let far = self.circuit().other_end(device, net).filter(|far| !self.circuit().net(*far).ground);
        let here = self.rail(net).voltage;
        // Behind a series resistor or a ferrite the far end may be a node of its own: it carries no direct current.
        match far.map(|far| self.rail(far)) {
            Some(rail) if !rail.voltage.is_missing() => here.minus(&rail.voltage).magnitude(),
            _ => here.magnitude(),
        }
    }

    /// The rated voltage: declared, or written in the value.
    pub(super) fn rating(&self, device: DeviceId) -> Option<Quantity> {
        let part = self.circuit().device(device);
        let what = format!("rating of {}", part.reference);
        if let Some(declared) = self.board().part(&part.reference).and_then(|entry| entry.rating.as_ref()) {
            return Some(declared.quantity(Dimension::VOLTAGE, what));
        }
        let volts = part.amount.as_ref()?.rating?;
        let evidence = Evidence::new(Grade::Drawn, what, format!("value {}", part.value));
        Some(Quantity::fact(Dimension::VOLTAGE, Range::exactly(volts), evidence))
    }
}
