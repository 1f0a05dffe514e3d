//! Reading `[[supply]]`, `[[load]]` and `[[rail]]`.

use crate::quantity::{Dimension, Range};
use crate::source::toml::Table;

use super::declared::{Declared, Place};
use super::model::{LoadEntry, LoadKind, RailEntry, Standard, SupplyEntry, SupplyNodes};
use super::reader::{Reader, span_of};
use crate::knowledge::Allowed::{Any, NotNegative, Positive};

impl<'a> Reader<'a> {
    /// Every `[[supply]]` whose nets can be read.
    pub(super) fn supplies(self, root: &mut Table<'a>) -> Vec<SupplyEntry> {
        let mut entries: Vec<SupplyEntry> = Vec::new();
        for table in root.tables("supply") {
            let Some(entry) = self.supply(table) else { continue };
            match entries.iter().find(|known| known.nodes.value.same_as(&entry.nodes.value)) {
                Some(known) => self.twice("supply", &entry.nodes.value.shown(), &known.nodes, &entry.nodes),
                None => entries.push(entry),
            }
        }
        entries
    }

    fn supply(self, mut table: Table<'a>) -> Option<SupplyEntry> {
        let nodes = self.supply_nodes(&mut table);
        let standard = self.name(&mut table, "standard");
        let figure = |table: &mut Table<'a>, key, dimension, allowed| self.figure(table, key, dimension, allowed);
        let voltage = figure(&mut table, "voltage", Dimension::VOLTAGE, Any);
        let ac = figure(&mut table, "ac", Dimension::VOLTAGE, Positive);
        let frequency = figure(&mut table, "frequency", Dimension::FREQUENCY, Positive);
        let resistance = figure(&mut table, "resistance", Dimension::RESISTANCE, NotNegative);
        let rise = figure(&mut table, "rise", Dimension::TIME, NotNegative);
        let lead_length = figure(&mut table, "lead_length", Dimension::LENGTH, NotNegative);
        let surge = self.single(&mut table, "surge", Dimension::VOLTAGE, Any);
        let hot_plug = self.spanned(table.boolean("hot_plug"));
        let may_short = self.spanned(table.boolean("may_short"));
        let reverse = self.spanned(table.boolean("reverse"));
        table.finish();
        self.only_one(&[
            ("voltage", span_of(voltage.as_ref())),
            ("standard", span_of(standard.as_ref())),
            ("ac", span_of(ac.as_ref())),
        ]);
        self.surge_within(surge.as_ref(), voltage.as_ref());
        let standard = standard.map(|name| name.map(|name| Standard { name: name.clone(), found: None }));
        Some(SupplyEntry {
            nodes: nodes?,
            voltage,
            standard,
            ac,
            frequency,
            resistance,
            rise,
            hot_plug,
            lead_length,
            may_short,
            surge,
            reverse,
        })
    }

    /// `net` or `between`, one of which must be there.
    fn supply_nodes(self, table: &mut Table<'a>) -> Option<Declared<SupplyNodes>> {
        let net = table.take("net");
        let between = table.take("between");
        match (net, between) {
            (Some(net), Some(between)) => {
                self.only_one(&[("net", Some(net.span())), ("between", Some(between.span()))]);
                None
            }
            (Some(net), None) => {
                let net = self.name_of(net.text()?, "net")?;
                Some(net.map(|net| SupplyNodes::Net(net.clone())))
            }
            (None, Some(between)) => {
                let texts = between.texts()?;
                let names: Vec<&str> = texts.iter().map(|text| text.as_str()).collect();
                match names.as_slice() {
                    [one, other] if one != other && !one.trim().is_empty() && !other.trim().is_empty() => Some(
                        self.declared(SupplyNodes::Between((*one).to_owned(), (*other).to_owned()), between.span()),
                    ),
                    _ => {
                        let help = "write two nets: [\"/AC1\", \"/AC2\"]";
                        between.refuse("`between` must name two different nets", "not two nets", help);
                        None
                    }
                }
            }
            (None, None) => {
                let help = "add `net = …`, or `between = […]` for a source between two nets";
                table.refuse("the supply names no net", "neither `net` nor `between` stands here", help);
                None
            }
        }
    }

    fn surge_within(self, surge: Option<&Declared<Range>>, voltage: Option<&Declared<Range>>) {
        let (Some(surge), Some(voltage)) = (surge, voltage) else { return };
        let highest = voltage.value.high().abs().max(voltage.value.low().abs());
        let Place::File { span, .. } = surge.place else { return };
        if surge.value.high().abs() < highest {
            let help = "`surge` is the highest transient, at least the voltage itself";
            self.document.refuse(span, "the surge is below the supply's own voltage", "lower than `voltage`", help);
        }
    }

    /// Every `[[load]]` whose net can be read.
    pub(super) fn loads(self, root: &mut Table<'a>) -> Vec<LoadEntry> {
        let mut entries: Vec<LoadEntry> = Vec::new();
        for table in root.tables("load") {
            let Some(entry) = self.load(table) else { continue };
            match entries.iter().find(|known| known.net.value == entry.net.value) {
                Some(known) => self.twice("load", &entry.net.value, &known.net, &entry.net),
                None => entries.push(entry),
            }
        }
        entries
    }

    fn load(self, mut table: Table<'a>) -> Option<LoadEntry> {
        const KINDS: &[(LoadKind, &str)] = &[(LoadKind::Resistive, "resistive"), (LoadKind::Constant, "constant")];
        let net = self.required(&mut table, "net");
        let current = self.figure(&mut table, "current", Dimension::CURRENT, NotNegative);
        let continuous = self.figure(&mut table, "continuous", Dimension::CURRENT, NotNegative);
        let kind = self.word(&mut table, "kind", KINDS);
        table.finish();
        if let (Some(peak), Some(heat)) = (&current, &continuous)
            && heat.value.high() > peak.value.high()
            && let Place::File { span, .. } = heat.place
        {
            let help = "`current` is idle .. peak, and `continuous` lies within it";
            self.document.refuse(span, "the continuous current is above the peak", "above `current`", help);
        }
        let current = current.map(|current| current.map(|range| peak_is_nominal(*range)));
        Some(LoadEntry { net: net?, current, continuous, kind })
    }

    /// Every `[[rail]]` whose net can be read.
    pub(super) fn rails(self, root: &mut Table<'a>) -> Vec<RailEntry> {
        let mut entries: Vec<RailEntry> = Vec::new();
        for mut table in root.tables("rail") {
            let net = self.required(&mut table, "net");
            let voltage = self.figure(&mut table, "voltage", Dimension::VOLTAGE, Any);
            let may_sag = self.spanned(table.boolean("may_sag"));
            let off_board_capacitance =
                self.figure(&mut table, "off_board_capacitance", Dimension::CAPACITANCE, NotNegative);
            table.finish();
            let Some(net) = net else { continue };
            match entries.iter().find(|known| known.net.value == net.value) {
                Some(known) => self.twice("rail", &net.value, &known.net, &net),
                None => entries.push(RailEntry { net, voltage, may_sag, off_board_capacitance }),
            }
        }
        entries
    }
}

/// A load's nominal current is its peak.
pub(super) fn peak_is_nominal(range: Range) -> Range {
    Range::clamped(range.low(), range.high(), range.high())
}
