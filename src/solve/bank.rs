//! The capacitors at an output, as one network.

use num_complex::Complex64;

/// A capacitor with its equivalent series resistance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SeriesRc {
    /// Capacitance in farads.
    pub farads: f64,
    /// Resistance in series, in ohms.
    pub ohms: f64,
}

impl SeriesRc {
    /// Its admittance at a frequency in hertz: `iωC / (1 + iωCR)`.
    #[must_use]
    pub fn admittance(&self, hertz: f64) -> Complex64 {
        let susceptance = std::f64::consts::TAU * hertz * self.farads;
        let lag = susceptance * self.ohms;
        let share = susceptance / (1.0 + lag * lag);
        Complex64::new(share * lag, share)
    }
}

/// Capacitors in parallel between the output and ground.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Network {
    /// Each of them.
    pub capacitors: Vec<SeriesRc>,
}

impl Network {
    /// Its admittance at a frequency in hertz, in siemens.
    #[must_use]
    pub fn admittance(&self, hertz: f64) -> Complex64 {
        let parts = self.capacitors.iter().map(|capacitor| capacitor.admittance(hertz));
        parts.fold(Complex64::default(), |sum, part| sum + part)
    }
}

/// The bank of an output whose bulk capacitor's ESR is looked for.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Bank {
    /// The bulk capacitor, in farads.
    pub bulk: f64,
    /// All others in parallel, such as ceramics.
    pub others: Vec<SeriesRc>,
}

impl Bank {
    /// The bank with an ESR of the bulk capacitor, in ohms.
    #[must_use]
    pub fn with_esr(&self, ohms: f64) -> Network {
        let mut network = Network { capacitors: Vec::with_capacity(self.others.len() + 1) };
        network.capacitors.push(SeriesRc { farads: self.bulk, ohms });
        network.capacitors.extend_from_slice(&self.others);
        network
    }
}
