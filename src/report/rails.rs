//! The supply tree and the figures of each regulator, unjudged, as text.

use super::board::BoardResult;
use super::figures::{gist, range};
use super::inert::inert;
use super::layout::{table, wrapped};
use super::look::Look;
use super::problem::problems;
use super::supply_tree::supply_tree;
use super::text::{heading, unread};
use crate::circuit::NetId;
use crate::facts::{DEFINITIONS, Definition, Facts, Subject, SubjectKind, Value};
use crate::recognize::{Mode, Regulator, RegulatorKind};

/// The supply tree of a board, then each regulator with every figure known.
#[must_use]
pub fn rails(board: &BoardResult, look: Look) -> String {
    let mut text = heading(board, look);
    text.push('\n');
    text.push_str(&problems(board.all_problems(), look));
    let Some(examination) = &board.examination else { return super::guarded(&(text + &unread(look))) };
    let facts = Facts::new(&examination.design, &examination.board, &board.knowledge);
    text.push_str(&supply_tree(&facts, look));
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
