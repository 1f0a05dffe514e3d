//! Published worked figures, reproduced through the whole tool: the source stands beside each.

use railworthy::board::{Board, Options};
use railworthy::facts::{Facts, Subject};
use railworthy::quantity::{Dimension, Evidence, Grade, Quantity, Range, Slope};
use railworthy::recognize::RegulatorId;
use railworthy::source::Source;

use crate::judge::{Rules, TODAY};
use crate::small_board::{Part, netlist};

/// Figures of the only regulator of a board.
pub(crate) fn figures<const N: usize>(parts: &[Part], board: &str, names: [&str; N]) -> [Quantity; N] {
    let rules = Rules::built_in();
    let (board, problems) = Board::read(&Source::new("small.railworthy.toml", board), Options::default());
    assert!(problems.is_empty(), "{problems:?}");
    let text = netlist(parts);
    let found =
        railworthy::review::examine("small.net", text.as_bytes(), board, &rules.knowledge, &rules.checks, TODAY);
    let found = found.unwrap();
    assert!(found.problems.is_empty(), "{:?}", found.problems);
    assert_eq!(found.design.regulators.len(), 1);
    let facts = Facts::new(&found.design, &found.board, &rules.knowledge);
    names.map(|name| facts.figure(Subject::Regulator(RegulatorId::first()), name).unwrap())
}

/// One of them.
fn figure(parts: &[Part], board: &str, name: &str) -> Quantity {
    let [figure] = figures(parts, board, [name]);
    figure
}

pub(crate) fn close(value: f64, published: f64, relative: f64) {
    assert!((value / published - 1.0).abs() <= relative, "{value} against {published}");
}

fn three_pin_adjustable(upper: &str, lower: &str) -> Vec<Part> {
    vec![
        Part {
            reference: "U1",
            value: "LM317".to_owned(),
            symbol: ("Regulator_Linear", "LM317_TO-220", "Adjustable positive regulator"),
            pins: vec![("1", "ADJ", "input", "ADJ"), ("2", "VO", "power_out", "OUT"), ("3", "VI", "power_in", "IN")],
        },
        Part::two_ended("R1", upper, ("OUT", "ADJ")),
        Part::two_ended("R2", lower, ("ADJ", "GND")),
    ]
}

fn feedback_part(upper: &str, lower: &str) -> Vec<Part> {
    vec![
        Part {
            reference: "U1",
            value: "TPS7A2501".to_owned(),
            symbol: ("Regulator_Linear", "TPS7A2501", "Adjustable low dropout regulator"),
            pins: vec![
                ("1", "OUT", "power_out", "OUT"),
                ("2", "FB", "input", "FB"),
                ("3", "GND", "power_in", "GND"),
                ("4", "IN", "power_in", "IN"),
            ],
        },
        Part::two_ended("R1", upper, ("OUT", "FB")),
        Part::two_ended("R2", lower, ("FB", "GND")),
    ]
}

/// 1.25 V and no adjust current, as the textbooks take it.
const IDEAL: &str = "[[part]]\nref = \"U1\"\nreference = \"1.25 V\"\nadjust_current = \"0 A\"\n";

#[test]
fn an_adjustable_part_with_240_and_1200_ohm_gives_7_5_volt() {
    // SUP-05: R. L. Boylestad, Electronic Devices and Circuit Theory, adjustable regulator example: 7.5 V.
    let set_point = figure(&three_pin_adjustable("240", "1.2k"), IDEAL, "set_point");
    close(set_point.nominal().unwrap(), 7.5, 1e-9);
}

#[test]
fn an_adjustable_part_with_2_and_22_kiloohm_gives_15_volt() {
    // SUP-06: A. Malvino, D. Bates, Electronic Principles, 7th edition, example 24-13: 15 V.
    let set_point = figure(&three_pin_adjustable("2k", "22k"), IDEAL, "set_point");
    close(set_point.nominal().unwrap(), 15.0, 1e-9);
}

#[test]
fn a_feedback_part_with_3_6_and_1_18_megaohm_gives_5_023_volt() {
    // SUP-07: TI TPS7A25 data sheet, design example, feedback voltage 1.24 V: 5.023 V.
    let board = "[[part]]\nref = \"U1\"\nreference = \"1.24 V\"\n";
    let set_point = figure(&feedback_part("3.6M", "1.18M"), board, "set_point");
    close(set_point.nominal().unwrap(), 5.023, 2e-5);
}

#[test]
fn the_feedback_divider_of_a_converter_gives_the_voltage_of_its_rail() {
    // The formula of SUP-07; 0.8 V of feedback and 52.3k over 10k make 4.984 V.
    let mut parts = vec![Part {
        reference: "U1",
        value: "MP1584EN".to_owned(),
        symbol: ("Regulator_Switching", "MP1584EN", "Step-down converter, adjustable"),
        pins: vec![
            ("1", "SW", "output", "SWITCH"),
            ("2", "EN", "input", "IN"),
            ("4", "FB", "input", "FB"),
            ("5", "GND", "power_in", "GND"),
            ("7", "VIN", "power_in", "IN"),
        ],
    }];
    parts.push(Part::two_ended("L1", "10uH", ("SWITCH", "MAIN")));
    parts.push(Part::two_ended("R1", "52.3k", ("MAIN", "FB")));
    parts.push(Part::two_ended("R2", "10k", ("FB", "GND")));
    close(figure(&parts, "", "set_point").nominal().unwrap(), 0.8 * (1.0 + 52.3 / 10.0), 1e-9);
}

/// A low-dropout part with one output capacitor of a declared ESR.
fn one_capacitor(value: &str, esr: &str) -> (Vec<Part>, String) {
    let parts = vec![
        Part {
            reference: "U1",
            value: "LP2950-5.0".to_owned(),
            symbol: ("Regulator_Linear", "LP2950-5.0", "Low dropout regulator, 5 V"),
            pins: vec![
                ("1", "VO", "power_out", "OUT"),
                ("2", "GND", "power_in", "GND"),
                ("3", "VI", "power_in", "IN"),
            ],
        },
        Part::two_ended("C1", value, ("OUT", "GND")),
    ];
    let board = format!(
        "[[part]]\nref = \"C1\"\ntechnology = \"film\"\ntolerance = \"±0 %\"\nesr = \"{esr} .. {esr}\"\neffective_capacitance = \"{value}F\"\n"
    );
    (parts, board)
}

#[test]
fn the_zero_of_an_esr_lies_where_published_sheets_put_it() {
    // CAP-02: TI LP2950-N data sheet, 2.2 uF with 5 ohm: 14.5 kHz.
    let (parts, board) = one_capacitor("2.2u", "5 ohm");
    close(figure(&parts, &board, "esr_zero").nominal().unwrap(), 14_500.0, 0.0025);
    // CAP-03b: National Semiconductor AN-1148, 10 uF with 50 mohm: 318 kHz (recalled, and printed so in the LP2950-N
    // sheet beside 2.2 uF, where it is wrong).
    let (parts, board) = one_capacitor("10u", "0.05 ohm");
    close(figure(&parts, &board, "esr_zero").nominal().unwrap(), 318_000.0, 0.002);
    // CAP-08: A. Pressman, Switching Power Supply Design, 3rd edition: ESR times C of 65 us makes a zero near 2.5 kHz.
    let (parts, board) = one_capacitor("100u", "0.65 ohm");
    close(figure(&parts, &board, "esr_zero").nominal().unwrap(), 2_500.0, 0.021);
}

pub(crate) fn fact(dimension: Dimension, range: Range, what: &str) -> Quantity {
    Quantity::fact(dimension, range, Evidence::new(Grade::Declared, what, "worked example"))
}

#[test]
fn what_is_left_of_a_ceramic_is_taken_off_factor_by_factor() {
    // CAP-01: Analog Devices ADP1649 data sheet, effective capacitance: 3 uF under bias, 15 % over temperature, 10 %
    // tolerance: 2.3 uF (2.295).
    let biased = fact(Dimension::CAPACITANCE, Range::exactly(3e-6), "capacitance under bias");
    let cold = fact(Dimension::ONE, Range::clamped(0.85, 1.0, 1.15), "temperature");
    let tolerance = fact(Dimension::ONE, Range::with_tolerance(1.0, 0.10), "tolerance");
    let left = biased.times(&cold).times(&tolerance);
    close(left.worst().low(), 2.3e-6, 0.0023);
}

#[test]
fn the_corner_of_a_bypassed_divider_is_where_the_sheet_puts_it() {
    // CAP-06: TI LM1117 data sheet: 1 / (2 pi f C) below R1 of 124 ohm at 120 Hz asks for more than 10.7 uF.
    let ohms = fact(Dimension::RESISTANCE, Range::exactly(124.0), "R1");
    let hertz = fact(Dimension::FREQUENCY, Range::exactly(120.0), "ripple");
    let least = ohms.times(&hertz).scaled(std::f64::consts::TAU).reciprocal();
    assert_eq!(least.dimension(), Dimension::CAPACITANCE);
    close(least.nominal().unwrap(), 1.07e-5, 0.0005);
}

#[test]
fn a_ceramic_whose_capacitance_falls_with_its_charge_fills_sooner() {
    // CAP-09: public measurement (2crabs, MLCC-Experiment): C = 22 uF - 2.33 uF/V, charged through 1 kohm from 5 V to
    // 4.511 V in 36.69 ms; the integral of R C(v) / (V - v) gives 34.57 ms, 5.8 % less.
    let steps = 20_000;
    let (supply, end, ohms) = (5.0, 4.511, 1e3);
    let width = end / f64::from(steps);
    let charge: f64 = (0..steps)
        .map(|step| {
            let volts = (f64::from(step) + 0.5) * width;
            let capacitance = fact(Dimension::CAPACITANCE, Range::exactly(22e-6 - 2.33e-6 * volts), "capacitance");
            capacitance.scaled(ohms / (supply - volts) * width).nominal().unwrap()
        })
        .sum();
    close(charge, 0.036_69, 0.0578);
    close(charge, 0.034_572_6, 1e-4);
}

/// A divider by extreme values: every part at the end that is worst.
pub(crate) fn divider(supply: Range, upper: f64, lower: f64, tolerance: f64) -> Quantity {
    let supply = fact(Dimension::VOLTAGE, supply, "supply");
    let upper = fact(Dimension::RESISTANCE, Range::with_tolerance(upper, tolerance), "upper");
    let lower = fact(Dimension::RESISTANCE, Range::with_tolerance(lower, tolerance), "lower");
    let inputs = [(&supply, Slope::Rising), (&upper, Slope::Falling), (&lower, Slope::Rising)];
    Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| v[0] * v[2] / (v[1] + v[2]))
}

#[test]
fn dividers_at_their_extreme_values_agree_with_a_published_worst_case_analysis() {
    // WCA-01: public worst-case examples (amosborne/worstcase, readme notebook): 4.8 .. 5.1 V, 10k/10k at 10 %.
    let one = divider(Range::between(4.8, 5.1), 10e3, 10e3, 0.10).worst();
    close(one.low(), 2.16, 1e-4);
    close(one.high(), 2.805, 1e-4);
    // WCA-02: the same: 11.9 .. 12.05 V, 50k/20k at 5 %, nominal 12 V.
    let supply = Range::new(11.9, 12.0, 12.05).unwrap();
    let two = divider(supply, 50e3, 20e3, 0.05);
    close(two.worst().low(), 3.1622, 2e-5);
    close(two.worst().high(), 3.6942, 2e-5);
    close(two.nominal().unwrap(), 3.4286, 1e-4);
}
