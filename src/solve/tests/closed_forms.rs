//! Operating points that textbooks have closed forms for.

use crate::solve::*;

use super::close;

/// The principal branch of Lambert's function, by Newton's method on `w e^w = z` in logarithms.
fn lambert(z: f64) -> f64 {
    let mut w = z.ln().max(0.5);
    for _ in 0..100 {
        w -= (w + w.ln() - z.ln()) / (1.0 + 1.0 / w);
    }
    w
}

#[test]
fn a_diode_behind_a_resistor_follows_lamberts_function() {
    // Banwell, Jayakumar, Exact analytical solution for current flow through diode with series resistance,
    // Electronics Letters 36 (2000), equation 3.
    for (supply, ohms, saturation, emission) in
        [(5.0, 1e3, 1e-14, 1.0), (12.0, 47.0, 3e-9, 1.8), (0.9, 10e3, 1e-12, 1.2), (60.0, 1.0, 1e-14, 1.0)]
    {
        let mut circuit = Circuit::new();
        let (input, anode) = (circuit.node("in"), circuit.node("anode"));
        circuit.add("V1", &[input, GROUND], VoltageSource { volts: supply }).unwrap();
        circuit.add("R1", &[input, anode], Resistor { ohms }).unwrap();
        let diode = Diode { saturation_current: saturation, emission, ..Diode::default() };
        circuit.add("D1", &[anode, GROUND], diode).unwrap();
        let solution = dc(&circuit).unwrap();
        let width = emission * THERMAL_VOLTAGE;
        let z = ohms * saturation / width;
        // Its logarithm, since the argument overflows.
        let log_z = z.ln() + (supply + ohms * saturation) / width;
        let w = if log_z < 700.0 { lambert(log_z.exp()) } else { large_lambert(log_z) };
        let current = width / ohms * w - saturation;
        close((supply - solution.voltage(anode)) / ohms, current, 1e-6);
    }
}

/// Lambert's function of a number too large to be written, by its logarithm.
fn large_lambert(log_z: f64) -> f64 {
    let mut w = log_z;
    for _ in 0..100 {
        w = log_z - w.ln();
    }
    w
}

#[test]
fn a_series_resistance_of_the_diode_adds_to_that_outside() {
    let voltage = |inside: f64, outside: f64| {
        let mut circuit = Circuit::new();
        let (input, anode) = (circuit.node("in"), circuit.node("anode"));
        circuit.add("V1", &[input, GROUND], VoltageSource { volts: 5.0 }).unwrap();
        circuit.add("R1", &[input, anode], Resistor { ohms: outside }).unwrap();
        let diode = Diode { series_resistance: inside, ..Diode::default() };
        circuit.add("D1", &[anode, GROUND], diode).unwrap();
        let solution = dc(&circuit).unwrap();
        (5.0 - solution.voltage(anode)) / outside
    };
    close(voltage(100.0, 900.0), voltage(0.0, 1000.0), 1e-9);
}

#[test]
fn a_zener_diode_holds_its_breakdown_voltage() {
    // I = IBV exp((V − BV) / NBV Vt), solved for V (Massobrio, Antognetti, Semiconductor Device Modeling with SPICE,
    // chapter 1).
    let mut circuit = Circuit::new();
    let cathode = circuit.node("cathode");
    circuit.add("I1", &[GROUND, cathode], CurrentSource { amperes: 8e-3 }).unwrap();
    let zener = Diode { breakdown_voltage: 5.6, breakdown_current: 5e-3, ..Diode::default() };
    circuit.add("D1", &[GROUND, cathode], zener).unwrap();
    let wanted = 5.6 + THERMAL_VOLTAGE * (8.0_f64 / 5.0).ln();
    close(dc(&circuit).unwrap().voltage(cathode), wanted, 1e-8);
}

fn ideal(polarity: Polarity) -> Bipolar {
    Bipolar { saturation_current: 1e-15, forward_gain: 80.0, ..Bipolar::new(polarity) }
}

#[test]
fn a_mirror_loses_two_base_currents() {
    // Iout / Iref = 1 / (1 + 2 / β) at equal collector voltages (Gray, Hurst, Lewis, Meyer, Analysis and Design of
    // Analog Integrated Circuits, section 4.2).
    for (polarity, sign) in [(Polarity::N, 1.0), (Polarity::P, -1.0)] {
        let mut circuit = Circuit::new();
        let (base, output) = (circuit.node("base"), circuit.node("output"));
        circuit.add("I1", &[GROUND, base], CurrentSource { amperes: sign * 1e-3 }).unwrap();
        circuit.add("Q1", &[base, base, GROUND], ideal(polarity)).unwrap();
        circuit.add("Q2", &[output, base, GROUND], ideal(polarity)).unwrap();
        let source = circuit.add("V1", &[output, GROUND], VoltageSource { volts: sign * 2.0 }).unwrap();
        let solution = dc(&circuit).unwrap();
        // The source's own current flows into its plus node, so that it is minus the collector's.
        let collector = -solution.current(source).unwrap();
        close(collector, sign * 1e-3 / (1.0 + 2.0 / 80.0), 1e-6);
    }
}

#[test]
fn an_early_voltage_gives_a_mirror_its_output_resistance() {
    // ro = VA / IC (Gray and Meyer, section 1.4.2), here (VA + VCB) / IC since the model's base width goes with VCB.
    let mut circuit = Circuit::new();
    let (base, output) = (circuit.node("base"), circuit.node("output"));
    circuit.add("V2", &[base, GROUND], VoltageSource { volts: 0.65 }).unwrap();
    let transistor = Bipolar { early_voltage: 70.0, ..ideal(Polarity::N) };
    circuit.add("Q1", &[output, base, GROUND], transistor).unwrap();
    let source = circuit.add("V1", &[output, GROUND], VoltageSource { volts: 5.0 }).unwrap();
    let solutions = dc_sweep(&circuit, source, &[5.0, 5.5], None).unwrap();
    let [first, second] = [0, 1].map(|number| -solutions[number].current(source).unwrap());
    // The conductance across the junctions is a millionth of it.
    close(0.5 / (second - first), (70.0 + 5.0 - 0.65) / first, 1e-4);
}

#[test]
fn a_follower_has_its_output_impedance() {
    // Rout = (rπ + RS) / (1 + β), rπ = β Vt / IC (Gray and Meyer, section 3.3.3, emitter follower).
    let (source_ohms, load) = (1e3, 2e-3);
    let mut circuit = Circuit::new();
    let nodes = ["in", "base", "out"].map(|name| circuit.node(name));
    let [input, base, output] = nodes;
    circuit.add("V1", &[input, GROUND], VoltageSource { volts: 10.0 }).unwrap();
    circuit.add("V2", &[base, GROUND], VoltageSource { volts: 5.0 }).unwrap();
    let inner = circuit.node("inner");
    circuit.add("RS", &[base, inner], Resistor { ohms: source_ohms }).unwrap();
    circuit.add("Q1", &[input, inner, output], ideal(Polarity::N)).unwrap();
    let sink = circuit.add("I1", &[output, GROUND], CurrentSource { amperes: load }).unwrap();
    let step = 1e-7;
    let solutions = dc_sweep(&circuit, sink, &[load - step, load + step], None).unwrap();
    let resistance = (solutions[0].voltage(output) - solutions[1].voltage(output)) / (2.0 * step);
    let collector = load * 80.0 / 81.0;
    let input_resistance = 80.0 * THERMAL_VOLTAGE / collector;
    close(resistance, (input_resistance + source_ohms) / 81.0, 1e-5);
}

#[test]
fn high_injection_makes_current_go_with_half_the_slope() {
    // IC → sqrt(IS IKF) exp(VBE / 2 Vt) far above the knee (Massobrio, Antognetti, chapter 2).
    let knee = 1e-3;
    let transistor = Bipolar { knee_current: knee, ..ideal(Polarity::N) };
    let collector = |volts: f64| {
        let mut circuit = Circuit::new();
        let (base, output) = (circuit.node("base"), circuit.node("output"));
        circuit.add("V2", &[base, GROUND], VoltageSource { volts }).unwrap();
        circuit.add("Q1", &[output, base, GROUND], transistor).unwrap();
        let source = circuit.add("V1", &[output, GROUND], VoltageSource { volts: 5.0 }).unwrap();
        -dc(&circuit).unwrap().current(source).unwrap()
    };
    let volts: f64 = 1.0;
    let ideal_current = 1e-15 * (volts / THERMAL_VOLTAGE).exp();
    assert!(ideal_current > 1e4 * knee);
    let root = (1.0 + 4.0 * ideal_current / knee).sqrt();
    close(collector(volts), 2.0 * ideal_current / (1.0 + root), 1e-6);
    let ratio = collector(volts + 2.0 * THERMAL_VOLTAGE) / collector(volts);
    close(ratio, 1_f64.exp(), 0.01);
}

#[test]
fn a_square_law_transistor_is_saturated_or_not() {
    // ID = K/2 (VGS − VT)² (1 + λ VDS), and K ((VGS − VT) VDS − VDS²/2)(1 + λ VDS) below VDS = VGS − VT (Gray and Meyer,
    // section 1.5).
    for (polarity, sign) in [(Polarity::N, 1.0), (Polarity::P, -1.0)] {
        let transistor = Mosfet {
            threshold: sign * 2.0,
            transconductance: 2.0,
            modulation: 0.01,
            saturation_current: 1e-15,
            ..Mosfet::new(polarity)
        };
        let drain_current = |gate: f64, drain: f64| {
            let mut circuit = Circuit::new();
            let nodes = (circuit.node("gate"), circuit.node("drain"));
            circuit.add("V1", &[nodes.0, GROUND], VoltageSource { volts: sign * gate }).unwrap();
            let source = circuit.add("V2", &[nodes.1, GROUND], VoltageSource { volts: sign * drain }).unwrap();
            circuit.add("M1", &[nodes.1, nodes.0, GROUND], transistor).unwrap();
            -sign * dc(&circuit).unwrap().current(source).unwrap()
        };
        close(drain_current(3.0, 5.0), 0.5 * 2.0 * 1.0 * 1.05, 1e-9);
        close(drain_current(3.0, 0.4), 2.0 * (0.4 - 0.08) * 1.004, 1e-9);
        assert!(drain_current(1.9, 5.0).abs() < 1e-10);
        // Turned round, drain and source change places.
        let turned = drain_current(3.0, -0.4);
        close(turned, -2.0 * (1.4 * 0.4 - 0.08) * 1.004, 1e-4);
    }
}

/// An amplifier that follows its input, on 12 V.
fn buffer(volts: f64, amplifier: OpAmp, load: f64) -> (Solution, Node) {
    let mut circuit = Circuit::new();
    let [input, supply, output] = ["in", "supply", "out"].map(|name| circuit.node(name));
    circuit.add("V1", &[supply, GROUND], VoltageSource { volts: 12.0 }).unwrap();
    circuit.add("V2", &[input, GROUND], VoltageSource { volts }).unwrap();
    circuit.add("U1", &[input, output, supply, GROUND, output], amplifier).unwrap();
    circuit.add("R1", &[output, GROUND], Resistor { ohms: load }).unwrap();
    (dc(&circuit).unwrap(), output)
}

#[test]
fn an_amplifier_has_its_gain_offset_resistance_and_limits() {
    let amplifier =
        OpAmp { gain: 1e4, offset: 2e-3, top: 1.3, bottom: 0.05, output_resistance: 100.0, ..OpAmp::default() };
    // v = A (vi + VOS − v) behind RO into the load: v (1 + RO / RL) = A (vi + VOS − v).
    let load = 1e3;
    let (solution, output) = buffer(5.0, amplifier, load);
    close(solution.voltage(output), 1e4 * 5.002 / (1e4 + 1.1), 1e-6);
    // At its limits a diode's drop at the current of the input stage is what 0.55 V stands for.
    let (solution, output) = buffer(11.9, amplifier, 1e6);
    close(solution.voltage(output), 12.0 - 1.3, 2e-3);
    let (solution, output) = buffer(-1.0, amplifier, 1e6);
    assert!((solution.voltage(output) - 0.05).abs() < 0.02, "{}", solution.voltage(output));
}

#[test]
fn nodes_that_only_capacitors_hold_lie_at_zero() {
    let mut circuit = Circuit::new();
    let (input, middle) = (circuit.node("in"), circuit.node("middle"));
    circuit.add("V1", &[input, GROUND], VoltageSource { volts: 5.0 }).unwrap();
    circuit.add("C1", &[input, middle], Capacitor { farads: 1e-6, esr: 0.1 }).unwrap();
    circuit.add("C2", &[middle, GROUND], Capacitor { farads: 1e-6, esr: 0.0 }).unwrap();
    assert!(dc(&circuit).unwrap().voltage(middle).abs() < 1e-9);
}

#[test]
fn a_winding_is_its_resistance_at_rest() {
    let mut circuit = Circuit::new();
    let (input, output) = (circuit.node("in"), circuit.node("out"));
    circuit.add("V1", &[input, GROUND], VoltageSource { volts: 5.0 }).unwrap();
    let winding = circuit.add("L1", &[input, output], Inductor { henries: 1e-3, ohms: 1.0 }).unwrap();
    circuit.add("R1", &[output, GROUND], Resistor { ohms: 9.0 }).unwrap();
    let solution = dc(&circuit).unwrap();
    close(solution.voltage(output), 4.5, 1e-12);
    close(solution.current(winding).unwrap(), 0.5, 1e-12);
}
