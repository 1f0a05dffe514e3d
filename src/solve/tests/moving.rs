//! Ramps against closed forms.

use crate::solve::*;

use super::close;

fn source_and(ohms: f64) -> (Circuit, DeviceId, Node) {
    let mut circuit = Circuit::new();
    let (input, output) = (circuit.node("in"), circuit.node("out"));
    let source = circuit.add("V1", &[input, GROUND], VoltageSource { volts: 10.0 }).unwrap();
    circuit.add("R1", &[input, output], Resistor { ohms }).unwrap();
    (circuit, source, output)
}

#[test]
fn a_capacitor_follows_a_ramp_behind_its_resistor() {
    // v = k (t − τ (1 − e^(−t/τ))) while the source rises by k, and an exponential to its level from there.
    let (mut circuit, source, output) = source_and(1e3);
    circuit.add("C1", &[output, GROUND], Capacitor { farads: 1e-6, esr: 0.0 }).unwrap();
    let (lag, rise) = (1e-3_f64, 2e-3);
    let trace = ramp(&circuit, &Ramp { source, rise, until: 10e-3 }, output).unwrap();
    let rising = |time: f64| 10.0 / rise * (time - lag * (1.0 - (-time / lag).exp()));
    let wanted = |time: f64| {
        if time <= rise { rising(time) } else { 10.0 - (10.0 - rising(rise)) * (-(time - rise) / lag).exp() }
    };
    for (time, volts) in &trace.points {
        assert!((volts - wanted(*time)).abs() < 5e-3, "{time}: {volts} against {}", wanted(*time));
    }
    assert!(trace.points.iter().any(|(time, _)| *time == rise), "the kink is no instant of its own");
    close(
        trace.reaches(5.0).unwrap(),
        {
            let (mut low, mut high) = (0.0, 10e-3);
            for _ in 0..60 {
                let middle = 0.5 * (low + high);
                *(if wanted(middle) < 5.0 { &mut low } else { &mut high }) = middle;
            }
            low
        },
        1e-3,
    );
    close(trace.end(), wanted(10e-3), 1e-4);
    assert_eq!(trace.reaches(11.0), None);
}

#[test]
fn a_winding_rings_with_its_capacitor() {
    // A series circuit of R, L, C overshoots a step by exp(−π ζ / sqrt(1 − ζ²)), ζ = R/2 sqrt(C/L) (any textbook of
    // circuits; Nilsson, Riedel, Electric Circuits, chapter 8).
    let mut circuit = Circuit::new();
    let (input, output) = (circuit.node("in"), circuit.node("out"));
    let source = circuit.add("V1", &[input, GROUND], VoltageSource { volts: 10.0 }).unwrap();
    circuit.add("L1", &[input, output], Inductor { henries: 1e-3, ohms: 20.0 }).unwrap();
    circuit.add("C1", &[output, GROUND], Capacitor { farads: 1e-6, esr: 0.0 }).unwrap();
    let damping = 10.0 * (1e-6_f64 / 1e-3).sqrt();
    let overshoot = (-std::f64::consts::PI * damping / (1.0 - damping * damping).sqrt()).exp();
    // A rise of a thousandth of the period is a step.
    let trace = ramp(&circuit, &Ramp { source, rise: 2e-7, until: 2e-3 }, output).unwrap();
    close(trace.peak(), 10.0 * (1.0 + overshoot), 2e-3);
    close(trace.end(), 10.0, 1e-2);
}

#[test]
fn a_junctions_charge_is_what_flows_into_it() {
    // What a reverse-biased junction takes is its depletion charge: 2 CJO VJ (sqrt(1 + V/VJ) − 1) for M = 0.5 (Sze,
    // Physics of Semiconductor Devices, section 2.3). A large capacitor in series measures it.
    let (mut circuit, source, output) = source_and(1.0);
    let sense = circuit.node("sense");
    let diode = Diode { saturation_current: 1e-18, capacitance: 1e-9, ..Diode::default() };
    circuit.add("D1", &[sense, output], diode).unwrap();
    circuit.add("C1", &[sense, GROUND], Capacitor { farads: 1e-6, esr: 0.0 }).unwrap();
    let trace = ramp(&circuit, &Ramp { source, rise: 1e-6, until: 5e-6 }, sense).unwrap();
    let charge = 1e-6 * trace.end();
    close(charge, 2.0 * 1e-9 * ((1.0 + 10.0_f64 - trace.end()).sqrt() - 1.0), 1e-3);
}

#[test]
fn ramps_that_cannot_be_are_refused() {
    let (circuit, source, output) = source_and(1.0);
    for (rise, until) in [(0.0, 1.0), (1.0, 0.5), (f64::NAN, 1.0), (1.0, f64::INFINITY)] {
        assert_eq!(ramp(&circuit, &Ramp { source, rise, until }, output), Err(SolveError::Limits));
    }
}
