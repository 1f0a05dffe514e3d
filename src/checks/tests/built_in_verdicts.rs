//! What the built-in checks come to on made-up figures.

use super::built_in::built_in;
use super::fake::{Board, fact, guess, regulator, unknown};
use crate::checks::{Judgement, Verdict, judge};
use crate::facts::Value;
use crate::quantity::{Dimension, Pair};

const V: Dimension = Dimension::VOLTAGE;
const F: Dimension = Dimension::CAPACITANCE;
const OHM: Dimension = Dimension::RESISTANCE;
const A: Dimension = Dimension::CURRENT;

fn series() -> Board {
    Board::default()
        .u1("kind", Value::word("series"))
        .u1("input_net", Value::word("+5V"))
        .u1("output_net", Value::word("+3V3"))
        .u1("ground_net", Value::word("GND"))
        .u1("reference_from_own_output", Value::flag(false))
        .u1("window_is_solved", Value::flag(false))
}

fn run(board: &Board) -> Judgement {
    judge(&built_in(), &[regulator(0)], board)
}

/// Every finding as `check verdict: message | hint`.
fn told(board: &Board) -> Vec<String> {
    let told = |finding: &crate::checks::Finding| {
        format!("{} {}: {} | {}", finding.check, finding.verdict, finding.message, finding.hints.join("; "))
    };
    run(board).findings.iter().map(told).collect()
}

fn exact(dimension: Dimension, value: f64, what: &str) -> Value {
    fact(dimension, value, value, what)
}

#[test]
fn too_little_input_is_told_with_what_is_needed() {
    let board = series()
        .u1("headroom", fact(V, 0.62, 1.1, "headroom"))
        .u1("highest_headroom", exact(V, 1.4, "highest"))
        .u1("held_output", exact(V, 3.3, "held"))
        .u1("load", fact(A, 0.1, 0.5, "load"))
        .u1("dropout", exact(V, 1.3, "dropout"));
    insta::assert_debug_snapshot!(told(&board));
}

fn output(drawn: f64, left: [f64; 3], minimum: Value, basis: &str) -> Board {
    series()
        .u1("minimum_kind", Value::word("required"))
        .u1("minimum_basis", Value::word(basis))
        .u1("minimum_capacitance", minimum)
        .u1("drawn_capacitance", exact(F, drawn, "drawn"))
        .u1("output_capacitance", guess(F, left, Pair::new(0.0, drawn * 1.2), "left"))
        .u1("drawn_equals_minimum", Value::flag((drawn - 10e-6).abs() < 1e-7))
}

#[test]
fn output_capacitance_is_judged_as_drawn_and_mildly_as_modelled() {
    let required = || exact(F, 10e-6, "minimum");
    let all = [
        told(&output(0.0, [0.0, 0.0, 0.0], required(), "nominal")),
        told(&output(4.7e-6, [3e-6, 4e-6, 5e-6], required(), "nominal")),
        told(&output(8.5e-6, [6e-6, 8e-6, 9e-6], required(), "nominal")),
        told(&output(10e-6, [2e-6, 4e-6, 9e-6], required(), "nominal")),
        told(&output(15e-6, [2e-6, 4e-6, 9e-6], required(), "nominal")),
        told(&output(15e-6, [6e-6, 9e-6, 12e-6], required(), "effective")),
        told(&output(22e-6, [11e-6, 14e-6, 18e-6], required(), "effective")),
    ];
    insta::assert_debug_snapshot!(all);
}

#[test]
fn a_bank_that_is_too_small_silences_its_esr() {
    let board = output(0.1e-6, [0.1e-6; 3], exact(F, 10e-6, "minimum"), "nominal")
        .u1("bulk_is_ceramic", Value::flag(true))
        .u1("ceramic_allowed", Value::flag(false))
        .u1("bulk_esr", guess(OHM, [0.003, 0.01, 0.04], Pair::NOT_NEGATIVE, "esr"))
        .u1("esr_low", exact(OHM, 0.3, "esr low"))
        .u1("esr_high", exact(OHM, 22.0, "esr high"));
    let result = run(&board);
    assert_eq!(result.findings.len(), 1);
    assert_eq!(result.findings[0].suppresses, ["esr-window"]);
    let enough =
        board.u1("drawn_capacitance", exact(F, 22e-6, "drawn")).u1("output_capacitance", exact(F, 18e-6, "left"));
    insta::assert_debug_snapshot!(told(&enough));
    let allowed = enough.u1("ceramic_allowed", Value::flag(true));
    assert_eq!(run(&allowed).findings[0].verdict, Verdict::Tight);
}

fn input(kind: &str, far: bool, has: bool, drawn: f64, behind: bool) -> Vec<String> {
    let board = series()
        .u1("input_capacitor_kind", Value::word(kind))
        .u1("input_capacitor_if_far", Value::flag(far))
        .u1("has_input_capacitor", Value::flag(has))
        .u1("input_capacitor_behind_diode", Value::flag(behind))
        .u1("drawn_input_capacitance", exact(F, drawn, "drawn"))
        .u1("minimum_input_capacitance", exact(F, 10e-6, "minimum"));
    told(&board)
}

#[test]
fn an_input_capacitor_is_asked_for_as_the_sheet_does() {
    let all = [
        input("required", false, false, 0.0, false),
        input("required", false, false, 0.0, true),
        input("required", true, false, 0.0, false),
        input("required", true, true, 1e-6, false),
        input("recommended", false, false, 0.0, false),
        input("optional", false, false, 0.0, false),
        input("required", false, true, 10e-6, false),
    ];
    insta::assert_debug_snapshot!(all);
}

#[test]
fn a_set_point_is_held_against_declaration_and_name() {
    let set = |nominal: f64| {
        series()
            .u1("set_point", fact(V, nominal * 0.98, nominal * 1.02, "set point"))
            .u1("set_point_nominal", exact(V, nominal, "set point nominal"))
    };
    let named = |nominal: f64, name: f64| set(nominal).u1("name_voltage", guess(V, [name; 3], Pair::ANY, "name"));
    let declared = |low: f64, high: f64| {
        set(3.3)
            .u1("declared_low", exact(V, low, "low"))
            .u1("declared_high", exact(V, high, "high"))
            .u1("declared_voltage", fact(V, low, high, "declared"))
    };
    let all = [
        told(&named(3.3, 3.3)),
        told(&named(5.0, 3.3)),
        told(&named(-12.0, -12.0)),
        told(&named(-12.0, -15.0)),
        told(&declared(3.1, 3.5)),
        told(&declared(3.25, 3.5)),
    ];
    insta::assert_debug_snapshot!(all);
}

#[test]
fn an_enable_input_is_on_for_certain() {
    let enable = |open: bool, meaning: &str| {
        series()
            .u1("enable_active", Value::word("high"))
            .u1("enable_open", Value::flag(open))
            .u1("enable_when_open", Value::word(meaning))
    };
    let level =
        enable(false, "off").u1("enable_voltage", fact(V, 1.1, 1.8, "enable")).u1("enable_on", exact(V, 1.2, "on"));
    let all = [
        told(&enable(true, "off")),
        told(&enable(true, "unknown")),
        told(&enable(true, "on")),
        told(&level),
        told(&level.u1("enable_voltage", unknown(V, Pair::ANY, "EN"))),
    ];
    insta::assert_debug_snapshot!(all);
}

#[test]
fn references_are_fed_and_biased() {
    let shunt = series()
        .u1("kind", Value::word("shunt"))
        .u1("reference_bias", fact(A, 0.2e-3, 2e-3, "bias"))
        .u1("reference_bias_highest", fact(A, 2e-3, 3e-3, "bias highest"))
        .u1("bias_minimum", exact(A, 1e-3, "minimum"))
        .u1("bias_maximum", exact(A, 100e-3, "maximum"));
    let own_enable =
        series().u1("enable_active", Value::word("high")).u1("enable_from_own_output", Value::flag(true));
    let all = [told(&shunt), told(&series().u1("reference_from_own_output", Value::flag(true))), told(&own_enable)];
    insta::assert_debug_snapshot!(all);
}
