//! Figures with what they rest on.

use std::collections::BTreeSet;

use super::inert::{inert, inert_short};
use super::layout::table;
use crate::quantity::{Evidence, Grade, Quantity, print_amount, print_range};

/// Most guesses told of one figure.
const MOST_GUESSES: usize = 2;
/// Most things of one kind that are named.
const MOST_NAMES: usize = 3;
/// Most characters of a source.
const SOURCE: usize = 90;

/// Figures as an aligned table: name, range, what it rests on.
pub(super) fn figures(list: &[(String, Quantity)], indent: &str, width: usize) -> String {
    let mut told = BTreeSet::new();
    let rows: Vec<Vec<String>> = list
        .iter()
        .map(|(name, figure)| vec![last(name).replace('_', " "), range(figure), evidence(figure, &mut told)])
        .collect();
    table(&rows, indent, width)
}

/// A figure's range, or that it is not known.
pub(super) fn range(figure: &Quantity) -> String {
    figure.shown().map_or_else(|| "not known".to_owned(), |range| print_range(range, figure.dimension()))
}

/// What a figure rests on in a few words: what is missing, the guesses that move it most, sheets, declarations, what is
/// drawn. A guess that is in `told` was explained further up and is only named.
pub(super) fn evidence(figure: &Quantity, told: &mut BTreeSet<String>) -> String {
    let mut phrases: Vec<String> = Vec::new();
    let missing: Vec<String> = figure.missing_evidence().map(|evidence| inert(&evidence.what).into_owned()).collect();
    phrases.extend(listed("not known: ", &missing));
    phrases.extend(guesses(figure, told));
    let of = |grade| figure.evidence().filter(move |evidence| evidence.grade == grade);
    let titles = distinct(of(Grade::Published).map(|evidence| title(&evidence.source)));
    phrases.extend(listed("", &titles));
    let places = distinct(of(Grade::Declared).map(|evidence| inert_short(&evidence.source, SOURCE)));
    phrases.extend(listed("declared, ", &shared_file(&places)));
    phrases.extend(listed("symbol text of ", &distinct(of(Grade::Described).map(|evidence| about(&evidence.what)))));
    phrases.extend(listed("drawn, ", &distinct(of(Grade::Drawn).map(|evidence| about(&evidence.what)))));
    phrases.join("; ")
}

/// What a figure hangs on most, in a few words: what is missing, else the guess that moves it most, else where its
/// facts come from.
pub(super) fn gist(figure: &Quantity) -> String {
    let missing = figure.missing_evidence().next();
    let guess = figure.guesses().max_by(|one, other| one.moves.total_cmp(&other.moves));
    let counted = |text: String, more: usize| if more > 0 { format!("{text} and {more} more") } else { text };
    if let Some(missing) = missing {
        return counted(
            format!("not known: {}", inert_short(&missing.what, SOURCE)),
            figure.missing_evidence().count() - 1,
        );
    }
    if let Some(guess) = guess {
        let what = inert_short(&guess.evidence.what, SOURCE);
        return counted(format!("guess: {what}"), figure.guesses().count() - 1);
    }
    for grade in [Grade::Declared, Grade::Published, Grade::Described, Grade::Drawn] {
        let all =
            distinct(figure.evidence().filter(|evidence| evidence.grade == grade).map(|evidence| match grade {
                Grade::Drawn => about(&evidence.what),
                _ => title(&evidence.source),
            }));
        if let Some((first, rest)) = all.split_first() {
            return match grade {
                Grade::Published => counted(first.clone(), rest.len()),
                grade => counted(format!("{grade}, {first}"), rest.len()),
            };
        }
    }
    String::new()
}

fn guesses(figure: &Quantity, told: &mut BTreeSet<String>) -> Vec<String> {
    let mut guesses: Vec<_> = figure.guesses().collect();
    guesses.sort_by(|one, other| other.moves.total_cmp(&one.moves));
    let mut phrases: Vec<String> = Vec::new();
    for guess in guesses.iter().take(MOST_GUESSES) {
        phrases.push(format!("guess: {}", guessed(&guess.evidence, told)));
    }
    match guesses.len().saturating_sub(MOST_GUESSES) {
        0 => {}
        1 => phrases.push("1 more guess".to_owned()),
        more => phrases.push(format!("{more} more guesses")),
    }
    phrases
}

/// `load on +5V (no load declared)`.
fn guessed(evidence: &Evidence, told: &mut BTreeSet<String>) -> String {
    let what = inert_short(&evidence.what, SOURCE);
    if told.insert(evidence.key.as_str().to_owned()) && !evidence.source.is_empty() {
        let recalled = evidence.source.ends_with("recalled") && !evidence.what.contains("recalled");
        let title = title(&evidence.source);
        format!("{what} ({title}{})", if recalled && !title.ends_with("recalled") { ", recalled" } else { "" })
    } else {
        what
    }
}

/// A data sheet's title without its date and sections; another source as it is. `explain` and JSON have the whole.
pub(super) fn title(source: &str) -> String {
    let sheet = source.find("data sheet").and_then(|at| {
        let end = source.get(at..)?.find([',', '(', ';'])?;
        source.get(..at + end)
    });
    inert_short(sheet.unwrap_or(source).trim_end(), SOURCE)
}

/// The name behind `capacitance of C7`, or the whole.
fn about(what: &str) -> String {
    let name = what.rsplit_once(" of ").map_or(what, |(_, name)| name);
    inert_short(name, SOURCE)
}

fn distinct(texts: impl Iterator<Item = String>) -> Vec<String> {
    let mut known: Vec<String> = Vec::new();
    for text in texts {
        if !known.contains(&text) {
            known.push(text);
        }
    }
    known
}

/// `a.toml:9`, `a.toml:17` as `a.toml:9`, `:17`.
fn shared_file(places: &[String]) -> Vec<String> {
    let mut last = "";
    let mut shown = Vec::new();
    for place in places {
        let (file, line) = place.rsplit_once(':').unwrap_or((place, ""));
        shown.push(if file == last && !line.is_empty() { format!(":{line}") } else { place.clone() });
        last = file;
    }
    shown
}

/// Some names behind a few words; the rest are counted.
fn listed(what: &str, names: &[String]) -> Option<String> {
    let shown: Vec<&str> = names.iter().take(MOST_NAMES).map(String::as_str).collect();
    let more = names.len() - shown.len();
    let rest = if more > 0 { format!(" and {more} more") } else { String::new() };
    (!shown.is_empty()).then(|| format!("{what}{}{rest}", shown.join(", ")))
}

/// Everything behind a figure, one piece each: grade, what it is, its source in short, and how far a guess moves it.
pub(super) fn every_evidence(figure: &Quantity) -> Vec<String> {
    let told =
        |evidence: &Evidence| format!("{}: {}, {}", evidence.grade, inert(&evidence.what), title(&evidence.source));
    let mut pieces: Vec<String> =
        figure.missing_evidence().map(|evidence| format!("not known: {}", inert(&evidence.what))).collect();
    for evidence in figure.evidence() {
        let moves = figure.guesses().find(|guess| guess.evidence.key == evidence.key).map(|guess| guess.moves);
        let moves = moves.filter(|moves| *moves > 0.0 && moves.is_finite());
        let tail = moves
            .map_or_else(String::new, |moves| format!("; moves it by {}", print_amount(moves, figure.dimension())));
        pieces.push(told(evidence) + &tail);
    }
    pieces
}

/// The figure's own name: that of a member of a group is written `one.esr`, and the finding names the member.
fn last(name: &str) -> &str {
    name.rsplit('.').next().unwrap_or(name)
}
