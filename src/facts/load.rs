//! What is drawn from an output.

use super::family_figure::Ask;
use super::flow::Drawn;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::Regulator;

/// The part of its rating that an undeclared load is taken to draw: between a tenth and the whole it hardly matters,
/// and nothing at all would hide real findings.
const USUAL_SHARE: f64 = 0.5;
/// Rated current of a part that no family knows (amperes): only the shape of a guess.
const UNKNOWN_RATING: f64 = 0.1;

pub(super) const DEFINITIONS: &[Definition] = &[
    amperes("load", "the current drawn from the output, idle to peak; its nominal is the peak", |facts, subject| {
        of(facts, subject, |regulator| Value::Figure(facts.load(regulator)))
    }),
    Definition {
        name: "load_is_declared",
        of: SubjectKind::Regulator,
        kind: ValueKind::Flag,
        meaning: "a load is declared for the output net or one behind it",
        defined_in: file!(),
        compute: |facts, subject| {
            of(facts, subject, |regulator| {
                let declared =
                    regulator.output_net.and_then(|net| facts.declared_draw(net, regulator.input_net, Drawn::Peak));
                Value::flag(declared.is_some())
            })
        },
    },
    amperes("rated_current", "the current that the part is rated for", |facts, subject| {
        of(facts, subject, |regulator| match facts.rated_current(regulator) {
            Some(rated) => Value::Figure(rated),
            None => Value::inapplicable("no rating is known"),
        })
    }),
];

const fn amperes(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    let kind = ValueKind::Figure(Dimension::CURRENT);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

impl Facts<'_> {
    fn rated_current(&self, regulator: &Regulator) -> Option<Quantity> {
        let limits = Pair::NOT_NEGATIVE;
        let ask = Ask { key: "rated_current", noun: "rated current", dimension: Dimension::CURRENT, limits };
        self.family_figure(regulator, ask)
    }

    /// The load: what is declared for the output net and for the nets behind series elements, with what regulators
    /// there draw; else a guess from nothing to the part's rating.
    pub(super) fn load(&self, regulator: &Regulator) -> Quantity {
        let declared = regulator.output_net.and_then(|net| self.declared_draw(net, regulator.input_net, Drawn::Peak));
        declared.unwrap_or_else(|| self.guessed_load(regulator))
    }

    fn guessed_load(&self, regulator: &Regulator) -> Quantity {
        let rated = self.rated_current(regulator).and_then(|rated| rated.shown()).map(Range::high);
        let name = self.output_name(regulator).unwrap_or_default();
        let settle = Settle::new(Table::Load, &name, "current", "2 .. 180 mA");
        let (rating, source) = match rated {
            Some(rating) => (rating, "no load declared: from nothing to the part's rating"),
            None => (UNKNOWN_RATING, "no load declared and no rating known"),
        };
        let evidence = Evidence::new(Grade::Assumed, format!("load on {name}"), source).settled_by(settle);
        let range = Range::clamped(0.0, rating * USUAL_SHARE, rating);
        Quantity::given(Dimension::CURRENT, range, Pair::NOT_NEGATIVE, evidence)
    }

    /// What is declared to be drawn from a net itself, as a fact whose nominal is the peak.
    pub(super) fn declared_load(&self, net: &str) -> Option<Quantity> {
        let current = self.board().load(net)?.current.as_ref()?;
        let value = current.value;
        let range = Range::clamped(value.low(), value.high(), value.high());
        Some(Quantity::fact(Dimension::CURRENT, range, current.evidence(format!("load on {net}"))))
    }
}
