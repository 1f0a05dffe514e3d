//! Cases of the built-in checks that retell failures which people met in the field, counted by class.

use std::collections::{BTreeMap, BTreeSet};

use crate::project::{files, text};

/// The words in a case's first line after which the catalogue number stands: class letter and two digits.
const MARK: &str = "Field failure ";

/// How many cases each class has at least: `a` too low an input, `b` capacitance, `c` ESR, `e` the set point, `f` the order
/// of pins, `g` what endangers an input or output, `j` the rating or polarity of a capacitor, `k` a start that fails.
const AT_LEAST: &[(char, usize)] = &[('a', 2), ('b', 5), ('c', 3), ('e', 2), ('f', 3), ('g', 2), ('j', 6), ('k', 2)];

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
