//! Operational amplifiers: a macromodel of one pole, with slew rate and limits of the output.

use crate::solve::circuit::Device;
use crate::solve::stamps::{At, Stamps, THERMAL_VOLTAGE};

use super::junction::{Limited, diode_current, limit_junction};
use super::{not_negative, positive};

/// The capacitance of the inner node, in farads; any would do, since gain, bandwidth and slew rate are set against it.
const INNER_CAPACITANCE: f64 = 40e-12;
/// Saturation current of the diodes that clamp the inner node, in amperes.
const CLAMP_CURRENT: f64 = 1e-14;
/// What such a diode drops at the current of the slewing input stage, in volts.
const CLAMP_DROP: f64 = 0.55;
/// How soft the upper limit bends into the lower one where the supply is too low for both, in square volts.
const BEND: f64 = 1e-4;
/// The least resistance of the output, in ohms.
const LEAST_RESISTANCE: f64 = 1e-3;

/// An operational amplifier; nodes: input +, input −, upper rail, lower rail, output.
///
/// A transconductance with limited current, `Im tanh(gm (v+ + VOS − v−) / Im)`, feeds an inner node of A0/gm in parallel
/// with a capacitance; diodes keep that node away from the rails; a buffer of unity gain and RO drives the output (after
/// Boyle, Cohn, Pederson, Solomon, *Macromodeling of integrated circuit operational amplifiers*, IEEE JSSC 9, 1974). It
/// takes no current from its inputs and rails, has no second pole and no limit of output current.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OpAmp {
    /// A0, open-loop gain at DC.
    pub gain: f64,
    /// GBW, gain-bandwidth product in hertz.
    pub bandwidth: f64,
    /// SR, slew rate in volts per second.
    pub slew_rate: f64,
    /// VOS, offset in volts, in series with the + input.
    pub offset: f64,
    /// TOP, room that the output keeps to the upper rail, in volts.
    pub top: f64,
    /// BOTTOM, room that the output keeps to the lower rail, in volts.
    pub bottom: f64,
    /// RO, output resistance in ohms; below 1 mΩ it counts as that.
    pub output_resistance: f64,
}

impl Default for OpAmp {
    fn default() -> Self {
        Self {
            gain: 1e5,
            bandwidth: 1e6,
            slew_rate: 0.5e6,
            offset: 0.0,
            top: 0.0,
            bottom: 0.0,
            output_resistance: 100.0,
        }
    }
}

const PLUS: usize = 0;
const MINUS: usize = 1;
const UPPER: usize = 2;
const LOWER: usize = 3;
const OUTPUT: usize = 4;
const INNER: usize = 5;

impl OpAmp {
    /// The upper limit of the inner node before its diode, and its derivatives by both rails.
    fn ceiling(&self, upper: f64, lower: f64) -> (f64, f64, f64) {
        let (top, bottom) = (upper - self.top, lower + self.bottom);
        let between = top - bottom;
        let root = (between * between + BEND).sqrt();
        let share = 0.5 * (1.0 + between / root);
        (0.5 * (top + bottom + root) - CLAMP_DROP, share, 1.0 - share)
    }

    fn clamp(at: &mut At<'_>, memory: usize, volts: f64, stamps: &mut Stamps) -> (Limited, f64, f64) {
        let junction = limit_junction(at, memory, volts, CLAMP_CURRENT, THERMAL_VOLTAGE);
        if junction.limited {
            stamps.limit();
        }
        let (current, slope) = diode_current(CLAMP_CURRENT, THERMAL_VOLTAGE, junction.volts);
        (junction, current + at.gmin * junction.volts, slope + at.gmin)
    }
}

impl Device for OpAmp {
    fn terminals(&self) -> usize {
        5
    }

    fn inner_nodes(&self) -> usize {
        1
    }

    fn junctions(&self) -> usize {
        2
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let gm = std::f64::consts::TAU * self.bandwidth * INNER_CAPACITANCE;
        let most = self.slew_rate * INNER_CAPACITANCE;
        let bent = (gm * (at.across(PLUS, MINUS) + self.offset) / most).tanh();
        let by_input = gm * (1.0 - bent * bent);
        let inner = at.unknown(INNER);
        let (ceiling, by_upper, by_lower) = self.ceiling(at.unknown(UPPER), at.unknown(LOWER));
        let floor = at.unknown(LOWER) + self.bottom + CLAMP_DROP;
        let (high, high_current, high_slope) = Self::clamp(at, 0, inner - ceiling, stamps);
        let (low, low_current, low_slope) = Self::clamp(at, 1, floor - inner, stamps);
        let leak = gm / self.gain;

        // The inner node's currents return through ground and the rails' own sources, which they do not load.
        let total = leak * inner - most * bent + (high_current + high_slope * high.excess)
            - (low_current + low_slope * low.excess);
        stamps.into_node(INNER, total);
        stamps.slope(INNER, INNER, leak + high_slope + low_slope);
        stamps.slope(INNER, PLUS, -by_input);
        stamps.slope(INNER, MINUS, by_input);
        stamps.slope(INNER, UPPER, -high_slope * by_upper);
        stamps.slope(INNER, LOWER, -high_slope * by_lower - low_slope);
        stamps.rate_term(INNER, INNER, INNER_CAPACITANCE, inner);

        let conductance = 1.0 / self.output_resistance.max(LEAST_RESISTANCE);
        stamps.into_node(OUTPUT, conductance * at.across(OUTPUT, INNER));
        stamps.slope(OUTPUT, OUTPUT, conductance);
        stamps.slope(OUTPUT, INNER, -conductance);
    }

    fn check(&self) -> Result<(), &'static str> {
        let fine = self.offset.is_finite()
            && positive(&[self.gain, self.bandwidth, self.slew_rate])
            && not_negative(&[self.top, self.bottom, self.output_resistance]);
        if fine { Ok(()) } else { Err("A0, GBW and SR must be more than zero, TOP, BOTTOM and RO zero or more") }
    }
}
