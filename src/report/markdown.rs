//! Results as Markdown, for a comment on a pull request: the verdict, a row for each finding, the figures folded.
//! Everything from a file stands in code, where hosts make neither links nor mentions of it.

use super::board::BoardResult;
use super::finding::{grounds, place};
use super::inert::inert_short;
use super::level_of;
use super::look::Look;
use super::overall::{all_counts, caution_of, standing};
use super::page::{Page, block, code, head, length, row};
use super::settle;
use super::text::plural;
use crate::checks::Level;
use crate::review::{Decisive, Reviewed};
use crate::source::{Problem, Severity};

/// Most characters of a page; hosts refuse comments of more than 65 536.
pub const LONGEST_PAGE: usize = 60_000;

/// What is kept free for what stands behind the tables of findings: figures, acceptances, the end.
pub(super) const FOR_FIGURES: usize = 20_000;
/// What is kept free for acceptances and the end.
pub(super) const FOR_ACCEPTED: usize = 6_000;
/// What is kept free for the end.
pub(super) const FOR_END: usize = 3_000;
/// Most characters of a line that names stand in.
pub(super) const LONGEST_LINE: usize = 400;
/// Most problems that are listed.
pub(super) const MOST_PROBLEMS: usize = 25;
/// Most boards that have a row of their own.
const MOST_BOARDS: usize = 100;
/// Most declarations that are named as the first to make.
const MOST_DECLARATIONS: usize = 3;

/// The results of some boards as one page of at most [`LONGEST_PAGE`] characters.
#[must_use]
pub fn markdown(boards: &[BoardResult]) -> String {
    let (open, accepted): (Vec<Entry<'_>>, Vec<Entry<'_>>) =
        entries(boards).into_iter().partition(|entry| entry.found.accepted.is_none());
    let mut page = Page::new(LONGEST_PAGE);
    page.add(&verdict(boards, &open));
    problems(&mut page, boards);
    findings(&mut page, &open, boards.len() > 1);
    figures(&mut page, &open);
    acceptances(&mut page, &accepted, boards.len() > 1);
    if boards.len() > 1 {
        standings(&mut page, boards);
    }
    page.add(&end(boards));
    page.text()
}

/// A finding with its board.
#[derive(Debug, Clone, Copy)]
struct Entry<'a> {
    board: &'a BoardResult,
    found: &'a Reviewed,
}

/// All findings, the worst first, else in the order of boards.
fn entries(boards: &[BoardResult]) -> Vec<Entry<'_>> {
    let all = boards.iter().flat_map(|board| board.findings().map(move |found| Entry { board, found }));
    let mut entries: Vec<Entry<'_>> = all.collect();
    entries.sort_by_key(|entry| entry.found.finding.level);
    entries
}

/// The heading and the counts.
fn verdict(boards: &[BoardResult], open: &[Entry<'_>]) -> String {
    let mut parts = Vec::new();
    let lost = boards.iter().filter(|board| !board.is_complete()).count();
    if lost > 0 {
        parts.push(match boards.len() {
            1 => "not wholly judged".to_owned(),
            all => format!("{lost} of {all} boards not wholly judged"),
        });
    }
    for level in [Level::Error, Level::Warning, Level::Note] {
        let count = open.iter().filter(|entry| entry.found.finding.level == level).count();
        if count > 0 {
            parts.push(format!("{count} {level}{}", plural(count)));
        }
    }
    let asked = boards.iter().filter_map(|board| board.examination.as_ref());
    let asked: usize = asked.map(|examination| examination.counts.requirements).sum();
    if parts.is_empty() {
        parts.push(if asked == 0 { "nothing to judge" } else { "everything asked holds" }.to_owned());
    }
    let name = match boards {
        [one] => format!("{}: ", code(&one.netlist)),
        _ => format!("{} boards: ", boards.len()),
    };
    format!("### railworthy: {}\n\n{name}{}.\n", parts.join(", "), all_counts(boards))
}

/// What was lost or odd in the files.
fn problems(page: &mut Page, boards: &[BoardResult]) {
    let mut all: Vec<&Problem> = Vec::new();
    let mut rules: Option<&BoardResult> = None;
    for board in boards {
        // What is wrong with rules that all boards share is told once.
        if rules.is_none_or(|last| !std::sync::Arc::ptr_eq(&last.rule_problems, &board.rule_problems)) {
            all.extend(board.rule_problems.iter());
        }
        rules = Some(board);
        all.extend(&board.problems);
    }
    problem_table(page, all);
}

/// Problems as a table, errors first, as many as a reader can use.
pub(super) fn problem_table(page: &mut Page, mut all: Vec<&Problem>) {
    if all.is_empty() {
        return;
    }
    all.sort_by_key(|problem| std::cmp::Reverse(problem.severity()));
    if all.iter().any(|problem| problem.severity() >= Severity::Error) {
        page.add("\n**What these errors left out is not judged; what follows may be wrong where it is missing.**\n");
    }
    page.add(&format!("\n{}", head(&["in the files", "where", "what"])));
    let rows = all.iter().take(MOST_PROBLEMS).map(|problem| {
        let place = problem.place().map_or_else(String::new, |(source, span)| {
            format!("{}:{}", source.name(), source.position(span.start()).line)
        });
        row(&[level_of(problem).name().to_owned(), code(&place), code(problem.message())])
    });
    let shown = page.add_each(rows, FOR_FIGURES);
    left_out(page, all.len() - shown, "problem");
}

/// A row for each finding that nobody has accepted.
fn findings(page: &mut Page, open: &[Entry<'_>], many: bool) {
    if open.is_empty() {
        return;
    }
    let board = many.then_some("board");
    let names: Vec<&str> = ["level", "part"].into_iter().chain(board).chain(["finding", "check"]).collect();
    page.add(&format!("\n{}", head(&names)));
    let rows = open.iter().map(|Entry { board, found }| {
        let finding = &found.finding;
        let mut cells = vec![finding.level.name().to_owned(), code(&found.subject)];
        cells.extend(many.then(|| code(&board.netlist)));
        cells.extend([code(&finding.message), code(&finding.check)]);
        row(&cells)
    });
    let shown = page.add_each(rows, FOR_FIGURES);
    left_out(page, open.len() - shown, "finding");
}

/// The figures and remedies of errors and warnings, folded.
fn figures(page: &mut Page, open: &[Entry<'_>]) {
    figures_of(page, open.iter().map(|entry| entry.found), FOR_ACCEPTED);
}

/// The figures and remedies of those of some findings that are errors or warnings, folded.
pub(super) fn figures_of<'a>(page: &mut Page, findings: impl Iterator<Item = &'a Reviewed>, reserve: usize) {
    let told: Vec<&Reviewed> = findings.filter(|found| found.finding.level < Level::Note).collect();
    let pieces = told.iter().map(|found| {
        let at = found.best_place();
        let at = format!("{}:{}", at.source.name(), at.position().line);
        let lines = format!(
            "{}: {}\n{}\n{}\n{}",
            found.finding.level,
            inert_short(&found.finding.message, LONGEST_LINE),
            inert_short(&place(found), LONGEST_LINE),
            inert_short(&at, LONGEST_LINE),
            grounds(found, Look::new(Look::PIPED, false))
        );
        format!("\n{}", block(&lines))
    });
    folded(page, "Figures and remedies", "", pieces, told.len(), reserve);
}

/// The findings that someone has looked at, with the reasons, folded.
fn acceptances(page: &mut Page, accepted: &[Entry<'_>], many: bool) {
    let board = many.then_some("board");
    let names: Vec<&str> = board.into_iter().chain(["accepted finding", "check", "reason", "until"]).collect();
    let rows = accepted.iter().map(|Entry { board, found }| {
        let (reason, until) = match &found.accepted {
            Some(accepted) => (accepted.reason.as_str(), accepted.until.as_deref().unwrap_or_default()),
            None => Default::default(),
        };
        let mut cells: Vec<String> = many.then(|| code(&board.netlist)).into_iter().collect();
        cells.extend([&found.finding.message, &found.finding.check].map(|text| code(text)));
        cells.extend([reason, until].map(code));
        row(&cells)
    });
    let title = format!("{} accepted", accepted.len());
    folded(page, &title, &format!("\n{}", head(&names)), rows, accepted.len(), FOR_END);
}

/// A row for each board, folded.
fn standings(page: &mut Page, boards: &[BoardResult]) {
    let rows = boards.iter().take(MOST_BOARDS).map(|board| {
        let (state, told) = standing(board);
        row(&[state.to_owned(), code(&board.netlist), told])
    });
    let table = format!("\n{}", head(&["state", "board", "requirements"]));
    folded(page, &format!("{} boards", boards.len()), &table, rows, boards.len(), FOR_END);
}

/// A part that is folded, of as many pieces as leave `reserve`.
pub(super) fn folded(
    page: &mut Page,
    title: &str,
    start: &str,
    pieces: impl Iterator<Item = String>,
    count: usize,
    reserve: usize,
) {
    const CLOSE: &str = "\n</details>\n";
    // The words that tell what was left out have room, too.
    let reserve = reserve + length(CLOSE) + 200;
    if count == 0 || !page.add_within(&format!("\n<details><summary>{title}</summary>\n{start}"), reserve) {
        return;
    }
    let shown = page.add_each(pieces, reserve);
    left_out(page, count - shown, "entry");
    page.add(CLOSE);
}

/// That something is not shown, and where it is.
pub(super) fn left_out(page: &mut Page, count: usize, what: &str) {
    if count > 0 {
        let what = match (what, count) {
            ("entry", 1) => "entry".to_owned(),
            ("entry", _) => "entries".to_owned(),
            _ => format!("{what}{}", plural(count)),
        };
        page.add(&format!("\n{count} more {what} left out to keep this short; the other formats have all.\n"));
    }
}

/// What to declare first, of one board, and the caution.
fn end(boards: &[BoardResult]) -> String {
    let mut text = String::new();
    if let [board] = boards
        && let Some(examination) = &board.examination
        && !examination.declare_first.is_empty()
    {
        let told = |each: &Decisive| format!("{} (decides {})", code(&settle::phrase(&each.settle)), each.decides);
        let told: Vec<String> = examination.declare_first.iter().take(MOST_DECLARATIONS).map(told).collect();
        text.push_str(&format!("\nDeclare first: {}.\n", told.join(", ")));
    }
    let caution = match boards {
        [one] => one.examination.as_ref().map(super::caution::caution),
        _ => None,
    };
    text + &format!("\n{}\n", caution.unwrap_or_else(|| caution_of(boards, code)))
}
