//! The models of devices: one file each, and its line here.

mod bipolar;
mod diode;
mod junction;
mod mosfet;
mod opamp;
mod passive;
mod programmable_shunt;
mod source;

pub use bipolar::Bipolar;
pub use diode::Diode;
pub use mosfet::Mosfet;
pub use opamp::OpAmp;
pub use passive::{Capacitor, Inductor, Resistor};
pub use programmable_shunt::ProgrammableShunt;
pub use source::{CurrentSource, Transconductance, VoltageSource};

/// Whether a device conducts with the signs of the N kind (NPN, N channel) or with all of them reversed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Polarity {
    /// NPN, N channel.
    N,
    /// PNP, P channel.
    P,
}

impl Polarity {
    fn sign(self) -> f64 {
        match self {
            Self::N => 1.0,
            Self::P => -1.0,
        }
    }
}

/// Whether all are finite and more than zero.
fn positive(values: &[f64]) -> bool {
    values.iter().all(|value| value.is_finite() && *value > 0.0)
}

/// Whether all are finite and not below zero.
fn not_negative(values: &[f64]) -> bool {
    values.iter().all(|value| value.is_finite() && *value >= 0.0)
}

/// Whether all are more than zero; infinite ones stand for effects that are left out.
fn positive_or_infinite(values: &[f64]) -> bool {
    values.iter().all(|value| *value > 0.0)
}
