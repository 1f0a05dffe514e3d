//! The whole way of one board.

use std::collections::BTreeSet;

use super::accept::{Accepted, Entries, Reopened};
use super::assembly::{assemblies, merge};
use super::concern;
use super::fingerprint::fingerprints;
use super::notice::{REVIEW_CHECKS, Round, notices, review_check};
use super::settle::{Decisive, declare_first};
use crate::board::{Accept, Board, Place, SettingValue};
use crate::checks::cases::Told;
use crate::checks::{self, Checks, Counts, Finding, Judgement, Override, Verdict};
use crate::circuit::Circuit;
use crate::facts::{Facts, Subject, SubjectKind};
use crate::knowledge::Knowledge;
use crate::netlist::{self, Netlist};
use crate::recognize::{Design, recognize};
use crate::sheet::Sheets;
use crate::source::{Location, Problem, Severity};

/// A finding as reviewed.
#[derive(Debug, Clone)]
pub struct Reviewed {
    /// What was found.
    pub finding: Finding,
    /// What it is about, by name: the reference of a part, the name of a net; empty for the board as a whole.
    pub subject: String,
    /// A few words about that: the part's value, or the name of the net.
    pub about: String,
    /// Its identity; survives renumbering of parts, lines and net codes.
    pub fingerprint: String,
    /// Its acceptance in the board file.
    pub accepted: Option<Accepted>,
    /// That it was accepted when it was better, where nothing accepts it now.
    pub reopened: Option<Reopened>,
    /// The ways of fitting the board for which it stands, as `as drawn`, `in variant X` or `with U3 as Y`; empty where
    /// it stands for all that were judged.
    pub variants: Vec<String>,
    /// What the same missing figures leave unknown too, told by this finding.
    pub merged: Vec<Reviewed>,
    /// References of the parts concerned, the subject's first.
    pub parts: Vec<String>,
    /// Names of the nets concerned.
    pub nets: Vec<String>,
    /// Human-readable sheet path of the subject, or empty.
    pub sheet: String,
    /// What to underline first: in the netlist, or in the file that a finding of the review is about.
    pub place: Location,
    /// The same in the schematic sheet, where that lies beside the netlist.
    pub schematic: Option<Location>,
    /// What to mark besides, with a few words each; parts in their schematic sheets, where those are there.
    pub also: Vec<(Location, String)>,
}

impl Reviewed {
    /// Where people work on it: in the schematic where that is there, else in the netlist.
    #[must_use]
    pub fn best_place(&self) -> &Location {
        self.schematic.as_ref().unwrap_or(&self.place)
    }
}

/// A board with everything that was found on it.
#[derive(Debug)]
pub struct Examination {
    /// The netlist.
    pub netlist: Netlist,
    /// What is declared, symbol fields included.
    pub board: Board,
    /// The design.
    pub design: Design,
    /// The checks as they were asked, with the settings of the board.
    pub checks: Checks,
    /// Findings: errors first, then by check, then by subject; within a level those of the review last.
    pub findings: Vec<Reviewed>,
    /// The counts of what was asked of the design; accepted findings are left out of their verdicts.
    pub counts: Counts,
    /// How many findings are accepted.
    pub accepted: usize,
    /// How many findings of the review are open; they count under no verdict.
    pub review: usize,
    /// What every requirement came to, under the name of its subject.
    pub told: Vec<Told>,
    /// What was lost or odd while reading, in the order of reading.
    pub problems: Vec<Problem>,
    /// The ways of fitting the board that were judged, `as drawn` first; empty where there is no other.
    pub assemblies: Vec<String>,
    /// What to declare first.
    pub declare_first: Vec<Decisive>,
}

impl Examination {
    /// Whether the whole board was judged under all that was declared.
    #[must_use]
    pub fn is_complete(&self) -> bool {
        self.problems.iter().all(|problem| problem.severity() < Severity::Error)
    }
}

/// Reads and judges one board. `today` is a date as `YYYY-MM-DD`, for acceptances that run out.
///
/// # Errors
/// When nothing of the netlist could be read.
pub fn examine(
    name: &str,
    bytes: &[u8],
    board: Board,
    knowledge: &Knowledge,
    checks: &Checks,
    today: &str,
) -> Result<Examination, Vec<Problem>> {
    Ok(examine_netlist(netlist::read(name, bytes)?, board, knowledge, checks, today))
}

/// Judges a netlist that was read; see [`examine`].
#[must_use]
pub fn examine_netlist(
    netlist: Netlist,
    board: Board,
    knowledge: &Knowledge,
    checks: &Checks,
    today: &str,
) -> Examination {
    examine_with_sheets(netlist, &Sheets::default(), board, knowledge, checks, today)
}

/// Judges a netlist beside whose schematic sheets findings are to be placed; they change no verdict, but
/// may show that the netlist is an old export. Assembly variants and second-source parts are judged too.
#[must_use]
pub fn examine_with_sheets(
    netlist: Netlist,
    sheets: &Sheets,
    board: Board,
    knowledge: &Knowledge,
    checks: &Checks,
    today: &str,
) -> Examination {
    let rules = Rules { sheets, knowledge, checks, whole: netlist.is_complete(), today };
    let mut drawn = examine_fitted(netlist, board.clone(), rules);
    let (others, problem) = assemblies(&drawn.netlist, &board, &drawn.design);
    drawn.problems.extend(problem);
    if !others.is_empty() {
        let netlist = drawn.netlist.clone();
        let each = others.iter().map(|one| {
            let (netlist, board) = one.fit(&netlist, &board);
            (one.label(), examine_fitted(netlist, board, rules))
        });
        merge(&mut drawn, each);
    }
    drawn
}

/// What a board is judged by, in whichever way it is fitted.
#[derive(Debug, Clone, Copy)]
struct Rules<'a> {
    sheets: &'a Sheets,
    knowledge: &'a Knowledge,
    checks: &'a Checks,
    /// Whether nothing of the netlist was lost.
    whole: bool,
    today: &'a str,
}

/// Judges a board as its netlist says that it is fitted.
fn examine_fitted(mut netlist: Netlist, board: Board, rules: Rules<'_>) -> Examination {
    let Rules { sheets, knowledge, checks, whole, today } = rules;
    let (mut circuit, found) = Circuit::build(&netlist);
    let mut problems = std::mem::take(&mut netlist.problems);
    problems.extend(found);
    let board = declared(board, &netlist, &mut circuit, knowledge, checks, &mut problems);
    let (mut checks, found) = checks.with_settings(&overrides(&board));
    problems.extend(found);
    if !whole {
        // What is missing may be in the part that was lost: nothing is a fact that rests on absence.
        checks = checks.at_most(Verdict::Doubtful);
    }
    let design = recognize(circuit, &board, knowledge);
    let Judged { findings, counts, review, told, declare_first } =
        judged(&design, &board, knowledge, &checks, Given { netlist: &netlist, sheets, whole, today });
    let accepted = findings.iter().filter(|finding| finding.accepted.is_some()).count();
    let assemblies = Vec::new();
    Examination {
        netlist,
        board,
        design,
        checks,
        findings,
        counts,
        accepted,
        review,
        told,
        problems,
        assemblies,
        declare_first,
    }
}

/// Adds what symbol fields declare and looks up the names that the board file uses.
fn declared(
    mut board: Board,
    netlist: &Netlist,
    circuit: &mut Circuit,
    knowledge: &Knowledge,
    checks: &Checks,
    problems: &mut Vec<Problem>,
) -> Board {
    problems.extend(board.with_symbol_fields(netlist, circuit));
    problems.extend(board.resolve(knowledge));
    let review = REVIEW_CHECKS.iter().map(|check| check.name);
    let names: Vec<&str> = checks.iter().map(|check| check.name.as_str()).chain(review).collect();
    problems.extend(board.check_checks(names.iter().copied()));
    problems.extend(board.accepts.iter().filter_map(not_to_be_accepted));
    problems.extend(board.check_against(circuit));
    let grounds: Vec<&str> = board.grounds.iter().map(|ground| ground.value.as_str()).collect();
    circuit.mark_ground(grounds);
    board
}

/// An entry that would accept what is found of acceptances.
fn not_to_be_accepted(entry: &Accept) -> Option<Problem> {
    let check = review_check(&entry.check.value).filter(|check| !check.may_be_accepted)?;
    let problem = Problem::error(format!("what `{}` finds cannot be accepted", check.name))
        .help("change the acceptance that it finds fault with, or take that out");
    Some(entry.check.place.mark(problem, "about acceptances themselves"))
}

/// What was read besides the design, and the day.
#[derive(Debug, Clone, Copy)]
struct Given<'a> {
    netlist: &'a Netlist,
    sheets: &'a Sheets,
    /// Whether nothing of the netlist was lost.
    whole: bool,
    today: &'a str,
}

/// What was found on a design.
#[derive(Debug)]
struct Judged {
    findings: Vec<Reviewed>,
    counts: Counts,
    review: usize,
    told: Vec<Told>,
    declare_first: Vec<Decisive>,
}

fn judged(design: &Design, board: &Board, knowledge: &Knowledge, checks: &Checks, given: Given<'_>) -> Judged {
    let Given { netlist, sheets, whole, today } = given;
    let facts = Facts::new(design, board, knowledge);
    let kinds: BTreeSet<SubjectKind> = checks.iter().map(|check| check.about).collect();
    let subjects: Vec<Subject> = kinds.into_iter().flat_map(|kind| facts.subjects(kind)).collect();
    let Judgement { findings, suppressed, outcomes, counts } = checks::judge_apart(checks, &subjects, &facts);
    let told = Told::of(&outcomes, &facts);
    let prints = fingerprints(&facts, netlist, &findings.iter().chain(&suppressed).collect::<Vec<_>>());
    let open = findings.len();
    let entries = Entries::new(&board.accepts, today);
    let each = findings.into_iter().chain(suppressed).zip(prints);
    let mut findings: Vec<Reviewed> =
        each.map(|(finding, print)| reviewed(&facts, given, finding, print, &entries)).collect();
    let suppressed = findings.split_off(open);
    let counts = without_accepted(counts, &findings);
    let round = Round {
        netlist,
        sheets,
        entries: &entries,
        whole,
        outcomes: &outcomes,
        findings: &findings,
        suppressed: &suppressed,
        notices: &[],
    };
    let notices = notices(&round);
    let review = notices.iter().filter(|notice| notice.accepted.is_none()).count();
    let mut findings = told_by_the_first(findings, &facts);
    findings.extend(notices);
    // Stable: within a level the order of checks and subjects stays.
    findings.sort_by_key(|found| found.finding.level);
    let declare_first = declare_first(&facts, &findings);
    Judged { findings, counts, review, told, declare_first }
}

/// One open finding for what the same missing figures leave unknown; accepted ones stand apart, for an entry accepts
/// one requirement.
fn told_by_the_first(findings: Vec<Reviewed>, facts: &Facts<'_>) -> Vec<Reviewed> {
    let (mut kept, open): (Vec<_>, Vec<_>) =
        findings.into_iter().enumerate().partition(|(_, found)| found.accepted.is_some());
    let groups = checks::told_together(open.iter().map(|(_, found)| &found.finding));
    let mut rest: Vec<_> = open.into_iter().map(Some).collect();
    for group in groups {
        let mut members = group.into_iter().filter_map(|index| rest.get_mut(index).and_then(Option::take));
        let Some((place, mut first)) = members.next() else { continue };
        first.merged = members.map(|(_, other)| other).collect();
        checks::tell(&mut first.finding, first.merged.iter().map(|other| &other.finding), facts);
        kept.push((place, first));
    }
    kept.sort_by_key(|(place, _)| *place);
    kept.into_iter().map(|(_, found)| found).collect()
}

fn reviewed(
    facts: &Facts<'_>,
    Given { netlist, sheets, .. }: Given<'_>,
    finding: Finding,
    fingerprint: String,
    entries: &Entries<'_>,
) -> Reviewed {
    let (parts, nets) = concern::concerned(facts, &finding);
    let (place, sheet) = concern::place(facts, netlist, finding.subject);
    let also = concern::also(facts, netlist, sheets, &finding);
    let schematic = concern::schematic(facts, netlist, sheets, finding.subject);
    let (subject, about) = concern::named(facts, finding.subject);
    let mut reviewed = Reviewed {
        finding,
        subject,
        about,
        fingerprint,
        accepted: None,
        reopened: None,
        variants: Vec::new(),
        merged: Vec::new(),
        parts,
        nets,
        sheet,
        place,
        schematic,
        also,
    };
    entries.apply(&mut reviewed);
    reviewed
}

fn overrides(board: &Board) -> Vec<Override> {
    let mut all = Vec::new();
    for (check, settings) in &board.settings {
        for (key, declared) in settings {
            let text = match &declared.value {
                SettingValue::Text(text) => text.clone(),
                SettingValue::Number(number) => number.to_string(),
                SettingValue::Flag(flag) => flag.to_string(),
                SettingValue::Texts(texts) => texts.join(", "),
            };
            let place = match &declared.place {
                Place::File { source, span, .. } => Some((source.clone(), *span)),
                Place::Field { .. } => None,
            };
            all.push(Override { check: check.clone(), key: key.clone(), text, place });
        }
    }
    all
}

fn without_accepted(mut counts: Counts, findings: &[Reviewed]) -> Counts {
    for reviewed in findings.iter().filter(|reviewed| reviewed.accepted.is_some()) {
        let count = slot(&mut counts, reviewed.finding.verdict);
        *count = count.saturating_sub(1);
    }
    counts
}

/// The count of a verdict.
pub(super) fn slot(counts: &mut Counts, verdict: Verdict) -> &mut usize {
    match verdict {
        Verdict::Fails => &mut counts.fails,
        Verdict::Doubtful => &mut counts.doubtful,
        Verdict::Tight => &mut counts.tight,
        Verdict::Unknown => &mut counts.unknown,
        Verdict::Holds => &mut counts.holds,
    }
}
