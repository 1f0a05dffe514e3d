//! Loop gain, margins and windows against closed forms.

use num_complex::Complex64;
use proptest::prelude::*;

use crate::solve::*;

use super::close;

/// A gain of poles in hertz, and its frequencies.
fn poles(gain: f64, poles: &[f64]) -> impl Fn(f64) -> Complex64 + use<> {
    let poles = poles.to_vec();
    move |hertz| poles.iter().fold(Complex64::from(gain), |product, pole| product / Complex64::new(1.0, hertz / pole))
}

fn margins_of(gain: impl Fn(f64) -> Complex64) -> Margins {
    let frequencies = Frequencies::default();
    margins(frequencies.hertz().iter().map(|hertz| (*hertz, gain(*hertz), Complex64::from(1.0))))
}

#[test]
fn a_loop_of_two_poles_has_the_margin_of_its_closed_form() {
    // T = 1 / (s/ω0 (1 + s/p)): |T| = 1 at ω with (ω/ω0)² (1 + (ω/p)²) = 1, and the margin is 90° − atan(ω/p)
    // (Gray, Hurst, Lewis, Meyer, Analysis and Design of Analog Integrated Circuits, section 9.4).
    for ratio in [0.1_f64, 0.5, 1.0, 3.0, 20.0] {
        let (unity, pole) = (20e3, 20e3 / ratio);
        let found = margins_of(|hertz| {
            let s = Complex64::new(0.0, hertz);
            1.0 / (s / unity * (1.0 + s / pole))
        });
        let square = 0.5 * ratio.powi(-2) * ((1.0 + 4.0 * ratio * ratio).sqrt() - 1.0);
        let crossover = unity * square.sqrt();
        close(found.crossover.unwrap(), crossover, 1e-4);
        let margin = 90.0 - (crossover / pole).atan().to_degrees();
        assert!((found.phase.unwrap() - margin).abs() < 0.02, "{:?} against {margin}", found.phase);
    }
}

#[test]
fn the_margin_of_a_closed_loop_tells_its_overshoot() {
    // ζ from the margin and Mp = exp(−π ζ / sqrt(1 − ζ²)): Franklin, Powell, Emami-Naeini, Feedback Control of Dynamic
    // Systems, section 6.4; 45° gives 23.32 % and 60° gives 8.773 %.
    for (margin, overshoot) in [(45.0_f64, 0.233_212), (60.0, 0.087_732_1)] {
        // For T = ω² / (s (s + 2 ζ ω)) the margin is atan(2 ζ / sqrt(sqrt(1 + 4 ζ⁴) − 2 ζ²)).
        let of = |zeta: f64| (2.0 * zeta / ((1.0 + 4.0 * zeta.powi(4)).sqrt() - 2.0 * zeta * zeta).sqrt()).atan();
        let (mut low, mut high) = (0.01, 0.99);
        for _ in 0..60 {
            let middle: f64 = 0.5 * (low + high);
            *(if of(middle).to_degrees() < margin { &mut low } else { &mut high }) = middle;
        }
        let zeta: f64 = low;
        close((-std::f64::consts::PI * zeta / (1.0 - zeta * zeta).sqrt()).exp(), overshoot, 1e-5);
        let found = margins_of(|hertz| {
            let s = Complex64::new(0.0, hertz / 10e3);
            1.0 / (s * (s + 2.0 * zeta))
        });
        assert!((found.phase.unwrap() - margin).abs() < 0.02, "{:?}", found.phase);
    }
}

#[test]
fn the_modulus_margin_is_the_least_distance_from_the_critical_point() {
    // T = g / s alone never comes nearer to −1 than 1; with a delay of a right angle at crossover it does.
    let one_pole = margins_of(|hertz| Complex64::new(0.0, -20e3 / hertz));
    close(one_pole.modulus, 1.0, 1e-3);
    assert!((one_pole.phase.unwrap() - 90.0).abs() < 1e-6);
    // T = 1 / (s (s + 1)): |1 + T|² = ((1 − ω²)² + ω²) / (ω⁴ + ω²), least where 2 ω⁴ − 2 ω² − 1 … is solved finely.
    let square = |x: f64| ((1.0 - x) * (1.0 - x) + x) / (x * x + x);
    let least = (1..40_000).map(|step| square(f64::from(step) * 1e-4)).fold(f64::INFINITY, f64::min);
    let found = margins_of(|hertz| {
        let s = Complex64::new(0.0, hertz / 20e3);
        1.0 / (s * (s + 1.0))
    });
    close(found.modulus, least.sqrt(), 1e-4);
}

#[test]
fn an_esr_turns_phase_at_its_zero() {
    // The admittance of R and C in series has its corner at 1 / (2 π R C), where it leads by 45°.
    let capacitor = SeriesRc { farads: 10e-6, ohms: 0.3 };
    let corner = 1.0 / (std::f64::consts::TAU * 10e-6 * 0.3);
    let at_corner = capacitor.admittance(corner);
    close(at_corner.arg().to_degrees(), 45.0, 1e-12);
    close(at_corner.norm(), 1.0 / (0.3 * 2_f64.sqrt()), 1e-12);
    assert_eq!(SeriesRc { farads: 10e-6, ohms: 0.0 }.admittance(1e3).re, 0.0);
}

/// A regulator of three transconductances: two poles inside, the third at its output.
fn regulator(inner: [f64; 2], gain: f64, load: f64) -> (Circuit, DeviceId, Node) {
    let mut circuit = Circuit::new();
    let [first, driver, second, output] = ["one", "driver", "two", "out"].map(|name| circuit.node(name));
    let stage = |circuit: &mut Circuit, name: &str, from: Node, to: Node, gain: f64| {
        circuit.add(name, &[GROUND, to, from, GROUND], Transconductance { siemens: gain }).unwrap();
    };
    // The feedback is negative through the first stage.
    stage(&mut circuit, "G1", output, first, -gain / load);
    stage(&mut circuit, "G2", driver, second, 1.0);
    stage(&mut circuit, "G3", second, output, 1.0);
    for (name, node, pole) in [("1", first, inner[0]), ("2", second, inner[1])] {
        circuit.add(&format!("R{name}"), &[node, GROUND], Resistor { ohms: 1.0 }).unwrap();
        let farads = 1.0 / (std::f64::consts::TAU * pole);
        circuit.add(&format!("C{name}"), &[node, GROUND], Capacitor { farads, esr: 0.0 }).unwrap();
    }
    circuit.add("R3", &[output, GROUND], Resistor { ohms: load }).unwrap();
    let at_break = circuit.add("probe", &[first, driver], VoltageSource { volts: 0.0 }).unwrap();
    (circuit, at_break, output)
}

proptest! {
    #[test]
    fn a_circuits_loop_gain_is_that_of_its_stages(
        esr in 0.001..30.0_f64, bulk in 1e-6..100e-6_f64, ceramic in 1e-8..10e-6_f64, load in 5.0..500.0_f64,
    ) {
        let (circuit, at_break, output) = regulator([1e3, 500e3], 1e4, load);
        let solution = dc(&circuit).unwrap();
        let frequencies = Frequencies::per_decade(10.0, 1e8, 10);
        let found = LoopGain::new(&circuit, &solution, at_break, output, &frequencies).unwrap();
        let network = Bank { bulk, others: vec![SeriesRc { farads: ceramic, ohms: 5e-3 }] }.with_esr(esr);
        let inside = poles(1e4 / load, &[1e3, 500e3]);
        for (hertz, gain) in found.gains(|hertz| network.admittance(hertz)) {
            let i = Complex64::i() * std::f64::consts::TAU * hertz;
            let branch = |farads: f64, ohms: f64| i * farads / (1.0 + i * farads * ohms);
            let wanted = inside(hertz) / (1.0 / load + branch(bulk, esr) + branch(ceramic, 5e-3));
            prop_assert!((gain - wanted).norm() <= 1e-9 * wanted.norm(), "{hertz} Hz: {gain} against {wanted}");
        }
    }
}

#[test]
fn a_loop_has_one_gain_wherever_it_is_broken_and_the_network_is_put() {
    // The same capacitor as a device of the circuit and as a network; and the break at the other side of a stage that
    // draws no current.
    let (mut circuit, at_break, output) = regulator([1e3, 500e3], 1e4, 100.0);
    let frequencies = Frequencies::default();
    let solution = dc(&circuit).unwrap();
    let bare = LoopGain::new(&circuit, &solution, at_break, output, &frequencies).unwrap();
    let network = Bank { bulk: 10e-6, others: Vec::new() }.with_esr(0.3);
    let outside: Vec<_> = bare.gains(|hertz| network.admittance(hertz)).collect();
    circuit.add("C3", &[output, GROUND], Capacitor { farads: 10e-6, esr: 0.3 }).unwrap();
    let solution = dc(&circuit).unwrap();
    let built_in = LoopGain::new(&circuit, &solution, at_break, output, &frequencies).unwrap();
    for ((_, one), (_, other)) in built_in.gains(|_| Complex64::default()).zip(outside) {
        assert!((one - other).norm() <= 1e-6 * one.norm(), "{one} against {other}");
    }
    assert!(LoopGain::new(&circuit, &solution, at_break, GROUND, &frequencies).is_err());
}

/// The margins of the loop with a load pole at 159 Hz, poles at 1 kHz and 500 kHz, 80 dB and a zero of the ESR.
fn with_esr_zero(esr: f64) -> Margins {
    let load_pole = 1.0 / (std::f64::consts::TAU * 100.0 * 10e-6);
    let gain = poles(1e4, &[load_pole, 1e3, 500e3]);
    margins_of(|hertz| gain(hertz) * Complex64::new(1.0, std::f64::consts::TAU * hertz * 10e-6 * esr))
}

#[test]
fn windows_are_found_with_their_kind_and_edges() {
    let grid = esr_grid(1e-3, 30.0, 24);
    let goal = Goal { phase: 45.0, modulus: 0.0 };
    let two_sided = window_of(with_esr_zero, &grid, &goal);
    assert_eq!(two_sided.kind, WindowKind::TwoSided);
    for (edge, side) in [(two_sided.low(), 1.0), (two_sided.high(), -1.0)] {
        let edge = edge.unwrap();
        assert!((with_esr_zero(edge).phase.unwrap() - 45.0).abs() < 0.01);
        assert!(with_esr_zero(edge * (1.0 - 0.01 * side)).phase.unwrap() < 45.0);
    }
    let kinds = |phase: f64, least: f64, largest: f64| {
        window_of(with_esr_zero, &esr_grid(least, largest, 12), &Goal { phase, modulus: 0.0 }).kind
    };
    assert_eq!(kinds(45.0, 1e-3, 3.0), WindowKind::Lower);
    assert_eq!(kinds(45.0, 1.0, 30.0), WindowKind::Upper);
    assert_eq!(kinds(45.0, 1.0, 3.0), WindowKind::All);
    assert_eq!(kinds(85.0, 1e-3, 30.0), WindowKind::None);
    // Two peaks of the margin are two windows.
    let peaks = |ohms: f64| Margins {
        phase: Some(50.0 * (ohms.log10() * std::f64::consts::PI).cos().abs()),
        ..Margins::BOUNDLESS
    };
    let split = window_of(peaks, &esr_grid(0.03, 30.0, 40), &goal);
    assert_eq!(split.kind, WindowKind::Split);
    assert_eq!(split.spans.len(), 3);
    // A window between two points of the grid is found by its peak.
    let narrow = |ohms: f64| Margins { phase: Some(46.0 - 40.0 * (ohms / 0.42).ln().abs()), ..Margins::BOUNDLESS };
    let found = window_of(narrow, &esr_grid(1e-3, 30.0, 12), &goal);
    assert_eq!(found.kind, WindowKind::TwoSided);
    close(found.low().unwrap(), 0.42 * (-1.0_f64 / 40.0).exp(), 1e-4);
    close(found.high().unwrap(), 0.42 * (1.0_f64 / 40.0).exp(), 1e-4);
    assert_eq!(window_of(narrow, &[], &goal).kind, WindowKind::None);
}

#[test]
fn a_modulus_margin_narrows_a_window() {
    let grid = esr_grid(1e-3, 30.0, 24);
    let by_phase = window_of(with_esr_zero, &grid, &Goal { phase: 30.0, modulus: 0.0 });
    let by_both = window_of(with_esr_zero, &grid, &Goal { phase: 30.0, modulus: 0.7 });
    assert!(by_both.low().unwrap() > by_phase.low().unwrap());
    assert!((with_esr_zero(by_both.low().unwrap()).modulus - 0.7).abs() < 0.01);
}

#[test]
fn margins_of_several_loads_are_the_worst_of_each() {
    let one = Margins { phase: Some(50.0), crossover: Some(1e4), modulus: 0.5, modulus_at: 2e4 };
    let other = Margins { phase: Some(60.0), crossover: Some(1e5), modulus: 0.4, modulus_at: 3e4 };
    let both = Margins { phase: Some(50.0), crossover: Some(1e4), modulus: 0.4, modulus_at: 3e4 };
    assert_eq!((one.worse(other), other.worse(one)), (both, both));
    assert_eq!(Margins::BOUNDLESS.worse(one), one);
}
