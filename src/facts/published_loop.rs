//! The loop of a packaged part, computed from what its maker publishes of it: margins, and the ESR window that they leave.
//!
//! `T(s) = gain × Π (1 + s / zero) / Π (1 + s / pole) × Z(s) / Z(0)` after National Semiconductor AN-1148, Linear
//! Regulators: Theory of Operation and Compensation, with Z exact: the output resistance, the load and each capacitor
//! with its ESR in parallel. Capacitors behind ferrites, inductors and connectors are left out: a loop sees little of them.

mod shape;

use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::board::LoadKind;
use crate::knowledge::{Cited, PublishedLoop};
use crate::quantity::{Dimension, Pair, Quantity, Range};
use crate::recognize::{Regulator, Side};
use crate::solve::{Frequencies, Goal, USUAL_PHASE};
use shape::{Layout, NO_EDGE, Shape, edges};

/// Any phase margin, in degrees.
const ANY_PHASE: (f64, f64) = (-180.0, 180.0);
/// Capacitors that differ, the largest first: the smaller ones beyond these are left out.
const MOST_CAPACITORS: usize = 8;
/// The least full load that is looked at where it is a guess, as a part of the largest.
const LEAST_LOAD: f64 = 0.1;

pub(super) const DEFINITIONS: &[Definition] = &[
    Definition {
        name: "has_published_loop",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "its sheet or the board file tells its loop: gain, poles and zeros",
        defined_in: file!(),
        compute: |facts, subject| {
            of(facts, subject, |regulator| Value::flag(facts.published_loop(regulator).is_some()))
        },
    },
    ohms(
        "computed_esr_low",
        "the least ESR of the output's bulk capacitor that leaves the published loop 45° at 10, 50 and 100 % of the load",
        |facts, subject| of(facts, subject, |regulator| facts.computed_edge(regulator, Edge::Low)),
    ),
    ohms(
        "computed_esr_high",
        "the largest ESR of the output's bulk capacitor that leaves the published loop 45° at these loads",
        |facts, subject| of(facts, subject, |regulator| facts.computed_edge(regulator, Edge::High)),
    ),
];

const fn ohms(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::RESISTANCE);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

/// A margin of a published loop, the least over 10, 50 and 100 % of the load.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum PublishedMargin {
    /// The phase margin, degrees.
    Phase,
    /// The modulus margin, the least `|1 + T|`.
    Modulus,
    /// The frequency in hertz at which the gain is one, at the load where the phase margin is least.
    Crossover,
}

/// An end of the computed window.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Edge {
    /// The least ESR.
    Low,
    /// The largest.
    High,
}

/// What a loop is computed from, in the order of its layout.
struct Inputs {
    layout: Layout,
    figures: Vec<Quantity>,
    /// Where the ESR of the bulk capacitor stands; `None` without output capacitors.
    bulk_esr: Option<usize>,
}

impl Facts<'_> {
    /// A margin of a part whose loop is published, over the ranges of all that it rests on; `None` where it is not.
    #[must_use]
    pub fn published_margin(&self, regulator: &Regulator, margin: PublishedMargin) -> Option<Value> {
        let published = self.published_loop(regulator)?;
        let inputs = match self.loop_inputs(regulator, published) {
            Ok(inputs) => inputs,
            Err(reason) => return Some(Value::inapplicable(reason)),
        };
        let (dimension, limits) = match margin {
            PublishedMargin::Phase => (Dimension::ANGLE, Pair::new(ANY_PHASE.0, ANY_PHASE.1)),
            PublishedMargin::Modulus => (Dimension::ONE, Pair::NOT_NEGATIVE),
            PublishedMargin::Crossover => (Dimension::FREQUENCY, Pair::NOT_NEGATIVE),
        };
        let frequencies = Frequencies::default();
        let formula = |values: &[f64]| {
            let found = Shape::new(inputs.layout, values, &frequencies).margins();
            match margin {
                PublishedMargin::Phase => found.phase_or_all(),
                PublishedMargin::Modulus => found.modulus,
                PublishedMargin::Crossover => found.crossover.unwrap_or(f64::NAN),
            }
        };
        let all: Vec<&Quantity> = inputs.figures.iter().collect();
        let figure = Quantity::searched(dimension, &all, limits, formula);
        if figure.nominal().is_none() && !figure.is_missing() {
            return Some(Value::inapplicable("the gain crosses one nowhere"));
        }
        Some(Value::Figure(figure))
    }

    /// An edge of the ESR window that leaves a phase margin in degrees at every load; `None` where no loop is published.
    /// Where at some corner nothing does, the window has shrunk to the best value there.
    #[must_use]
    pub fn published_edge(&self, regulator: &Regulator, edge: Edge, degrees: f64) -> Option<Value> {
        let published = self.published_loop(regulator)?;
        let inputs = match self.loop_inputs(regulator, published) {
            Ok(inputs) => inputs,
            Err(reason) => return Some(Value::inapplicable(reason)),
        };
        let Some(bulk) = inputs.bulk_esr else { return Some(Value::inapplicable("no output capacitor")) };
        let goal = Goal { phase: degrees, modulus: 0.0 };
        let frequencies = Frequencies::default();
        // The ESR itself is what is looked for, so that the window does not rest on it.
        let others = inputs.figures.iter().enumerate().filter(|(index, _)| *index != bulk);
        let all: Vec<&Quantity> = others.map(|(_, figure)| figure).collect();
        let formula = |values: &[f64]| {
            let mut values = values.to_vec();
            values.insert(bulk.min(values.len()), 0.0);
            let (low, high) = edges(&Shape::new(inputs.layout, &values, &frequencies).window(&goal));
            if edge == Edge::Low { low } else { high }
        };
        let figure = Quantity::searched(Dimension::RESISTANCE, &all, Pair::NOT_NEGATIVE, formula);
        Some(match edge {
            Edge::Low if figure.worst().high() <= 0.0 => Value::inapplicable("no ESR is too low"),
            Edge::High if figure.worst().low() >= NO_EDGE => Value::inapplicable("no ESR is too high"),
            _ => Value::Figure(figure),
        })
    }

    fn computed_edge(&self, regulator: &Regulator, edge: Edge) -> Value {
        let found = self.published_edge(regulator, edge, USUAL_PHASE);
        found.unwrap_or_else(|| Value::inapplicable("its loop is not published"))
    }

    /// The loop as declared for the part, else as its family's sheet gives it.
    fn published_loop(&self, regulator: &Regulator) -> Option<PublishedLoop<Quantity>> {
        if regulator.is_built_up() {
            return None;
        }
        let part = self.board().part(&self.part_of(regulator).reference);
        if let Some(declared) = part.and_then(|part| part.published_loop.as_ref()) {
            return Some(declared.value.map(|key, number, figure| {
                figure.quantity(dimension_of(key), self.about(regulator, &noun(key, number)))
            }));
        }
        let (family, published) = self.first_family(regulator, |family| family.published_loop.as_ref())?;
        let differ = self.families(regulator).any(|other| !other.has_the_loop_of(family));
        Some(published.map(|key, number, cited| self.cited_figure(regulator, (key, number), cited, differ)))
    }

    /// A figure of a sheet's loop: a guess where makers' versions that the name can mean state another loop, or none.
    fn cited_figure(
        &self,
        regulator: &Regulator,
        (key, number): (&'static str, usize),
        cited: &Cited<Range>,
        differ: bool,
    ) -> Quantity {
        let what = self.about(regulator, &noun(key, number));
        let mut evidence = self.cited(regulator, &cited.source, cited.recalled, what);
        if differ {
            evidence = self.by_version(regulator, evidence, &cited.source);
        }
        Quantity::given(dimension_of(key), cited.value, Pair::NOT_NEGATIVE, evidence)
    }

    /// Everything that the loop is computed from, or why it cannot be.
    fn loop_inputs(&self, regulator: &Regulator, published: PublishedLoop<Quantity>) -> Result<Inputs, &'static str> {
        let load = self.full_load(regulator);
        let layout = Layout {
            poles: published.poles.len(),
            zeros: published.zeros.len(),
            resistance: published.output_resistance.is_some(),
            load: load.is_some(),
        };
        if !layout.resistance && !layout.load {
            return Err("neither an output resistance nor a resistive load is told");
        }
        let mut figures: Vec<Quantity> = published.into_figures().chain(load).collect();
        let bank = self.loop_bank(regulator);
        let bulk_esr = (!bank.is_empty()).then_some(figures.len() + 1);
        figures.extend(bank.into_iter().flat_map(|(farads, ohms)| [farads, ohms]));
        Ok(Inputs { layout, figures, bulk_esr })
    }

    /// The resistance of the full load; `None` of a constant current, or of no load at all.
    fn full_load(&self, regulator: &Regulator) -> Option<Quantity> {
        let name = self.output_name(regulator);
        let kind = name.as_deref().and_then(|name| self.board().load(name)?.kind.as_ref());
        if kind.is_some_and(|kind| kind.value == LoadKind::Constant) {
            return None;
        }
        let full = self.load(regulator).at_high();
        let most = full.worst().high();
        if most <= 0.0 || !most.is_finite() {
            return None;
        }
        let full = full.greatest(&Quantity::constant(Dimension::CURRENT, most * LEAST_LOAD));
        Some(self.output_voltage(regulator).magnitude().times(&full.reciprocal()))
    }

    /// Farads and ohms of the capacitors at the output, the bulk capacitor first; those that are alike are one.
    fn loop_bank(&self, regulator: &Regulator) -> Vec<(Quantity, Quantity)> {
        let Some(bank) = self.bank_of(regulator, Side::Output) else { return Vec::new() };
        let direct = bank.branches.iter().filter(|branch| branch.through.is_empty());
        let mut found: Vec<Alike> = Vec::new();
        for branch in direct {
            let farads = self.effective_capacitance(branch.capacitor, bank.net);
            let ohms = self.branch_esr(branch);
            let drawn = self.circuit().device(branch.capacitor).amount.as_ref().map_or(0.0, |amount| amount.amount);
            let alike =
                |known: &&mut Alike| known.farads.shown() == farads.shown() && known.ohms.shown() == ohms.shown();
            match found.iter_mut().find(alike) {
                Some(known) => known.count += 1.0,
                None => found.push(Alike { farads, ohms, drawn, count: 1.0 }),
            }
        }
        // As for the bulk capacitor's ESR, the value that is drawn tells which one it is.
        found.sort_by(|one, other| other.drawn.total_cmp(&one.drawn));
        found.truncate(MOST_CAPACITORS);
        let joined = |alike: Alike| (alike.farads.scaled(alike.count), alike.ohms.scaled(1.0 / alike.count));
        found.into_iter().map(joined).collect()
    }
}

/// Capacitors that are alike: what each has, what is drawn, how many they are.
struct Alike {
    farads: Quantity,
    ohms: Quantity,
    drawn: f64,
    count: f64,
}

fn dimension_of(key: &str) -> Dimension {
    match key {
        "gain" => Dimension::ONE,
        "output_resistance" => Dimension::RESISTANCE,
        _ => Dimension::FREQUENCY,
    }
}

fn noun(key: &str, number: usize) -> String {
    match key {
        "gain" => "loop gain".to_owned(),
        "output_resistance" => "output resistance".to_owned(),
        "zeros" => format!("zero {} of the loop", number + 1),
        _ => format!("pole {} of the loop", number + 1),
    }
}
