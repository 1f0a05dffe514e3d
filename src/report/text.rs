//! The report of `check` as text.

use std::cmp::Reverse;
use std::collections::BTreeMap;
use std::sync::Arc;

use super::board::BoardResult;
use super::caution::caution;
use super::inert::inert;
use super::layout::wrapped;
use super::look::Look;
use super::overall::{is_clean, overall};
use super::problem::problems;
use super::{finding, settle};
use crate::checks::{Counts, Level, Verdict};
use crate::review::{Decisive, Examination, Reviewed};
use crate::source::Problem;

/// Most problems of a board that are shown.
const MOST_PROBLEMS: usize = 25;
/// Most declarations that are named as the first to make.
const MOST_DECLARATIONS: usize = 3;

/// What is shown.
#[derive(Debug, Clone, Copy)]
pub struct TextOptions {
    /// Width and colour.
    pub look: Look,
    /// Findings alone: no headings, notes about the run or summaries.
    pub quiet: bool,
}

/// The report of some boards.
#[must_use]
pub fn check(boards: &[BoardResult], options: TextOptions) -> String {
    let mut text = String::new();
    let many = boards.len() > 1;
    let mut last: Option<&BoardResult> = None;
    for board in boards {
        // What is wrong with rules that all boards share is told once.
        if last.is_none_or(|last| !Arc::ptr_eq(&last.rule_problems, &board.rule_problems)) {
            text.push_str(&problems(board.rule_problems.iter(), options.look));
        }
        last = Some(board);
        // Of many boards those are shown of which there is something to say; the others have a line at the end.
        if many && is_clean(board) {
            continue;
        }
        text.push_str(&one(board, options, many));
        if many && !text.ends_with("\n\n") {
            text.push('\n');
        }
    }
    if many && !options.quiet {
        text.push_str(&overall(boards, options.look));
    }
    super::guarded(&text)
}

/// One board; of many the caution stands at the end of all.
fn one(board: &BoardResult, options: TextOptions, of_many: bool) -> String {
    let look = options.look;
    let mut text = String::new();
    if !options.quiet {
        text.push_str(&heading(board, look));
        text.push('\n');
    }
    text.push_str(&first_problems(&board.problems, look));
    let Some(examination) = &board.examination else {
        if !options.quiet {
            text.push_str(&unread(look));
        }
        return text;
    };
    if !board.is_complete() {
        text.push_str(&incomplete(look));
    }
    text.push_str(&findings(examination, look));
    if !options.quiet {
        text.push_str(&summary(examination, board.board_file.is_none(), look));
        if !of_many {
            text.push_str(&look.faint(wrapped(&caution(examination), "", "  ", look.width()).trim_end()));
            text.push('\n');
        }
    }
    text
}

/// All findings of a board: errors and warnings in full, then notes, then what is accepted.
pub(super) fn findings(examination: &Examination, look: Look) -> String {
    let mut text = String::new();
    let (accepted, open): (Vec<_>, Vec<_>) = examination.findings.iter().partition(|found| found.accepted.is_some());
    for found in open.iter().filter(|found| found.finding.level < Level::Note) {
        text.push_str(&finding::whole(examination, found, look));
        text.push('\n');
    }
    let notes: Vec<&Reviewed> = open.iter().copied().filter(|found| found.finding.level == Level::Note).collect();
    text.push_str(&notes_of(&notes, look));
    text.push_str(&accepted_of(&accepted, look));
    text
}

/// Problems, as many as a reader can use: the errors ahead of the others where there are too many.
pub(super) fn first_problems(all: &[Problem], look: Look) -> String {
    if all.len() <= MOST_PROBLEMS {
        return problems(all, look);
    }
    let mut sorted: Vec<&Problem> = all.iter().collect();
    sorted.sort_by_key(|problem| Reverse(problem.severity()));
    let (shown, rest) = sorted.split_at(MOST_PROBLEMS);
    let more = format!("{} more like these are not shown; `--format json` lists them", rest.len());
    problems(shown.iter().copied(), look) + &format!("  {more}\n\n")
}

/// `gauge.net · Gauge station supply · board file gauge.railworthy.toml`
pub(super) fn heading(board: &BoardResult, look: Look) -> String {
    let mut text = look.bold(&inert(&board.netlist));
    let title = board.examination.as_ref().and_then(|examination| examination.board.title.as_ref());
    if let Some(title) = title {
        text.push_str(&format!(" · {}", inert(&title.value)));
    }
    let files: Vec<_> = board.house_file.iter().chain(&board.board_file).map(|file| inert(file)).collect();
    let files = match files.len() {
        0 => "no board file".to_owned(),
        1 => format!("board file {}", files.concat()),
        _ => format!("board files {}", files.join(", ")),
    };
    text.push_str(&look.faint(&format!(" · {files}")));
    text.push('\n');
    text
}

/// What is said of a board of which nothing could be read.
pub(super) fn unread(look: Look) -> String {
    format!("{}: nothing of the netlist could be read\n", look.level(Level::Error, "not judged"))
}

/// What is said of a board of which something is lost, ahead of what is found on the rest.
pub(super) fn incomplete(look: Look) -> String {
    let line = ": the errors above left something out; where it is missing, what follows may be wrong";
    format!("{}{line}\n\n", look.level(Level::Error, "incomplete"))
}

/// Notes in one or two lines each: what is tight, then what is unknown.
pub(super) fn notes_of(notes: &[&Reviewed], look: Look) -> String {
    let mut text = String::new();
    for verdict in [Verdict::Tight, Verdict::Unknown] {
        let these: Vec<_> = notes.iter().filter(|found| found.finding.verdict == verdict).collect();
        for found in these {
            let label = look.level(Level::Note, "note");
            let settle: Vec<String> =
                found.finding.settle.iter().take(MOST_DECLARATIONS).map(settle::phrase).collect();
            let mut line = format!("{} ({})", inert(&found.finding.message), inert(&found.finding.check));
            if !settle.is_empty() {
                line.push_str(&format!("; to settle: declare {}", settle.join(", ")));
            }
            if found.reopened.is_some() {
                let hints = found.finding.hints.last();
                line.push_str(&hints.map(|hint| format!("; {}", inert(hint))).unwrap_or_default());
            }
            // The colours have no width of their own.
            text.push_str(&wrapped(&line, "  note: ", "        ", look.width()).replacen("note", &label, 1));
        }
    }
    if !text.is_empty() {
        text.push('\n');
    }
    text
}

pub(super) fn accepted_of(accepted: &[&Reviewed], look: Look) -> String {
    let mut text = String::new();
    for found in accepted {
        let Some(accepted) = &found.accepted else { continue };
        let until = accepted.until.as_ref().map(|until| format!(", until {}", inert(until))).unwrap_or_default();
        let line = format!(
            "{} ({}): {}{until}",
            inert(&found.finding.message),
            inert(&found.finding.check),
            inert(&accepted.reason)
        );
        text.push_str(&wrapped(&line, "  accepted: ", "            ", look.width()));
    }
    if !text.is_empty() {
        text.push('\n');
    }
    text
}

fn summary(examination: &Examination, undeclared: bool, look: Look) -> String {
    let mut text = String::new();
    text.push_str(&wrapped(&counts(examination), "", "  ", look.width()));
    if !examination.assemblies.is_empty() {
        let ways: Vec<_> = examination.assemblies.iter().map(|way| inert(way)).collect();
        text.push_str(&wrapped(&format!("Judged {}", ways.join(", ")), "", "  ", look.width()));
    }
    if !examination.declare_first.is_empty() {
        let mut line = format!("Declare first: {}", declarations(&examination.declare_first));
        if undeclared {
            line.push_str("; `railworthy declare` begins a board file that asks for them");
        }
        text.push_str(&wrapped(&line, "", "  ", look.width()));
    }
    text
}

fn counts(examination: &Examination) -> String {
    let counts = examination.counts;
    let regulators = examination.design.regulators.len();
    let parts = counted(counts, examination.accepted);
    let mut line = format!(
        "{regulators} regulator{}, {} requirement{}",
        plural(regulators),
        counts.requirements,
        plural(counts.requirements)
    );
    if !parts.is_empty() {
        line.push_str(&format!(": {parts}"));
    }
    line.push_str(&of_the_review(examination.review));
    let not_judged = not_judged(examination);
    if !not_judged.is_empty() {
        line.push_str(&format!("; not judged: {not_judged}"));
    }
    line
}

/// `1 fails, 2 doubtful, 30 hold`; what there is none of is left out.
pub(super) fn counted(counts: Counts, accepted: usize) -> String {
    let verdicts = [
        (counts.fails, "fails", "fail"),
        (counts.doubtful, "doubtful", "doubtful"),
        (counts.tight, "tight", "tight"),
        (counts.unknown, "unknown", "unknown"),
        (counts.holds, "holds", "hold"),
        (accepted, "accepted", "accepted"),
    ];
    let told = verdicts.into_iter().filter(|(count, ..)| *count > 0);
    let told = told.map(|(count, one, many)| format!("{count} {}", if count == 1 { one } else { many }));
    told.collect::<Vec<_>>().join(", ")
}

/// What is said behind the counts of requirements of open findings of the review, or nothing.
pub(super) fn of_the_review(count: usize) -> String {
    if count == 0 { String::new() } else { format!("; {count} finding{} of the review", plural(count)) }
}

pub(super) fn plural(count: usize) -> &'static str {
    if count == 1 { "" } else { "s" }
}

/// `U9 (switching converter), U4, U5 (ignored by the board file)`.
pub(super) fn not_judged(examination: &Examination) -> String {
    let mut by_reason: BTreeMap<&str, Vec<&str>> = BTreeMap::new();
    for part in &examination.design.not_judged {
        let reference = examination.design.circuit.device(part.device).reference.as_str();
        by_reason.entry(part.reason.as_str()).or_default().push(reference);
    }
    let told = by_reason.iter().map(|(reason, parts)| format!("{} ({})", inert(&parts.join(", ")), inert(reason)));
    told.collect::<Vec<_>>().join(", ")
}

fn declarations(decisive: &[Decisive]) -> String {
    let told = decisive.iter().take(MOST_DECLARATIONS).map(|each| match each.decides {
        0 => format!("{} (plays into {})", settle::phrase(&each.settle), each.concerns),
        decides => format!("{} (decides {decides})", settle::phrase(&each.settle)),
    });
    told.collect::<Vec<_>>().join(", ")
}
