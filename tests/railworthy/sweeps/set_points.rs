//! Adjustable parts: the wiring of their feedback, their least load, outputs that are joined.

use railworthy::checks::Verdict::{Doubtful, Fails, Holds};

use super::Sweep;
use crate::small_board::Part;

/// An LM317 with its divider, each resistor exact.
fn adjustable(upper: &str, lower: &str) -> (Vec<Part>, String) {
    let symbol = ("Regulator_Linear", "LM317_TO-220", "Adjustable positive regulator");
    let pins = vec![("1", "ADJ", "input", "ADJ"), ("2", "VO", "power_out", "OUT"), ("3", "VI", "power_in", "VIN")];
    let parts = vec![
        Part { reference: "U1", value: "LM317".to_owned(), symbol, pins },
        Part::two_ended("R1", upper, ("OUT", "ADJ")),
        Part::two_ended("R2", lower, ("ADJ", "GND")),
        Part::two_ended("C1", "1uF", ("VIN", "GND")),
    ];
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"15 V\"\n\
                 [[part]]\nref = \"R1\"\ntolerance = \"0 %\"\n[[part]]\nref = \"R2\"\ntolerance = \"0 %\"\n";
    (parts, board.to_owned())
}

#[test]
fn a_divider_is_called_upside_down_where_the_exchanged_pair_gives_what_is_meant() {
    // 1.25 V (1 + R2 / R1): 260 over 250 ohm gives 2.55 V, exchanged 2.452 V. A rail declared within 5 % of the exchanged
    // value, and not within 5 % of the set point, tells of it.
    let (parts, board) = adjustable("250", "260");
    let board = format!(
        "{board}[[rail]]\nnet = \"OUT\"\nvoltage = \"@ V\"\n\
         [[part]]\nref = \"U1\"\nreference = \"1.25 V\"\nadjust_current = \"0 A\"\n"
    );
    let (set, exchanged) = (1.25 * (1.0 + 260.0 / 250.0), 1.25 * (1.0 + 250.0 / 260.0));
    let sweep = Sweep::new(&parts, &board, "feedback-wiring", "U1");
    sweep.turns(Holds, &[(exchanged / 1.05, Fails), (set / 1.05, Holds)]);
}

#[test]
fn too_little_load_fails_below_what_a_typical_part_needs_and_is_doubtful_below_what_some_need() {
    // 1.25 V / R1 through the divider, 3.5 mA typical and 10 mA at most (TI LM317 data sheet).
    let (parts, board) = adjustable("@", "720");
    let board = format!(
        "{board}[[load]]\nnet = \"OUT\"\ncurrent = \"0 .. 100 mA\"\n\
         [[part]]\nref = \"U1\"\nreference = \"1.25 V\"\nminimum_load = \"3.5 .. 10 mA\"\n"
    );
    let sweep = Sweep::new(&parts, &board, "minimum-load", "U1");
    sweep.turns(Holds, &[(1.25 / 10e-3, Doubtful), (1.25 / 3.5e-3, Fails)]);
}

#[test]
fn the_adjust_current_may_shift_the_output_by_a_twentieth() {
    // Iadj R2 / (Vref (1 + R2 / R1) + Ityp R2) with R1 = 1 kohm, 100 uA at most and typically (TI LM317 data sheet):
    // a twentieth of the output at R2 = 0.05 Vref / (Iadj 0.95 - 0.05 Vref / R1).
    let (parts, board) = adjustable("1k", "@");
    let board = format!(
        "{board}[[part]]\nref = \"U1\"\nreference = \"1.25 V\"\nadjust_current = \"100 uA\"\nminimum_load = \"0 A\"\n"
    );
    let edge = 0.05 * 1.25 / (100e-6 * 0.95 - 0.05 * 1.25 / 1000.0);
    Sweep::new(&parts, &board, "divider-current", "U1").turns(Holds, &[(edge, Doubtful)]);
}

#[test]
fn joined_outputs_fail_once_their_set_points_lie_a_twentieth_apart() {
    // |V1 - V2| / V2 against 5 %, V1 declared for one part and swept, V2 5 V exactly.
    let part = |reference: &'static str| {
        let symbol = ("Regulator_Linear", "L7805", "Positive linear regulator, fixed output 5V");
        let pins =
            vec![("1", "IN", "power_in", "VIN"), ("2", "GND", "power_in", "GND"), ("3", "OUT", "power_out", "+5V")];
        Part { reference, value: "L7805".to_owned(), symbol, pins }
    };
    let parts = [part("U1"), part("U2"), Part::two_ended("C1", "1uF", ("VIN", "GND"))];
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"12 V\"\n[[part]]\nref = \"U1\"\noutput_voltage = \"5 V\"\n\
                 [[part]]\nref = \"U2\"\noutput_voltage = \"@ V\"\n";
    // Below and above: |V - 5| / 5 = 5 % at 4.75 V, (V - 5) / V = 5 % at 5 V / 0.95.
    let sweep = Sweep::new(&parts, board, "outputs-tied", "+5V");
    sweep.turns(Fails, &[(4.75, Doubtful), (5.0 / 0.95, Fails)]);
}
