//! What a regulator turns into heat, and how hot it gets.

use super::family_figure::Ask;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::Device;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Regulator, RegulatorKind, Transistor, family_package, package_of, transistors};

/// By which factor the resistance on this board may differ from the sheet's, which is measured on a board of its own
/// (JESD51): low, high, and the limits.
const BOARD_SPREAD: (f64, f64) = (0.6, 1.3);
const BOARD_LIMITS: (f64, f64) = (0.15, 4.0);
/// Junction to the mounting surface with washer or paste, K/W: low, nominal, high, most (common practice for TO-220: 4
/// to 5 in the case, 0.5 to 1 to the sink).
const JUNCTION_TO_SINK: (f64, f64, f64, f64) = (2.0, 5.0, 7.0, 12.0);
/// Junction to ambient without a heat sink on an ordinary board, K/W (common practice).
const USUAL: &[(&str, f64)] = &[
    ("TO-220", 62.0),
    ("TO-263", 45.0),
    ("TO-252", 65.0),
    ("SOT-223", 80.0),
    ("SOT-89", 130.0),
    ("TO-92", 160.0),
    ("SO-8", 120.0),
    ("SOT-23", 240.0),
    ("SOT-23-3", 240.0),
    ("SOT-23-5", 210.0),
    ("SOT-23-6", 200.0),
    ("SC-70", 350.0),
    ("SC-70-5", 320.0),
    ("MSOP-8", 150.0),
    ("TSSOP-8", 150.0),
    ("DIP-8", 100.0),
    ("TO-3", 35.0),
];
/// The same of a package that nobody tells, K/W.
const UNKNOWN_PACKAGE: f64 = 120.0;
/// Junction limit of a part whose file gives none, °C: low, nominal, high, most (common practice).
const JUNCTION: (f64, f64, f64, f64) = (125.0, 125.0, 150.0, 175.0);

pub(super) const DEFINITIONS: &[Definition] = &[
    entry("dissipation", Dimension::POWER, "heat at the highest input and the continuous load", |facts, subject| {
        series(facts, subject, |regulator| Value::Figure(facts.dissipation(regulator)))
    }),
    entry(
        "continuous_load",
        Dimension::CURRENT,
        "the current drawn from the output for so long that it heats the part",
        |facts, subject| series(facts, subject, |regulator| Value::Figure(facts.continuous_load(regulator))),
    ),
    entry(
        "thermal_resistance",
        Dimension::THERMAL_RESISTANCE,
        "from junction to ambient, with the declared heat sink",
        |facts, subject| series(facts, subject, |regulator| Value::Figure(facts.thermal_resistance(regulator))),
    ),
    entry(
        "junction_temperature",
        Dimension::TEMPERATURE,
        "the junction at the highest ambient temperature, by its dissipation",
        |facts, subject| {
            series(facts, subject, |regulator| {
                // An unknown voltage is told once, by the check on headroom.
                match facts.dissipation(regulator).missing_evidence().next() {
                    Some(_) => Value::inapplicable("its voltages are not known"),
                    None => Value::Figure(facts.junction_temperature(regulator)),
                }
            })
        },
    ),
    Definition {
        name: "heated_part",
        of: SubjectKind::Regulator,
        kind: ValueKind::Word(&[]),
        meaning: "the part that gets hot: an outboard transistor, else the regulator itself",
        defined_in: file!(),
        compute: |facts, subject| series(facts, subject, |regulator| Value::word(&facts.heated(regulator).reference)),
    },
    entry("junction_limit", Dimension::TEMPERATURE, "the largest junction temperature", |facts, subject| {
        series(facts, subject, |regulator| Value::Figure(facts.junction_limit(regulator)))
    }),
];

const fn entry(
    name: &'static str,
    dimension: Dimension,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    let kind = ValueKind::Figure(dimension);
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

fn series(facts: &Facts<'_>, subject: Subject, compute: impl FnOnce(&Regulator) -> Value) -> Value {
    of(facts, subject, |regulator| match regulator.kind {
        RegulatorKind::Series => compute(regulator),
        _ => Value::inapplicable("not a series regulator"),
    })
}

impl Facts<'_> {
    /// `P = (V_in − V_out) I + V_in I_ground`, with voltages that stand there while that current flows: behind a
    /// rectifier the mean of the reservoir, not its peak at no load.
    fn dissipation(&self, regulator: &Regulator) -> Quantity {
        let input = self.heat_input(regulator);
        let output = self.output_voltage(regulator).magnitude();
        let load = self.continuous_load(regulator);
        let own = self.own_current(regulator).unwrap_or_else(|| Quantity::constant(Dimension::CURRENT, 0.0));
        let inputs =
            [(&input, Slope::Rising), (&output, Slope::Falling), (&load, Slope::Rising), (&own, Slope::Rising)];
        Quantity::monotone(Dimension::POWER, &inputs, |v| match v {
            [input, output, load, own] => product((input - output).max(0.0), *load) + product(input.max(0.0), *own),
            _ => f64::NAN,
        })
    }

    /// The part that gets hot: an outboard transistor carries nearly all of the current.
    fn heated(&self, regulator: &Regulator) -> &Device {
        self.circuit().device(regulator.outboard().unwrap_or(regulator.device))
    }

    fn heat_input(&self, regulator: &Regulator) -> Quantity {
        match regulator.source_net() {
            Some(net) => self.heat_voltage(net).magnitude(),
            None => self.input_magnitude(regulator),
        }
    }

    /// Junction to ambient: declared; by the declared heat sink; by the package, where the board's copper is a guess.
    fn thermal_resistance(&self, regulator: &Regulator) -> Quantity {
        let device = self.heated(regulator);
        let what = match regulator.outboard() {
            Some(_) => format!("thermal resistance of {}", device.reference),
            None => self.about(regulator, "thermal resistance"),
        };
        let declared = self.board().part(&device.reference);
        if let Some(whole) = declared.and_then(|part| part.junction_to_ambient.as_ref()) {
            return whole.quantity(Dimension::THERMAL_RESISTANCE, what);
        }
        let settle = Settle::new(Table::Part, &device.reference, "junction_to_ambient", "62 °C/W");
        if let Some(sink) = declared.and_then(|part| part.heatsink.as_ref()) {
            let (low, nominal, high, most) = JUNCTION_TO_SINK;
            let evidence = Evidence::new(Grade::Assumed, what, "usual from junction to a heat sink");
            let evidence = evidence.settled_by(settle);
            let range = Range::clamped(low, nominal, high);
            let case = Quantity::given(Dimension::THERMAL_RESISTANCE, range, Pair::new(0.0, most), evidence);
            return case.plus(&sink.quantity(Dimension::THERMAL_RESISTANCE, self.about(regulator, "heat sink")));
        }
        let package = package_of(&device.footprint);
        let known = package.as_deref().and_then(|package| self.usual(regulator, package));
        let (usual, source) = known.unwrap_or_else(|| (UNKNOWN_PACKAGE, "its package is not known".to_owned()));
        let evidence = Evidence::new(Grade::Inferred, what, source).settled_by(settle);
        let range = Range::clamped(usual * BOARD_SPREAD.0, usual, usual * BOARD_SPREAD.1);
        let limits = Pair::new(usual * BOARD_LIMITS.0, usual * BOARD_LIMITS.1);
        Quantity::given(Dimension::THERMAL_RESISTANCE, range, limits, evidence)
    }

    /// What the sheet gives for the package on its board, else what is usual for it, with its source.
    fn usual(&self, regulator: &Regulator, package: &str) -> Option<(f64, String)> {
        let own = regulator.outboard().is_none();
        let sheet = self.first_family(regulator, |family| {
            let package = family_package(family, package).filter(|_| own);
            package.and_then(|package| package.junction_to_ambient.as_ref())
        });
        if let Some((_, cited)) = sheet {
            return Some((cited.value, format!("{}, {package} on the board of the sheet", cited.source)));
        }
        let (_, usual) = USUAL.iter().find(|(name, _)| *name == package)?;
        Some((*usual, format!("usual for {package}")))
    }

    /// How many pass transistors of a built-up regulator share the load; those that drive the base of another take little
    /// of it.
    fn sharing(&self, regulator: &Regulator) -> f64 {
        let Some(built) = &regulator.built_up else { return 1.0 };
        let pass: Vec<Transistor> =
            built.pass.iter().flat_map(|device| transistors(self.circuit(), *device)).collect();
        let drives = |one: &Transistor| {
            let behind = [one.collector, one.emitter];
            pass.iter().any(|other| other.control != one.control && behind.contains(&other.control))
        };
        let count = pass.iter().filter(|one| !drives(one)).count().max(1);
        u32::try_from(count).map_or(1.0, f64::from)
    }

    /// `T_junction = T_ambient + P θ`, of one of the transistors that share the load alike.
    fn junction_temperature(&self, regulator: &Regulator) -> Quantity {
        let sharing = self.sharing(regulator);
        let (power, resistance) = (self.dissipation(regulator), self.thermal_resistance(regulator));
        let ambient = self.ambient();
        let inputs = [(&ambient, Slope::Rising), (&power, Slope::Rising), (&resistance, Slope::Rising)];
        Quantity::monotone(Dimension::TEMPERATURE, &inputs, |v| match v {
            [ambient, power, resistance] => ambient + product(*power / sharing, *resistance),
            _ => f64::NAN,
        })
    }

    fn junction_limit(&self, regulator: &Regulator) -> Quantity {
        let ask = Ask {
            key: "junction_max",
            noun: "junction limit",
            dimension: Dimension::TEMPERATURE,
            limits: Pair::new(0.0, JUNCTION.3),
        };
        let own = regulator.outboard().is_none();
        self.family_figure(regulator, ask).filter(|_| own).unwrap_or_else(|| {
            let (low, nominal, high, most) = JUNCTION;
            let device = self.heated(regulator);
            let what = format!("junction limit of {}", device.reference);
            let settle = Settle::new(Table::Part, &device.reference, "junction_max", "125 °C");
            let evidence = Evidence::new(Grade::Assumed, what, "usual for silicon parts").settled_by(settle);
            let range = Range::clamped(low, nominal, high);
            Quantity::given(Dimension::TEMPERATURE, range, Pair::new(low, most), evidence)
        })
    }
}

/// Nothing times anything is nothing, though it be without bound.
fn product(one: f64, other: f64) -> f64 {
    if one == 0.0 || other == 0.0 { 0.0 } else { one * other }
}
