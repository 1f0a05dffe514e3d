//! Figures by name, each with the numbers of the facts and guesses that it rests on; what these are stands once.

use std::collections::BTreeMap;

use super::figures::range;
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use crate::checks::Figures;
use crate::facts::{DEFINITIONS, Facts, Subject, Value};
use crate::quantity::{Evidence, Quantity, print_amount};

/// Facts and guesses, numbered as they are cited.
#[derive(Debug, Default)]
struct Grounds {
    all: Vec<Evidence>,
    numbers: BTreeMap<String, usize>,
}

impl Grounds {
    /// The number of a fact or guess, from 1.
    fn number(&mut self, evidence: &Evidence) -> usize {
        if let Some(number) = self.numbers.get(evidence.key.as_str()) {
            return *number;
        }
        self.all.push(evidence.clone());
        self.numbers.insert(evidence.key.as_str().to_owned(), self.all.len());
        self.all.len()
    }

    /// `guess 4 moves it by 754 mV; on 1, 2, 5..9`: what a figure rests on.
    fn cited(&mut self, figure: &Quantity) -> String {
        let mut phrases: Vec<String> = Vec::new();
        let missing: Vec<usize> = figure.missing_evidence().map(|evidence| self.number(evidence)).collect();
        if !missing.is_empty() {
            phrases.push(format!("for lack of {}", runs(missing)));
        }
        let mut guesses: Vec<_> = figure.guesses().collect();
        guesses.sort_by(|one, other| other.moves.total_cmp(&one.moves));
        let moving = guesses.iter().filter(|guess| guess.moves > 0.0 && guess.moves.is_finite()).map(|guess| {
            let moves = print_amount(guess.moves, figure.dimension());
            format!("guess {} moves it by {moves}", self.number(&guess.evidence))
        });
        phrases.extend(moving);
        let still = guesses.iter().filter(|guess| !(guess.moves > 0.0 && guess.moves.is_finite()));
        let still: Vec<usize> = still.map(|guess| self.number(&guess.evidence)).collect();
        if !still.is_empty() {
            phrases.push(format!("guess {}", runs(still)));
        }
        let facts: Vec<usize> = figure
            .evidence()
            .filter(|evidence| evidence.grade.is_fact())
            .map(|evidence| self.number(evidence))
            .collect();
        if !facts.is_empty() {
            phrases.push(format!("on {}", runs(facts)));
        }
        phrases.join("; ")
    }

    fn cited_alone(&mut self, evidence: Option<&Evidence>) -> String {
        let Some(evidence) = evidence else { return String::new() };
        let word = if evidence.grade.is_fact() { "on" } else { "guess" };
        format!("{word} {}", self.number(evidence))
    }

    fn list(&self, look: Look) -> String {
        let row = |(index, evidence): (usize, &Evidence)| {
            let source = if evidence.source.is_empty() { String::new() } else { format!(", {}", evidence.source) };
            vec![
                (index + 1).to_string(),
                evidence.grade.name().to_owned(),
                inert(&format!("{}{source}", evidence.what)).into_owned(),
            ]
        };
        let rows: Vec<Vec<String>> = self.all.iter().enumerate().map(row).collect();
        table(&rows, "  ", look.width())
    }
}

/// Numbers in order, runs of three or more as `5..9`.
fn runs(mut numbers: Vec<usize>) -> String {
    numbers.sort_unstable();
    numbers.dedup();
    let mut parts: Vec<(usize, usize)> = Vec::new();
    for number in numbers {
        match parts.last_mut() {
            Some((_, last)) if *last + 1 == number => *last = number,
            _ => parts.push((number, number)),
        }
    }
    let shown = parts.iter().map(|(first, last)| match last - first {
        0 => first.to_string(),
        1 => format!("{first}, {last}"),
        _ => format!("{first}..{last}"),
    });
    shown.collect::<Vec<_>>().join(", ")
}

/// Every figure of a subject, what does not apply to it, and what it all rests on.
pub(super) fn figures(facts: &Facts<'_>, subject: Subject, look: Look) -> String {
    let mut grounds = Grounds::default();
    let mut rows = Vec::new();
    let mut not_applying: BTreeMap<String, Vec<String>> = BTreeMap::new();
    let names = DEFINITIONS.iter().flat_map(|file| file.iter()).filter(|entry| entry.of == subject.kind());
    for entry in names.filter(|entry| entry.name != "subject") {
        let name = entry.name.replace('_', " ");
        match facts.value(subject, entry.name) {
            Value::Figure(figure) => rows.push(vec![name, range(&figure), grounds.cited(&figure)]),
            Value::Word(word) if word.word.is_empty() => {}
            Value::Word(word) => {
                let cited = grounds.cited_alone(word.evidence.as_ref());
                rows.push(vec![name, inert(&word.word).into_owned(), cited]);
            }
            Value::Flag(flag) => {
                let cited = grounds.cited_alone(flag.evidence.as_ref());
                rows.push(vec![name, if flag.holds { "yes" } else { "no" }.to_owned(), cited]);
            }
            Value::Group(members) => {
                let labels: Vec<String> = members.iter().map(|member| facts.label(*member)).collect();
                rows.push(vec![name, members.len().to_string(), inert(&labels.join(", ")).into_owned()]);
            }
            Value::Inapplicable(reason) => not_applying.entry(reason).or_default().push(name),
        }
    }
    let mut text = table(&rows, "  ", look.width());
    for (reason, names) in &not_applying {
        let line = format!("{}: no {}", inert(reason), names.join(", "));
        text.push_str(&wrapped(&line, "  ", "    ", look.width()));
    }
    if !grounds.all.is_empty() {
        text.push_str(&format!("\n{}{}", look.bold("Facts and guesses\n"), grounds.list(look)));
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{Dimension, Grade, Pair, Range};

    #[test]
    fn numbers_in_a_row_are_a_range() {
        assert_eq!(runs(vec![9, 1, 2, 5, 6, 7, 7]), "1, 2, 5..7, 9");
        assert_eq!(runs(Vec::new()), "");
    }

    #[test]
    fn what_a_figure_rests_on_is_numbered_once() {
        let figure = |grade, what: &str| {
            let evidence = Evidence::new(grade, what, "test");
            Quantity::given(Dimension::VOLTAGE, Range::between(1.0, 2.0), Pair::ANY, evidence)
        };
        let mut grounds = Grounds::default();
        let fact = figure(Grade::Declared, "a");
        assert_eq!(grounds.cited(&fact), "on 1");
        assert_eq!(grounds.cited(&fact.plus(&figure(Grade::Assumed, "b"))), "guess 2 moves it by 1 V; on 1");
        let missing = Evidence::new(Grade::Assumed, "c", "nothing tells it");
        let missing = Quantity::missing(Dimension::VOLTAGE, Pair::ANY, missing);
        assert_eq!(grounds.cited(&fact.plus(&missing)), "for lack of 3; on 1");
    }
}
