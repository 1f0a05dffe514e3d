//! The checks of a run: all folders read, with the settings of a board.

use std::collections::BTreeMap;

use super::check::Check;
use super::language::{Names, constant};
use super::load;
use super::verdict::Verdict;
use crate::quantity::Quantity;
use crate::source::toml::nearest;
use crate::source::{Problem, Source, Span};

/// The checks of a run, by name.
#[derive(Debug, Clone, Default)]
pub struct Checks {
    by_name: BTreeMap<String, Check>,
}

/// A setting of a check that a board file sets.
#[derive(Debug, Clone)]
pub struct Override {
    /// The check.
    pub check: String,
    /// The setting.
    pub key: String,
    /// Its value as written.
    pub text: String,
    /// The file and place of the value; `None` where it has none.
    pub place: Option<(Source, Span)>,
}

impl Checks {
    /// Reads check folders: folder name to file name to text. What has an error is left out and listed.
    #[must_use]
    pub fn load(folders: &BTreeMap<String, BTreeMap<String, String>>, names: &dyn Names) -> (Self, Vec<Problem>) {
        let (mut checks, mut problems) = (Self::default(), Vec::new());
        for (folder, files) in folders {
            let file = format!("checks/{folder}/check.toml");
            let Some(text) = files.get("check.toml") else {
                problems.push(
                    Problem::error(format!("the check folder `{folder}` holds no check.toml"))
                        .help("add the file, or remove the folder"),
                );
                continue;
            };
            let (check, found) = load::read(folder, &Source::new(file, text.as_str()), names);
            problems.extend(found);
            if let Some(check) = check {
                checks.by_name.insert(check.name.clone(), check);
            }
        }
        problems.extend(checks.unknown_suppressors());
        (checks, problems)
    }

    /// Checks that name another which is not there.
    fn unknown_suppressors(&self) -> Vec<Problem> {
        let mut problems = Vec::new();
        for check in self.by_name.values() {
            for other in check.suppressed_by.iter().filter(|other| !self.by_name.contains_key(*other)) {
                problems.push(
                    Problem::warning(format!("`{}` is suppressed by `{other}`, which is no check", check.name))
                        .help(self.hint(other)),
                );
            }
        }
        problems
    }

    fn hint(&self, name: &str) -> String {
        match nearest(name, self.by_name.keys().map(String::as_str)) {
            Some(near) => format!("did you mean `{near}`?"),
            None => "`railworthy catalog checks` lists every check".to_owned(),
        }
    }

    /// A check by its name.
    #[must_use]
    pub fn get(&self, name: &str) -> Option<&Check> {
        self.by_name.get(name)
    }

    /// Every check, by name.
    pub fn iter(&self) -> impl Iterator<Item = &Check> {
        self.by_name.values()
    }

    /// How many checks there are.
    #[must_use]
    pub fn len(&self) -> usize {
        self.by_name.len()
    }

    /// Whether there is none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.by_name.is_empty()
    }

    /// The same checks with settings changed; a setting that is unknown or does not fit is listed and left as it was.
    #[must_use]
    pub fn with_settings(&self, overrides: &[Override]) -> (Self, Vec<Problem>) {
        let (mut checks, mut problems) = (self.clone(), Vec::new());
        for change in overrides {
            if let Err((message, help)) = checks.set(change) {
                let problem = Problem::error(message).help(help);
                problems.push(match &change.place {
                    Some((source, span)) => problem.at(source, *span, "here"),
                    None => problem,
                });
            }
        }
        (checks, problems)
    }

    /// The same checks, none of which comes to anything worse than `most`.
    #[must_use]
    pub fn at_most(&self, most: Verdict) -> Self {
        let mut checks = self.clone();
        for check in checks.by_name.values_mut() {
            check.at_most = Some(check.at_most.map_or(most, |own| own.max(most)));
        }
        checks
    }

    fn set(&mut self, change: &Override) -> Result<(), (String, String)> {
        let hint = self.hint(&change.check);
        let Some(check) = self.by_name.get_mut(&change.check) else {
            return Err((format!("there is no check `{}`", change.check), hint));
        };
        let Some(known) = check.settings.get(&change.key) else {
            let help = match nearest(&change.key, check.settings.keys().map(String::as_str)) {
                Some(near) => format!("did you mean `{near}`?"),
                None if check.settings.is_empty() => "it has no settings".to_owned(),
                None => format!("its settings: {}", check.settings.keys().cloned().collect::<Vec<_>>().join(", ")),
            };
            return Err((format!("the check `{}` has no setting `{}`", change.check, change.key), help));
        };
        let (value, dimension) = constant(&change.text).map_err(|refusal| {
            (refusal.message, refusal.help.unwrap_or_else(|| "write a figure with its unit".to_owned()))
        })?;
        if dimension != known.dimension() {
            let was = check.settings_text.get(&change.key).cloned().unwrap_or_default();
            let message =
                format!("`{}` is {}, and this is {}", change.key, known.dimension().noun(), dimension.noun());
            return Err((message, format!("write it as in the check: \"{was}\"")));
        }
        check.settings.insert(change.key.clone(), Quantity::constant(dimension, value));
        check.settings_text.insert(change.key.clone(), change.text.clone());
        Ok(())
    }
}
