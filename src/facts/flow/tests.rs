//! Rectifiers against published examples, and the structure of small boards.

use super::rectify::Reservoir;

fn reservoir(peak: f64, load: f64, capacitance: f64, full_wave: bool) -> Reservoir {
    Reservoir { peak, load, resistance: 0.0, capacitance, frequency: 60.0, full_wave }
}

#[track_caller]
fn near(found: f64, wanted: f64, part: f64) {
    assert!((found - wanted).abs() <= part * wanted.abs(), "{found} against {wanted}");
}

/// Malvino, Bates: Electronic Principles, 7th edition, examples 4-7 and 4-8: 120 V, 5 : 1, ideal diodes, 5 kΩ, 100 µF,
/// 60 Hz; a bridge gives 34 V and 0.57 V of ripple, a centre tap 17 V and 0.28 V.
#[test]
fn the_ripple_of_a_textbook_bridge_and_of_a_centre_tap_is_found() {
    let secondary = 120.0 / 5.0;
    for (rms, peak, ripple) in [(secondary, 34.0, 0.57), (secondary / 2.0, 17.0, 0.28)] {
        let volts = std::f64::consts::SQRT_2 * rms;
        let found = reservoir(volts, volts / 5e3, 100e-6, true);
        near(found.charged(), peak, 0.003);
        near(found.ripple(), ripple, 0.011);
    }
}

/// A common textbook form (after Boylestad) gives 17.76 V and 8.35 V for these as lowest input; that is the average. What
/// a regulator meets is the valley.
#[test]
fn a_regulator_meets_the_valley_and_not_the_average() {
    for (peak, load, farads, average, valley) in
        [(24.0, 0.3, 200e-6, 17.76, 11.5), (15.0, 0.4, 250e-6, 8.35, 5.0 / 3.0)]
    {
        let found = reservoir(peak, load, farads, true);
        near(found.valley(), valley, 1e-9);
        // The book's form, 2.4 mA/µF at 60 Hz, times the square root of three.
        near(peak - 3_f64.sqrt() * 2.4 * (load * 1e3) / (farads * 1e6), average, 1e-3);
        assert!(found.valley() < average - 1.0);
    }
}

/// With V = V_peak cos θ the integral over the conduction angle gives back the load.
#[test]
fn a_source_resistance_lowers_the_charge_by_the_conduction_angle() {
    let found = Reservoir { resistance: 2.0, ..reservoir(20.0, 0.5, 1.0, true) };
    let charged = found.charged();
    let steps = 200_000;
    let sum: f64 = (0..steps)
        .map(|step| std::f64::consts::PI * (f64::from(step) + 0.5) / f64::from(steps))
        .map(|angle| ((20.0 * angle.sin() - charged) / 2.0).max(0.0))
        .sum();
    near(sum / f64::from(steps), 0.5, 1e-4);
    assert!((16.0..16.6).contains(&charged), "{charged}");
    assert!(Reservoir { full_wave: false, ..found }.charged() < charged);
}

#[test]
fn without_reservoir_or_without_load_the_valley_is_nothing_or_the_peak() {
    assert!(reservoir(12.0, 0.1, 0.0, true).valley().abs() < 1e-12);
    near(reservoir(12.0, 0.0, 0.0, true).valley(), 12.0, 1e-12);
    near(reservoir(12.0, 0.01, 1000e-6, false).ripple(), 0.01 / (60.0 * 1000e-6), 1e-12);
}
