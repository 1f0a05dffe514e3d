//! Findings in one line each, as editors and build tools read them:
//! `file:line:column: severity: message [check]`.

use std::sync::Arc;

use super::board::BoardResult;
use super::inert::{inert, inert_short};
use super::level_of;
use super::overall::totals;
use crate::checks::Level;
use crate::review::Reviewed;
use crate::source::{Location, Problem};

/// Most characters of a message.
const LONGEST: usize = 1_000;

/// Findings that nobody has accepted, and problems, one a line. Lines and columns count from 1, columns in characters.
#[must_use]
pub fn lines(boards: &[BoardResult]) -> String {
    let mut text = String::new();
    let mut last: Option<&BoardResult> = None;
    for board in boards {
        // What is wrong with rules that all boards share is told once.
        if last.is_none_or(|last| !Arc::ptr_eq(&last.rule_problems, &board.rule_problems)) {
            board.rule_problems.iter().for_each(|problem| text.push_str(&told(problem, &board.netlist)));
        }
        last = Some(board);
        board.problems.iter().for_each(|problem| text.push_str(&told(problem, &board.netlist)));
        for found in board.findings().filter(|found| found.accepted.is_none()) {
            text.push_str(&of_finding(found));
        }
    }
    super::guarded(&text)
}

/// What the lines do not say: how many requirements hold, are accepted, could not be judged; and the caution.
#[must_use]
pub fn line_summary(boards: &[BoardResult]) -> String {
    super::guarded(&totals(boards))
}

/// A finding in its line.
pub(super) fn of_finding(found: &Reviewed) -> String {
    let finding = &found.finding;
    let line = line(&place(found.best_place()), finding.level, &finding.message);
    format!("{line} [{}]\n", inert(&finding.check))
}

/// A problem in its line; one without a place is the netlist's.
pub(super) fn told(problem: &Problem, netlist: &str) -> String {
    let place = match problem.place() {
        Some((source, span)) => place(&Location::new(source, span)),
        None => file(netlist),
    };
    line(&place, level_of(problem), problem.message()) + "\n"
}

fn line(place: &str, level: Level, message: &str) -> String {
    format!("{place}: {level}: {}", inert_short(message, LONGEST))
}

fn place(location: &Location) -> String {
    let at = location.position();
    format!("{}:{}:{}", file(location.source.name()), at.line, at.column)
}

/// A file's name in which no colon stands that could end it, but for that of a drive.
fn file(name: &str) -> String {
    let name = inert(name);
    let mut signs = name.chars();
    let is_drive = signs.next().is_some_and(|sign| sign.is_ascii_alphabetic())
        && signs.next() == Some(':')
        && matches!(signs.next(), Some('\\' | '/'));
    let (drive, rest) = name.split_at(if is_drive { 2 } else { 0 });
    format!("{drive}{}", rest.replace(':', "\\u{3a}"))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::{Source, Span};

    #[test]
    fn a_line_has_the_place_the_severity_and_the_message() {
        let source = Source::new("a.net", "(export\n  (ä x))");
        let problem = Problem::warning("odd\n::error::x").at(&source, Span::new(14, 15), "here");
        assert_eq!(told(&problem, "b.net"), "a.net:2:6: warning: odd\\u{a}::error::x\n");
        assert_eq!(told(&Problem::error("gone"), "b.net"), "b.net: error: gone\n");
    }

    #[test]
    fn a_file_name_forges_no_place() {
        assert_eq!(
            file("a\nb.net:3:4: error: forged %0A"),
            "a\\u{a}b.net\\u{3a}3\\u{3a}4\\u{3a} error\\u{3a} forged %0A"
        );
        assert_eq!(file("C:\\hw\\a.net"), "C:\\hw\\a.net");
        assert_eq!(file("C:a"), "C\\u{3a}a");
        assert_eq!(file("::error::x"), "\\u{3a}\\u{3a}error\\u{3a}\\u{3a}x");
    }
}
