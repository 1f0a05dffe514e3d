//! What a check asked of a subject, requirement by requirement, whatever it came to.

use super::check::Check;
use super::judge::Gate;
use super::language::{Answer, Context, Figures};
use super::verdict::Verdict;
use crate::facts::Subject;
use crate::quantity::{Dimension, Quantity};

/// A requirement of a check that was asked.
#[derive(Debug, Clone)]
pub struct Asked {
    /// The requirement as written.
    pub text: String,
    /// When it is asked, as written.
    pub when: Option<String>,
    /// What it came to, under the caps of the requirement and the check.
    pub verdict: Verdict,
    /// The cap that made it milder, where one did.
    pub capped: Option<Verdict>,
    /// How far from the edge at worst, in SI units; negative where it breaks.
    pub slack: Option<(f64, Dimension)>,
    /// The figures of the comparison that decided, in order of appearance.
    pub figures: Vec<(String, Quantity)>,
    /// The one of a group that decided.
    pub member: Option<Subject>,
}

/// What a check asked of a subject.
#[derive(Debug, Clone)]
pub struct Trace {
    /// The check.
    pub check: String,
    /// Its requirements that were asked, in the order of the file.
    pub asked: Vec<Asked>,
    /// Those that were not, as written: a figure in them does not apply, or their condition speaks against it.
    pub not_asked: Vec<String>,
}

impl Trace {
    /// What the check came to: the worst of its requirements; `None` where it asked nothing.
    #[must_use]
    pub fn verdict(&self) -> Option<Verdict> {
        self.asked.iter().map(|asked| asked.verdict).min()
    }
}

/// Asks a check of a subject and keeps every step.
#[must_use]
pub fn trace(check: &Check, subject: Subject, figures: &dyn Figures) -> Trace {
    let mut trace = Trace { check: check.name.clone(), asked: Vec::new(), not_asked: Vec::new() };
    let context = Context { figures, settings: &check.settings, subject, member: None };
    let gate = Gate::of(check.when.as_ref(), context);
    for rule in &check.requires {
        let inner = gate.as_ref().and_then(|gate| Some((gate, Gate::of(rule.when.as_ref(), context)?)));
        let answer = inner.and_then(|(gate, inner)| match rule.holds.evaluate(context) {
            Answer::Judged(judged) => Some(inner.pass(gate.pass(judged))),
            Answer::NotAsked => None,
        });
        let Some(judged) = answer else {
            trace.not_asked.push(rule.text.clone());
            continue;
        };
        let caps = [rule.at_most, check.at_most].into_iter().flatten();
        let verdict = caps.fold(judged.verdict, Verdict::at_most);
        let decision = judged.decision;
        trace.asked.push(Asked {
            text: rule.text.clone(),
            when: rule.when_text.clone(),
            verdict,
            capped: (verdict != judged.verdict).then_some(verdict),
            slack: decision.slack,
            figures: decision.figures,
            member: decision.member,
        });
    }
    trace
}
