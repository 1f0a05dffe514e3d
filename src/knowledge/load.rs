//! Knowledge from its files.

use std::collections::BTreeMap;
use std::path::PathBuf;
use std::sync::OnceLock;

use super::devices::device_of;
use super::family::family_of;
use super::files::{Files, Shelf};
use super::supply::supply_of;
use super::technology::technology_of;
use super::{DeviceFamily, Knowledge};
use crate::source::toml::{Document, nearest};
use crate::source::{Problem, Source};

impl Knowledge {
    /// What is compiled in. A test keeps every built-in file readable.
    #[must_use]
    pub fn built_in() -> Self {
        read_all(Files::built_in(), &mut Vec::new())
    }

    /// What is compiled in, read once for the whole run.
    #[must_use]
    pub fn shared() -> &'static Self {
        static SHARED: OnceLock<Knowledge> = OnceLock::new();
        SHARED.get_or_init(Self::built_in)
    }

    /// What is compiled in, with the files of extra folders: a later file of the same name, and a later check folder of
    /// the same name, takes the place of an earlier one, see [`Knowledge::replaced`]. A file with problems is left out.
    #[must_use]
    pub fn load(extra_folders: &[PathBuf]) -> (Self, Vec<Problem>) {
        let mut files = Files::built_in();
        let mut problems = Vec::new();
        for folder in extra_folders {
            files.add_folder(folder, &mut problems);
        }
        for (name, path) in &files.replaced {
            problems.push(Problem::note(format!("`{path}` takes the place of `{name}`")));
        }
        let knowledge = read_all(files, &mut problems);
        (knowledge, problems)
    }
}

/// Reads every file.
fn read_all(files: Files, problems: &mut Vec<Problem>) -> Knowledge {
    let mut knowledge = Knowledge { replaced: files.replaced, ..Knowledge::default() };
    let mut sources = BTreeMap::new();
    for ((shelf, name), source) in &files.tables {
        let result = match shelf {
            Shelf::Parts => family_of(source, &format!("parts/{name}")).map(|family| knowledge.families.push(family)),
            Shelf::Technologies => technology_of(source, &format!("technologies/{name}"))
                .map(|technology| knowledge.technologies.push(technology)),
            Shelf::Supplies => {
                supply_of(source, &format!("supplies/{name}")).map(|supply| knowledge.supplies.push(supply))
            }
            Shelf::Devices => {
                let of_user = files.extra.contains(&(*shelf, name.clone()));
                device_of(source, &format!("devices/{name}"))
                    .map(|device| knowledge.devices.push(DeviceFamily { of_user, ..device }))
            }
        };
        let folder = match shelf {
            Shelf::Parts => "parts",
            Shelf::Devices => "devices",
            Shelf::Technologies | Shelf::Supplies => "",
        };
        match result {
            Ok(()) if !folder.is_empty() => {
                let extra = files.extra.contains(&(*shelf, name.clone()));
                sources.insert(format!("{folder}/{name}"), (extra, source));
            }
            Ok(()) => {}
            Err(found) => problems.extend(found),
        }
    }
    check_families(&mut knowledge, &sources, problems);
    check_devices(&mut knowledge, &sources, problems);
    for (name, check) in files.checks {
        knowledge.check_paths.insert(name.clone(), check.path);
        knowledge.checks.insert(name, check.files);
    }
    knowledge
}

/// Refuses families of the same name, and versions of a family that there is not.
fn check_families(
    knowledge: &mut Knowledge,
    sources: &BTreeMap<String, (bool, &Source)>,
    problems: &mut Vec<Problem>,
) {
    let mut first: BTreeMap<String, String> = BTreeMap::new();
    let mut refused = Vec::new();
    // Built-in files come first: of two that share a name, the user's is the one to change.
    let is_extra = |file: &str| sources.get(file).is_some_and(|(extra, _)| *extra);
    let mut families: Vec<_> = knowledge.families.iter().collect();
    families.sort_by_key(|family| is_extra(&family.file));
    for family in families {
        let earlier = first.entry(family.name.clone()).or_insert_with(|| family.file.clone());
        if *earlier != family.file {
            let message = format!("two families are called `{}`", family.name);
            let help = format!("give it a name of its own; the first is in `{earlier}`");
            problems.push(at_key(sources, &family.file, "family", message, "the second").help(help));
            refused.push(family.file.clone());
        }
    }
    for family in &knowledge.families {
        let Some(base) = family.version_of.as_ref().filter(|base| !first.contains_key(*base)) else { continue };
        let help = match nearest(base, first.keys().map(String::as_str)) {
            Some(name) => format!("did you mean `{name}`?"),
            None => "write the `family` of another part file".to_owned(),
        };
        let message = format!("no family is called `{base}`");
        problems.push(at_key(sources, &family.file, "version_of", message, "an unknown family").help(help));
        refused.push(family.file.clone());
    }
    knowledge.families.retain(|family| !refused.contains(&family.file));
}

/// Refuses devices of the same name, and a second one that stands for the same unknown parts.
fn check_devices(
    knowledge: &mut Knowledge,
    sources: &BTreeMap<String, (bool, &Source)>,
    problems: &mut Vec<Problem>,
) {
    let is_extra = |file: &str| sources.get(file).is_some_and(|(extra, _)| *extra);
    let mut devices: Vec<_> = knowledge.devices.iter().collect();
    devices.sort_by_key(|device| is_extra(&device.file));
    let (mut named, mut standing) = (BTreeMap::new(), BTreeMap::new());
    let mut refused = Vec::new();
    for device in devices {
        let first = named.entry(device.name.clone()).or_insert_with(|| device.file.clone());
        if *first != device.file {
            let message = format!("two devices are called `{}`", device.name);
            let help = format!("give it a name of its own; the first is in `{first}`");
            problems.push(at_key(sources, &device.file, "device", message, "the second").help(help));
            refused.push(device.file.clone());
            continue;
        }
        let Some(of) = device.stands_for else { continue };
        let first = standing.entry((device.kind, of)).or_insert_with(|| device.file.clone());
        if *first != device.file {
            let message = format!("two devices stand for `{}` parts of kind `{}`", of.name(), device.kind.name());
            let help = format!("name the file as the first, `{first}`, to take its place");
            problems.push(at_key(sources, &device.file, "stands_for", message, "the second").help(help));
            refused.push(device.file.clone());
        }
    }
    knowledge.devices.retain(|device| !refused.contains(&device.file));
}

/// A problem at the value of a key of a file that was read before.
fn at_key(
    sources: &BTreeMap<String, (bool, &Source)>,
    file: &str,
    key: &'static str,
    message: String,
    label: &str,
) -> Problem {
    let problem = Problem::error(message);
    let Some((_, source)) = sources.get(file) else { return problem };
    let Ok(document) = Document::parse(source) else { return problem };
    let span = document.root().take(key).map(|value| value.span()).unwrap_or_default();
    problem.at(source, span, label)
}
