//! The output voltage: what sets it, and what it is.

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::supply_name;
use crate::knowledge::{AdjustSide, Sign};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Divider, Mode, Regulator, RegulatorKind};

/// Tolerance of a fixed output whose family states none, and the limits of that guess.
const OUTPUT_TOLERANCE: (f64, f64) = (0.04, 0.10);
/// Tolerance of a voltage that is only read out of a net name.
const NAME_TOLERANCE: f64 = 0.05;
/// The reference of three-pin adjustable parts that no family tells: a band gap (common practice).
const BAND_GAP: (f64, f64, f64) = (1.20, 1.25, 1.30);

pub(super) const DEFINITIONS: &[Definition] = &[
    volts(
        "set_point",
        "the voltage that the part regulates to, signed: its own, or by its divider",
        |facts, subject| of(facts, subject, |regulator| Value::Figure(facts.set_point(regulator))),
    ),
    volts("output_voltage", "the output against ground, signed", |facts, subject| {
        of(facts, subject, |regulator| Value::Figure(facts.solved_or_set(regulator)))
    }),
    volts("output_magnitude", "the magnitude of the output voltage", |facts, subject| {
        of(facts, subject, |regulator| Value::Figure(facts.solved_or_set(regulator).magnitude()))
    }),
    volts("held_output", "the magnitude that the output must not fall below", |facts, subject| {
        of(facts, subject, |regulator| Value::Figure(facts.held_output(regulator)))
    }),
    volts("reference", "the reference voltage of an adjustable part", |facts, subject| {
        of(facts, subject, |regulator| match facts.reference(regulator) {
            Some(reference) => Value::Figure(reference),
            None => Value::inapplicable("no reference voltage is known"),
        })
    }),
];

const fn volts(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::VOLTAGE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

impl Facts<'_> {
    /// The set point, signed; missing where nothing tells it.
    pub(super) fn set_point(&self, regulator: &Regulator) -> Quantity {
        let part = self.board().part(&self.part_of(regulator).reference);
        if let Some(declared) = part.and_then(|part| part.output_voltage.as_ref()) {
            return declared.quantity(Dimension::VOLTAGE, self.about(regulator, "output voltage"));
        }
        if let Some(modelled) = self.modelled_set_point(regulator) {
            return modelled;
        }
        let magnitude = match (regulator.mode, &regulator.nominal) {
            (Mode::Fixed, _) if regulator.is_built_up() => self.followed_output(regulator),
            (Mode::Fixed, Some(_)) | (Mode::Adjustable, Some(_)) if regulator.divider.is_none() => {
                self.fixed_output(regulator)
            }
            (Mode::Fixed, _) => self.fixed_output(regulator),
            (Mode::Adjustable, _) => self.adjusted_output(regulator),
        };
        let magnitude = magnitude.unwrap_or_else(|| self.no_set_point(regulator));
        if regulator.polarity == Sign::Negative { magnitude.negated() } else { magnitude }
    }

    /// What a shunt reference holds by the model that is declared for it, signed.
    fn modelled_set_point(&self, regulator: &Regulator) -> Option<Quantity> {
        let part = self.board().part(&self.part_of(regulator).reference)?;
        let model = part.model.as_ref().filter(|_| regulator.kind == RegulatorKind::Shunt)?;
        let volts = model.value.get("BV")?;
        let held =
            Quantity::fact(Dimension::VOLTAGE, volts, model.evidence(self.about(regulator, "breakdown voltage")));
        Some(if regulator.polarity == Sign::Negative { held.negated() } else { held })
    }

    fn no_set_point(&self, regulator: &Regulator) -> Quantity {
        let part = &self.part_of(regulator).reference;
        let evidence = Evidence::new(Grade::Assumed, self.about(regulator, "output voltage"), "nothing tells it")
            .settled_by(Settle::new(Table::Part, part, "output_voltage", "3.3 V ± 2 %"));
        Quantity::missing(Dimension::VOLTAGE, Pair::NOT_NEGATIVE, evidence)
    }

    /// The magnitude of a built-in voltage with its tolerance.
    fn fixed_output(&self, regulator: &Regulator) -> Option<Quantity> {
        let nominal = regulator.nominal.as_ref()?;
        let what = self.about(regulator, "nominal output");
        let evidence = Evidence::new(nominal.grade, what, nominal.source.clone());
        let volts = Range::exactly(nominal.volts.abs());
        let nominal = Quantity::given(Dimension::VOLTAGE, volts, Pair::NOT_NEGATIVE, evidence);
        Some(nominal.times(&self.output_tolerance(regulator)))
    }

    fn output_tolerance(&self, regulator: &Regulator) -> Quantity {
        let (usual, widest) = OUTPUT_TOLERANCE;
        let ask = Ask {
            key: "tolerance",
            noun: "output tolerance",
            dimension: Dimension::ONE,
            limits: Pair::new(0.0, widest),
        };
        let told = self
            .family_figure(regulator, ask)
            .or_else(|| self.family_figure(regulator, Ask { key: "tolerance_initial", ..ask }));
        let relative = told.as_ref().and_then(Quantity::shown).map(|range| range.low().abs().max(range.high().abs()));
        let range = Range::with_tolerance(1.0, relative.unwrap_or(usual));
        let evidence = told.as_ref().and_then(|told| told.evidence().next().cloned()).unwrap_or_else(|| {
            Evidence::new(Grade::Assumed, self.about(regulator, ask.noun), self.no_sheet(regulator))
                .settled_by(Settle::new(Table::Part, &self.part_of(regulator).reference, "tolerance", "±2 %"))
        });
        Quantity::given(Dimension::ONE, range, Pair::new(1.0 - widest, 1.0 + widest), evidence)
    }

    /// The reference voltage's magnitude.
    pub(super) fn reference(&self, regulator: &Regulator) -> Option<Quantity> {
        if let Some(built) = regulator.built_up.as_ref().filter(|built| !built.outboard) {
            return self.built_up_reference(regulator, built);
        }
        let ask = Ask {
            key: "reference",
            noun: "reference voltage",
            dimension: Dimension::VOLTAGE,
            limits: Pair::NOT_NEGATIVE,
        };
        if let Some(told) = self.family_figure(regulator, ask) {
            return Some(told.magnitude());
        }
        // A three-pin adjustable part that no family knows holds a band gap between output and adjust pin.
        let three_pins = regulator.mode == Mode::Adjustable && regulator.roles.ground.is_empty();
        three_pins.then(|| {
            let (low, nominal, high) = BAND_GAP;
            let evidence =
                Evidence::new(Grade::Assumed, self.about(regulator, ask.noun), "usual for three-pin parts")
                    .settled_by(self.which_family(regulator));
            Quantity::fact(Dimension::VOLTAGE, Range::clamped(low, nominal, high), evidence)
        })
    }

    /// Where the reference lies: as a family tells, else by the pins.
    pub(super) fn adjust_side(&self, regulator: &Regulator) -> AdjustSide {
        self.first_family(regulator, |family| family.adjust).map_or_else(
            || {
                let three_pins = regulator.roles.ground.is_empty() && !regulator.is_built_up();
                if three_pins { AdjustSide::Output } else { AdjustSide::Ground }
            },
            |(_, side)| side,
        )
    }

    /// The magnitude of an output that resistors or pins set.
    fn adjusted_output(&self, regulator: &Regulator) -> Option<Quantity> {
        if let Some(programmed) = self.programmed_output(regulator) {
            return Some(programmed);
        }
        let divider = regulator.divider.as_ref()?;
        if divider.trimmed {
            return self.trimmed_output(regulator);
        }
        if let Some(weighed) = self.weighed_output(regulator, divider) {
            return Some(weighed);
        }
        let lower = self.network(&divider.lower, &divider.lower_parallel);
        let upper = self.network(&divider.upper, &divider.upper_parallel);
        match self.adjust_side(regulator) {
            AdjustSide::SetCurrent => self.set_by_current(regulator, lower?),
            AdjustSide::Output => self.set_above_adjust(regulator, divider, upper, lower),
            AdjustSide::Ground => self.set_above_ground(regulator, divider, upper, lower),
        }
    }

    fn set_by_current(&self, regulator: &Regulator, resistor: Quantity) -> Option<Quantity> {
        let ask = Ask {
            key: "set_current",
            noun: "set current",
            dimension: Dimension::CURRENT,
            limits: Pair::NOT_NEGATIVE,
        };
        Some(self.family_figure(regulator, ask)?.magnitude().times(&resistor))
    }

    /// LM317 and 1117 kinds: `V = Vref (1 + R2 / R1) + Iadj R2`, R1 from output to adjust, R2 from there to ground
    /// (TI LM317 data sheet; the check values SUP-05 and SUP-06 are in the tests).
    fn set_above_adjust(
        &self,
        regulator: &Regulator,
        divider: &Divider,
        upper: Option<Quantity>,
        lower: Option<Quantity>,
    ) -> Option<Quantity> {
        let reference = self.reference(regulator)?;
        let Some(lower) = lower else {
            // The adjust pin on ground: the bare reference is left.
            return (divider.returns.is_some() && divider.lower.is_empty()).then_some(reference);
        };
        let upper = upper?;
        let zero = Quantity::constant(Dimension::CURRENT, 0.0);
        let ask = Ask {
            key: "adjust_current",
            noun: "adjust pin current",
            dimension: Dimension::CURRENT,
            limits: Pair::new(0.0, f64::INFINITY),
        };
        let current = self.family_figure(regulator, ask).unwrap_or(zero).magnitude();
        let inputs = [
            (&reference, Slope::Rising),
            (&lower, Slope::Rising),
            (&current, Slope::Rising),
            (&upper, Slope::Falling),
        ];
        Some(Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [reference, lower, current, upper] => reference * (1.0 + lower / upper) + current * lower,
            _ => f64::NAN,
        }))
    }

    /// Feedback parts: `V = Vfb (1 + R1 / R2)`, R1 from output to feedback, R2 from there to ground (TI TPS7A25 data
    /// sheet; the check value SUP-07 is in the tests).
    fn set_above_ground(
        &self,
        regulator: &Regulator,
        divider: &Divider,
        upper: Option<Quantity>,
        lower: Option<Quantity>,
    ) -> Option<Quantity> {
        let reference = self.reference(regulator)?;
        let Some(upper) = upper else {
            // The feedback pin on the output: the bare reference is left.
            return (divider.senses.is_some() && divider.upper.is_empty()).then_some(reference);
        };
        let lower = lower?;
        let inputs = [(&reference, Slope::Rising), (&upper, Slope::Rising), (&lower, Slope::Falling)];
        Some(Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [reference, upper, lower] => reference * (1.0 + upper / lower),
            _ => f64::NAN,
        }))
    }

    /// A trimmer is a guess: nominal the rail's name where it tells, else nothing is known.
    fn trimmed_output(&self, regulator: &Regulator) -> Option<Quantity> {
        let named = self.named_voltage(regulator)?;
        let what = self.about(regulator, "trimmed output");
        let evidence = Evidence::new(Grade::Inferred, what, "trimmer, taken as set to the name of its net")
            .settled_by(Settle::new(Table::Rail, self.output_name(regulator)?, "voltage", "5 V ± 5 %"));
        let range = Range::with_tolerance(named.abs(), NAME_TOLERANCE);
        Some(Quantity::given(Dimension::VOLTAGE, range, Pair::NOT_NEGATIVE, evidence))
    }

    /// Volts in the name of the output net, signed.
    pub(super) fn named_voltage(&self, regulator: &Regulator) -> Option<f64> {
        supply_name(&self.output_name(regulator)?).map(|name| name.volts)
    }

    pub(super) fn output_name(&self, regulator: &Regulator) -> Option<String> {
        regulator.output_net.map(|net| self.circuit().net(net).name.clone())
    }

    /// The output, signed: the set point, which may be declared for the part, else what the rail is meant to be, else what
    /// its net is called.
    pub(super) fn output_voltage(&self, regulator: &Regulator) -> Quantity {
        let what = self.about(regulator, "output voltage");
        let set_point = self.set_point(regulator);
        if !set_point.is_missing() {
            return set_point;
        }
        let name = self.output_name(regulator);
        let meant = name.as_ref().and_then(|name| self.board().rail(name)).and_then(|rail| rail.voltage.as_ref());
        if let Some(meant) = meant {
            return meant.quantity(Dimension::VOLTAGE, format!("voltage of {}", name.unwrap_or_default()));
        }
        let Some(volts) = self.named_voltage(regulator) else { return set_point };
        let evidence =
            Evidence::new(Grade::Inferred, what, format!("net name {}", name.unwrap_or_default())).settled_by(
                Settle::new(Table::Part, &self.part_of(regulator).reference, "output_voltage", "3.3 V ± 2 %"),
            );
        Quantity::fact(Dimension::VOLTAGE, Range::with_tolerance(volts, NAME_TOLERANCE), evidence)
    }

    /// The output as its circuit gives it, of built-up regulators, else as it is set.
    fn solved_or_set(&self, regulator: &Regulator) -> Quantity {
        let declared =
            self.board().part(&self.part_of(regulator).reference).is_some_and(|part| part.output_voltage.is_some());
        let solved = if declared { None } else { self.solved_output(regulator) };
        solved.unwrap_or_else(|| self.output_voltage(regulator))
    }

    /// The magnitude that the output must hold: a rail that may sag must hold its low end, a fact; else nobody says
    /// how far below its set point it may fall, and the tolerance's high end as a fact would make false errors.
    fn held_output(&self, regulator: &Regulator) -> Quantity {
        let Some(name) = self.output_name(regulator) else { return self.output_voltage(regulator).magnitude() };
        if let Some(rail) = self.board().rail(&name) {
            let sags = rail.may_sag.as_ref().is_some_and(|may| may.value);
            if let Some(voltage) = rail.voltage.as_ref().filter(|_| sags) {
                let low = voltage.value.low().abs().min(voltage.value.high().abs());
                let evidence = voltage.evidence(format!("lowest voltage that {name} may sag to"));
                return Quantity::fact(Dimension::VOLTAGE, Range::exactly(low), evidence);
            }
        }
        self.steady_output(regulator)
    }

    /// The magnitude of the output that regulates: its nominal value, where within its tolerance is a guess.
    pub(super) fn steady_output(&self, regulator: &Regulator) -> Quantity {
        let output = self.solved_or_set(regulator).magnitude();
        let Some(name) = self.output_name(regulator) else { return output };
        let Some(shown) = output.shown() else { return output };
        let range = Range::clamped(shown.nominal(), shown.nominal(), shown.high());
        let settle = Settle::new(Table::Rail, &name, "may_sag", "true");
        let what = self.about(regulator, "how far the output may fall");
        let evidence = Evidence::new(Grade::Assumed, what, "taken as not below its nominal").settled_by(settle);
        let limits = Pair::new(shown.low(), shown.high());
        // Where the output itself is a guess, its own limits hold.
        let limits = if output.kind().low() > output.kind().high() { output.kind().reversed() } else { limits };
        Quantity::given(Dimension::VOLTAGE, range, limits, evidence).also_resting_on(&output)
    }
}
