//! Capacitors: rating, polarity, bypass pin.

use railworthy::checks::Verdict::{Doubtful, Fails, Holds, Tight};

use super::Sweep;
use crate::small_board::Part;

/// A 5 V part on a supply, with the given input capacitor.
fn five_volts(input: Part) -> Vec<Part> {
    let pins =
        vec![("1", "IN", "power_in", "VIN"), ("2", "GND", "power_in", "GND"), ("3", "OUT", "power_out", "+5V")];
    let symbol = ("Regulator_Linear", "L7805", "Positive linear regulator, fixed output 5V");
    let part = Part { reference: "U1", value: "L7805".to_owned(), symbol, pins };
    vec![part, input, Part::two_ended("C2", "100nF", ("+5V", "GND"))]
}

fn polarized(nets: (&'static str, &'static str)) -> Part {
    let symbol = ("Device", "C_Polarized", "Polarized capacitor");
    let pins = vec![("1", "~", "passive", nets.0), ("2", "~", "passive", nets.1)];
    Part { reference: "C1", value: "47uF".to_owned(), symbol, pins }
}

const SUPPLY: &str = "[[supply]]\nnet = \"VIN\"\nvoltage = \"@ V\"\n";

#[test]
fn a_tantalum_on_a_supply_is_doubtful_above_half_its_rating_and_fails_above_all_of_it() {
    // Half of the rating up to 85 °C (KEMET questions and answers), 10 % of it left to the tolerance of the rail.
    let rating = 20.0;
    let board = format!("{SUPPLY}[[part]]\nref = \"C1\"\ntechnology = \"tantalum\"\nrating = \"{rating} V\"\n");
    let sweep = Sweep::new(&five_volts(polarized(("VIN", "GND"))), &board, "capacitor-rating", "C1");
    sweep.turns(Holds, &[(0.5 * 1.1 * rating, Doubtful), (rating, Fails)]);
}

#[test]
fn an_electrolytic_is_noted_above_four_fifths_of_its_rating_and_fails_above_all_of_it() {
    // Four fifths of the rating is common practice, 10 % of it left to the tolerance of the rail.
    let rating = 25.0;
    let board = format!("{SUPPLY}[[part]]\nref = \"C1\"\ntechnology = \"electrolytic\"\nrating = \"{rating} V\"\n");
    let sweep = Sweep::new(&five_volts(polarized(("VIN", "GND"))), &board, "capacitor-rating", "C1");
    sweep.turns(Holds, &[(0.8 * 1.1 * rating, Tight), (rating, Fails)]);
}

#[test]
fn a_polarized_capacitor_fails_while_its_positive_end_lies_below_the_other() {
    // The part stands on a net of 10 V and its input capacitor between that and the swept supply: 0 V across it decides.
    let standing = 10.0;
    let on_middle = |pin: (&'static str, &'static str, &'static str, &'static str)| {
        if pin.3 == "GND" { (pin.0, pin.1, pin.2, "MID") } else { pin }
    };
    let raised = |part: Part| Part { pins: part.pins.into_iter().map(on_middle).collect(), ..part };
    let parts: Vec<Part> = five_volts(polarized(("VIN", "GND"))).into_iter().map(raised).collect();
    let board = format!("{SUPPLY}[[supply]]\nnet = \"MID\"\nvoltage = \"{standing} V\"\n");
    Sweep::new(&parts, &board, "capacitor-polarity", "C1").turns(Fails, &[(standing, Holds)]);
}

/// A 3.3 V part whose noise pin has the swept capacitance in microfarads.
fn quiet(value: &str, pin: &'static str) -> Vec<Part> {
    let symbol = ("Regulator_Linear", "Quiet", "Low noise linear regulator, fixed output 3.3V");
    let pins = vec![
        ("1", "IN", "power_in", "VIN"),
        ("2", "GND", "power_in", "GND"),
        ("3", "EN", "input", "VIN"),
        ("4", pin, "input", "NOISE"),
        ("5", "OUT", "power_out", "+3V3"),
    ];
    let part = Part { reference: "U1", value: value.to_owned(), symbol, pins };
    vec![part, Part::two_ended("C1", "@uF", ("NOISE", "GND")), Part::two_ended("C2", "10uF", ("+3V3", "GND"))]
}

const FIVE_VOLTS: &str = "[[supply]]\nnet = \"VIN\"\nvoltage = \"5 V\"\n";

#[test]
fn a_noise_capacitor_is_noted_below_its_minimum_and_fails_above_its_maximum() {
    // 1 nF to 0.1 uF at the noise pin (TI TPS793 data sheet); a marked value may be a fifth below the minimum.
    let sweep = Sweep::new(&quiet("TPS79333", "NR"), FIVE_VOLTS, "bypass-capacitor", "U1");
    sweep.turns(Tight, &[(0.001 / 1.2, Holds), (0.1, Fails)]);
}
