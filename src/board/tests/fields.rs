//! Facts in fields on symbols.

use super::{circuit_of, good, told};
use crate::board::{Board, ModelKind};

/// A board whose `reference` has these fields, and what reading them said.
fn with(reference: &str, fields: &[(&str, &str)], mut board: Board) -> (Board, String) {
    let fields: String =
        fields.iter().map(|(name, value)| format!("(property (name \"{name}\") (value \"{value}\"))")).collect();
    let (netlist, circuit) = circuit_of(&format!("{reference}:{fields}"));
    let problems = board.with_symbol_fields(&netlist, &circuit);
    (board, told(&problems))
}

#[test]
fn a_capacitors_fields_are_facts_in_any_case() {
    let fields = [("esr", "30 mΩ"), ("TECHNOLOGY", "Tantalum"), ("Voltage", "16V"), ("Tolerance", "±0.5 uF")];
    let (board, problems) = with("C1", &fields, Board::default());
    assert_eq!(problems, "");
    let part = board.part("C1").unwrap();
    let esr = part.esr.as_ref().unwrap();
    assert!((esr.value.range.nominal() - 0.03).abs() < 1e-12 && esr.value.single);
    assert_eq!(esr.evidence("esr of C1").source, "field esr of C1");
    assert_eq!(part.technology.as_ref().unwrap().value, "tantalum");
    assert!((part.rating.as_ref().unwrap().value.nominal() - 16.0).abs() < 1e-12);
    assert!((part.tolerance.as_ref().unwrap().value.high() - 0.05).abs() < 1e-12);
    let (board, _) = with("C1", &[("Dielectric", "X7R"), ("Rating", "25 V")], Board::default());
    let part = board.part("C1").unwrap();
    assert!(part.technology.as_ref().unwrap().value == "x7r" && part.rating.is_some());
}

#[test]
fn the_board_file_wins_fact_by_fact() {
    let own = good("[[part]]\nref = \"C1\"\nesr = \"1 Ω\"\n");
    let (board, _) = with("C1", &[("ESR", "30 mΩ"), ("Voltage", "16V")], own);
    let part = board.part("C1").unwrap();
    assert_eq!(part.esr.as_ref().unwrap().place.shown(), "gauge.railworthy.toml:3");
    assert_eq!(part.rating.as_ref().unwrap().place.shown(), "field Voltage of C1");
}

#[test]
fn a_voltage_on_a_regulator_is_no_rating_and_no_supply() {
    let fields = [("Voltage", "3.3V"), ("Rating", "1A"), ("Supply voltage", "2 .. 12 V"), ("Power", "yes")];
    let (board, problems) = with("U1", &fields, Board::default());
    assert_eq!(problems, "");
    assert!(board.part("U1").is_none());
}

#[test]
fn other_parts_tell_their_load_supply_power_and_heat_sink() {
    let (board, _) = with("J1", &[("Supply_Voltage", "9 .. 15 V"), ("Load current", "0 .. 2 A")], Board::default());
    let part = board.part("J1").unwrap();
    assert!((part.supply_voltage.as_ref().unwrap().value.low() - 9.0).abs() < 1e-12);
    assert!((part.load_current.as_ref().unwrap().value.nominal() - 2.0).abs() < 1e-12);
    let (board, _) = with("R1", &[("Power", "1/4W")], Board::default());
    assert!((board.part("R1").unwrap().power.as_ref().unwrap().value.nominal() - 0.25).abs() < 1e-12);
    let (board, _) = with("U1", &[("Heatsink", "12 °C/W")], Board::default());
    assert!(board.part("U1").unwrap().heatsink.is_some());
}

#[test]
fn a_text_that_cannot_be_read_is_a_warning_and_an_empty_one_is_nothing() {
    let (board, problems) = with("C1", &[("ESR", "very low"), ("Tolerance", "~"), ("Voltage", "")], Board::default());
    assert!(board.part("C1").is_none());
    assert!(problems.starts_with("warning: the field ESR of C1 cannot be read: "), "{problems}");
    assert_eq!(problems.matches("warning").count(), 1);
}

#[test]
fn simulation_fields_carry_a_model() {
    let fields =
        [("Sim.Device", "PMOS"), ("Sim.Type", "MOS1"), ("Sim.Params", "vto=-2 kp=20u w=1m l=10u cgs=80p gamma=0.4")];
    let (board, problems) = with("Q1", &fields, Board::default());
    assert_eq!(problems, "");
    let model = &board.part("Q1").unwrap().model.as_ref().unwrap().value;
    assert_eq!(model.kind(), ModelKind::Pmos);
    assert!((model.get("KP").unwrap().nominal() - 2e-3).abs() < 1e-12, "KP times W/L");
    assert!((model.get("CGS").unwrap().nominal() - 80e-12).abs() < 1e-20);
    let (board, _) = with("D1", &[("Sim.Device", "D"), ("Sim.Params", "bv=5.1 ibv=1m")], Board::default());
    assert_eq!(board.part("D1").unwrap().model.as_ref().unwrap().value.kind(), ModelKind::Zener);
}

#[test]
fn a_simulation_field_of_another_kind_is_left_alone_and_a_wrong_number_is_told() {
    let other = [("Sim.Device", "V"), ("Sim.Params", "dc=12")];
    let (board, problems) = with("J1", &other, Board::default());
    assert!(board.parts.is_empty() && problems.is_empty());
    let (_, problems) = with("Q1", &[("Sim.Device", "PMOS"), ("Sim.Params", "kp=2M")], Board::default());
    assert!(problems.contains("`2M` is no number"), "{problems}");
}
