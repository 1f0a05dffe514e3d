//! Cases of the built-in checks that retell failures which people met in the field, counted by class.

use std::collections::{BTreeMap, BTreeSet};

use crate::project::{files, text};

/// The words in a case's first line after which the catalogue number stands: class letter and two digits.
const MARK: &str = "Field failure ";

/// How many cases each class has at least. Of an `a` the input is too low, of a `b` capacitance, of a `c` ESR, of an `e`
/// the set point, of an `f` the order of pins, of a `j` rating or polarity is at fault.
const AT_LEAST: &[(char, usize)] = &[('b', 5), ('c', 3), ('e', 2), ('f', 3), ('j', 6)];

#[test]
fn field_failures_of_each_class_are_cases_of_the_checks() {
    let mut found: BTreeMap<char, BTreeSet<String>> = BTreeMap::new();
    for file in files("rules/checks").into_iter().filter(|file| file.ends_with(".railworthy.toml")) {
        let text = text(&file);
        let Some(rest) = text.lines().next().and_then(|line| line.split(MARK).nth(1)) else { continue };
        let number: String = rest.chars().take(3).collect();
        let (class, digits) = number.split_at(1);
        assert!(digits.len() == 2 && digits.bytes().all(|digit| digit.is_ascii_digit()), "{file}: {number}");
        assert!(file.contains("/bad-"), "{file} failed in the field and is no bad case");
        let class = class.to_ascii_lowercase().chars().next().unwrap();
        assert!(found.entry(class).or_default().insert(number.clone()), "{number} is told twice");
    }
    for (class, least) in AT_LEAST {
        let cases = found.get(class).map_or(0, BTreeSet::len);
        assert!(cases >= *least, "{cases} cases of class {class}, {least} expected");
    }
}
