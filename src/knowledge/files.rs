//! The files of the knowledge folders, built in and from the disk.

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::Path;

use include_dir::{Dir, include_dir};

use super::disk::{Disk, entries, is_folder};
use crate::source::toml::Document;
use crate::source::{Problem, Source};

static PARTS: Dir<'static> = include_dir!("$CARGO_MANIFEST_DIR/rules/parts");
static TECHNOLOGIES: Dir<'static> = include_dir!("$CARGO_MANIFEST_DIR/rules/technologies");
static SUPPLIES: Dir<'static> = include_dir!("$CARGO_MANIFEST_DIR/rules/supplies");
static DEVICES: Dir<'static> = include_dir!("$CARGO_MANIFEST_DIR/rules/devices");
static CHECKS: Dir<'static> = include_dir!("$CARGO_MANIFEST_DIR/rules/checks");

/// The kind of a knowledge file.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Shelf {
    Parts,
    Technologies,
    Supplies,
    Devices,
}

impl Shelf {
    /// Each with its folder and the key that only its files have.
    pub(super) const ALL: [(Self, &'static str, &'static str); 4] = [
        (Self::Parts, "parts", "family"),
        (Self::Technologies, "technologies", "technology"),
        (Self::Supplies, "supplies", "supply"),
        (Self::Devices, "devices", "device"),
    ];

    fn built_in(self) -> &'static Dir<'static> {
        match self {
            Self::Parts => &PARTS,
            Self::Technologies => &TECHNOLOGIES,
            Self::Supplies => &SUPPLIES,
            Self::Devices => &DEVICES,
        }
    }

    fn folder(self) -> &'static str {
        Self::ALL.iter().find(|(shelf, ..)| *shelf == self).map_or("", |(_, folder, _)| folder)
    }
}

/// The text of a built-in part file, by its path below `rules/`; `None` where there is none.
#[must_use]
pub fn built_in_part(file: &str) -> Option<&'static str> {
    PARTS.get_file(file.strip_prefix("parts/")?)?.contents_utf8()
}

/// A check folder: where it is, and its files.
#[derive(Debug, Clone, Default)]
pub(super) struct CheckFolder {
    pub(super) path: String,
    pub(super) files: BTreeMap<String, String>,
}

/// Every file, later ones in place of earlier ones of the same name.
#[derive(Debug, Default)]
pub(super) struct Files {
    /// By path below the folder: `parts/1117-lm.toml`.
    pub(super) tables: BTreeMap<(Shelf, String), Source>,
    /// By folder name.
    pub(super) checks: BTreeMap<String, CheckFolder>,
    /// The names of those that come from a folder on the disk.
    pub(super) extra: BTreeSet<(Shelf, String)>,
    /// What took the place of an earlier one: path below the folder, path of the new one.
    pub(super) replaced: Vec<(String, String)>,
    disk: Disk,
}

impl Files {
    /// The files that are compiled in.
    pub(super) fn built_in() -> Self {
        let mut files = Self::default();
        for (shelf, folder, _) in Shelf::ALL {
            for file in shelf.built_in().files() {
                let Some(name) = file.path().file_name().and_then(|name| name.to_str()) else { continue };
                if let Some(text) = file.contents_utf8().filter(|_| is_toml(name)) {
                    let path = format!("rules/{folder}/{name}");
                    files.tables.insert((shelf, name.to_owned()), Source::new(path, text));
                }
            }
        }
        for folder in CHECKS.dirs() {
            let Some(name) = folder.path().file_name().and_then(|name| name.to_str()) else { continue };
            let texts = folder.files().filter_map(|file| {
                let name = file.path().file_name()?.to_str()?;
                Some((name.to_owned(), file.contents_utf8()?.to_owned()))
            });
            let check = CheckFolder { path: format!("rules/checks/{name}"), files: texts.collect() };
            files.checks.insert(name.to_owned(), check);
        }
        files
    }

    /// Adds the files of a folder from the disk. The folder has `parts/`, `technologies/`, `supplies/`, `devices/` and
    /// `checks/`, any of them; or it holds such files, or check folders, itself; or it is a check folder.
    pub(super) fn add_folder(&mut self, folder: &Path, problems: &mut Vec<Problem>) {
        if !folder.is_dir() {
            let message = format!("the rules folder `{}` cannot be read", folder.display());
            problems.push(Problem::error(message).help("name a folder that exists"));
            return;
        }
        let mut laid_out = false;
        for (shelf, name, _) in Shelf::ALL {
            let inner = folder.join(name);
            if is_folder(&inner, problems) {
                laid_out = true;
                for (name, source) in self.disk.files(&inner, problems).into_iter().filter(|(name, _)| is_toml(name))
                {
                    self.put(shelf, name, source);
                }
            }
        }
        if is_folder(&folder.join("checks"), problems) {
            laid_out = true;
            self.add_checks(&folder.join("checks"), problems);
        }
        if !laid_out {
            self.add_loose(folder, problems);
        }
    }

    /// Adds the files of a folder without subfolders by what they hold.
    fn add_loose(&mut self, folder: &Path, problems: &mut Vec<Problem>) {
        if folder.join("check.toml").is_file() {
            self.add_check(folder, problems);
            return;
        }
        let mut found = self.add_checks(folder, problems);
        for (name, source) in self.disk.files(folder, problems).into_iter().filter(|(name, _)| is_toml(name)) {
            let document = match Document::parse(&source) {
                Ok(document) => document,
                Err(problem) => {
                    problems.push(*problem);
                    continue;
                }
            };
            let mut root = document.root();
            if let Some((shelf, ..)) = Shelf::ALL.into_iter().find(|(.., key)| root.take(key).is_some()) {
                self.put(shelf, name, source);
                found = true;
            }
        }
        if !found {
            let message = format!("the rules folder `{}` holds no rules", folder.display());
            problems.push(Problem::warning(message).help(
                "put part files into `parts/`, checks into folders of `checks/`, supplies into `supplies/`, \
                 technologies into `technologies/`, device models into `devices/`",
            ));
        }
    }

    /// Adds every check folder in a folder; whether there was one.
    fn add_checks(&mut self, folder: &Path, problems: &mut Vec<Problem>) -> bool {
        let mut found = false;
        for path in entries(folder, problems).into_iter().filter(|path| path.join("check.toml").is_file()) {
            if is_folder(&path, problems) {
                self.add_check(&path, problems);
            }
            found = true;
        }
        found
    }

    fn add_check(&mut self, folder: &Path, problems: &mut Vec<Problem>) {
        let full = fs::canonicalize(folder).unwrap_or_else(|_| folder.to_owned());
        let Some(name) = full.file_name().and_then(|name| name.to_str()).map(str::to_owned) else { return };
        let texts =
            self.disk.files(folder, problems).into_iter().map(|(name, source)| (name, source.text().to_owned()));
        let check = CheckFolder { path: folder.display().to_string(), files: texts.collect() };
        if self.checks.contains_key(&name) {
            self.replaced.push((format!("checks/{name}"), check.path.clone()));
        }
        self.checks.insert(name, check);
    }

    fn put(&mut self, shelf: Shelf, name: String, source: Source) {
        let path = format!("{}/{name}", shelf.folder());
        let place = source.name().to_owned();
        self.extra.insert((shelf, name.clone()));
        if self.tables.insert((shelf, name), source).is_some() {
            self.replaced.push((path, place));
        }
    }
}

fn is_toml(name: &str) -> bool {
    Path::new(name).extension().is_some_and(|extension| extension == "toml")
}
