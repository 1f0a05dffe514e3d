//! The ways in which a board is fitted: as it is drawn, in each assembly variant, with each second-source part.
//!
//! Each is judged by itself. What is found in all of them stands for the board; another finding says for which.

use std::collections::{BTreeMap, BTreeSet};

use super::entries::UNUSED;
use super::examine::{Examination, Reviewed, slot};
use super::notice::review_check;
use crate::board::{Board, PartEntry};
use crate::checks::Verdict;
use crate::checks::cases::Told;
use crate::facts::Subject;
use crate::netlist::Netlist;
use crate::recognize::{Design, holds_part_number};
use crate::source::Problem;

/// Most ways of fitting a board that are judged besides the one that is drawn.
pub const MOST_ASSEMBLIES: usize = 16;

/// What the way that is drawn is called.
const AS_DRAWN: &str = "as drawn";
/// Most ways that a message names.
const MOST_NAMES: usize = 3;
/// Fields that hold the number of a second-source part; compared in lower case, letters and digits only.
const SECOND_SOURCES: &[&str] = &[
    "mpn2",
    "altmpn",
    "mpnalt",
    "alternatempn",
    "alternativempn",
    "secondsource",
    "secondsourcempn",
    "alternatepart",
];

/// A way of fitting the board otherwise than drawn.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) enum Assembly {
    /// An assembly variant of the export.
    Variant(String),
    /// Another part in one place.
    Alternative { reference: String, value: String },
}

impl Assembly {
    /// As it ends a message.
    pub(super) fn label(&self) -> String {
        match self {
            Self::Variant(name) => format!("in variant {name}"),
            Self::Alternative { reference, value } => format!("with {reference} as {value}"),
        }
    }

    /// The board fitted in this way.
    pub(super) fn fit(&self, netlist: &Netlist, board: &Board) -> (Netlist, Board) {
        let mut board = board.clone();
        match self {
            Self::Variant(name) => (netlist.as_variant(name), board),
            Self::Alternative { reference, value } => {
                let mut netlist = netlist.clone();
                for part in netlist.components.iter_mut().filter(|part| part.reference == *reference) {
                    part.value.clone_from(value);
                    part.fields.retain(|field| !holds_part_number(&field.name));
                }
                for part in board.parts.iter_mut().filter(|part| part.reference.value == *reference) {
                    *part = of_the_place(part);
                }
                (netlist, board)
            }
        }
    }
}

/// What is declared about a place on the board, without what is declared about the part that is drawn there.
fn of_the_place(part: &PartEntry) -> PartEntry {
    PartEntry {
        heatsink: part.heatsink.clone(),
        junction_to_ambient: part.junction_to_ambient.clone(),
        ignore: part.ignore.clone(),
        load_current: part.load_current.clone(),
        supply_voltage: part.supply_voltage.clone(),
        ..PartEntry::new(part.reference.clone())
    }
}

/// The ways to judge besides the one that is drawn: variants by name, then second sources by part; a warning where there
/// are more than are judged.
pub(super) fn assemblies(netlist: &Netlist, board: &Board, drawn: &Design) -> (Vec<Assembly>, Option<Problem>) {
    let mut all: Vec<Assembly> =
        netlist.variant_names().into_iter().map(|name| Assembly::Variant(name.to_owned())).collect();
    for part in &board.parts {
        let reference = &part.reference.value;
        let values = part.alternatives.iter().flat_map(|declared| &declared.value);
        all.extend(values.map(|value| Assembly::Alternative { reference: reference.clone(), value: value.clone() }));
    }
    all.extend(told_by_fields(drawn));
    let mut known = BTreeSet::new();
    all.retain(|one| known.insert(one.label()));
    let more = all.len().saturating_sub(MOST_ASSEMBLIES);
    all.truncate(MOST_ASSEMBLIES);
    let problem = (more > 0).then(|| {
        let message = format!("{more} more variants and second-source parts are not judged");
        Problem::warning(message).help(format!("{MOST_ASSEMBLIES} are judged besides the board as drawn"))
    });
    (all, problem)
}

/// Second sources in fields of regulators; of other parts a number says nothing that could be judged.
fn told_by_fields(drawn: &Design) -> Vec<Assembly> {
    let mut all = Vec::new();
    let devices: BTreeSet<_> = drawn.regulators.iter().map(|one| one.device).collect();
    for device in devices.into_iter().map(|device| drawn.circuit.device(device)) {
        for field in &device.fields {
            let name: String = field.name.to_lowercase().chars().filter(|sign| sign.is_alphanumeric()).collect();
            let value = field.value.trim();
            if SECOND_SOURCES.contains(&name.as_str()) && !value.is_empty() && value != "~" && value != device.value {
                all.push(Assembly::Alternative { reference: device.reference.clone(), value: value.to_owned() });
            }
        }
    }
    all
}

/// Adds what was found in other ways of fitting a board to what was found as drawn.
pub(super) fn merge(drawn: &mut Examination, others: impl Iterator<Item = (String, Examination)>) {
    let mut labels = vec![AS_DRAWN.to_owned()];
    let mut groups = Groups::default();
    for found in std::mem::take(&mut drawn.findings) {
        groups.add(0, found);
    }
    for (index, (label, other)) in others.enumerate() {
        labels.push(label);
        let Examination { findings, told, problems, design, .. } = other;
        for mut found in findings {
            found.finding.subject = subject_in(&drawn.design, &design, found.finding.subject);
            found.finding.member = found.finding.member.map(|one| subject_in(&drawn.design, &design, one));
            groups.add(index + 1, found);
        }
        add_told(drawn, told);
        for problem in problems {
            if drawn.problems.iter().all(|known| known.message() != problem.message()) {
                drawn.problems.push(problem);
            }
        }
    }
    drawn.findings = groups.told(&labels, drawn);
    drawn.accepted = drawn.findings.iter().filter(|found| found.accepted.is_some()).count();
    let open_notice = |found: &&Reviewed| review_check(&found.finding.check).is_some() && found.accepted.is_none();
    drawn.review = drawn.findings.iter().filter(open_notice).count();
    drawn.assemblies = labels;
}

/// Findings that are the same, with the ways of fitting in which they were made.
#[derive(Debug, Default)]
struct Groups {
    groups: Vec<(Reviewed, Vec<usize>)>,
    known: BTreeMap<(String, Verdict, bool), usize>,
}

impl Groups {
    fn add(&mut self, way: usize, found: Reviewed) {
        let key = (found.fingerprint.clone(), found.finding.verdict, found.accepted.is_some());
        let known = self.known.get(&key).and_then(|index| self.groups.get_mut(*index));
        match known {
            Some((_, ways)) => ways.push(way),
            None => {
                self.known.insert(key, self.groups.len());
                self.groups.push((found, vec![way]));
            }
        }
    }

    /// Every finding, marked with the ways for which it stands where those are not all.
    fn told(self, labels: &[String], drawn: &mut Examination) -> Vec<Reviewed> {
        let accepted_as_drawn: BTreeSet<(String, String)> = self
            .groups
            .iter()
            .filter(|(found, ways)| found.accepted.is_some() && ways.contains(&0))
            .map(|(found, _)| (found.finding.check.clone(), found.subject.clone()))
            .collect();
        let mut left_out = accepted_as_drawn;
        let mut all = Vec::new();
        for (mut found, ways) in self.groups {
            let in_all = ways.len() == labels.len();
            // An acceptance is of use if it is in one of them.
            if !in_all && found.finding.check == UNUSED.name {
                continue;
            }
            if !in_all {
                found.variants = ways.iter().filter_map(|way| labels.get(*way)).cloned().collect();
                found.finding.message = format!("{}, {}", found.finding.message, named(&found.variants));
            }
            let about = (found.finding.check.clone(), found.subject.clone());
            if found.accepted.is_some() && review_check(&about.0).is_none() && left_out.insert(about) {
                let count = slot(&mut drawn.counts, found.finding.verdict);
                *count = count.saturating_sub(1);
            }
            all.push(found);
        }
        all.sort_by_key(|found| {
            let check = &found.finding.check;
            (found.finding.level, review_check(check).is_some(), check.clone())
        });
        all
    }
}

/// `only as drawn`; `in variant Lite and with U3 as LD1117S33`.
fn named(ways: &[String]) -> String {
    if let [only] = ways {
        return if only == AS_DRAWN { format!("only {only}") } else { only.clone() };
    }
    let shown = ways.iter().take(MOST_NAMES).map(String::as_str).collect::<Vec<_>>().join(" and ");
    match ways.len().saturating_sub(MOST_NAMES) {
        0 => shown,
        more => format!("{shown} and {more} more"),
    }
}

/// The subject as the board that is drawn numbers it: devices and nets are the same, regulators may not be.
fn subject_in(drawn: &Design, other: &Design, subject: Subject) -> Subject {
    let Subject::Regulator(id) = subject else { return subject };
    let Some(one) = other.regulators.get(id.0) else { return Subject::Board };
    let same =
        |known: &crate::recognize::Regulator| known.device == one.device && known.output_index == one.output_index;
    drawn
        .regulators
        .iter()
        .position(same)
        .map_or(Subject::Board, |index| Subject::Regulator(crate::recognize::RegulatorId(index)))
}

/// Counts each requirement once, by the worst that it came to.
fn add_told(drawn: &mut Examination, told: Vec<Told>) {
    let mut places: BTreeMap<(String, String), usize> = BTreeMap::new();
    for (index, one) in drawn.told.iter().enumerate() {
        places.entry((one.check.clone(), one.subject.clone())).or_insert(index);
    }
    for one in told {
        let place = places.get(&(one.check.clone(), one.subject.clone())).copied();
        match place.and_then(|index| drawn.told.get_mut(index)) {
            Some(known) if one.verdict < known.verdict => {
                let before = slot(&mut drawn.counts, known.verdict);
                *before = before.saturating_sub(1);
                *slot(&mut drawn.counts, one.verdict) += 1;
                known.verdict = one.verdict;
            }
            Some(_) => {}
            None => {
                drawn.counts.requirements += 1;
                *slot(&mut drawn.counts, one.verdict) += 1;
                drawn.told.push(one);
            }
        }
    }
}
