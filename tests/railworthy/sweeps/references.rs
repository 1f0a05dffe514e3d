//! Voltage references: the capacitance across a shunt, the load on a series one.

use railworthy::checks::Verdict::{Doubtful, Fails, Holds, Tight};

use super::Sweep;
use crate::small_board::Part;

#[test]
fn capacitance_across_a_shunt_is_doubtful_within_the_band_of_its_sheet() {
    // 10 nF to 3 uF (LM431 data sheet, stability boundary).
    let symbol = ("Reference_Voltage", "LM431", "Shunt regulator, adjustable");
    let pins = vec![("1", "REF", "passive", "VREF"), ("2", "A", "passive", "GND"), ("3", "K", "passive", "VREF")];
    let parts = [
        Part { reference: "U1", value: "LM431ACZ".to_owned(), symbol, pins },
        Part::two_ended("R1", "1k", ("VIN", "VREF")),
        Part::two_ended("C1", "@uF", ("VREF", "GND")),
    ];
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"5 V\"\n";
    Sweep::new(&parts, board, "reference-load", "U1").turns(Holds, &[(0.01, Doubtful), (3.0, Holds)]);
}

/// A 2.5 V reference with a resistor of the given value and exact 2.5 V.
fn loaded(board: &str) -> Sweep {
    let symbol = ("Reference_Voltage", "MCP1525", "2.5V voltage reference");
    let pins =
        vec![("1", "VIN", "power_in", "VIN"), ("2", "VOUT", "power_out", "VREF"), ("3", "VSS", "power_in", "GND")];
    let parts = [
        Part { reference: "U1", value: "MCP1525T-I/TT".to_owned(), symbol, pins },
        Part::two_ended("R1", "@", ("VREF", "GND")),
        Part::two_ended("C1", "2.2uF", ("VREF", "GND")),
    ];
    Sweep::new(&parts, board, "current-rating", "U1")
}

#[test]
fn a_resistor_that_takes_more_than_a_reference_gives_fails() {
    // V / R against 2 mA (Microchip MCP1525 data sheet).
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"5 V\"\n\
                 [[part]]\nref = \"U1\"\noutput_voltage = \"2.5 V\"\n[[part]]\nref = \"R1\"\ntolerance = \"0 %\"\n";
    loaded(board).turns(Fails, &[(2.5 / 2e-3, Holds)]);
}

#[test]
fn a_resistor_of_unknown_tolerance_is_tight_then_doubtful_before_it_fails() {
    // Where no tolerance is told, 1 % is taken and 5 % is the limit: V / R passes 2 mA at the far end of the guess, then at
    // nominal, then whatever it is.
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"5 V\"\n[[part]]\nref = \"U1\"\noutput_voltage = \"2.5 V\"\n";
    let edge = 2.5 / 2e-3;
    loaded(board).turns(Fails, &[(edge / 1.05, Doubtful), (edge, Tight), (edge / 0.99, Holds)]);
}
