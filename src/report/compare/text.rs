//! The report of `compare` as text.

use std::sync::Arc;

use super::ComparedBoards;
use super::changes::{before, better, reason, rows, slacks, summary, title};
use crate::checks::Level;
use crate::report::caution::caution;
use crate::report::inert::inert;
use crate::report::layout::{table, wrapped};
use crate::report::look::Look;
use crate::report::overall::caution_of;
use crate::report::problem::problems;
use crate::report::text::{
    TextOptions, accepted_of, findings, first_problems, heading, incomplete, notes_of, unread,
};
use crate::report::{BoardResult, finding};
use crate::review::compare::{Compared, Comparison, Gone, State};
use crate::review::{Examination, Reviewed};

/// The report of some boards beside what they were.
#[must_use]
pub fn compare(boards: &[ComparedBoards<'_>], options: TextOptions) -> String {
    let mut text = String::new();
    let mut last: Option<&BoardResult> = None;
    for pair in boards {
        for board in pair.old.into_iter().chain(pair.new) {
            // What is wrong with rules that all boards share is told once.
            if last.is_none_or(|last| !Arc::ptr_eq(&last.rule_problems, &board.rule_problems)) {
                text.push_str(&problems(board.rule_problems.iter(), options.look));
            }
            last = Some(board);
        }
        // Of many boards those are shown of which there is something to say.
        if boards.len() > 1 && pair.is_complete() && pair.comparison.as_ref().is_some_and(Comparison::is_empty) {
            continue;
        }
        if !text.is_empty() && !options.quiet {
            text.push('\n');
        }
        text.push_str(&one(pair, options, boards.len() > 1));
    }
    if boards.len() > 1 && !options.quiet {
        text.push_str(&overall(boards, options.look));
    }
    crate::report::guarded(&text)
}

/// One board; of many the caution stands at the end of all.
fn one(pair: &ComparedBoards<'_>, options: TextOptions, of_many: bool) -> String {
    let look = options.look;
    let mut text = if options.quiet { String::new() } else { format!("{}\n", both(pair, look)) };
    for board in pair.old.into_iter().chain(pair.new) {
        text.push_str(&first_problems(&board.problems, look));
        if !options.quiet && board.examination.is_none() {
            text.push_str(&format!("{}: {}", inert(&board.netlist), unread(look)));
        }
    }
    let new = pair.new.and_then(|board| board.examination.as_ref());
    let Some(comparison) = &pair.comparison else {
        if let Some(examination) = new {
            let line = "not compared: all that was found on the new board follows";
            text.push_str(&format!("{}\n\n{}", look.level(Level::Error, line), findings(examination, look)));
        }
        return text;
    };
    if !pair.is_complete() {
        text.push_str(&incomplete(look));
    }
    if let Some(examination) = new {
        text.push_str(&news(examination, comparison, look));
    }
    text.push_str(&others(comparison, look));
    if !options.quiet {
        let old = pair.old.and_then(|board| board.examination.as_ref());
        text.push_str(&regulators(comparison, old, new, look));
        text.push_str(&wrapped(&summary(comparison), "", "  ", look.width()));
        if let Some(examination) = new.filter(|_| !of_many) {
            text.push_str(&look.faint(wrapped(&caution(examination), "", "  ", look.width()).trim_end()));
            text.push('\n');
        }
    }
    text
}

/// `base/gauge.net → gauge.net · River gauge · board file gauge.railworthy.toml`
fn both(pair: &ComparedBoards<'_>, look: Look) -> String {
    match (pair.old, pair.new) {
        (Some(old), Some(new)) => format!("{} → {}", inert(&old.netlist), heading(new, look)),
        (None, Some(new)) => format!("new board {}", heading(new, look)),
        (Some(old), None) => format!("{} is gone\n", look.bold(&inert(&old.netlist))),
        (None, None) => String::new(),
    }
}

/// What the change brought, then what it made worse, in full.
fn news(examination: &Examination, comparison: &Comparison<'_>, look: Look) -> String {
    let mut text = String::new();
    for (state, title) in [(State::New, "New"), (State::Worse, "Worse")] {
        let all: Vec<&Compared<'_>> = comparison.findings.iter().filter(|each| each.state == state).collect();
        if all.is_empty() {
            continue;
        }
        text.push_str(&look.bold(title));
        text.push('\n');
        let (accepted, open): (Vec<&Compared<'_>>, Vec<_>) =
            all.into_iter().partition(|each| each.now.accepted.is_some());
        for each in open.iter().filter(|each| each.now.finding.level < Level::Note) {
            if let Some(before) = before(each) {
                text.push_str(&look.faint(&format!("  {before}:\n")));
            }
            text.push_str(&finding::whole(examination, each.now, look));
            text.push('\n');
        }
        let open = open.iter().map(|each| each.now);
        let notes: Vec<&Reviewed> = open.filter(|found| found.finding.level == Level::Note).collect();
        text.push_str(&notes_of(&notes, look));
        text.push_str(&accepted_of(&accepted.iter().map(|each| each.now).collect::<Vec<_>>(), look));
    }
    text
}

/// What became better, changed or went away, in a line each.
fn others(comparison: &Comparison<'_>, look: Look) -> String {
    let mut text = String::new();
    for state in [State::Better, State::Changed] {
        for each in comparison.findings.iter().filter(|each| each.state == state) {
            let tail = if state == State::Better { better(each) } else { slacks(each) };
            text.push_str(&line(state.name(), each.now, &tail, look));
        }
    }
    for Gone { was, why } in &comparison.gone {
        text.push_str(&line("gone", was, reason(*why), look));
    }
    if !text.is_empty() {
        text.push('\n');
    }
    text
}

fn line(label: &str, found: &Reviewed, tail: &str, look: Look) -> String {
    let text = format!("{} ({}); {tail}", inert(&found.finding.message), inert(&found.finding.check));
    wrapped(&text, &format!("  {label}: "), &" ".repeat(label.len() + 4), look.width())
}

/// The regulators that changed, each with what changed about it.
fn regulators(
    comparison: &Comparison<'_>,
    old: Option<&Examination>,
    new: Option<&Examination>,
    look: Look,
) -> String {
    let mut text = String::new();
    for change in &comparison.regulators {
        text.push_str(&wrapped(&title(change, old, new), "", "  ", look.width()));
        text.push_str(&table(&rows(change), "  ", look.width()));
    }
    if !text.is_empty() {
        text.push('\n');
    }
    text
}

/// A line for all boards together.
fn overall(boards: &[ComparedBoards<'_>], look: Look) -> String {
    let all = || boards.iter().filter_map(|pair| pair.comparison.as_ref());
    let count = |state: State| all().map(|one| one.count(state)).sum::<usize>();
    let gone: usize = all().map(|one| one.gone.len()).sum();
    let same = all().filter(|one| one.is_empty()).count();
    let lost = boards.iter().filter(|pair| !pair.is_complete()).count();
    let mut line = format!(
        "{} boards, {same} without a difference; findings: {} new, {} worse, {} better, {} changed, {gone} gone, {} as \
         before",
        boards.len(),
        count(State::New),
        count(State::Worse),
        count(State::Better),
        count(State::Changed),
        count(State::Same)
    );
    if lost > 0 {
        line.push_str(&format!("; {lost} not wholly compared"));
    }
    let caution = caution_of(boards.iter().filter_map(|pair| pair.new), |name| inert(name).into_owned());
    let caution = wrapped(&caution, "", "  ", look.width());
    format!("\n{}{}\n", wrapped(&line, "", "  ", look.width()), look.faint(caution.trim_end()))
}
