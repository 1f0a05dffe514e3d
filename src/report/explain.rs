//! What a check asks, and on what grounds.

use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use crate::checks::{Check, Citation, Rule};
use crate::review::ReviewCheck;

/// A check in full: its question, requirements, settings and sources.
#[must_use]
pub fn explain_check(check: &Check, look: Look) -> String {
    let width = look.width();
    let mut text = look.bold(&inert(&check.name));
    text.push_str(&format!(": {}\n", inert(&check.asks)));
    let mut about = format!("asked of every {}", check.about.name());
    if let Some(when) = &check.when_text {
        about.push_str(&format!(" for which {}", inert(when)));
    }
    text.push_str(&wrapped(&about, "", "  ", width));
    for other in &check.suppressed_by {
        text.push_str(&format!("silent where {} finds as much or more\n", inert(other)));
    }
    text.push_str(&format!("\n{}", look.bold("Requires\n")));
    for rule in &check.requires {
        text.push_str(&requirement(check, rule, look));
    }
    if !check.settings_text.is_empty() {
        text.push_str(&format!("\n{}", look.bold("Settings")));
        text.push_str(&format!(" (in a board file under [check.{}])\n", inert(&check.name)));
        let rows: Vec<Vec<String>> = check
            .settings_text
            .iter()
            .map(|(name, value)| vec![inert(name).into_owned(), format!("\"{}\"", inert(value))])
            .collect();
        text.push_str(&table(&rows, "  ", width));
    }
    text.push_str(&format!("\n{}", look.bold("Rests on\n")));
    for source in &check.sources {
        let line = match source {
            Citation::Source { title, note } if note.is_empty() => title.clone(),
            Citation::Source { title, note } => format!("{title}: {note}"),
            Citation::CommonPractice(note) if note.is_empty() => "common practice".to_owned(),
            Citation::CommonPractice(note) => format!("common practice: {note}"),
        };
        text.push_str(&wrapped(&inert(&line), "  ", "    ", width));
    }
    text.push_str(&format!("\nfile: {}\n", inert(&check.file)));
    super::guarded(&text)
}

/// A check of the review: its question and what it rests on.
#[must_use]
pub fn explain_review_check(check: &ReviewCheck, look: Look) -> String {
    let mut text = look.bold(check.name);
    text.push_str(&format!(": {}\n", check.asks));
    text.push_str(&wrapped("asked of the review itself; what it finds is a warning", "", "  ", look.width()));
    text.push_str(&format!("\n{}", look.bold("Rests on\n")));
    text.push_str(&wrapped(check.grounds, "  ", "    ", look.width()));
    super::guarded(&text)
}

fn requirement(check: &Check, rule: &Rule, look: Look) -> String {
    let mut text = wrapped(&inert(&rule.text), "  ", "      ", look.width());
    if let Some(when) = &rule.when_text {
        text.push_str(&wrapped(&inert(when), "    when ", "         ", look.width()));
    }
    if let Some(cap) = rule.at_most.or(check.at_most) {
        text.push_str(&format!("    at most {cap}\n"));
    }
    text
}
