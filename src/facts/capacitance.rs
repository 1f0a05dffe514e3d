//! Capacitance at input and output, as drawn and as left.

use super::context::KnownBank;
use super::identity::of;
use super::{Definition, Facts, Subject, SubjectKind, Value, ValueKind};
use crate::circuit::{DeviceId, NetId};
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Table};
use crate::recognize::{Regulator, Side};

pub(super) const DEFINITIONS: &[Definition] = &[
    farads(
        "drawn_capacitance",
        "capacitance at the output as drawn, of the capacitors that count",
        |facts, subject| of(facts, subject, |regulator| facts.sum_of(regulator, Side::Output, Kind::Drawn)),
    ),
    farads("output_capacitance", "capacitance at the output under bias, cold and old", |facts, subject| {
        of(facts, subject, |regulator| facts.sum_of(regulator, Side::Output, Kind::Effective))
    }),
    farads("drawn_input_capacitance", "capacitance at the input as drawn", |facts, subject| {
        of(facts, subject, |regulator| facts.sum_of(regulator, Side::Input, Kind::Drawn))
    }),
    farads("input_capacitance", "capacitance at the input under bias, cold and old", |facts, subject| {
        of(facts, subject, |regulator| facts.sum_of(regulator, Side::Input, Kind::Effective))
    }),
    entry(
        "has_input_capacitor",
        ValueKind::Flag,
        "a capacitor lies at the input, behind no series diode",
        |facts, subject| of(facts, subject, |regulator| facts.of_bank(regulator, Side::Input, |bank| bank.near)),
    ),
    entry(
        "input_capacitor_behind_diode",
        ValueKind::Flag,
        "a capacitor lies ahead of a series diode of the input",
        |facts, subject| {
            of(facts, subject, |regulator| facts.of_bank(regulator, Side::Input, |bank| bank.behind_diode))
        },
    ),
    entry("has_output_capacitor", ValueKind::Flag, "a capacitor lies between output and ground", |facts, subject| {
        of(facts, subject, |regulator| facts.of_bank(regulator, Side::Output, |bank| bank.near || bank.behind_diode))
    }),
    entry(
        "output_capacitors",
        ValueKind::Group(SubjectKind::Capacitor),
        "the capacitors at the output",
        |facts, subject| of(facts, subject, |regulator| facts.capacitors(regulator, Side::Output)),
    ),
    entry(
        "input_capacitors",
        ValueKind::Group(SubjectKind::Capacitor),
        "the capacitors at the input",
        |facts, subject| of(facts, subject, |regulator| facts.capacitors(regulator, Side::Input)),
    ),
    entry(
        "loose_capacitors",
        ValueKind::Group(SubjectKind::Capacitor),
        "capacitors at the output whose other end connects nothing",
        |facts, subject| of(facts, subject, |regulator| facts.loose(regulator)),
    ),
];

const fn entry(
    name: &'static str,
    kind: ValueKind,
    meaning: &'static str,
    compute: fn(&Facts<'_>, Subject) -> Value,
) -> Definition {
    Definition { name, of: SubjectKind::Regulator, kind, meaning, defined_in: file!(), compute }
}

const fn farads(name: &'static str, meaning: &'static str, compute: fn(&Facts<'_>, Subject) -> Value) -> Definition {
    entry(name, ValueKind::Figure(Dimension::CAPACITANCE), meaning, compute)
}

/// How many capacitors of a bank a sum names one by one; more are one figure.
const NAMED_CAPACITORS: usize = 32;

/// Which capacitance of a capacitor is meant.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Kind {
    Drawn,
    Effective,
}

impl Facts<'_> {
    fn amount(&self, device: DeviceId, net: NetId, kind: Kind) -> Quantity {
        match kind {
            Kind::Drawn => self.drawn_capacitance(device),
            Kind::Effective => self.effective_capacitance(device, net),
        }
    }

    /// The sum over a side's capacitors that count, with what may lie beyond a connector.
    fn sum_of(&self, regulator: &Regulator, side: Side, kind: Kind) -> Value {
        let Some(bank) = self.bank_of(regulator, side) else { return Value::inapplicable("not connected") };
        let demand = self.first_family(regulator, |family| family.output_capacitor.as_ref());
        let ceramic_only = side == Side::Output && demand.is_some_and(|(_, demand)| demand.ceramic_only);
        let key = (bank.net, regulator.ground_net, side, ceramic_only, kind == Kind::Drawn);
        // Many regulators share an input, and its capacitors are then summed once.
        Value::Figure(self.total_once(key, || {
            // At an input, what lies ahead of a series diode is told by a flag of its own.
            let counted = bank.branches.iter().filter(|branch| !branch.behind_diode);
            let parts: Vec<Quantity> = counted
                .map(|branch| {
                    let amount = self.amount(branch.capacitor, bank.net, kind);
                    if ceramic_only { self.if_ceramic(branch.capacitor, amount) } else { amount }
                })
                .collect();
            self.total(bank.net, &parts, bank.leaves_board)
        }))
    }

    fn total(&self, net: NetId, parts: &[Quantity], leaves_board: bool) -> Quantity {
        let none = Evidence::new(
            Grade::Drawn,
            format!("capacitors on {}", self.circuit().net(net).name),
            if parts.is_empty() { "none is drawn" } else { "as drawn" },
        );
        let start = Quantity::fact(Dimension::CAPACITANCE, Range::exactly(0.0), none);
        let sum = match parts.len() {
            0..=NAMED_CAPACITORS => parts.iter().fold(start, |sum, part| sum.plus(part)),
            _ => self.collapsed(net, parts),
        };
        match self.beyond_connector(net, leaves_board) {
            Some(beyond) => sum.plus(&beyond),
            None => sum,
        }
    }

    /// The sum of very many capacitors as one figure: on such a net none decides by itself.
    fn collapsed(&self, net: NetId, parts: &[Quantity]) -> Quantity {
        let known: Vec<Range> = parts.iter().filter_map(Quantity::shown).collect();
        let sum = |pick: fn(Range) -> f64| known.iter().copied().map(pick).sum::<f64>();
        let range = Range::clamped(sum(Range::low), sum(Range::nominal), sum(Range::high));
        let grade = parts.iter().filter_map(Quantity::grade).max().unwrap_or(Grade::Drawn);
        let name = &self.circuit().net(net).name;
        let evidence = Evidence::new(grade, format!("capacitors on {name}"), format!("{} capacitors", parts.len()));
        Quantity::given(Dimension::CAPACITANCE, range, Pair::NOT_NEGATIVE, evidence)
    }

    /// Capacitance beyond a connector: declared, else none, but nobody knows.
    fn beyond_connector(&self, net: NetId, leaves_board: bool) -> Option<Quantity> {
        let name = &self.circuit().net(net).name;
        let what = format!("capacitance beyond the connector on {name}");
        if let Some(declared) = self.board().rail(name).and_then(|rail| rail.off_board_capacitance.as_ref()) {
            return Some(declared.quantity(Dimension::CAPACITANCE, what));
        }
        leaves_board.then(|| {
            let settle = Settle::new(Table::Rail, name, "off_board_capacitance", "0 .. 470 uF");
            let evidence = Evidence::new(Grade::Assumed, what, "none assumed").settled_by(settle);
            Quantity::given(Dimension::CAPACITANCE, Range::exactly(0.0), Pair::NOT_NEGATIVE, evidence)
        })
    }

    /// A capacitor's share where only ceramics count: all of one that is certainly a ceramic, nothing of one that
    /// certainly is none; where the technology is a guess, all of it stays possible.
    fn if_ceramic(&self, device: DeviceId, amount: Quantity) -> Quantity {
        let Some(told) = self.technology(device) else { return amount };
        let ceramic = told.technology.name.starts_with("ceramic");
        let share = if ceramic { 1.0 } else { 0.0 };
        let mut evidence = told.evidence;
        if !evidence.grade.is_fact() {
            let reference = &self.circuit().device(device).reference;
            evidence = evidence.settled_by(Settle::new(Table::Part, reference, "technology", "X7R"));
        }
        amount.times(&Quantity::given(Dimension::ONE, Range::exactly(share), Pair::new(0.0, 1.0), evidence))
    }

    fn of_bank(&self, regulator: &Regulator, side: Side, flag: impl Fn(&KnownBank) -> bool) -> Value {
        match self.bank_of(regulator, side) {
            None => Value::inapplicable("not connected"),
            Some(bank) => Value::flag(flag(&bank)),
        }
    }

    fn capacitors(&self, regulator: &Regulator, side: Side) -> Value {
        let Some(bank) = self.bank_of(regulator, side) else { return Value::inapplicable("not connected") };
        let each = bank.branches.iter().map(|branch| Subject::Capacitor { device: branch.capacitor, net: bank.net });
        Value::Group(each.collect())
    }

    fn loose(&self, regulator: &Regulator) -> Value {
        let Some(bank) = self.bank_of(regulator, Side::Output) else { return Value::inapplicable("not connected") };
        let each = bank.dangling.iter().map(|device| Subject::Capacitor { device: *device, net: bank.net });
        Value::Group(each.collect())
    }
}
