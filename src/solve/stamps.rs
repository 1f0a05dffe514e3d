//! What a device says of itself at given voltages.

/// Most unknowns that one device touches.
pub const MOST_LOCAL: usize = 8;

/// The thermal voltage kT/q at 27 °C (300.15 K), in volts; k and q are exact in the SI.
pub const THERMAL_VOLTAGE: f64 = 1.380_649e-23 * 300.15 / 1.602_176_634e-19;

/// Where a device is evaluated.
#[derive(Debug)]
pub struct At<'a> {
    /// The device's own unknowns: the voltages of its terminals and inner nodes, then its branch currents.
    pub unknowns: &'a [f64],
    /// The junction voltages at which it was last evaluated, as many as it asked for; it leaves the new ones.
    pub last: &'a mut [f64],
    /// A small conductance that lies across each junction, in siemens.
    pub gmin: f64,
    /// Whether junction voltages are limited; not where a solution is taken over.
    pub limits: bool,
    /// Whether charges are asked for; at rest they do not matter.
    pub moves: bool,
}

impl At<'_> {
    /// One of the device's unknowns; zero for one that it does not have.
    #[must_use]
    pub fn unknown(&self, place: usize) -> f64 {
        self.unknowns.get(place).copied().unwrap_or(0.0)
    }

    /// The voltage between two of the device's nodes.
    #[must_use]
    pub fn across(&self, plus: usize, minus: usize) -> f64 {
        self.unknown(plus) - self.unknown(minus)
    }

    /// A remembered junction voltage.
    #[must_use]
    pub fn remembered(&self, place: usize) -> f64 {
        self.last.get(place).copied().unwrap_or(0.0)
    }

    /// Remembers a junction voltage.
    pub fn remember(&mut self, place: usize, voltage: f64) {
        if let Some(last) = self.last.get_mut(place) {
            *last = voltage;
        }
    }
}

/// How a current or charge depends on the voltage between two of a device's nodes.
#[derive(Debug, Clone, Copy)]
pub struct Control {
    /// The node of higher voltage.
    pub plus: usize,
    /// The other node.
    pub minus: usize,
    /// The derivative: siemens for a current, farads for a charge.
    pub slope: f64,
    /// By how much the voltage lies above the one that the device was evaluated at, because that was limited.
    pub excess: f64,
}

/// An entry of one of a device's small matrices.
#[derive(Debug, Clone, Copy)]
pub(super) struct Entry {
    pub(super) row: usize,
    pub(super) column: usize,
    pub(super) value: f64,
}

/// A device's currents and charges and their derivatives, over its own unknowns.
///
/// The currents of a node flow from it into the device. The row of a branch current is an equation of the device's own,
/// which is zero when it holds. Everything in SI units.
#[derive(Debug, Default)]
pub struct Stamps {
    pub(super) currents: Vec<(usize, f64)>,
    pub(super) slopes: Vec<Entry>,
    pub(super) charges: Vec<(usize, f64)>,
    pub(super) capacitances: Vec<Entry>,
    pub(super) drives: Vec<(usize, f64)>,
    pub(super) limited: bool,
}

impl Stamps {
    pub(super) fn clear(&mut self) {
        self.currents.clear();
        self.slopes.clear();
        self.charges.clear();
        self.capacitances.clear();
        self.drives.clear();
        self.limited = false;
    }

    /// A current from one node through the device to another, and what it depends on.
    pub fn current(&mut self, from: usize, to: usize, amperes: f64, controls: &[Control]) {
        let total: f64 = controls.iter().fold(amperes, |sum, control| sum + control.slope * control.excess);
        self.currents.push((from, total));
        self.currents.push((to, -total));
        for control in controls {
            spread(&mut self.slopes, from, to, control);
        }
    }

    /// A charge between two nodes, on the side of the first, and what it depends on.
    pub fn charge(&mut self, from: usize, to: usize, coulombs: f64, controls: &[Control]) {
        let total: f64 = controls.iter().fold(coulombs, |sum, control| sum + control.slope * control.excess);
        self.charges.push((from, total));
        self.charges.push((to, -total));
        for control in controls {
            spread(&mut self.capacitances, from, to, control);
        }
    }

    /// A conductance between two nodes, in siemens, at the voltage across it.
    pub fn conductance(&mut self, from: usize, to: usize, siemens: f64, volts: f64) {
        let control = Control { plus: from, minus: to, slope: siemens, excess: 0.0 };
        self.current(from, to, siemens * volts, &[control]);
    }

    /// A linear capacitance between two nodes, in farads, at the voltage across it.
    pub fn capacitance(&mut self, from: usize, to: usize, farads: f64, volts: f64) {
        if farads > 0.0 {
            let control = Control { plus: from, minus: to, slope: farads, excess: 0.0 };
            self.charge(from, to, farads * volts, &[control]);
        }
    }

    /// A current from one node alone, whose return is left out.
    pub fn into_node(&mut self, node: usize, amperes: f64) {
        self.currents.push((node, amperes));
    }

    /// The derivative of a row by one unknown.
    pub fn slope(&mut self, row: usize, column: usize, siemens: f64) {
        self.slopes.push(Entry { row, column, value: siemens });
    }

    /// A term of any row that is linear in one unknown.
    pub fn term(&mut self, row: usize, column: usize, factor: f64, unknown: f64) {
        self.currents.push((row, factor * unknown));
        self.slopes.push(Entry { row, column, value: factor });
    }

    /// A term of any row that is linear in the rate of change of one unknown.
    pub fn rate_term(&mut self, row: usize, column: usize, factor: f64, unknown: f64) {
        self.charges.push((row, factor * unknown));
        self.capacitances.push(Entry { row, column, value: factor });
    }

    /// A multiple of an independent source's level in a row.
    pub fn drive(&mut self, row: usize, factor: f64) {
        self.drives.push((row, factor));
    }

    /// Says that a junction voltage was limited: the iteration has not arrived.
    pub fn limit(&mut self) {
        self.limited = true;
    }
}

fn spread(entries: &mut Vec<Entry>, from: usize, to: usize, control: &Control) {
    let Control { plus, minus, slope, .. } = *control;
    entries.push(Entry { row: from, column: plus, value: slope });
    entries.push(Entry { row: from, column: minus, value: -slope });
    entries.push(Entry { row: to, column: plus, value: -slope });
    entries.push(Entry { row: to, column: minus, value: slope });
}
