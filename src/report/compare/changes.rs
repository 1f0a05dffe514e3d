//! What changed, in words.

use crate::circuit::{Circuit, NetId};
use crate::quantity::{Dimension, print_amount};
use crate::recognize::Regulator;
use crate::report::figures::range;
use crate::report::inert::inert;
use crate::report::json_rails::FACTS;
use crate::report::text::plural;
use crate::review::compare::{Change, Compared, Comparison, Moved, RegulatorChange, Shown, State, Why};
use crate::review::{Examination, Reviewed};

/// Most figures of a regulator that are shown whatever they are; of more, the chief ones.
const MOST_FIGURES: usize = 12;
/// Where the others are.
const LISTED: &str = "`--format json` lists them";

/// What a finding was: `was doubtful`, `was accepted`; of a new one, what stood before it.
pub(super) fn before(each: &Compared<'_>) -> Option<String> {
    let Some(was) = each.was else {
        return each.behind.map(|behind| format!("untold before, behind {}", inert(&behind.finding.check)));
    };
    if was.accepted.is_some() && each.now.accepted.is_none() {
        return Some(format!("was accepted, as {}", was.finding.verdict));
    }
    Some(format!("was {}", was.finding.verdict))
}

/// What became of a finding that is better.
pub(super) fn better(each: &Compared<'_>) -> String {
    match each.now.accepted.as_ref().filter(|_| each.was.is_some_and(|was| was.accepted.is_none())) {
        Some(accepted) => format!("accepted now: {}", inert(&accepted.reason)),
        None => before(each).unwrap_or_default(),
    }
}

/// How far a finding moved.
pub(super) fn slacks(each: &Compared<'_>) -> String {
    let slack = |found: &Reviewed| found.finding.slack.filter(|(value, _)| value.is_finite());
    match (slack(each.now), each.was.and_then(slack)) {
        (Some(is), Some(was)) => format!("slack {}, was {}", amount(is), amount(was)),
        _ => "by other figures than before".to_owned(),
    }
}

fn amount((value, dimension): (f64, Dimension)) -> String {
    print_amount(value, dimension)
}

/// Why a finding is gone.
pub(super) fn reason(why: Why) -> &'static str {
    match why {
        Why::Removed => "what it was about is not there any more",
        Why::Covered => "another finding stands before it now",
        Why::Holds => "it holds now",
        Why::NotAsked => "it is not asked any more",
    }
}

/// What a regulator is called, where it was added or removed that too.
pub(super) fn title(change: &RegulatorChange<'_>, old: Option<&Examination>, new: Option<&Examination>) -> String {
    let of = |board: Option<&Examination>, regulator: &Regulator| {
        board.map(|board| name(&board.design.circuit, regulator)).unwrap_or_default()
    };
    match (change.was, change.is) {
        (Some(_), Some(is)) => of(new, is),
        (None, Some(is)) => format!("added: {}", of(new, is)),
        (Some(was), None) => format!("removed: {}", of(old, was)),
        (None, None) => String::new(),
    }
}

/// `U2 AMS1117-3.3 · +5V → +3V3`
fn name(circuit: &Circuit, regulator: &Regulator) -> String {
    let device = circuit.device(regulator.device);
    let net =
        |net: Option<NetId>| net.map_or_else(|| "open".to_owned(), |net| inert(&circuit.net(net).name).into_owned());
    let nets = format!("{} → {}", net(regulator.input_net), net(regulator.output_net));
    format!("{} {} · {nets}", inert(&device.reference), inert(device.value.trim()))
}

/// What changed of a regulator: name, what it is, what it was.
pub(super) fn rows(change: &RegulatorChange<'_>) -> Vec<Vec<String>> {
    let row = |name: String, is: String, was: String| vec![name, is, format!("was {was}")];
    let word = |word: &Option<String>| word.as_ref().map_or_else(|| "none".to_owned(), |it| inert(it).into_owned());
    let identity = change.identity.iter().map(|each| row(each.name.to_owned(), word(&each.is), word(&each.was)));
    let net = |net: &Option<String>| net.as_ref().map_or_else(|| "open".to_owned(), |it| inert(it).into_owned());
    let moved = change.moved.iter().map(|each| row(pin(each), net(&each.is), net(&each.was)));
    let figure =
        |each: &Change<Shown>| row(each.name.replace('_', " "), shown(each.is.as_ref()), shown(each.was.as_ref()));
    let few = change.figures.len() <= MOST_FIGURES;
    let (first, rest): (Vec<_>, Vec<_>) = change.figures.iter().partition(|each| few || FACTS.contains(&each.name));
    let more = (!rest.is_empty()).then(|| vec![format!("{} more", rest.len()), String::new(), LISTED.to_owned()]);
    identity.chain(moved).chain(first.into_iter().map(figure)).chain(more).collect()
}

fn pin(moved: &Moved) -> String {
    match &moved.pin {
        Some(number) => format!("pin {} {}", inert(number), inert(&moved.name)).trim_end().to_owned(),
        None => inert(&moved.name).into_owned(),
    }
}

fn shown(value: Option<&Shown>) -> String {
    match value {
        None => "none".to_owned(),
        Some(Shown::Figure(figure)) => range(figure),
        Some(Shown::Flag(flag)) => if *flag { "yes" } else { "no" }.to_owned(),
        Some(Shown::Word(word)) => inert(word).into_owned(),
    }
}

/// How many findings came to what.
pub(super) fn summary(comparison: &Comparison<'_>) -> String {
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
