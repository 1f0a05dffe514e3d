//! What a part family states, row by row.

use crate::knowledge::{
    Active, AdjustSide, Basis, CapacitorDemand, Cited, Dropout, EnableSpec, EsrWindow, Family, MinimumKind,
    OpenEnable, Package, Pass, PublishedLoop, is_relative,
};
use crate::quantity::{Dimension, Range, print_amount, print_range};

/// A figure of a family as text, with where it comes from. Texts are as the file has them, so not yet inert.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct PartRow {
    /// What it is: `rated current`, `dropout`.
    pub what: String,
    /// The figure.
    pub figure: String,
    /// Whether it was recalled and not read; `None` where no source is needed.
    pub recalled: Option<bool>,
    /// The title of its source, or empty.
    pub source: String,
}

impl PartRow {
    fn new<T>(what: impl Into<String>, figure: impl Into<String>, cited: &Cited<T>) -> Self {
        let (recalled, source) = (Some(cited.recalled), cited.source.clone());
        Self { what: what.into(), figure: figure.into(), recalled, source }
    }

    fn plain(what: impl Into<String>, figure: impl Into<String>) -> Self {
        Self { what: what.into(), figure: figure.into(), recalled: None, source: String::new() }
    }
}

/// Everything that a family states but its names and sources.
#[must_use]
pub fn part_rows(family: &Family) -> Vec<PartRow> {
    let mut rows = Vec::new();
    if !family.voltages.is_empty() {
        let volts: Vec<String> =
            family.voltages.iter().map(|volts| print_amount(*volts, Dimension::VOLTAGE)).collect();
        rows.push(PartRow::plain("voltages", volts.join(", ")));
    }
    if let Some(side) = family.adjust {
        rows.push(PartRow::plain("adjustable", adjustable(side)));
    }
    if let Some(pass) = &family.pass {
        rows.push(PartRow::new("pass", Pass::name(pass.value), pass));
    }
    rows.extend(Family::FIGURES.iter().filter_map(|(key, dimension, _)| figure(family, key, *dimension)));
    rows.extend(family.dropout.iter().flat_map(dropout));
    for (what, demand) in [
        ("output capacitor", &family.output_capacitor),
        ("input capacitor", &family.input_capacitor),
        ("bypass capacitor", &family.bypass_capacitor),
    ] {
        rows.extend(demand.iter().flat_map(|demand| capacitor(what, demand)));
    }
    rows.extend(family.published_loop.iter().flat_map(published_loop));
    rows.extend(family.enable.iter().flat_map(enable));
    rows.extend(family.packages.iter().flat_map(|(name, found)| package(name, found)));
    rows
}

fn adjustable(side: AdjustSide) -> &'static str {
    match side {
        AdjustSide::Output => "the reference lies between output and adjust pin",
        AdjustSide::Ground => "the reference lies between adjust pin and ground",
        AdjustSide::SetCurrent => "a current into one resistor sets it",
    }
}

/// A range as text, a relative one as per cent.
pub(super) fn shown(key: &str, range: Range, dimension: Dimension) -> String {
    if !is_relative(key) || dimension != Dimension::ONE {
        return print_range(range, dimension);
    }
    let percent = Range::clamped(range.low() * 100.0, range.nominal() * 100.0, range.high() * 100.0);
    format!("{} %", print_range(percent, dimension))
}

fn figure(family: &Family, key: &str, dimension: Dimension) -> Option<PartRow> {
    let cited = family.figure(key)?;
    let text = match family.by_output.get(key) {
        None => shown(key, cited.value, dimension),
        Some(steps) => {
            let steps: Vec<(f64, String)> =
                steps.iter().map(|(limit, step)| (*limit, shown(key, step.value, dimension))).collect();
            stepped(&steps)
        }
    };
    Some(PartRow::new(key.replace('_', " "), text, cited))
}

/// Figures that depend on the output voltage.
fn stepped(steps: &[(f64, String)]) -> String {
    let step = |(limit, text): &(f64, String)| match limit.is_finite() {
        true => format!("{text} for outputs to {}", print_amount(*limit, Dimension::VOLTAGE)),
        false => format!("{text} above"),
    };
    steps.iter().map(step).collect::<Vec<_>>().join(", ")
}

fn dropout(dropout: &Dropout) -> Vec<PartRow> {
    let point = |cited: &Cited<crate::knowledge::DropoutPoint>| {
        let point = cited.value;
        let typical = print_amount(point.typical, Dimension::VOLTAGE);
        let drop = match point.maximum {
            Some(maximum) if maximum > point.typical => {
                format!("typically {typical}, at most {}", print_amount(maximum, Dimension::VOLTAGE))
            }
            Some(_) => format!("at most {typical}"),
            None => format!("typically {typical}"),
        };
        let from = if point.from_output > 0.0 {
            format!(", outputs from {}", print_amount(point.from_output, Dimension::VOLTAGE))
        } else {
            String::new()
        };
        let load = print_amount(point.load, Dimension::CURRENT);
        PartRow::new("dropout", format!("{drop} at {load}{from}"), cited)
    };
    let mut rows: Vec<PartRow> = dropout.points.iter().map(point).collect();
    if !dropout.defined.is_empty() {
        rows.push(PartRow::plain("dropout means", dropout.defined.clone()));
    }
    rows
}

fn kind_name(kind: MinimumKind) -> &'static str {
    match kind {
        MinimumKind::Required => "required",
        MinimumKind::Recommended => "recommended",
        MinimumKind::Recalled => "recalled",
        MinimumKind::Optional => "optional",
    }
}

fn capacitor(what: &str, demand: &CapacitorDemand) -> Vec<PartRow> {
    let farads = |value: f64| print_amount(value, Dimension::CAPACITANCE);
    let basis = match demand.basis {
        Basis::Nominal => "as marked",
        Basis::Effective => "as left under bias",
    };
    let mut notes = vec![kind_name(demand.kind)];
    let flags = [
        (demand.if_far, "only far from the supply's filter"),
        (demand.ceramic_only, "ceramics only"),
        (demand.ceramic_allowed && !demand.ceramic_only, "ceramics do"),
    ];
    notes.extend(flags.iter().filter(|(is, _)| *is).map(|(_, note)| *note));
    let notes = notes.join(", ");
    let steps: Vec<(f64, String)> = demand.by_output.iter().map(|(limit, step)| (*limit, farads(*step))).collect();
    let mut rows = vec![match &demand.minimum {
        Some(minimum) if steps.is_empty() => {
            PartRow::new(what, format!("{} or more {basis}, {notes}", farads(minimum.value)), minimum)
        }
        Some(minimum) => PartRow::new(what, format!("{}; {basis}, {notes}", stepped(&steps)), minimum),
        None if steps.is_empty() => PartRow::plain(what, notes),
        None => PartRow::plain(what, format!("{}; {basis}, {notes}", stepped(&steps))),
    }];
    let more = [
        ("if electrolytic", &demand.minimum_electrolytic),
        ("with a bypass capacitor", &demand.with_bypass),
        ("at most", &demand.maximum),
    ];
    for (when, cited) in more {
        rows.extend(cited.iter().map(|cited| PartRow::new(format!("{what}, {when}"), farads(cited.value), cited)));
    }
    rows.extend(demand.esr.iter().map(|cited| PartRow::new(format!("{what}, ESR"), window(cited.value), cited)));
    rows
}

fn window(window: EsrWindow) -> String {
    let low = window.low.unwrap_or(0.0);
    match window.high {
        Some(high) => print_range(Range::between(low.min(high), high), Dimension::RESISTANCE),
        None => format!("≥ {}", print_amount(low, Dimension::RESISTANCE)),
    }
}

fn enable(enable: &EnableSpec) -> Vec<PartRow> {
    let volts = |value: f64| print_amount(value, Dimension::VOLTAGE);
    let active = match enable.active {
        Active::High => "active high",
        Active::Low => "active low",
    };
    let mut rows = vec![PartRow::plain("enable", active)];
    rows.extend(enable.on.iter().map(|on| PartRow::new("enable, on at", volts(on.value), on)));
    rows.extend(enable.off.iter().map(|off| PartRow::new("enable, off at", volts(off.value), off)));
    let open = match enable.open.value {
        OpenEnable::On => "on",
        OpenEnable::Off => "off",
        OpenEnable::Undefined => "must not be left open",
        OpenEnable::Unknown => return rows,
    };
    rows.push(PartRow::new("enable, open", open, &enable.open));
    rows
}

fn published_loop(published: &PublishedLoop<Cited<Range>>) -> Vec<PartRow> {
    let row = |(key, number, cited): (&'static str, usize, &Cited<Range>)| match key {
        "gain" => PartRow::new("loop gain", decibels(cited.value), cited),
        "output_resistance" => {
            PartRow::new("output resistance", print_range(cited.value, Dimension::RESISTANCE), cited)
        }
        key => {
            let what = format!("loop, {} {}", if key == "zeros" { "zero" } else { "pole" }, number + 1);
            PartRow::new(what, print_range(cited.value, Dimension::FREQUENCY), cited)
        }
    };
    published.figures().map(row).collect()
}

fn decibels(gain: Range) -> String {
    let of = |ratio: f64| 20.0 * ratio.log10();
    let range = Range::clamped(of(gain.low()), of(gain.nominal()), of(gain.high()));
    format!("{} dB", print_range(range, Dimension::ONE))
}

fn package(name: &str, package: &Package) -> Vec<PartRow> {
    let mut rows = Vec::new();
    if !package.pins.is_empty() {
        let role = |roles: &[crate::knowledge::RoleName]| {
            roles.iter().map(|role| role.name()).collect::<Vec<_>>().join(" or ")
        };
        let pins: Vec<String> =
            package.pins.iter().map(|(number, roles)| format!("{number} {}", role(roles))).collect();
        rows.push(PartRow::new(name.to_owned(), pins.join(", "), &package.pins_from));
    }
    rows.extend(package.junction_to_ambient.iter().map(|heat| {
        let figure = print_amount(heat.value, Dimension::THERMAL_RESISTANCE);
        PartRow::new(format!("{name}, junction to ambient"), figure, heat)
    }));
    rows
}
