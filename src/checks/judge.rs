//! Asks every check of every subject that it is about.

use std::cmp::Ordering;
use std::collections::HashMap;

use super::check::{Check, Rule};
use super::finding::{Counts, Finding, Judgement, Outcome, Point};
use super::language::{Answer, Condition, Context, Decision, Figures, Judged, Path, value};
use super::merge::merge;
use super::set::Checks;
use super::template::Template;
use super::verdict::{Level, Verdict};
use super::wording::{Filling, missing};
use crate::facts::{Subject, Value};
use crate::quantity::Quantity;

/// Asks every check of every subject that it is about; one finding tells all that the same missing figures leave
/// unknown.
#[must_use]
pub fn judge(checks: &Checks, subjects: &[Subject], figures: &dyn Figures) -> Judgement {
    let judgement = judge_apart(checks, subjects, figures);
    Judgement { findings: merge(judgement.findings, figures), ..judgement }
}

/// Asks every check of every subject that it is about; each requirement has a finding of its own.
#[must_use]
pub fn judge_apart(checks: &Checks, subjects: &[Subject], figures: &dyn Figures) -> Judgement {
    let mut subjects: Vec<(String, Subject)> =
        subjects.iter().map(|subject| (figures.label(*subject), *subject)).collect();
    subjects.sort_by(|one, other| natural(&one.0, &other.0).then_with(|| one.1.cmp(&other.1)));
    let mut judged: Vec<(Outcome, Option<Finding>)> = Vec::new();
    for check in checks.iter() {
        for (_, subject) in subjects.iter().filter(|(_, subject)| subject.kind() == check.about) {
            judged.extend(ask(check, *subject, figures));
        }
    }
    suppress(checks, &mut judged);
    let (mut outcomes, mut findings, mut suppressed) = (Vec::new(), Vec::new(), Vec::new());
    for (outcome, finding) in judged {
        let told = if outcome.suppressed_by.is_none() { &mut findings } else { &mut suppressed };
        told.extend(finding);
        outcomes.push(outcome);
    }
    // Stable: within a level the order of checks, then of subjects, stays; but what is unknown of a regulator tells what
    // is unknown of its capacitors for the same reason.
    let told_along = |finding: &Finding| {
        finding.verdict == Verdict::Unknown && matches!(finding.subject, Subject::Capacitor { .. })
    };
    findings.sort_by_key(|finding: &Finding| (finding.level, told_along(finding)));
    Judgement { findings, suppressed, counts: Counts::of(&outcomes), outcomes }
}

/// Asks one check of one subject; `None` where it does not apply.
#[must_use]
pub fn ask(check: &Check, subject: Subject, figures: &dyn Figures) -> Option<(Outcome, Option<Finding>)> {
    let context = Context { figures, settings: &check.settings, subject, member: None };
    let gate = Gate::of(check.when.as_ref(), context)?;
    let mut worst: Option<(usize, &Rule, Judged)> = None;
    for (index, rule) in check.requires.iter().enumerate() {
        let Some(inner) = Gate::of(rule.when.as_ref(), context) else { continue };
        let Answer::Judged(judged) = rule.holds.evaluate(context) else { continue };
        let mut judged = inner.pass(gate.pass(judged));
        for cap in [rule.at_most, check.at_most].into_iter().flatten() {
            judged.verdict = judged.verdict.at_most(cap);
        }
        if worst.as_ref().is_none_or(|(_, _, known)| judged.verdict < known.verdict) {
            worst = Some((index, rule, judged));
        }
    }
    let (index, rule, judged) = worst?;
    let outcome = Outcome { check: check.name.clone(), subject, verdict: judged.verdict, suppressed_by: None };
    Some((outcome, say(check, index, rule, judged, context)))
}

/// Whether something is asked, and how surely.
#[derive(Debug)]
pub(super) struct Gate {
    verdict: Verdict,
    decision: Decision,
}

impl Gate {
    /// `None` where it is not asked: the condition does not apply, or speaks against it with guesses at nominal.
    pub(super) fn of(when: Option<&Condition>, context: Context<'_>) -> Option<Self> {
        let Some(when) = when else {
            return Some(Self { verdict: Verdict::Holds, decision: Decision::default() });
        };
        match when.guards(context) {
            Answer::Judged(Judged { verdict: Verdict::Fails | Verdict::Doubtful, .. }) | Answer::NotAsked => None,
            Answer::Judged(Judged { verdict, decision }) => Some(Self { verdict, decision }),
        }
    }

    /// What a requirement comes to behind the gate: where a guess opened it, it cannot fail; where it is unknown
    /// whether it is open, what breaks is unknown.
    pub(super) fn pass(&self, mut judged: Judged) -> Judged {
        let guessed = self.decision.guessed || self.verdict == Verdict::Tight;
        if judged.verdict == Verdict::Holds || (!guessed && self.verdict != Verdict::Unknown) {
            return judged;
        }
        if self.verdict == Verdict::Unknown {
            judged.verdict = Verdict::Unknown;
            judged.decision.missing.extend(self.decision.missing.iter().cloned());
        } else {
            judged.verdict = judged.verdict.at_most(Verdict::Doubtful);
        }
        for settle in &self.decision.settle {
            if !judged.decision.settle.contains(settle) {
                judged.decision.settle.push(settle.clone());
            }
        }
        judged
    }
}

fn say(check: &Check, index: usize, rule: &Rule, judged: Judged, context: Context<'_>) -> Option<Finding> {
    let Judged { verdict, decision } = judged;
    let level = verdict.level()?;
    let context = Context { member: decision.member, ..context };
    let filling = Filling { context, verdict, decision: &decision };
    let template = rule.says.sentence(verdict).or_else(|| check.says.sentence(verdict));
    let message = template.map_or_else(
        || {
            format!(
                "{} of {} cannot be judged: {}",
                check.name,
                context.figures.label(context.subject),
                missing(&decision)
            )
        },
        |template| template.fill(filling).text,
    );
    let hints = if rule.hints.is_empty() { &check.hints } else { &rule.hints };
    // What to change is known only where something breaks; what is unknown is to be declared first.
    let hints = hints.iter().filter(|_| verdict != Verdict::Unknown).map(|hint| hint.fill(filling));
    let mut lines: Vec<String> = Vec::new();
    for hint in hints.filter(|hint| hint.whole) {
        if !lines.contains(&hint.text) {
            lines.push(hint.text);
        }
    }
    let quantities = shown(check, template, &decision, context);
    Some(Finding {
        check: check.name.clone(),
        verdict,
        level,
        subject: context.subject,
        member: decision.member,
        requirement: index,
        message,
        hints: lines,
        slack: decision.slack,
        quantities,
        settle: decision.settle,
        missing: decision.missing.iter().map(|evidence| evidence.key.clone()).collect(),
        primary: point(&check.points.primary, context),
        also: check.points.also.iter().flat_map(|name| point(name, context)).collect(),
        merged: Vec::new(),
        suppresses: Vec::new(),
    })
}

/// The figures of a finding: those that the check lists, those that decided, and those that the message prints.
fn shown(
    check: &Check,
    template: Option<&Template>,
    decision: &Decision,
    context: Context<'_>,
) -> Vec<(String, Quantity)> {
    let mut quantities = listed(check, context);
    for (name, figure) in &decision.figures {
        if quantities.iter().all(|(known, _)| known != name) && is_news(figure, &quantities) {
            quantities.push((name.clone(), figure.clone()));
        }
    }
    for path in template.into_iter().flat_map(Template::figures) {
        let name = path.written();
        if let Value::Figure(figure) = value(context, path)
            && !matches!(path, Path::Setting(_))
            && quantities.iter().all(|(known, _)| *known != name)
            && is_news(&figure, &quantities)
        {
            quantities.push((name, figure));
        }
    }
    quantities
}

/// Whether a figure rests on other things than each of those listed: one that rests on just the same is only another
/// end or reading of it, and says nothing more.
fn is_news(figure: &Quantity, listed: &[(String, Quantity)]) -> bool {
    let keys = |quantity: &Quantity| quantity.evidence().map(|evidence| evidence.key.clone()).collect::<Vec<_>>();
    let own = keys(figure);
    own.is_empty() || listed.iter().all(|(_, other)| keys(other) != own)
}

/// The figures that the check lists whatever decides; those that do not apply or are missing are left out.
fn listed(check: &Check, context: Context<'_>) -> Vec<(String, Quantity)> {
    let figure = |name: &String| match context.figures.value(context.subject, name) {
        Value::Figure(figure) if !figure.is_missing() => Some((name.clone(), figure)),
        _ => None,
    };
    check.points.figures.iter().filter_map(figure).collect()
}

/// What a name of `[points]` stands for.
fn point(name: &str, context: Context<'_>) -> Vec<Point> {
    if name == "subject" {
        return vec![Point::Subject(context.subject)];
    }
    match context.figures.value(context.subject, name) {
        Value::Word(word) if !word.word.is_empty() => vec![Point::Named { role: name.to_owned(), name: word.word }],
        Value::Group(members) => members.into_iter().map(Point::Subject).collect(),
        Value::Inapplicable(_) => context.member.map(Point::Subject).into_iter().collect(),
        _ => Vec::new(),
    }
}

/// Marks what another finding about the same subject makes superfluous: a milder or equal verdict beside one that
/// fails or is doubtful.
fn suppress(checks: &Checks, judged: &mut [(Outcome, Option<Finding>)]) {
    // Where the outcomes of a subject stand; only looked up.
    let mut places: HashMap<Subject, Vec<(usize, Verdict)>> = HashMap::new();
    for (at, (outcome, _)) in judged.iter().enumerate() {
        places.entry(outcome.subject).or_default().push((at, outcome.verdict));
    }
    let mut told: Vec<(usize, String)> = Vec::new();
    for at in 0..judged.len() {
        let Some((outcome, Some(_))) = judged.get(at) else { continue };
        let others = checks.get(&outcome.check).map_or(&[][..], |check| &check.suppressed_by);
        let beside = places.get(&outcome.subject).map_or(&[][..], Vec::as_slice);
        let by = others.iter().find_map(|other| {
            let named = |at: usize| judged.get(at).is_some_and(|(outcome, _)| outcome.check == *other);
            let (place, verdict) = beside.iter().copied().find(|(at, _)| named(*at))?;
            (verdict <= Verdict::Doubtful && verdict <= outcome.verdict).then(|| (place, other.clone()))
        });
        if let (Some((place, by)), Some((outcome, _))) = (by, judged.get_mut(at)) {
            told.push((place, outcome.check.clone()));
            outcome.suppressed_by = Some(by);
        }
    }
    for (place, check) in told {
        if let Some((_, Some(finding))) = judged.get_mut(place) {
            finding.suppresses.push(check);
        }
    }
}

/// Compares labels as people sort them: runs of digits by their value (`U2` before `U10`).
#[must_use]
pub fn natural(one: &str, other: &str) -> Ordering {
    let (mut a, mut b) = (one, other);
    loop {
        let (left, right) = (digits(a), digits(b));
        let order = match (left, right) {
            (0, 0) => match (a.chars().next(), b.chars().next()) {
                (None, None) => return one.cmp(other),
                (None, Some(_)) => return Ordering::Less,
                (Some(_), None) => return Ordering::Greater,
                (Some(x), Some(y)) => {
                    (a, b) = (a.get(x.len_utf8()..).unwrap_or(""), b.get(y.len_utf8()..).unwrap_or(""));
                    x.cmp(&y)
                }
            },
            (0, _) => a.chars().next().map_or(Ordering::Less, |x| x.cmp(&'0')),
            (_, 0) => b.chars().next().map_or(Ordering::Greater, |y| '0'.cmp(&y)),
            _ => {
                let (x, y) = (a.get(..left).unwrap_or(""), b.get(..right).unwrap_or(""));
                (a, b) = (a.get(left..).unwrap_or(""), b.get(right..).unwrap_or(""));
                let (x, y) = (x.trim_start_matches('0'), y.trim_start_matches('0'));
                x.len().cmp(&y.len()).then_with(|| x.cmp(y))
            }
        };
        if order != Ordering::Equal {
            return order;
        }
    }
}

fn digits(text: &str) -> usize {
    text.bytes().take_while(u8::is_ascii_digit).count()
}

/// The level of the worst finding.
#[must_use]
pub fn worst_level(findings: &[Finding]) -> Option<Level> {
    findings.iter().map(|finding| finding.level).min()
}
