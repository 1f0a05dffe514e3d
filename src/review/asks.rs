//! What there is to declare about a board, with what is taken in its place now and what hangs on it.

use std::cmp::Reverse;
use std::collections::{BTreeMap, BTreeSet};

use super::Reviewed;
use super::settle::{Decisive, declare_first, rank};
use crate::checks::{Figures, Verdict};
use crate::circuit::NetId;
use crate::facts::{DEFINITIONS, Facts, RailOrigin, Subject, SubjectKind};
use crate::quantity::{Dimension, Quantity, Range, Settle, Table};
use crate::recognize::RegulatorKind;

/// A table of a board file that is worth writing: everything to declare about one net or part.
#[derive(Debug, Clone)]
pub struct Ask {
    /// The table.
    pub table: Table,
    /// The net or reference that it is about; empty for `[board]`.
    pub target: String,
    /// Its keys, the most decisive first.
    pub keys: Vec<AskedKey>,
    /// What names one of the keys as the first thing to settle; each once, by check.
    pub decides: Vec<Hanging>,
    /// What names one of them later.
    pub concerns: Vec<Hanging>,
    /// How much it decides; zero where no verdict hangs on it now.
    pub weight: usize,
}

/// A key to write.
#[derive(Debug, Clone)]
pub struct AskedKey {
    /// The declaration.
    pub settle: Settle,
    /// What is taken now, in SI units; `None` where nothing is, or no range can say it.
    pub taken: Option<(Range, Dimension)>,
    /// A word in place of the example of the declaration, where the board tells a better one.
    pub word: Option<String>,
    /// Where what is taken comes from, or why nothing is; empty where that is not known.
    pub source: String,
}

/// Requirements of one check that hang on a declaration.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Hanging {
    /// What they came to.
    pub verdict: Verdict,
    /// The check.
    pub check: String,
    /// What it was asked of.
    pub subjects: Vec<String>,
}

/// All that is asked about a board.
#[derive(Debug, Clone)]
pub struct Asks {
    /// What decides or concerns a verdict, the most decisive first, then the sources and loads on which none hangs now.
    pub tables: Vec<Ask>,
    /// How many further guesses stand behind the figures, on which no verdict hangs now.
    pub left_out: usize,
}

/// What there is to declare about a board, given what was found on it.
#[must_use]
pub fn asks(facts: &Facts<'_>, findings: &[Reviewed]) -> Asks {
    let decisive = declare_first(facts, findings);
    let told = Told::of(facts, findings);
    let mut tables: Vec<Ask> = Vec::new();
    let mut places: BTreeMap<(Table, String), usize> = BTreeMap::new();
    let quiet = quiet_sources(facts).into_iter().chain(told.loads());
    let quiet: BTreeSet<Settle> = quiet.collect();
    let quiet = quiet.into_iter().map(|settle| Decisive { settle, decides: 0, concerns: 0, weight: 0 });
    let known: BTreeSet<Settle> = decisive.iter().map(|each| each.settle.clone()).collect();
    let mut quiet: Vec<Decisive> = quiet.filter(|each| !known.contains(&each.settle)).collect();
    quiet.sort_by_cached_key(|each| rank(facts, &each.settle));
    let asked: BTreeSet<Settle> = known.iter().cloned().chain(quiet.iter().map(|one| one.settle.clone())).collect();
    for each in decisive.into_iter().chain(quiet) {
        let settle = each.settle;
        let at = *places.entry((settle.table, settle.target.clone())).or_insert_with(|| {
            tables.push(Ask {
                table: settle.table,
                target: settle.target.clone(),
                keys: Vec::new(),
                decides: told.hanging(&settle, true),
                concerns: told.hanging(&settle, false),
                weight: 0,
            });
            tables.len() - 1
        });
        let Some(ask) = tables.get_mut(at) else { continue };
        ask.weight += each.weight;
        ask.keys.push(told.key(facts, settle));
    }
    tables.sort_by_key(|ask| Reverse(ask.weight));
    let left_out = behind(facts).into_iter().filter(|settle| !asked.contains(settle)).count();
    Asks { tables, left_out }
}

/// Sources that feed regulators and are not declared.
fn quiet_sources(facts: &Facts<'_>) -> Vec<Settle> {
    let inputs = facts.regulators().filter_map(|(_, regulator)| regulator.input_net);
    let sources: BTreeSet<NetId> = inputs.filter_map(|net| source_of(facts, net)).collect();
    let settle = |net: NetId| {
        let voltage = facts.rail(net).voltage;
        settles(&voltage).find(|settle| settle.table == Table::Supply).cloned()
    };
    sources.into_iter().filter_map(settle).collect()
}

/// The net from which power comes to another, where that is neither declared nor the ground.
fn source_of(facts: &Facts<'_>, net: NetId) -> Option<NetId> {
    let mut seen = BTreeSet::new();
    let mut at = net;
    while seen.insert(at) {
        at = match facts.rail(at).origin {
            RailOrigin::Named | RailOrigin::Unknown => return Some(at),
            RailOrigin::Through { from, .. } => from,
            RailOrigin::Regulator(id) => facts.regulator(Subject::Regulator(id))?.input_net?,
            RailOrigin::Ground | RailOrigin::Declared | RailOrigin::Rectified(_) => return None,
        };
    }
    None
}

/// Every declaration that a figure of a regulator asks for.
fn behind(facts: &Facts<'_>) -> BTreeSet<Settle> {
    let names = DEFINITIONS.iter().flat_map(|file| file.iter()).filter(|entry| entry.of == SubjectKind::Regulator);
    let names: Vec<&str> = names.map(|entry| entry.name).collect();
    let mut found = BTreeSet::new();
    for subject in facts.subjects(SubjectKind::Regulator) {
        for figure in names.iter().filter_map(|name| facts.figure(subject, name)) {
            found.extend(settles(&figure).cloned());
        }
    }
    found
}

/// The declarations that would settle what a figure rests on.
fn settles(figure: &Quantity) -> impl Iterator<Item = &Settle> {
    figure.missing_evidence().chain(figure.evidence()).filter_map(|evidence| evidence.settle.as_ref())
}

/// Subjects by whether the declaration is named first, verdict and check.
type ByCheck = BTreeMap<(bool, Verdict, String), Vec<String>>;

/// What is told about declarations: what is taken in their place, and what hangs on them.
struct Told {
    taken: BTreeMap<Settle, (Range, Dimension)>,
    sources: BTreeMap<Settle, String>,
    /// By what a declaration is about.
    hanging: BTreeMap<(Table, String), ByCheck>,
    /// The loads that are guessed.
    guessed_loads: Vec<Settle>,
}

impl Told {
    fn of(facts: &Facts<'_>, findings: &[Reviewed]) -> Self {
        let mut told = Self {
            taken: BTreeMap::new(),
            sources: BTreeMap::new(),
            hanging: BTreeMap::new(),
            guessed_loads: Vec::new(),
        };
        told.loads_of(facts);
        told.capacitors_of(facts);
        for reviewed in findings.iter().filter(|reviewed| reviewed.accepted.is_none()) {
            for (_, figure) in &reviewed.finding.quantities {
                told.learn(figure);
            }
            told.hang(facts, reviewed);
        }
        told
    }

    fn loads(&self) -> impl Iterator<Item = Settle> + '_ {
        self.guessed_loads.iter().cloned()
    }

    /// Where the guesses of a figure come from.
    fn learn(&mut self, figure: &Quantity) {
        for evidence in figure.missing_evidence().chain(figure.evidence()) {
            if let Some(settle) = &evidence.settle {
                self.sources.entry(settle.clone()).or_insert_with(|| evidence.source.clone());
            }
        }
    }

    /// A figure that is nothing but the guess, so that its range is what is taken.
    fn take(&mut self, figure: &Quantity, wanted: impl Fn(&Settle) -> bool) {
        let mut guesses = settles(figure).filter(|settle| wanted(settle));
        let Some(settle) = guesses.next().cloned() else { return };
        self.learn(figure);
        if let Some(range) = figure.shown() {
            self.taken.entry(settle).or_insert((range, figure.dimension()));
        }
    }

    fn loads_of(&mut self, facts: &Facts<'_>) {
        for (id, regulator) in facts.regulators() {
            let name = match regulator.kind {
                RegulatorKind::Series | RegulatorKind::Reference => "load",
                RegulatorKind::Shunt => "reference_load",
                RegulatorKind::Switching => continue,
            };
            let Some(figure) = facts.figure(Subject::Regulator(id), name) else { continue };
            let output = regulator.output_net.map_or("", |net| facts.circuit().net(net).name.as_str());
            let wanted = |settle: &Settle| settle.table == Table::Load && settle.target == output;
            if let Some(settle) = settles(&figure).find(|settle| wanted(settle)) {
                self.guessed_loads.push(settle.clone());
            }
            self.take(&figure, wanted);
        }
    }

    fn capacitors_of(&mut self, facts: &Facts<'_>) {
        for subject in facts.subjects(SubjectKind::Capacitor) {
            for key in ["effective_capacitance", "esr"] {
                if let Some(figure) = facts.figure(subject, key) {
                    self.take(&figure, |settle| settle.key == key);
                }
            }
        }
    }

    fn hang(&mut self, facts: &Facts<'_>, reviewed: &Reviewed) {
        let finding = &reviewed.finding;
        if finding.verdict == Verdict::Fails {
            return;
        }
        let own = (finding.check.clone(), facts.label(finding.subject));
        let merged = reviewed.merged.iter().map(|one| (one.finding.check.clone(), facts.label(one.finding.subject)));
        let all: Vec<(String, String)> = std::iter::once(own).chain(merged).collect();
        let mut seen = BTreeSet::new();
        for (place, settle) in finding.settle.iter().enumerate() {
            let target = (settle.table, settle.target.clone());
            if !seen.insert(target.clone()) {
                continue;
            }
            let by_check = self.hanging.entry(target).or_default();
            for (check, label) in &all {
                let labels = by_check.entry((place == 0, finding.verdict, check.clone())).or_default();
                if !labels.contains(label) {
                    labels.push(label.clone());
                }
            }
        }
    }

    fn hanging(&self, settle: &Settle, first: bool) -> Vec<Hanging> {
        let found = self.hanging.get(&(settle.table, settle.target.clone())).into_iter().flatten();
        found
            .filter(|((is_first, ..), _)| *is_first == first)
            .map(|((_, verdict, check), subjects)| Hanging {
                verdict: *verdict,
                check: check.clone(),
                subjects: subjects.clone(),
            })
            .collect()
    }

    /// What is drawn from a net, for what is drawn from it all the time: no more than that.
    fn current(&self, facts: &Facts<'_>, settle: &Settle) -> Option<(Range, Dimension)> {
        if (settle.table, settle.key) != (Table::Load, "continuous") {
            return None;
        }
        let declared = facts.board().load(&settle.target).and_then(|load| load.current.as_ref());
        let of_net =
            |other: &&Settle| (other.table, &other.target, other.key) == (Table::Load, &settle.target, "current");
        declared
            .map(|current| (current.value, Dimension::CURRENT))
            .or_else(|| self.taken.get(self.taken.keys().find(of_net)?).copied())
    }

    fn key(&self, facts: &Facts<'_>, settle: Settle) -> AskedKey {
        let figure = figure_of(facts, &settle);
        let taken = figure.as_ref().and_then(|figure| Some((figure.shown()?, figure.dimension())));
        let taken = self.taken.get(&settle).copied().or(taken).or_else(|| self.current(facts, &settle));
        let mut source = self.sources.get(&settle).cloned().unwrap_or_default();
        if let Some(figure) = figure.filter(|_| source.is_empty()) {
            let mut evidence = figure.missing_evidence().chain(figure.evidence());
            let found = evidence.find(|evidence| evidence.settle.as_ref() == Some(&settle));
            source = found.map_or_else(String::new, |evidence| evidence.source.clone());
        }
        AskedKey { taken, word: family(facts, &settle), source, settle }
    }
}

/// The figure that a declaration takes the place of, where one is just that.
fn figure_of(facts: &Facts<'_>, settle: &Settle) -> Option<Quantity> {
    match (settle.table, settle.key) {
        (Table::Board, "ambient") => Some(facts.ambient()),
        (Table::Supply, "voltage") => Some(facts.rail(facts.circuit().net_named(&settle.target)?).voltage),
        (Table::Part, key) => {
            let name = match key {
                "minimum_output_capacitance" => "asked_capacitance",
                "minimum_input_capacitance" => "asked_input_capacitance",
                "output_voltage" => "set_point",
                _ => return None,
            };
            let of = |regulator: &&crate::recognize::Regulator| facts.part_of(regulator).reference == settle.target;
            let (id, _) = facts.regulators().find(|(_, regulator)| of(regulator))?;
            facts.figure(Subject::Regulator(id), name)
        }
        (Table::Rail, "voltage") => {
            let net = facts.circuit().net_named(&settle.target)?;
            let (id, _) = facts.regulators().find(|(_, regulator)| regulator.output_net == Some(net))?;
            facts.figure(Subject::Regulator(id), "name_voltage")
        }
        _ => None,
    }
}

/// The family that a part is taken for, for a declaration of its family.
fn family(facts: &Facts<'_>, settle: &Settle) -> Option<String> {
    if (settle.table, settle.key) != (Table::Part, "family") {
        return None;
    }
    let (_, regulator) = facts.regulators().find(|(_, one)| facts.part_of(one).reference == settle.target)?;
    facts.families(regulator).next().map(|family| family.name.clone())
}
