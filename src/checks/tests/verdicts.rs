//! Verdicts, slack, what to settle, and the findings made of them.

use std::collections::BTreeMap;

use super::fake::{Board, NAMES, fact, guess, regulator, unknown};
use crate::checks::language::{Answer, Context, Scope, sentence};
use crate::checks::{Checks, Judgement, Override, Verdict, judge, read};
use crate::facts::{SubjectKind, Value};
use crate::quantity::{Dimension, Pair, Quantity};
use crate::source::Source;

const V: Dimension = Dimension::VOLTAGE;

fn answer(board: &Board, text: &str) -> Answer {
    let settings = BTreeMap::new();
    let mut scope = Scope { names: &NAMES, about: SubjectKind::Regulator, settings: &settings, each: None };
    let requirement = scope.requirement(&sentence(text).unwrap()).unwrap();
    let settings: BTreeMap<String, Quantity> = BTreeMap::new();
    requirement.evaluate(Context { figures: board, settings: &settings, subject: regulator(0), member: None })
}

fn verdict(board: &Board, text: &str) -> Option<Verdict> {
    match answer(board, text) {
        Answer::Judged(judged) => Some(judged.verdict),
        Answer::NotAsked => None,
    }
}

fn headroom(value: Value) -> Board {
    Board::default().u1("headroom", value).u1("dropout", fact(V, 1.1, 1.3, "dropout"))
}

#[test]
fn facts_fail_and_guesses_doubt_and_far_ends_are_tight() {
    let text = "headroom >= dropout";
    assert_eq!(verdict(&headroom(fact(V, 1.3, 2.0, "h")), text), Some(Verdict::Holds));
    assert_eq!(verdict(&headroom(fact(V, 1.2, 2.0, "h")), text), Some(Verdict::Fails));
    let any = Pair::ANY;
    assert_eq!(verdict(&headroom(guess(V, [0.0, 1.0, 2.0], any, "h")), text), Some(Verdict::Doubtful));
    assert_eq!(verdict(&headroom(guess(V, [1.0, 2.0, 3.0], any, "h")), text), Some(Verdict::Tight));
    assert_eq!(verdict(&headroom(guess(V, [0.1, 0.2, 0.3], Pair::new(0.0, 1.0), "h")), text), Some(Verdict::Fails));
    assert_eq!(verdict(&headroom(unknown(V, any, "h")), text), Some(Verdict::Unknown));
    assert_eq!(verdict(&headroom(unknown(V, Pair::new(0.0, 1.0), "h")), text), Some(Verdict::Fails));
    assert_eq!(verdict(&headroom(unknown(V, Pair::new(2.0, 9.0), "h")), text), Some(Verdict::Holds));
    assert_eq!(verdict(&headroom(Value::inapplicable("none")), text), None);
}

#[test]
fn rounding_does_not_break_an_equality() {
    let board = Board::default().u1("headroom", fact(V, 0.1 + 0.2, 1.0, "h")).u1("dropout", fact(V, 0.3, 0.3, "d"));
    assert_eq!(verdict(&board, "headroom >= dropout"), Some(Verdict::Holds));
    assert_eq!(verdict(&board, "headroom <= 1 V"), Some(Verdict::Holds));
    let even = board.clone().u1("headroom", fact(V, 0.1 + 0.2, 0.1 + 0.2, "h"));
    assert_eq!(verdict(&even, "headroom > dropout"), Some(Verdict::Fails));
    assert_eq!(verdict(&even, "dropout >= headroom"), Some(Verdict::Holds));
}

#[test]
fn not_turns_a_comparison_and_is_pushed_inward() {
    let board = headroom(fact(V, 2.0, 3.0, "h")).u1("dropout", fact(V, 1.3, 1.3, "dropout"));
    assert_eq!(verdict(&board, "not (headroom < dropout)"), Some(Verdict::Holds));
    assert_eq!(verdict(&board, "not (headroom >= dropout and dropout >= 1 V)"), Some(Verdict::Fails));
    assert_eq!(verdict(&board, "not (headroom >= dropout or dropout >= 1 V)"), Some(Verdict::Fails));
    assert_eq!(verdict(&board, "not (headroom within 0 V .. 1 V)"), Some(Verdict::Holds));
}

#[test]
fn one_ranged_fact_on_two_sides_is_doubtful_at_most() {
    let board = headroom(fact(V, 1.0, 3.0, "h"));
    assert_eq!(verdict(&board, "headroom >= headroom"), Some(Verdict::Doubtful));
    assert_eq!(verdict(&board, "headroom - headroom >= 0.1 V"), Some(Verdict::Doubtful));
    // Each side breaks at one end, no value breaks both.
    assert_eq!(verdict(&board, "headroom >= 2 V or headroom <= 2.5 V"), Some(Verdict::Doubtful));
}

#[test]
fn what_does_not_apply_is_left_out() {
    let board = headroom(fact(V, 1.0, 1.0, "h"));
    assert_eq!(verdict(&board, "headroom >= dropout and load >= 1 A"), Some(Verdict::Fails));
    assert_eq!(verdict(&board, "load >= 1 A and load <= 2 A"), None);
    assert_eq!(verdict(&board, "headroom >= dropout or load >= 1 A"), None);
    assert_eq!(verdict(&board, "headroom >= 0.5 V or load >= 1 A"), Some(Verdict::Holds));
    assert_eq!(verdict(&board, "for each c in output_capacitors: c.esr <= 5 ohm"), None);
}

#[test]
fn a_margin_of_phase_is_set_against_degrees_alone() {
    let board = Board::default().u1("phase_margin", fact(Dimension::ANGLE, 40.0, 70.0, "margin"));
    assert_eq!(verdict(&board, "phase_margin >= 45 deg"), Some(Verdict::Fails));
    assert_eq!(verdict(&board, "phase_margin >= 30°"), Some(Verdict::Holds));
}

#[test]
fn the_worst_of_a_group_is_named() {
    let (one, other) = (regulator(7), regulator(8));
    let ohm = |high, what| fact(Dimension::RESISTANCE, 0.0, high, what);
    let board = Board::default()
        .u1("output_capacitors", Value::Group(vec![one, other]))
        .with(one, "esr", ohm(1.0, "a"))
        .with(other, "esr", ohm(9.0, "b"));
    let Answer::Judged(judged) = answer(&board, "for each c in output_capacitors: c.esr <= 5 ohm") else {
        panic!("it applies");
    };
    assert_eq!((judged.verdict, judged.decision.member), (Verdict::Fails, Some(other)));
    assert_eq!(judged.decision.figures.len(), 1);
    assert_eq!(judged.decision.figures[0].0, "c.esr");
}

#[test]
fn slack_is_the_distance_from_the_edge_at_worst() {
    let board = headroom(guess(V, [0.5, 2.0, 3.0], Pair::ANY, "h"));
    let Answer::Judged(judged) = answer(&board, "dropout <= headroom") else { panic!("it applies") };
    let (value, dimension) = judged.decision.slack.unwrap();
    assert!((value + 0.8).abs() < 1e-12 && dimension == V);
    let targets: Vec<&str> = judged.decision.settle.iter().map(|settle| settle.target.as_str()).collect();
    assert_eq!(targets, ["h"]);
}

fn checks(text: &str) -> Checks {
    let files = BTreeMap::from([("check.toml".to_owned(), text.to_owned())]);
    let (checks, problems) = Checks::load(&BTreeMap::from([("sample".to_owned(), files)]), &NAMES);
    assert!(problems.is_empty(), "{problems:?}");
    checks
}

const SAMPLE: &str = r#"
name  = "sample"
about = "regulator"
asks  = "?"
when  = "kind == series"
holds = "headroom >= dropout + spare"
[settings]
spare = "0 V"
[says]
fails    = "{subject} gets {headroom.low} and needs {dropout.high} on {input_net}"
unknown  = "{subject}: {missing}"
[points]
also = ["input_net"]
[hints]
lines = ["raise it by {dropout.high - headroom.low}", "at {load.high}"]
[[sources]]
common_practice = true
"#;

fn series(board: Board, index: usize, headroom: Value) -> Board {
    let subject = regulator(index);
    board
        .with(subject, "kind", Value::word("series"))
        .with(subject, "input_net", Value::word("+5V"))
        .with(subject, "dropout", fact(V, 1.1, 1.3, "dropout"))
        .with(subject, "headroom", headroom)
}

fn judged(checks: &Checks, board: &Board, count: usize) -> Judgement {
    let subjects: Vec<_> = (0..count).rev().map(regulator).collect();
    judge(checks, &subjects, board)
}

#[test]
fn a_finding_says_what_and_what_to_do_and_leaves_unknown_hints_out() {
    let board = series(Board::default(), 0, fact(V, 0.62, 1.0, "h"));
    let result = judged(&checks(SAMPLE), &board, 1);
    let finding = &result.findings[0];
    assert_eq!(finding.message, "U1 gets 620 mV and needs 1.3 V on +5V");
    assert_eq!(finding.hints, ["raise it by 680 mV"]);
    assert_eq!(finding.quantities.iter().map(|(name, _)| name.as_str()).collect::<Vec<_>>(), ["headroom", "dropout"]);
    assert_eq!((result.counts.requirements, result.counts.fails), (1, 1));
}

#[test]
fn the_same_missing_figure_is_one_note() {
    let missing = || unknown(V, Pair::ANY, "+5V");
    let board = (0..11).fold(Board::default(), |board, index| series(board, index, missing()));
    let result = judged(&checks(SAMPLE), &board, 11);
    assert_eq!(result.findings.len(), 1);
    assert_eq!(result.findings[0].merged.len(), 10);
    let told = "U1: supply +5V is not known; nor can sample of U2, U3, U4, U5, U6, U7, U8, U9, U10, U11";
    assert_eq!(result.findings[0].message, told);
    assert_eq!((result.counts.requirements, result.counts.unknown), (11, 11));
}

#[test]
fn a_check_is_not_asked_where_its_condition_does_not_apply() {
    let board = series(Board::default(), 0, fact(V, 0.0, 0.0, "h")).u1("kind", Value::word("shunt"));
    assert_eq!(judged(&checks(SAMPLE), &board, 1), Judgement::default());
}

#[test]
fn a_condition_that_rests_on_a_guess_takes_the_failure_away() {
    use crate::facts::Word;
    use crate::quantity::{Evidence, Grade};
    let evidence = Some(Evidence::new(Grade::Inferred, "kind of U1", "symbol"));
    let guessed = Value::Word(Word { word: "series".to_owned(), evidence });
    let board = series(Board::default(), 0, fact(V, 0.0, 0.0, "h")).u1("kind", guessed);
    assert_eq!(judged(&checks(SAMPLE), &board, 1).findings[0].verdict, Verdict::Doubtful);
}

#[test]
fn settings_are_changed_and_wrong_ones_refused() {
    let checks = checks(SAMPLE);
    let change = |check: &str, key: &str, text: &str| Override {
        check: check.to_owned(),
        key: key.to_owned(),
        text: text.to_owned(),
        place: None,
    };
    let board = series(Board::default(), 0, fact(V, 1.4, 1.5, "h"));
    assert_eq!(judged(&checks, &board, 1).counts.holds, 1);
    let (wider, problems) = checks.with_settings(&[change("sample", "spare", "0.2 V")]);
    assert!(problems.is_empty());
    assert_eq!(judged(&wider, &board, 1).counts.fails, 1);
    let wrong = [change("sampel", "spare", "1 V"), change("sample", "spar", "1 V"), change("sample", "spare", "1 A")];
    let (_, problems) = checks.with_settings(&wrong);
    let told: Vec<String> =
        problems.iter().map(|problem| format!("{}; {}", problem.message(), problem.advice().unwrap())).collect();
    insta::assert_debug_snapshot!(told);
}

#[test]
fn a_check_suppresses_another_that_says_no_worse() {
    let folder = |name: &str, extra: &str, holds: &str| {
        let text = SAMPLE
            .replace("name  = \"sample\"", &format!("name = \"{name}\"\n{extra}"))
            .replace("headroom >= dropout + spare", holds);
        (name.to_owned(), BTreeMap::from([("check.toml".to_owned(), text)]))
    };
    let folders = BTreeMap::from([
        folder("first", "", "headroom >= dropout"),
        folder("second", "suppressed_by = [\"first\"]", "headroom >= 2 V"),
    ]);
    let (checks, problems) = Checks::load(&folders, &NAMES);
    assert!(problems.is_empty(), "{problems:?}");
    let result = judged(&checks, &series(Board::default(), 0, fact(V, 1.0, 1.0, "h")), 1);
    assert_eq!(result.findings.len(), 1);
    assert_eq!(result.findings[0].suppresses, ["second"]);
    assert_eq!((result.counts.requirements, result.counts.fails), (1, 1));
    let result = judged(&checks, &series(Board::default(), 0, fact(V, 1.5, 1.5, "h")), 1);
    assert_eq!(result.findings[0].check, "second");
}

#[test]
fn reading_a_check_gives_what_it_holds() {
    let (check, problems) = read("sample", &Source::new("check.toml", SAMPLE), &NAMES);
    assert!(problems.is_empty());
    let check = check.unwrap();
    assert_eq!((check.requires.len(), check.settings.len(), check.hints.len()), (1, 1, 2));
    assert_eq!(check.points.also, ["input_net"]);
}
