//! Heat, currents and capacitors of a part that the board file declares in place.

use railworthy::checks::Verdict::{Doubtful, Fails, Holds, Tight};

use super::Sweep;
use super::supply::{board, declared};
use crate::small_board::Part;

#[test]
fn a_junction_fails_where_ambient_and_heat_reach_its_limit() {
    // T = T_ambient + (V_in − V_out) I θ (Microchip MCP1700 data sheet): 125 °C = 40 °C + (V − 5 V) 0.2 A 50 K/W.
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"@ V\"\n\
                [[load]]\nnet = \"OUT\"\ncurrent = \"0.5 A\"\ncontinuous = \"0.2 A\"\n";
    let rest = format!("junction_max = \"125 °C\"\njunction_to_ambient = \"50 °C/W\"\n{rest}");
    Sweep::new(&board(Vec::new()), &declared(&rest), "dissipation", "U1").turns(Holds, &[(13.5, Fails)]);
}

#[test]
fn behind_a_heat_sink_what_lies_between_is_a_guess() {
    // 3 K/W of sink and a guess of 2 to 7 K/W, nominal 5 K/W, at least nothing, up to it.
    let heat = |resistance: f64| 5.0 + (125.0 - 40.0) / resistance;
    let rest = "junction_max = \"125 °C\"\nheatsink = \"3 °C/W\"\n[[supply]]\nnet = \"VIN\"\nvoltage = \"@ V\"\n\
                [[load]]\nnet = \"OUT\"\ncurrent = \"1 A\"\ncontinuous = \"1 A\"\n";
    let edges = [(heat(3.0 + 7.0), Tight), (heat(3.0 + 5.0), Doubtful), (heat(3.0), Fails)];
    Sweep::new(&board(Vec::new()), &declared(rest), "dissipation", "U1").turns(Holds, &edges);
}

#[test]
fn a_load_fails_above_the_rating() {
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"8 V\"\n[[load]]\nnet = \"OUT\"\ncurrent = \"@ A\"\n";
    Sweep::new(&board(Vec::new()), &declared(rest), "current-rating", "U1").turns(Holds, &[(1.0, Fails)]);
}

#[test]
fn a_constant_load_is_not_lifted_above_the_short_circuit_current() {
    // A straight foldback starts only while I_load < I_short.
    let rest = "short_circuit_current = \"0.3 A\"\n[[supply]]\nnet = \"VIN\"\nvoltage = \"8 V\"\n\
                [[load]]\nnet = \"OUT\"\ncurrent = \"@ A\"\nkind = \"constant\"\n";
    Sweep::new(&board(Vec::new()), &declared(rest), "foldback-start", "U1").turns(Holds, &[(0.3, Fails)]);
}

#[test]
fn a_resistor_from_a_higher_rail_brings_in_more_than_the_load_takes_below_some_value() {
    // (24 V − 5 V) / R = 10 mA; resistors are taken to 1 %, at worst to 5 %.
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"8 V\"\n[[supply]]\nnet = \"HIGH\"\nvoltage = \"24 V\"\n\
                [[load]]\nnet = \"OUT\"\ncurrent = \"10 mA\"\n";
    let edges = [(1.9 / 1.05, Doubtful), (1.9, Tight), (1.9 / 0.99, Holds)];
    let resistor = Part::two_ended("R1", "@k", ("HIGH", "OUT"));
    Sweep::new(&board(vec![resistor]), &declared(rest), "back-feed", "U1").turns(Fails, &edges);
}

#[test]
fn an_output_capacitor_fails_below_a_minimum_that_the_sheet_calls_effective() {
    let rest = "minimum_output_capacitance = \"10 uF\"\nminimum_basis = \"effective\"\n\
                [[supply]]\nnet = \"VIN\"\nvoltage = \"8 V\"\n\
                [[part]]\nref = \"C2\"\neffective_capacitance = \"@ uF\"\n";
    Sweep::new(&board(Vec::new()), &declared(rest), "output-capacitor", "U1").turns(Fails, &[(10.0, Holds)]);
}

#[test]
fn an_input_capacitor_breaks_below_its_minimum_less_what_a_value_may_exceed_it() {
    // A part may have a fifth more than its value says.
    let rest = "minimum_input_capacitance = \"10 uF\"\n[[supply]]\nnet = \"VIN\"\nvoltage = \"8 V\"\n";
    let mut parts = board(Vec::new());
    parts[1] = Part::two_ended("C1", "@uF", ("VIN", "GND"));
    Sweep::new(&parts, &declared(rest), "input-capacitor", "U1").turns(Fails, &[(10.0 / 1.2, Holds)]);
}

#[test]
fn an_esr_fails_on_both_sides_of_the_window() {
    let rest = "esr_window = \"0.1 .. 1 ohm\"\n[[supply]]\nnet = \"VIN\"\nvoltage = \"8 V\"\n\
                [[part]]\nref = \"C2\"\ntechnology = \"film\"\nesr = \"@ .. @ ohm\"\n";
    let sweep = Sweep::new(&board(Vec::new()), &declared(rest), "esr-window", "U1");
    sweep.turns(Fails, &[(0.1, Holds), (1.0, Fails)]);
}

#[test]
fn a_shunt_reference_starves_above_some_series_resistance() {
    // R = (V_supply − V_reference) / I_min (Boylestad type; TI LM4040 data sheet): 2.5 V / 0.1 mA; resistors to 1 %, at
    // worst to 5 %.
    let symbol = ("Reference_Voltage", "LM4040DBZ-2.5", "Shunt voltage reference 2.5V");
    let pins = vec![("1", "K", "passive", "REF"), ("2", "A", "passive", "GND")];
    let shunt = Part { reference: "D1", value: "LM4040DBZ-2.5".to_owned(), symbol, pins };
    let parts = vec![shunt, Part::two_ended("R1", "@k", ("VIN", "REF"))];
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"5 V\"\n\
                 [[part]]\nref = \"D1\"\noutput_voltage = \"2.5 V\"\nbias_min = \"0.1 mA\"\n";
    let edges = [(25.0 / 1.01, Tight), (25.0, Doubtful), (25.0 / 0.95, Fails)];
    Sweep::new(&parts, board, "reference-bias", "D1").turns(Holds, &edges);
}

#[test]
fn a_divider_sets_the_rail_inside_its_declared_range_between_two_values() {
    // V = V_ref (1 + R2 / R1) with 1.25 V and 1 kΩ: 4.75 V at 2.8 kΩ, 5.25 V at 3.2 kΩ.
    let symbol = ("Regulator_Linear", "LM317_TO-220", "Adjustable positive regulator");
    let pins = vec![("1", "ADJ", "input", "ADJ"), ("2", "VO", "power_out", "OUT"), ("3", "VI", "power_in", "VIN")];
    let part = Part { reference: "U1", value: "LM317".to_owned(), symbol, pins };
    let parts = vec![
        part,
        Part::two_ended("C1", "1uF", ("VIN", "GND")),
        Part::two_ended("R1", "1k", ("OUT", "ADJ")),
        Part::two_ended("R2", "@k", ("ADJ", "GND")),
    ];
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"9 V\"\n[[rail]]\nnet = \"OUT\"\nvoltage = \"4.75 .. 5.25 V\"\n\
                 [[part]]\nref = \"U1\"\nreference = \"1.25 V\"\nadjust_current = \"0 A\"\n\
                 [[part]]\nref = \"R1\"\ntolerance = \"±0.01 %\"\n[[part]]\nref = \"R2\"\ntolerance = \"±0.01 %\"\n";
    Sweep::new(&parts, board, "set-point", "U1").turns(Fails, &[(2.8, Holds), (3.2, Fails)]);
}
