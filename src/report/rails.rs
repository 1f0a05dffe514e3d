//! The supply tree and the figures of each regulator, unjudged, as text.

use std::collections::{BTreeMap, BTreeSet};

use super::board::BoardResult;
use super::figures::{gist, range};
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use super::problem::problems;
use super::text::{heading, unread};
use crate::circuit::NetId;
use crate::facts::{DEFINITIONS, Definition, Facts, RailOrigin, Subject, SubjectKind, Value};
use crate::recognize::{Mode, Regulator, RegulatorKind};

/// The supply tree of a board, then each regulator with every figure known.
#[must_use]
pub fn rails(board: &BoardResult, look: Look) -> String {
    let mut text = heading(board, look);
    text.push('\n');
    text.push_str(&problems(board.all_problems(), look));
    let Some(examination) = &board.examination else { return super::guarded(&(text + &unread(look))) };
    let facts = Facts::new(&examination.design, &examination.board, &board.knowledge);
    text.push_str(&tree(&facts, look));
    for (id, regulator) in facts.regulators() {
        text.push('\n');
        text.push_str(&block(&facts, Subject::Regulator(id), regulator, look));
    }
    let not_judged = super::text::not_judged(examination);
    if !not_judged.is_empty() {
        text.push_str(&wrapped(&format!("Not judged: {not_judged}"), "\n", "  ", look.width()));
    }
    text.push_str(&look.faint("\n`railworthy explain BOARD.net PART` shows all that a part's figures rest on.\n"));
    super::guarded(&text)
}

/// The supply nets, each under the one that feeds it.
fn tree(facts: &Facts<'_>, look: Look) -> String {
    let nets = facts.supply_nets();
    let mut children: BTreeMap<Option<NetId>, Vec<NetId>> = BTreeMap::new();
    for net in &nets {
        let parent = feeder(facts, *net).filter(|parent| nets.contains(parent) && parent != net);
        children.entry(parent).or_default().push(*net);
    }
    let mut rows = Vec::new();
    let mut seen = BTreeSet::new();
    // Nets that feed each other in a ring hang on no root: they begin a tree of their own.
    let roots = children.get(&None).cloned().unwrap_or_default();
    for root in roots.iter().chain(&nets) {
        let mut stack = vec![(*root, 0)];
        while let Some((net, depth)) = stack.pop() {
            if !seen.insert(net) {
                continue;
            }
            rows.push(row(facts, net, depth));
            let below = children.get(&Some(net)).into_iter().flatten().rev();
            stack.extend(below.map(|child| (*child, depth + 1)));
        }
    }
    if rows.is_empty() {
        return "No supply net is known.\n".to_owned();
    }
    format!("{}{}", look.bold("Supply nets\n"), table(&rows, "  ", look.width()))
}

/// The net that feeds another.
fn feeder(facts: &Facts<'_>, net: NetId) -> Option<NetId> {
    match facts.rail(net).origin {
        RailOrigin::Regulator(id) => {
            facts.regulator(Subject::Regulator(id)).and_then(|regulator| regulator.input_net)
        }
        RailOrigin::Through { from, .. } => Some(from),
        _ => None,
    }
}

fn row(facts: &Facts<'_>, net: NetId, depth: usize) -> Vec<String> {
    let circuit = facts.circuit();
    let rail = facts.rail(net);
    let part = |device| {
        let device = circuit.device(device);
        format!("{} {}", inert(&device.reference), inert(&device.value)).trim_end().to_owned()
    };
    let from = match rail.origin {
        RailOrigin::Regulator(id) => {
            facts.regulator(Subject::Regulator(id)).map_or_else(String::new, |one| format!("by {}", part(one.device)))
        }
        RailOrigin::Through { device, .. } => format!("through {}", part(device)),
        RailOrigin::Rectified(Some(device)) => format!("rectified by {}", part(device)),
        _ => gist(&rail.voltage),
    };
    let load = facts.draw(net);
    let load = if load.evidence().next().is_some() { format!("load {}", range(&load)) } else { String::new() };
    let name = format!("{:blanks$}{}", "", inert(&circuit.net(net).name), blanks = depth * 2);
    vec![name, range(&rail.voltage), from, load]
}

/// A regulator and its figures.
fn block(facts: &Facts<'_>, subject: Subject, regulator: &Regulator, look: Look) -> String {
    let mut text = introduction(facts, regulator, look);
    let (mut rows, mut unknown, mut holding) = (Vec::new(), Vec::new(), Vec::new());
    for definition in definitions() {
        match facts.value(subject, definition.name) {
            Value::Figure(figure) if figure.is_missing() => unknown.push(shown_name(definition.name)),
            Value::Figure(figure) => {
                rows.push(vec![shown_name(definition.name), range(&figure), gist(&figure)]);
            }
            Value::Flag(flag) => holding.extend(flag.holds.then(|| shown_name(definition.name))),
            Value::Word(_) | Value::Group(_) | Value::Inapplicable(_) => {}
        }
    }
    text.push_str(&table(&rows, "  ", look.width()));
    if !holding.is_empty() {
        text.push_str(&wrapped(&holding.join(", "), "  also: ", "        ", look.width()));
    }
    if !unknown.is_empty() {
        text.push_str(&wrapped(&format!("not known: {}", unknown.join(", ")), "  ", "    ", look.width()));
    }
    text
}

/// What a regulator is in a line, and what was odd about it.
pub(super) fn introduction(facts: &Facts<'_>, regulator: &Regulator, look: Look) -> String {
    let notes = notes(facts, regulator);
    let notes = notes.iter().map(|note| wrapped(note, "  note: ", "        ", look.width()));
    let parts = super::built_up::parts(facts, regulator);
    let parts = parts.iter().map(|line| wrapped(line, "  ", "    ", look.width()));
    wrapped(&title(facts, regulator), "", "  ", look.width()) + &parts.chain(notes).collect::<String>()
}

/// `U2 AMS1117-3.3 · series, fixed · 1117 / AMS1117 · +5V → +3V3 · sheet /Power/`
fn title(facts: &Facts<'_>, regulator: &Regulator) -> String {
    let circuit = facts.circuit();
    let device = facts.part_of(regulator);
    let net =
        |net: Option<NetId>| net.map_or_else(|| "open".to_owned(), |net| inert(&circuit.net(net).name).into_owned());
    let mut words = vec![format!("{} {}", inert(&device.reference), inert(&device.value))];
    let mode = if regulator.mode == Mode::Fixed { "fixed" } else { "adjustable" };
    let negative = if regulator.polarity == crate::knowledge::Sign::Negative { ", negative" } else { "" };
    words.push(format!("{}, {mode}{negative}", regulator.kind.name()));
    let unknown = if regulator.is_built_up() { "built up" } else { "no part family matches" };
    words.push(facts.families(regulator).next().map_or_else(
        || unknown.to_owned(),
        |family| format!("taken for {} ({})", inert(&family.name), inert(&regulator.identity.told_by)),
    ));
    words.push(format!("{} → {}", net(regulator.input_net), net(regulator.output_net)));
    if !device.sheet.is_empty() && device.sheet != "/" {
        words.push(format!("sheet {}", inert(&device.sheet)));
    }
    words.join(" · ")
}

/// What was odd about the name of a part, and what to do about one that is not known.
fn notes(facts: &Facts<'_>, regulator: &Regulator) -> Vec<String> {
    let mut notes: Vec<String> = regulator.identity.remarks.iter().map(|remark| inert(remark).into_owned()).collect();
    let judged = regulator.kind != RegulatorKind::Switching && !regulator.is_built_up();
    if judged && facts.families(regulator).next().is_none() {
        let reference = inert(&facts.part_of(regulator).reference).into_owned();
        notes.push(format!(
            "{reference} is not known and judged by what its symbol says: declare its `family` in the board file, or \
             begin a part file with `railworthy draft`"
        ));
    }
    notes
}

fn definitions() -> impl Iterator<Item = &'static Definition> {
    DEFINITIONS.iter().flat_map(|file| file.iter()).filter(|entry| entry.of == SubjectKind::Regulator)
}

fn shown_name(name: &str) -> String {
    name.replace('_', " ")
}
