//! What a change brings and takes away, as a comment on a pull request: the verdict first, everything else folded.

use super::changes::{before, better, reason, rows, slacks, summary, title};
use super::{ComparedBoards, all_problems};
use crate::checks::Level;
use crate::report::BoardResult;
use crate::report::LONGEST_PAGE;
use crate::report::caution::caution;
use crate::report::layout::table;
use crate::report::markdown::{FOR_ACCEPTED, FOR_END, FOR_FIGURES, figures_of, folded, left_out, problem_table};
use crate::report::overall::caution_of;
use crate::report::page::{Page, block, code, head, row};
use crate::report::text::plural;
use crate::review::Reviewed;
use crate::review::compare::{Compared, Gone, State};

/// Columns of the tables of figures.
const WIDTH: usize = 100;

/// Some boards beside what they were, as one page of at most [`LONGEST_PAGE`] characters.
#[must_use]
pub fn compare(boards: &[ComparedBoards<'_>]) -> String {
    let mut page = Page::new(LONGEST_PAGE);
    page.add(&verdict(boards));
    problem_table(&mut page, all_problems(boards).into_iter().map(|(_, problem)| problem).collect());
    news(&mut page, boards);
    figures_of(&mut page, by_level(boards).into_iter().map(|(_, found, _)| found), FOR_ACCEPTED);
    others(&mut page, boards);
    regulators(&mut page, boards);
    page.add(&end(boards));
    page.text()
}

/// `### railworthy: 2 new findings, the worst an error`, and the boards.
fn verdict(boards: &[ComparedBoards<'_>]) -> String {
    let mut parts = Vec::new();
    let lost = boards.iter().filter(|pair| !pair.is_complete()).count();
    if lost > 0 {
        parts.push(match boards.len() {
            1 => "not wholly compared".to_owned(),
            all => format!("{lost} of {all} boards not wholly compared"),
        });
    }
    for level in [Level::Error, Level::Warning, Level::Note] {
        let count = boards.iter().flat_map(ComparedBoards::news).filter(|found| found.finding.level == level).count();
        if count > 0 {
            parts.push(format!("{count} new or worse {level}{}", plural(count)));
        }
    }
    let gone: usize = boards.iter().filter_map(|pair| pair.comparison.as_ref()).map(|one| one.gone.len()).sum();
    if gone > 0 {
        parts.push(format!("{gone} gone"));
    }
    if parts.is_empty() {
        parts.push("nothing new".to_owned());
    }
    let told = match boards {
        [pair] => {
            let summary = pair.comparison.as_ref().map(summary);
            let summary = summary.unwrap_or_else(|| "all that was found on the new board follows".to_owned());
            format!("{} → {}: {summary}.", name(pair.old), name(pair.new))
        }
        _ => {
            let same =
                boards.iter().filter(|pair| pair.comparison.as_ref().is_some_and(|one| one.is_empty())).count();
            format!("{} boards, {same} without a difference.", boards.len())
        }
    };
    format!("### railworthy: {}\n\n{told}\n", parts.join(", "))
}

fn name(board: Option<&BoardResult>) -> String {
    board.map_or_else(|| "none".to_owned(), |board| code(&board.netlist))
}

/// What is new or worse, the worst first, each with its board and with what it was.
fn by_level<'a>(
    boards: &'a [ComparedBoards<'_>],
) -> Vec<(&'a ComparedBoards<'a>, &'a Reviewed, Option<&'a Compared<'a>>)> {
    let mut all = Vec::new();
    for pair in boards {
        let compared = pair.comparison.iter().flat_map(|one| &one.findings);
        let compared: Vec<&Compared<'_>> = compared.filter(|each| each.state.is_news()).collect();
        for found in pair.news() {
            let each = compared.iter().find(|each| std::ptr::eq(each.now, found)).copied();
            all.push((pair, found, each));
        }
    }
    all.sort_by_key(|(_, found, _)| found.finding.level);
    all
}

fn news(page: &mut Page, boards: &[ComparedBoards<'_>]) {
    let all = by_level(boards);
    if all.is_empty() {
        return;
    }
    let many = (boards.len() > 1).then_some("board");
    let names: Vec<&str> = ["", "level", "part"].into_iter().chain(many).chain(["finding", "check"]).collect();
    page.add(&format!("\n{}", head(&names)));
    let rows = all.iter().map(|(pair, found, each)| {
        let what = match each {
            Some(each) if each.state == State::Worse => before(each).unwrap_or_default(),
            Some(_) => "new".to_owned(),
            None => String::new(),
        };
        let mut cells = vec![what, found.finding.level.name().to_owned(), code(&found.subject)];
        cells.extend(many.map(|_| name(pair.new)));
        cells.extend([code(&found.finding.message), code(&found.finding.check)]);
        row(&cells)
    });
    let shown = page.add_each(rows, FOR_FIGURES);
    left_out(page, all.len() - shown, "finding");
}

/// What is better, changed or gone, folded.
fn others(page: &mut Page, boards: &[ComparedBoards<'_>]) {
    let mut all: Vec<String> = Vec::new();
    for comparison in boards.iter().filter_map(|pair| pair.comparison.as_ref()) {
        let line = |what: &str, found: &Reviewed, how: &str| {
            row(&[
                what.to_owned(),
                code(&found.subject),
                code(&found.finding.message),
                code(&found.finding.check),
                code(how),
            ])
        };
        for each in &comparison.findings {
            match each.state {
                State::Better => all.push(line("better", each.now, &better(each))),
                State::Changed => all.push(line("changed", each.now, &slacks(each))),
                State::New | State::Worse | State::Same => {}
            }
        }
        all.extend(comparison.gone.iter().map(|Gone { was, why }| line("gone", was, reason(*why))));
    }
    let title = format!("{} better, changed or gone", all.len());
    let start = format!("\n{}", head(&["", "part", "finding", "check", "how"]));
    let count = all.len();
    folded(page, &title, &start, all.into_iter(), count, FOR_ACCEPTED);
}

/// The regulators that changed with their figures, folded.
fn regulators(page: &mut Page, boards: &[ComparedBoards<'_>]) {
    let mut all: Vec<String> = Vec::new();
    for pair in boards {
        let [old, new] = [pair.old, pair.new].map(|board| board.and_then(|board| board.examination.as_ref()));
        for change in pair.comparison.iter().flat_map(|one| &one.regulators) {
            let lines = format!("{}\n{}", title(change, old, new), table(&rows(change), "  ", WIDTH));
            all.push(format!("\n{}", block(&lines)));
        }
    }
    let title = format!("{} regulator{} changed", all.len(), plural(all.len()));
    let count = all.len();
    folded(page, &title, "", all.into_iter(), count, FOR_END);
}

/// What a netlist cannot show.
fn end(boards: &[ComparedBoards<'_>]) -> String {
    let alone = match boards {
        [pair] => pair.new.and_then(|board| board.examination.as_ref()).map(caution),
        _ => None,
    };
    let all = boards.iter().filter_map(|pair| pair.new);
    format!("\n{}\n", alone.unwrap_or_else(|| caution_of(all, code)))
}
