//! Reading a part file.

use std::collections::BTreeMap;

use super::cite::{Cite, read_range, read_sources, word};
use super::names::check_pattern;
use super::published_loop::read_loop;
use super::{AdjustSide, Cited, Family, FamilyKind, Pass, Sign, demand};
use crate::quantity::{Dimension, Range};
use crate::source::Source;
use crate::source::toml::{Document, Table, Text, Value};

/// Reads a part file whose path below `rules/` is `file`; problems are noted in the document.
pub(super) fn read_family(document: &Document, file: &str) -> Option<Family> {
    let mut root = document.root();
    let sources = read_sources(&mut root);
    let cite = Cite::of_file(&mut root, &sources);
    let name = root.require("family").and_then(|value| value.text());
    let kind = root.require("kind").and_then(|value| word(&value.text()?, "kind of part", FamilyKind::ALL));
    let mut family = Family::unknown(name.map_or("", |text| text.as_str()), kind.unwrap_or(FamilyKind::Other), file);
    read_identity(&mut root, &mut family);
    read_names(&mut root, &mut family);
    family.pass = root.take("pass").and_then(|value| {
        let pass = word(&value.text()?, "pass element", Pass::ALL)?;
        Some(cite.cite("pass", pass))
    });
    read_figures(&mut root, &cite, &mut family);
    family.dropout = demand::read_dropout(&mut root, &cite);
    family.output_capacitor = demand::read_capacitor(&mut root, "output_capacitor", &cite);
    family.input_capacitor = demand::read_capacitor(&mut root, "input_capacitor", &cite);
    family.bypass_capacitor = demand::read_capacitor(&mut root, "bypass_capacitor", &cite);
    family.enable = demand::read_enable(&mut root, &cite);
    family.published_loop = read_loop(&mut root, &cite);
    family.packages = demand::read_packages(&mut root, &cite);
    let mut keys: Vec<&str> = Family::FIGURES.iter().map(|(key, ..)| *key).collect();
    keys.push("pass");
    Cite::check_keys(&mut root, &keys);
    check_consistency(&mut root, &family);
    root.finish();
    family.sources = sources;
    (!document.has_problems()).then_some(family)
}

impl Family {
    /// A family of which nothing but its name and kind is known.
    #[must_use]
    pub fn unknown(name: &str, kind: FamilyKind, file: &str) -> Self {
        Self {
            name: name.to_owned(),
            group: name.split(" / ").next().unwrap_or(name).to_owned(),
            maker: String::new(),
            maker_words: Vec::new(),
            version_of: None,
            names: Vec::new(),
            voltages: Vec::new(),
            codes: BTreeMap::new(),
            adjust_codes: Vec::new(),
            kind,
            polarity: Sign::Positive,
            pass: None,
            fixed: false,
            adjust: None,
            figures: BTreeMap::new(),
            by_output: BTreeMap::new(),
            dropout: None,
            input_capacitor: None,
            output_capacitor: None,
            bypass_capacitor: None,
            enable: None,
            published_loop: None,
            packages: BTreeMap::new(),
            note: None,
            sources: Vec::new(),
            file: file.to_owned(),
        }
    }
}

/// Reads who makes it and what it is.
fn read_identity(root: &mut Table<'_>, family: &mut Family) {
    const POLARITIES: &[(Sign, &str)] = &[(Sign::Positive, "positive"), (Sign::Negative, "negative")];
    const SIDES: &[(AdjustSide, &str)] =
        &[(AdjustSide::Output, "output"), (AdjustSide::Ground, "ground"), (AdjustSide::SetCurrent, "set-current")];
    let owned = |text: Text<'_>| text.as_str().to_owned();
    if let Some(group) = root.text("group") {
        family.group = owned(group);
    }
    family.maker = root.require("maker").and_then(|value| value.text()).map(owned).unwrap_or_default();
    family.maker_words = root.texts("maker_words").iter().map(|word| word.as_str().to_lowercase()).collect();
    family.version_of = root.text("version_of").map(owned);
    family.note = root.text("note").map(owned);
    if let Some(sign) = root.text("polarity").and_then(|text| word(&text, "polarity", POLARITIES)) {
        family.polarity = sign;
    }
    family.adjust = root.text("adjust").and_then(|text| word(&text, "side of the reference", SIDES));
    if let Some(value) = root.take("version_of")
        && family.maker_words.is_empty()
    {
        value.refuse(
            "a version of another family lacks `maker_words`",
            "sold under another family's names",
            "add the words by which a manufacturer field names this maker",
        );
    }
}

/// Reads the name patterns and the voltages that are made.
fn read_names(root: &mut Table<'_>, family: &mut Family) {
    let names = root.require("names").and_then(|value| value.texts()).unwrap_or_default();
    family.names = names.iter().filter(|name| check_pattern(name)).map(|name| name.as_str().to_owned()).collect();
    for text in root.texts("voltages") {
        if let Some(range) = read_range(&text, Dimension::VOLTAGE) {
            if range.low() <= 0.0 || !range.is_exact() {
                text.refuse("a made voltage is one value above zero", "not one value", "write the magnitude");
            }
            family.voltages.push(range.nominal());
        }
    }
    if let Some(mut codes) = root.table("codes") {
        for value in codes.entries() {
            let (code, text) = (value.key().to_ascii_uppercase(), value.text());
            if text.is_some_and(|text| text.as_str() == "adjustable") {
                family.adjust_codes.push(code);
            } else if let Some(volts) = text.and_then(|text| read_range(&text, Dimension::VOLTAGE)) {
                family.codes.insert(code, volts.nominal());
            }
        }
    }
    family.fixed = root.boolean("fixed").map_or(!family.voltages.is_empty(), |flag| flag.value);
}

/// Reads the plain figures.
fn read_figures(root: &mut Table<'_>, cite: &Cite<'_>, family: &mut Family) {
    for (key, dimension, _) in Family::FIGURES {
        let Some(value) = root.take(key) else { continue };
        if value.is_list() {
            let steps = read_steps(value, *dimension, cite);
            if let Some((_, first)) = steps.first() {
                let hull = steps.iter().fold(first.value, |hull, (_, figure)| hull.union(figure.value));
                family.figures.insert((*key).to_owned(), Cited { value: hull, ..first.clone() });
            }
            family.by_output.insert((*key).to_owned(), steps);
        } else if let Some(figure) = cite.figure(value, *dimension) {
            if dimension.is_never_negative() && figure.value.low() < 0.0 {
                value.refuse(format!("`{key}` is below zero"), "a magnitude is wanted", "write it without a sign");
            }
            family.figures.insert((*key).to_owned(), figure);
        }
    }
}

/// Reads a figure that depends on the output voltage: `[["18 V", "35 V"], ["any", "40 V"]]`, rising.
pub(super) fn read_steps(value: Value<'_>, dimension: Dimension, cite: &Cite<'_>) -> Vec<(f64, Cited<Range>)> {
    let mut steps: Vec<(f64, Cited<Range>)> = Vec::new();
    for step in value.list().unwrap_or_default() {
        let Some(pair) = step.texts() else { continue };
        let [output, figure] = pair.as_slice() else {
            step.refuse(
                "a step is an output voltage and a figure",
                "not two texts",
                "write [\"up to this output\", \"figure\"], the last with \"any\"",
            );
            continue;
        };
        let limit = if output.as_str() == "any" {
            Some(f64::INFINITY)
        } else {
            read_range(output, Dimension::VOLTAGE).map(Range::high)
        };
        if let (Some(limit), Some(range)) = (limit, read_range(figure, dimension)) {
            if steps.last().is_some_and(|(last, _)| limit <= *last) {
                output.refuse("steps must rise", "not above the step before", "sort them by output voltage");
            }
            steps.push((limit, cite.cite(value.key(), range)));
        }
    }
    steps
}

/// Refuses figures that contradict each other.
fn check_consistency(root: &mut Table<'_>, family: &Family) {
    let high = |key: &str| family.figures.get(key).map(|figure| figure.value.high());
    for (smaller, larger) in [
        ("input_recommended_max", "input_max"),
        ("input_min", "input_max"),
        ("bias_min", "bias_max"),
        ("output_min", "output_max"),
        ("tolerance_initial", "tolerance"),
        ("input_min", "input_recommended_max"),
    ] {
        if let (Some(small), Some(large)) = (high(smaller), high(larger))
            && small > large
            && let Some(value) = root.take(smaller)
        {
            value.refuse(
                format!("`{smaller}` is above `{larger}`"),
                format!("{small} in SI units"),
                format!("`{larger}` is {large} in SI units"),
            );
        }
    }
    if family.kind == FamilyKind::Series && !family.fixed && family.adjust.is_none() {
        root.refuse(
            "neither fixed nor adjustable",
            "in this file",
            "list the fixed `voltages`, or say with `adjust` where the reference lies",
        );
    }
    if family.names.is_empty() && !root.document().has_problems() {
        root.refuse("the family has no name pattern", "`names` is empty", "add the order codes' common part");
    }
}

/// Parses and reads a part file.
///
/// # Errors
/// Every problem of the file.
pub(super) fn family_of(source: &Source, file: &str) -> Result<Family, Vec<crate::source::Problem>> {
    let document = Document::parse(source).map_err(|problem| vec![*problem])?;
    let family = read_family(&document, file);
    let problems = document.into_problems();
    family.filter(|_| problems.is_empty()).ok_or(problems)
}
