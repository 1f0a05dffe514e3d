//! Whether the circuit starts: its operating points, and where a ramp from zero ends.

use super::recipe::{Change, Element, INPUT, Kind, LOAD, Made, Recipe, Slot, View};
use crate::quantity::{Grade, Quantity};
use crate::solve::{
    CurrentSource, DeviceId, GROUND, OperatingPoint, OperatingPoints, Ramp, SolveError, operating_points, ramp,
};

/// The loads at which a start is looked at, as shares of the peak.
const SHARES: [f64; 2] = [1.0, 0.1];
/// How long a circuit is followed after its input has risen, in rises and at least in seconds.
const AFTER: (f64, f64) = (1.0, 0.1);
/// Currents into the reference among which the least that starts it is looked for, in amperes, and how closely, as a
/// factor.
const STARTING: (f64, f64) = (1e-9, 0.02);
const CLOSELY: f64 = 1.05;
/// Volts that are none.
const NOISE: f64 = 1e-6;
/// The room to its upper rail with which an amplifier can turn any pass transistor off, and with which it cannot, volts.
const NO_ROOM: f64 = 0.0;

/// What decides whether a circuit starts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Decides {
    /// There is no state but the one that regulates.
    Nothing,
    /// The sign of the amplifier's offset.
    Offset,
    /// The amplifier cannot turn the pass transistor off.
    Headroom,
    /// A part between the input and the reference, or its absence.
    Path,
    /// A leak from the input to the output.
    Leak,
    /// How fast the input rises.
    Ramp,
}

impl Decides {
    pub(super) const NAMES: &'static [&'static str] = &["nothing", "offset", "headroom", "path", "leakage", "ramp"];

    /// As evidence says it.
    pub(super) fn words(self) -> &'static str {
        match self {
            Self::Nothing => "nothing",
            Self::Offset => "the sign of the amplifier's offset",
            Self::Headroom => "the amplifier's room to its upper rail",
            Self::Path => "the start-up path",
            Self::Leak => "leakage across the pass transistor",
            Self::Ramp => "the rise of the input",
        }
    }

    pub(super) fn name(self) -> &'static str {
        match self {
            Self::Nothing => "nothing",
            Self::Offset => "offset",
            Self::Headroom => "headroom",
            Self::Path => "path",
            Self::Leak => "leakage",
            Self::Ramp => "ramp",
        }
    }
}

/// The parts that can lift a circuit out of a dead state, by name.
#[derive(Debug, Default)]
pub(super) struct Lifting {
    path: Vec<String>,
    leaks: Vec<String>,
}

/// One case: values, and how long the input takes to rise, in seconds.
#[derive(Debug, Clone)]
struct Case {
    values: Vec<f64>,
    rise: f64,
    /// Whether a guess stands away from its nominal value.
    guessed: bool,
}

/// What was found about a start.
#[derive(Debug, Clone)]
pub(in crate::facts) struct Start {
    pub(super) starts: bool,
    /// Whether it is only a guess that keeps it from starting.
    pub(super) guessed: bool,
    pub(super) decides: Decides,
    /// Where the output stays, in volts, where it does not start.
    pub(super) dead: Option<f64>,
    /// The voltage of the reference from which it goes on by itself, in volts.
    pub(super) threshold: Option<f64>,
    /// The current into the reference that starts it, in amperes.
    pub(super) current: Option<f64>,
}

impl Recipe {
    fn points(&self, made: &Made, values: &[f64]) -> Result<OperatingPoints, SolveError> {
        operating_points(&made.circuit, &self.search(made, Self::of(values, INPUT)))
    }

    /// How many operating points there are at nominal input and peak load: at nominal offsets, and the most over those
    /// that are declared and over all.
    pub(super) fn count(&self) -> Result<[usize; 3], SolveError> {
        let mut counts = [0; 3];
        for case in self.offset_cases() {
            let made = self.make(&case.values, View::Bare, &Change::default())?;
            let count = self.points(&made, &case.values)?.points.len();
            let [nominal, declared, all] = &mut counts;
            if *nominal == 0 {
                *nominal = count;
            }
            if !case.guessed {
                *declared = count.max(*declared);
            }
            *all = count.max(*all);
        }
        Ok(counts)
    }

    /// Nominal values, then each offset at its ends.
    fn offset_cases(&self) -> Vec<Case> {
        let nominal = Case { values: self.nominals(), rise: self.rise.1, guessed: false };
        let mut cases = vec![nominal.clone()];
        for (slot, offset) in self.offsets() {
            let guessed = is_guess(offset);
            for end in [offset.worst().low(), offset.worst().high()] {
                cases.push(Case { values: Self::with(&nominal.values, slot, end), guessed, ..nominal.clone() });
            }
        }
        cases
    }

    /// Every case: inputs, loads, rises and offsets, and other declared ranges one by one.
    fn cases(&self) -> Vec<Case> {
        let mut cases = self.offset_cases();
        let others: Vec<(Slot, [f64; 2])> = self.declared_ranges();
        for case in cases.clone() {
            for (slot, ends) in &others {
                for end in ends {
                    cases.push(Case { values: Self::with(&case.values, *slot, *end), ..case.clone() });
                }
            }
        }
        let input = self.parameters.first().map(|one| one.quantity.likely());
        let peak = |values: &[f64]| Self::of(values, LOAD);
        let mut all = Vec::new();
        for case in cases {
            let nominal = Self::of(&case.values, INPUT);
            let mut inputs = vec![nominal];
            inputs.extend(input.iter().flat_map(|pair| [pair.low(), pair.high()]).filter(|volts| volts.is_finite()));
            inputs.dedup_by(|one, other| (*one - *other).abs() < 1e-9);
            let mut rises = vec![self.rise.1, self.rise.0];
            rises.dedup();
            for volts in inputs {
                for share in SHARES {
                    let load = peak(&case.values) * share;
                    let values = Self::with(&Self::with(&case.values, INPUT, volts), LOAD, load);
                    all.extend(rises.iter().map(|rise| Case { values: values.clone(), rise: *rise, ..case.clone() }));
                }
            }
        }
        all
    }

    /// The other parameters whose ranges are declared and that count at rest.
    fn declared_ranges(&self) -> Vec<(Slot, [f64; 2])> {
        let offsets: Vec<Slot> = self.offsets().map(|(slot, _)| slot).collect();
        self.slots()
            .filter(|(slot, one)| *slot > LOAD && !one.dynamic && !offsets.contains(slot))
            .filter(|(_, one)| one.quantity.grade() == Some(Grade::Declared) && one.quantity.worst().width() > 0.0)
            .map(|(slot, one)| (slot, [one.quantity.worst().low(), one.quantity.worst().high()]))
            .collect()
    }

    /// Where a ramp from zero ends, in volts of the output.
    fn ramped(&self, case: &Case, change: &Change) -> Result<f64, SolveError> {
        let made = self.make(&case.values, View::Whole, change)?;
        let until = case.rise + (AFTER.0 * case.rise).max(AFTER.1);
        let ramped = ramp(&made.circuit, &Ramp { source: made.input, rise: case.rise, until }, made.output)?;
        Ok(ramped.end())
    }

    /// Whether the output comes up. With one operating point that is where every ramp ends.
    fn comes_up(&self, case: &Case, change: &Change) -> Result<bool, SolveError> {
        let up = self.up(Self::of(&case.values, INPUT));
        let made = self.make(&case.values, View::Bare, change)?;
        let found = self.points(&made, &case.values)?;
        if let ([only], 0) = (found.points.as_slice(), found.jumps) {
            return Ok(only.solution.voltage(made.output).abs() >= up);
        }
        Ok(self.ramped(case, change)?.abs() >= up)
    }

    /// Whether it starts over all cases, and what decides it. Only a circuit that feeds itself can owe its start to
    /// `lifting` parts: those on a way from the input to the reference, and those across the pass transistor, by name.
    pub(super) fn start(&self, lifting: Option<&Lifting>) -> Result<Start, SolveError> {
        let cases = self.cases();
        let (declared, guessed): (Vec<&Case>, Vec<&Case>) = cases.iter().partition(|case| !case.guessed);
        for case in declared.into_iter().chain(guessed) {
            if !self.comes_up(case, &Change::default())? {
                return self.dead(case, &cases);
            }
        }
        let decides = match lifting {
            Some(parts) => self.lifted(&cases, parts)?,
            None => Decides::Nothing,
        };
        Ok(Start { starts: true, guessed: false, decides, dead: None, threshold: None, current: None })
    }

    /// What keeps a case from starting.
    fn dead(&self, case: &Case, cases: &[Case]) -> Result<Start, SolveError> {
        let made = self.make(&case.values, View::Bare, &Change::default())?;
        let found = self.points(&made, &case.values)?;
        let lowest = found.points.first();
        let threshold = found.points.iter().find(|point| !point.is_stable()).map(|point| point.volts);
        // What is less than that is numerical noise.
        let rounded = |volts: f64| if volts.abs() < NOISE { 0.0 } else { volts };
        let dead = lowest.map(|point| rounded(point.solution.voltage(made.output)));
        let others = cases.iter().filter(|other| self.differs_by_offset(case, other));
        let mut decides = Decides::Path;
        for other in others {
            if self.comes_up(other, &Change::default())? {
                decides = Decides::Offset;
                break;
            }
        }
        if decides == Decides::Path && self.faster_starts(case)? {
            decides = Decides::Ramp;
        }
        let current = if threshold.is_some() { self.starting_current(case)? } else { None };
        Ok(Start { starts: false, guessed: case.guessed, decides, dead, threshold, current })
    }

    fn differs_by_offset(&self, case: &Case, other: &Case) -> bool {
        let offsets: Vec<Slot> = self.offsets().map(|(slot, _)| slot).collect();
        let same = |(slot, _): &(Slot, _)| {
            offsets.contains(slot) || Self::of(&case.values, *slot) == Self::of(&other.values, *slot)
        };
        let apart = offsets.iter().any(|slot| Self::of(&case.values, *slot) != Self::of(&other.values, *slot));
        apart && case.rise == other.rise && self.slots().all(|one| same(&one))
    }

    /// Whether the shortest declared rise starts it where the longest does not.
    fn faster_starts(&self, case: &Case) -> Result<bool, SolveError> {
        if self.rise.0 >= case.rise {
            return Ok(false);
        }
        self.comes_up(&Case { rise: self.rise.0, ..case.clone() }, &Change::default())
    }

    /// What lifts a circuit that starts out of a dead state: without it there is one.
    fn lifted(&self, cases: &[Case], parts: &Lifting) -> Result<Decides, SolveError> {
        for (names, decides) in [(&parts.path, Decides::Path), (&parts.leaks, Decides::Leak)] {
            let without = Change { without: names.clone(), ..Change::default() };
            if !names.is_empty() && !self.all_come_up(cases, &without)? {
                return Ok(decides);
            }
        }
        let turned_off = Change { top: Some(NO_ROOM), ..Change::default() };
        if !self.all_come_up(cases, &turned_off)? {
            return Ok(Decides::Headroom);
        }
        Ok(Decides::Nothing)
    }

    /// Whether the first cases, those of the offsets, come up.
    fn all_come_up(&self, cases: &[Case], change: &Change) -> Result<bool, SolveError> {
        for case in cases.iter().filter(|case| !case.guessed) {
            if !self.comes_up(case, change)? {
                return Ok(false);
            }
        }
        Ok(true)
    }

    /// The least current into the reference with which no dead state is left, in amperes.
    fn starting_current(&self, case: &Case) -> Result<Option<f64>, SolveError> {
        let starts = |amperes: f64| -> Result<bool, SolveError> {
            let mut made = self.make(&case.values, View::Bare, &Change::default())?;
            let Some(node) = self.reference.and_then(|place| made.nodes.get(place).copied()) else {
                return Ok(false);
            };
            let amperes = if self.negative { -amperes } else { amperes };
            let _: DeviceId = made.circuit.add("the start-up current", &[GROUND, node], CurrentSource { amperes })?;
            let found = self.points(&made, &case.values)?;
            let up = self.up(Self::of(&case.values, INPUT));
            let is_up = |point: &OperatingPoint| point.solution.voltage(made.output).abs() >= up;
            Ok(found.points.iter().filter(|point| point.is_stable()).all(is_up) && !found.points.is_empty())
        };
        let (mut low, mut high) = STARTING;
        if !starts(high)? {
            return Ok(None);
        }
        while high / low > CLOSELY {
            let middle = (low * high).sqrt();
            *(if starts(middle)? { &mut high } else { &mut low }) = middle;
        }
        Ok(Some(high))
    }

    /// The parts that lead from the input to the reference, and those that lead from it to the output, beside the pass
    /// transistor and the amplifier: by name.
    pub(super) fn lifting(&self, reference_parts: &[String]) -> Lifting {
        let (input, output) = (Some(self.input), Some(self.output));
        let passive = |element: &&Element| {
            let two = element.nodes.len() == 2 && !matches!(element.kind, Kind::Source(_) | Kind::Break | Kind::Link);
            two && !reference_parts.contains(&element.name)
        };
        let lies = |element: &Element, one, other| element.nodes.contains(&one) && element.nodes.contains(&other);
        let names = |found: Vec<&Element>| found.into_iter().map(|element| element.name.clone()).collect();
        let leaks: Vec<&Element> =
            self.elements.iter().filter(passive).filter(|element| lies(element, input, output)).collect();
        // From the reference outwards through parts of two ends, not over the output or ground.
        let mut reached = vec![self.reference];
        let mut chain: Vec<&Element> = Vec::new();
        let mut next = 0;
        while let Some(at) = reached.get(next).copied() {
            next += 1;
            if at.is_none() || at == output || at == input {
                continue;
            }
            for element in self.elements.iter().filter(passive).filter(|element| element.nodes.contains(&at)) {
                for far in element.nodes.iter().filter(|far| **far != at && !far.is_none() && **far != output) {
                    if !reached.contains(far) {
                        reached.push(*far);
                    }
                    if !chain.iter().any(|known| known.name == element.name) {
                        chain.push(element);
                    }
                }
            }
        }
        let path = if reached.contains(&input) { names(chain) } else { Vec::new() };
        Lifting { path, leaks: names(leaks) }
    }
}

fn is_guess(quantity: &Quantity) -> bool {
    quantity.guesses().next().is_some()
}
