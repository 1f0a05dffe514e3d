//! Field-effect transistors: level 1.

use crate::solve::circuit::Device;
use crate::solve::stamps::{At, Control, Stamps, THERMAL_VOLTAGE};

use super::junction::{diode_current, limit_junction};
use super::{Polarity, not_negative, positive};

/// A MOSFET whose bulk is tied to its source; nodes: drain, gate, source. Parameters have SPICE's names and meanings,
/// but that KP is multiplied by W/L already and the capacitances are linear, between the terminals.
///
/// The square law of Shichman and Hodges with channel-length modulation in both regions (Massobrio, Antognetti,
/// *Semiconductor Device Modeling with SPICE*, chapter 4, level 1), and a bulk diode at drain and at source.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Mosfet {
    /// N or P channel.
    pub polarity: Polarity,
    /// VTO, threshold voltage in volts: negative for a P channel that enhances.
    pub threshold: f64,
    /// KP times W/L, in amperes per square volt.
    pub transconductance: f64,
    /// LAMBDA, channel-length modulation per volt.
    pub modulation: f64,
    /// RD, drain resistance in ohms.
    pub drain_resistance: f64,
    /// RS, source resistance in ohms.
    pub source_resistance: f64,
    /// IS, saturation current of the bulk diodes in amperes.
    pub saturation_current: f64,
    /// CGS in farads.
    pub gate_source: f64,
    /// CGD in farads.
    pub gate_drain: f64,
    /// CDS in farads.
    pub drain_source: f64,
}

impl Mosfet {
    /// A transistor with SPICE's defaults.
    #[must_use]
    pub fn new(polarity: Polarity) -> Self {
        Self {
            polarity,
            threshold: 0.0,
            transconductance: 2e-5,
            modulation: 0.0,
            drain_resistance: 0.0,
            source_resistance: 0.0,
            saturation_current: 1e-14,
            gate_source: 0.0,
            gate_drain: 0.0,
            drain_source: 0.0,
        }
    }

    /// The nodes behind the resistances of drain and source.
    fn inner(&self) -> (usize, usize) {
        let has_drain = self.drain_resistance > 0.0;
        let drain = if has_drain { 3 } else { 0 };
        let source = if self.source_resistance > 0.0 { 3 + usize::from(has_drain) } else { 2 };
        (drain, source)
    }

    /// The channel's current and its derivatives by gate and drain voltage, in the signs of an N channel.
    fn channel(&self, gate: f64, drain: f64) -> (f64, f64, f64) {
        if drain < 0.0 {
            // Source and drain have changed places.
            let (current, by_gate, by_drain) = self.channel(gate - drain, -drain);
            return (-current, -by_gate, by_gate + by_drain);
        }
        let over = gate - self.polarity.sign() * self.threshold;
        if over <= 0.0 {
            return (0.0, 0.0, 0.0);
        }
        let stretched = 1.0 + self.modulation * drain;
        let beta = self.transconductance * stretched;
        if over <= drain {
            let current = 0.5 * beta * over * over;
            return (current, beta * over, self.modulation * 0.5 * self.transconductance * over * over);
        }
        let shape = drain * (over - 0.5 * drain);
        let by_drain = beta * (over - drain) + self.modulation * self.transconductance * shape;
        (beta * shape, beta * drain, by_drain)
    }
}

impl Device for Mosfet {
    fn terminals(&self) -> usize {
        3
    }

    fn inner_nodes(&self) -> usize {
        usize::from(self.drain_resistance > 0.0) + usize::from(self.source_resistance > 0.0)
    }

    fn junctions(&self) -> usize {
        2
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let sign = self.polarity.sign();
        let (drain, source) = self.inner();
        for (terminal, inner, resistance) in [(0, drain, self.drain_resistance), (2, source, self.source_resistance)]
        {
            if resistance > 0.0 {
                stamps.conductance(terminal, inner, 1.0 / resistance, at.across(terminal, inner));
            }
        }
        let (gate_volts, drain_volts) = (sign * at.across(1, source), sign * at.across(drain, source));
        let (current, by_gate, by_drain) = self.channel(gate_volts, drain_volts);
        let controls = [
            Control { plus: 1, minus: source, slope: by_gate, excess: 0.0 },
            Control { plus: drain, minus: source, slope: by_drain, excess: 0.0 },
        ];
        stamps.current(drain, source, sign * current, &controls);
        for (memory, inner) in [(0, drain), (1, source)] {
            if inner == 2 {
                continue;
            }
            let across = sign * at.across(2, inner);
            let junction = limit_junction(at, memory, across, self.saturation_current, THERMAL_VOLTAGE);
            if junction.limited {
                stamps.limit();
            }
            let (current, slope) = diode_current(self.saturation_current, THERMAL_VOLTAGE, junction.volts);
            let control = Control { plus: 2, minus: inner, slope: slope + at.gmin, excess: sign * junction.excess };
            stamps.current(2, inner, sign * (current + at.gmin * junction.volts), &[control]);
        }
        if !at.moves {
            return;
        }
        stamps.capacitance(1, 2, self.gate_source, at.across(1, 2));
        stamps.capacitance(1, 0, self.gate_drain, at.across(1, 0));
        stamps.capacitance(0, 2, self.drain_source, at.across(0, 2));
    }

    fn check(&self) -> Result<(), &'static str> {
        let fine = self.threshold.is_finite()
            && positive(&[self.transconductance, self.saturation_current])
            && not_negative(&[
                self.modulation,
                self.drain_resistance,
                self.source_resistance,
                self.gate_source,
                self.gate_drain,
                self.drain_source,
            ]);
        if fine { Ok(()) } else { Err("KP and IS must be more than zero, all others but VTO zero or more") }
    }
}
