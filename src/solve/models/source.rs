//! Independent sources, and a controlled one. A voltage source of 0 V is where a loop is broken for its gain.

use crate::solve::circuit::Device;
use crate::solve::stamps::{At, Control, Stamps};

/// A voltage source from its plus node to its minus node; its current flows from plus to minus through it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct VoltageSource {
    /// Volts.
    pub volts: f64,
}

impl Device for VoltageSource {
    fn terminals(&self) -> usize {
        2
    }

    fn branches(&self) -> usize {
        1
    }

    fn is_linear(&self) -> bool {
        true
    }

    fn level(&self) -> Option<f64> {
        Some(self.volts)
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let current = at.unknown(2);
        stamps.term(0, 2, 1.0, current);
        stamps.term(1, 2, -1.0, current);
        stamps.term(2, 0, 1.0, at.unknown(0));
        stamps.term(2, 1, -1.0, at.unknown(1));
        stamps.drive(2, -1.0);
    }

    fn check(&self) -> Result<(), &'static str> {
        if self.volts.is_finite() { Ok(()) } else { Err("the voltage is no number") }
    }
}

/// A current source, which takes its current from its first node and gives it to its second.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurrentSource {
    /// Amperes.
    pub amperes: f64,
}

impl Device for CurrentSource {
    fn terminals(&self) -> usize {
        2
    }

    fn is_linear(&self) -> bool {
        true
    }

    fn level(&self) -> Option<f64> {
        Some(self.amperes)
    }

    fn stamp(&self, _: &mut At<'_>, stamps: &mut Stamps) {
        stamps.drive(0, 1.0);
        stamps.drive(1, -1.0);
    }

    fn check(&self) -> Result<(), &'static str> {
        if self.amperes.is_finite() { Ok(()) } else { Err("the current is no number") }
    }
}

/// A current from the first node to the second, in proportion to the voltage from the third to the fourth.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Transconductance {
    /// Siemens.
    pub siemens: f64,
}

impl Device for Transconductance {
    fn terminals(&self) -> usize {
        4
    }

    fn is_linear(&self) -> bool {
        true
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let control = Control { plus: 2, minus: 3, slope: self.siemens, excess: 0.0 };
        stamps.current(0, 1, self.siemens * at.across(2, 3), &[control]);
    }

    fn check(&self) -> Result<(), &'static str> {
        if self.siemens.is_finite() { Ok(()) } else { Err("the transconductance is no number") }
    }
}
