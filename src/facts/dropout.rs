//! Dropout at the load, and at light load.

use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::knowledge::{Cited, DropoutAt, DropoutPoint, Family, Pass};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorKind};

/// How far the maximum over temperature lies above a typical figure that stands alone, as a part of it: likely, and at
/// most (sheets that give both: often one half to the whole).
const ABOVE_TYPICAL: (f64, f64) = (0.25, 0.75);
/// The same for emitter followers, whose dropout is two or three junctions and hardly changes (common practice: 2 V in
/// the sheet, 2.5 V on the bench; 1117 sheets that give both: 1.1 to 1.2 V, at most 1.3 to 1.4 V).
const ABOVE_TYPICAL_FOLLOWER: (f64, f64) = (0.25, 0.25);
/// The range of a figure that was recalled and not read, as a multiple, and its limits.
const RECALLED: (f64, f64) = (0.7, 1.3);
const RECALLED_LIMITS: (f64, f64) = (0.0, 3.0);
/// Dropout of a low-dropout part that no family knows, volts (common practice).
const LOW_DROPOUT: (f64, f64, f64) = (0.05, 0.35, 1.3);
/// The base-emitter drop of an outboard transistor, volts: low, nominal, high, most (common practice).
const BASE_EMITTER: (f64, f64, f64, f64) = (0.6, 0.8, 1.2, 2.0);
/// Light load as a part of the peak.
const LIGHT: f64 = 0.1;

pub(super) const DEFINITIONS: &[Definition] = &[
    volts(
        "dropout",
        "the least voltage across the part at its load: typical to the maximum over temperature",
        |facts, subject| {
            series(facts, subject, |regulator| {
                let load = facts.load(regulator);
                let solved = facts.undeclared(regulator).and_then(|own| facts.solved_dropout(own, None));
                solved.unwrap_or_else(|| Value::Figure(facts.dropout_of_all(regulator, &load)))
            })
        },
    ),
    volts(
        "dropout_light",
        "the same at a tenth of the peak load, or at the declared idle where that is more",
        |facts, subject| {
            series(facts, subject, |regulator| {
                let light = light(&facts.load(regulator));
                let solved = facts.undeclared(regulator).and_then(|own| facts.solved_dropout(own, light.nominal()));
                solved.unwrap_or_else(|| Value::Figure(facts.dropout_of_all(regulator, &light)))
            })
        },
    ),
];

const fn volts(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::VOLTAGE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

fn series(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator) -> Value) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Series | RegulatorKind::Reference => compute(regulator),
        _ => Value::inapplicable("not a series part"),
    })
}

/// A tenth of the peak, at least the idle current.
fn light(load: &Quantity) -> Quantity {
    let Some(shown) = load.shown() else { return load.clone() };
    let light = (shown.high() * LIGHT).max(shown.low());
    Quantity::constant(Dimension::CURRENT, light).also_resting_on(load)
}

impl Facts<'_> {
    /// The packaged part's dropout at light load: what is left of the load where a transistor takes it over.
    pub(super) fn light_packaged_dropout(&self, regulator: &Regulator) -> Quantity {
        self.dropout(regulator, &light(&self.load(regulator)))
    }

    /// The dropout with the base-emitter drop of an outboard transistor, whose circuit could not be solved.
    fn dropout_of_all(&self, regulator: &Regulator, load: &Quantity) -> Quantity {
        let packaged = self.dropout(regulator, load);
        let Some(transistor) = regulator.outboard() else { return packaged };
        let (low, nominal, high, most) = BASE_EMITTER;
        let what = format!("base-emitter drop of {}", self.circuit().device(transistor).reference);
        let evidence = Evidence::new(Grade::Assumed, what, "usual at full current");
        let limits = Pair::new(0.0, most);
        packaged.plus(&Quantity::given(Dimension::VOLTAGE, Range::clamped(low, nominal, high), limits, evidence))
    }

    fn dropout(&self, regulator: &Regulator, load: &Quantity) -> Quantity {
        if let Some(points) = self.declared_dropout(regulator) {
            let curve = |load: f64, _: f64| interpolated(&points.0, load);
            let exact = Quantity::constant(Dimension::ONE, 0.0);
            return along(load, &exact, curve).also_resting_on(&points.1);
        }
        let output = self.output_voltage(regulator).magnitude().nominal();
        let families: Vec<&Family> =
            self.families(regulator).filter(|family| family.dropout_at(0.0, output).is_some()).collect();
        let Some(first) = families.first() else { return self.unknown_dropout(regulator) };
        let spread = self.spread(regulator, first, output);
        let at = |load: f64| first.dropout_at(load, output).map(|cited| cited.value);
        let above = above_typical(first);
        let curve = |load: f64, share: f64| at(load).map_or(f64::NAN, |at| between(&at, share, above));
        let figure = along(load, &spread, curve);
        match self.versions(regulator, &families, output) {
            Some(versions) => figure.times(&versions),
            None => figure,
        }
    }

    /// Where between the typical figure and the maximum over temperature the part lies: a fact from 0 to 1 where the
    /// sheet gives both, a guess where it gives only one.
    fn spread(&self, regulator: &Regulator, family: &Family, output: Option<f64>) -> Quantity {
        let what = self.about(regulator, "dropout");
        let rated = family.figures.get("rated_current").map_or(0.0, |cited| cited.value.high());
        let Some(cited) = family.dropout_at(rated, output) else { return Quantity::constant(Dimension::ONE, 0.0) };
        let mut evidence = self.cited(regulator, &cited.source, cited.recalled, what);
        if !evidence.grade.is_fact() {
            evidence = evidence.settled_by(self.dropout_of(regulator));
        }
        let mut likely = 0.0;
        if cited.value.maximum.is_none() {
            let (usual, most) = above_typical(family);
            likely = usual / most;
            evidence = evidence.at_most(Grade::Assumed).settled_by(self.dropout_of(regulator));
            evidence.source = format!("{}, which gives only a typical figure", cited.source);
        }
        Quantity::given(Dimension::ONE, Range::clamped(0.0, likely, 1.0), Pair::new(0.0, 1.0), evidence)
    }

    /// The multiple by which a recalled figure may be off, or other makers' versions of the name may differ.
    fn versions(&self, regulator: &Regulator, families: &[&Family], output: Option<f64>) -> Option<Quantity> {
        let at_full = |family: &&Family| -> Option<Cited<DropoutAt>> {
            let rated = family.figures.get("rated_current").map_or(f64::MAX, |cited| cited.value.high());
            family.dropout_at(rated, output)
        };
        let first = families.first().and_then(at_full)?;
        let mut range = if first.recalled { RECALLED } else { (1.0, 1.0) };
        for other in families.iter().filter_map(at_full) {
            range.0 = range.0.min(other.value.typical / first.value.typical);
            // What may lie above a typical figure that stands alone is told by the spread, not once more here.
            let most = |at: &DropoutAt| at.maximum.unwrap_or(at.typical);
            range.1 = range.1.max(most(&other.value) / most(&first.value));
        }
        if (range.1 - range.0).abs() < f64::EPSILON {
            return None;
        }
        let noun = if first.recalled { "dropout" } else { "dropout by maker" };
        let evidence = Evidence::new(Grade::Inferred, self.about(regulator, noun), first.source)
            .settled_by(if first.recalled { self.dropout_of(regulator) } else { self.which_family(regulator) });
        let range = Range::clamped(range.0, 1.0, range.1);
        let (low, high) = RECALLED_LIMITS;
        Some(Quantity::given(Dimension::ONE, range, Pair::new(low, high), evidence))
    }

    /// The regulator, where no dropout is declared for it.
    fn undeclared<'r>(&self, regulator: &'r Regulator) -> Option<&'r Regulator> {
        // Of a packaged part with an outboard transistor, that is one of the figures of its circuit.
        let declared = self.declared_dropout(regulator).is_some() && regulator.outboard().is_none();
        (!declared).then_some(regulator)
    }

    fn declared_dropout(&self, regulator: &Regulator) -> Option<(Vec<DropoutPoint>, Quantity)> {
        let part = self.board().part(&self.part_of(regulator).reference)?;
        let declared = part.dropout.as_ref()?;
        let evidence = declared.evidence(self.about(regulator, "dropout"));
        let fact = Quantity::fact(Dimension::VOLTAGE, Range::exactly(0.0), evidence);
        Some((declared.value.clone(), fact))
    }

    fn dropout_of(&self, regulator: &Regulator) -> Settle {
        Settle::new(Table::Part, &self.part_of(regulator).reference, "dropout", "1.3 V at 0.5 A")
    }

    /// No family: a low-dropout part by its own words is a guess, anything else is not known.
    fn unknown_dropout(&self, regulator: &Regulator) -> Quantity {
        let what = self.about(regulator, "dropout");
        let part = self.part_of(regulator);
        let text = format!("{} {}", part.description, part.keywords).to_lowercase().replace('-', " ");
        let (low, nominal, high) = LOW_DROPOUT;
        if text.contains("low dropout") || text.split(|c: char| !c.is_alphanumeric()).any(|word| word == "ldo") {
            let evidence = Evidence::new(
                Grade::Assumed,
                what,
                format!("{}; low-dropout by its symbol's words", self.no_sheet(regulator)),
            )
            .settled_by(self.dropout_of(regulator));
            let range = Range::clamped(low, nominal, high);
            return Quantity::given(Dimension::VOLTAGE, range, Pair::NOT_NEGATIVE, evidence);
        }
        let evidence =
            Evidence::new(Grade::Assumed, what, self.no_sheet(regulator)).settled_by(self.dropout_of(regulator));
        Quantity::missing(Dimension::VOLTAGE, Pair::NOT_NEGATIVE, evidence)
    }
}

/// Dropout that rises with the load and with the share of the way from the typical figure to the maximum.
fn along(load: &Quantity, spread: &Quantity, curve: impl Fn(f64, f64) -> f64) -> Quantity {
    let inputs = [(load, Slope::Rising), (spread, Slope::Rising)];
    Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
        [load, share] => curve(*load, *share),
        _ => f64::NAN,
    })
}

fn above_typical(family: &Family) -> (f64, f64) {
    let follower = family.pass.as_ref().is_some_and(|pass| {
        matches!(
            pass.value,
            Pass::NpnFollower
                | Pass::NpnFollowerDarlington
                | Pass::PnpFollowerDarlington
                | Pass::NpnFollowerComplementary
        )
    });
    if follower { ABOVE_TYPICAL_FOLLOWER } else { ABOVE_TYPICAL }
}

/// The figure a share of the way from typical to maximum; where there is no maximum, to what may lie above.
fn between(at: &DropoutAt, share: f64, above: (f64, f64)) -> f64 {
    let maximum = at.maximum.unwrap_or(at.typical * (1.0 + above.1));
    at.typical + (maximum - at.typical) * share
}

/// Linear between declared points, flat outside.
fn interpolated(points: &[DropoutPoint], load: f64) -> f64 {
    let drop = |point: &DropoutPoint| point.maximum.unwrap_or(point.typical);
    let below = points.iter().rev().find(|point| point.load <= load).or(points.first());
    let above = points.iter().find(|point| point.load >= load).or(points.last());
    match (below, above) {
        (Some(below), Some(above)) if above.load > below.load => {
            let share = ((load - below.load) / (above.load - below.load)).clamp(0.0, 1.0);
            drop(below) + (drop(above) - drop(below)) * share
        }
        (Some(one), _) => drop(one),
        _ => f64::NAN,
    }
}
