//! Evaluates conditions over ranges, three times at once.
//!
//! A comparison gives a verdict of its own (see [`Verdict`]); `and` takes the worse of two, `or` the better, which is
//! the same as evaluating kindly, likely and at worst side by side with three-valued logic, since what breaks kindly
//! also breaks likely, and what breaks likely also breaks at worst.
//!
//! What does not apply (the ESR of no capacitor) is left out: of `and` in a requirement the other sides are still
//! asked; `or` is not asked where what is left breaks; a condition that says *when* must apply as a whole.

use std::collections::BTreeMap;

use super::names::Figures;
use super::typed::{Condition, Figure, Path, Relation, Requirement};
use crate::checks::verdict::Verdict;
use crate::facts::{Subject, Value};
use crate::quantity::{Dimension, Evidence, Quantity, Settle};

/// Two figures whose distance is below this part of the larger one are equal: what is left of rounding in decimal
/// values, far below what any part is made to.
const TOLERANCE: f64 = 1e-9;

/// What an expression is evaluated for.
#[derive(Clone, Copy)]
pub struct Context<'a> {
    /// The values of the names.
    pub figures: &'a dyn Figures,
    /// The settings of the check.
    pub settings: &'a BTreeMap<String, Quantity>,
    /// The subject.
    pub subject: Subject,
    /// The one of a group that a loop is at.
    pub member: Option<Subject>,
}

impl std::fmt::Debug for Context<'_> {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(formatter, "Context({:?}, {:?})", self.subject, self.member)
    }
}

/// What a condition comes to.
#[derive(Debug, Clone, PartialEq)]
pub enum Answer {
    /// It does not apply.
    NotAsked,
    /// It applies.
    Judged(Judged),
}

/// A verdict with what decided it.
#[derive(Debug, Clone, PartialEq)]
pub struct Judged {
    /// The verdict.
    pub verdict: Verdict,
    /// The comparison that decided.
    pub decision: Decision,
}

/// The comparison that decided.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Decision {
    /// How far from the edge, at worst, in SI units; negative where it breaks. `None` where unbounded or no figure.
    pub slack: Option<(f64, Dimension)>,
    /// The figures that it used, in order of appearance.
    pub figures: Vec<(String, Quantity)>,
    /// What would settle it, the most decisive first.
    pub settle: Vec<Settle>,
    /// What is missing, in a stable order.
    pub missing: Vec<Evidence>,
    /// Whether words or flags that it used are guesses.
    pub guessed: bool,
    /// The one of a group that it is about.
    pub member: Option<Subject>,
}

impl Requirement {
    /// Evaluates the requirement; over a group, the verdict is that of the worst member.
    #[must_use]
    pub fn evaluate(&self, context: Context<'_>) -> Answer {
        let Some(each) = &self.each else { return self.condition.evaluate(context) };
        let Value::Group(mut members) = context.figures.value(context.subject, &each.group) else {
            return Answer::NotAsked;
        };
        members.sort_by_cached_key(|member| context.figures.likeness(*member));
        let answers = members.into_iter().map(|member| {
            let mut answer = self.condition.evaluate(Context { member: Some(member), ..context });
            if let Answer::Judged(judged) = &mut answer {
                judged.decision.member = Some(member);
            }
            answer
        });
        choose(answers.filter_map(judged), true)
    }
}

impl Condition {
    /// Evaluates a condition that must hold.
    #[must_use]
    pub fn evaluate(&self, context: Context<'_>) -> Answer {
        Walk { context, guard: false }.condition(self)
    }

    /// Evaluates a condition that says when something is asked: it must apply as a whole.
    #[must_use]
    pub fn guards(&self, context: Context<'_>) -> Answer {
        Walk { context, guard: true }.condition(self)
    }
}

fn judged(answer: Answer) -> Option<Judged> {
    if let Answer::Judged(judged) = answer { Some(judged) } else { None }
}

/// The worst of several, or the best; among equals the first, or the one with the least slack where units agree.
fn choose(answers: impl Iterator<Item = Judged>, worst: bool) -> Answer {
    let mut guessed = false;
    let mut guess_settle: Vec<Settle> = Vec::new();
    let mut chosen: Option<Judged> = None;
    for one in answers {
        guessed |= one.decision.guessed;
        if one.decision.guessed && one.verdict == Verdict::Holds {
            guess_settle.extend(one.decision.settle.iter().cloned());
        }
        let better = chosen.as_ref().is_none_or(|known| {
            let order =
                one.verdict.cmp(&known.verdict).then_with(|| match (one.decision.slack, known.decision.slack) {
                    (Some((a, unit)), Some((b, other))) if unit == other => a.total_cmp(&b),
                    _ => std::cmp::Ordering::Equal,
                });
            if worst { order.is_lt() } else { order.is_gt() }
        });
        if better {
            chosen = Some(one);
        }
    }
    let Some(mut chosen) = chosen else { return Answer::NotAsked };
    if worst {
        chosen.decision.guessed |= guessed;
        guess_settle.retain(|settle| !chosen.decision.settle.contains(settle));
        chosen.decision.settle.extend(guess_settle);
    }
    Answer::Judged(chosen)
}

#[derive(Clone, Copy)]
struct Walk<'a> {
    context: Context<'a>,
    guard: bool,
}

impl Walk<'_> {
    fn condition(self, condition: &Condition) -> Answer {
        match condition {
            Condition::Compare(relation, left, right) => self.compare(*relation, left, right),
            Condition::Word(path, words, wanted) => match self.value(path) {
                Value::Word(word) => crisp(words.contains(&word.word) == *wanted, word.evidence.as_ref()),
                _ => Answer::NotAsked,
            },
            Condition::Flag(path, wanted) => match self.value(path) {
                Value::Flag(flag) => crisp(flag.holds == *wanted, flag.evidence.as_ref()),
                _ => Answer::NotAsked,
            },
            Condition::Known(path, wanted) => self.known(path, *wanted),
            Condition::All(sides) => {
                let answers: Vec<Answer> = sides.iter().map(|side| self.condition(side)).collect();
                if self.guard && answers.contains(&Answer::NotAsked) {
                    return Answer::NotAsked;
                }
                choose(answers.into_iter().filter_map(judged), true)
            }
            Condition::Any(sides) => self.any(sides),
        }
    }

    fn any(self, sides: &[Condition]) -> Answer {
        let answers: Vec<Answer> = sides.iter().map(|side| self.condition(side)).collect();
        let partly = answers.contains(&Answer::NotAsked);
        let sides: Vec<Judged> = answers.into_iter().filter_map(judged).collect();
        let shared = shares_a_fact(&sides);
        let mut answer = choose(sides.into_iter(), false);
        if let Answer::Judged(best) = &mut answer {
            if partly && best.verdict != Verdict::Holds && !self.guard {
                return Answer::NotAsked;
            }
            // Where one fact stands on two sides, each may break at another end of it and never both at once.
            if shared {
                best.verdict = best.verdict.at_most(Verdict::Doubtful);
            }
        }
        answer
    }

    fn known(self, path: &Path, wanted: bool) -> Answer {
        let missing: Vec<Evidence> = match self.value(path) {
            Value::Inapplicable(_) => return Answer::NotAsked,
            Value::Figure(figure) if figure.is_missing() => figure.missing_evidence().cloned().collect(),
            _ => Vec::new(),
        };
        if missing.is_empty() || !wanted {
            return crisp(missing.is_empty() == wanted, None);
        }
        let verdict = if self.guard { Verdict::Fails } else { Verdict::Unknown };
        let settle = missing.iter().filter_map(|evidence| evidence.settle.clone()).collect();
        Answer::Judged(Judged { verdict, decision: Decision { missing, settle, ..Decision::default() } })
    }

    fn compare(self, relation: Relation, left: &Figure, right: &Figure) -> Answer {
        let mut sums = Sums { walk: self, used: Vec::new(), shared: false };
        let (Some(a), Some(b)) = (sums.figure(left), sums.figure(right)) else { return Answer::NotAsked };
        let facts_shared = sums.shared || a.shares_a_ranged_fact(&b);
        let kind = !facts_shared && breaks(relation, a.kind().low(), b.kind().high());
        let worst = breaks(relation, a.worst().low(), b.worst().high());
        let verdict = if kind {
            Verdict::Fails
        } else if a.is_missing() || b.is_missing() {
            if worst { Verdict::Unknown } else { Verdict::Holds }
        } else if breaks(relation, a.likely().low(), b.likely().high()) {
            Verdict::Doubtful
        } else if worst {
            Verdict::Tight
        } else {
            Verdict::Holds
        };
        Answer::Judged(Judged { verdict, decision: decision(verdict, &a, &b, sums.used) })
    }

    fn value(self, path: &Path) -> Value {
        let inapplicable = || Value::inapplicable("no such figure");
        match path {
            Path::Subject(name) => self.context.figures.value(self.context.subject, name),
            Path::Member(_, name) => {
                self.context.member.map_or_else(inapplicable, |member| self.context.figures.value(member, name))
            }
            Path::Setting(name) => self.context.settings.get(name).cloned().map_or_else(inapplicable, Value::Figure),
        }
    }
}

/// The value of a path in a context.
pub(in crate::checks) fn value(context: Context<'_>, path: &Path) -> Value {
    Walk { context, guard: false }.value(path)
}

/// Whether a fact with a range stands behind figures of two of the sides.
fn shares_a_fact(sides: &[Judged]) -> bool {
    let figures =
        |judged: &Judged| judged.decision.figures.iter().map(|(_, figure)| figure.clone()).collect::<Vec<_>>();
    let sides: Vec<Vec<Quantity>> = sides.iter().map(figures).collect();
    sides.iter().enumerate().any(|(index, one)| {
        let others = sides.iter().skip(index + 1).flatten();
        others.into_iter().any(|other| one.iter().any(|figure| figure.shares_a_ranged_fact(other)))
    })
}

/// A condition on words and flags: a guess may speak against it and cannot fail it.
fn crisp(holds: bool, evidence: Option<&Evidence>) -> Answer {
    let guess = evidence.filter(|evidence| !evidence.grade.is_fact());
    let verdict = match (holds, guess) {
        (true, _) => Verdict::Holds,
        (false, None) => Verdict::Fails,
        (false, Some(_)) => Verdict::Doubtful,
    };
    let settle = guess.and_then(|evidence| evidence.settle.clone()).into_iter().collect();
    Answer::Judged(Judged { verdict, decision: Decision { settle, guessed: guess.is_some(), ..Decision::default() } })
}

fn decision(verdict: Verdict, a: &Quantity, b: &Quantity, figures: Vec<(String, Quantity)>) -> Decision {
    let slack = a.worst().low() - b.worst().high();
    let difference = a.minus(b);
    let missing: Vec<Evidence> = match verdict {
        Verdict::Unknown => difference.missing_evidence().cloned().collect(),
        _ => Vec::new(),
    };
    let mut settle: Vec<Settle> = missing.iter().filter_map(|evidence| evidence.settle.clone()).collect();
    if matches!(verdict, Verdict::Doubtful | Verdict::Tight) {
        let mut guesses: Vec<_> = difference.guesses().collect();
        guesses.sort_by(|one, other| other.moves.total_cmp(&one.moves));
        // A guess of one value moves nothing; what is doubtful may hang on it all the same.
        let moving = guesses.iter().any(|guess| guess.moves > 0.0) || verdict == Verdict::Tight;
        guesses.retain(|guess| guess.moves > 0.0 || !moving);
        settle.extend(guesses.into_iter().filter_map(|guess| guess.evidence.settle.clone()));
    }
    let mut seen = std::collections::BTreeSet::new();
    settle.retain(|one| seen.insert(one.clone()));
    Decision {
        slack: slack.is_finite().then_some((slack, a.dimension())),
        figures,
        settle,
        missing,
        ..Decision::default()
    }
}

/// Whether `low >= high` (or `low > high`) breaks. Two equal infinities decide nothing.
fn breaks(relation: Relation, low: f64, high: f64) -> bool {
    if !low.is_finite() || !high.is_finite() {
        return low < high;
    }
    let tolerance = TOLERANCE * low.abs().max(high.abs());
    match relation {
        Relation::AtLeast => low < high - tolerance,
        Relation::Above => low <= high + tolerance,
    }
}

/// Computes figures, keeping those that were used and whether one fact entered twice.
struct Sums<'a> {
    walk: Walk<'a>,
    used: Vec<(String, Quantity)>,
    shared: bool,
}

impl Sums<'_> {
    /// The figure; `None` where one in it does not apply.
    fn figure(&mut self, figure: &Figure) -> Option<Quantity> {
        Some(match figure {
            Figure::Constant(value, dimension) => Quantity::constant(*dimension, *value),
            Figure::Name(path) => {
                let Value::Figure(found) = self.walk.value(path) else { return None };
                let name = path.written();
                if !matches!(path, Path::Setting(_)) && self.used.iter().all(|(known, _)| *known != name) {
                    self.used.push((name, found.clone()));
                }
                found
            }
            Figure::Negated(inner) => self.figure(inner)?.negated(),
            Figure::Magnitude(inner) => self.figure(inner)?.magnitude(),
            Figure::Sum(one, other) => self.pair(one, other, Quantity::plus)?,
            Figure::Difference(one, other) => self.pair(one, other, Quantity::minus)?,
            Figure::Product(one, other) => self.pair(one, other, Quantity::times)?,
            Figure::Quotient(one, other) => self.pair(one, other, |one, other| one.times(&other.reciprocal()))?,
            Figure::Least(all) => self.fold(all, Quantity::least)?,
            Figure::Greatest(all) => self.fold(all, Quantity::greatest)?,
        })
    }

    fn pair(
        &mut self,
        one: &Figure,
        other: &Figure,
        join: impl Fn(&Quantity, &Quantity) -> Quantity,
    ) -> Option<Quantity> {
        let (one, other) = (self.figure(one)?, self.figure(other)?);
        self.shared |= one.shares_a_ranged_fact(&other);
        Some(join(&one, &other))
    }

    fn fold(&mut self, all: &[Figure], join: impl Fn(&Quantity, &Quantity) -> Quantity) -> Option<Quantity> {
        let mut result: Option<Quantity> = None;
        for figure in all {
            let figure = self.figure(figure)?;
            result = Some(match result {
                None => figure,
                Some(known) => {
                    self.shared |= known.shares_a_ranged_fact(&figure);
                    join(&known, &figure)
                }
            });
        }
        result
    }
}
