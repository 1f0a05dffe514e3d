//! Rectified supplies: the peak, and the valley that the reservoir leaves at the load.

use std::f64::consts::{PI, SQRT_2};

use super::current::Drawn;
use super::drop::SILICON;
use super::element::Element;
use crate::board::SupplyEntry;
use crate::circuit::{DeviceId, DeviceKind, NetId};
use crate::facts::Facts;
use crate::knowledge::Sign;
use crate::quantity::{Dimension, Evidence, Grade, Pair, Quantity, Range, Settle, Slope, Table};
use crate::recognize::{Rectified, Side};

/// The frequency of a supply that states none, hertz: low, nominal, high.
const MAINS: (f64, f64, f64) = (50.0, 50.0, 60.0);
/// Steps by which the conduction angle is halved: enough for a double.
const HALVINGS: usize = 60;

/// A rectifier with a reservoir, all in SI units: peak of the winding's voltage less the diodes, load current, source
/// resistance, capacitance, frequency.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reservoir {
    /// Volts: √2 times the rms voltage, less the drops of the diodes in the way.
    pub peak: f64,
    /// Amperes.
    pub load: f64,
    /// Ohms of winding and wiring.
    pub resistance: f64,
    /// Farads.
    pub capacitance: f64,
    /// Hertz of the alternating supply.
    pub frequency: f64,
    /// Whether both half waves charge it.
    pub full_wave: bool,
}

impl Reservoir {
    /// Charges in a period.
    fn pulses(self) -> f64 {
        if self.full_wave { 2.0 } else { 1.0 }
    }

    /// Volts to which the reservoir is charged at the load. With a source resistance R the current of a large reservoir
    /// flows within ±θ of the crest, V = V_peak cos θ and I = p V_peak (sin θ − θ cos θ) / (π R) with p charges in a
    /// period (the integral of (V_peak cos x − V) / R); without R it is the peak.
    #[must_use]
    pub fn charged(self) -> f64 {
        if self.resistance <= 0.0 || self.load <= 0.0 || self.peak <= 0.0 {
            return self.peak;
        }
        let wanted = self.load * PI * self.resistance / (self.pulses() * self.peak);
        let (mut low, mut high) = (0.0, PI / 2.0);
        for _ in 0..HALVINGS {
            let angle = f64::midpoint(low, high);
            if angle.sin() - angle * angle.cos() < wanted {
                low = angle;
            } else {
                high = angle;
            }
        }
        self.peak * f64::midpoint(low, high).cos()
    }

    /// Peak-to-peak ripple in volts, I / (p f C) with p charges in a period: the load drains the reservoir for the
    /// whole of the time between two charges (Malvino, Bates: Electronic Principles, 7th edition, section 4-6), so that
    /// the true ripple is a little less.
    #[must_use]
    pub fn ripple(self) -> f64 {
        let drained = self.pulses() * self.frequency * self.capacitance;
        if drained > 0.0 { self.load / drained } else { f64::INFINITY }
    }

    /// The lowest voltage between two charges, volts, not below zero.
    #[must_use]
    pub fn valley(self) -> f64 {
        if self.load <= 0.0 { self.peak.max(0.0) } else { (self.charged() - self.ripple()).max(0.0) }
    }
}

impl Facts<'_> {
    /// The voltage of a rectified supply, signed: from the valley at the peak load to the peak at the least.
    pub(super) fn rectified(&self, entry: &SupplyEntry, rectifier: &Rectified) -> Option<Quantity> {
        let valley = self.reservoir_voltage(entry, rectifier, Drawn::Peak, Reservoir::valley)?;
        let peak = self.reservoir_voltage(entry, rectifier, Drawn::Peak, Reservoir::charged)?;
        Some(signed(rectifier, valley.hull(&peak)))
    }

    /// The mean voltage of a rectified supply at the continuous load, signed: what heats.
    pub(super) fn rectified_mean(&self, entry: &SupplyEntry, rectifier: &Rectified) -> Option<Quantity> {
        let mean = |reservoir: Reservoir| f64::midpoint(reservoir.valley(), reservoir.charged().max(0.0));
        Some(signed(rectifier, self.reservoir_voltage(entry, rectifier, Drawn::Continuous, mean)?))
    }

    fn reservoir_voltage(
        &self,
        entry: &SupplyEntry,
        rectifier: &Rectified,
        drawn: Drawn,
        of: impl Fn(Reservoir) -> f64,
    ) -> Option<Quantity> {
        let name = &self.circuit().net(rectifier.net).name;
        let winding = entry.ac.as_ref()?.quantity(Dimension::VOLTAGE, format!("rms voltage ahead of {name}"));
        let winding = if rectifier.centre_tap { winding.scaled(0.5) } else { winding };
        let load = self.drawn(rectifier.net, drawn);
        let diode = self.rectifier_drop(rectifier, &load, drawn);
        let resistance = match &entry.resistance {
            Some(declared) => declared.quantity(Dimension::RESISTANCE, format!("source resistance ahead of {name}")),
            None => Quantity::constant(Dimension::RESISTANCE, 0.0),
        };
        let capacitance = self.reservoir(rectifier.net);
        let frequency = self.mains_frequency(entry, rectifier.net);
        let drops = f64::from(rectifier.drops);
        let inputs = [
            (&winding, Slope::Rising),
            (&diode, Slope::Falling),
            (&load, Slope::Falling),
            (&resistance, Slope::Falling),
            (&capacitance, Slope::Rising),
            (&frequency, Slope::Rising),
        ];
        Some(Quantity::monotone(Dimension::VOLTAGE, &inputs, |v| match v {
            [winding, diode, load, resistance, capacitance, frequency] => of(Reservoir {
                peak: (SQRT_2 * winding - drops * diode).max(0.0),
                load: *load,
                resistance: *resistance,
                capacitance: *capacitance,
                frequency: *frequency,
                full_wave: rectifier.full_wave,
            }),
            _ => f64::NAN,
        }))
    }

    fn rectifier_drop(&self, rectifier: &Rectified, load: &Quantity, drawn: Drawn) -> Quantity {
        match rectifier.devices.first() {
            Some(first) if self.circuit().device(*first).kind == DeviceKind::Schottky => self
                .series_drop(*first, Element::Diode { schottky: true }, rectifier.net, drawn)
                .unwrap_or_else(|| Quantity::constant(Dimension::VOLTAGE, 0.0)),
            Some(first) => self.forward_drop(*first, SILICON, load),
            None => Quantity::constant(Dimension::VOLTAGE, 0.0),
        }
    }

    /// The capacitance of a reservoir: tolerance and age count, bias does not, for electrolytics have none.
    fn reservoir(&self, net: NetId) -> Quantity {
        let bank = self.bank_at(net, None, Side::Output);
        let parts: Vec<DeviceId> = bank.branches.iter().map(|branch| branch.capacitor).collect();
        let name = &self.circuit().net(net).name;
        let none = Evidence::new(Grade::Drawn, format!("reservoir on {name}"), "as drawn");
        let start = Quantity::fact(Dimension::CAPACITANCE, Range::exactly(0.0), none);
        parts.iter().fold(start, |sum, device| sum.plus(&self.unbiased_capacitance(*device)))
    }

    fn mains_frequency(&self, entry: &SupplyEntry, net: NetId) -> Quantity {
        let name = &self.circuit().net(net).name;
        let what = format!("frequency ahead of {name}");
        if let Some(frequency) = &entry.frequency {
            return frequency.quantity(Dimension::FREQUENCY, what);
        }
        let (low, nominal, high) = MAINS;
        let target = entry.nodes.value.nets().next().unwrap_or_default();
        let evidence = Evidence::new(Grade::Assumed, what, "none declared").settled_by(Settle::new(
            Table::Supply,
            target,
            "frequency",
            "50 Hz",
        ));
        Quantity::given(Dimension::FREQUENCY, Range::clamped(low, nominal, high), Pair::NOT_NEGATIVE, evidence)
    }
}

fn signed(rectifier: &Rectified, voltage: Quantity) -> Quantity {
    if rectifier.sign == Sign::Negative { voltage.negated() } else { voltage }
}
