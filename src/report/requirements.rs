//! What every check asked of a subject, and what it came to.

use super::figures::{gist, range};
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use super::settle;
use crate::checks::{Asked, Figures, Trace, Verdict, trace};
use crate::circuit::DeviceId;
use crate::facts::{Facts, Subject};
use crate::quantity::{Quantity, print_amount};
use crate::review::{Examination, Reviewed};

/// Every check that is asked of a subject, with the figures on both sides.
pub(super) fn requirements(facts: &Facts<'_>, examination: &Examination, subject: Subject, look: Look) -> String {
    let mut text = format!("\n{}", look.bold("Requirements\n"));
    let mut not_asked = Vec::new();
    for trace in traces(facts, examination, subject) {
        if trace.asked.is_empty() {
            not_asked.push(trace.check);
            continue;
        }
        text.push_str(&verdict(facts, examination, subject, &trace, look));
        text.extend(trace.asked.iter().map(|asked| requirement(facts, asked, look)));
    }
    if !not_asked.is_empty() {
        let line = format!("not asked of it: {}", inert(&not_asked.join(", ")));
        text.push_str(&wrapped(&line, "  ", "    ", look.width()));
    }
    text
}

/// The checks of a subject whose figures rest on a part, in short.
pub(super) fn resting_on(
    facts: &Facts<'_>,
    examination: &Examination,
    subject: Subject,
    device: DeviceId,
    look: Look,
) -> String {
    let reference = &facts.circuit().device(device).reference;
    let suffix = format!(" of {reference}");
    let about = |figure: &Quantity| {
        figure
            .missing_evidence()
            .chain(figure.evidence())
            .any(|evidence| evidence.what.ends_with(&suffix) || evidence.what.contains(&format!("{suffix} ")))
    };
    let is_member =
        |asked: &Asked| matches!(asked.member, Some(Subject::Capacitor { device: one, .. }) if one == device);
    let mut text = String::new();
    for trace in traces(facts, examination, subject) {
        let own: Vec<&Asked> = trace
            .asked
            .iter()
            .filter(|asked| is_member(asked) || asked.figures.iter().any(|(_, figure)| about(figure)))
            .collect();
        if own.is_empty() {
            continue;
        }
        text.push_str(&verdict(facts, examination, subject, &trace, look));
        text.extend(own.into_iter().map(|asked| requirement(facts, asked, look)));
    }
    if text.is_empty() { "  no requirement rests on it\n".to_owned() } else { text }
}

fn traces<'a>(
    facts: &'a Facts<'_>,
    examination: &'a Examination,
    subject: Subject,
) -> impl Iterator<Item = Trace> + 'a {
    let about = move |check: &&crate::checks::Check| check.about == subject.kind();
    examination.checks.iter().filter(about).map(move |check| trace(check, subject, facts))
}

/// A check with what it came to, and what was said about that.
fn verdict(facts: &Facts<'_>, examination: &Examination, subject: Subject, trace: &Trace, look: Look) -> String {
    let word = trace.verdict().map_or("", Verdict::name);
    let name = inert(&trace.check).into_owned();
    let mut text = format!("  {} {}\n", look.bold(&name), coloured(trace.verdict(), word, look));
    let own = |found: &&Reviewed| found.finding.check == trace.check && found.finding.subject == subject;
    if let Some(found) = examination.findings.iter().find(own) {
        text.push_str(&said(found, look));
    } else if let Some(teller) = examination.findings.iter().find(|found| {
        found.merged.iter().any(|one| one.finding.check == trace.check && one.finding.subject == subject)
    }) {
        let line = format!(
            "told by {} of {}, which lacks the same",
            inert(&teller.finding.check),
            inert(&facts.label(teller.finding.subject))
        );
        text.push_str(&wrapped(&line, "    ", "      ", look.width()));
    } else if let Some(teller) = examination
        .findings
        .iter()
        .find(|found| found.finding.subject == subject && found.finding.suppresses.contains(&trace.check))
    {
        let line = format!("not told, for {} says as much", inert(&teller.finding.check));
        text.push_str(&wrapped(&line, "    ", "      ", look.width()));
    }
    text
}

fn coloured(verdict: Option<Verdict>, word: &str, look: Look) -> String {
    verdict.and_then(Verdict::level).map_or_else(|| word.to_owned(), |level| look.level(level, word))
}

/// The message of a finding, its acceptance, and what would settle it.
fn said(found: &Reviewed, look: Look) -> String {
    let mut text = wrapped(&inert(&found.finding.message), "    ", "      ", look.width());
    if let Some(accepted) = &found.accepted {
        let until = accepted.until.as_ref().map(|until| format!(", until {}", inert(until))).unwrap_or_default();
        let line = format!("accepted: {}{until}", inert(&accepted.reason));
        text.push_str(&wrapped(&line, "    ", "      ", look.width()));
    }
    if found.finding.verdict != Verdict::Fails && !found.finding.settle.is_empty() {
        let settle: Vec<String> = found.finding.settle.iter().map(settle::phrase).collect();
        text.push_str(&wrapped(&format!("to settle: declare {}", settle.join(", ")), "    ", "      ", look.width()));
    }
    text
}

/// A requirement with its figures; all that is behind them stands with the figures themselves.
fn requirement(facts: &Facts<'_>, asked: &Asked, look: Look) -> String {
    let mut head = format!("{}: {}", asked.verdict.name(), inert(&asked.text));
    if let Some(when) = &asked.when {
        head.push_str(&format!(", asked when {}", inert(when)));
    }
    if let Some(member) = asked.member {
        head.push_str(&format!(", decided by {}", inert(&facts.label(member))));
    }
    if let Some(cap) = asked.capped {
        head.push_str(&format!(", at most {cap} by the check"));
    }
    if let Some((slack, dimension)) = asked.slack {
        head.push_str(&format!("; slack {}", print_amount(slack, dimension)));
    }
    let row = |(name, figure): &(String, Quantity)| vec![name.replace('_', " "), range(figure), gist(figure)];
    let rows: Vec<Vec<String>> = asked.figures.iter().map(row).collect();
    wrapped(&head, "    ", "      ", look.width()) + &table(&rows, "      ", look.width())
}
