//! Results as JSON: what other programs read. Keys are added, never changed.

use serde::Serialize;

use super::board::BoardResult;
use super::json_text::text;
use super::json_value::{Bounds, EvidenceEntry, evidence, finite, unit};
use crate::board::Place;
use crate::checks::Counts;
use crate::circuit::{Circuit, DeviceId, NetId};
use crate::facts::{Facts, Subject};
use crate::knowledge::{Knowledge, Pass, Sign};
use crate::quantity::{Dimension, Settle};
use crate::recognize::{Mode, ReferenceFeed, Regulator};
use crate::review::{Examination, Reviewed};
use crate::source::{Problem, Source, Span};

/// The name of the layout.
pub(super) const SCHEMA: &str = "railworthy-result/1";

#[derive(Debug, Serialize)]
struct Result<'a> {
    schema: &'static str,
    tool_version: &'static str,
    boards: Vec<Board<'a>>,
}

#[derive(Debug, Serialize)]
struct Board<'a> {
    netlist: &'a str,
    board_file: Option<&'a str>,
    house_file: Option<&'a str>,
    format: Option<&'static str>,
    complete: bool,
    problems: Vec<ProblemEntry<'a>>,
    size: Size,
    regulators: Vec<RegulatorEntry<'a>>,
    not_judged: Vec<NotJudged<'a>>,
    assemblies: &'a [String],
    findings: Vec<FindingEntry<'a>>,
    counts: CountsEntry,
    declare_first: Vec<Declaration<'a>>,
}

#[derive(Debug, Serialize)]
pub(super) struct ProblemEntry<'a> {
    severity: &'static str,
    message: &'a str,
    help: Option<&'a str>,
    position: Option<Position<'a>>,
}

#[derive(Debug, Serialize)]
struct Position<'a> {
    file: &'a str,
    line: usize,
    column: usize,
    offset: usize,
    length: usize,
}

#[derive(Debug, Default, Serialize)]
pub(super) struct Size {
    components: usize,
    nets: usize,
    nodes: usize,
}

/// A regulator of the result, without its figures.
#[derive(Debug, Serialize)]
pub(super) struct RegulatorEntry<'a> {
    part: &'a str,
    output: usize,
    value: &'a str,
    sheet: &'a str,
    family: Option<&'a str>,
    family_group: Option<&'a str>,
    kind: &'static str,
    polarity: &'static str,
    mode: &'static str,
    pass: Option<&'static str>,
    reference_feed: Option<&'static str>,
    pins: Pins<'a>,
    input_net: Option<&'a str>,
    output_net: Option<&'a str>,
    ground_net: Option<&'a str>,
    output_voltage: Option<Bounds>,
}

#[derive(Debug, Serialize)]
struct Pins<'a> {
    input: Vec<&'a str>,
    output: Vec<&'a str>,
    ground: Vec<&'a str>,
    adjust: Vec<&'a str>,
    enable: Vec<&'a str>,
}

#[derive(Debug, Serialize)]
struct NotJudged<'a> {
    part: &'a str,
    reason: &'a str,
}

#[derive(Debug, Serialize)]
pub(super) struct FindingEntry<'a> {
    check: &'a str,
    verdict: &'static str,
    level: &'static str,
    subject: &'a str,
    sheet: &'a str,
    parts: &'a [String],
    nets: &'a [String],
    variants: &'a [String],
    message: &'a str,
    slack: Option<Slack>,
    quantities: Vec<QuantityEntry<'a>>,
    remedies: &'a [String],
    settle: Vec<String>,
    declarations: Vec<Declaration<'a>>,
    fingerprint: &'a str,
    accepted: Option<AcceptedEntry<'a>>,
    reopened: Option<ReopenedEntry<'a>>,
    position: Position<'a>,
    schematic: Option<Position<'a>>,
}

#[derive(Debug, Serialize)]
pub(super) struct Slack {
    value: Option<f64>,
    unit: String,
}

#[derive(Debug, Serialize)]
struct QuantityEntry<'a> {
    name: &'a str,
    low: Option<f64>,
    nominal: Option<f64>,
    high: Option<f64>,
    unit: String,
    evidence: Vec<EvidenceEntry>,
}

/// A declaration for the board file.
#[derive(Debug, Serialize)]
struct Declaration<'a> {
    declares: String,
    table: &'static str,
    target: &'a str,
    key: &'static str,
    example: &'static str,
    #[serde(skip_serializing_if = "Option::is_none")]
    decides: Option<usize>,
}

#[derive(Debug, Serialize)]
struct AcceptedEntry<'a> {
    reason: &'a str,
    until: Option<&'a str>,
    position: Option<Position<'a>>,
}

#[derive(Debug, Serialize)]
struct ReopenedEntry<'a> {
    slack: Slack,
    position: Option<Position<'a>>,
}

#[derive(Debug, Default, Serialize)]
struct CountsEntry {
    regulators: usize,
    requirements: usize,
    fails: usize,
    doubtful: usize,
    tight: usize,
    unknown: usize,
    holds: usize,
    accepted: usize,
    review: usize,
}

/// The result of some boards.
#[must_use]
pub fn check(boards: &[BoardResult]) -> String {
    let boards = boards.iter().map(one).collect();
    text(&Result { schema: SCHEMA, tool_version: env!("CARGO_PKG_VERSION"), boards })
}

fn one(board: &BoardResult) -> Board<'_> {
    let knowledge = board.knowledge.as_ref();
    let mut entry = Board {
        netlist: &board.netlist,
        board_file: board.board_file.as_deref(),
        house_file: board.house_file.as_deref(),
        format: None,
        complete: board.is_complete(),
        problems: problems(board.all_problems()),
        size: Size::default(),
        regulators: Vec::new(),
        not_judged: Vec::new(),
        assemblies: &[],
        findings: Vec::new(),
        counts: CountsEntry::default(),
        declare_first: Vec::new(),
    };
    let Some(examination) = &board.examination else { return entry };
    let facts = Facts::new(&examination.design, &examination.board, knowledge);
    entry.format = Some(examination.netlist.format.name());
    entry.size = size(examination);
    entry.regulators = facts
        .regulators()
        .map(|(id, regulator)| regulator_entry(examination, knowledge, &facts, Subject::Regulator(id), regulator))
        .collect();
    entry.not_judged = not_judged(examination);
    entry.assemblies = &examination.assemblies;
    entry.findings = examination.findings.iter().map(finding).collect();
    entry.counts = counts(examination);
    entry.declare_first = examination
        .declare_first
        .iter()
        .map(|each| Declaration { decides: Some(each.decides), ..declaration(&each.settle) })
        .collect();
    entry
}

/// Problems with their places.
pub(super) fn problems<'a>(list: impl Iterator<Item = &'a Problem>) -> Vec<ProblemEntry<'a>> {
    list.map(|problem| ProblemEntry {
        severity: match problem.severity() {
            crate::source::Severity::Error => "error",
            crate::source::Severity::Warning => "warning",
            crate::source::Severity::Note => "note",
        },
        message: problem.message(),
        help: problem.advice(),
        position: problem.place().map(|(source, span)| position(source, span)),
    })
    .collect()
}

fn position(source: &Source, span: Span) -> Position<'_> {
    let at = source.position(span.start());
    Position { file: source.name(), line: at.line, column: at.column, offset: span.start(), length: span.length() }
}

/// How large a board is.
pub(super) fn size(examination: &Examination) -> Size {
    let netlist = &examination.netlist;
    Size { components: netlist.components.len(), nets: netlist.nets.len(), nodes: netlist.node_count() }
}

fn not_judged(examination: &Examination) -> Vec<NotJudged<'_>> {
    let circuit = &examination.design.circuit;
    let parts = examination.design.not_judged.iter();
    parts.map(|part| NotJudged { part: &circuit.device(part.device).reference, reason: &part.reason }).collect()
}

/// A regulator without its figures.
pub(super) fn regulator_entry<'a>(
    examination: &'a Examination,
    knowledge: &'a Knowledge,
    facts: &Facts<'a>,
    subject: Subject,
    regulator: &'a Regulator,
) -> RegulatorEntry<'a> {
    let circuit = &examination.design.circuit;
    let device = circuit.device(regulator.device);
    let family = regulator.identity.families.first().and_then(|index| knowledge.families.get(*index));
    RegulatorEntry {
        part: &device.reference,
        output: regulator.output_index + 1,
        value: &device.value,
        sheet: &device.sheet,
        family: family.map(|family| family.name.as_str()),
        family_group: family.map(|family| family.group.as_str()),
        kind: regulator.kind.name(),
        polarity: if regulator.polarity == Sign::Positive { "positive" } else { "negative" },
        mode: if regulator.mode == Mode::Fixed { "fixed" } else { "adjustable" },
        pass: regulator.pass.map(Pass::name),
        // A packaged part's reference lies inside it; only built-up regulators have a feed that a schematic shows.
        reference_feed: regulator.built_up.as_ref().and_then(|built| built.feed).map(ReferenceFeed::name),
        pins: pins(circuit, regulator),
        input_net: net_name(circuit, regulator.input_net),
        output_net: net_name(circuit, regulator.output_net),
        ground_net: net_name(circuit, regulator.ground_net),
        output_voltage: facts.figure(subject, "output_voltage").and_then(|figure| Bounds::graded(&figure)),
    }
}

fn pins<'a>(circuit: &'a Circuit, regulator: &Regulator) -> Pins<'a> {
    let roles = &regulator.roles;
    let numbers = |indices: &[usize]| numbers(circuit, regulator.device, indices);
    let enable: Vec<usize> = roles.enable.iter().map(|pin| pin.pin).collect();
    Pins {
        input: numbers(&roles.input),
        output: numbers(&roles.output),
        ground: numbers(&roles.ground),
        adjust: numbers(&roles.adjust),
        enable: numbers(&enable),
    }
}

fn numbers<'a>(circuit: &'a Circuit, device: DeviceId, indices: &[usize]) -> Vec<&'a str> {
    let pins = &circuit.device(device).pins;
    indices.iter().filter_map(|index| pins.get(*index)).map(|pin| pin.number.as_str()).collect()
}

fn net_name(circuit: &Circuit, net: Option<NetId>) -> Option<&str> {
    net.map(|net| circuit.net(net).name.as_str())
}

/// A finding with all that belongs to it.
pub(super) fn finding(found: &Reviewed) -> FindingEntry<'_> {
    let finding = &found.finding;
    FindingEntry {
        check: &finding.check,
        verdict: finding.verdict.name(),
        level: finding.level.name(),
        subject: &found.subject,
        sheet: &found.sheet,
        parts: &found.parts,
        nets: &found.nets,
        variants: &found.variants,
        message: &finding.message,
        slack: finding.slack.map(slack),
        quantities: finding
            .quantities
            .iter()
            .map(|(name, figure)| {
                let Bounds { low, nominal, high, unit, .. } = Bounds::of(figure);
                QuantityEntry { name, low, nominal, high, unit, evidence: evidence(figure) }
            })
            .collect(),
        remedies: &finding.hints,
        settle: finding.settle.iter().map(Settle::phrase).collect(),
        declarations: finding.settle.iter().map(declaration).collect(),
        fingerprint: &found.fingerprint,
        accepted: found.accepted.as_ref().map(|accepted| AcceptedEntry {
            reason: &accepted.reason,
            until: accepted.until.as_deref(),
            position: declared_at(&accepted.place),
        }),
        reopened: found
            .reopened
            .as_ref()
            .map(|reopened| ReopenedEntry { slack: slack(reopened.was), position: declared_at(&reopened.place) }),
        position: position(&found.place.source, found.place.span),
        schematic: found.schematic.as_ref().map(|place| position(&place.source, place.span)),
    }
}

fn slack((value, dimension): (f64, Dimension)) -> Slack {
    Slack { value: finite(value), unit: unit(dimension) }
}

fn declared_at(place: &Place) -> Option<Position<'_>> {
    match place {
        Place::File { source, span, .. } => Some(position(source, *span)),
        Place::Field { .. } => None,
    }
}

fn declaration(settle: &Settle) -> Declaration<'_> {
    Declaration {
        declares: settle.phrase(),
        table: settle.table.name(),
        target: &settle.target,
        key: settle.key,
        example: settle.example,
        decides: None,
    }
}

fn counts(examination: &Examination) -> CountsEntry {
    let Counts { requirements, fails, doubtful, tight, unknown, holds } = examination.counts;
    let (regulators, accepted) = (examination.design.regulators.len(), examination.accepted);
    let review = examination.review;
    CountsEntry { regulators, requirements, fails, doubtful, tight, unknown, holds, accepted, review }
}
