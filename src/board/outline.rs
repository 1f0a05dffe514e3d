//! The lines of a board file: which keys of which entries stand there, as declarations or commented out.

use std::collections::{BTreeMap, BTreeSet};

use crate::source::Source;

/// A table and the net or reference that an entry of it is about; empty for `[board]`.
type Target = (String, String);

/// What stands where in a board file, told line by line: what is written in several lines or within braces is not
/// seen. A line that begins with `#` and no blank behind it is a declaration commented out.
#[derive(Debug, Clone, Default)]
pub struct Outline {
    keys: BTreeSet<(Target, String)>,
    lines: BTreeMap<Target, usize>,
    foldable: bool,
    closed: BTreeSet<String>,
}

impl Outline {
    /// The outline of a board file.
    #[must_use]
    pub fn of(source: &Source) -> Self {
        // Within a text of several lines anything can look like an entry.
        let foldable = !["\"\"\"", "'''"].iter().any(|mark| source.text().contains(mark));
        let mut outline = Self { foldable, closed: closed(source.text()), ..Self::default() };
        let mut table = String::new();
        let mut target: Option<String> = None;
        let mut waiting: Vec<String> = Vec::new();
        for (number, line) in source.text().lines().enumerate() {
            let line = uncommented(line);
            if let Some(name) = header(line) {
                table = name.to_owned();
                target = (table == "board").then(String::new);
                waiting.clear();
                if let Some(target) = &target {
                    outline.lines.entry((table.clone(), target.clone())).or_insert(number);
                }
                continue;
            }
            let Some((key, value)) = pair(line) else { continue };
            if matches!(key.as_str(), "net" | "ref") {
                let Some(name) = value else { continue };
                outline.lines.entry((table.clone(), name.clone())).or_insert(number);
                outline.keys.extend(waiting.drain(..).map(|key| ((table.clone(), name.clone()), key)));
                target = Some(name);
            } else if let Some(target) = &target {
                outline.keys.insert(((table.clone(), target.clone()), key));
            } else {
                waiting.push(key);
            }
        }
        outline
    }

    /// Whether a key stands in the entry about a target, commented out or not.
    #[must_use]
    pub fn has(&self, table: &str, target: &str, key: &str) -> bool {
        self.keys.contains(&((table.to_owned(), target.to_owned()), key.to_owned()))
    }

    /// Whether a table is written so that no entry of it can follow at the end of the file.
    #[must_use]
    pub fn is_closed(&self, table: &str) -> bool {
        self.closed.contains(table)
    }

    /// The line, from 0, behind which a further key of the entry about a target can be written; `None` where there is
    /// no such entry that could be seen.
    #[must_use]
    pub fn line_of(&self, table: &str, target: &str) -> Option<usize> {
        self.lines.get(&(table.to_owned(), target.to_owned())).copied().filter(|_| self.foldable)
    }
}

/// The tables that are written as one value, or key by key with dots.
fn closed(text: &str) -> BTreeSet<String> {
    let Ok(document) = text.parse::<toml_edit::DocumentMut>() else { return BTreeSet::new() };
    let is_closed =
        |item: &toml_edit::Item| item.is_value() || item.as_table().is_some_and(toml_edit::Table::is_dotted);
    document.iter().filter(|(_, item)| is_closed(item)).map(|(key, _)| key.to_owned()).collect()
}

/// A line without the `#` of a declaration that is commented out; of another comment nothing is left.
fn uncommented(line: &str) -> &str {
    let line = line.trim();
    match line.strip_prefix('#') {
        Some(rest) if rest.starts_with([' ', '\t', '#']) => "",
        Some(rest) => rest,
        None => line,
    }
}

/// The name in `[name]` or `[[name]]`.
fn header(line: &str) -> Option<&str> {
    let inner = line.strip_prefix('[')?;
    let inner = inner.strip_prefix('[').unwrap_or(inner);
    inner.split_once(']').map(|(name, _)| name.trim())
}

/// The key of a line and its value where that is a text.
fn pair(line: &str) -> Option<(String, Option<String>)> {
    let document: toml_edit::DocumentMut = line.parse().ok()?;
    let (key, value) = document.iter().next()?;
    Some((key.to_owned(), value.as_str().map(str::to_owned)))
}

#[cfg(test)]
mod tests {
    use super::*;

    const TEXT: &str = "[board]\ntitle = \"x\"\n\n# [[load]]\n[[part]]\nesr = \"1 ohm\" # new\nref = \"C7\"\n\
                        #technology = \"X7R\"\n\n#[[supply]]\n#net = \"a\\\"b\"\n#voltage = \"5 V\"\n[[load]]\n\
                        net = { a = 1 }\n[[load]]\nnet='+5V'\n";

    #[test]
    fn entries_are_found_line_by_line_commented_out_or_not() {
        let outline = Outline::of(&Source::new("x.toml", TEXT));
        for (table, target, key) in [
            ("board", "", "title"),
            ("part", "C7", "esr"),
            ("part", "C7", "technology"),
            ("supply", "a\"b", "voltage"),
        ] {
            assert!(outline.has(table, target, key), "{table} {target} {key}");
        }
        assert!(!outline.has("board", "", "ambient") && !outline.has("part", "C8", "esr"));
        assert_eq!(outline.line_of("board", ""), Some(0));
        assert_eq!(outline.line_of("part", "C7"), Some(6));
        assert_eq!(outline.line_of("supply", "a\"b"), Some(10));
        assert_eq!(outline.line_of("load", "+5V"), Some(15));
        assert_eq!(outline.line_of("load", "a"), None);
    }

    #[test]
    fn tables_that_are_one_value_are_closed() {
        let outline =
            Outline::of(&Source::new("x.toml", "part = [\n]\nboard.title = \"x\"\n[[load]]\nnet = \"A\"\n"));
        let closed = |table| outline.is_closed(table);
        assert!(closed("part") && closed("board") && !closed("load") && !closed("rail"));
    }

    #[test]
    fn nothing_can_be_written_into_a_file_with_texts_of_several_lines() {
        let outline =
            Outline::of(&Source::new("x.toml", "[[part]]\nref = \"C7\"\n[board]\ntitle = \"\"\"\nx\"\"\"\n"));
        assert!(outline.line_of("part", "C7").is_none());
    }
}
