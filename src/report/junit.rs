//! Results as JUnit XML, which continuous integration shows as tests: one suite a board, one case a check.
//!
//! The format has no level: a finding is a failure where it fails the run, and is told in the case's output else.

use std::collections::BTreeMap;

use super::board::BoardResult;
use super::inert::inert;
use super::{guarded, level_of};
use crate::checks::Level;
use crate::review::{REVIEW_CHECKS, Reviewed};
use crate::source::{Problem, Severity};

/// The case that tells whether all of a board was read.
pub(super) const READING: &str = "all was read";

/// A board with its cases.
pub(super) struct Suite {
    pub(super) name: String,
    pub(super) cases: Vec<Case>,
}

/// A check, or the reading of the files.
pub(super) struct Case {
    name: String,
    outcome: Outcome,
    /// What is told besides.
    output: String,
}

enum Outcome {
    Passed,
    Failed { message: String, verdict: &'static str, body: String },
    Broken { message: String, body: String },
    Skipped { message: String },
}

/// How many cases came to what.
#[derive(Default)]
struct Tally {
    tests: usize,
    failures: usize,
    errors: usize,
    skipped: usize,
}

/// The result of some boards; `fails` tells whether a finding of a level fails the run.
#[must_use]
pub fn check(boards: &[BoardResult], fails: &dyn Fn(Level) -> bool) -> String {
    let fails = |found: &Reviewed| fails(found.finding.level);
    let suite = |board| suite(board, vec![reading(READING.to_owned(), board)], &fails);
    document(&boards.iter().map(suite).collect::<Vec<_>>())
}

/// Suites as a file.
pub(super) fn document(suites: &[Suite]) -> String {
    let all = tally(suites.iter().flat_map(|suite| &suite.cases));
    let mut text = "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n".to_owned();
    // The whole has no place for a count of those skipped.
    let Tally { tests, failures, errors, .. } = all;
    let name = env!("CARGO_PKG_NAME");
    text.push_str(&format!(
        "<testsuites name=\"{name}\" tests=\"{tests}\" failures=\"{failures}\" errors=\"{errors}\">\n"
    ));
    text.extend(suites.iter().map(written));
    text.push_str("</testsuites>\n");
    guarded(&text)
}

fn tally<'c>(cases: impl Iterator<Item = &'c Case>) -> Tally {
    let mut tally = Tally::default();
    for case in cases {
        tally.tests += 1;
        match case.outcome {
            Outcome::Passed => {}
            Outcome::Failed { .. } => tally.failures += 1,
            Outcome::Broken { .. } => tally.errors += 1,
            Outcome::Skipped { .. } => tally.skipped += 1,
        }
    }
    tally
}

/// A board with a case for each check behind some others; `fails` tells whether a finding fails the run.
pub(super) fn suite(board: &BoardResult, mut cases: Vec<Case>, fails: &dyn Fn(&Reviewed) -> bool) -> Suite {
    // What was asked and found nothing is a case too: one that passed.
    let mut checks: BTreeMap<&str, Vec<&Reviewed>> = BTreeMap::new();
    if let Some(examination) = &board.examination {
        let asked = examination.told.iter().map(|told| told.check.as_str());
        checks.extend(asked.chain(REVIEW_CHECKS.iter().map(|check| check.name)).map(|name| (name, Vec::new())));
    }
    // What another finding tells too is still a finding of its own check.
    for found in board.findings().flat_map(|found| std::iter::once(found).chain(&found.merged)) {
        checks.entry(&found.finding.check).or_default().push(found);
    }
    cases.extend(checks.into_iter().map(|(name, found)| judged(name, &found, fails)));
    Suite { name: board.netlist.clone(), cases }
}

/// Whether all of a board was read, as a case of a name with blanks, which no check has.
pub(super) fn reading(name: String, board: &BoardResult) -> Case {
    let (errors, others): (Vec<&Problem>, Vec<&Problem>) =
        board.all_problems().partition(|problem| problem.severity() >= Severity::Error);
    let lines = |problems: &[&Problem]| problems.iter().map(|problem| problem_lines(board, problem)).collect();
    let outcome = if board.is_complete() {
        Outcome::Passed
    } else {
        let first = errors.first().map_or("nothing could be judged", |problem| problem.message());
        Outcome::Broken { message: with_others(first, errors.len()), body: lines(&errors) }
    };
    Case { name, outcome, output: lines(&others) }
}

/// What a check found on a board.
fn judged(name: &str, found: &[&Reviewed], fails: &dyn Fn(&Reviewed) -> bool) -> Case {
    let (accepted, open): (Vec<&Reviewed>, Vec<&Reviewed>) = found.iter().partition(|found| found.accepted.is_some());
    let (failing, others): (Vec<&Reviewed>, Vec<&Reviewed>) = open.into_iter().partition(|found| fails(found));
    let reasons: Vec<&str> = accepted
        .iter()
        .filter_map(|found| found.accepted.as_ref())
        .map(|accepted| accepted.reason.as_str())
        .collect();
    let outcome = match failing.iter().min_by_key(|found| found.finding.level) {
        Some(worst) => Outcome::Failed {
            message: with_others(&worst.finding.message, failing.len()),
            verdict: worst.finding.verdict.name(),
            body: failing.iter().map(|found| finding_lines(found)).collect(),
        },
        None if !reasons.is_empty() => Outcome::Skipped { message: format!("accepted: {}", reasons.join("; ")) },
        None => Outcome::Passed,
    };
    let output = others.iter().chain(&accepted).map(|found| finding_lines(found)).collect();
    Case { name: name.to_owned(), outcome, output }
}

/// A message with how many others stand below it.
fn with_others(message: &str, count: usize) -> String {
    if count > 1 { format!("{message} (and {} more)", count - 1) } else { message.to_owned() }
}

/// `file:line:column: level: message`, and what to do.
fn finding_lines(found: &Reviewed) -> String {
    let place = found.best_place();
    let at = place.position();
    let finding = &found.finding;
    let mut text = line(place.source.name(), Some((at.line, at.column)), finding.level.name(), &finding.message);
    match &found.accepted {
        Some(accepted) => text.push_str(&indented("accepted", &accepted.reason)),
        None => text.extend(finding.hints.iter().map(|hint| indented("to do", hint))),
    }
    text
}

fn problem_lines(board: &BoardResult, problem: &Problem) -> String {
    let level = level_of(problem).name();
    let mut text = match problem.place() {
        Some((source, span)) => {
            let at = source.position(span.start());
            line(source.name(), Some((at.line, at.column)), level, problem.message())
        }
        None => line(&board.netlist, None, level, problem.message()),
    };
    text.extend(problem.advice().map(|advice| indented("to do", advice)));
    text
}

fn line(file: &str, at: Option<(usize, usize)>, level: &str, message: &str) -> String {
    let at = at.map_or(String::new(), |(line, column)| format!(":{line}:{column}"));
    format!("{}{at}: {level}: {}\n", inert(file), inert(message))
}

fn indented(what: &str, text: &str) -> String {
    format!("    {what}: {}\n", inert(text))
}

fn written(suite: &Suite) -> String {
    let Tally { tests, failures, errors, skipped } = tally(suite.cases.iter());
    let name = attribute(&suite.name);
    let mut text = format!(
        "  <testsuite name={name} tests=\"{tests}\" failures=\"{failures}\" errors=\"{errors}\" skipped=\"{skipped}\">\n"
    );
    for case in &suite.cases {
        text.push_str(&format!("    <testcase name={} classname={name}", attribute(&case.name)));
        let mut inside = outcome(&case.outcome);
        if !case.output.is_empty() {
            inside.push_str(&format!("      <system-out>{}</system-out>\n", escaped(&case.output)));
        }
        text.push_str(&if inside.is_empty() { "/>\n".to_owned() } else { format!(">\n{inside}    </testcase>\n") });
    }
    text.push_str("  </testsuite>\n");
    text
}

fn outcome(outcome: &Outcome) -> String {
    match outcome {
        Outcome::Passed => String::new(),
        Outcome::Failed { message, verdict, body } => {
            let message = attribute(message);
            format!("      <failure type=\"{verdict}\" message={message}>{}</failure>\n", escaped(body))
        }
        Outcome::Broken { message, body } => {
            let message = attribute(message);
            format!("      <error type=\"input\" message={message}>{}</error>\n", escaped(body))
        }
        Outcome::Skipped { message } => format!("      <skipped message={}/>\n", attribute(message)),
    }
}

/// A text as an attribute with its quotes, on one line and harmless.
fn attribute(text: &str) -> String {
    format!("\"{}\"", escaped(&inert(text)))
}

/// A text with nothing in it that XML takes for its own, and no sign that XML 1.0 does not know.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for sign in text.chars() {
        match sign {
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '&' => out.push_str("&amp;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&apos;"),
            '\t' | '\n' | ' '..='\u{d7ff}' | '\u{e000}'..='\u{fffd}' | '\u{10000}'.. => out.push(sign),
            _ => out.push('\u{fffd}'),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn others_are_counted() {
        assert_eq!(with_others("a", 1), "a");
        assert_eq!(with_others("a", 3), "a (and 2 more)");
    }

    proptest! {
        #[test]
        fn whatever_is_written_reads_back(text in "(?s).{0,40}|[<>&\"'\\]\u{0}-\u{1f}\u{fffe}\u{ffff}]{0,20}") {
            let document = format!("<a b={}>{}</a>", attribute(&text), escaped(&text));
            let read = roxmltree::Document::parse(&document).unwrap();
            prop_assert_eq!(read.root_element().attribute("b").unwrap(), &*inert(&text));
            let body = read.root_element().text().unwrap_or("");
            let kept = |sign: char| matches!(sign, '\t' | '\n' | ' '..='\u{fffd}' | '\u{10000}'..);
            let wanted: String = text.chars().map(|sign| if kept(sign) { sign } else { '\u{fffd}' }).collect();
            prop_assert_eq!(body, wanted);
        }
    }
}
