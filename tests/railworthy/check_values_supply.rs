//! Published worked figures on supplies, heat, shunt references and worst cases: through the whole tool where a board can
//! hold them, else through its arithmetic of ranges. The source stands beside each.

use railworthy::facts::Reservoir;
use railworthy::quantity::{Dimension, Quantity, Range, Slope};

use crate::check_values::{close, divider, fact, figures};
use crate::small_board::Part;

fn series(value: &str) -> Part {
    let symbol = ("Regulator_Linear", "QZ1", "Linear regulator");
    let pins =
        vec![("1", "IN", "power_in", "VIN"), ("2", "GND", "power_in", "GND"), ("3", "OUT", "power_out", "OUT")];
    Part { reference: "U1", value: value.to_owned(), symbol, pins }
}

fn input_capacitor() -> Part {
    Part::two_ended("C1", "10uF", ("VIN", "GND"))
}

/// A supply, a fixed output, a load and what else is said of the part.
fn heated(supply: &str, output: &str, load: &str, ambient: &str, part: &str) -> [f64; 2] {
    let board = format!(
        "[board]\nambient = \"{ambient}\"\n[[supply]]\nnet = \"VIN\"\nvoltage = \"{supply}\"\n\
         [[load]]\nnet = \"OUT\"\ncurrent = \"{load}\"\n\
         [[part]]\nref = \"U1\"\nkind = \"series\"\noutput_voltage = \"{output}\"\n\
         pins = {{ 1 = \"input\", 2 = \"ground\", 3 = \"output\" }}\n{part}"
    );
    let parts = [series("QZ1"), input_capacitor()];
    figures(&parts, &board, ["dissipation", "junction_temperature"]).map(|figure| figure.likely().high())
}

const COOL: &str = "junction_to_ambient = \"1 °C/W\"\n";

#[test]
fn the_heat_of_worked_examples_is_found() {
    // DIS-01: Microchip MCP1700 data sheet: 3.2 V at most, 1.8 V less 3 %, 150 mA: 218.1 mW.
    close(heated("3.0 .. 3.2 V", "1.8 V ± 3 %", "0.15 A", "25 °C", COOL)[0], 0.2181, 1e-4);
    // DIS-02: Microchip MCP1726 data sheet: 3.3 V and 10 %, 2.5 V less 2.5 %, 1 A: 1.192 W, 48.8 K at 41 K/W.
    let [power, junction] =
        heated("3.3 V ± 10 %", "2.5 V ± 2.5 %", "1 A", "0 °C", "junction_to_ambient = \"41 °C/W\"\n");
    close(power, 1.192, 5e-4);
    close(junction, 48.8, 2e-3);
    // DIS-03: Diodes PAM3112 data sheet: 3.3 V to 1.2 V at 150 mA and 70 uA of its own, 250 K/W, 40 °C: 315 mW, 118.75 °C.
    let part = "ground_current = \"70 uA\"\njunction_to_ambient = \"250 °C/W\"\n";
    let [power, junction] = heated("3.3 V", "1.2 V", "0.15 A", "40 °C", part);
    close(power, 0.315, 8e-4);
    close(junction, 118.75, 6e-4);
    // DIS-05: a note on the heat of low-dropout parts: 5 V to 3.3 V at 150 mA, 205 K/W, 25 °C: 77.5 °C.
    let junction = heated("5 V", "3.3 V", "0.15 A", "25 °C", "junction_to_ambient = \"205 °C/W\"\n")[1];
    close(junction, 77.5, 4e-3);
    // DIS-07: a note on the 78 series: 14 V to 5 V at 0.5 A without heat sink, 54 K/W, 25 °C: 268 °C.
    let junction = heated("14 V", "5 V", "0.5 A", "25 °C", "junction_to_ambient = \"54 °C/W\"\n")[1];
    close(junction, 268.0, 1e-9);
}

#[test]
fn a_dropping_resistor_takes_its_share_of_the_heat() {
    // DIS-08: the same note: 13 ohm ahead of the part leave 1.25 W and 92.5 °C.
    let board = "[board]\nambient = \"25 °C\"\n[[supply]]\nnet = \"RAW\"\nvoltage = \"14 V\"\n\
                 [[load]]\nnet = \"OUT\"\ncurrent = \"0.5 A\"\n[[part]]\nref = \"R1\"\ntolerance = \"±0.001 %\"\n\
                 [[part]]\nref = \"U1\"\nkind = \"series\"\noutput_voltage = \"5 V\"\n\
                 pins = { 1 = \"input\", 2 = \"ground\", 3 = \"output\" }\njunction_to_ambient = \"54 °C/W\"\n";
    let parts = [series("QZ1"), input_capacitor(), Part::two_ended("R1", "13", ("RAW", "VIN"))];
    let [power, junction] = figures(&parts, board, ["dissipation", "junction_temperature"]);
    close(power.nominal().unwrap(), 1.25, 1e-9);
    close(junction.nominal().unwrap(), 92.5, 1e-9);
}

#[test]
fn thermal_resistances_follow_from_heat_and_limits() {
    let kelvins = |degrees: f64| fact(Dimension::TEMPERATURE, Range::exactly(degrees), "rise");
    let watts = |watts: f64| fact(Dimension::POWER, Range::exactly(watts), "heat").reciprocal();
    let over = |rise: f64, heat: f64| kelvins(rise).times(&watts(heat)).nominal().unwrap();
    // DIS-04: Toshiba application note: 150 °C, 600 mW at 25 °C: 208.3 K/W; 0.18 W at 40 °C: 77.5 °C.
    close(over(150.0 - 25.0, 0.6), 208.3, 2e-4);
    let board = "junction_to_ambient = \"208.3 °C/W\"\n";
    close(heated("5 V", "3.2 V", "0.1 A", "40 °C", board)[1], 77.5, 2e-4);
    // DIS-06: Nisshinbo/Ricoh questions and answers: 125 °C, 85 °C, 40 K/W: 1.0 W; 2.5 W at 1.5 A: 1.68 V as printed.
    close(40.0 / over(40.0, 1.0), 1.0, 1e-9);
    close(2.5 / 1.5, 1.68, 8e-3);
    // DIS-09: Horowitz and Hill type: 100 °C, 50 °C, 4.7 W, 4 and 0.5 K/W inside: 6.14 K/W of sink.
    close(over(100.0 - 50.0, 4.7) - 4.0 - 0.5, 6.14, 4e-4);
    // DIS-10: a worked example (heromicro): 2 W, 16 K/W, 50 °C: 82 °C.
    close(heated("7 V", "5 V", "1 A", "50 °C", "junction_to_ambient = \"16 °C/W\"\n")[1], 82.0, 1e-9);
}

/// A bridge behind a winding of 60 Hz, whose diodes drop next to nothing.
fn rectified(winding: &str, reservoir: &str, load: &str) -> Quantity {
    let bridge = Part {
        reference: "D1",
        value: "ideal".to_owned(),
        symbol: ("Device", "D_Bridge_+-AA", "Diode bridge"),
        pins: vec![
            ("1", "+", "passive", "VIN"),
            ("2", "-", "passive", "GND"),
            ("3", "~", "passive", "AC1"),
            ("4", "~", "passive", "AC2"),
        ],
    };
    let parts = [series("QZ1"), bridge, Part::two_ended("C1", reservoir, ("VIN", "GND"))];
    let board = format!(
        "[[supply]]\nbetween = [\"AC1\", \"AC2\"]\nac = \"{winding}\"\nfrequency = \"60 Hz\"\n\
         [[load]]\nnet = \"VIN\"\ncurrent = \"{load}\"\n\
         [[part]]\nref = \"C1\"\ntolerance = \"±0.001 %\"\ntechnology = \"film\"\n\
         [[part]]\nref = \"D1\"\nforward_drop = \"0 V\"\n\
         [[part]]\nref = \"U1\"\nkind = \"series\"\noutput_voltage = \"5 V\"\n\
         pins = {{ 1 = \"input\", 2 = \"ground\", 3 = \"output\" }}\n"
    );
    let [input] = figures(&parts, &board, ["input_voltage"]);
    input
}

#[test]
fn a_rectified_supply_is_worth_its_valley() {
    // SUP-01: Malvino, Bates, Electronic Principles, 7th edition, example 4-8: 120 V 5 : 1, 5 kohm, 100 uF: 34 V peak and
    // 0.57 V of ripple.
    let input = rectified("24 V", "100uF", "6.788 mA");
    close(input.likely().high(), 34.0, 2e-3);
    close(input.likely().high() - input.likely().low(), 0.57, 8e-3);
    // SUP-03 and SUP-04, after Boylestad: 17.76 V and 8.35 V are averages; the valley is 11.5 V and 1.67 V (worked here).
    let winding = |peak: f64| format!("{} V", peak / std::f64::consts::SQRT_2);
    close(rectified(&winding(24.0), "200uF", "0.3 A").likely().low(), 24.0 - 0.3 / (2.0 * 60.0 * 200e-6), 1e-3);
    close(rectified(&winding(15.0), "250uF", "0.4 A").likely().low(), 15.0 - 0.4 / (2.0 * 60.0 * 250e-6), 1e-3);
    let mean = |peak: f64, load: f64, farads: f64| {
        // The book's ripple is 2.4 mA/uF rms at 60 Hz; its peak is the root of three times that.
        peak - 3_f64.sqrt() * 2.4 * (load * 1e3) / (farads * 1e6)
    };
    close(mean(24.0, 0.3, 200e-6), 17.76, 3e-4);
    close(mean(15.0, 0.4, 250e-6), 8.35, 2e-4);
}

#[test]
fn half_a_winding_behind_a_centre_tap_gives_half_the_ripple() {
    // SUP-02: the same book, example 4-7: 17 V and 0.28 V.
    let peak = 12.0 * std::f64::consts::SQRT_2;
    let found =
        Reservoir { peak, load: peak / 5e3, resistance: 0.0, capacitance: 100e-6, frequency: 60.0, full_wave: true };
    close(found.charged(), 17.0, 2e-3);
    close(found.ripple(), 0.28, 0.0103);
}

#[test]
fn a_reservoir_for_a_wanted_ripple_and_a_winding_for_a_wanted_output_follow() {
    // SUP-08: Rashid, Power Electronics, 4th edition, example 3.12: 60 Hz, 500 ohm, a ripple factor of 5 %: 175 uF.
    let (hertz, ohms, factor) = (60.0, 500.0, 0.05);
    let farads: f64 = (1.0 / (4.0 * hertz * ohms)) * (1.0 + 1.0 / factor);
    close(farads, 175e-6, 1e-9);
    // With that, half the ripple over the mean is the factor again.
    let peak = 100.0;
    let mean = peak / (1.0 + factor);
    let found = Reservoir {
        peak,
        load: mean / ohms,
        resistance: 0.0,
        capacitance: farads,
        frequency: hertz,
        full_wave: true,
    };
    close(0.5 * found.ripple() / mean, factor, 0.06);
    // SUP-09: a worked example (exploreroots): 6 V, 3 V of headroom, two diodes of 1 V: 7.8 V rms.
    let volts = |volts: f64| fact(Dimension::VOLTAGE, Range::exactly(volts), "volts");
    let winding = volts(6.0).plus(&volts(3.0)).plus(&volts(2.0)).scaled(std::f64::consts::FRAC_1_SQRT_2);
    close(winding.nominal().unwrap(), 7.8, 3e-3);
}

#[test]
fn an_adapter_at_high_mains_and_light_load_is_worth_more_than_it_says() {
    // OEM-1 to OEM-5: OpenEnergyMonitor, on tolerances of an adapter of 9 V: 11.95 V rms, 16.9 V, 2.376 V, 0.235 mA, 61.8 k.
    let rated = fact(Dimension::VOLTAGE, Range::exactly(9.0), "adapter");
    let mains = fact(Dimension::ONE, Range::exactly(254.4 / 230.0), "mains");
    let light = fact(Dimension::ONE, Range::exactly(1.2), "light load");
    let winding = rated.times(&mains).times(&light);
    close(winding.nominal().unwrap(), 11.95, 5e-4);
    let peak = winding.scaled(std::f64::consts::SQRT_2);
    close(peak.nominal().unwrap(), 16.9, 5e-4);
    let middle = divider(Range::exactly(4.8), 1.0, 1.0, 0.01).worst();
    close(middle.low(), 2.376, 1e-9);
    let current = middle.low() / 10.1e3;
    close(current, 0.235e-3, 1.2e-3);
    close((peak.nominal().unwrap() - middle.low()) / current, 61.8e3, 2e-3);
}

#[test]
fn a_series_resistor_feeds_a_zener_within_its_corners() {
    // ZEN-03: FOSSEE companion 2330, example 3.5: 20 to 40 V, 10 V, 820 ohm: 12.2 to 36.6 mA.
    let symbol = ("Reference_Voltage", "LM4040DBZ-10", "Shunt voltage reference 10V");
    let pins = vec![("1", "K", "passive", "REF"), ("2", "A", "passive", "GND")];
    let shunt = Part { reference: "D1", value: "LM4040DBZ-10.0".to_owned(), symbol, pins };
    let parts = [shunt, Part::two_ended("R1", "820", ("VIN", "REF"))];
    let board = "[[supply]]\nnet = \"VIN\"\nvoltage = \"20 .. 40 V\"\n[[part]]\nref = \"R1\"\ntolerance = \"±0.001 %\"\n\
                 [[part]]\nref = \"D1\"\noutput_voltage = \"10 V\"\n";
    let [current] = figures(&parts, board, ["reference_bias_highest"]);
    close(current.likely().low(), 12.2e-3, 5e-4);
    close(current.likely().high(), 36.6e-3, 5e-4);
    // ZEN-01: FOSSEE companion 135, example 3.16: 20 V, 7.2 V, 100 mA and 10 mA: 116.36 ohm. ZEN-02, its example 3.14:
    // 10 V, 6.8 V, 1 kohm, 0.1 mA: 3.1 mA; 1 mA and a load of 1 kohm: 410.3 ohm.
    let volts = |high: f64, low: f64| fact(Dimension::VOLTAGE, Range::exactly(high - low), "drop");
    let amperes = |amperes: f64| fact(Dimension::CURRENT, Range::exactly(amperes), "current");
    let resistance = |drop: &Quantity, current: f64| drop.times(&amperes(current).reciprocal()).nominal().unwrap();
    close(resistance(&volts(20.0, 7.2), 0.11), 116.36, 5e-5);
    close(volts(10.0, 6.8).nominal().unwrap() / 1e3 - 0.1e-3, 3.1e-3, 1e-9);
    close(resistance(&volts(10.0, 6.8), 6.8e-3 + 1e-3), 410.3, 2e-4);
}

const SUPPLY: (f64, f64, f64) = (4.8, 5.0, 5.1);

/// WCA-03 of public worst-case examples (amosborne/worstcase, readme notebook): a gain of 1.0 to 1.2 times the
/// difference of two dividers.
fn amplified() -> Quantity {
    let first = divider(Range::clamped(SUPPLY.0, SUPPLY.1, SUPPLY.2), 10e3, 10e3, 0.10);
    let second = divider(Range::clamped(11.9, 12.0, 12.05), 50e3, 20e3, 0.05);
    fact(Dimension::ONE, Range::clamped(1.0, 1.1, 1.2), "gain").times(&second.minus(&first))
}

#[test]
fn an_amplified_difference_agrees_with_a_published_worst_case_analysis() {
    let found = amplified();
    close(found.worst().low(), 0.357_24, 1e-5);
    close(found.worst().high(), 1.841, 1e-5);
    close(found.nominal().unwrap(), 1.0214, 1e-4);
}

/// WCA-04 of the same: A + (V − A) R6 / (R5 + R6), where A rests on V too.
#[test]
fn a_supply_that_is_used_twice_gives_the_correlated_range_and_not_the_wider_one() {
    let supply = fact(Dimension::VOLTAGE, Range::clamped(SUPPLY.0, SUPPLY.1, SUPPLY.2), "supply");
    let ohms = |ohms: f64, tolerance: f64, what: &str| {
        fact(Dimension::RESISTANCE, Range::with_tolerance(ohms, tolerance), what)
    };
    let other = fact(Dimension::VOLTAGE, Range::clamped(11.9, 12.0, 12.05), "other supply");
    let gain = fact(Dimension::ONE, Range::clamped(1.0, 1.1, 1.2), "gain");
    let (r1, r2) = (ohms(10e3, 0.1, "R1"), ohms(10e3, 0.1, "R2"));
    let (r3, r4) = (ohms(50e3, 0.05, "R3"), ohms(20e3, 0.05, "R4"));
    let (r5, r6) = (ohms(10e3, 0.01, "R5"), ohms(10e3, 0.01, "R6"));
    // dV/dV = share − (1 − share) gain / 2 with a share of a half: falling where the gain is above 1.
    let inputs = [
        (&supply, Slope::Falling),
        (&other, Slope::Rising),
        (&gain, Slope::Rising),
        (&r1, Slope::Rising),
        (&r2, Slope::Falling),
        (&r3, Slope::Falling),
        (&r4, Slope::Rising),
        (&r5, Slope::Rising),
        (&r6, Slope::Falling),
    ];
    let formula = |v: &[f64]| {
        let amplified = v[2] * (v[1] * v[6] / (v[5] + v[6]) - v[0] * v[4] / (v[3] + v[4]));
        amplified + (v[0] - amplified) * v[8] / (v[7] + v[8])
    };
    // The sign of the slopes against the supply and the last divider changes inside the range: all corners are tried.
    let mut ends = (f64::INFINITY, f64::NEG_INFINITY);
    for corner in 0..1_u32 << inputs.len() {
        let values: Vec<f64> = inputs
            .iter()
            .enumerate()
            .map(|(at, (input, _))| if corner >> at & 1 == 1 { input.worst().high() } else { input.worst().low() })
            .collect();
        ends = (ends.0.min(formula(&values)), ends.1.max(formula(&values)));
    }
    close(ends.0, 2.6397, 2e-5);
    close(ends.1, 3.4066, 2e-5);
    // One joint figure is as narrow; taken apart, the same supply counts twice and the range is wider.
    let joint = Quantity::monotone(Dimension::VOLTAGE, &inputs, formula);
    assert!(joint.worst().low() >= ends.0 - 1e-9 && joint.worst().high() <= ends.1 + 1e-9);
    close(joint.nominal().unwrap(), 3.0107, 2e-5);
    let share = divider(Range::exactly(1.0), 10e3, 10e3, 0.01);
    let share = fact(Dimension::ONE, Range::between(share.worst().low(), share.worst().high()), "share");
    let apart = amplified().plus(&supply.minus(&amplified()).times(&share));
    assert!(apart.worst().low() < 2.6 && apart.worst().high() > 3.45, "{:?}", apart.worst());
    assert!(apart.shares_a_ranged_fact(&supply));
}

#[test]
fn sums_of_tolerances_agree_with_published_limits() {
    // WCA-06: Maxima manual, wrstcse: 1 k and 2 k at 1 % and a common 2 %: 2910.6 to 3090.6 ohm.
    let common = fact(Dimension::ONE, Range::with_tolerance(1.0, 0.02), "common");
    let ohms = |ohms: f64, what: &str| fact(Dimension::RESISTANCE, Range::with_tolerance(ohms, 0.01), what);
    let sum = ohms(1e3, "R1").plus(&ohms(2e3, "R2")).times(&common).worst();
    close(sum.low(), 2910.6, 1e-9);
    close(sum.high(), 3090.6, 1e-9);
    // WCA-07: FOSSEE companion 2096, example 1.45: 4400 ohm from three terms of 0.5 %: 66 ohm.
    let term = |what: &str| fact(Dimension::ONE, Range::with_tolerance(1.0, 0.005), what);
    let terms = [term("a"), term("b"), term("c")];
    let spread: f64 = terms.iter().map(|term| 4400.0 * (term.worst().high() - 1.0)).sum();
    close(spread, 66.0, 1e-9);
}

#[test]
fn spreads_of_a_product_combine_as_a_published_root_of_squares() {
    // WCA-05: amosborne/worstcase, tests: 1 ± 2 times 2 ± 5: 2 + √(4² + 5²) = 8.403.
    let spread = |nominal: f64, spread: f64, what: &str| {
        fact(Dimension::ONE, Range::clamped(nominal - spread, nominal, nominal + spread), what)
    };
    let at = |a: f64, b: f64| spread(1.0, a, "a").times(&spread(2.0, b, "b"));
    let nominal = at(0.0, 0.0).nominal().unwrap();
    let (one, other) = (at(2.0, 0.0).worst().high() - nominal, at(0.0, 5.0).worst().high() - nominal);
    close(nominal + one.hypot(other), 8.403_12, 1e-6);
}

#[test]
fn a_current_sense_amplifier_agrees_with_a_published_worst_case_analysis() {
    // WCA-08: the same repository, readme: R1 0.1 ohm, R2 = R4 1.001 k, R3 = R5 50.5 k at 1 %, 150 uV of offset, 36 V, 1 A:
    // 5.045 V, 3.647 to 6.387 V by extreme values.
    let values = [(0.1, 0.01), (1.001e3, 0.01), (50.5e3, 0.01), (1.001e3, 0.01), (50.5e3, 0.01)];
    let formula = |v: &[f64]| {
        let (bus, current) = (36.0, 1.0);
        let positive = bus * v[2] / (v[1] + v[2]);
        let negative = positive + v[5];
        negative - (bus - v[0] * current - negative) * v[4] / v[3]
    };
    let ohms: Vec<Quantity> = values
        .iter()
        .enumerate()
        .map(|(at, (ohms, part))| {
            fact(Dimension::RESISTANCE, Range::with_tolerance(*ohms, *part), &format!("R{}", at + 1))
        })
        .collect();
    let offset = fact(Dimension::VOLTAGE, Range::clamped(-150e-6, 150e-6, 150e-6), "offset");
    let slopes = [Slope::Rising, Slope::Falling, Slope::Rising, Slope::Rising, Slope::Falling];
    let mut inputs: Vec<(&Quantity, Slope)> = ohms.iter().zip(slopes).collect();
    inputs.push((&offset, Slope::Rising));
    let found = Quantity::monotone(Dimension::VOLTAGE, &inputs, formula);
    close(found.worst().low(), 3.647, 5e-3);
    close(found.worst().high(), 6.387, 5e-3);
}
