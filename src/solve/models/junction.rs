//! What all PN junctions have in common.

use crate::solve::stamps::At;

/// An exponent past which the exponential goes on as a straight line, so that nothing overflows on the way.
const STEEPEST: f64 = 80.0;

/// `exp(x)` and its derivative, a straight line past [`STEEPEST`].
pub(super) fn exponential(x: f64) -> (f64, f64) {
    if x <= STEEPEST {
        let value = x.exp();
        (value, value)
    } else {
        let slope = STEEPEST.exp();
        (slope * (1.0 + x - STEEPEST), slope)
    }
}

/// The current `saturation · (exp(v / width) − 1)` of a junction, in amperes, and its slope in siemens.
pub(super) fn diode_current(saturation: f64, width: f64, volts: f64) -> (f64, f64) {
    let (value, slope) = exponential(volts / width);
    (saturation * (value - 1.0), saturation * slope / width)
}

/// A junction voltage kept from running up its exponential: the new one, and whether it was limited.
///
/// Past the voltage of strongest curvature, steps go as the logarithm of what was asked for (Nagel, *SPICE2: a computer
/// program to simulate semiconductor circuits*, UCB/ERL-M520, 1975, section on limiting).
pub(super) fn limit(volts: f64, last: f64, saturation: f64, width: f64) -> (f64, bool) {
    // Most voltages need no logarithm to be let through.
    if volts <= 0.0 || (volts - last).abs() <= 2.0 * width {
        return (volts, false);
    }
    let bend = width * (width / (std::f64::consts::SQRT_2 * saturation)).ln();
    if volts <= bend {
        return (volts, false);
    }
    if last > 0.0 {
        let stretch = 1.0 + (volts - last) / width;
        (if stretch > 0.0 { last + width * stretch.ln() } else { bend }, true)
    } else {
        (width * (volts / width).ln(), true)
    }
}

/// A junction voltage after limiting, with how far the asked one lies above it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Limited {
    pub(super) volts: f64,
    pub(super) excess: f64,
    pub(super) limited: bool,
}

/// Limits a junction's voltage against the remembered one, and remembers it.
pub(super) fn limit_junction(at: &mut At<'_>, memory: usize, volts: f64, saturation: f64, width: f64) -> Limited {
    if !at.limits {
        at.remember(memory, volts);
        return Limited { volts, excess: 0.0, limited: false };
    }
    let (kept, limited) = limit(volts, at.remembered(memory), saturation, width);
    at.remember(memory, kept);
    Limited { volts: kept, excess: volts - kept, limited }
}

/// The depletion capacitance of a junction.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Depletion {
    /// Capacitance without bias, in farads.
    pub(super) zero_bias: f64,
    /// Built-in voltage, in volts.
    pub(super) built_in: f64,
    /// Grading exponent.
    pub(super) grading: f64,
}

/// The share of the built-in voltage past which the capacitance goes on as a straight line; SPICE's default of FC.
const STRAIGHT_FROM: f64 = 0.5;

impl Depletion {
    /// Its charge in coulombs and capacitance in farads at a voltage (Massobrio, Antognetti, *Semiconductor Device
    /// Modeling with SPICE*, chapter 1: junction charge with the forward bias extrapolated).
    pub(super) fn at(&self, volts: f64) -> (f64, f64) {
        let Self { zero_bias, built_in, grading } = *self;
        if zero_bias <= 0.0 {
            return (0.0, 0.0);
        }
        // 1 − (1 − v/VJ)^(1 − M), exact for the smallest voltages too.
        let charge_to =
            |share: f64| -zero_bias * built_in / (1.0 - grading) * ((1.0 - grading) * (-share).ln_1p()).exp_m1();
        let edge = STRAIGHT_FROM * built_in;
        if volts < edge {
            let share = volts / built_in;
            return (charge_to(share), zero_bias * (1.0 - share).powf(-grading));
        }
        let left = 1.0 - STRAIGHT_FROM;
        let at_edge = zero_bias * left.powf(-grading);
        let rise = at_edge * grading / (built_in * left);
        let above = volts - edge;
        (charge_to(STRAIGHT_FROM) + above * (at_edge + 0.5 * rise * above), at_edge + rise * above)
    }
}
