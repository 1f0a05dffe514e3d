//! The arithmetic of a published loop: its margins with a bank at the output, and the ESR window that they leave.

use num_complex::Complex64;

use crate::solve::{
    Frequencies, Goal, LOAD_SHARES, Margins, Network, SeriesRc, Window, WindowKind, esr_grid, margins, window_of,
    wrapped,
};

/// The ESR that is searched for a window, in ohms, and at how many values.
const ESR: (f64, f64, u32) = (1e-3, 100.0, 24);
/// An upper edge that is none, in ohms.
pub(super) const NO_EDGE: f64 = f64::MAX;

/// Where each input of the computation stands in the list of their values.
#[derive(Debug, Clone, Copy)]
pub(super) struct Layout {
    pub(super) poles: usize,
    pub(super) zeros: usize,
    /// Whether an output resistance is given.
    pub(super) resistance: bool,
    /// Whether the resistance of the full load is given.
    pub(super) load: bool,
}

/// A loop with every figure settled.
#[derive(Debug, Clone)]
pub(super) struct Shape {
    gain: f64,
    poles: Vec<f64>,
    zeros: Vec<f64>,
    /// Siemens of the output itself, and of the full load.
    conductances: (f64, f64),
    bank: Vec<SeriesRc>,
    frequencies: Frequencies,
}

/// The gain at a frequency in hertz but for the output: numerator and denominator.
type Inside = (f64, Complex64, Complex64);

impl Shape {
    /// The inputs in the order of the layout: gain, poles, zeros, output resistance, load, then farads and ohms of each
    /// capacitor.
    pub(super) fn new(layout: Layout, inputs: &[f64], frequencies: &Frequencies) -> Self {
        let mut rest = inputs.iter().copied();
        let gain = rest.next().unwrap_or(f64::NAN);
        let poles = rest.by_ref().take(layout.poles).collect();
        let zeros = rest.by_ref().take(layout.zeros).collect();
        let mut siemens = |given: bool| if given { rest.next().map_or(f64::NAN, f64::recip) } else { 0.0 };
        let conductances = (siemens(layout.resistance), siemens(layout.load));
        let mut bank = Vec::new();
        while let (Some(farads), Some(ohms)) = (rest.next(), rest.next()) {
            bank.push(SeriesRc { farads, ohms });
        }
        Self { gain, poles, zeros, conductances, bank, frequencies: frequencies.clone() }
    }

    fn inside(&self) -> Vec<Inside> {
        let product = |corners: &[f64], hertz: f64| {
            corners.iter().fold(Complex64::from(1.0), |product, at| product * Complex64::new(1.0, hertz / at))
        };
        let hertz = self.frequencies.hertz().iter();
        hertz.map(|hertz| (*hertz, self.gain * product(&self.zeros, *hertz), product(&self.poles, *hertz))).collect()
    }

    /// The least margins over the loads. `Z(s) / Z(0) = 1 / (1 + R Y(s))`, where R is the output's resistance beside the
    /// load's and Y the admittance of the bank.
    fn worst(&self, inside: &[Inside], network: &Network) -> Margins {
        let admittances: Vec<Complex64> = inside.iter().map(|(hertz, ..)| network.admittance(*hertz)).collect();
        let (own, full) = self.conductances;
        LOAD_SHARES.iter().fold(Margins::BOUNDLESS, |worst, share| {
            let ohms = 1.0 / (own + full * share);
            let gains = inside
                .iter()
                .zip(&admittances)
                .map(|((hertz, over, under), admittance)| (*hertz, *over, under * (1.0 + ohms * admittance)));
            let last = gains.clone().next_back();
            worst.worse(crossed(margins(gains), last))
        })
    }

    /// The least margins over the loads with the bank as it is.
    pub(super) fn margins(&self) -> Margins {
        self.worst(&self.inside(), &Network { capacitors: self.bank.clone() })
    }

    /// The ESR of the bank's first capacitor with which the margins reach a goal at every load.
    pub(super) fn window(&self, goal: &Goal) -> Window {
        let inside = self.inside();
        let with = |ohms: f64| {
            let mut network = Network { capacitors: self.bank.clone() };
            if let Some(bulk) = network.capacitors.first_mut() {
                bulk.ohms = ohms;
            }
            self.worst(&inside, &network)
        };
        window_of(with, &esr_grid(ESR.0, ESR.1, ESR.2), goal)
    }
}

/// Where the gain is still above one at the highest frequency, the margin there: a crossing beyond has no more.
fn crossed(found: Margins, last: Option<Inside>) -> Margins {
    match (found.phase, last) {
        (None, Some((hertz, over, under))) if over.norm() > under.norm() => {
            let phase = wrapped(180.0 + (over / under).arg().to_degrees());
            Margins { phase: Some(phase), crossover: Some(hertz), ..found }
        }
        _ => found,
    }
}

/// The edges of a window in ohms: 0 and [`NO_EDGE`] where it is open, its best value twice where nothing will do.
pub(super) fn edges(window: &Window) -> (f64, f64) {
    match window.kind {
        WindowKind::None => (window.best, window.best),
        _ => (window.low().unwrap_or(0.0), window.high().unwrap_or(NO_EDGE)),
    }
}
