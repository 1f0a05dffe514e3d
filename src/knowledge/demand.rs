//! Reading what a family asks for and how it behaves: capacitors, dropout, enable, packages.

use std::collections::BTreeMap;

use super::cite::{Cite, read_range, word};
use super::family::read_steps;
use super::{
    Active, Basis, CapacitorDemand, Cited, Dropout, DropoutPoint, EnableSpec, EsrWindow, MinimumKind, OpenEnable,
    Package, RoleName,
};
use crate::quantity::{Dimension, Range};
use crate::source::toml::{Table, Text};

/// Reads `[[dropout]]`.
pub(super) fn read_dropout(root: &mut Table<'_>, cite: &Cite<'_>) -> Option<Dropout> {
    let mut dropout = Dropout { points: Vec::new(), defined: String::new() };
    for mut table in root.tables("dropout") {
        let cite = cite.within(&mut table);
        let load = table.require("at").and_then(|value| read_range(&value.text()?, Dimension::CURRENT));
        let text = table.require("drop").and_then(|value| value.text());
        let drop = text.and_then(|text| read_range(&text, Dimension::VOLTAGE));
        let from = table.text("from_output").and_then(|text| read_range(&text, Dimension::VOLTAGE));
        let only_maximum = table.boolean("only_maximum").is_some_and(|flag| flag.value);
        if let Some(defined) = table.text("defined") {
            dropout.defined = defined.as_str().to_owned();
        }
        Cite::check_keys(&mut table, &["drop"]);
        table.finish();
        let (Some(load), Some(drop), Some(text)) = (load, drop, text) else { continue };
        // Two values are typical and maximum; one alone is typical unless the sheet gives only a maximum.
        let two = text.as_str().contains(" / ");
        let maximum = (two || only_maximum).then(|| drop.high());
        let point = DropoutPoint {
            from_output: from.map_or(0.0, Range::low),
            load: load.nominal(),
            typical: drop.low(),
            maximum,
        };
        dropout.points.push(cite.cite("drop", point));
    }
    dropout.points.sort_by(|one, other| {
        let key = |point: &DropoutPoint| (point.from_output, point.load);
        key(&one.value).partial_cmp(&key(&other.value)).unwrap_or(std::cmp::Ordering::Equal)
    });
    let same = dropout.points.windows(2).find(|pair| match pair {
        [one, next] => one.value.from_output == next.value.from_output && one.value.load == next.value.load,
        _ => false,
    });
    if let Some([point, ..]) = same {
        root.refuse(
            "two dropout points are for one load",
            format!("both at {} A", point.value.load),
            "keep one, or tell with `from_output` which versions each is for",
        );
    }
    (!dropout.points.is_empty()).then_some(dropout)
}

const KINDS: &[(MinimumKind, &str)] = &[
    (MinimumKind::Required, "required"),
    (MinimumKind::Recommended, "recommended"),
    (MinimumKind::Recalled, "recalled"),
    (MinimumKind::Optional, "optional"),
];
const BASES: &[(Basis, &str)] = &[(Basis::Nominal, "nominal"), (Basis::Effective, "effective")];

/// Reads `[output_capacitor]`, `[input_capacitor]` or `[bypass_capacitor]`.
pub(super) fn read_capacitor(root: &mut Table<'_>, key: &'static str, cite: &Cite<'_>) -> Option<CapacitorDemand> {
    let mut table = root.table(key)?;
    let cite = cite.within(&mut table);
    let farads = |table: &mut Table<'_>, key| cite.value(table.take(key)?, Dimension::CAPACITANCE);
    let kind_value = table.require("kind");
    let kind = kind_value.and_then(|value| word(&value.text()?, "kind of minimum", KINDS));
    let basis = table.text("basis").and_then(|text| word(&text, "basis", BASES));
    let mut minimum = farads(&mut table, "minimum");
    let steps = table.take("by_output").map(|value| read_steps(value, Dimension::CAPACITANCE, &cite));
    let kind = kind.unwrap_or(MinimumKind::Required);
    if let (Some(figure), Some(value)) = (minimum.as_mut(), kind_value) {
        if kind == MinimumKind::Recalled {
            figure.recalled = true;
        } else if figure.recalled && kind != MinimumKind::Optional && !cite.is_empty() {
            value.refuse(
                "a recalled minimum cannot bind",
                "the figure is recalled",
                "write kind = \"recalled\", or name a source that was read",
            );
        }
    }
    let mut flag = |key| table.boolean(key).is_some_and(|flag| flag.value);
    let (ceramic_only, ceramic_allowed, if_far) = (flag("ceramic_only"), flag("ceramic_allowed"), flag("if_far"));
    let demand = CapacitorDemand {
        minimum,
        minimum_electrolytic: farads(&mut table, "minimum_electrolytic"),
        kind,
        basis: basis.unwrap_or(Basis::Nominal),
        by_output: steps.unwrap_or_default().into_iter().map(|(limit, step)| (limit, step.value.nominal())).collect(),
        esr: read_esr(&mut table, &cite),
        ceramic_only,
        ceramic_allowed: ceramic_allowed || ceramic_only,
        if_far,
        maximum: farads(&mut table, "maximum"),
        with_bypass: farads(&mut table, "with_bypass"),
    };
    Cite::check_keys(
        &mut table,
        &["minimum", "minimum_electrolytic", "by_output", "esr", "esr_min", "esr_max", "maximum", "with_bypass"],
    );
    check_demand(&table, &demand);
    table.finish();
    Some(demand)
}

/// Reads an ESR window: `esr = "0.3 .. 22 ohm"`, or one of `esr_min` and `esr_max`.
fn read_esr(table: &mut Table<'_>, cite: &Cite<'_>) -> Option<Cited<EsrWindow>> {
    if let Some(value) = table.take("esr") {
        let figure = cite.figure(value, Dimension::RESISTANCE)?;
        return Some(figure.map(|range| EsrWindow { low: Some(range.low()), high: Some(range.high()) }));
    }
    let low = table.take("esr_min").and_then(|value| cite.value(value, Dimension::RESISTANCE));
    let high = table.take("esr_max").and_then(|value| cite.value(value, Dimension::RESISTANCE));
    let window = EsrWindow { low: low.as_ref().map(|low| low.value), high: high.as_ref().map(|high| high.value) };
    low.or(high).map(|bound| bound.map(|_| window))
}

/// Refuses a demand that asks for nothing or contradicts itself.
fn check_demand(table: &Table<'_>, demand: &CapacitorDemand) {
    let names_none = demand.minimum.is_none() && demand.by_output.is_empty() && !table.document().has_problems();
    if names_none && matches!(demand.kind, MinimumKind::Required | MinimumKind::Recommended) && demand.esr.is_none() {
        table.refuse(
            format!("`{}` asks for a capacitor without a minimum", table.name()),
            "no `minimum` here",
            "add `minimum`, or write kind = \"optional\"",
        );
    }
    let minimum = demand.minimum.as_ref().map_or(0.0, |figure| figure.value);
    if demand.maximum.as_ref().is_some_and(|figure| figure.value < minimum) {
        table.refuse("`maximum` is below `minimum`", "in this table", "swap them");
    }
    let window = demand.esr.as_ref().map(|esr| (esr.value.low, esr.value.high));
    if let Some((Some(low), Some(high))) = window
        && low > high
    {
        table.refuse("`esr_min` is above `esr_max`", "in this table", "swap them");
    }
    let nothing = demand.minimum.as_ref().is_some_and(|figure| figure.value <= 0.0);
    if nothing || demand.by_output.iter().any(|(_, farads)| *farads <= 0.0) {
        table.refuse("a capacitance is above zero", "in this table", "write what the sheet asks for");
    }
}

/// Reads `[enable]`.
pub(super) fn read_enable(root: &mut Table<'_>, cite: &Cite<'_>) -> Option<EnableSpec> {
    const LEVELS: &[(Active, &str)] = &[(Active::High, "high"), (Active::Low, "low")];
    const OPEN: &[(OpenEnable, &str)] = &[
        (OpenEnable::On, "on"),
        (OpenEnable::Off, "off"),
        (OpenEnable::Undefined, "undefined"),
        (OpenEnable::Unknown, "unknown"),
    ];
    let mut table = root.table("enable")?;
    let cite = cite.within(&mut table);
    let active = table.require("active").and_then(|value| word(&value.text()?, "level", LEVELS));
    let open = table.require("open").and_then(|value| word(&value.text()?, "behaviour of an open pin", OPEN));
    let enable = EnableSpec {
        active: active.unwrap_or(Active::High),
        on: table.take("on").and_then(|value| cite.value(value, Dimension::VOLTAGE)),
        off: table.take("off").and_then(|value| cite.value(value, Dimension::VOLTAGE)),
        open: cite.cite("open", open.unwrap_or(OpenEnable::Unknown)),
    };
    if let (Some(on), Some(off)) = (&enable.on, &enable.off)
        && (on.value < off.value) == (enable.active == Active::High)
    {
        table.refuse("`on` and `off` contradict `active`", "in this table", "an active-high pin is on above `on`");
    }
    Cite::check_keys(&mut table, &["on", "off", "open"]);
    table.finish();
    Some(enable)
}

/// Reads `[packages."SOT-223"]`.
pub(super) fn read_packages(root: &mut Table<'_>, cite: &Cite<'_>) -> BTreeMap<String, Package> {
    let mut packages = BTreeMap::new();
    for value in root.table("packages").map(|mut table| table.entries()).unwrap_or_default() {
        let Some(mut table) = value.table() else { continue };
        let cite = cite.within(&mut table);
        let mut pins = BTreeMap::new();
        for pin in table.table("pins").map(|mut pins| pins.entries()).unwrap_or_default() {
            let roles = pin.text().and_then(|text| read_roles(&text));
            pins.insert(pin.key().to_owned(), roles.unwrap_or_default());
        }
        let pins_from = match table.text("pins_from") {
            Some(text) => Cited { value: (), source: text.as_str().to_owned(), recalled: false },
            None => cite.cite("pins", ()),
        };
        let thermal = table.take("junction_to_ambient");
        let junction_to_ambient = thermal.and_then(|value| {
            let figure = cite.figure(value, Dimension::THERMAL_RESISTANCE)?;
            Some(figure.map(Range::high))
        });
        Cite::check_keys(&mut table, &["junction_to_ambient", "pins"]);
        table.finish();
        packages.insert(value.key().to_owned(), Package { pins, pins_from, junction_to_ambient });
    }
    packages
}

/// Reads the roles of a pin: `output`, `adjust or ground`.
fn read_roles(text: &Text<'_>) -> Option<Vec<RoleName>> {
    let role = |name: &str| RoleName::ALL.iter().find(|(_, known)| *known == name).map(|(role, _)| *role);
    let roles: Option<Vec<RoleName>> = text.as_str().split(" or ").map(|name| role(name.trim())).collect();
    if roles.is_none() {
        let names: Vec<&str> = RoleName::ALL.iter().map(|(_, name)| *name).collect();
        text.refuse(
            format!("`{}` is no role of a pin", text.as_str()),
            "not a role",
            format!("one or two (with `or`) of: {}", names.join(", ")),
        );
    }
    roles
}
