//! Headroom, ratings and protection of a part that the board file declares in place, so that all is fact but what is said.

use railworthy::checks::Verdict::{Doubtful, Fails, Holds, Tight};

use super::Sweep;
use crate::small_board::Part;

/// A series part between VIN and OUT with capacitors on both.
pub(super) fn board(more: Vec<Part>) -> Vec<Part> {
    let symbol = ("Regulator_Linear", "QZ1", "Linear regulator");
    let pins =
        vec![("1", "IN", "power_in", "VIN"), ("2", "GND", "power_in", "GND"), ("3", "OUT", "power_out", "OUT")];
    let part = Part { reference: "U1", value: "QZ1".to_owned(), symbol, pins };
    let input = Part::two_ended("C1", "10uF", ("VIN", "GND"));
    let mut parts = vec![part, input, Part::two_ended("C2", "22uF", ("OUT", "GND"))];
    parts.extend(more);
    parts
}

/// What is declared of it: 5 V, 1 V of dropout, 1 A, 20 V at most; and more.
pub(super) fn declared(rest: &str) -> String {
    declared_with("output_voltage = \"5 V\"\n", rest)
}

fn declared_with(part: &str, rest: &str) -> String {
    format!(
        "[board]\nambient = \"40 °C\"\n\
         [[part]]\nref = \"U1\"\nkind = \"series\"\n\
         pins = {{ 1 = \"input\", 2 = \"ground\", 3 = \"output\" }}\n\
         dropout = \"1 / 1 V at 1 A\"\nrated_current = \"1 A\"\ninput_max = \"20 V\"\n{part}\n{rest}"
    )
}

#[test]
fn a_part_drops_out_below_output_and_dropout_together() {
    // V_in = V_out + V_dropout = 5 V + 1 V.
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"@ V\"\n[[load]]\nnet = \"OUT\"\ncurrent = \"1 A\"\n";
    Sweep::new(&board(Vec::new()), &declared(rest), "headroom", "U1").turns(Fails, &[(6.0, Holds)]);
}

#[test]
fn a_part_is_doubtful_below_the_least_input_of_its_sheet_though_its_dropout_is_small() {
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"@ V\"\n[[load]]\nnet = \"OUT\"\ncurrent = \"1 A\"\n";
    let declared = declared_with("output_voltage = \"1.2 V\"\ninput_min = \"2.7 V\"\n", rest);
    // 1.2 V + 1 V of dropout, then 2.7 V.
    let edges = [(2.2, Doubtful), (2.7, Holds)];
    Sweep::new(&board(Vec::new()), &declared, "headroom", "U1").turns(Fails, &edges);
}

#[test]
fn behind_a_diode_the_guess_at_its_drop_makes_the_verdict_milder_step_by_step() {
    // At 1 A a silicon diode is taken to drop 0.85 V (0.75 to 1.3 times that), and certainly nothing less than 0 V.
    let drop = 0.85;
    let diode = Part {
        reference: "D1",
        value: "1N5400".to_owned(),
        symbol: ("Device", "D", "Diode"),
        pins: vec![("1", "K", "passive", "VIN"), ("2", "A", "passive", "RAW")],
    };
    let rest = "[[supply]]\nnet = \"RAW\"\nvoltage = \"@ V\"\n[[load]]\nnet = \"OUT\"\ncurrent = \"1 A\"\n";
    let edges = [(6.0, Doubtful), (6.0 + drop, Tight), (6.0 + 1.3 * drop, Holds)];
    Sweep::new(&board(vec![diode]), &declared(rest), "headroom", "U1").turns(Fails, &edges);
}

#[test]
fn a_rail_that_may_sag_is_followed_where_nine_tenths_of_the_nominal_input_are_too_little() {
    // 0.9 (x + 20 V) / 2 = 10 V + 1 V.
    let edge = 2.0 * 11.0 / 0.9 - 20.0;
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"@ .. 20 V\"\n[[load]]\nnet = \"OUT\"\ncurrent = \"1 A\"\n\
                [[rail]]\nnet = \"OUT\"\nvoltage = \"1 .. 10.2 V\"\nmay_sag = true\n";
    let declared = declared_with("output_voltage = \"10 V\"\n", rest);
    Sweep::new(&board(Vec::new()), &declared, "line-hold", "U1").turns(Fails, &[(edge, Holds)]);
}

#[test]
fn the_input_fails_above_its_absolute_maximum() {
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"@ V\"\n";
    Sweep::new(&board(Vec::new()), &declared(rest), "input-rating", "U1").turns(Holds, &[(20.0, Fails)]);
}

#[test]
fn the_difference_fails_above_its_absolute_maximum_over_the_output() {
    // 5 V + 12 V.
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"@ V\"\n";
    let declared = declared_with("output_voltage = \"5 V\"\ndifference_max = \"12 V\"\n", rest);
    Sweep::new(&board(Vec::new()), &declared, "input-rating", "U1").turns(Holds, &[(17.0, Fails)]);
}

/// The inductance at which a step of 12 V overshoots to 20 V with 10 µF and 0.1 Ω: the overshoot of a second-order
/// system, exp(−π ζ / √(1 − ζ²)), gives ζ, and L = C (R / 2 ζ)².
fn ringing() -> f64 {
    let logarithm = -(20.0_f64 / 12.0 - 1.0).ln();
    let damping = logarithm / (std::f64::consts::PI.powi(2) + logarithm * logarithm).sqrt();
    10e-6 * (0.1 / (2.0 * damping)).powi(2)
}

/// The input capacitor as a ceramic of just this capacitance and resistance.
const CERAMIC: &str = "[[part]]\nref = \"C1\"\ntechnology = \"X7R\"\nesr = \"10 .. 10 mΩ\"\n\
                       effective_capacitance = \"10 uF\"\n";

#[test]
fn a_lead_rings_past_the_rating_from_some_length_on() {
    // Leads are taken for 0.8 µH/m, at most 1.2 µH/m.
    let rest = format!(
        "{CERAMIC}[[supply]]\nnet = \"VIN\"\nvoltage = \"12 V\"\nresistance = \"90 mΩ\"\nhot_plug = true\n\
         lead_length = \"@ m\"\n[[load]]\nnet = \"OUT\"\ncurrent = \"0 A\"\n"
    );
    let edges = [(ringing() / 1.2e-6, Tight), (ringing() / 0.8e-6, Doubtful)];
    Sweep::new(&board(Vec::new()), &declared(&rest), "hot-plug", "U1").turns(Holds, &edges);
}

#[test]
fn an_inductor_ahead_of_ceramics_rings_past_the_rating_from_some_inductance_on() {
    let rest = format!(
        "{CERAMIC}[[part]]\nref = \"L1\"\nresistance = \"90 mΩ\"\n[[supply]]\nnet = \"RAW\"\nvoltage = \"12 V\"\n\
         [[load]]\nnet = \"OUT\"\ncurrent = \"0 A\"\n"
    );
    let inductor = Part::two_ended("L1", "@uH", ("RAW", "VIN"));
    let edges = [(ringing() * 1e6, Doubtful)];
    Sweep::new(&board(vec![inductor]), &declared(&rest), "input-filter", "U1").turns(Holds, &edges);
}

#[test]
fn a_charged_output_harms_above_the_capacitance_of_the_sheet() {
    let rest = "[[supply]]\nnet = \"VIN\"\nvoltage = \"16 V\"\nmay_short = true\n";
    let part = "output_voltage = \"12 V\"\ndiode_above_output = \"7 V\"\ndiode_above_capacitance = \"100 uF\"\n";
    let mut parts = board(Vec::new());
    parts[2] = Part::two_ended("C2", "@uF", ("OUT", "GND"));
    Sweep::new(&parts, &declared_with(part, rest), "precharged-output", "U1").turns(Holds, &[(100.0, Fails)]);
}

#[test]
fn a_divider_at_the_enable_input_switches_on_from_its_threshold_up() {
    // TI LP5907 data sheet SNVS798: on from 1.2 V. 5 V R / (100 kΩ + R); resistors are taken to 1 %, at worst to 5 %.
    let symbol = ("Regulator_Linear", "LP5907MFX-3.3", "Low dropout regulator, fixed output 3.3V, SOT-23-5");
    let pins = vec![
        ("1", "IN", "power_in", "VIN"),
        ("2", "GND", "power_in", "GND"),
        ("3", "EN", "input", "EN"),
        ("5", "OUT", "power_out", "+3V3"),
    ];
    let parts = vec![
        Part { reference: "U1", value: "LP5907MFX-3.3".to_owned(), symbol, pins },
        Part::two_ended("C1", "1uF", ("VIN", "GND")),
        Part::two_ended("C2", "1uF", ("+3V3", "GND")),
        Part::two_ended("R1", "100k", ("VIN", "EN")),
        Part::two_ended("R2", "@k", ("EN", "GND")),
    ];
    let edge = 100.0 * 1.2 / (5.0 - 1.2);
    let edges = [(edge * 0.95 / 1.05, Doubtful), (edge, Tight), (edge * 1.01 / 0.99, Holds)];
    let supply = "[[supply]]\nnet = \"VIN\"\nvoltage = \"5 V\"\n";
    Sweep::new(&parts, supply, "enable-level", "U1").turns(Fails, &edges);
}
