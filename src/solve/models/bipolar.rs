//! Bipolar transistors: the core of Gummel and Poon.

use crate::solve::circuit::Device;
use crate::solve::stamps::{At, Control, Stamps, THERMAL_VOLTAGE};

use super::junction::{Depletion, diode_current, limit_junction};
use super::{Polarity, not_negative, positive, positive_or_infinite};

/// SPICE's defaults of VJE and VJC, MJE and MJC.
const BUILT_IN: f64 = 0.75;
const GRADING: f64 = 0.33;
/// The least that base-width modulation leaves of the base charge.
const LEAST_BASE: f64 = 1e-3;

/// A bipolar transistor; nodes: collector, base, emitter. Parameters have SPICE's names and meanings.
///
/// The equations are those of Massobrio, Antognetti, *Semiconductor Device Modeling with SPICE*, chapter 2, Gummel–Poon
/// model, with base charge by VAF and IKF, constant RB, RC, RE, and NF = NR = 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bipolar {
    /// NPN or PNP.
    pub polarity: Polarity,
    /// IS, transport saturation current in amperes.
    pub saturation_current: f64,
    /// BF, largest forward gain.
    pub forward_gain: f64,
    /// BR, largest reverse gain.
    pub reverse_gain: f64,
    /// VAF, forward Early voltage in volts; infinite for none.
    pub early_voltage: f64,
    /// IKF, knee current in amperes; infinite for none.
    pub knee_current: f64,
    /// ISE, saturation current of the base's leakage in amperes.
    pub leakage_current: f64,
    /// NE, emission coefficient of the leakage.
    pub leakage_emission: f64,
    /// RB, base resistance in ohms.
    pub base_resistance: f64,
    /// RC, collector resistance in ohms.
    pub collector_resistance: f64,
    /// RE, emitter resistance in ohms.
    pub emitter_resistance: f64,
    /// CJE, emitter junction's capacitance without bias in farads.
    pub emitter_capacitance: f64,
    /// CJC, collector junction's capacitance without bias in farads.
    pub collector_capacitance: f64,
    /// TF, forward transit time in seconds.
    pub forward_transit: f64,
    /// TR, reverse transit time in seconds.
    pub reverse_transit: f64,
}

impl Bipolar {
    /// A transistor with SPICE's defaults.
    #[must_use]
    pub fn new(polarity: Polarity) -> Self {
        Self {
            polarity,
            saturation_current: 1e-16,
            forward_gain: 100.0,
            reverse_gain: 1.0,
            early_voltage: f64::INFINITY,
            knee_current: f64::INFINITY,
            leakage_current: 0.0,
            leakage_emission: 1.5,
            base_resistance: 0.0,
            collector_resistance: 0.0,
            emitter_resistance: 0.0,
            emitter_capacitance: 0.0,
            collector_capacitance: 0.0,
            forward_transit: 0.0,
            reverse_transit: 0.0,
        }
    }

    /// The nodes behind the resistances of collector, base and emitter.
    fn inner(&self) -> [usize; 3] {
        let resistances = [self.collector_resistance, self.base_resistance, self.emitter_resistance];
        let mut next = 3;
        let mut terminal = 0;
        resistances.map(|resistance| {
            let own = if resistance > 0.0 { next } else { terminal };
            next += usize::from(resistance > 0.0);
            terminal += 1;
            own
        })
    }

    /// The currents at two junction voltages, all in the signs of an NPN.
    fn currents(&self, be: f64, bc: f64, gmin: f64) -> Currents {
        let with_leak = |(amperes, slope): (f64, f64), volts: f64| (amperes + gmin * volts, slope + gmin);
        let forward = with_leak(diode_current(self.saturation_current, THERMAL_VOLTAGE, be), be);
        let reverse = with_leak(diode_current(self.saturation_current, THERMAL_VOLTAGE, bc), bc);
        let leakage = diode_current(self.leakage_current, self.leakage_emission * THERMAL_VOLTAGE, be);
        let width = 1.0 / (1.0 - bc / self.early_voltage).max(LEAST_BASE);
        let root = (1.0 + 4.0 * forward.0 / self.knee_current).max(0.0).sqrt().max(LEAST_BASE);
        let base = width * (1.0 + root) / 2.0;
        let base_by_be = width * forward.1 / self.knee_current / root;
        let base_by_bc = base * width / self.early_voltage;
        let transport = (forward.0 - reverse.0) / base;
        Currents {
            transport,
            transport_by_be: (forward.1 - transport * base_by_be) / base,
            transport_by_bc: (-reverse.1 - transport * base_by_bc) / base,
            base_emitter: (forward.0 / self.forward_gain + leakage.0, forward.1 / self.forward_gain + leakage.1),
            base_collector: (reverse.0 / self.reverse_gain, reverse.1 / self.reverse_gain),
            // The charge in the base that the forward current carries, per second of transit.
            carried: forward.0 / base,
            carried_by_be: (forward.1 - forward.0 * base_by_be / base) / base,
            carried_by_bc: -forward.0 * base_by_bc / (base * base),
            reverse,
        }
    }
}

struct Currents {
    transport: f64,
    transport_by_be: f64,
    transport_by_bc: f64,
    base_emitter: (f64, f64),
    base_collector: (f64, f64),
    carried: f64,
    carried_by_be: f64,
    carried_by_bc: f64,
    reverse: (f64, f64),
}

impl Device for Bipolar {
    fn terminals(&self) -> usize {
        3
    }

    fn inner_nodes(&self) -> usize {
        let resistances = [self.collector_resistance, self.base_resistance, self.emitter_resistance];
        resistances.iter().filter(|resistance| **resistance > 0.0).count()
    }

    fn junctions(&self) -> usize {
        2
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let sign = self.polarity.sign();
        let [collector, base, emitter] = self.inner();
        for (terminal, inner, resistance) in [
            (0, collector, self.collector_resistance),
            (1, base, self.base_resistance),
            (2, emitter, self.emitter_resistance),
        ] {
            if resistance > 0.0 {
                stamps.conductance(terminal, inner, 1.0 / resistance, at.across(terminal, inner));
            }
        }
        let (be, bc) = (sign * at.across(base, emitter), sign * at.across(base, collector));
        let be = limit_junction(at, 0, be, self.saturation_current, THERMAL_VOLTAGE);
        let bc = limit_junction(at, 1, bc, self.saturation_current, THERMAL_VOLTAGE);
        if be.limited || bc.limited {
            stamps.limit();
        }
        let now = self.currents(be.volts, bc.volts, at.gmin);
        let by_be = |slope| Control { plus: base, minus: emitter, slope, excess: sign * be.excess };
        let by_bc = |slope| Control { plus: base, minus: collector, slope, excess: sign * bc.excess };
        let transport = [by_be(now.transport_by_be), by_bc(now.transport_by_bc)];
        stamps.current(collector, emitter, sign * now.transport, &transport);
        stamps.current(base, emitter, sign * now.base_emitter.0, &[by_be(now.base_emitter.1)]);
        stamps.current(base, collector, sign * now.base_collector.0, &[by_bc(now.base_collector.1)]);
        if !at.moves {
            return;
        }
        let depletion = |zero_bias| Depletion { zero_bias, built_in: BUILT_IN, grading: GRADING };
        let (charge, capacitance) = depletion(self.emitter_capacitance).at(be.volts);
        let stored = [
            by_be(capacitance + self.forward_transit * now.carried_by_be),
            by_bc(self.forward_transit * now.carried_by_bc),
        ];
        stamps.charge(base, emitter, sign * (charge + self.forward_transit * now.carried), &stored);
        let (charge, capacitance) = depletion(self.collector_capacitance).at(bc.volts);
        let stored = [by_bc(capacitance + self.reverse_transit * now.reverse.1)];
        stamps.charge(base, collector, sign * (charge + self.reverse_transit * now.reverse.0), &stored);
    }

    fn check(&self) -> Result<(), &'static str> {
        let fine = positive(&[self.saturation_current, self.forward_gain, self.reverse_gain, self.leakage_emission])
            && positive_or_infinite(&[self.early_voltage, self.knee_current])
            && not_negative(&[
                self.leakage_current,
                self.base_resistance,
                self.collector_resistance,
                self.emitter_resistance,
                self.emitter_capacitance,
                self.collector_capacitance,
                self.forward_transit,
                self.reverse_transit,
            ]);
        if fine {
            Ok(())
        } else {
            Err("IS, BF, BR, VAF, IKF and NE must be more than zero, all other parameters zero or more")
        }
    }
}
