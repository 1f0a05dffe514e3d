//! The supply as a tree, on small boards that hold what is hard to draw.

use std::fs;

use unicode_width::UnicodeWidthStr;

use crate::program::run;
use crate::small_board::{Part, netlist};

/// Pins as number, name, type and net.
type Pins = Vec<(&'static str, &'static str, &'static str, &'static str)>;

fn part(
    reference: &'static str,
    value: &str,
    symbol: (&'static str, &'static str, &'static str),
    pins: Pins,
) -> Part {
    Part { reference, value: value.to_owned(), symbol, pins }
}

fn regulator(reference: &'static str, value: &str, input: &'static str, output: &'static str) -> Part {
    let symbol = ("Regulator_Linear", "LM1117MP-3.3", "Linear regulator, 3.3V fixed output");
    let pins =
        vec![("1", "GND", "power_in", "GND"), ("2", "VO", "power_out", output), ("3", "VI", "power_in", input)];
    part(reference, value, symbol, pins)
}

fn schottky(reference: &'static str, from: &'static str, to: &'static str) -> Part {
    let pins = vec![("1", "K", "passive", to), ("2", "A", "passive", from)];
    part(reference, "SS14", ("Device", "D_Schottky", "Schottky diode"), pins)
}

/// A bench supply: a winding, a bridge, a reservoir, and one rail.
fn rectified() -> Vec<Part> {
    let winding = vec![("1", "Pin_1", "passive", "AC1"), ("2", "Pin_2", "passive", "AC2")];
    let bridge = vec![
        ("1", "+", "passive", "VRAW"),
        ("2", "-", "passive", "GND"),
        ("3", "~", "passive", "AC1"),
        ("4", "~", "passive", "AC2"),
    ];
    vec![
        part("J1", "Winding", ("Connector", "Conn_01x02", "Generic connector"), winding),
        part("D1", "DF06M", ("Device", "D_Bridge_+-AA", "Diode bridge"), bridge),
        Part::two_ended("C1", "2200uF", ("VRAW", "GND")),
        regulator("U1", "LM1117MP-3.3", "VRAW", "+3V3"),
        Part::two_ended("C2", "10uF", ("+3V3", "GND")),
    ]
}

/// The tree of a board, up to its first regulator.
fn tree(parts: &[Part], board: &str) -> String {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("small.net"), netlist(parts)).unwrap();
    fs::write(folder.path().join("small.railworthy.toml"), board).unwrap();
    run(folder.path(), &["rails", "small.net"]).out.split("\n\n").nth(1).unwrap().to_owned()
}

const WINDING: &str = "[[supply]]\nbetween = [\"AC1\", \"AC2\"]\nac = \"5.5 .. 6.5 V\"\nfrequency = \"50 Hz\"\n\
                       [[load]]\nnet = \"+3V3\"\ncurrent = \"5 .. 100 mA\"\n";

#[test]
fn a_rectified_supply_is_told_with_its_rectifier() {
    insta::assert_snapshot!(tree(&rectified(), WINDING));
}

#[test]
fn a_net_with_several_feeds_is_drawn_once_with_all_that_feeds_it() {
    let parts = [
        schottky("D1", "+5V", "VSYS"),
        schottky("D2", "VBUS", "VSYS"),
        regulator("U1", "LM1117MP-3.3", "VSYS", "+3V3"),
    ];
    let supply = |net| format!("[[supply]]\nnet = \"{net}\"\nvoltage = \"4.75 .. 5.25 V\"\n");
    insta::assert_snapshot!(tree(&parts, &(supply("+5V") + &supply("VBUS"))));
}

#[test]
fn nets_in_a_circle_are_named_and_not_followed_forever() {
    let parts = [
        regulator("U1", "LM1117MP-3.3", "+5V_A", "+3V3_B"),
        regulator("U2", "LM1117MP-5.0", "+3V3_B", "+5V_A"),
        regulator("U3", "LM1117MP-1.8", "Net-(U3-VI)", "+1V8"),
    ];
    insta::assert_snapshot!(tree(&parts, ""));
}

#[test]
fn the_tree_of_a_long_chain_stays_on_the_page() {
    let nets: Vec<&'static str> = (1..=30).map(|at| format!("LONG_NAME_OF_A_RAIL_{at}").leak() as &str).collect();
    let names: Vec<&'static str> = (1..30).map(|at| format!("D{at}").leak() as &str).collect();
    let parts: Vec<Part> = nets.windows(2).zip(&names).map(|(pair, name)| schottky(name, pair[0], pair[1])).collect();
    let board = format!("[[supply]]\nnet = \"{}\"\nvoltage = \"40 .. 50 V\"\n", nets[0]);
    let text = tree(&parts, &board);
    for net in &nets {
        assert!(text.split_whitespace().any(|word| word == *net), "{net} is missing in\n{text}");
    }
    assert!(text.contains("continued below"), "{text}");
    for line in text.lines() {
        assert!(line.width() <= 100, "{line}");
    }
}
