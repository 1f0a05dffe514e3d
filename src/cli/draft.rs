//! `railworthy draft`

use super::args::Draft;
use super::input::{self, Rules};
use super::settings::Terminal;
use super::{Status, Streams, day, output};
use crate::knowledge::{Family, built_in_part};
use crate::recognize::{NoSketch, sketch};
use crate::report::{self, BoardResult};
use crate::review::Examination;
use crate::source::toml::nearest;

pub(super) fn run(typed: &Draft, terminal: Terminal, to: &mut Streams<'_>) -> Status {
    let rules = Rules::load(&typed.input.rules);
    let board = input::board(&typed.netlist, &typed.input, &rules, &day::today());
    to.tell(&report::problems(board.all_problems(), terminal.err));
    let status = if board.is_complete() { Status::Clean } else { Status::Broken };
    let Some(examination) = &board.examination else { return Status::Broken };
    let part = typed.part.trim();
    let text = match sketch(&examination.design, &board.knowledge, part) {
        Ok(found) => Ok(report::draft(&found, &board.netlist, part, &rules.checks)),
        Err(NoSketch::Known(families, name)) => known(part, &name, &families, &board, to),
        Err(why) => Err(refusal(&why, part, examination)),
    };
    let written = match (text, &typed.output) {
        (Err(why), _) => to.broken(&why),
        (Ok(text), None) => to.result(&text),
        (Ok(text), Some(path)) => {
            let read = output::read_for([&board], typed.input.board.as_deref());
            output::write(path, &text, &read, &[], to)
        }
    };
    written.max(status)
}

/// A part that is known begins from its family, so that what is wrong there can be changed.
fn known(
    part: &str,
    name: &str,
    families: &[usize],
    board: &BoardResult,
    to: &mut Streams<'_>,
) -> Result<String, String> {
    let families: Vec<&Family> = families.iter().filter_map(|index| board.knowledge.families.get(*index)).collect();
    let Some(first) = families.first() else { return Err(format!("the family of {part} is gone")) };
    let replaced = board.knowledge.replaced.iter().any(|(file, _)| *file == first.file);
    let Some(text) = built_in_part(&first.file).filter(|_| !replaced) else {
        let file = first.file.rsplit('/').next().unwrap_or(&first.file);
        return Err(format!(
            "{part}, {name}, is known already as `{}`; change the file `{file}` of your rules folder",
            first.name
        ));
    };
    to.tell(&format!(
        "note: {}, {}, is known already as `{}`; its part file is given as it stands\n",
        report::inert(part),
        report::inert(name),
        report::inert(&first.name)
    ));
    Ok(report::known_draft(part, name, &families, text))
}

fn refusal(why: &NoSketch, part: &str, examination: &Examination) -> String {
    match why {
        NoSketch::NoPart => {
            let circuit = &examination.design.circuit;
            let names: Vec<&str> = circuit.devices().map(|id| circuit.device(id).reference.as_str()).collect();
            match nearest(part, names) {
                Some(near) => format!("no part of the board is called `{part}`; did you mean `{near}`?"),
                None => format!("no part of the board is called `{part}`; `railworthy rails` lists its regulators"),
            }
        }
        NoSketch::NotFitted(text) => format!("{part} is not fitted ({text}), so that nothing is judged of it"),
        NoSketch::NotJudged(reason) => {
            format!("{part} is not judged, and a part file would not change that: {reason}")
        }
        NoSketch::NoRegulator(what) => format!(
            "{part} is no regulator or reference, but {what}; if it is one, write a part file with its names and pins by \
             hand"
        ),
        NoSketch::Nameless(value) => format!(
            "{part} is called `{value}`, which names no part; write its part number into the value or an MPN field"
        ),
        NoSketch::Known(_, name) => format!("{part}, {name}, is known already"),
    }
}
