//! The result of `compare` as JSON.

use serde::Serialize;

use super::ComparedBoards;
use crate::circuit::{Circuit, NetId};
use crate::quantity::Quantity;
use crate::recognize::Regulator;
use crate::report::BoardResult;
use crate::report::json::{FindingEntry, ProblemEntry, Size, finding, problems, size};
use crate::report::json_text::text;
use crate::report::json_value::Bounds;
use crate::review::Examination;
use crate::review::compare::{Change, Compared, Comparison, Gone, Moved, RegulatorChange, Shown, State};

/// The name of the layout.
pub(in crate::report) const SCHEMA: &str = "railworthy-compare/1";

#[derive(Debug, Serialize)]
struct Result<'a> {
    schema: &'static str,
    tool_version: &'static str,
    boards: Vec<Board<'a>>,
}

#[derive(Debug, Serialize)]
struct Board<'a> {
    old: Option<Side<'a>>,
    new: Option<Side<'a>>,
    compared: bool,
    complete: bool,
    differs: Option<bool>,
    findings: Vec<Entry<'a>>,
    gone: Vec<GoneEntry<'a>>,
    regulators: Vec<RegulatorEntry<'a>>,
    counts: Counts,
}

#[derive(Debug, Serialize)]
struct Side<'a> {
    netlist: &'a str,
    board_file: Option<&'a str>,
    house_file: Option<&'a str>,
    format: Option<&'static str>,
    complete: bool,
    problems: Vec<ProblemEntry<'a>>,
    size: Size,
}

/// A finding of the new board.
#[derive(Debug, Serialize)]
struct Entry<'a> {
    state: Option<&'static str>,
    was: Option<FindingEntry<'a>>,
    behind: Option<&'a str>,
    #[serde(flatten)]
    finding: FindingEntry<'a>,
}

#[derive(Debug, Serialize)]
struct GoneEntry<'a> {
    why: &'static str,
    #[serde(flatten)]
    finding: FindingEntry<'a>,
}

#[derive(Debug, Serialize)]
struct RegulatorEntry<'a> {
    state: &'static str,
    old: Option<Name<'a>>,
    new: Option<Name<'a>>,
    identity: Vec<Pair<&'a str>>,
    pins: Vec<Pin<'a>>,
    figures: Vec<Pair<Fact<'a>>>,
}

#[derive(Debug, Serialize)]
struct Name<'a> {
    part: &'a str,
    output: usize,
    value: &'a str,
    input_net: Option<&'a str>,
    output_net: Option<&'a str>,
}

#[derive(Debug, Serialize)]
struct Pair<T> {
    name: &'static str,
    old: Option<T>,
    new: Option<T>,
}

#[derive(Debug, Serialize)]
struct Pin<'a> {
    pin: Option<&'a str>,
    name: &'a str,
    old_net: Option<&'a str>,
    new_net: Option<&'a str>,
}

#[derive(Debug, Serialize)]
#[serde(untagged)]
enum Fact<'a> {
    Figure(Bounds),
    Flag(bool),
    Word(&'a str),
}

#[derive(Debug, Default, Serialize)]
struct Counts {
    new: usize,
    worse: usize,
    better: usize,
    changed: usize,
    same: usize,
    gone: usize,
    regulators: usize,
}

/// The result of some boards beside what they were.
#[must_use]
pub fn compare(boards: &[ComparedBoards<'_>]) -> String {
    let boards = boards.iter().map(one).collect();
    text(&Result { schema: SCHEMA, tool_version: env!("CARGO_PKG_VERSION"), boards })
}

fn one<'a>(pair: &'a ComparedBoards<'_>) -> Board<'a> {
    let mut board = Board {
        old: pair.old.map(side),
        new: pair.new.map(side),
        compared: pair.comparison.is_some(),
        complete: pair.is_complete(),
        differs: pair.comparison.as_ref().map(|comparison| !comparison.is_empty()),
        findings: Vec::new(),
        gone: Vec::new(),
        regulators: Vec::new(),
        counts: Counts::default(),
    };
    let circuit = |board: Option<&'a BoardResult>| Some(&board?.examination.as_ref()?.design.circuit);
    match &pair.comparison {
        Some(comparison) => fill(&mut board, comparison, circuit(pair.old), circuit(pair.new)),
        None => {
            let all = pair.new.into_iter().flat_map(BoardResult::findings);
            board.findings =
                all.map(|found| Entry { state: None, was: None, behind: None, finding: finding(found) }).collect();
        }
    }
    board
}

fn fill<'a>(
    board: &mut Board<'a>,
    comparison: &'a Comparison<'_>,
    old: Option<&'a Circuit>,
    new: Option<&'a Circuit>,
) {
    board.findings = comparison.findings.iter().map(entry).collect();
    board.gone = comparison.gone.iter().map(gone).collect();
    board.regulators = comparison.regulators.iter().map(|change| regulator(change, old, new)).collect();
    board.counts = Counts {
        new: comparison.count(State::New),
        worse: comparison.count(State::Worse),
        better: comparison.count(State::Better),
        changed: comparison.count(State::Changed),
        same: comparison.count(State::Same),
        gone: comparison.gone.len(),
        regulators: comparison.regulators.len(),
    };
}

fn side(board: &BoardResult) -> Side<'_> {
    let examination: Option<&Examination> = board.examination.as_ref();
    Side {
        netlist: &board.netlist,
        board_file: board.board_file.as_deref(),
        house_file: board.house_file.as_deref(),
        format: examination.map(|one| one.netlist.format.name()),
        complete: board.is_complete(),
        problems: problems(board.all_problems()),
        size: examination.map(size).unwrap_or_default(),
    }
}

fn entry<'a>(compared: &'a Compared<'_>) -> Entry<'a> {
    Entry {
        state: Some(compared.state.name()),
        was: compared.was.filter(|_| compared.state != State::Same).map(finding),
        behind: compared.behind.map(|behind| behind.finding.check.as_str()),
        finding: finding(compared.now),
    }
}

fn gone<'a>(gone: &'a Gone<'_>) -> GoneEntry<'a> {
    GoneEntry { why: gone.why.name(), finding: finding(gone.was) }
}

fn regulator<'a>(
    change: &'a RegulatorChange<'_>,
    old: Option<&'a Circuit>,
    new: Option<&'a Circuit>,
) -> RegulatorEntry<'a> {
    RegulatorEntry {
        state: match (change.was, change.is) {
            (None, _) => "added",
            (_, None) => "removed",
            _ => "changed",
        },
        old: change.was.zip(old).map(|(regulator, circuit)| name(circuit, regulator)),
        new: change.is.zip(new).map(|(regulator, circuit)| name(circuit, regulator)),
        identity: change
            .identity
            .iter()
            .map(|Change { name, was, is }| Pair { name, old: was.as_deref(), new: is.as_deref() })
            .collect(),
        pins: change.moved.iter().map(pin).collect(),
        figures: change
            .figures
            .iter()
            .map(|Change { name, was, is }| Pair { name, old: fact(was.as_ref()), new: fact(is.as_ref()) })
            .collect(),
    }
}

fn name<'a>(circuit: &'a Circuit, regulator: &Regulator) -> Name<'a> {
    let device = circuit.device(regulator.device);
    let net = |net: Option<NetId>| net.map(|net| circuit.net(net).name.as_str());
    Name {
        part: &device.reference,
        output: regulator.output_index + 1,
        value: &device.value,
        input_net: net(regulator.input_net),
        output_net: net(regulator.output_net),
    }
}

fn pin(moved: &Moved) -> Pin<'_> {
    Pin { pin: moved.pin.as_deref(), name: &moved.name, old_net: moved.was.as_deref(), new_net: moved.is.as_deref() }
}

/// A value; null where it is not known or does not apply.
fn fact(shown: Option<&Shown>) -> Option<Fact<'_>> {
    let figure = |figure: &Quantity| Bounds::graded(figure).map(Fact::Figure);
    match shown? {
        Shown::Figure(quantity) => figure(quantity),
        Shown::Flag(flag) => Some(Fact::Flag(*flag)),
        Shown::Word(word) => Some(Fact::Word(word)),
    }
}
