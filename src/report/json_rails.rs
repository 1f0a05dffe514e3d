//! `rails` as JSON: regulators with their figures, and supply nets.

use std::collections::BTreeMap;

use serde::Serialize;

use super::board::BoardResult;
use super::json::{ProblemEntry, RegulatorEntry, Size, problems, regulator_entry, size};
use super::json_text::text;
use super::json_value::{Bounds, EvidenceEntry, evidence, finite};
use crate::facts::{Facts, RailOrigin, Subject, Value};
use crate::quantity::Quantity;

/// The name of the layout.
pub(super) const SCHEMA: &str = "railworthy-rails/1";

/// The figures that other programs may rely on, known or not.
pub(super) const FACTS: &[&str] = &[
    "input_voltage",
    "output_voltage",
    "set_point",
    "load",
    "headroom",
    "dropout",
    "dropout_light",
    "line_change",
    "input_capacitance",
    "output_capacitance",
    "bulk_esr",
    "bank_esr",
    "esr_window",
    "phase_margin",
    "modulus_margin",
    "unity_gain_frequency",
    "operating_points",
    "starts",
    "reference_bias",
    "enable_voltage",
    "dissipation",
    "junction_temperature",
];

#[derive(Debug, Serialize)]
struct Result<'a> {
    schema: &'static str,
    tool_version: &'static str,
    boards: Vec<Board<'a>>,
}

#[derive(Debug, Serialize)]
struct Board<'a> {
    netlist: &'a str,
    board_file: Option<&'a str>,
    house_file: Option<&'a str>,
    format: Option<&'static str>,
    complete: bool,
    problems: Vec<ProblemEntry<'a>>,
    size: Size,
    regulators: Vec<Regulator<'a>>,
    rails: Vec<Rail<'a>>,
}

#[derive(Debug, Serialize)]
struct Regulator<'a> {
    #[serde(flatten)]
    entry: RegulatorEntry<'a>,
    facts: BTreeMap<&'static str, Option<Fact>>,
}

#[derive(Debug, Serialize)]
struct Rail<'a> {
    net: &'a str,
    voltage: Option<Fact>,
    load: Option<Fact>,
    origin: &'static str,
    from: Option<&'a str>,
    by: Option<&'a str>,
}

/// A figure, an answer or a window.
#[derive(Debug, Serialize)]
#[serde(untagged)]
enum Fact {
    Figure {
        #[serde(flatten)]
        bounds: Bounds,
        evidence: Vec<EvidenceEntry>,
    },
    Flag {
        value: bool,
        evidence: Vec<EvidenceEntry>,
    },
    Window {
        kind: String,
        low: Option<f64>,
        high: Option<f64>,
        unit: &'static str,
        evidence: Vec<EvidenceEntry>,
    },
}

/// The regulators of a board with their figures, and its supply nets.
#[must_use]
pub fn rails(board: &BoardResult) -> String {
    let mut entry = Board {
        netlist: &board.netlist,
        board_file: board.board_file.as_deref(),
        house_file: board.house_file.as_deref(),
        format: None,
        complete: board.is_complete(),
        problems: problems(board.all_problems()),
        size: Size::default(),
        regulators: Vec::new(),
        rails: Vec::new(),
    };
    if let Some(examination) = &board.examination {
        let facts = Facts::new(&examination.design, &examination.board, &board.knowledge);
        entry.format = Some(examination.netlist.format.name());
        entry.size = size(examination);
        entry.rails = supply_nets(&facts);
        for (id, regulator) in facts.regulators() {
            let subject = Subject::Regulator(id);
            let figures = FACTS.iter().map(|name| (*name, fact(&facts, subject, name))).collect();
            let regulator = regulator_entry(examination, &board.knowledge, &facts, subject, regulator);
            entry.regulators.push(Regulator { entry: regulator, facts: figures });
        }
    }
    text(&Result { schema: SCHEMA, tool_version: env!("CARGO_PKG_VERSION"), boards: vec![entry] })
}

fn fact(facts: &Facts<'_>, subject: Subject, name: &str) -> Option<Fact> {
    if name == "esr_window" {
        return window(facts, subject);
    }
    match facts.value(subject, name) {
        Value::Figure(quantity) => figure(&quantity),
        Value::Flag(flag) => {
            let evidence = flag.evidence.iter().map(EvidenceEntry::of).collect();
            Some(Fact::Flag { value: flag.holds, evidence })
        }
        Value::Word(_) | Value::Group(_) | Value::Inapplicable(_) => None,
    }
}

/// A figure; null where something behind it is missing.
fn figure(quantity: &Quantity) -> Option<Fact> {
    (!quantity.is_missing()).then(|| Fact::Figure { bounds: Bounds::of(quantity), evidence: evidence(quantity) })
}

/// The window of the ESR from its two ends; null where neither is known.
fn window(facts: &Facts<'_>, subject: Subject) -> Option<Fact> {
    let end = |name| facts.figure(subject, name).filter(|figure| !figure.is_missing());
    let (low, high) = (end("esr_low"), end("esr_high"));
    let value = |figure: &Option<Quantity>| figure.as_ref().and_then(Quantity::nominal).and_then(finite);
    let (least, most) = (value(&low).filter(|least| *least > 0.0), value(&high));
    let solved = match facts.value(subject, "esr_window_kind") {
        Value::Word(word) => Some(word.word),
        _ => None,
    };
    let by_edges = || match (least, most) {
        (Some(_), Some(_)) => Some("two-sided"),
        (Some(_), None) => Some("lower"),
        (None, Some(_)) => Some("upper"),
        (None, None) => low.is_some().then_some("all"),
    };
    let kind = solved.or_else(|| by_edges().map(str::to_owned))?;
    let evidence = low.iter().chain(&high).flat_map(evidence).collect();
    Some(Fact::Window { kind, low: least, high: most, unit: "Ω", evidence })
}

fn supply_nets<'a>(facts: &Facts<'a>) -> Vec<Rail<'a>> {
    let circuit = facts.circuit();
    let entry = |net| {
        let rail = facts.rail(net);
        let name = |net| circuit.net(net).name.as_str();
        let (origin, from, by) = match rail.origin {
            RailOrigin::Ground => ("ground", None, None),
            RailOrigin::Declared => ("declared", None, None),
            RailOrigin::Named => ("named", None, None),
            RailOrigin::Rectified(device) => ("rectified", None, device.map(|device| circuit.device(device))),
            RailOrigin::Unknown => ("unknown", None, None),
            RailOrigin::Through { device, from } => ("through", Some(name(from)), Some(circuit.device(device))),
            RailOrigin::Regulator(id) => {
                let regulator = facts.regulator(Subject::Regulator(id));
                let from = regulator.and_then(|regulator| regulator.input_net).map(name);
                ("regulator", from, regulator.map(|regulator| circuit.device(regulator.device)))
            }
        };
        let load = facts.draw(net);
        let has_load = load.evidence().next().is_some();
        Rail {
            net: name(net),
            voltage: figure(&rail.voltage),
            load: if has_load { figure(&load) } else { None },
            origin,
            from,
            by: by.map(|device| device.reference.as_str()),
        }
    };
    facts.supply_nets().into_iter().map(entry).collect()
}
