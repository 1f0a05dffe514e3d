//! The names of what a solved circuit gives.

use super::super::identity::of;
use super::super::published_loop::PublishedMargin;
use super::super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use super::recipe::Recipe;
use super::start::Decides;
use crate::quantity::{Dimension, Quantity};
use crate::solve::{SolveError, WindowKind};

pub(in crate::facts) const DEFINITIONS: &[Definition] = &[
    figure(
        "phase_margin",
        Dimension::ANGLE,
        "the least phase margin over 10, 50 and 100 % of the load",
        |facts, s| looped(facts, s, PublishedMargin::Phase, Recipe::phase_margin),
    ),
    figure("modulus_margin", Dimension::ONE, "the least of |1 + T| over the same loads", |facts, s| {
        looped(facts, s, PublishedMargin::Modulus, Recipe::modulus_margin)
    }),
    figure(
        "unity_gain_frequency",
        Dimension::FREQUENCY,
        "where the loop gain crosses one, at the load of the least phase margin",
        |facts, s| looped(facts, s, PublishedMargin::Crossover, Recipe::crossover),
    ),
    figure(
        "line_change",
        Dimension::VOLTAGE,
        "by how much the output moves over the range of the input, at the peak load",
        |facts, s| of(facts, s, |regulator| facts.line_change(regulator, Facts::whole_input)),
    ),
    figure(
        "line_hold_change",
        Dimension::VOLTAGE,
        "by how much the output moves while the input moves by a tenth, within its range",
        |facts, s| of(facts, s, |regulator| facts.line_change(regulator, Facts::tenth_of_input)),
    ),
    figure("operating_points", Dimension::ONE, "how many operating points the circuit has", |facts, s| {
        of(facts, s, |regulator| facts.operating_points(regulator))
    }),
    Definition {
        name: "starts",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "the output comes up on a ramp from zero, over all that is declared",
        defined_in: file!(),
        compute: |facts, s| of(facts, s, |regulator| facts.starts(regulator)),
    },
    Definition {
        name: "start_decided_by",
        of: SubjectKind::Regulator,
        kind: ValueKind::Word(Decides::NAMES),
        meaning: "what decides whether a built-up regulator starts",
        defined_in: file!(),
        compute: |facts, s| {
            of(facts, s, |regulator| match facts.start_of(regulator) {
                Ok(start) => Value::word(start.decides.name()),
                Err(why) => Value::inapplicable(why),
            })
        },
    },
    figure("dead_output", Dimension::VOLTAGE, "where the output stays that does not start", |facts, s| {
        of(facts, s, |regulator| facts.of_start(regulator, Dimension::VOLTAGE, "output", |start| start.dead))
    }),
    figure(
        "start_threshold",
        Dimension::VOLTAGE,
        "the voltage of the reference from which the output rises by itself",
        |facts, s| {
            of(facts, s, |regulator| {
                facts.of_start(regulator, Dimension::VOLTAGE, "start threshold", |start| start.threshold)
            })
        },
    ),
    figure("lifting_current", Dimension::CURRENT, "the current into the reference that starts it", |facts, s| {
        of(facts, s, |regulator| {
            facts.of_start(regulator, Dimension::CURRENT, "lifting current", |start| start.current)
        })
    }),
    Definition {
        name: "window_is_solved",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "the window of the ESR is that of the solved loop, not a data sheet's",
        defined_in: file!(),
        compute: |facts, s| of(facts, s, |regulator| Value::flag(facts.own_circuit(regulator).is_some())),
    },
    Definition {
        name: "esr_window_kind",
        of: SubjectKind::Regulator,
        kind: ValueKind::Word(WindowKind::NAMES),
        meaning: "what the solved window of the bulk capacitor's ESR looks like",
        defined_in: file!(),
        compute: |facts, s| {
            of(facts, s, |regulator| match facts.solved_window(regulator) {
                Ok(window) => Value::word(window.kind.name()),
                Err(why) => Value::inapplicable(why),
            })
        },
    },
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

/// A figure of the loop: of one that is published for the part, else of the solved one.
fn looped(
    facts: &Facts<'_>,
    subject: Subject,
    margin: PublishedMargin,
    solve: fn(&Recipe) -> Result<Option<Quantity>, SolveError>,
) -> Value {
    let (noun, dimension) = match margin {
        PublishedMargin::Phase => ("phase margin", Dimension::ANGLE),
        PublishedMargin::Modulus => ("modulus margin", Dimension::ONE),
        PublishedMargin::Crossover => ("unity-gain frequency", Dimension::FREQUENCY),
    };
    of(facts, subject, |regulator| {
        facts.published_margin(regulator, margin).unwrap_or_else(|| {
            facts.solved_figure(
                regulator,
                noun,
                dimension,
                |recipe| {
                    if recipe.has_loop() { solve(recipe) } else { Ok(None) }
                },
            )
        })
    })
}
