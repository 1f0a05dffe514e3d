//! Resistors and chains of them as figures.

use super::Facts;
use crate::circuit::{ComponentValue, DeviceId, DeviceKind, Reading};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};

/// Tolerance of a resistor that states none, and the limits of that guess (common practice: 1 %, at worst 5 %).
const RESISTOR_TOLERANCE: (f64, f64) = (0.01, 0.05);

impl Facts<'_> {
    /// The resistance of a resistor, ohms. A value that cannot be read is missing.
    pub(super) fn resistance(&self, device: DeviceId) -> Quantity {
        let part = self.circuit().device(device);
        let what = format!("resistance of {}", part.reference);
        let Some(amount) = &part.amount else {
            let evidence = Evidence::new(Grade::Assumed, what, format!("value {:?} cannot be read", part.value));
            return Quantity::missing(Dimension::RESISTANCE, Pair::NOT_NEGATIVE, evidence);
        };
        let value = drawn_value(Dimension::RESISTANCE, &part.value, amount, what);
        value.times(&self.tolerance(device, amount, RESISTOR_TOLERANCE))
    }

    /// The factor by which a part may differ from its drawn value: declared, written in its value, or a guess with
    /// the usual and the widest tolerance.
    pub(super) fn tolerance(&self, device: DeviceId, amount: &ComponentValue, usual: (f64, f64)) -> Quantity {
        let part = self.circuit().device(device);
        let what = format!("tolerance of {}", part.reference);
        if let Some(declared) = self.board().part(&part.reference).and_then(|entry| entry.tolerance.as_ref()) {
            let range = Range::clamped(1.0 + declared.value.low(), 1.0, 1.0 + declared.value.high());
            return Quantity::fact(Dimension::ONE, range, declared.evidence(what));
        }
        if let Some(relative) = amount.tolerance {
            let evidence = Evidence::new(Grade::Drawn, what, format!("value {}", part.value));
            return Quantity::fact(Dimension::ONE, Range::with_tolerance(1.0, relative), evidence);
        }
        let (usual, widest) = usual;
        let settle = Settle::new(Table::Part, &part.reference, "tolerance", "±1 %");
        let evidence = Evidence::new(Grade::Assumed, what, "no tolerance stated").settled_by(settle);
        let limits = Pair::new(1.0 - widest, 1.0 + widest);
        Quantity::given(Dimension::ONE, Range::with_tolerance(1.0, usual), limits, evidence)
    }

    /// Resistors in series, with branches in parallel to the whole. `None` for no resistor at all.
    pub(super) fn network(&self, series: &[DeviceId], parallel: &[Vec<DeviceId>]) -> Option<Quantity> {
        let chain = |devices: &[DeviceId]| {
            let parts: Vec<Quantity> = devices.iter().map(|device| self.resistance(*device)).collect();
            parts.into_iter().reduce(|sum, part| sum.plus(&part))
        };
        let first = chain(series)?;
        Some(parallel.iter().filter_map(|branch| chain(branch)).fold(first, |whole, branch| {
            Quantity::monotone(Dimension::RESISTANCE, &[(&whole, Slope::Rising), (&branch, Slope::Rising)], |v| {
                match v {
                    [one, other] if one.is_infinite() => *other,
                    [one, other] if other.is_infinite() => *one,
                    [one, other] if one + other > 0.0 => one * other / (one + other),
                    _ => 0.0,
                }
            })
        }))
    }

    /// Whether a device is a resistor whose value can be read.
    pub(super) fn is_resistor(&self, device: DeviceId) -> bool {
        let part = self.circuit().device(device);
        part.kind == DeviceKind::Resistor && part.amount.is_some()
    }
}

/// The drawn value itself, without its tolerance: a fact as written, a guess where its reading was repaired.
pub(super) fn drawn_value(dimension: Dimension, text: &str, amount: &ComponentValue, what: String) -> Quantity {
    let (grade, source) = match amount.reading {
        Reading::Plain => (Grade::Drawn, format!("value {text}")),
        Reading::Repaired => (Grade::Inferred, format!("value {text:?} as it may be meant")),
    };
    let evidence = Evidence::new(grade, what, source);
    Quantity::given(dimension, Range::exactly(amount.amount), Pair::NOT_NEGATIVE, evidence)
}
