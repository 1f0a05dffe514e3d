//! The impedance of a capacitor bank over frequency, as one network: each capacitor with its ESR, its inductance and its
//! series resistors, alone or behind ferrites and inductors.

use std::collections::BTreeMap;

use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceId, DeviceKind};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range};
use crate::recognize::{Branch, Regulator, Side};

/// The band over which a bank's resistance is taken: where the loops of such parts cross over (hertz, logarithmic).
const BAND: [f64; 7] = [20e3, 35e3, 60e3, 100e3, 170e3, 300e3, 500e3];
/// The frequency of the bank's nominal resistance (hertz).
const MIDBAND: f64 = 100e3;
/// Inductance of a ceramic and of other capacitors with their connections, henries (common practice).
const CERAMIC_INDUCTANCE: f64 = 1e-9;
const OTHER_INDUCTANCE: f64 = 8e-9;
/// A ferrite bead in the band: henries and ohms (common practice: below a megahertz a bead is an inductor of about 1 µH).
const BEAD: (f64, f64) = (1e-6, 0.05);
/// Winding resistance of an inductor, ohms (common practice).
const WINDING: f64 = 0.1;

pub(super) const DEFINITIONS: &[Definition] = &[Definition {
    name: "bank_esr",
    of: SubjectKind::Regulator,
    kind: ValueKind::Figure(Dimension::RESISTANCE),
    meaning: "resistance of the whole output bank where the loop crosses over",
    defined_in: file!(),
    compute: |facts: &Facts<'_>, subject: Subject| of(facts, subject, |regulator| facts.bank_esr(regulator)),
}];

/// A resistance and a reactance in series, ohms.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Impedance {
    resistance: f64,
    reactance: f64,
}

impl Impedance {
    fn plus(self, other: Self) -> Self {
        Self { resistance: self.resistance + other.resistance, reactance: self.reactance + other.reactance }
    }

    /// `1 / Z`, in siemens.
    fn inverse(self) -> Self {
        let square = self.resistance * self.resistance + self.reactance * self.reactance;
        Self { resistance: self.resistance / square, reactance: -self.reactance / square }
    }
}

/// A capacitor with what lies in series: farads, ohms, henries.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Series {
    capacitance: f64,
    resistance: f64,
    inductance: f64,
}

impl Series {
    fn at(self, omega: f64) -> Impedance {
        let reactance = omega * self.inductance - 1.0 / (omega * self.capacitance);
        Impedance { resistance: self.resistance, reactance }
    }
}

/// Capacitors that share a way to the bank's net: its ohms and henries, then each.
#[derive(Debug, Clone, PartialEq, Default)]
struct Group {
    resistance: f64,
    inductance: f64,
    members: Vec<Series>,
}

/// `Z = 1 / Σ 1 / (Z_way + 1 / Σ 1 / Z_capacitor)`.
fn parallel(groups: &[Group], frequency: f64) -> Impedance {
    let omega = std::f64::consts::TAU * frequency;
    let none = Impedance { resistance: 0.0, reactance: 0.0 };
    let admittance = groups.iter().filter(|group| !group.members.is_empty()).fold(none, |sum, group| {
        let inner = group.members.iter().fold(none, |sum, member| sum.plus(member.at(omega).inverse()));
        let way = Impedance { resistance: group.resistance, reactance: omega * group.inductance };
        sum.plus(way.plus(inner.inverse()).inverse())
    });
    admittance.inverse()
}

impl Facts<'_> {
    /// Re Z of the bank: the least over the band with every ESR low, the most with every ESR high.
    fn bank_esr(&self, regulator: &Regulator) -> Value {
        let Some(bank) = self.bank_of(regulator, Side::Output) else {
            return Value::inapplicable("the output is open");
        };
        let known: Vec<(&Branch, f64, Range, Quantity)> = bank
            .branches
            .iter()
            .filter_map(|branch| {
                let farads = self.circuit().device(branch.capacitor).amount.as_ref()?.amount;
                let esr = self.branch_esr(branch);
                (farads > 0.0).then_some((branch, farads, esr.shown()?, esr))
            })
            .collect();
        if known.is_empty() {
            return Value::inapplicable("no output capacitor");
        }
        let network = |pick: fn(Range) -> f64| {
            let mut groups: BTreeMap<&[DeviceId], Group> = BTreeMap::new();
            for (branch, capacitance, esr, _) in &known {
                let group = groups.entry(&branch.through).or_insert_with(|| self.way(&branch.through));
                let inductance =
                    if self.is_ceramic(branch.capacitor) { CERAMIC_INDUCTANCE } else { OTHER_INDUCTANCE };
                group.members.push(Series { capacitance: *capacitance, resistance: pick(*esr), inductance });
            }
            groups.into_values().collect::<Vec<Group>>()
        };
        let (least, middle, most) = (network(Range::low), network(Range::nominal), network(Range::high));
        let real = |groups: &[Group], frequency: f64| parallel(groups, frequency).resistance;
        let low = BAND.iter().map(|frequency| real(&least, *frequency)).fold(f64::INFINITY, f64::min);
        let high = BAND.iter().map(|frequency| real(&most, *frequency)).fold(0.0, f64::max);
        let range = Range::clamped(low, real(&middle, MIDBAND), high);
        let grade = known.iter().filter_map(|(.., esr)| esr.grade()).max().unwrap_or(Grade::Drawn);
        let name = &self.circuit().net(bank.net).name;
        let evidence =
            Evidence::new(grade, format!("resistance of the bank on {name}"), "its capacitors as one network");
        let figure = Quantity::given(Dimension::RESISTANCE, range, Pair::NOT_NEGATIVE, evidence);
        Value::Figure(known.iter().fold(figure, |figure, (.., esr)| figure.also_resting_on(esr)))
    }

    /// The way through ferrites, inductors and links.
    fn way(&self, through: &[DeviceId]) -> Group {
        through.iter().fold(Group::default(), |mut way, device| {
            let part = self.circuit().device(*device);
            let amount = part.amount.as_ref().map(|amount| amount.amount);
            let (inductance, resistance) = match part.kind {
                DeviceKind::Resistor => (0.0, amount.unwrap_or(0.0)),
                DeviceKind::Inductor => (amount.unwrap_or(BEAD.0), WINDING),
                DeviceKind::Ferrite => BEAD,
                _ => (0.0, 0.0),
            };
            way.inductance += inductance;
            way.resistance += resistance;
            way
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn direct(members: &[(f64, f64)]) -> Vec<Group> {
        let series = |(capacitance, resistance): &(f64, f64)| Series {
            capacitance: *capacitance,
            resistance: *resistance,
            inductance: 0.0,
        };
        vec![Group { members: members.iter().map(series).collect(), ..Group::default() }]
    }

    #[test]
    fn two_equal_branches_have_half_the_resistance() {
        let one = parallel(&direct(&[(10e-6, 0.2)]), 100e3).resistance;
        let two = parallel(&direct(&[(10e-6, 0.2), (10e-6, 0.2)]), 100e3).resistance;
        assert!((one - 0.2).abs() < 1e-12 && (two - 0.1).abs() < 1e-12);
    }

    #[test]
    fn a_large_ceramic_beside_an_electrolytic_takes_its_resistance_away() {
        // Ten microfarads with 1 Ω beside the same of ceramic: well above the new pole at 31.8 kHz the ceramic rules.
        let alone = parallel(&direct(&[(10e-6, 1.0)]), 300e3).resistance;
        let beside = parallel(&direct(&[(10e-6, 1.0), (10e-6, 0.005)]), 300e3).resistance;
        assert!(alone > 0.99 && beside < 0.02, "{alone} {beside}");
    }

    /// `Z = (1 + s R C_e) / (s (C_e + C_c) (1 + s R C_e C_c / (C_e + C_c)))` for an electrolytic with R beside a ceramic
    /// without losses (two-branch network, worked by hand).
    #[test]
    fn two_branches_agree_with_the_closed_form() {
        let (electrolytic, ceramic, resistance) = (10e-6, 1e-6, 1.0);
        for frequency in [1e3, 15.9e3, 175e3, 2e6] {
            let omega = std::f64::consts::TAU * frequency;
            let (zero, pole) = (
                omega * resistance * electrolytic,
                omega * resistance * electrolytic * ceramic / (electrolytic + ceramic),
            );
            // Re [(1 + j zero) / (j ω C (1 + j pole))] = (zero − pole) / (ω C (1 + pole²)).
            let wanted = (zero - pole) / (omega * (electrolytic + ceramic) * (1.0 + pole * pole));
            let found = parallel(&direct(&[(electrolytic, resistance), (ceramic, 0.0)]), frequency).resistance;
            assert!((found / wanted - 1.0).abs() < 1e-9, "{found} against {wanted}");
        }
    }

    #[test]
    fn a_capacitor_behind_an_inductor_no_longer_helps_above_their_resonance() {
        let mut groups = direct(&[(1e-6, 0.5)]);
        let behind = Series { capacitance: 100e-6, resistance: 0.01, inductance: 0.0 };
        groups.push(Group { resistance: 0.05, inductance: 10e-6, members: vec![behind] });
        let alone = parallel(&direct(&[(1e-6, 0.5)]), 500e3);
        let both = parallel(&groups, 500e3);
        assert!((both.resistance / alone.resistance - 1.0).abs() < 0.1, "{both:?} {alone:?}");
    }
}
