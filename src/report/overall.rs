//! What many boards came to: a line for each, the totals, and the caution once.

use super::board::BoardResult;
use super::caution;
use super::inert::inert;
use super::layout::{padded, widest, wrapped};
use super::look::Look;
use super::text::{counted, of_the_review, plural};
use crate::checks::{Counts, Level};

/// Most boards without a finding that have a line of their own.
const MOST_CLEAN: usize = 40;
/// The widest name for which the others are filled up, in columns.
const WIDEST_NAME: usize = 60;

/// Whether nothing has to be told of a board but that all is well.
pub(super) fn is_clean(board: &BoardResult) -> bool {
    board.is_complete() && board.problems.is_empty() && board.findings().next().is_none()
}

/// The end of a report on several boards.
pub(super) fn overall(boards: &[BoardResult], look: Look) -> String {
    let states: Vec<State> = boards.iter().map(State::of).collect();
    let clean = boards.iter().filter(|board| is_clean(board)).count();
    let width = widest(states.iter().map(|state| state.name()));
    let names = widest(boards.iter().map(|board| board.netlist.as_str())).min(WIDEST_NAME);
    let mut text = look.bold(&format!("{} board{}", boards.len(), plural(boards.len())));
    text.push_str(&format!(": {}\n", tally(&states)));
    let mut left = MOST_CLEAN;
    for (board, state) in boards.iter().zip(&states) {
        if is_clean(board) {
            if left == 0 {
                continue;
            }
            left -= 1;
        }
        // A row that is broken is harder to read than a long one.
        let name = padded(&inert(&board.netlist), names);
        let line = format!("  {}  {name}  {}\n", padded(state.name(), width), told(board));
        // The colours have no width of their own.
        text.push_str(&match state.level() {
            Some(level) => line.replacen(state.name(), &look.level(level, state.name()), 1),
            None => line,
        });
    }
    if clean > MOST_CLEAN {
        text.push_str(&format!("  and {} more on which everything holds\n", clean - MOST_CLEAN));
    }
    text.push('\n');
    text.push_str(&wrapped_totals(boards, look));
    text
}

/// What a board came to, and its counts.
pub(super) fn standing(board: &BoardResult) -> (&'static str, String) {
    (State::of(board).name(), told(board))
}

/// What a board came to, in one or two words; the worst first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum State {
    NotJudged,
    Incomplete,
    Findings(Level),
    Holds,
    Nothing,
}

impl State {
    const ALL: [Self; 7] = [
        Self::NotJudged,
        Self::Incomplete,
        Self::Findings(Level::Error),
        Self::Findings(Level::Warning),
        Self::Findings(Level::Note),
        Self::Holds,
        Self::Nothing,
    ];

    fn of(board: &BoardResult) -> Self {
        let Some(examination) = &board.examination else { return Self::NotJudged };
        match board.worst_level() {
            _ if !board.is_complete() => Self::Incomplete,
            Some(level) => Self::Findings(level),
            None if examination.counts.requirements == 0 => Self::Nothing,
            None => Self::Holds,
        }
    }

    fn name(self) -> &'static str {
        match self {
            Self::NotJudged => "not judged",
            Self::Incomplete => "incomplete",
            Self::Findings(level) => level.name(),
            Self::Holds => "holds",
            Self::Nothing => "nothing asked",
        }
    }

    fn level(self) -> Option<Level> {
        match self {
            Self::NotJudged | Self::Incomplete => Some(Level::Error),
            Self::Findings(level) => Some(level),
            Self::Holds | Self::Nothing => None,
        }
    }
}

/// `2 with errors, 1 with warnings, 26 hold, 1 not judged`.
fn tally(states: &[State]) -> String {
    let told = |state: &State| {
        let count = states.iter().filter(|other| *other == state).count();
        let words = match state {
            State::NotJudged => "not judged",
            State::Incomplete => "incomplete",
            State::Findings(Level::Error) => "with errors",
            State::Findings(Level::Warning) => "with warnings",
            State::Findings(Level::Note) => "with notes",
            State::Holds if count == 1 => "holds",
            State::Holds => "hold",
            State::Nothing => "with nothing to ask of",
        };
        (count > 0).then(|| format!("{count} {words}"))
    };
    State::ALL.iter().filter_map(told).collect::<Vec<_>>().join(", ")
}

/// The counts of one board.
fn told(board: &BoardResult) -> String {
    let Some(examination) = &board.examination else { return "nothing could be read".to_owned() };
    let regulators = examination.design.regulators.len();
    let parts = counted(examination.counts, examination.accepted);
    let parts = if parts.is_empty() { String::new() } else { format!(": {parts}") };
    let review = of_the_review(examination.review);
    format!("{regulators} regulator{}{parts}{review}", plural(regulators))
}

/// The counts of all.
pub(super) fn all_counts(boards: &[BoardResult]) -> String {
    let all = || boards.iter().filter_map(|board| board.examination.as_ref());
    let regulators: usize = all().map(|examination| examination.design.regulators.len()).sum();
    let counts = all().fold(Counts::default(), |sum, examination| sum.and(examination.counts));
    let parts = counted(counts, all().map(|examination| examination.accepted).sum());
    let not_judged: usize = all().map(|examination| examination.design.not_judged.len()).sum();
    let mut line = format!(
        "{regulators} regulator{}, {} requirement{}{}{parts}",
        plural(regulators),
        counts.requirements,
        plural(counts.requirements),
        if parts.is_empty() { "" } else { ": " }
    );
    line.push_str(&of_the_review(all().map(|examination| examination.review).sum()));
    if not_judged > 0 {
        line.push_str(&format!("; {not_judged} part{} not judged", plural(not_judged)));
    }
    line
}

/// What a netlist cannot show, with the boards that can hurt somebody, shown as `name` shows them.
pub(super) fn caution_of<'a>(boards: impl IntoIterator<Item = &'a BoardResult>, name: fn(&str) -> String) -> String {
    let is_hazard = |board: &&BoardResult| board.examination.as_ref().is_some_and(caution::has_hazard);
    let hazards: Vec<String> = boards.into_iter().filter(is_hazard).map(|board| name(&board.netlist)).collect();
    caution::of_many(&hazards)
}

fn plain(name: &str) -> String {
    inert(name).into_owned()
}

fn wrapped_totals(boards: &[BoardResult], look: Look) -> String {
    let caution = wrapped(&caution_of(boards, plain), "", "  ", look.width());
    format!("{}{}\n", wrapped(&all_counts(boards), "", "  ", look.width()), look.faint(caution.trim_end()))
}

/// The counts of all and the caution, in a line each.
pub(super) fn totals(boards: &[BoardResult]) -> String {
    format!("{}\n{}\n", all_counts(boards), caution_of(boards, plain))
}
