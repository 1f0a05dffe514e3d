//! Files as relative references: from the project's folder where they lie in it, else by the end of their path.

use std::collections::{BTreeMap, BTreeSet};
use std::path::{Component, Path, PathBuf};

use super::{OUTSIDE, PROJECT};

/// What standard input is called among files.
const STANDARD_INPUT: &str = "<stdin>";

/// The folders that files are named from.
#[derive(Debug, Clone)]
pub struct Folders {
    working: PathBuf,
    project: PathBuf,
}

impl Folders {
    /// The folder that relative names start from, and the one that holds the project; both absolute.
    #[must_use]
    pub fn new(working: PathBuf, project: PathBuf) -> Self {
        Self { working, project }
    }

    /// The folder that holds the project, as text.
    pub(super) fn project(&self) -> String {
        self.project.display().to_string()
    }

    /// The words of a path from the project's folder, or all of them where it lies outside.
    fn words(&self, name: &str) -> (bool, Vec<String>) {
        if name == STANDARD_INPUT {
            return (false, vec![name.to_owned()]);
        }
        let whole = without_dots(&self.working.join(name));
        match whole.strip_prefix(without_dots(&self.project)) {
            Ok(inside) => (true, words(inside)),
            Err(_) => (false, words(&whole)),
        }
    }
}

/// A path without `.` and `..`, as it is written: links are not followed.
fn without_dots(path: &Path) -> PathBuf {
    let mut plain = PathBuf::new();
    for part in path.components() {
        match part {
            Component::CurDir => {}
            Component::ParentDir => {
                plain.pop();
            }
            other => plain.push(other),
        }
    }
    plain
}

fn words(path: &Path) -> Vec<String> {
    path.components()
        .filter_map(|part| match part {
            Component::Normal(word) => Some(word.to_string_lossy().into_owned()),
            _ => None,
        })
        .collect()
}

/// What a file is called.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Name {
    pub(super) base: &'static str,
    /// The words of the path, not encoded.
    words: Vec<String>,
}

impl Name {
    /// The relative reference, every sign encoded that might mean something there.
    pub(super) fn uri(&self) -> String {
        let words: Vec<String> = self.words.iter().map(|word| encoded(word)).collect();
        // A folder's reference ends with a stroke, and an empty one would be no file's.
        if words.is_empty() { "./".to_owned() } else { words.join("/") }
    }

    /// The path as people read it.
    pub(super) fn shown(&self) -> String {
        self.words.join("/")
    }
}

/// A word of a path as RFC 3986 wants it: letters, digits and `-._~` as they are.
fn encoded(word: &str) -> String {
    let mut text = String::with_capacity(word.len());
    for byte in word.bytes() {
        if byte.is_ascii_alphanumeric() || b"-._~".contains(&byte) {
            text.push(char::from(byte));
        } else {
            text.push_str(&format!("%{byte:02X}"));
        }
    }
    text
}

/// The name of each of some files.
pub(super) fn names<'a>(files: &BTreeSet<&'a str>, folders: &Folders) -> BTreeMap<&'a str, Name> {
    let mut named = BTreeMap::new();
    let mut outside: BTreeMap<Vec<String>, Vec<&str>> = BTreeMap::new();
    for file in files {
        match folders.words(file) {
            (true, words) => {
                named.insert(*file, Name { base: PROJECT, words });
            }
            (false, words) => outside.entry(words).or_default().push(file),
        }
    }
    for (words, short) in shortened(outside.keys()) {
        for file in outside.get(words).into_iter().flatten() {
            named.insert(file, Name { base: OUTSIDE, words: short.to_vec() });
        }
    }
    named
}

/// The shortest end of each path that no other path has.
fn shortened<'w>(paths: impl Iterator<Item = &'w Vec<String>>) -> Vec<(&'w Vec<String>, &'w [String])> {
    let mut rest: Vec<&Vec<String>> = paths.collect();
    let mut short = Vec::new();
    let mut length = 1;
    while !rest.is_empty() {
        let end = |path: &'w Vec<String>| path.get(path.len().saturating_sub(length)..).unwrap_or_default();
        let mut counts: BTreeMap<&[String], usize> = BTreeMap::new();
        for path in &rest {
            *counts.entry(end(path)).or_default() += 1;
        }
        let (found, left): (Vec<_>, Vec<_>) =
            rest.into_iter().partition(|path| path.len() <= length || counts.get(end(path)) == Some(&1));
        short.extend(found.into_iter().map(|path| (path, end(path))));
        rest = left;
        length += 1;
    }
    short
}

#[cfg(test)]
mod tests {
    use super::*;

    fn uris(files: &[&str]) -> Vec<(String, &'static str)> {
        let folders = Folders::new("/home/me/board/hw".into(), "/home/me/board".into());
        let names = names(&files.iter().copied().collect(), &folders);
        files.iter().map(|file| (names[file].uri(), names[file].base)).collect()
    }

    #[test]
    fn files_of_the_project_are_named_from_its_folder() {
        let files = ["a.net", "./rev 2/ä.net", "../x.net", "/home/me/board/hw/b#1%.net", "a:b\n.net", "../hw/a.net"];
        let inside = |uri: &str| (uri.to_owned(), PROJECT);
        assert_eq!(
            uris(&files),
            [
                inside("hw/a.net"),
                inside("hw/rev%202/%C3%A4.net"),
                inside("x.net"),
                inside("hw/b%231%25.net"),
                inside("hw/a%3Ab%0A.net"),
                inside("hw/a.net"),
            ]
        );
        assert_eq!(uris(&[".."]), [inside("./")]);
    }

    #[test]
    fn files_outside_are_named_by_the_end_of_their_path_without_the_machine_before_it() {
        let files = ["/srv/one/a.net", "/srv/two/a.net", "../../b.net", "/c.net", "<stdin>"];
        let outside = |uri: &str| (uri.to_owned(), OUTSIDE);
        assert_eq!(
            uris(&files),
            [outside("one/a.net"), outside("two/a.net"), outside("b.net"), outside("c.net"), outside("%3Cstdin%3E")]
        );
    }

    #[test]
    fn a_path_that_is_the_end_of_another_keeps_to_itself() {
        let paths = [vec!["a".to_owned()], vec!["x".to_owned(), "a".to_owned()]];
        let short: Vec<String> = shortened(paths.iter()).into_iter().map(|(_, end)| end.join("/")).collect();
        assert_eq!(short, ["a", "x/a"]);
    }
}
