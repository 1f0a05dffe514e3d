//! What a part asks of its input and output capacitors.

use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::board::PartEntry;
use crate::knowledge::{Basis, CapacitorDemand, Cited, Family, MinimumKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::{Regulator, RegulatorKind, Side};

/// What a sheet that only recommends a capacitance, or gives one that covers all cases, is taken to need, as a
/// multiple: least, nominal, most.
const RECOMMENDED: (f64, f64, f64) = (0.1, 1.0 / 3.0, 1.0);
/// The same for a minimum that was recalled and not read.
const RECALLED: (f64, f64, f64) = (0.3, 0.6, 1.0);
/// What a series regulator that no family knows is taken to need at input and output, farads: some ceramic (common
/// practice).
const SOME_CERAMIC: (f64, f64, f64) = (0.01e-6, 0.1e-6, 1e-6);

/// Two capacitances that differ by less than this part are one figure written twice.
const SAME: f64 = 1e-3;

pub(super) const KINDS: &[&str] = &["required", "recommended", "recalled", "optional"];

pub(super) const DEFINITIONS: &[Definition] = &[
    farads("minimum_capacitance", "the least output capacitance that the part asks for", |facts, subject| {
        of(facts, subject, |regulator| facts.minimum(regulator, Side::Output))
    }),
    farads("minimum_input_capacitance", "the least input capacitance that the part asks for", |facts, subject| {
        of(facts, subject, |regulator| facts.minimum(regulator, Side::Input))
    }),
    farads("asked_capacitance", "the output capacitance that the sheet states, as one value", |facts, subject| {
        of(facts, subject, |regulator| facts.asked(regulator, Side::Output))
    }),
    farads(
        "asked_input_capacitance",
        "the input capacitance that the sheet states, as one value",
        |facts, subject| of(facts, subject, |regulator| facts.asked(regulator, Side::Input)),
    ),
    farads("maximum_capacitance", "the largest output capacitance that the sheet allows", |facts, subject| {
        of(facts, subject, |regulator| facts.maximum(regulator))
    }),
    word(
        "minimum_basis",
        &["nominal", "effective"],
        "which capacitance the output's minimum speaks of",
        |facts, subject| of(facts, subject, |regulator| facts.basis(regulator, Side::Output)),
    ),
    word(
        "input_minimum_basis",
        &["nominal", "effective"],
        "which capacitance the input's minimum speaks of",
        |facts, subject| of(facts, subject, |regulator| facts.basis(regulator, Side::Input)),
    ),
    word("minimum_kind", KINDS, "how binding the output's minimum is", |facts, subject| {
        of(facts, subject, |regulator| facts.binding(regulator, Side::Output))
    }),
    word("input_capacitor_kind", KINDS, "how binding the input's minimum is", |facts, subject| {
        of(facts, subject, |regulator| facts.binding(regulator, Side::Input))
    }),
    flag("drawn_equals_minimum", "the output capacitance as drawn is just the sheet's minimum", |facts, subject| {
        of(facts, subject, |regulator| Value::flag(facts.is_just_the_minimum(regulator, subject)))
    }),
    flag(
        "input_capacitor_if_far",
        "the sheet asks for an input capacitor only far from the supply's own",
        |facts, subject| {
            of(facts, subject, |regulator| {
                Value::flag(facts.demand(regulator, Side::Input).is_some_and(|(_, demand)| demand.if_far))
            })
        },
    ),
    flag("ceramic_allowed", "the sheet says itself that ceramics do", |facts, subject| {
        of(facts, subject, |regulator| {
            let demand = facts.demand(regulator, Side::Output);
            Value::flag(demand.is_some_and(|(_, demand)| demand.ceramic_allowed || demand.ceramic_only))
        })
    }),
];

const fn farads(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::CAPACITANCE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

const fn word(
    name: &'static str,
    words: &'static [&'static str],
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    let kind = ValueKind::Word(words);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

const fn flag(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind: ValueKind::Flag, meaning, defined_in: file!(), compute }
}

impl Facts<'_> {
    fn demand<'r>(&'r self, regulator: &'r Regulator, side: Side) -> Option<(&'r Family, &'r CapacitorDemand)> {
        self.first_family(regulator, |family| match side {
            Side::Input => family.input_capacitor.as_ref(),
            Side::Output => family.output_capacitor.as_ref(),
        })
    }

    fn declared_part(&self, regulator: &Regulator) -> Option<&PartEntry> {
        self.board().part(&self.part_of(regulator).reference)
    }

    fn minimum(&self, regulator: &Regulator, side: Side) -> Value {
        let what = self.about(
            regulator,
            match side {
                Side::Input => "minimum input capacitance",
                Side::Output => "minimum output capacitance",
            },
        );
        let declared = self.declared_part(regulator).and_then(|part| match side {
            Side::Input => part.minimum_input_capacitance.as_ref(),
            Side::Output => part.minimum_output_capacitance.as_ref(),
        });
        if let Some(declared) = declared {
            let evidence = declared.evidence(what);
            return Value::Figure(Quantity::fact(Dimension::CAPACITANCE, Range::exactly(declared.value), evidence));
        }
        let Some((_, demand)) = self.demand(regulator, side) else { return self.unknown_minimum(regulator, what) };
        if demand.kind == MinimumKind::Optional {
            return Value::inapplicable("the part does without");
        }
        match self.stated(regulator, side, demand) {
            Some((minimum, farads)) => {
                let told = self.bound(regulator, (side, demand.kind), minimum, farads, what);
                Value::Figure(self.with_versions(regulator, side, (minimum, demand.kind), told))
            }
            None => Value::inapplicable("the sheet names no minimum"),
        }
    }

    /// The figure of the sheet that holds for this part as it is wired, and its value in farads.
    fn stated<'d>(
        &self,
        regulator: &Regulator,
        side: Side,
        demand: &'d CapacitorDemand,
    ) -> Option<(&'d Cited<f64>, f64)> {
        let bypassed = side == Side::Output && self.is_bypassed(regulator);
        let bypass = demand.with_bypass.as_ref().filter(|_| bypassed);
        let electrolytic = demand.minimum_electrolytic.as_ref();
        // A polarized symbol alone may as well be a tantalum, for which the sheet asks for less.
        let surely = || self.bulk_is(regulator, "electrolytic").is_some_and(Grade::is_fact);
        let electrolytic = electrolytic.filter(|_| side == Side::Output && surely());
        match electrolytic.or(bypass) {
            Some(special) => Some((special, special.value)),
            None => {
                let minimum = demand.minimum.as_ref()?;
                Some((minimum, self.at_output(regulator, demand, minimum)))
            }
        }
    }

    /// What a reader is told to be asked for: the sheet's own figure, whatever the part may need of it.
    fn asked(&self, regulator: &Regulator, side: Side) -> Value {
        let minimum = match self.minimum(regulator, side) {
            Value::Figure(minimum) => minimum,
            other => return other,
        };
        let stated = self.demand(regulator, side).and_then(|(_, demand)| self.stated(regulator, side, demand));
        let stated = stated.filter(|_| minimum.grade() != Some(Grade::Declared)).map(|(_, farads)| farads);
        let Some(farads) = stated.or(minimum.nominal()) else { return Value::Figure(minimum) };
        Value::Figure(Quantity::constant(Dimension::CAPACITANCE, farads).also_resting_on(&minimum))
    }

    /// The minimum, over the versions of other makers that the name can mean.
    fn with_versions(
        &self,
        regulator: &Regulator,
        side: Side,
        (minimum, kind): (&Cited<f64>, MinimumKind),
        (mut range, mut evidence): (Range, Evidence),
    ) -> Quantity {
        let others = self.families(regulator).skip(1).filter_map(|family| match side {
            Side::Input => family.input_capacitor.as_ref(),
            Side::Output => family.output_capacitor.as_ref(),
        });
        let mut differ = false;
        for other in others {
            let needed = other.minimum.as_ref().filter(|_| other.kind != MinimumKind::Optional);
            let farads = needed.map_or(0.0, |needed| self.at_output(regulator, other, needed));
            differ |= other.kind != kind || (farads / minimum.value - 1.0).abs() > SAME;
            let (low, _, high) = shares(other.kind, needed.is_some_and(|needed| needed.recalled));
            range = range.union(Range::clamped(farads * low, farads * low, farads * high));
        }
        if differ {
            evidence = self.by_version(regulator, evidence, &minimum.source);
        }
        Quantity::given(Dimension::CAPACITANCE, range, Pair::NOT_NEGATIVE, evidence)
    }

    /// The minimum for the part's own output voltage, where the sheet makes it depend on that.
    fn at_output(&self, regulator: &Regulator, demand: &CapacitorDemand, minimum: &Cited<f64>) -> f64 {
        let volts = self.output_voltage(regulator).magnitude().nominal();
        let row = volts.and_then(|volts| demand.by_output.iter().find(|(up_to, _)| volts <= *up_to));
        row.or(demand.by_output.last()).map_or(minimum.value, |(_, farads)| *farads)
    }

    /// A capacitor at the adjust or bypass pin, for which some sheets ask for more at the output.
    fn is_bypassed(&self, regulator: &Regulator) -> bool {
        let pins = regulator.roles.adjust.iter().chain(&regulator.roles.bypass);
        pins.filter_map(|pin| self.circuit().net_of(regulator.device, *pin)).any(|net| {
            let bank = || self.bank_at(net, regulator.ground_net, Side::Output);
            !self.circuit().net(net).ground && !bank().branches.is_empty()
        })
    }

    /// A required minimum is what it is; one that is recommended or recalled is a guess at what the part needs.
    fn bound(
        &self,
        regulator: &Regulator,
        (side, kind): (Side, MinimumKind),
        minimum: &Cited<f64>,
        farads: f64,
        what: String,
    ) -> (Range, Evidence) {
        let recalled = minimum.recalled || kind == MinimumKind::Recalled;
        let key = match side {
            Side::Input => "minimum_input_capacitance",
            Side::Output => "minimum_output_capacitance",
        };
        let mut evidence = self.cited(regulator, &minimum.source, recalled, what);
        let settle = Settle::new(Table::Part, &self.part_of(regulator).reference, key, "10 uF");
        if !evidence.grade.is_fact() {
            evidence = evidence.settled_by(settle.clone());
        }
        let recommended = kind == MinimumKind::Recommended && !recalled;
        let evidence = if recommended {
            let mut weaker = evidence.at_most(Grade::Inferred).settled_by(settle);
            weaker.source = format!("{}, which recommends it", minimum.source);
            weaker
        } else {
            evidence
        };
        let (low, nominal, high) = shares(kind, recalled);
        (Range::clamped(farads * low, farads * nominal, farads * high), evidence)
    }

    /// A series regulator that no family knows: some capacitor at each side.
    fn unknown_minimum(&self, regulator: &Regulator, what: String) -> Value {
        if regulator.kind != RegulatorKind::Series
            || regulator.is_built_up()
            || self.families(regulator).next().is_some()
        {
            return Value::inapplicable("no minimum is known");
        }
        let (low, nominal, high) = SOME_CERAMIC;
        let evidence =
            Evidence::new(Grade::Assumed, what, format!("{}: some capacitor is usual", self.no_sheet(regulator)))
                .settled_by(self.which_family(regulator));
        let range = Range::clamped(low, nominal, high);
        Value::Figure(Quantity::given(Dimension::CAPACITANCE, range, Pair::NOT_NEGATIVE, evidence))
    }

    /// A designer who draws the sheet's own figure follows the sheet.
    fn is_just_the_minimum(&self, regulator: &Regulator, subject: Subject) -> bool {
        let stated = self.demand(regulator, Side::Output).and_then(|(_, demand)| {
            demand.minimum.as_ref().map(|minimum| self.at_output(regulator, demand, minimum))
        });
        let drawn = self.figure(subject, "drawn_capacitance").and_then(|drawn| drawn.nominal());
        matches!((stated, drawn), (Some(stated), Some(drawn)) if (drawn / stated - 1.0).abs() < SAME)
    }

    fn maximum(&self, regulator: &Regulator) -> Value {
        let found = self.demand(regulator, Side::Output).and_then(|(_, demand)| demand.maximum.as_ref());
        let Some(maximum) = found else { return Value::inapplicable("the sheet names no maximum") };
        let what = self.about(regulator, "largest output capacitance");
        let evidence = self.cited(regulator, &maximum.source, maximum.recalled, what);
        let range = Range::exactly(maximum.value);
        Value::Figure(Quantity::given(Dimension::CAPACITANCE, range, Pair::NOT_NEGATIVE, evidence))
    }

    fn basis(&self, regulator: &Regulator, side: Side) -> Value {
        let declared = self.declared_part(regulator).and_then(|part| part.minimum_basis.as_ref());
        let told = self.demand(regulator, side).map(|(_, demand)| demand.basis);
        match declared.map(|declared| declared.value).or(told).unwrap_or(Basis::Nominal) {
            Basis::Nominal => Value::word("nominal"),
            Basis::Effective => Value::word("effective"),
        }
    }

    fn binding(&self, regulator: &Regulator, side: Side) -> Value {
        let declared = self.declared_part(regulator).is_some_and(|part| match side {
            Side::Input => part.minimum_input_capacitance.is_some(),
            Side::Output => part.minimum_output_capacitance.is_some(),
        });
        let word = match self.demand(regulator, side).map(|(_, demand)| demand.kind) {
            _ if declared => "required",
            // No sheet asks for any; what its loop needs at the output is solved.
            _ if regulator.is_built_up() => "optional",
            Some(MinimumKind::Required) => "required",
            Some(MinimumKind::Recommended) => "recommended",
            Some(MinimumKind::Optional) => "optional",
            Some(MinimumKind::Recalled) | None => "recalled",
        };
        Value::word(word)
    }
}

/// What a minimum is taken to need, as multiples: least, nominal, most.
fn shares(kind: MinimumKind, recalled: bool) -> (f64, f64, f64) {
    match kind {
        _ if recalled => RECALLED,
        MinimumKind::Recalled => RECALLED,
        MinimumKind::Recommended => RECOMMENDED,
        _ => (1.0, 1.0, 1.0),
    }
}
