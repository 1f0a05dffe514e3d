//! Findings as results of the format.

use std::cmp::Ordering;
use std::collections::BTreeMap;

use super::Told;
use super::artifacts::Artifacts;
use super::log::{
    Location, LogicalLocation, QuantityEntry, ResultEntry, ResultProperties, Slack, Suppression,
    SuppressionProperties, Text,
};
use super::message::{plain, sentence};
use super::rules::Rules;
use crate::board::Place as Declared;
use crate::checks::{Level, Verdict};
use crate::report::board::BoardResult;
use crate::report::inert::inert;
use crate::report::json_value::{Bounds, finite, unit};
use crate::report::settle;
use crate::review::{Accepted, Reviewed};
use crate::source::{Location as Place, Source, Span};

/// Under what a finding's identity is written; the number grows when it is made anew.
const IDENTITY: &str = "findingIdentity/v1";

/// Most places of a result beside its own; hosts refuse more.
const MOST_RELATED: usize = 999;

/// The worst findings, no more than `most`, by place; and how many are left out.
pub(super) fn results(
    told: Vec<Told<'_>>,
    artifacts: &Artifacts,
    rules: &Rules,
    most: usize,
) -> (Vec<ResultEntry>, usize) {
    let mut all = Vec::new();
    let mut last: Option<(&BoardResult, BTreeMap<&str, &str>)> = None;
    for Told { board, found, state } in told {
        let known = last.take().filter(|(one, _)| std::ptr::eq(*one, board));
        let (_, sheets) = last.insert(known.unwrap_or_else(|| (board, sheets(board))));
        let entry = ResultEntry { baseline_state: state, ..result(found, sheets, artifacts, rules) };
        all.push((found.accepted.is_some(), found.finding.level, entry));
    }
    worst(all, most)
}

/// The worst of some results, those that are accepted last, no more than `most`, by place; and how many are left out.
fn worst(mut all: Vec<(bool, Level, ResultEntry)>, most: usize) -> (Vec<ResultEntry>, usize) {
    let left_out = all.len().saturating_sub(most);
    if left_out > 0 {
        all.sort_by(|one, other| (one.0, one.1).cmp(&(other.0, other.1)).then_with(|| order(&one.2, &other.2)));
        all.truncate(most);
    }
    let mut kept: Vec<ResultEntry> = all.into_iter().map(|(_, _, entry)| entry).collect();
    kept.sort_by(order);
    (kept, left_out)
}

/// By file, line, column, rule; then by what tells findings about one place apart.
fn order(one: &ResultEntry, other: &ResultEntry) -> Ordering {
    fn key(entry: &ResultEntry) -> impl Ord + '_ {
        let [place] = &entry.locations;
        (place.order(), &entry.rule_id, entry.partial_fingerprints.get(IDENTITY), entry.message.as_str())
    }
    key(one).cmp(&key(other))
}

/// The sheet of each part.
fn sheets(board: &BoardResult) -> BTreeMap<&str, &str> {
    let components = board.examination.iter().flat_map(|examination| &examination.netlist.components);
    components.map(|component| (component.reference.as_str(), component.sheet.as_str())).collect()
}

fn result(found: &Reviewed, sheets: &BTreeMap<&str, &str>, artifacts: &Artifacts, rules: &Rules) -> ResultEntry {
    let best = found.best_place();
    let location = Location {
        physical_location: artifacts.place(&best.source, best.span),
        logical_locations: logical(found, sheets),
        ..Location::default()
    };
    ResultEntry {
        rule_id: found.finding.check.clone(),
        rule_index: rules.index(&found.finding.check),
        // What is unknown is one too: viewers are made for these, and its level says that it is a note.
        kind: "fail",
        baseline_state: None,
        level: found.finding.level.name(),
        message: Text::new(message(found)),
        locations: [location],
        related_locations: related(found, artifacts),
        partial_fingerprints: BTreeMap::from([(IDENTITY, found.fingerprint.clone())]),
        suppressions: suppressions(found, artifacts),
        properties: properties(found),
    }
}

/// What is wrong, what to do, and what would settle it.
fn message(found: &Reviewed) -> String {
    let finding = &found.finding;
    let mut text = sentence(&finding.message);
    if !finding.hints.is_empty() {
        text.push_str(&format!(" To do: {}", sentence(&finding.hints.join("; "))));
    }
    if finding.verdict != Verdict::Fails
        && let Some(first) = finding.settle.first()
    {
        text.push_str(&format!(" To settle it, declare: {}", sentence(&settle::phrase(first))));
    }
    text
}

/// The parts and nets that it is about. Their kinds stand ahead of their names, for a part and a net may share one.
fn logical(found: &Reviewed, sheets: &BTreeMap<&str, &str>) -> Vec<LogicalLocation> {
    let named = |kind: &'static str, name: &str, path: String| LogicalLocation {
        name: inert(name).into_owned(),
        fully_qualified_name: format!("{kind}:{}", inert(&path)),
        kind,
    };
    let parts = found.parts.iter().map(|part| {
        let sheet = sheets.get(part.as_str()).copied().unwrap_or("");
        named("part", part, format!("{sheet}{part}"))
    });
    parts.chain(found.nets.iter().map(|net| named("net", net, net.clone()))).collect()
}

fn related(found: &Reviewed, artifacts: &Artifacts) -> Vec<Location> {
    let netlist = found.schematic.as_ref().map(|_| (&found.place, "in the netlist"));
    let also = found.also.iter().map(|(place, label)| (place, label.as_str()));
    let mut seen: Vec<(&Source, Span, &str)> = Vec::new();
    let mut list = Vec::new();
    for (place, label) in netlist.into_iter().chain(also).take(MOST_RELATED) {
        let Place { source, span } = place;
        // A bank of capacitors is reached by more than one name.
        if seen.iter().any(|(known, at, text)| known.name() == source.name() && at == span && *text == label) {
            continue;
        }
        seen.push((source, *span, label));
        list.push(Location {
            id: Some(list.len() + 1),
            message: Some(Text::new(sentence(label))),
            physical_location: artifacts.place(source, *span),
            logical_locations: Vec::new(),
        });
    }
    list
}

/// The acceptance; an empty list says that there is none.
fn suppressions(found: &Reviewed, artifacts: &Artifacts) -> Vec<Suppression> {
    let one = |accepted: &Accepted| Suppression {
        kind: "external",
        status: "accepted",
        justification: plain(&accepted.reason),
        location: declared(&accepted.place, artifacts),
        properties: accepted.until.as_ref().map(|until| SuppressionProperties { until: plain(until) }),
    };
    found.accepted.iter().map(one).collect()
}

/// Where an entry of a board file stands.
fn declared(place: &Declared, artifacts: &Artifacts) -> Option<Location> {
    let Declared::File { source, span, .. } = place else { return None };
    Some(Location { physical_location: artifacts.place(source, *span), ..Location::default() })
}

fn properties(found: &Reviewed) -> ResultProperties {
    let finding = &found.finding;
    ResultProperties {
        verdict: finding.verdict.name(),
        slack: finding.slack.map(|(value, dimension)| Slack { value: finite(value), unit: unit(dimension) }),
        quantities: finding
            .quantities
            .iter()
            .map(|(name, figure)| QuantityEntry { name: inert(name).into_owned(), bounds: Bounds::of(figure) })
            .collect(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::sarif::log::{ArtifactLocation, PhysicalLocation};
    use crate::report::sarif::places::Places;

    fn entry(is_accepted: bool, level: Level, line: usize) -> (bool, Level, ResultEntry) {
        let places = Places::of(&Source::new("a.net", "\n".repeat(9)));
        let artifact_location = ArtifactLocation { uri: "a.net".to_owned(), uri_base_id: "SRCROOT", index: 0 };
        let region = Some(places.region(Span::new(line - 1, line - 1)));
        let physical_location = Some(PhysicalLocation { artifact_location, region });
        let entry = ResultEntry {
            rule_id: "headroom".to_owned(),
            rule_index: 0,
            kind: "fail",
            baseline_state: None,
            level: level.name(),
            message: Text::new(String::new()),
            locations: [Location { physical_location, ..Location::default() }],
            related_locations: Vec::new(),
            partial_fingerprints: BTreeMap::new(),
            suppressions: Vec::new(),
            properties: ResultProperties { verdict: "fails", slack: None, quantities: Vec::new() },
        };
        (is_accepted, level, entry)
    }

    fn lines(all: Vec<(bool, Level, ResultEntry)>, most: usize) -> (Vec<usize>, usize) {
        let (kept, left_out) = worst(all, most);
        let line = |entry: &ResultEntry| entry.locations[0].order().1.unwrap().start_line;
        (kept.iter().map(line).collect(), left_out)
    }

    #[test]
    fn the_worst_are_kept_and_stand_by_place() {
        let all = || {
            vec![
                entry(false, Level::Note, 1),
                entry(true, Level::Error, 2),
                entry(false, Level::Error, 9),
                entry(false, Level::Warning, 3),
            ]
        };
        assert_eq!(lines(all(), 4), (vec![1, 2, 3, 9], 0));
        assert_eq!(lines(all(), 3), (vec![1, 3, 9], 1));
        assert_eq!(lines(all(), 1), (vec![9], 3));
    }
}
