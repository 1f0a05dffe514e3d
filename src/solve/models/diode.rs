//! Diodes, zener diodes and shunt references: one junction with its breakdown.

use crate::solve::circuit::Device;
use crate::solve::stamps::{At, Control, Stamps, THERMAL_VOLTAGE};

use super::junction::{Depletion, Limited, diode_current, exponential, limit, limit_junction};
use super::{not_negative, positive, positive_or_infinite};

/// SPICE's defaults of VJ and M.
const BUILT_IN: f64 = 1.0;
const GRADING: f64 = 0.5;

/// A diode from anode to cathode; nodes in that order. Parameters have SPICE's names and meanings.
///
/// `I = IS (exp(v / N Vt) − 1) − IBV exp(−(v + BV) / NBV Vt)`, with RS in series (Massobrio, Antognetti, *Semiconductor
/// Device Modeling with SPICE*, chapter 1; breakdown as an exponential of its own). A shunt reference is a diode with a
/// sharp breakdown.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Diode {
    /// IS, saturation current in amperes.
    pub saturation_current: f64,
    /// N, emission coefficient.
    pub emission: f64,
    /// RS, series resistance in ohms.
    pub series_resistance: f64,
    /// BV, breakdown voltage in volts; infinite for none.
    pub breakdown_voltage: f64,
    /// IBV, current at the breakdown voltage in amperes.
    pub breakdown_current: f64,
    /// NBV, emission coefficient of the breakdown.
    pub breakdown_emission: f64,
    /// CJO, capacitance without bias in farads.
    pub capacitance: f64,
    /// TT, transit time in seconds.
    pub transit_time: f64,
}

impl Default for Diode {
    fn default() -> Self {
        Self {
            saturation_current: 1e-14,
            emission: 1.0,
            series_resistance: 0.0,
            breakdown_voltage: f64::INFINITY,
            breakdown_current: 1e-3,
            breakdown_emission: 1.0,
            capacitance: 0.0,
            transit_time: 0.0,
        }
    }
}

impl Diode {
    fn limited(&self, at: &mut At<'_>, volts: f64) -> Limited {
        let width = self.breakdown_emission * THERMAL_VOLTAGE;
        let begins = (-self.breakdown_voltage + 10.0 * width).min(0.0);
        if volts >= begins || !at.limits {
            let width = self.emission * THERMAL_VOLTAGE;
            return limit_junction(at, 0, volts, self.saturation_current, width);
        }
        // Breakdown is the same exponential, seen from −BV downwards.
        let mirror = |volts: f64| -(volts + self.breakdown_voltage);
        let (kept, limited) = limit(mirror(volts), mirror(at.remembered(0)), self.breakdown_current, width);
        let kept = mirror(kept);
        at.remember(0, kept);
        Limited { volts: kept, excess: volts - kept, limited }
    }
}

impl Device for Diode {
    fn terminals(&self) -> usize {
        2
    }

    fn inner_nodes(&self) -> usize {
        usize::from(self.series_resistance > 0.0)
    }

    fn junctions(&self) -> usize {
        1
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let inner = if self.series_resistance > 0.0 { 2 } else { 0 };
        if inner != 0 {
            stamps.conductance(0, inner, 1.0 / self.series_resistance, at.across(0, inner));
        }
        let across = at.across(inner, 1);
        let Limited { volts, excess, limited } = self.limited(at, across);
        if limited {
            stamps.limit();
        }
        let (forward, forward_slope) = diode_current(self.saturation_current, self.emission * THERMAL_VOLTAGE, volts);
        let (mut amperes, mut slope) = (forward + at.gmin * volts, forward_slope + at.gmin);
        if self.breakdown_voltage.is_finite() {
            let width = self.breakdown_emission * THERMAL_VOLTAGE;
            let (value, rise) = exponential(-(volts + self.breakdown_voltage) / width);
            amperes -= self.breakdown_current * value;
            slope += self.breakdown_current * rise / width;
        }
        stamps.current(inner, 1, amperes, &[Control { plus: inner, minus: 1, slope, excess }]);
        if !at.moves {
            return;
        }
        let depletion = Depletion { zero_bias: self.capacitance, built_in: BUILT_IN, grading: GRADING };
        let (charge, capacitance) = depletion.at(volts);
        let slope = capacitance + self.transit_time * forward_slope;
        if slope > 0.0 {
            let charge = charge + self.transit_time * forward;
            stamps.charge(inner, 1, charge, &[Control { plus: inner, minus: 1, slope, excess }]);
        }
    }

    fn check(&self) -> Result<(), &'static str> {
        let fine =
            positive(&[self.saturation_current, self.emission, self.breakdown_current, self.breakdown_emission])
                && positive_or_infinite(&[self.breakdown_voltage])
                && not_negative(&[self.series_resistance, self.capacitance, self.transit_time]);
        if fine { Ok(()) } else { Err("IS, N, BV, IBV and NBV must be more than zero, RS, CJO and TT zero or more") }
    }
}
