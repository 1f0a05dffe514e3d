//! Finding the library part of a component.

use std::collections::HashMap;

use crate::netlist::{Component, LibraryPart};

/// The library parts by library and name.
pub(super) struct Parts<'a> {
    exact: HashMap<(&'a str, &'a str), &'a LibraryPart>,
    by_name: HashMap<&'a str, Named<'a>>,
}

#[derive(Clone, Copy)]
enum Named<'a> {
    One(&'a LibraryPart),
    /// Several libraries have a part of this name and its pins differ.
    Several,
}

impl<'a> Parts<'a> {
    pub(super) fn new(parts: &'a [LibraryPart]) -> Self {
        let mut found = Self { exact: HashMap::new(), by_name: HashMap::new() };
        // Own names before aliases: a part's own name is the better match wherever it stands in the file.
        for part in parts {
            found.add(&part.part, part);
        }
        for part in parts {
            for alias in &part.aliases {
                found.add(alias, part);
            }
        }
        found
    }

    fn add(&mut self, name: &'a str, part: &'a LibraryPart) {
        self.exact.entry((&part.library, name)).or_insert(part);
        self.by_name
            .entry(name)
            .and_modify(|named| {
                if matches!(named, Named::One(known) if known.pins != part.pins) {
                    *named = Named::Several;
                }
            })
            .or_insert(Named::One(part));
    }

    /// The part that a component was drawn with: by library and name, else by its name alone where only one fits.
    pub(super) fn of(&self, component: &Component) -> Option<&'a LibraryPart> {
        if component.part.is_empty() {
            return None;
        }
        let exact = self.exact.get(&(component.library.as_str(), component.part.as_str()));
        exact.copied().or_else(|| match self.by_name.get(component.part.as_str()) {
            Some(Named::One(part)) => Some(*part),
            _ => None,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::netlist::PartPin;

    fn part(library: &str, name: &str, aliases: &[&str], pin: &str) -> LibraryPart {
        LibraryPart {
            library: library.to_owned(),
            part: name.to_owned(),
            aliases: aliases.iter().map(|alias| (*alias).to_owned()).collect(),
            pins: vec![PartPin { number: "1".to_owned(), name: pin.to_owned(), kind: "input".to_owned() }],
            ..LibraryPart::default()
        }
    }

    fn component(library: &str, name: &str) -> Component {
        Component { library: library.to_owned(), part: name.to_owned(), ..Component::default() }
    }

    #[test]
    fn a_part_is_found_by_library_and_name_and_through_aliases() {
        let parts = [part("a", "X", &["Y"], "one"), part("b", "Y", &[], "two")];
        let found = Parts::new(&parts);
        let pin = |library, name| found.of(&component(library, name)).map(|part| part.pins[0].name.as_str());
        assert_eq!(pin("a", "Y"), Some("one"));
        assert_eq!(pin("b", "Y"), Some("two"));
        assert_eq!(pin("elsewhere", "X"), Some("one"), "one name, one part: the library does not matter");
        assert_eq!(pin("elsewhere", "Y"), None, "two different parts are called Y");
        assert_eq!(pin("a", ""), None);
    }
}
