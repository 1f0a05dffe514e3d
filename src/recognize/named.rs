//! What a part's name says by itself, and names that fit several families alike.

use std::collections::{BTreeMap, BTreeSet};

use crate::knowledge::{Family, Knowledge, VOLTAGE_CODE};

use super::family_match::{Code, Matcher, reduced};
use super::makers;
use super::voltage_code::{Arbiters, choose, read_name};

/// A family that a name fits.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Named {
    /// Index into `Knowledge::families`.
    pub family: usize,
    /// The output voltage that the name spells, a magnitude in volts.
    pub volts: Option<f64>,
    /// Whether the name says that the part is adjustable.
    pub adjustable: bool,
    /// Whether it is another maker's version of the name, meant alone only where a field names that maker.
    pub by_maker: bool,
}

/// Families that one name fits alike: nothing says which is meant.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Overlap {
    /// A name that fits all of them.
    pub name: String,
    /// What a maker field holds, lower case, for them to be in question; empty where none is needed.
    pub maker: String,
    /// Indices into `Knowledge::families`, rising.
    pub families: Vec<usize>,
}

/// The families that a part's name fits, the best first, then versions that are taken only where their maker is named.
#[must_use]
pub fn families_of_name(name: &str, knowledge: &Knowledge) -> Vec<Named> {
    let matcher = Matcher::new(&knowledge.families);
    let text = reduced(name);
    let hits = matcher.hits(&text);
    let meant = makers::owners(&hits, knowledge);
    let fitting = hits.iter().filter(|hit| meant.contains(&hit.family));
    let mut found: Vec<Named> = fitting
        .map(|hit| {
            let family = knowledge.families.get(hit.family);
            let read = || {
                let family = family?;
                let arbiters = Arbiters { made_for: &family.voltages, rounded: false, stated: &[] };
                let sure = choose(&read_name(&text, hit.base), arbiters).filter(|chosen| chosen.sure)?;
                Some(sure.volts)
            };
            let volts = match hit.code {
                Some(Code::Volts(volts)) => Some(volts),
                Some(Code::Adjustable) => None,
                None => read(),
            };
            Named { family: hit.family, volts, adjustable: hit.code == Some(Code::Adjustable), by_maker: false }
        })
        .collect();
    let versions: Vec<Named> = found
        .iter()
        .flat_map(|named| {
            let parent = knowledge.families.get(named.family).map(|family| family.name.as_str());
            let of_parent = move |family: &Family| family.version_of.as_deref() == parent;
            let all = knowledge.families.iter().enumerate();
            all.filter(move |(_, family)| of_parent(family)).map(|(index, _)| Named {
                family: index,
                by_maker: true,
                ..*named
            })
        })
        .collect();
    found.extend(versions);
    found
}

/// Families that share a name, found by trying the names of some families with their voltages, and some names besides.
/// One name is given for each group of families.
#[must_use]
pub fn overlaps<'a>(knowledge: &Knowledge, of: &[&Family], names: impl IntoIterator<Item = &'a str>) -> Vec<Overlap> {
    let matcher = Matcher::new(&knowledge.families);
    let own = of.iter().flat_map(|family| samples(family));
    let names: BTreeSet<String> = own.chain(names.into_iter().map(reduced)).collect();
    let mut found: BTreeMap<Vec<usize>, (String, String)> = BTreeMap::new();
    for name in names {
        let hits = matcher.hits(&name);
        for (maker, families) in makers::rivals(&hits, knowledge) {
            found.entry(families).or_insert_with(|| (name.clone(), maker));
        }
    }
    found.into_iter().map(|(families, (name, maker))| Overlap { name, maker, families }).collect()
}

/// Names that a family's patterns stand for.
fn samples(family: &Family) -> impl Iterator<Item = String> + '_ {
    let mut codes: Vec<String> = family.codes.keys().chain(&family.adjust_codes).cloned().collect();
    codes.extend(family.adjust.map(|_| "ADJ".to_owned()));
    for volts in &family.voltages {
        let tenths = format!("{volts:.1}");
        codes.extend([format!("{volts}"), format!("{:0>2}", tenths.replace('.', "")), tenths.replace('.', "V")]);
    }
    family.names.iter().flat_map(move |pattern| {
        let mut texts: Vec<String> = if pattern.contains(VOLTAGE_CODE) {
            codes.iter().map(|code| pattern.replace(VOLTAGE_CODE, code)).collect()
        } else {
            vec![pattern.clone()]
        };
        let letters = || (b'A'..=b'Z').chain(std::iter::once(b'1')).map(|sign| char::from(sign).to_string());
        if pattern.contains('?') {
            texts = texts.iter().flat_map(|text| letters().map(|sign| text.replace('?', &sign))).collect();
        } else if pattern.contains('*') && !pattern.contains(VOLTAGE_CODE) {
            texts.extend(letters().map(|sign| pattern.replace('*', &sign)));
        }
        if pattern.contains('*') {
            texts = texts.iter().flat_map(|text| ["", "T-"].map(|run| text.replace('*', run))).collect();
        }
        texts.into_iter().map(|text| reduced(text.trim_end_matches('-')))
    })
}
