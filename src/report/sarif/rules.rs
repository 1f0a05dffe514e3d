//! Checks as rules of the format.

use std::collections::BTreeMap;

use super::log::{Configuration, Descriptor, Help, RuleProperties, Text};
use super::message::{markdown, plain, sentence};
use crate::checks::{Check, Citation, Level, Verdict};
use crate::report::board::BoardResult;
use crate::review::{REVIEW_CHECKS, ReviewCheck};

/// What the verdicts mean, for a reader who sees a finding alone.
const VERDICTS: &str = "What fails rests on facts alone: what is declared, drawn or published. What is doubtful or \
                        tight hangs on a guess, and what is unknown on a figure that is missing; a declaration in \
                        the board file settles it.";

/// The rules of a run, by name.
#[derive(Debug)]
pub(super) struct Rules(BTreeMap<String, Descriptor>);

impl Rules {
    /// Every check that the boards were judged by, and those of the review.
    pub(super) fn of(boards: &[&BoardResult]) -> Self {
        let mut rules = BTreeMap::new();
        for check in boards.iter().flat_map(|board| board.checks.iter()) {
            rules.entry(check.name.clone()).or_insert_with(|| of_check(check));
        }
        // No folder may have the name of a check of the review.
        rules.extend(REVIEW_CHECKS.iter().map(|check| (check.name.to_owned(), of_review(check))));
        Self(rules)
    }

    /// Where a rule is listed.
    pub(super) fn index(&self, name: &str) -> usize {
        self.0.keys().take_while(|known| known.as_str() < name).count()
    }

    pub(super) fn into_descriptors(self) -> Vec<Descriptor> {
        self.0.into_values().collect()
    }
}

fn of_check(check: &Check) -> Descriptor {
    let sources: Vec<String> = check.sources.iter().map(source).collect();
    let explain = format!("railworthy explain {}", check.name);
    let level = level(check);
    Descriptor {
        id: check.name.clone(),
        name: pascal(&check.name),
        short_description: Text::new(sentence(&check.asks)),
        full_description: Text::new(format!("{} {VERDICTS}", sentence(&check.asks))),
        help: help(&check.asks, &sources, &explain),
        default_configuration: Configuration { level: level.name() },
        properties: Some(RuleProperties {
            severity: severity(level),
            tags: check.group.iter().map(|group| plain(group)).collect(),
        }),
    }
}

/// A check of the review, whose findings are warnings.
fn of_review(check: &ReviewCheck) -> Descriptor {
    let level = Level::Warning;
    Descriptor {
        id: check.name.to_owned(),
        name: pascal(check.name),
        short_description: Text::new(sentence(check.asks)),
        full_description: Text::new(format!("{} {}", sentence(check.asks), sentence(check.grounds))),
        help: help(check.asks, &[check.grounds.to_owned()], &format!("railworthy explain {}", check.name)),
        default_configuration: Configuration { level: level.name() },
        properties: Some(RuleProperties { severity: severity(level), tags: vec![plain(check.group)] }),
    }
}

fn help(asks: &str, sources: &[String], explain: &str) -> Help {
    let mut text = sentence(asks);
    let mut page = format!("{}\n", markdown(asks));
    if !sources.is_empty() {
        text.push_str(&format!(" Rests on: {}", sentence(&sources.join("; "))));
        page.push_str("\nRests on:\n\n");
        page.extend(sources.iter().map(|source| format!("- {}\n", markdown(source))));
    }
    text.push_str(&format!(" In full: {explain}."));
    page.push_str(&format!("\nIn full: `{explain}`\n"));
    Help { text, markdown: page }
}

fn source(source: &Citation) -> String {
    let (title, note) = match source {
        Citation::Source { title, note } => (title.as_str(), note),
        Citation::CommonPractice(note) => ("common practice", note),
    };
    if note.is_empty() { title.to_owned() } else { format!("{title}: {note}") }
}

/// The level of the worst verdict that a check gives.
fn level(check: &Check) -> Level {
    let caps = check.requires.iter().map(|rule| {
        let caps = [rule.at_most, check.at_most];
        caps.into_iter().flatten().max().unwrap_or(Verdict::Fails)
    });
    caps.min().and_then(Verdict::level).unwrap_or(Level::Note)
}

fn severity(level: Level) -> &'static str {
    match level {
        Level::Error => "error",
        Level::Warning => "warning",
        Level::Note => "recommendation",
    }
}

/// `esr-window` as `EsrWindow`; none where that is the same word, for a name must say more than the id.
pub(super) fn pascal(name: &str) -> Option<String> {
    if !name.contains('-') {
        return None;
    }
    let words = name.split('-').map(|word| {
        let mut signs = word.chars();
        signs.next().map(|first| first.to_uppercase().chain(signs).collect::<String>()).unwrap_or_default()
    });
    Some(words.collect())
}
