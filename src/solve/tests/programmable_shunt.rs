//! A programmable shunt reference against the closed forms of its data sheets.

use num_complex::Complex64;

use crate::solve::*;

use super::close;

/// Of a part of 2.5 V: the usual figures of its data sheets (TI TL431, SLVS543H, electrical characteristics).
const PART: ProgrammableShunt = ProgrammableShunt {
    reference: 2.495,
    impedance: 0.2,
    least_current: 0.4e-3,
    sensitivity: 1.4e-3,
    bandwidth: 1e6,
    pin_current: 2e-6,
};

/// A shunt that a current feeds, with a divider of so many ohms above and below its reference pin.
fn fed(amperes: f64, upper: f64, lower: f64) -> f64 {
    let mut circuit = Circuit::new();
    let [cathode, pin] = ["cathode", "pin"].map(|name| circuit.node(name));
    circuit.add("I1", &[GROUND, cathode], CurrentSource { amperes }).unwrap();
    circuit.add("R1", &[cathode, pin], Resistor { ohms: upper }).unwrap();
    circuit.add("R2", &[pin, GROUND], Resistor { ohms: lower }).unwrap();
    circuit.add("U1", &[cathode, pin, GROUND], PART).unwrap();
    dc(&circuit).unwrap().voltage(cathode)
}

#[test]
fn a_divider_sets_its_voltage() {
    // V = VREF (1 + R1 / R2) + IREF R1 (the same sheet, shunt regulator), less what the cathode takes off the reference.
    for (upper, lower) in [(2e3, 2e3), (38.3e3, 10e3), (1.0, 1e6), (22e3, 2.2e3)] {
        let ratio: f64 = 1.0 + upper / lower;
        let found = fed(10e-3 + 2.495 / lower, upper, lower);
        let simple = 2.495 * ratio + 2e-6 * upper;
        let reference = 2.495 - 1.4e-3 * (found - 2.495);
        close(found, reference * ratio + 2e-6 * upper, 2e-4);
        close(found, simple, 1.5e-3 * ratio);
    }
    close(fed(12.5e-3, 2e3, 2e3), 4.99, 5e-3);
}

#[test]
fn its_impedance_is_the_stated_one_times_the_divider() {
    // |Z| (1 + R1 / R2), the same sheet.
    for (upper, lower) in [(1.0, 1e6), (10e3, 10e3), (30e3, 10e3)] {
        let ratio = 1.0 + upper / lower;
        let slope = (fed(15e-3, upper, lower) - fed(5e-3, upper, lower)) / 10e-3;
        close(slope, 0.2 * ratio / (1.0 + 1.4e-3 * ratio), 0.02);
    }
}

#[test]
fn below_its_least_current_it_lets_go() {
    let drop = |amperes: f64| 2.495 - fed(amperes, 1.0, 1e6);
    assert!(drop(1e-3) < 3e-3, "{}", drop(1e-3));
    // Where the divider takes all there is before its voltage comes to the reference, that is what is left.
    close(fed(1e-3, 1.0, 1e3), 1.001, 3e-3);
}

#[test]
fn its_loop_has_one_pole() {
    let mut circuit = Circuit::new();
    let [supply, driver, output, pin] = ["supply", "driver", "output", "pin"].map(|name| circuit.node(name));
    circuit.add("V1", &[supply, GROUND], VoltageSource { volts: 7.3 }).unwrap();
    circuit.add("R", &[supply, output], Resistor { ohms: 230.0 }).unwrap();
    circuit.add("R1", &[output, pin], Resistor { ohms: 100e3 }).unwrap();
    circuit.add("R2", &[pin, GROUND], Resistor { ohms: 100e3 }).unwrap();
    let part = ProgrammableShunt { sensitivity: 0.0, ..PART };
    circuit.add("U1", &[driver, pin, GROUND], part).unwrap();
    let at_break = circuit.add("break", &[driver, output], VoltageSource { volts: 0.0 }).unwrap();
    let solution = dc(&circuit).unwrap();
    let frequencies = Frequencies::per_decade(1.0, 1e7, 4);
    let found = LoopGain::new(&circuit, &solution, at_break, output, &frequencies).unwrap();
    // 230 Ω at 5 S make 1150, which at 1 MHz have become one: the pole lies at 1 MHz / 1150; the divider takes half.
    let low = 1150.0 / 2.0;
    let mut compared = 0;
    for (hertz, gain) in found.gains(|_| Complex64::default()) {
        let wanted = low / Complex64::new(1.0, hertz / (1e6 / 1150.0));
        assert!((gain - wanted).norm() < 0.015 * wanted.norm(), "{hertz} Hz: {gain} against {wanted}");
        compared += 1;
    }
    assert!(compared >= 28, "{compared}");
}

#[test]
fn its_cathode_stays_above_what_feeds_it_and_takes_no_more_than_it_can() {
    let cathode = |pin: f64, ohms: f64| {
        let mut circuit = Circuit::new();
        let [supply, cathode, reference] = ["supply", "cathode", "pin"].map(|name| circuit.node(name));
        circuit.add("V1", &[supply, GROUND], VoltageSource { volts: 12.0 }).unwrap();
        circuit.add("V2", &[reference, GROUND], VoltageSource { volts: pin }).unwrap();
        circuit.add("R1", &[supply, cathode], Resistor { ohms }).unwrap();
        circuit.add("U1", &[cathode, reference, GROUND], PART).unwrap();
        dc(&circuit).unwrap().voltage(cathode)
    };
    for (pin, ohms) in [(2.6, 1e3), (5.0, 1e3), (12.0, 10e3)] {
        let found = cathode(pin, ohms);
        assert!((1.6..2.1).contains(&found), "{found}");
    }
    close(cathode(2.4, 1e3), 12.0, 1e-3);
    let most = (12.0 - cathode(5.0, 20.0)) / 20.0;
    assert!((0.1..0.2).contains(&most), "{most}");
}

#[test]
fn it_drives_a_pass_transistor_at_any_input() {
    let mut circuit = Circuit::new();
    let [input, drive, output, pin] = ["in", "drive", "out", "pin"].map(|name| circuit.node(name));
    let source = circuit.add("V1", &[input, GROUND], VoltageSource { volts: 18.0 }).unwrap();
    circuit.add("R1", &[input, drive], Resistor { ohms: 820.0 }).unwrap();
    circuit.add("R2", &[output, pin], Resistor { ohms: 38.3e3 }).unwrap();
    circuit.add("R3", &[pin, GROUND], Resistor { ohms: 10e3 }).unwrap();
    circuit.add("R4", &[output, GROUND], Resistor { ohms: 60.0 }).unwrap();
    circuit.add("U1", &[drive, pin, GROUND], PART).unwrap();
    let transistor =
        Bipolar { saturation_current: 5e-13, forward_gain: 90.0, early_voltage: 80.0, ..Bipolar::new(Polarity::N) };
    circuit.add("Q1", &[input, drive, output], transistor).unwrap();
    let levels: Vec<f64> = (0..=80).map(|step| f64::from(step) * 0.25).collect();
    let found: Vec<f64> =
        dc_sweep(&circuit, source, &levels, None).unwrap().iter().map(|one| one.voltage(output)).collect();
    assert_eq!(found.len(), levels.len());
    assert!(found.windows(2).all(|pair| pair[1] > pair[0] - 1e-6), "{found:?}");
    for (level, volts) in levels.iter().zip(&found).filter(|(level, _)| **level >= 16.0) {
        assert!((volts - 12.05).abs() < 0.1, "{level}: {volts}");
    }
}
