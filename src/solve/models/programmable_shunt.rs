//! Programmable shunt references: a reference, its amplifier and the transistor that it drives, in three pins.

use crate::solve::circuit::Device;
use crate::solve::stamps::{At, Control, Stamps};

use super::{not_negative, positive};

/// The conductance of the inner node, in siemens; any would do, since the pole is set against it.
const INNER_CONDUCTANCE: f64 = 1e-3;
/// The cathode current at which the reference voltage is stated, in amperes (common practice of data sheets).
const STATED_AT: f64 = 10e-3;
/// The resistor that the cathode works into where its gain-bandwidth is stated, in ohms (common practice of data sheets).
const STATED_INTO: f64 = 230.0;
/// The largest cathode current, in amperes: somewhat above the 100 mA that most are rated for.
const LARGEST_CURRENT: f64 = 0.15;
/// The lowest cathode voltage, and how softly it is reached, of the reference voltage: 2 V of a part of 2.5 V.
const FLOOR: f64 = 0.8;
const SOFTNESS: f64 = 0.016;
/// The voltage over which the current of the reference pin rises from nothing, in volts.
const PIN_RISE: f64 = 0.5;

/// A programmable shunt reference; nodes: cathode, reference, anode.
///
/// What the reference pin lies above the reference voltage passes one pole and makes the cathode current, with a constant
/// transconductance; below [`Self::least_current`] that falls away as an exponential. The cathode current vanishes smoothly
/// where the cathode comes below 0.8 of the reference voltage, for it feeds the amplifier. The inner node's current returns
/// through ground, not through the pins.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ProgrammableShunt {
    /// The reference voltage at 10 mA with the reference pin on the cathode, in volts.
    pub reference: f64,
    /// The dynamic impedance, in ohms: the transconductance is its inverse.
    pub impedance: f64,
    /// The least cathode current at which it regulates, in amperes; the transconductance has fallen to 0.63 there.
    pub least_current: f64,
    /// By how much the reference voltage falls with each volt of the cathode above it.
    pub sensitivity: f64,
    /// The gain-bandwidth product with 230 Ω at the cathode, in hertz.
    pub bandwidth: f64,
    /// The current into the reference pin, in amperes.
    pub pin_current: f64,
}

const CATHODE: usize = 0;
const REFERENCE: usize = 1;
const ANODE: usize = 2;
const INNER: usize = 3;

impl ProgrammableShunt {
    /// How far the reference pin must lie above where the current ends, for the current at which it is stated, in volts.
    fn stated_at(&self) -> f64 {
        let ratio = STATED_AT / self.least_current;
        self.least_current * self.impedance * (ratio + (-(-ratio).exp()).ln_1p())
    }

    /// The limited excess of the reference pin in volts, and its slope.
    fn excess(&self, cathode: f64, reference: f64) -> (f64, f64) {
        let beyond = reference - self.reference + self.sensitivity * (cathode - self.reference) + self.stated_at();
        let most = LARGEST_CURRENT * self.impedance;
        let root = (beyond / most).hypot(1.0);
        (beyond / root, root.powi(-3))
    }

    /// The current that the excess asks for in amperes, and its slope in siemens.
    fn asked(&self, excess: f64) -> (f64, f64) {
        let ratio = excess / (self.least_current * self.impedance);
        let amperes = self.least_current * (ratio.max(0.0) + (-ratio.abs()).exp().ln_1p());
        (amperes, logistic(ratio) / self.impedance)
    }
}

/// `1 / (1 + exp(−x))`.
fn logistic(x: f64) -> f64 {
    1.0 / (1.0 + (-x).exp())
}

impl Device for ProgrammableShunt {
    fn terminals(&self) -> usize {
        3
    }

    fn inner_nodes(&self) -> usize {
        1
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let (cathode, reference) = (at.across(CATHODE, ANODE), at.across(REFERENCE, ANODE));
        let (excess, by_reference) = self.excess(cathode, reference);
        let by_cathode = by_reference * self.sensitivity;
        let inner = at.unknown(INNER);
        stamps.into_node(INNER, INNER_CONDUCTANCE * (inner - excess));
        stamps.slope(INNER, INNER, INNER_CONDUCTANCE);
        stamps.slope(INNER, REFERENCE, -INNER_CONDUCTANCE * by_reference);
        stamps.slope(INNER, CATHODE, -INNER_CONDUCTANCE * by_cathode);
        stamps.slope(INNER, ANODE, INNER_CONDUCTANCE * (by_reference + by_cathode));
        let pole = self.bandwidth * self.impedance / STATED_INTO;
        stamps.rate_term(INNER, INNER, INNER_CONDUCTANCE / (std::f64::consts::TAU * pole), inner);

        let (asked, by_inner) = self.asked(inner);
        let width = SOFTNESS * self.reference;
        let share = logistic((cathode - FLOOR * self.reference) / width);
        let by_share = asked * share * (1.0 - share) / width + at.gmin;
        let control = Control { plus: CATHODE, minus: ANODE, slope: by_share, excess: 0.0 };
        stamps.current(CATHODE, ANODE, asked * share + at.gmin * cathode, &[control]);
        stamps.slope(CATHODE, INNER, by_inner * share);
        stamps.slope(ANODE, INNER, -by_inner * share);

        let bent = (reference / PIN_RISE).tanh();
        let slope = self.pin_current * (1.0 - bent * bent) / PIN_RISE;
        let control = Control { plus: REFERENCE, minus: ANODE, slope, excess: 0.0 };
        stamps.current(REFERENCE, ANODE, self.pin_current * bent, &[control]);
    }

    fn check(&self) -> Result<(), &'static str> {
        let fine = positive(&[self.reference, self.impedance, self.least_current, self.bandwidth])
            && not_negative(&[self.sensitivity, self.pin_current]);
        if fine {
            Ok(())
        } else {
            Err("its voltage, impedance, least current and bandwidth must be more than zero, all else zero or more")
        }
    }
}
