//! Equivalent series resistance: of one capacitor, of the bulk capacitor, of a whole bank.

use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::DeviceId;
use crate::knowledge::{Family, MinimumKind, Technology};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Bank, Branch, Regulator, Side};

/// The temperature from which the cold factors of technology files count (°C); sheets state an ESR at 20 °C.
const COLD_FACTOR_FROM: f64 = 25.0;
/// How much slower, as a part, the logarithm of the ESR falls above that temperature (common practice: warm, an
/// electrolytic keeps about half).
const WARM: f64 = 0.5;
/// ESR of a capacitor that nothing is known of, ohms.
const ANY_ESR: (f64, f64, f64) = (0.003, 0.1, 10.0);

pub(super) const DEFINITIONS: &[Definition] = &[
    ohms(
        "bulk_esr",
        "ESR, with its series resistor, of the output capacitor that dominates the bank",
        |facts, subject| of(facts, subject, |regulator| facts.bulk_esr(regulator)),
    ),
    ohms("esr_low", "the least ESR that the part is stable with", |facts, subject| {
        of(facts, subject, |regulator| facts.window_end(regulator, End::Low))
    }),
    ohms("esr_high", "the largest ESR that the part is stable with", |facts, subject| {
        of(facts, subject, |regulator| facts.window_end(regulator, End::High))
    }),
    Definition {
        name: "esr_zero",
        of: SubjectKind::Regulator,
        kind: ValueKind::Figure(Dimension::FREQUENCY),
        meaning: "where the ESR of the output's bulk capacitor makes its zero, 1 / (2 π C ESR)",
        defined_in: file!(),
        compute: |facts, subject| of(facts, subject, |regulator| facts.esr_zero(regulator)),
    },
    Definition {
        name: "bulk_is_ceramic",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "the output capacitor that dominates the bank is a ceramic one",
        defined_in: file!(),
        compute: |facts, subject| {
            of(facts, subject, |regulator| match facts.bulk(regulator).first() {
                None => Value::inapplicable("no output capacitor"),
                Some(branch) => Value::flag(facts.is_ceramic(branch.capacitor)),
            })
        },
    },
];

const fn ohms(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::RESISTANCE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

/// An end of a window.
#[derive(Clone, Copy, PartialEq, Eq)]
enum End {
    Low,
    High,
}

impl Facts<'_> {
    pub(super) fn is_ceramic(&self, device: DeviceId) -> bool {
        self.technology(device).is_some_and(|told| told.technology.name.starts_with("ceramic"))
    }

    /// The ESR of one capacitor over the ambient range and its life. A declared range is taken as it stands; one
    /// declared value means new and at 20 °C.
    pub(super) fn capacitor_esr(&self, device: DeviceId) -> Quantity {
        let part = self.circuit().device(device);
        let what = format!("ESR of {}", part.reference);
        let told = self.technology(device);
        let technology = told.as_ref().map(|told| told.technology);
        let declared = self.board().part(&part.reference).and_then(|entry| entry.esr.as_ref());
        let fresh = match declared {
            Some(declared) => {
                let figure = Quantity::fact(Dimension::RESISTANCE, declared.value.range, declared.evidence(what));
                if !declared.value.single {
                    return figure;
                }
                figure
            }
            None => self.guessed_esr(device, technology, what),
        };
        match technology {
            Some(technology) => {
                fresh.times(&self.esr_over_temperature(device, technology)).times(&aged(&part.reference, technology))
            }
            None => fresh,
        }
    }

    /// The usual ESR of a technology: by its product with the capacitance, within what its case allows.
    fn guessed_esr(&self, device: DeviceId, technology: Option<&Technology>, what: String) -> Quantity {
        let part = self.circuit().device(device);
        let farads = part.amount.as_ref().map_or(0.0, |amount| amount.amount);
        let figure = |key: &str| technology?.figures.get(key).map(|cited| cited.value);
        let case = self.case(device);
        let row = || technology?.tables.get("case_esr")?.get(case.as_deref()?).map(|cited| cited.value);
        let by_product = figure("esr_product").filter(|_| farads > 0.0).map(|product| product.scaled(1.0 / farads));
        let plain = row().or_else(|| figure("esr"));
        let range = match (by_product, plain) {
            (Some(product), Some(limits)) => {
                let within = |value: f64| value.clamp(limits.low(), limits.high());
                Range::clamped(limits.low(), within(product.nominal()), limits.high())
            }
            (Some(only), None) | (None, Some(only)) => only,
            (None, None) => Range::clamped(ANY_ESR.0, ANY_ESR.1, ANY_ESR.2),
        };
        let source = technology.map_or_else(
            || "nothing known of its technology".to_owned(),
            |technology| format!("usual for {} capacitors", technology.name),
        );
        let settle = Settle::new(Table::Part, &part.reference, "esr", "20 .. 60 mΩ");
        let evidence = Evidence::new(Grade::Assumed, what, source).settled_by(settle);
        Quantity::given(Dimension::RESISTANCE, range, Pair::NOT_NEGATIVE, evidence)
    }

    /// ESR against temperature: `factor^((25 - T) / (25 - T_cold))`, the factor being that at `T_cold`, and half the
    /// exponent when warm. The ambient range is what it is; the factor is a guess.
    fn esr_over_temperature(&self, device: DeviceId, technology: &Technology) -> Quantity {
        let reference = &self.circuit().device(device).reference;
        let figure = |key: &str| technology.figures.get(key).map(|cited| cited.value);
        let (Some(factor), Some(cold)) = (figure("esr_cold_factor"), figure("esr_cold_temperature")) else {
            return Quantity::constant(Dimension::ONE, 1.0);
        };
        let span = COLD_FACTOR_FROM - cold.nominal();
        let exponent = |temperature: f64| {
            let steps = (COLD_FACTOR_FROM - temperature) / span;
            if steps < 0.0 { steps * WARM } else { steps }
        };
        let ambient = self.ambient();
        let nominal = factor.nominal();
        let curve = Quantity::monotone(Dimension::ONE, &[(&ambient, Slope::Falling)], |v| match v {
            [temperature] => nominal.powf(exponent(*temperature)),
            _ => f64::NAN,
        });
        let Some(ambient) = ambient.shown() else { return curve };
        let off = |factor: f64, temperature: f64| (factor / nominal).powf(exponent(temperature));
        let corners = [factor.low(), factor.high()].map(|end| [off(end, ambient.low()), off(end, ambient.high())]);
        let low = corners.iter().flatten().copied().fold(1.0, f64::min);
        let high = corners.iter().flatten().copied().fold(1.0, f64::max);
        let settle = Settle::new(Table::Part, reference, "esr", "20 .. 60 mΩ");
        let evidence = Evidence::new(
            Grade::Assumed,
            format!("ESR of {reference} against temperature"),
            format!("usual for {} capacitors", technology.name),
        )
        .settled_by(settle);
        let spread = Range::clamped(low, 1.0, high);
        curve.times(&Quantity::given(Dimension::ONE, spread, Pair::NOT_NEGATIVE, evidence))
    }

    /// The capacitors that dominate the output bank: the largest, with those that are equal to it.
    pub(super) fn bulk(&self, regulator: &Regulator) -> Vec<Branch> {
        let Some(bank) = self.bank_of(regulator, Side::Output) else { return Vec::new() };
        let farads = |branch: &Branch| {
            self.circuit().device(branch.capacitor).amount.as_ref().map_or(0.0, |amount| amount.amount)
        };
        let near: Vec<&Branch> = counted(&bank).collect();
        let largest = near.iter().map(|branch| farads(branch)).fold(0.0, f64::max);
        let technology = |branch: &Branch| self.technology(branch.capacitor).map(|told| told.technology.name.clone());
        let Some(first) = near.iter().find(|branch| farads(branch) >= largest) else { return Vec::new() };
        let kind = technology(first);
        near.iter()
            .filter(|branch| farads(branch) >= largest && technology(branch) == kind)
            .map(|branch| (*branch).clone())
            .collect()
    }

    /// The grade on which the capacitor that dominates the output bank is of a technology; `None` where it is another.
    pub(super) fn bulk_is(&self, regulator: &Regulator, technology: &str) -> Option<Grade> {
        let bulk = self.bulk(regulator);
        let told = self.technology(bulk.first()?.capacitor)?;
        (told.technology.name == technology).then_some(told.evidence.grade)
    }

    pub(super) fn branch_esr(&self, branch: &Branch) -> Quantity {
        let own = self.capacitor_esr(branch.capacitor);
        match self.network(&branch.series, &[]) {
            Some(series) => own.plus(&series),
            None => own,
        }
    }

    fn bulk_esr(&self, regulator: &Regulator) -> Value {
        let bulk = self.bulk(regulator);
        let Some(first) = bulk.first() else { return Value::inapplicable("no output capacitor") };
        // Equal capacitors in parallel, their values spread alike: the first stands for all.
        let share = 1.0 / f64::from(u32::try_from(bulk.len()).unwrap_or(u32::MAX));
        Value::Figure(self.branch_esr(first).scaled(share))
    }

    /// `f = 1 / (2 π C ESR)` (TI LP2950-N data sheet); equal capacitors in parallel have the zero of one.
    fn esr_zero(&self, regulator: &Regulator) -> Value {
        let bulk = self.bulk(regulator);
        let (Some(first), Some(net)) = (bulk.first(), regulator.output_net) else {
            return Value::inapplicable("no output capacitor");
        };
        let esr = self.branch_esr(first);
        let capacitance = self.effective_capacitance(first.capacitor, net);
        let inputs = [(&esr, Slope::Falling), (&capacitance, Slope::Falling)];
        Value::Figure(Quantity::monotone(Dimension::FREQUENCY, &inputs, |v| match v {
            [esr, farads] => 1.0 / (std::f64::consts::TAU * esr * farads),
            _ => f64::NAN,
        }))
    }

    fn window_end(&self, regulator: &Regulator, end: End) -> Value {
        let what = self.about(regulator, if end == End::Low { "least ESR" } else { "largest ESR" });
        let reference = &self.part_of(regulator).reference;
        if let Some(declared) = self.board().part(reference).and_then(|entry| entry.esr_window.as_ref()) {
            let bound = if end == End::Low { declared.value.low } else { declared.value.high };
            return match bound {
                None => Value::inapplicable("no bound"),
                Some(bound) => Value::Figure(Quantity::fact(
                    Dimension::RESISTANCE,
                    Range::exactly(bound),
                    declared.evidence(what),
                )),
            };
        }
        if let Some(solved) = self.solved_window_end(regulator, end == End::Low) {
            return solved;
        }
        let Some((_, demand)) = self.first_family(regulator, |family| family.output_capacitor.as_ref()) else {
            return Value::inapplicable("no data sheet is known");
        };
        if end == End::High
            && demand.minimum_electrolytic.is_some()
            && self.bulk_is(regulator, "electrolytic").is_some()
        {
            return Value::inapplicable("the sheet admits an electrolytic capacitor by its capacitance");
        }
        let Some(window) = &demand.esr else {
            let indifferent = demand.kind == MinimumKind::Optional || demand.ceramic_allowed || demand.ceramic_only;
            if indifferent || demand.minimum.is_none() {
                return Value::inapplicable("the sheet sets no bound");
            }
            let evidence = Evidence::new(Grade::Assumed, what, "the data sheet is silent on ESR")
                .settled_by(Settle::new(Table::Part, reference, "esr_window", "0.3 .. 22 ohm"));
            return Value::Figure(Quantity::missing(Dimension::RESISTANCE, Pair::NOT_NEGATIVE, evidence));
        };
        let bound = if end == End::Low { window.value.low } else { window.value.high };
        match bound {
            None => Value::inapplicable("no bound"),
            Some(bound) => {
                let mut evidence = self.cited(regulator, &window.source, window.recalled, what);
                let others: Vec<f64> =
                    self.families(regulator).skip(1).filter_map(|other| bound_of(other, end)).collect();
                let range =
                    others.iter().fold(Range::exactly(bound), |range, other| range.union(Range::exactly(*other)));
                let versions = self.families(regulator).filter(|family| family.output_capacitor.is_some()).count();
                if !range.is_exact() || others.len() + 1 < versions {
                    evidence = self.by_version(regulator, evidence, &window.source);
                }
                Value::Figure(Quantity::given(Dimension::RESISTANCE, range, Pair::NOT_NEGATIVE, evidence))
            }
        }
    }
}

/// An end of the window that a family's sheet gives.
fn bound_of(family: &Family, end: End) -> Option<f64> {
    let window = family.output_capacitor.as_ref()?.esr.as_ref()?.value;
    if end == End::Low { window.low } else { window.high }
}

/// The branches that act as capacitors of the net itself: those behind a ferrite or inductor do not.
fn counted(bank: &Bank) -> impl Iterator<Item = &Branch> {
    bank.branches.iter().filter(|branch| branch.through.is_empty())
}

fn aged(reference: &str, technology: &Technology) -> Quantity {
    let Some(life) = technology.figures.get("esr_life_factor") else {
        return Quantity::constant(Dimension::ONE, 1.0);
    };
    let evidence = Evidence::new(
        Grade::Assumed,
        format!("ESR of {reference} at the end of its life"),
        format!("usual for {} capacitors", technology.name),
    )
    .settled_by(Settle::new(Table::Part, reference, "esr", "20 .. 60 mΩ"));
    Quantity::given(Dimension::ONE, Range::clamped(1.0, 1.0, life.value.high()), Pair::NOT_NEGATIVE, evidence)
}
