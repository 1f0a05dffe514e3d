//! Loop gain by double injection, as a function of what lies at the output.

use std::sync::Arc;

use num_complex::Complex64;

use super::SolveError;
use super::circuit::{Circuit, DeviceId, Node};
use super::matrix::{Lu, Matrix};
use super::solution::Solution;
use super::system::System;

/// Frequencies at which a loop is looked at, rising, in hertz.
#[derive(Debug, Clone, PartialEq)]
pub struct Frequencies(Arc<[f64]>);

impl Frequencies {
    /// Evenly spaced by their logarithm, from the lowest to about the highest, both in hertz.
    #[must_use]
    pub fn per_decade(lowest: f64, highest: f64, count: u32) -> Self {
        let ratio = (highest / lowest).log10() * f64::from(count);
        // At most so many as a dense scan of any audio or radio range needs.
        let steps = if ratio.is_finite() { ratio.round().clamp(0.0, 10_000.0) as u32 } else { 0 };
        let step = |number: u32| lowest * 10_f64.powf(f64::from(number) / f64::from(count.max(1)));
        Self((0..=steps).map(step).collect())
    }

    /// All of them.
    #[must_use]
    pub fn hertz(&self) -> &[f64] {
        &self.0
    }
}

impl Default for Frequencies {
    /// 10 Hz to 100 MHz, 40 a decade.
    fn default() -> Self {
        Self::per_decade(10.0, 100e6, 40)
    }
}

/// The loop gain at one frequency: `T = (a + b Y) / (c + d Y)` over the admittance Y at the output.
#[derive(Debug, Clone, Copy)]
pub(super) struct Term {
    pub(super) hertz: f64,
    over: [Complex64; 2],
    under: [Complex64; 2],
}

impl Term {
    /// Numerator and denominator of the loop gain with an admittance at the output, in siemens.
    pub(super) fn with(&self, admittance: Complex64) -> (Complex64, Complex64) {
        let [a, b] = self.over;
        let [c, d] = self.under;
        (a + b * admittance, c + d * admittance)
    }
}

/// The gain around a loop at one operating point, for any network at the output.
///
/// The loop is broken at a voltage source of 0 V from the driver's side to the receiver's side. With unit voltage
/// injected there the driver's side has v1 and i1, with unit current into the driver's side v2 and i2, and
/// `W = 2 (i1 v2 − v1 i2) + v1 + i2`, `T = W / (1 − W)`: impedances at the break need not be known (Middlebrook,
/// *Measurement of loop gain in feedback systems*, Int. J. Electronics 38, 1975; Tian, Visvanathan, Hantgan, Kundert,
/// *Striving for small-signal stability*, IEEE Circuits and Devices 17, 2001). T is positive at DC where the feedback is
/// negative.
///
/// The circuit is factored once a frequency. An admittance at the output changes its matrix by rank one, so that by the
/// formula of Sherman and Morrison v, i, and their determinant are each a ratio of first degree in it, and so is T.
#[derive(Debug, Clone)]
pub struct LoopGain {
    terms: Vec<Term>,
}

impl LoopGain {
    /// The loop of a circuit around a solution at rest; `output` is where networks are put, against ground.
    ///
    /// # Errors
    /// Where the break is no voltage source, the output is ground, or the circuit leaves an unknown undetermined.
    pub fn new(
        circuit: &Circuit,
        solution: &Solution,
        at_break: DeviceId,
        output: Node,
        frequencies: &Frequencies,
    ) -> Result<Self, SolveError> {
        let mut system = System::new(circuit)?;
        let mut x = system.zeros();
        x.iter_mut().zip(solution.unknowns()).for_each(|(own, known)| *own = *known);
        let (conductance, capacitance) = system.small_signals(&x);
        let placed = circuit.devices().get(at_break.number()).ok_or(SolveError::UnknownDevice)?;
        let branch = system.branch_of(at_break);
        let branch = branch.ok_or_else(|| SolveError::NoSource { device: placed.name.clone() })?;
        let driver = placed.nodes.first().map_or(system.count(), |node| system.unknown_of(*node));
        let output = system.unknown_of(output);
        if driver >= system.count() || output >= system.count() {
            return Err(SolveError::UnknownNode);
        }
        let mut solver = Ports::new(&conductance, &capacitance, [branch, driver, output]);
        let terms = frequencies.hertz().iter().map(|hertz| solver.term(*hertz));
        let terms = terms.collect::<Result<_, usize>>();
        Ok(Self { terms: terms.map_err(|place| SolveError::Singular { place: system.name(place) })? })
    }

    pub(super) fn terms(&self) -> &[Term] {
        &self.terms
    }

    /// The loop gain at each frequency, with an admittance in siemens at the output.
    pub fn gains(&self, admittance: impl Fn(f64) -> Complex64) -> impl Iterator<Item = (f64, Complex64)> {
        self.terms.iter().map(move |term| {
            let (over, under) = term.with(admittance(term.hertz));
            (term.hertz, over / under)
        })
    }
}

/// A circuit seen from the break and the output alone.
struct Ports<'a> {
    conductance: &'a Matrix<f64>,
    capacitance: &'a Matrix<f64>,
    /// The places of the break's current, the driver's node and the output.
    places: [usize; 3],
    pencil: Matrix<Complex64>,
    lu: Lu<Complex64>,
    right_side: Vec<Complex64>,
    solution: Vec<Complex64>,
}

impl<'a> Ports<'a> {
    fn new(conductance: &'a Matrix<f64>, capacitance: &'a Matrix<f64>, places: [usize; 3]) -> Self {
        let order = conductance.order();
        let zeros = vec![Complex64::default(); order];
        Self {
            conductance,
            capacitance,
            places,
            pencil: Matrix::new(order),
            lu: Lu::new(order),
            right_side: zeros.clone(),
            solution: zeros,
        }
    }

    /// The break's current and the voltages of driver and output, for a one in an equation.
    fn response(&mut self, row: usize) -> [Complex64; 3] {
        self.right_side.fill(Complex64::default());
        if let Some(one) = self.right_side.get_mut(row) {
            *one = Complex64::new(1.0, 0.0);
        }
        self.lu.solve(&mut self.right_side, &mut self.solution);
        self.places.map(|place| self.solution.get(place).copied().unwrap_or_default())
    }

    fn term(&mut self, hertz: f64) -> Result<Term, usize> {
        self.pencil.set_pencil(self.conductance, self.capacitance, std::f64::consts::TAU * hertz);
        self.lu.factor(&self.pencil)?;
        let [branch, driver, output] = self.places;
        let [i1, v1, o1] = self.response(branch);
        let [i2, v2, o2] = self.response(driver);
        let [i3, v3, o3] = self.response(output);
        // A network of admittance Y takes Y · (output's voltage) out there: each response loses as much of the third.
        let one = Complex64::new(1.0, 0.0);
        let bare = 2.0 * (i1 * v2 - v1 * i2) + v1 + i2;
        let taken = 2.0 * (o1 * (i3 * v2 - v3 * i2) + o2 * (v3 * i1 - i3 * v1)) + v3 * o1 + i3 * o2;
        let with_network = bare * o3 - taken;
        Ok(Term { hertz, over: [bare, with_network], under: [one - bare, o3 - with_network] })
    }
}
