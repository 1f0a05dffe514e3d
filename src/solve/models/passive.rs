//! Resistors, capacitors and inductors.

use crate::solve::circuit::Device;
use crate::solve::stamps::{At, Stamps};

use super::{not_negative, positive};

/// A resistor between two nodes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Resistor {
    /// Resistance in ohms, more than zero.
    pub ohms: f64,
}

impl Device for Resistor {
    fn terminals(&self) -> usize {
        2
    }

    fn is_linear(&self) -> bool {
        true
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        stamps.conductance(0, 1, 1.0 / self.ohms, at.across(0, 1));
    }

    fn check(&self) -> Result<(), &'static str> {
        if positive(&[self.ohms]) { Ok(()) } else { Err("a resistance must be more than zero") }
    }
}

/// A capacitor between two nodes, with its equivalent series resistance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Capacitor {
    /// Capacitance in farads.
    pub farads: f64,
    /// Equivalent series resistance in ohms; zero for none.
    pub esr: f64,
}

impl Device for Capacitor {
    fn terminals(&self) -> usize {
        2
    }

    fn inner_nodes(&self) -> usize {
        usize::from(self.esr > 0.0)
    }

    fn is_linear(&self) -> bool {
        true
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        if self.esr > 0.0 {
            stamps.capacitance(0, 2, self.farads, at.across(0, 2));
            stamps.conductance(2, 1, 1.0 / self.esr, at.across(2, 1));
        } else {
            stamps.capacitance(0, 1, self.farads, at.across(0, 1));
        }
    }

    fn check(&self) -> Result<(), &'static str> {
        let fine = not_negative(&[self.farads, self.esr]);
        if fine { Ok(()) } else { Err("a capacitance and its series resistance must be zero or more") }
    }
}

/// An inductor between two nodes, with the resistance of its winding.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Inductor {
    /// Inductance in henries.
    pub henries: f64,
    /// Series resistance in ohms; zero for none.
    pub ohms: f64,
}

impl Device for Inductor {
    fn terminals(&self) -> usize {
        2
    }

    fn branches(&self) -> usize {
        1
    }

    fn is_linear(&self) -> bool {
        true
    }

    fn stamp(&self, at: &mut At<'_>, stamps: &mut Stamps) {
        let current = at.unknown(2);
        stamps.term(0, 2, 1.0, current);
        stamps.term(1, 2, -1.0, current);
        stamps.term(2, 0, 1.0, at.unknown(0));
        stamps.term(2, 1, -1.0, at.unknown(1));
        stamps.term(2, 2, -self.ohms, current);
        stamps.rate_term(2, 2, -self.henries, current);
    }

    fn check(&self) -> Result<(), &'static str> {
        let fine = not_negative(&[self.henries, self.ohms]);
        if fine { Ok(()) } else { Err("an inductance and its resistance must be zero or more") }
    }
}
