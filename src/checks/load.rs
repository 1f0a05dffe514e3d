//! Reads `check.toml`.

use std::collections::BTreeMap;

use super::check::{Check, Citation, Points, Rule, Says};
use super::language::{Condition, Names, Refusal, Requirement, Scope, constant, expression, sentence};
use super::template::Template;
use super::verdict::Verdict;
use crate::facts::{SubjectKind, ValueKind};
use crate::quantity::{Dimension, Quantity};
use crate::source::toml::{Document, Table, Text, nearest};
use crate::source::{Problem, Source};

/// Reads a check. The value is `None` where an error leaves nothing that could be asked; every problem is listed, in
/// order of place.
#[must_use]
pub fn read(folder: &str, source: &Source, names: &dyn Names) -> (Option<Check>, Vec<Problem>) {
    let document = match Document::parse(source) {
        Ok(document) => document,
        Err(problem) => return (None, vec![*problem]),
    };
    let check = Reader { document: &document, names, about: SubjectKind::Regulator }.check(folder);
    let problems = document.into_problems();
    (check.filter(|_| problems.is_empty()), problems)
}

struct Reader<'a> {
    document: &'a Document,
    names: &'a dyn Names,
    about: SubjectKind,
}

impl<'a> Reader<'a> {
    fn check(&mut self, folder: &str) -> Option<Check> {
        let mut root = self.document.root();
        let name = self.name(&mut root, folder);
        let about = self.about(&mut root);
        let asks = root.require("asks").and_then(|value| value.text());
        let group = root.text("group").map(|text| text.as_str().to_owned());
        let when = root.text("when");
        let when_text = when.as_ref().map(|text| text.as_str().to_owned());
        let at_most = self.cap(&mut root);
        let suppressed_by = root.texts("suppressed_by").iter().map(|text| text.as_str().to_owned()).collect();
        let (settings, settings_text) = self.settings(&mut root);
        let sources = self.sources(&mut root);
        let Some(about) = about else {
            // Without its kind of subject no name can be looked up: what is not a key is all that can still be said.
            for key in ["holds", "requires", "says", "points", "hints"] {
                root.take(key);
            }
            root.finish();
            return None;
        };
        self.about = about;
        let dimensions = settings.iter().map(|(name, value): (&String, &Quantity)| (name.clone(), value.dimension()));
        let dimensions: BTreeMap<String, Dimension> = dimensions.collect();
        let when = when.and_then(|text| self.guard(&text, &dimensions));
        let requires = self.requires(&mut root, &dimensions);
        let says = root.table("says").map(|table| self.says(table, &dimensions, None)).unwrap_or_default();
        let hints = self.hints(&mut root, &dimensions);
        let points = self.points(&mut root, &requires);
        let silent = !says.speaks() && requires.iter().any(|rule| !rule.says.speaks());
        if silent && !self.document.has_problems() {
            root.refuse(
                "the check has no sentence for what it finds",
                "`[says]` is missing or empty",
                "add `[says]` with `fails = \"…\"` or `doubtful = \"…\"`",
            );
        }
        root.finish();
        Some(Check {
            name: name?,
            about: self.about,
            asks: asks?.as_str().to_owned(),
            group,
            when,
            when_text,
            requires,
            at_most,
            suppressed_by,
            settings,
            settings_text,
            says,
            hints,
            points,
            sources,
            file: self.document.source().name().to_owned(),
        })
    }

    fn name(&self, root: &mut Table<'a>, folder: &str) -> Option<String> {
        let text = root.require("name")?.text()?;
        let name = text.as_str();
        if !is_kebab(name) {
            text.refuse(
                "the name of a check is kebab-case",
                "not kebab-case",
                "lower-case letters, digits and hyphens: `output-capacitor`",
            );
            return None;
        }
        if name != folder {
            text.refuse(
                format!("the check is named `{name}` in the folder `{folder}`"),
                "another name",
                "name the folder and the check alike",
            );
            return None;
        }
        Some(name.to_owned())
    }

    fn about(&self, root: &mut Table<'a>) -> Option<SubjectKind> {
        let text = root.require("about")?.text()?;
        let found = SubjectKind::ALL.iter().find(|(_, name)| *name == text.as_str()).map(|(kind, _)| *kind);
        if found.is_none() {
            let names: Vec<&str> = SubjectKind::ALL.iter().map(|(_, name)| *name).collect();
            text.refuse(
                format!("a check cannot be about `{}`", text.as_str()),
                "unknown subject",
                format!("subjects: {}", names.join(", ")),
            );
        }
        found
    }

    fn cap(&self, table: &mut Table<'a>) -> Option<Verdict> {
        let text = table.text("at_most")?;
        match Verdict::of_name(text.as_str()) {
            Some(verdict @ (Verdict::Fails | Verdict::Doubtful | Verdict::Tight)) => Some(verdict),
            _ => {
                text.refuse(
                    "`at_most` names the worst verdict",
                    "no verdict for a cap",
                    "write `fails`, `doubtful` or `tight`",
                );
                None
            }
        }
    }

    fn settings(&self, root: &mut Table<'a>) -> (BTreeMap<String, Quantity>, BTreeMap<String, String>) {
        let (mut values, mut texts) = (BTreeMap::new(), BTreeMap::new());
        let Some(mut table) = root.table("settings") else { return (values, texts) };
        for entry in table.entries() {
            let Some(text) = entry.text() else { continue };
            if !is_snake(entry.key()) {
                self.document.refuse(
                    entry.key_span(),
                    "the name of a setting is snake_case",
                    "not snake_case",
                    "lower-case letters, digits and underscores: `spare_voltage`",
                );
            } else if SubjectKind::ALL.iter().any(|(kind, _)| self.names.kind(*kind, entry.key()).is_some()) {
                self.document.refuse(
                    entry.key_span(),
                    format!("`{}` is a figure already", entry.key()),
                    "taken",
                    "choose another name for the setting",
                );
            } else {
                match constant(text.as_str()) {
                    Ok((value, dimension)) => {
                        values.insert(entry.key().to_owned(), Quantity::constant(dimension, value));
                        texts.insert(entry.key().to_owned(), text.as_str().to_owned());
                    }
                    Err(refusal) => refusal.report(self.document, &text),
                }
            }
        }
        table.finish();
        (values, texts)
    }

    fn scope<'s>(&'s self, settings: &'s BTreeMap<String, Dimension>) -> Scope<'s> {
        Scope { names: self.names, about: self.about, settings, each: None }
    }

    fn told<T>(&self, text: &Text<'_>, result: Result<T, Refusal>) -> Option<T> {
        result.map_err(|refusal| refusal.report(self.document, text)).ok()
    }

    fn guard(&self, text: &Text<'_>, settings: &BTreeMap<String, Dimension>) -> Option<Condition> {
        let read = expression(text.as_str()).and_then(|node| self.scope(settings).condition(&node, true));
        self.told(text, read)
    }

    fn holds(&self, text: &Text<'_>, settings: &BTreeMap<String, Dimension>) -> Option<Requirement> {
        let read = sentence(text.as_str()).and_then(|sentence| self.scope(settings).requirement(&sentence));
        self.told(text, read)
    }

    fn requires(&self, root: &mut Table<'a>, settings: &BTreeMap<String, Dimension>) -> Vec<Rule> {
        let single = root.text("holds");
        let tables = root.tables("requires");
        match (&single, tables.is_empty()) {
            (None, true) => root.refuse(
                "the check requires nothing",
                "`holds` is missing",
                "add `holds = \"…\"` or `[[requires]]`",
            ),
            (Some(text), false) => text.refuse(
                "`holds` stands beside `[[requires]]`",
                "twice",
                "move it into a `[[requires]]` of its own",
            ),
            _ => {}
        }
        let mut rules: Vec<Rule> = Vec::new();
        if let Some((text, holds)) = single.and_then(|text| Some((text, self.holds(&text, settings)?))) {
            let text = text.as_str().to_owned();
            rules.push(Rule {
                when: None,
                when_text: None,
                holds,
                text,
                at_most: None,
                says: Says::default(),
                hints: Vec::new(),
            });
        }
        rules.extend(tables.into_iter().filter_map(|table| self.rule(table, settings)));
        rules
    }

    fn rule(&self, mut table: Table<'a>, settings: &BTreeMap<String, Dimension>) -> Option<Rule> {
        let text = table.require("holds").and_then(|value| value.text());
        let guard = table.text("when");
        let when_text = guard.as_ref().map(|text| text.as_str().to_owned());
        let when = guard.and_then(|text| self.guard(&text, settings));
        let at_most = self.cap(&mut table);
        let holds = text.and_then(|text| self.holds(&text, settings));
        let says = match table.take("says") {
            Some(value) if value.is_text() => {
                let template = value.text().and_then(|text| self.template(&text, settings, holds.as_ref()));
                Says { fails: template, ..Says::default() }
            }
            Some(value) => value.table().map(|inner| self.says(inner, settings, holds.as_ref())).unwrap_or_default(),
            None => Says::default(),
        };
        let texts = table.texts("hints");
        let hints = texts.iter().filter_map(|text| self.template(text, settings, holds.as_ref())).collect();
        table.finish();
        Some(Rule { when, when_text, holds: holds?, text: text?.as_str().to_owned(), at_most, says, hints })
    }

    fn says(&self, mut table: Table<'a>, settings: &BTreeMap<String, Dimension>, of: Option<&Requirement>) -> Says {
        let mut line = |key| table.text(key).and_then(|text| self.template(&text, settings, of));
        let says =
            Says { fails: line("fails"), doubtful: line("doubtful"), tight: line("tight"), unknown: line("unknown") };
        table.finish();
        says
    }

    fn hints(&self, root: &mut Table<'a>, settings: &BTreeMap<String, Dimension>) -> Vec<Template> {
        let Some(mut table) = root.table("hints") else { return Vec::new() };
        let lines = table.texts("lines");
        let hints = lines.iter().filter_map(|text| self.template(text, settings, None)).collect();
        table.finish();
        hints
    }

    /// A sentence; one that belongs to a requirement may name the variable of its loop.
    fn template(
        &self,
        text: &Text<'_>,
        settings: &BTreeMap<String, Dimension>,
        of: Option<&Requirement>,
    ) -> Option<Template> {
        let each = of.and_then(|requirement| requirement.each.clone());
        self.told(text, Template::read(text.as_str(), &Scope { each, ..self.scope(settings) }))
    }

    fn points(&self, root: &mut Table<'a>, requires: &[Rule]) -> Points {
        let mut points = Points { primary: "subject".to_owned(), also: Vec::new(), figures: Vec::new() };
        let Some(mut table) = root.table("points") else { return points };
        if let Some(text) = table.text("primary").filter(|text| self.can_point(text, requires)) {
            text.as_str().clone_into(&mut points.primary);
        }
        let also = table.texts("also");
        points
            .also
            .extend(also.iter().filter(|text| self.can_point(text, requires)).map(|text| text.as_str().to_owned()));
        let figures = table.texts("figures");
        points
            .figures
            .extend(figures.iter().filter(|text| self.is_figure(text)).map(|text| text.as_str().to_owned()));
        table.finish();
        points
    }

    fn is_figure(&self, text: &Text<'_>) -> bool {
        let figure = |name: &str| matches!(self.names.kind(self.about, name), Some(ValueKind::Figure(_)));
        if figure(text.as_str()) {
            return true;
        }
        let known: Vec<&str> = self.names.known(self.about).into_iter().filter(|name| figure(name)).collect();
        let help = match nearest(text.as_str(), known) {
            Some(near) => format!("did you mean `{near}`?"),
            None => "`railworthy catalog quantities` lists every name".to_owned(),
        };
        text.refuse(format!("`{}` is no figure", text.as_str()), "unknown", help);
        false
    }

    fn can_point(&self, text: &Text<'_>, requires: &[Rule]) -> bool {
        let name = text.as_str();
        let is_variable = |rule: &Rule| rule.holds.each.as_ref().is_some_and(|each| each.variable == name);
        if name == "subject" || requires.iter().any(is_variable) {
            return true;
        }
        if let Some(ValueKind::Word([]) | ValueKind::Group(_)) = self.names.kind(self.about, name) {
            return true;
        }
        let can = |known: &&str| {
            matches!(self.names.kind(self.about, known), Some(ValueKind::Word([]) | ValueKind::Group(_)))
        };
        let known: Vec<&str> =
            std::iter::once("subject").chain(self.names.known(self.about).into_iter().filter(can)).collect();
        let help = match nearest(name, known.iter().copied()) {
            Some(near) => format!("did you mean `{near}`?"),
            None => format!("what can be pointed at: {}", known.join(", ")),
        };
        text.refuse(format!("`{name}` is nothing to point at"), "unknown", help);
        false
    }

    fn sources(&self, root: &mut Table<'a>) -> Vec<Citation> {
        let mut found = Vec::new();
        for mut table in root.tables("sources") {
            let common = table.boolean("common_practice").is_some_and(|common| common.value);
            let note = table.text("note").map_or("", |text| text.as_str()).to_owned();
            if common {
                found.push(Citation::CommonPractice(note));
            } else if let Some(title) = table.require("title").and_then(|value| value.text()) {
                found.push(Citation::Source { title: title.as_str().to_owned(), note });
            }
            table.finish();
        }
        if found.is_empty() && !self.document.has_problems() {
            root.refuse(
                "the check names no source",
                "`[[sources]]` is missing",
                "add `title = \"…\"`, or `common_practice = true`",
            );
        }
        found
    }
}

/// Lower-case letters, digits and single inner hyphens, a letter first.
fn is_kebab(name: &str) -> bool {
    let part = |part: &str| !part.is_empty() && part.bytes().all(|b| b.is_ascii_lowercase() || b.is_ascii_digit());
    name.starts_with(|c: char| c.is_ascii_lowercase()) && name.split('-').all(part)
}

/// Lower-case letters, digits and underscores, a letter first.
fn is_snake(name: &str) -> bool {
    let allowed = |b: u8| b.is_ascii_lowercase() || b.is_ascii_digit() || b == b'_';
    name.starts_with(|c: char| c.is_ascii_lowercase()) && name.bytes().all(allowed)
}
