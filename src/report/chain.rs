//! The way of the power to a regulator, and what draws on it.

use std::collections::BTreeSet;

use super::explain_part::net_name;
use super::figures::{every_evidence, range};
use super::inert::inert;
use super::layout::table;
use super::look::Look;
use crate::circuit::{DeviceId, NetId};
use crate::facts::{Facts, RailOrigin, Subject};
use crate::quantity::Quantity;
use crate::recognize::{Regulator, RegulatorKind};

/// From the source to the input, a step a net.
pub(super) fn supply(facts: &Facts<'_>, regulator: &Regulator, look: Look) -> String {
    let title = look.bold("Supply, from its source\n");
    let Some(input) = regulator.input_net else { return format!("\n{title}  the input lies on no net\n") };
    let mut steps = vec![input];
    let mut seen = BTreeSet::from([input]);
    while let Some(next) = steps.last().and_then(|net| before(facts, *net)) {
        // Nets that feed each other in a ring have no source.
        if !seen.insert(next) {
            break;
        }
        steps.push(next);
    }
    let mut rows = Vec::new();
    let mut told = BTreeSet::new();
    for net in steps.iter().rev() {
        let voltage = facts.rail(*net).voltage;
        let load = facts.draw(*net);
        let how = how(facts, *net);
        rows.extend(step([how, net_name(facts, *net), range(&voltage)], &voltage, &mut told));
        if load.evidence().next().is_some() {
            rows.extend(step(["  drawn from it".to_owned(), String::new(), range(&load)], &load, &mut told));
        }
    }
    format!("\n{title}{}", table(&rows, "  ", look.width()))
}

/// A step with what it rests on beyond what was told before.
fn step(cells: [String; 3], figure: &Quantity, told: &mut BTreeSet<String>) -> Vec<Vec<String>> {
    let mut all = every_evidence(figure);
    // What is told of this very net comes first.
    all.sort_by_key(|piece| !piece.contains(&format!(" of {},", cells[1])));
    let pieces = all.into_iter().filter(|piece| {
        let what = piece.split("; moves it by").next().unwrap_or(piece);
        told.insert(what.to_owned())
    });
    let mut pieces = pieces.collect::<Vec<_>>().into_iter();
    let [how, net, range] = cells;
    let first = vec![how, net, range, pieces.next().unwrap_or_default()];
    let more = pieces.map(|piece| vec![String::new(), String::new(), String::new(), piece]);
    std::iter::once(first).chain(more).collect()
}

/// The net that feeds another.
fn before(facts: &Facts<'_>, net: NetId) -> Option<NetId> {
    match facts.rail(net).origin {
        RailOrigin::Through { from, .. } => Some(from),
        RailOrigin::Regulator(id) => facts.regulator(Subject::Regulator(id))?.input_net,
        _ => None,
    }
}

/// How a net gets its voltage.
fn how(facts: &Facts<'_>, net: NetId) -> String {
    let part = |device: DeviceId| {
        let device = facts.circuit().device(device);
        format!("{} {}", inert(&device.reference), inert(&device.value)).trim_end().to_owned()
    };
    match facts.rail(net).origin {
        RailOrigin::Through { device, .. } => format!("through {}", part(device)),
        RailOrigin::Regulator(id) => facts
            .regulator(Subject::Regulator(id))
            .map_or_else(String::new, |regulator| format!("by {}", part(regulator.device))),
        RailOrigin::Rectified(device) => {
            device.map_or_else(|| "rectified".to_owned(), |device| format!("rectified by {}", part(device)))
        }
        RailOrigin::Declared => "declared supply".to_owned(),
        RailOrigin::Named => "told by its name or a cell".to_owned(),
        RailOrigin::Ground => "ground".to_owned(),
        RailOrigin::Unknown => "source not known".to_owned(),
    }
}

/// Whether a net is another one, or lies behind it with series elements alone between.
fn hangs_on(facts: &Facts<'_>, net: NetId, output: Option<NetId>) -> bool {
    let (mut at, mut seen) = (net, BTreeSet::new());
    while Some(at) != output {
        let RailOrigin::Through { from, .. } = facts.rail(at).origin else { return false };
        if !seen.insert(at) {
            return false;
        }
        at = from;
    }
    true
}

/// What is drawn from the output, and where that comes from.
pub(super) fn load(facts: &Facts<'_>, subject: Subject, regulator: &Regulator, look: Look) -> String {
    let title = look.bold("Load\n");
    let name = if regulator.kind == RegulatorKind::Shunt { "reference_load" } else { "load" };
    let mut rows = Vec::new();
    if let Some(load) = facts.figure(subject, name) {
        let output = regulator.output_net.map_or_else(|| "no net".to_owned(), |net| net_name(facts, net));
        rows.extend(step([format!("on {output}"), String::new(), range(&load)], &load, &mut BTreeSet::new()));
    }
    let output = regulator.output_net;
    for (id, fed) in facts.regulators().filter(|(id, _)| Subject::Regulator(*id) != subject) {
        let Some(input) = fed.input_net.filter(|input| hangs_on(facts, *input, output)) else { continue };
        let own = facts.figure(Subject::Regulator(id), "load").map_or_else(String::new, |load| range(&load));
        let behind =
            if Some(input) == output { String::new() } else { format!(", behind {}", net_name(facts, input)) };
        let (reference, net) = (inert(&facts.part_of(fed).reference), fed.output_net);
        let net = net.map_or_else(String::new, |net| net_name(facts, net));
        rows.push(vec![format!("  {reference} hangs on it{behind}"), net, own]);
    }
    if rows.is_empty() { String::new() } else { format!("\n{title}{}", table(&rows, "  ", look.width())) }
}
