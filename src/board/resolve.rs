//! Looking up the names that a board file takes from elsewhere: standards, technologies, families, checks, nets and
//! parts.

use std::collections::BTreeSet;

use crate::circuit::Circuit;
use crate::knowledge::Knowledge;
use crate::quantity::{Dimension, Grade, Quantity};
use crate::source::Problem;
use crate::source::toml::nearest;

use super::declared::{Declared, Place};
use super::model::{Board, Standard, StandardVoltage, SupplyEntry};

impl Board {
    /// Looks up every standard supply, capacitor technology and part family that is named.
    #[must_use]
    pub fn resolve(&mut self, knowledge: &Knowledge) -> Vec<Problem> {
        let standard = |name: &str| {
            let voltage = &knowledge.supply(name)?.voltage;
            let (range, source) = (voltage.value, voltage.source.clone());
            Some(StandardVoltage { range, source, recalled: voltage.recalled })
        };
        let technology = |words: &str| knowledge.technology(words).map(|found| found.name.clone());
        let words = knowledge.technologies.iter().flat_map(|one| std::iter::once(&one.name).chain(&one.words));
        let mut problems = self.resolve_standards(standard, knowledge.supplies.iter().map(|one| one.name.as_str()));
        problems.extend(self.resolve_technologies(technology, words.map(String::as_str)));
        let families = knowledge.families.iter().map(|one| one.name.as_str());
        problems.extend(self.check_families(|name| knowledge.family(name).is_some(), families));
        problems
    }

    /// Looks up every standard supply that is named. `names` are the names to offer for an unknown one.
    #[must_use]
    pub fn resolve_standards<'a>(
        &mut self,
        lookup: impl Fn(&str) -> Option<StandardVoltage>,
        names: impl IntoIterator<Item = &'a str> + Clone,
    ) -> Vec<Problem> {
        let mut problems = Vec::new();
        for standard in self.supplies.iter_mut().filter_map(|supply| supply.standard.as_mut()) {
            standard.value.found = lookup(&standard.value.name);
            if standard.value.found.is_none() {
                let message = format!("`{}` is no standard supply that is known", standard.value.name);
                problems.push(unknown(message, "not known", &standard.value.name, names.clone(), standard));
            }
        }
        problems
    }

    /// Looks up every capacitor technology that is named; `lookup` takes plain words in lower case and gives the
    /// technology's own name. A word from a symbol's field that is not known is passed over: fields are free text.
    #[must_use]
    pub fn resolve_technologies<'a>(
        &mut self,
        lookup: impl Fn(&str) -> Option<String>,
        names: impl IntoIterator<Item = &'a str> + Clone,
    ) -> Vec<Problem> {
        let mut problems = Vec::new();
        for part in &mut self.parts {
            let Some(technology) = &part.technology else { continue };
            part.technology_name = lookup(&technology.value);
            if part.technology_name.is_none() && technology.place.file().is_some() {
                let message = format!("`{}` is no capacitor technology that is known", technology.value);
                problems.push(unknown(message, "not known", &technology.value, names.clone(), technology));
            }
        }
        problems
    }

    /// Every part family that is named and that `knows` does not know; `names` are the names to offer.
    #[must_use]
    pub fn check_families<'a>(
        &self,
        knows: impl Fn(&str) -> bool,
        names: impl IntoIterator<Item = &'a str> + Clone,
    ) -> Vec<Problem> {
        let families = self.parts.iter().filter_map(|part| part.family.as_ref());
        families
            .filter(|family| !knows(&family.value))
            .map(|family| {
                let message = format!("`{}` is no part family that is known", family.value);
                unknown(message, "not known", &family.value, names.clone(), family)
            })
            .collect()
    }

    /// Every check that is named, in settings, acceptances or expectations, and not among `names`.
    #[must_use]
    pub fn check_checks<'a>(&self, names: impl IntoIterator<Item = &'a str> + Clone) -> Vec<Problem> {
        let known: BTreeSet<&str> = names.clone().into_iter().collect();
        let mut problems = Vec::new();
        let mut ask = |check: &str, place: &Place, label: &str| {
            if !known.contains(check) {
                let declared = Declared::new((), place.clone());
                problems.push(unknown(
                    format!("there is no check `{check}`"),
                    label,
                    check,
                    names.clone(),
                    &declared,
                ));
            }
        };
        for accept in &self.accepts {
            ask(&accept.check.value, &accept.check.place, "not a check");
        }
        for (check, keys) in &self.settings {
            if let Some(setting) = keys.values().next() {
                ask(check, &setting.place, "a setting of it");
            }
        }
        for (check, subjects) in self.expect.iter().flatten() {
            if let Some(verdict) = subjects.values().next() {
                ask(check, &verdict.place, "a verdict of it");
            }
        }
        problems
    }

    /// Every net and part that is named in the board's own file and that the board lacks. The house file is written
    /// for other boards too: what it names is passed over. So is the part of an acceptance that carries a
    /// fingerprint, which survives renumbering.
    #[must_use]
    pub fn check_against(&self, circuit: &Circuit) -> Vec<Problem> {
        let nets: BTreeSet<&str> = circuit.nets().map(|net| circuit.net(net).name.as_str()).collect();
        let parts: BTreeSet<&str> =
            circuit.devices().map(|device| circuit.device(device).reference.as_str()).collect();
        let mut problems = Vec::new();
        let mut ask = |known: &BTreeSet<&str>, what: &str, name: &str, place: &Place| {
            if !known.contains(name) && !place.is_shared() {
                let declared = Declared::new((), place.clone());
                let message = format!("the board has no {what} `{name}`");
                problems.push(unknown(message, "not on this board", name, known.iter().copied(), &declared));
            }
        };
        for supply in &self.supplies {
            supply.nodes.value.nets().for_each(|net| ask(&nets, "net", net, &supply.nodes.place));
        }
        let named = self.loads.iter().map(|load| &load.net).chain(self.rails.iter().map(|rail| &rail.net));
        named.chain(&self.grounds).for_each(|net| ask(&nets, "net", &net.value, &net.place));
        self.parts.iter().for_each(|part| ask(&parts, "part", &part.reference.value, &part.reference.place));
        for accept in self.accepts.iter().filter(|accept| accept.finding.is_none()) {
            accept.net.iter().for_each(|net| ask(&nets, "net", &net.value, &net.place));
            accept.part.iter().for_each(|part| ask(&parts, "part", &part.value, &part.place));
        }
        problems.extend(self.supplies.iter().filter_map(SupplyEntry::frequency_without_ac));
        problems.sort_by_key(|problem| problem.place().map(|(source, span)| (source.name().to_owned(), span)));
        problems
    }
}

impl SupplyEntry {
    /// A frequency says nothing of a supply that is not an alternating one. Asked of the merged board, for the two
    /// keys may stand in two files.
    fn frequency_without_ac(&self) -> Option<Problem> {
        let frequency = self.frequency.as_ref().filter(|_| self.ac.is_none())?;
        let problem = Problem::error(format!("the supply {} has a frequency and no `ac`", self.nodes.value.shown()));
        Some(frequency.place.mark(problem, "frequency of what?").help("add its rms voltage: `ac = \"9 V\"`"))
    }

    /// The direct voltage that is declared, or that of the standard that is named, as a figure in volts; `None` where
    /// nothing is known or it is an alternating supply. `what` says what it is about: `voltage of +5V`.
    #[must_use]
    pub fn voltage_quantity(&self, what: impl Into<String>) -> Option<Quantity> {
        if let Some(voltage) = &self.voltage {
            return Some(voltage.quantity(Dimension::VOLTAGE, what));
        }
        let standard = self.standard.as_ref()?;
        let Standard { name, found } = &standard.value;
        let found = found.as_ref()?;
        // A standard that was recalled and not read is no better founded for being named in a file.
        let grade = if found.recalled { Grade::Inferred } else { Grade::Declared };
        let mut evidence = standard.evidence(what).at_most(grade);
        evidence.source = format!("{name} ({}), {}", found.source, standard.place.shown());
        Some(Quantity::fact(Dimension::VOLTAGE, found.range, evidence))
    }
}

/// The problem of a name that is not known, with the nearest one as help.
fn unknown<'a, T>(
    message: String,
    label: &str,
    name: &str,
    names: impl IntoIterator<Item = &'a str>,
    declared: &Declared<T>,
) -> Problem {
    let problem = declared.place.mark(Problem::error(message), label);
    let mut names: Vec<&str> = names.into_iter().collect();
    names.sort_unstable();
    match nearest(name, names.iter().copied()) {
        Some(near) => problem.help(format!("did you mean `{near}`?")),
        None => problem.help("check the spelling; names must be written exactly"),
    }
}
