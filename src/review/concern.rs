//! The parts and nets that a finding is about, and where they stand in the netlist.

use crate::checks::{Figures, Finding, Point};
use crate::circuit::DeviceId;
use crate::facts::{Facts, Subject};
use crate::netlist::{Component, Netlist};
use crate::sheet::Sheets;
use crate::source::{Location, Span};

/// References of parts and names of nets, the subject's first, each once.
pub(super) fn concerned(facts: &Facts<'_>, finding: &Finding) -> (Vec<String>, Vec<String>) {
    let (mut parts, mut nets) = (Vec::new(), Vec::new());
    let points = finding.primary.iter().chain(&finding.also).filter_map(|point| match point {
        Point::Subject(subject) => Some(*subject),
        Point::Named { .. } => None,
    });
    for subject in std::iter::once(finding.subject).chain(finding.member).chain(points) {
        match subject {
            Subject::Regulator(_) => {
                let Some(regulator) = facts.regulator(subject) else { continue };
                add(&mut parts, &facts.part_of(regulator).reference);
                for net in [regulator.input_net, regulator.output_net].into_iter().flatten() {
                    add(&mut nets, &facts.circuit().net(net).name);
                }
            }
            Subject::Net(net) => add(&mut nets, &facts.circuit().net(net).name),
            Subject::Capacitor { device, .. } => add(&mut parts, &facts.circuit().device(device).reference),
            Subject::Board => {}
        }
    }
    (parts, nets)
}

fn add(list: &mut Vec<String>, name: &str) {
    if !list.iter().any(|known| known == name) {
        list.push(name.to_owned());
    }
}

/// What a subject is called, and a few words about it.
pub(super) fn named(facts: &Facts<'_>, subject: Subject) -> (String, String) {
    let device = match subject {
        Subject::Regulator(_) => facts.regulator(subject).map(|regulator| facts.part_of(regulator)),
        Subject::Capacitor { device, .. } => Some(facts.circuit().device(device)),
        Subject::Net(net) => {
            let name = &facts.circuit().net(net).name;
            return (name.clone(), name.clone());
        }
        Subject::Board => None,
    };
    device.map_or_else(Default::default, |device| (device.reference.clone(), device.value.clone()))
}

/// The place of a subject in the netlist, and its sheet.
pub(super) fn place(facts: &Facts<'_>, netlist: &Netlist, subject: Subject) -> (Location, String) {
    let (span, sheet) = span(facts, netlist, subject);
    (Location::new(&netlist.source, span), sheet)
}

fn span(facts: &Facts<'_>, netlist: &Netlist, subject: Subject) -> (Span, String) {
    if let Subject::Net(net) = subject {
        return (facts.circuit().net(net).name_span, String::new());
    }
    let component = component(facts, netlist, subject);
    component.map_or_else(Default::default, |component| (component.reference_span, component.sheet.clone()))
}

fn component<'n>(facts: &Facts<'_>, netlist: &'n Netlist, subject: Subject) -> Option<&'n Component> {
    let device: DeviceId = match subject {
        Subject::Regulator(_) => facts.regulator(subject)?.device,
        Subject::Capacitor { device, .. } => device,
        Subject::Net(_) | Subject::Board => return None,
    };
    netlist.components.get(facts.circuit().device(device).component)
}

/// The place of a subject on its schematic sheet, where that is there; nets have none.
pub(super) fn schematic(facts: &Facts<'_>, netlist: &Netlist, sheets: &Sheets, subject: Subject) -> Option<Location> {
    sheets.locate(component(facts, netlist, subject)?)
}

/// What to mark besides the subject, with a few words each: on the schematic sheet where that is there.
pub(super) fn also(
    facts: &Facts<'_>,
    netlist: &Netlist,
    sheets: &Sheets,
    finding: &Finding,
) -> Vec<(Location, String)> {
    let mark = |point: &Point| match point {
        Point::Subject(subject) => {
            let drawn = schematic(facts, netlist, sheets, *subject);
            Some((drawn.unwrap_or_else(|| place(facts, netlist, *subject).0), facts.label(*subject)))
        }
        Point::Named { role, name } => {
            let net = facts.circuit().net_named(name)?;
            Some((Location::new(&netlist.source, facts.circuit().net(net).name_span), role.replace('_', " ")))
        }
    };
    finding.also.iter().filter_map(mark).collect()
}
