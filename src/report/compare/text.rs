//! The report of `compare` as text.

use std::sync::Arc;

use super::ComparedBoards;
use crate::checks::Level;
use crate::circuit::{Circuit, NetId};
use crate::quantity::{Dimension, print_amount};
use crate::recognize::Regulator;
use crate::report::caution::caution;
use crate::report::figures::range;
use crate::report::inert::inert;
use crate::report::layout::{table, wrapped};
use crate::report::look::Look;
use crate::report::problem::problems;
use crate::report::text::{
    TextOptions, accepted_of, findings, first_problems, heading, incomplete, notes_of, plural, unread,
};
use crate::report::{BoardResult, finding};
use crate::review::compare::{Change, Compared, Comparison, Gone, Moved, RegulatorChange, Shown, State, Why};
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
        text.push_str(&one(pair, options));
    }
    if boards.len() > 1 && !options.quiet {
        text.push_str(&overall(boards, options.look));
    }
    crate::report::guarded(&text)
}

fn one(pair: &ComparedBoards<'_>, options: TextOptions) -> String {
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
        if let Some(examination) = new {
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

/// What the change brought or made worse, in full.
fn news(examination: &Examination, comparison: &Comparison<'_>, look: Look) -> String {
    let mut text = String::new();
    let all: Vec<&Compared<'_>> = comparison.findings.iter().filter(|each| each.state.is_news()).collect();
    let open = |each: &&&Compared<'_>| each.now.accepted.is_none();
    for each in all.iter().filter(open).filter(|each| each.now.finding.level < Level::Note) {
        text.push_str(&finding::whole(examination, each.now, look));
        text.push_str(&wrapped(&before(each), "  ", "    ", look.width()));
        text.push('\n');
    }
    let notes: Vec<&Reviewed> =
        all.iter().filter(open).map(|each| each.now).filter(|found| found.finding.level == Level::Note).collect();
    text.push_str(&notes_of(&notes, look));
    let accepted: Vec<&Reviewed> = all.iter().map(|each| each.now).filter(|found| found.accepted.is_some()).collect();
    text.push_str(&accepted_of(&accepted, look));
    text
}

/// What a finding was: `new`, `was doubtful`, `was accepted`.
fn before(each: &Compared<'_>) -> String {
    let Some(was) = each.was else { return "new".to_owned() };
    if was.accepted.is_some() && each.now.accepted.is_none() {
        return format!("was accepted, as {}", was.finding.verdict);
    }
    format!("was {}", was.finding.verdict)
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

fn better(each: &Compared<'_>) -> String {
    match each.now.accepted.as_ref().filter(|_| each.was.is_some_and(|was| was.accepted.is_none())) {
        Some(accepted) => format!("accepted now: {}", inert(&accepted.reason)),
        None => before(each),
    }
}

fn slacks(each: &Compared<'_>) -> String {
    let slack = |found: &Reviewed| found.finding.slack.filter(|(value, _)| value.is_finite());
    match (slack(each.now), each.was.and_then(slack)) {
        (Some(is), Some(was)) => format!("slack {}, was {}", amount(is), amount(was)),
        _ => "by other figures than before".to_owned(),
    }
}

fn amount((value, dimension): (f64, Dimension)) -> String {
    print_amount(value, dimension)
}

fn reason(why: Why) -> &'static str {
    match why {
        Why::Removed => "what it was about is not there any more",
        Why::Holds => "it holds now",
        Why::NotAsked => "it is not asked any more",
    }
}

/// The regulators that changed, each with what changed about it.
fn regulators(
    comparison: &Comparison<'_>,
    old: Option<&Examination>,
    new: Option<&Examination>,
    look: Look,
) -> String {
    let mut text = String::new();
    let (old, new) = (old.map(|board| &board.design.circuit), new.map(|board| &board.design.circuit));
    for change in &comparison.regulators {
        let title = match (change.was, change.is) {
            (Some(_), Some(is)) => new.map(|circuit| name(circuit, is)),
            (None, Some(is)) => new.map(|circuit| format!("added: {}", name(circuit, is))),
            (Some(was), None) => old.map(|circuit| format!("removed: {}", name(circuit, was))),
            (None, None) => None,
        };
        text.push_str(&wrapped(&title.unwrap_or_default(), "", "  ", look.width()));
        text.push_str(&table(&rows(change), "  ", look.width()));
    }
    if !text.is_empty() {
        text.push('\n');
    }
    text
}

/// `U2 AMS1117-3.3 · +5V → +3V3`
fn name(circuit: &Circuit, regulator: &Regulator) -> String {
    let device = circuit.device(regulator.device);
    let net =
        |net: Option<NetId>| net.map_or_else(|| "open".to_owned(), |net| inert(&circuit.net(net).name).into_owned());
    let nets = format!("{} → {}", net(regulator.input_net), net(regulator.output_net));
    format!("{} {} · {nets}", inert(&device.reference), inert(device.value.trim()))
}

fn rows(change: &RegulatorChange<'_>) -> Vec<Vec<String>> {
    let row = |name: String, is: String, was: String| vec![name, is, format!("was {was}")];
    let word = |word: &Option<String>| word.as_ref().map_or_else(|| "none".to_owned(), |it| inert(it).into_owned());
    let identity = change.identity.iter().map(|each| row(each.name.to_owned(), word(&each.is), word(&each.was)));
    let net = |net: &Option<String>| net.as_ref().map_or_else(|| "open".to_owned(), |it| inert(it).into_owned());
    let moved = change.moved.iter().map(|each| row(pin(each), net(&each.is), net(&each.was)));
    let figure =
        |each: &Change<Shown>| row(each.name.replace('_', " "), shown(each.is.as_ref()), shown(each.was.as_ref()));
    identity.chain(moved).chain(change.figures.iter().map(figure)).collect()
}

fn pin(moved: &Moved) -> String {
    format!("pin {} {}", inert(&moved.pin), inert(&moved.name)).trim_end().to_owned()
}

fn shown(value: Option<&Shown>) -> String {
    match value {
        None => "none".to_owned(),
        Some(Shown::Figure(figure)) => range(figure),
        Some(Shown::Flag(flag)) => if *flag { "yes" } else { "no" }.to_owned(),
        Some(Shown::Word(word)) => inert(word).into_owned(),
    }
}

fn summary(comparison: &Comparison<'_>) -> String {
    let findings = comparison.findings.len();
    if comparison.is_empty() {
        return format!("No difference: {findings} finding{} as before", plural(findings));
    }
    let mut parts: Vec<String> = Vec::new();
    for (count, word) in [
        (comparison.count(State::New), "new"),
        (comparison.count(State::Worse), "worse"),
        (comparison.count(State::Better), "better"),
        (comparison.count(State::Changed), "changed"),
        (comparison.gone.len(), "gone"),
        (comparison.count(State::Same), "as before"),
    ] {
        if count > 0 {
            parts.push(format!("{count} {word}"));
        }
    }
    let regulators = comparison.regulators.len();
    let findings = if parts.is_empty() { "none".to_owned() } else { parts.join(", ") };
    format!("Findings: {findings}; {regulators} regulator{} changed", plural(regulators))
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
    format!("\n{}", wrapped(&line, "", "  ", look.width()))
}
