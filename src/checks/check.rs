//! A check: what it asks of which subjects, and how it says what it found.

use std::collections::{BTreeMap, BTreeSet};

use super::language::{Condition, Requirement};
use super::template::Template;
use super::verdict::Verdict;
use crate::facts::{SubjectKind, definition};
use crate::quantity::{Dimension, Quantity};

/// A check, loaded and typed.
#[derive(Debug, Clone)]
pub struct Check {
    /// Its name, kebab-case, that of its folder.
    pub name: String,
    /// What it is about.
    pub about: SubjectKind,
    /// The question it asks.
    pub asks: String,
    /// The group under which a catalog lists it.
    pub group: Option<String>,
    /// Which subjects it is asked of; every one where none.
    pub when: Option<Condition>,
    /// That condition as written.
    pub when_text: Option<String>,
    /// What it requires, in the order of the file; at least one.
    pub requires: Vec<Rule>,
    /// The worst verdict that it gives.
    pub at_most: Option<Verdict>,
    /// Checks whose finding about the same subject makes this one superfluous.
    pub suppressed_by: Vec<String>,
    /// Its settings with their values, by name.
    pub settings: BTreeMap<String, Quantity>,
    /// Its settings as written.
    pub settings_text: BTreeMap<String, String>,
    /// How it says what it found.
    pub says: Says,
    /// What to do.
    pub hints: Vec<Template>,
    /// What a diagnostic points at.
    pub points: Points,
    /// What it rests on.
    pub sources: Vec<Citation>,
    /// The file it comes from, as problems name it.
    pub file: String,
}

/// One of the requirements of a check.
#[derive(Debug, Clone, PartialEq)]
pub struct Rule {
    /// When it is asked; always where none.
    pub when: Option<Condition>,
    /// That condition as written.
    pub when_text: Option<String>,
    /// What must hold.
    pub holds: Requirement,
    /// The requirement as written.
    pub text: String,
    /// The worst verdict that it gives.
    pub at_most: Option<Verdict>,
    /// Its own sentences, where it has some.
    pub says: Says,
    /// Its own hints; those of the check where empty.
    pub hints: Vec<Template>,
}

/// The sentences of the verdicts. A verdict without one takes that of the next: `tight` that of `doubtful`, `doubtful`
/// that of `fails`, `fails` that of `doubtful`.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Says {
    /// For what fails.
    pub fails: Option<Template>,
    /// For what is doubtful.
    pub doubtful: Option<Template>,
    /// For what is tight.
    pub tight: Option<Template>,
    /// For what is unknown.
    pub unknown: Option<Template>,
}

impl Says {
    /// The sentence for a verdict.
    #[must_use]
    pub fn sentence(&self, verdict: Verdict) -> Option<&Template> {
        let (fails, doubtful, tight) = (self.fails.as_ref(), self.doubtful.as_ref(), self.tight.as_ref());
        match verdict {
            Verdict::Fails => fails.or(doubtful).or(tight),
            Verdict::Doubtful => doubtful.or(fails).or(tight),
            Verdict::Tight => tight.or(doubtful).or(fails),
            Verdict::Unknown => self.unknown.as_ref(),
            Verdict::Holds => None,
        }
    }

    /// Whether it has a sentence for what fails, is doubtful or tight.
    #[must_use]
    pub fn speaks(&self) -> bool {
        self.fails.is_some() || self.doubtful.is_some() || self.tight.is_some()
    }
}

/// What a diagnostic points at: names of words or groups of the subject, or `subject`.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Points {
    /// What is underlined.
    pub primary: String,
    /// What is marked besides.
    pub also: Vec<String>,
    /// Figures of the subject that are listed before those that decide.
    pub figures: Vec<String>,
}

/// What a check rests on.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Citation {
    /// A source with what of it matters.
    Source {
        /// Title with revision and section.
        title: String,
        /// What it says, in own words; empty where the title tells.
        note: String,
    },
    /// Common practice, with a remark.
    CommonPractice(String),
}

impl Check {
    /// The figures that its requirements and conditions name, sorted.
    #[must_use]
    pub fn figures(&self) -> Vec<String> {
        let rules = self.requires.iter().flat_map(|rule| [Some(rule.text.as_str()), rule.when_text.as_deref()]);
        let texts = rules.chain([self.when_text.as_deref()]).flatten();
        let known = |word: &&str| definition(self.about, word).is_some();
        texts.flat_map(names).filter(known).map(str::to_owned).collect::<BTreeSet<_>>().into_iter().collect()
    }

    /// The dimensions of its settings.
    #[must_use]
    pub fn setting_dimensions(&self) -> BTreeMap<String, Dimension> {
        self.settings.iter().map(|(name, value)| (name.clone(), value.dimension())).collect()
    }
}

/// The words of an expression that can be names: not those of a set, nor what a word is compared with.
fn names(text: &str) -> impl Iterator<Item = &str> {
    let outside = text.split('{').map(|part| part.rsplit('}').next().unwrap_or(""));
    outside.flat_map(|part| {
        let compared = part.split("==").flat_map(|side| side.split("!="));
        compared.enumerate().flat_map(|(index, side)| {
            let words = side.split(|sign: char| !(sign.is_ascii_alphanumeric() || sign == '_'));
            words.filter(|word| !word.is_empty()).skip(usize::from(index > 0))
        })
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words_that_are_compared_with_are_no_names() {
        let found = |text: &str| names(text).collect::<Vec<_>>().join(" ");
        assert_eq!(found("kind in {series, reference} and a >= b"), "kind in and a b");
        assert_eq!(found("kind == reference and reference > 1"), "kind and reference 1");
        assert_eq!(found("mode != fixed or abs(x - y) <= 0.5 * z"), "mode or abs x y 0 5 z");
    }
}
