//! A part of a board from the ground up: what it is taken for, where its power comes from, every figure about it, and
//! what every check that concerns it came to.

use std::collections::BTreeSet;

use super::board::BoardResult;
use super::chain;
use super::figures::{every_evidence, range};
use super::grounds::figures;
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use super::problem::problems;
use super::rails::introduction;
use super::requirements::{requirements, resting_on};
use super::text::heading;
use crate::circuit::{Device, DeviceId, NetId};
use crate::facts::{Facts, RailOrigin, Subject, SubjectKind, Value};
use crate::recognize::{EnablePin, NoSketch, Regulator, Roles, sketch};
use crate::review::Examination;

/// A part with all that its figures and verdicts rest on; `None` where the board has no part of this reference.
#[must_use]
pub fn explain_part(board: &BoardResult, reference: &str, look: Look) -> Option<String> {
    let examination = board.examination.as_ref()?;
    let facts = Facts::new(&examination.design, &examination.board, &board.knowledge);
    let device = facts.circuit().device_named(reference)?;
    let mut text = heading(board, look);
    text.push('\n');
    text.push_str(&problems(board.all_problems(), look));
    let own: Vec<_> = facts.regulators().filter(|(_, one)| one.device == device).collect();
    let banked: Vec<Subject> = facts
        .subjects(SubjectKind::Capacitor)
        .into_iter()
        .filter(|subject| matches!(subject, Subject::Capacitor { device: one, .. } if *one == device))
        .collect();
    for (id, regulator) in &own {
        text.push_str(&explained(&facts, examination, Subject::Regulator(*id), regulator, look));
    }
    if own.is_empty() {
        text.push_str(&wrapped(&what(&facts, board, device, !banked.is_empty()), "", "  ", look.width()));
        text.push_str(&pins(&facts, device, &|_| None, look));
        text.push_str(&serves(&facts, device, look));
    }
    for subject in banked {
        text.push_str(&capacitor(&facts, examination, subject, look));
    }
    Some(super::guarded(&text))
}

/// The references of a board's parts, for one that is none of them.
#[must_use]
pub fn part_names(board: &BoardResult) -> Vec<String> {
    let Some(examination) = &board.examination else { return Vec::new() };
    let circuit = &examination.design.circuit;
    circuit.devices().map(|device| circuit.device(device).reference.clone()).collect()
}

/// A regulator.
fn explained(
    facts: &Facts<'_>,
    examination: &Examination,
    subject: Subject,
    regulator: &Regulator,
    look: Look,
) -> String {
    let mut text = format!("{}\n", introduction(facts, regulator, look));
    text.push_str(&identity(facts, regulator, look));
    text.push_str(&pins(facts, regulator.device, &|pin| role(&regulator.roles, pin), look));
    text.push_str(&chain::supply(facts, regulator, look));
    text.push_str(&chain::load(facts, subject, regulator, look));
    text.push_str(&format!("\n{}{}", look.bold("Figures\n"), figures(facts, subject, look)));
    text.push_str(&requirements(facts, examination, subject, look));
    text
}

/// What a regulator is taken for, and why.
fn identity(facts: &Facts<'_>, regulator: &Regulator, look: Look) -> String {
    let known = &regulator.identity;
    let mut families = facts.families(regulator);
    let mut rows: Vec<[String; 2]> = Vec::new();
    match families.next() {
        Some(family) => rows.push(["family".to_owned(), format!("{}, {}", inert(&family.name), inert(&family.file))]),
        None => rows.push(["family".to_owned(), "none matches: its symbol and pins tell what it is".to_owned()]),
    }
    let others: Vec<&str> = families.map(|family| family.name.as_str()).collect();
    if !others.is_empty() {
        rows.push(["may also be".to_owned(), inert(&others.join(", ")).into_owned()]);
    }
    let (name, told_by) = (inert(&known.name), inert(&known.told_by));
    rows.push(["told by".to_owned(), format!("{told_by} {name}, {}", known.grade)]);
    if let Some(nominal) = &regulator.nominal {
        let volts = crate::quantity::print_amount(nominal.volts, crate::quantity::Dimension::VOLTAGE);
        rows.push(["made for".to_owned(), format!("{volts} by {}, {}", inert(&nominal.source), nominal.grade)]);
    }
    if let Some(pass) = regulator.pass {
        rows.push(["pass element".to_owned(), pass.name().to_owned()]);
    }
    let names = |devices: &[DeviceId]| {
        let names = devices.iter().map(|device| facts.circuit().device(*device).reference.as_str());
        inert(&names.collect::<Vec<_>>().join(", ")).into_owned()
    };
    if let Some(divider) = &regulator.divider {
        rows.push(["set by".to_owned(), format!("{} over {}", names(&divider.upper), names(&divider.lower))]);
    }
    if let Some(feed) = &regulator.feed {
        rows.push(["fed through".to_owned(), names(&feed.resistors)]);
    }
    let rows: Vec<Vec<String>> = rows.into_iter().map(Vec::from).collect();
    format!("{}{}", look.bold("Taken for\n"), table(&rows, "  ", look.width()))
}

/// The pins with their roles and nets.
fn pins(facts: &Facts<'_>, device: DeviceId, role: &dyn Fn(usize) -> Option<&'static str>, look: Look) -> String {
    let circuit = facts.circuit();
    let supplies: BTreeSet<NetId> = facts.supply_nets().into_iter().collect();
    let rows: Vec<Vec<String>> = circuit
        .pins_of(device)
        .map(|(index, pin)| {
            let net = pin.net.map_or_else(|| "open".to_owned(), |net| inert(&circuit.net(net).name).into_owned());
            let name = if pin.name.is_empty() { "–".to_owned() } else { inert(&pin.name).into_owned() };
            let voltage = pin.net.filter(|net| supplies.contains(net)).map(|net| range(&facts.rail(net).voltage));
            let role = role(index).unwrap_or("").to_owned();
            vec![inert(&pin.number).into_owned(), name, role, net, voltage.unwrap_or_default()]
        })
        .take(MOST_PINS)
        .collect();
    let more = circuit.pins_of(device).len().saturating_sub(MOST_PINS);
    let more = if more > 0 { format!("  and {more} more\n") } else { String::new() };
    format!("\n{}{}{more}", look.bold("Pins\n"), table(&rows, "  ", look.width()))
}

/// Most pins that are listed.
const MOST_PINS: usize = 40;

/// The role of a pin.
fn role(roles: &Roles, pin: usize) -> Option<&'static str> {
    let plain: [(&[usize], &str); 9] = [
        (&roles.input, "input"),
        (&roles.output, "output"),
        (&roles.ground, "ground"),
        (&roles.adjust, "adjust"),
        (&roles.sense, "sense"),
        (&roles.bypass, "bypass"),
        (&roles.bias, "bias"),
        (&roles.power_good, "power good"),
        (&roles.other, "other"),
    ];
    let enable = |one: &EnablePin| one.pin == pin;
    let found = plain.into_iter().find(|(pins, _)| pins.contains(&pin)).map(|(_, name)| name);
    found.or_else(|| {
        roles.enable.iter().find(|one| enable(one)).map(|one| match one.active_low {
            true => "enable, active low by its name",
            false => "enable",
        })
    })
}

/// What another part is taken for, and why nothing of it is judged as a regulator.
fn what(facts: &Facts<'_>, board: &BoardResult, device: DeviceId, banked: bool) -> String {
    let part = facts.circuit().device(device);
    let said = match sketch(facts.design(), &board.knowledge, &part.reference) {
        Err(NoSketch::NotFitted(text)) => format!("not fitted ({}), so left out of the circuit", inert(&text)),
        Err(NoSketch::NotJudged(reason)) => format!("not judged: {}", inert(&reason)),
        Err(NoSketch::NoRegulator(taken)) => {
            let judged =
                if banked { "judged with the regulators at whose pins it lies" } else { "not judged itself" };
            format!("taken for {}, {judged}", inert(&taken))
        }
        Err(NoSketch::Nameless(_) | NoSketch::Known(..) | NoSketch::NoPart) | Ok(_) => "not judged".to_owned(),
    };
    format!("{} · {said}{}", called(part), sheet(part))
}

fn called(part: &Device) -> String {
    format!("{} {}", inert(&part.reference), inert(&part.value)).trim_end().to_owned()
}

fn sheet(part: &Device) -> String {
    match part.sheet.as_str() {
        "" | "/" => String::new(),
        sheet => format!(" · sheet {}", inert(sheet)),
    }
}

/// What a part that is no regulator does for those that are.
fn serves(facts: &Facts<'_>, device: DeviceId, look: Look) -> String {
    let circuit = facts.circuit();
    let mut lines = Vec::new();
    for net in facts.supply_nets() {
        let rail = facts.rail(net);
        let RailOrigin::Through { device: through, from } = rail.origin else { continue };
        if through == device {
            let (ahead, behind) = (net_name(facts, from), net_name(facts, net));
            let own = format!(" of {}", circuit.device(device).reference);
            let is_own = |piece: &String| piece.contains(&format!("{own},"));
            let why: Vec<String> = every_evidence(&rail.voltage).into_iter().filter(is_own).collect();
            let volts = [range(&facts.rail(from).voltage), range(&rail.voltage)];
            let line =
                format!("feeds {behind} from {ahead}: {} ahead, {} behind; {}", volts[0], volts[1], why.join("; "));
            lines.push(line.trim_end_matches([';', ' ']).to_owned());
        }
    }
    for (_, regulator) in facts.regulators() {
        let reference = inert(&facts.part_of(regulator).reference);
        if regulator.divider.as_ref().is_some_and(|divider| {
            let apart = divider.upper_parallel.iter().chain(&divider.lower_parallel).flatten();
            divider.upper.iter().chain(&divider.lower).chain(apart).any(|one| *one == device)
        }) {
            lines.push(format!("sets the output of {reference}"));
        }
        if regulator
            .feed
            .as_ref()
            .is_some_and(|feed| feed.resistors.iter().chain(feed.parallel.iter().flatten()).any(|one| *one == device))
        {
            lines.push(format!("feeds {reference}"));
        }
    }
    let text: String = lines.iter().map(|line| wrapped(line, "  ", "    ", look.width())).collect();
    if text.is_empty() { text } else { format!("\n{}{text}", look.bold("Its part in the supplies\n")) }
}

/// A capacitor at one net: its figures, and the regulators that have it in their bank.
fn capacitor(facts: &Facts<'_>, examination: &Examination, subject: Subject, look: Look) -> String {
    let Subject::Capacitor { device, net } = subject else { return String::new() };
    let name = inert(&facts.circuit().net(net).name).into_owned();
    let title = look.bold(&format!("On {name}\n"));
    let mut text = format!("\n{title}{}", figures(facts, subject, look));
    for (id, regulator) in facts.regulators() {
        let own = Subject::Regulator(id);
        let mut places = Vec::new();
        for (group, place) in [("input_capacitors", "input"), ("output_capacitors", "output")] {
            if matches!(facts.value(own, group), Value::Group(members) if members.contains(&subject)) {
                places.push(place);
            }
        }
        if places.is_empty() {
            continue;
        }
        let reference = inert(&facts.part_of(regulator).reference).into_owned();
        let title = look.bold(&format!("At the {} of {reference}\n", places.join(" and ")));
        text.push_str(&format!("\n{title}"));
        text.push_str(&resting_on(facts, examination, own, device, look));
    }
    text
}

/// The net's name for a line of text.
pub(super) fn net_name(facts: &Facts<'_>, net: NetId) -> String {
    inert(&facts.circuit().net(net).name).into_owned()
}
