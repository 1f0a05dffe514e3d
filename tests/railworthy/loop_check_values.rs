//! Margins and windows against worked figures: a regulator of a load pole at 159 Hz (100 Ω, 10 µF), poles at 1 kHz and
//! 500 kHz and 80 dB, with the zero of its capacitor's ESR, after National Semiconductor AN-1148, Linear Regulators:
//! Theory of Operation and Compensation.

use std::collections::BTreeMap;
use std::f64::consts::TAU;

use num_complex::Complex64;
use railworthy::solve::{Frequencies, Goal, Margins, WindowKind, esr_grid, margins, window_of};

use crate::shared::shared_folder;

/// The computed values of the rows whose names begin alike.
fn rows(prefix: &str) -> Option<BTreeMap<String, f64>> {
    let text = std::fs::read_to_string(shared_folder()?.join("facts/checkvalues.tsv")).unwrap();
    let fields = text.lines().skip(1).map(|line| line.split('\t').collect::<Vec<_>>());
    let own = fields.filter(|fields| fields[0].starts_with(prefix));
    Some(own.map(|fields| (fields[0].to_owned(), fields[5].parse().unwrap())).collect())
}

fn pole(hertz: f64, at: f64) -> Complex64 {
    1.0 / Complex64::new(1.0, hertz / at)
}

fn corner(ohms: f64, farads: f64) -> f64 {
    1.0 / (TAU * ohms * farads)
}

/// The margins with a bulk capacitor, its ESR and a ceramic.
fn of(bulk: f64, esr: f64, ceramic: f64) -> Margins {
    let gain = |hertz: f64| {
        let inside = 1e4 * pole(hertz, corner(100.0, bulk + ceramic)) * pole(hertz, 1e3) * pole(hertz, 500e3);
        let zero = if esr > 0.0 { pole(hertz, corner(esr, bulk)).inv() } else { Complex64::from(1.0) };
        let shorted = if ceramic > 0.0 && esr > 0.0 {
            pole(hertz, corner(esr, bulk * ceramic / (bulk + ceramic)))
        } else {
            Complex64::from(1.0)
        };
        inside * zero * shorted
    };
    let frequencies = Frequencies::default();
    margins(frequencies.hertz().iter().map(|hertz| (*hertz, gain(*hertz), Complex64::from(1.0))))
}

#[test]
fn margins_are_those_of_the_worked_figures() {
    let Some(rows) = rows("STB-0") else { return };
    let wanted = |name: &str| rows[name];
    assert!((corner(100.0, 10e-6) / wanted("STB-01a") - 1.0).abs() < 1e-5);
    let without = of(10e-6, 0.0, 0.0);
    assert!((without.crossover.unwrap() / wanted("STB-01b") - 1.0).abs() < 1e-3);
    // The row is the phase itself.
    assert!((without.phase.unwrap() - 180.0 - wanted("STB-01c")).abs() < 0.02);
    assert!((corner(1.0, 10e-6) / wanted("STB-02a") - 1.0).abs() < 1e-5);
    for (name, bulk, esr, ceramic) in [
        ("STB-02b", 10e-6, 1.0, 0.0),
        ("STB-03", 10e-6, 20.0, 0.0),
        ("STB-04", 10e-6, 0.05, 0.0),
        ("STB-07-10+0.1", 10e-6, 1.0, 0.1e-6),
        ("STB-07-10+1", 10e-6, 1.0, 1e-6),
        ("STB-07-10+10", 10e-6, 1.0, 10e-6),
        ("STB-07-100+10", 100e-6, 0.3, 10e-6),
    ] {
        let found = of(bulk, esr, ceramic).phase.unwrap();
        assert!((found - wanted(name)).abs() < 0.05, "{name}: {found} against {}", wanted(name));
    }
}

#[test]
fn windows_are_those_of_the_worked_figures() {
    let Some(rows) = rows("STB-05") else { return };
    // The upper edges stand in the rows' notes.
    for (name, phase, high) in [("STB-05-30", 30.0, 17.341), ("STB-05-45", 45.0, 7.024), ("STB-05-60", 60.0, 3.204)] {
        let goal = Goal { phase, modulus: 0.0 };
        let found = window_of(|ohms| of(10e-6, ohms, 0.0), &esr_grid(1e-3, 100.0, 24), &goal);
        assert_eq!(found.kind, WindowKind::TwoSided);
        let (own_low, own_high) = (found.low().unwrap(), found.high().unwrap());
        assert!((own_low / rows[name] - 1.0).abs() < 2e-3, "{name}: {own_low}");
        assert!((own_high / high - 1.0).abs() < 2e-3, "{name}: {own_high}");
    }
}
