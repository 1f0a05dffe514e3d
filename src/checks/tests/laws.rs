//! The laws of the verdicts, on made-up requirements over made-up figures.
//!
//! Every name stands once in a requirement: where one ranged fact stands twice, its verdict is capped on purpose.
//! Divisors stay clear of zero: of a quotient whose divisor can be zero nothing is claimed.

use std::collections::BTreeMap;

use proptest::prelude::*;

use super::fake::{Board, regulator};
use crate::checks::Verdict;
use crate::checks::language::{Answer, Condition, Context, Figure, Path, Relation};
use crate::facts::Value;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range};

const ONE: Dimension = Dimension::ONE;

/// A made-up figure.
#[derive(Debug, Clone, Copy)]
struct Leaf {
    low: f64,
    nominal: f64,
    high: f64,
    /// How far the limits lie beyond the range.
    beyond: [f64; 2],
    state: State,
}

#[derive(Debug, Clone, Copy, PartialEq)]
enum State {
    Fact,
    Guess,
    Missing,
}

impl Leaf {
    fn value(self, index: usize) -> Value {
        let limits = Pair::new(self.low - self.beyond[0], self.high + self.beyond[1]);
        let grade = if self.state == State::Fact { Grade::Declared } else { Grade::Assumed };
        let evidence = Evidence::new(grade, format!("x{index}"), "test");
        if self.state == State::Missing {
            return Value::Figure(Quantity::missing(ONE, limits, evidence));
        }
        let range = Range::new(self.low, self.nominal, self.high).unwrap();
        Value::Figure(Quantity::given(ONE, range, limits, evidence))
    }

    /// The range moved closer to the nominal; `share` 1 leaves it as it is.
    fn narrowed(self, share: f64) -> Self {
        let toward = |end: f64| self.nominal + (end - self.nominal) * share;
        let (low, high) = (toward(self.low), toward(self.high));
        // What is possible stays.
        let beyond = [self.beyond[0] + (low - self.low), self.beyond[1] + (self.high - high)];
        Self { low, high, beyond, ..self }
    }
}

/// The shape of a figure, whose names are numbered as they come.
#[derive(Debug, Clone)]
enum Shape {
    Leaf(Leaf),
    Constant(f64),
    Negated(Box<Shape>),
    Magnitude(Box<Shape>),
    Two(u8, Box<Shape>, Box<Shape>),
    /// Divided by a figure that is above zero.
    Over(Box<Shape>, Leaf),
}

/// The shape of a condition.
#[derive(Debug, Clone)]
enum Logic {
    Compare(bool, Shape, Shape),
    Join(bool, Box<Logic>, Box<Logic>),
}

fn leaf(lowest: f64) -> impl Strategy<Value = Leaf> {
    let state = prop_oneof![3 => Just(State::Fact), 3 => Just(State::Guess), 1 => Just(State::Missing)];
    let beyond = prop_oneof![Just(0.0), 0.0..4.0, Just(f64::INFINITY)];
    let span = (lowest..6.0, prop_oneof![Just(0.0), 0.0..4.0], 0.0..1.0);
    (span, beyond.clone(), beyond, state).prop_map(move |((low, width, share), below, above, state)| {
        // A divisor's limits stay above zero too.
        let below = if lowest > 0.0 { 0.0 } else { below };
        Leaf { low, nominal: low + width * share, high: low + width, beyond: [below, above], state }
    })
}

fn shape() -> impl Strategy<Value = Shape> {
    let base = prop_oneof![4 => leaf(-6.0).prop_map(Shape::Leaf), 1 => (-4.0..4.0).prop_map(Shape::Constant)];
    base.prop_recursive(3, 8, 2, |inner| {
        prop_oneof![
            inner.clone().prop_map(|one| Shape::Negated(Box::new(one))),
            inner.clone().prop_map(|one| Shape::Magnitude(Box::new(one))),
            (0..5u8, inner.clone(), inner.clone()).prop_map(|(kind, one, other)| Shape::Two(
                kind,
                Box::new(one),
                Box::new(other)
            )),
            (inner, leaf(0.1)).prop_map(|(one, below)| Shape::Over(Box::new(one), below)),
        ]
    })
}

/// Sums and differences, with a name in each: a guess of anything stays one of anything.
fn linear() -> impl Strategy<Value = Shape> {
    leaf(-6.0).prop_map(Shape::Leaf).prop_recursive(3, 8, 2, |inner| {
        prop_oneof![
            inner.clone().prop_map(|one| Shape::Negated(Box::new(one))),
            (0..2u8, inner.clone(), inner).prop_map(|(kind, one, other)| Shape::Two(
                kind,
                Box::new(one),
                Box::new(other)
            )),
        ]
    })
}

fn logic() -> impl Strategy<Value = Logic> {
    let base = (any::<bool>(), shape(), shape()).prop_map(|(strict, one, other)| Logic::Compare(strict, one, other));
    base.prop_recursive(2, 4, 2, |inner| {
        (any::<bool>(), inner.clone(), inner)
            .prop_map(|(all, one, other)| Logic::Join(all, Box::new(one), Box::new(other)))
    })
}

/// Numbers the leaves and builds the requirement.
fn build(logic: &Logic, leaves: &mut Vec<Leaf>) -> Condition {
    match logic {
        Logic::Compare(strict, one, other) => {
            let relation = if *strict { Relation::Above } else { Relation::AtLeast };
            Condition::Compare(relation, figure(one, leaves), figure(other, leaves))
        }
        Logic::Join(all, one, other) => {
            let sides = vec![build(one, leaves), build(other, leaves)];
            if *all { Condition::All(sides) } else { Condition::Any(sides) }
        }
    }
}

fn name(leaf: Leaf, leaves: &mut Vec<Leaf>) -> Figure {
    leaves.push(leaf);
    Figure::Name(Path::Subject(format!("x{}", leaves.len() - 1)))
}

fn figure(shape: &Shape, leaves: &mut Vec<Leaf>) -> Figure {
    let boxed = |shape: &Shape, leaves: &mut Vec<Leaf>| Box::new(figure(shape, leaves));
    match shape {
        Shape::Leaf(leaf) => name(*leaf, leaves),
        Shape::Constant(value) => Figure::Constant(*value, ONE),
        Shape::Negated(one) => Figure::Negated(boxed(one, leaves)),
        Shape::Magnitude(one) => Figure::Magnitude(boxed(one, leaves)),
        Shape::Over(one, below) => Figure::Quotient(boxed(one, leaves), Box::new(name(*below, leaves))),
        Shape::Two(kind, one, other) => {
            let (one, other) = (boxed(one, leaves), boxed(other, leaves));
            match kind {
                0 => Figure::Sum(one, other),
                1 => Figure::Difference(one, other),
                2 => Figure::Product(one, other),
                3 => Figure::Least(vec![*one, *other]),
                _ => Figure::Greatest(vec![*one, *other]),
            }
        }
    }
}

fn verdict(condition: &Condition, leaves: &[Leaf]) -> Verdict {
    let board = leaves
        .iter()
        .enumerate()
        .fold(Board::default(), |board, (index, leaf)| board.u1(&format!("x{index}"), leaf.value(index)));
    let settings = BTreeMap::new();
    let context = Context { figures: &board, settings: &settings, subject: regulator(0), member: None };
    match condition.evaluate(context) {
        Answer::Judged(judged) => judged.verdict,
        Answer::NotAsked => panic!("every figure applies"),
    }
}

/// Every leaf in turn, changed; those that the change does not concern are left out.
fn changes(leaves: &[Leaf], change: impl Fn(Leaf) -> Option<Leaf>) -> Vec<Vec<Leaf>> {
    let changed = |index: usize, leaf: &Leaf| {
        let mut all = leaves.to_vec();
        all[index] = change(*leaf)?;
        Some(all)
    };
    leaves.iter().enumerate().filter_map(|(index, leaf)| changed(index, leaf)).collect()
}

fn changed(leaf: Leaf, was: State, becomes: State) -> Option<Leaf> {
    (leaf.state == was).then_some(Leaf { state: becomes, ..leaf })
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 512, ..ProptestConfig::default() })]

    #[test]
    fn guesses_alone_never_fail(one in linear(), other in linear(), strict in any::<bool>()) {
        let mut leaves = Vec::new();
        let condition = build(&Logic::Compare(strict, one, other), &mut leaves);
        for leaf in &mut leaves {
            leaf.beyond = [f64::INFINITY, f64::INFINITY];
            leaf.state = if leaf.state == State::Fact { State::Guess } else { leaf.state };
        }
        prop_assert_ne!(verdict(&condition, &leaves), Verdict::Fails);
    }

    #[test]
    fn what_fails_is_broken_for_each_value_of_the_guesses_and_what_holds_for_none(
        logic in logic(), at in proptest::collection::vec(0.0..1.0f64, 40),
    ) {
        let mut leaves = Vec::new();
        let condition = build(&logic, &mut leaves);
        for leaf in &mut leaves {
            // One value for each fact: a range of facts fails already where it breaks at one end.
            if leaf.state == State::Fact {
                *leaf = leaf.narrowed(0.0);
            }
        }
        let said = verdict(&condition, &leaves);
        let picked = |within: bool| -> Vec<Leaf> {
            let pick = |(leaf, share): (&Leaf, &f64)| {
                let beyond = leaf.beyond.map(|beyond| if within { 0.0 } else { beyond.min(50.0) });
                let (low, high) = (leaf.low - beyond[0], leaf.high + beyond[1]);
                let value = if leaf.state == State::Fact { leaf.nominal } else { low + (high - low) * share };
                Leaf { low: value, nominal: value, high: value, beyond: [0.0, 0.0], state: State::Fact }
            };
            leaves.iter().zip(&at).map(pick).collect()
        };
        if said == Verdict::Fails {
            prop_assert_eq!(verdict(&condition, &picked(false)), Verdict::Fails);
        }
        if said == Verdict::Holds {
            prop_assert_eq!(verdict(&condition, &picked(true)), Verdict::Holds);
        }
    }

    #[test]
    fn turning_a_fact_into_a_guess_never_worsens(logic in logic()) {
        let mut leaves = Vec::new();
        let condition = build(&logic, &mut leaves);
        let before = verdict(&condition, &leaves);
        for after in changes(&leaves, |leaf| changed(leaf, State::Fact, State::Guess)) {
            prop_assert!(verdict(&condition, &after) >= before);
        }
    }

    #[test]
    fn narrowing_a_guess_around_its_nominal_never_worsens(logic in logic(), share in 0.0..1.0f64) {
        let mut leaves = Vec::new();
        let condition = build(&logic, &mut leaves);
        let before = verdict(&condition, &leaves);
        for after in changes(&leaves, |leaf| (leaf.state == State::Guess).then(|| leaf.narrowed(share))) {
            prop_assert!(verdict(&condition, &after) >= before);
        }
    }

    #[test]
    fn widening_a_fact_never_improves(logic in logic(), share in 0.0..1.0f64) {
        let mut leaves = Vec::new();
        let condition = build(&logic, &mut leaves);
        let after = verdict(&condition, &leaves);
        for before in changes(&leaves, |leaf| (leaf.state == State::Fact).then(|| leaf.narrowed(share))) {
            prop_assert!(verdict(&condition, &before) >= after);
        }
    }

    #[test]
    fn what_breaks_kindly_breaks_likely_and_at_worst(one in shape(), other in shape()) {
        let mut leaves = Vec::new();
        let sides = [figure(&one, &mut leaves), figure(&other, &mut leaves)];
        let [a, b] = sides.map(|side| quantity(&side, &leaves));
        let breaks = |pick: fn(&Quantity) -> Pair| pick(&a).low() < pick(&b).high();
        prop_assert!(!breaks(Quantity::kind) || breaks(Quantity::likely));
        prop_assert!(!breaks(Quantity::likely) || breaks(Quantity::worst));
        for side in [&a, &b] {
            let (worst, likely, kind) = (side.worst(), side.likely(), side.kind());
            let slip = 1e-9 * (1.0 + worst.low().abs().max(worst.high().abs()).min(1e12));
            prop_assert!(worst.low() <= likely.low() + slip && likely.high() <= worst.high() + slip);
            prop_assert!(likely.low() <= kind.low() + slip && kind.high() <= likely.high() + slip);
        }
    }
}

fn quantity(figure: &Figure, leaves: &[Leaf]) -> Quantity {
    let two = |one: &Figure, other: &Figure, join: fn(&Quantity, &Quantity) -> Quantity| {
        join(&quantity(one, leaves), &quantity(other, leaves))
    };
    match figure {
        Figure::Constant(value, dimension) => Quantity::constant(*dimension, *value),
        Figure::Name(path) => {
            let index: usize = path.written()[1..].parse().unwrap();
            leaves[index].value(index).figure().unwrap().clone()
        }
        Figure::Negated(one) => quantity(one, leaves).negated(),
        Figure::Magnitude(one) => quantity(one, leaves).magnitude(),
        Figure::Sum(one, other) => two(one, other, Quantity::plus),
        Figure::Difference(one, other) => two(one, other, Quantity::minus),
        Figure::Product(one, other) => two(one, other, Quantity::times),
        Figure::Quotient(one, other) => quantity(one, leaves).times(&quantity(other, leaves).reciprocal()),
        Figure::Least(all) => two(&all[0], &all[1], Quantity::least),
        Figure::Greatest(all) => two(&all[0], &all[1], Quantity::greatest),
    }
}
