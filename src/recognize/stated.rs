//! Voltages that a description states for the output of a part.

use std::sync::LazyLock;

use regex::Regex;

use super::voltage_code::{SENSIBLE, regex};

/// A voltage that a description states.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Stated {
    /// Volts, magnitude.
    pub(super) volts: f64,
    /// Whether it carries a minus sign.
    pub(super) negative: bool,
    /// Whether the words beside it say that it is the output.
    pub(super) output: bool,
}

static STATED: LazyLock<Regex> = LazyLock::new(|| {
    regex(
        r"(?i)(?P<lead>.{0,14}?)(?P<sign>[+\-\u{2212}\u{2013}]?)(?P<number>\d+(?:[.,]\d+)?)\s?V(?:DC|olts?)?(?P<rest>[^a-z0-9].{0,18}|$)",
    )
});
static RANGE: LazyLock<Regex> = LazyLock::new(|| {
    regex(
        r"(?ix) [+\-]? \d+(?:[.,]\d+)? \s? V? \s? (?: - | \u{2013} | to | \.\.\.? | ~ | \u{2026} ) \s? [+\-]? \d+(?:[.,]\d+)? \s? V
        | (?: up\ to | max\.? | vin\ ?=? | maximum | under | over | ESD ) \s? [+\-]? \d+(?:[.,]\d+)? \s? V
        | [+\-]? \d+(?:[.,]\d+)? \s? V \s? (?: / \s? V | max | input | in\b | abs | vin | tolerant | high\ )
        | ± \s? \d+(?:[.,]\d+)? \s? V",
    )
});

/// The voltages that a description states for its output; ranges, inputs and limits are passed over.
pub(super) fn read_description(text: &str) -> Vec<Stated> {
    let text = RANGE.replace_all(text, " ");
    let mut found = Vec::new();
    let mut rest: &str = &text;
    while let Some(hit) = STATED.captures(rest) {
        let number = group_named(&hit, "number").replace(',', ".");
        let end = hit.name("number").map_or(rest.len(), |number| number.end());
        let lead = group_named(&hit, "lead").to_lowercase();
        let behind = group_named(&hit, "rest").to_lowercase();
        // A digit or point right before means that the number was cut in half.
        let whole = !lead.ends_with(|each: char| each.is_ascii_digit() || each == '.');
        if whole && let Ok(volts) = number.parse::<f64>() {
            let output = lead.contains("output")
                || lead.contains("fixed")
                || lead.trim_end().ends_with("vo")
                || behind.contains("output")
                || behind.contains("fixed")
                || behind.contains("reference");
            let negative = !matches!(group_named(&hit, "sign"), "" | "+");
            if SENSIBLE.contains(&volts) {
                found.push(Stated { volts, negative, output });
            }
        }
        rest = rest.get(end..).unwrap_or("");
    }
    found
}

fn group_named<'a>(found: &regex::Captures<'a>, name: &str) -> &'a str {
    found.name(name).map_or("", |group| group.as_str())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ranges_and_limits_of_a_description_are_not_its_output() {
        let stated = |text: &str| read_description(text).iter().map(|each| each.volts).collect::<Vec<_>>();
        assert_eq!(stated("250mA low-noise LDO, 2.2V-5.5V input, 2.925V output, WLCSP-4"), vec![2.925]);
        assert_eq!(stated("Dual 500mA Low Dropout Linear Regulator, 3.3V/1.2V, MSOP-8"), vec![3.3, 1.2]);
        assert_eq!(stated("Precision virtual ground, 4V to 40V input, TO-92"), Vec::<f64>::new());
        assert_eq!(stated("50mA Dual Mode -5V/Programmable Negative Voltage Regulator"), vec![5.0]);
    }
}
