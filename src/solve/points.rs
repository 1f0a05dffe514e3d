//! All operating points of a circuit: a node is forced, and where it needs no current the circuit rests by itself.

use super::SolveError;
use super::circuit::{Circuit, DeviceId, GROUND, Node};
use super::models::VoltageSource;
use super::newton::{newton, solve_at_rest};
use super::solution::Solution;
use super::system::{Setting, System};

/// The first step away from zero, in volts: thresholds of microvolts exist.
const FINEST: f64 = 0.2e-6;
/// The steps on from there, as a factor of the voltage.
const GROWTH: f64 = 1.5;
/// The largest step, as a share of the range.
const LARGEST_SHARE: f64 = 0.02;
/// The least range that is searched, of its limits: steps within it must be numbers of their own.
const LEAST_RANGE: f64 = 1e-9;
/// How narrow an interval is still looked into, of its voltage and at least in volts.
const NARROWEST_SHARE: f64 = 1e-3;
const NARROWEST: f64 = 1e-8;
/// Most iterations from one voltage to the next, and most intervals that wait to be looked into.
const MOST_ITERATIONS: usize = 40;
const MOST_WAITING: usize = 40;
/// How closely a point is found, of its voltage and at least in volts.
const ROOT_SHARE: f64 = 1e-9;
const ROOT_LEAST: f64 = 1e-12;
const MOST_ROOT_STEPS: usize = 60;

/// Where to look for operating points.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Search {
    /// The node that is forced: the reference, or the output.
    pub node: Node,
    /// The lowest voltage in volts, a little below zero for points at zero.
    pub from: f64,
    /// The highest voltage in volts.
    pub to: f64,
}

/// An operating point of a circuit.
#[derive(Debug, Clone, PartialEq)]
pub struct OperatingPoint {
    /// The voltage of the node that was forced, in volts.
    pub volts: f64,
    /// The slope of the current into that node there, in siemens.
    pub slope: f64,
    /// All voltages.
    pub solution: Solution,
}

impl OperatingPoint {
    /// Whether the circuit comes back to it: the node takes current where it is raised.
    #[must_use]
    pub fn is_stable(&self) -> bool {
        self.slope > 0.0
    }
}

/// What was found.
#[derive(Debug, Clone, PartialEq)]
pub struct OperatingPoints {
    /// The points by rising voltage of the forced node.
    pub points: Vec<OperatingPoint>,
    /// How often the curve could not be followed, so that points may hide there.
    pub jumps: usize,
}

/// One forced voltage: the current into the node in amperes, and its slope.
#[derive(Debug, Clone)]
struct Sample {
    volts: f64,
    current: f64,
    slope: f64,
    x: Vec<f64>,
    /// The derivative of all unknowns by the forced voltage.
    tangent: Vec<f64>,
}

struct Curve {
    system: System,
    force: DeviceId,
    branch: usize,
    jumps: usize,
    right_side: Vec<f64>,
    /// The voltage at which the system was last solved.
    last: f64,
}

/// All operating points between two voltages of a node, by continuation.
///
/// Between two neighbouring voltages a change of sign is bisected, and where the tangents at both ends leave room for two
/// changes the interval is halved.
///
/// # Errors
/// As [`super::dc`]; also where the limits are out of order.
pub fn operating_points(circuit: &Circuit, search: &Search) -> Result<OperatingPoints, SolveError> {
    let least_range = LEAST_RANGE * (search.from.abs() + search.to.abs());
    let range = search.to - search.from;
    if !(range.is_finite() && range > least_range && range > 0.0) {
        return Err(SolveError::Limits);
    }
    let mut curve = Curve::new(circuit, search.node)?;
    let mut found = OperatingPoints { points: Vec::new(), jumps: 0 };
    let mut before = curve.first(search.from)?;
    while before.volts < search.to {
        let next = next_voltage(before.volts, search);
        let after = curve.follow(&before, next)?;
        curve.look_between(&before, &after, circuit, &mut found.points)?;
        before = after;
    }
    found.jumps = curve.jumps;
    Ok(found)
}

/// The voltage after one: fine near zero, coarser away from it.
fn next_voltage(volts: f64, search: &Search) -> f64 {
    let largest = LARGEST_SHARE * (search.to - search.from);
    let next = if volts < -FINEST {
        (volts / GROWTH).min(volts + largest)
    } else if volts < 0.0 {
        0.0
    } else {
        f64::max(volts * GROWTH, volts + FINEST)
    };
    let next = if next > -FINEST && next < 0.0 { 0.0 } else { next };
    next.clamp(volts, volts + largest).min(search.to)
}

impl Curve {
    fn new(circuit: &Circuit, node: Node) -> Result<Self, SolveError> {
        if node == GROUND || node.number() >= circuit.node_count() {
            return Err(SolveError::UnknownNode);
        }
        let mut forced = circuit.clone();
        let force = forced.add("the forced node", &[node, GROUND], VoltageSource { volts: 0.0 })?;
        let system = System::new(&forced)?;
        let branch = system.branch_of(force).ok_or(SolveError::UnknownDevice)?;
        let right_side = system.zeros();
        Ok(Self { system, force, branch, jumps: 0, right_side, last: f64::NAN })
    }

    fn first(&mut self, volts: f64) -> Result<Sample, SolveError> {
        self.system.set_level(self.force, volts);
        let guess = self.system.zeros();
        let x = solve_at_rest(&mut self.system, &guess)?;
        self.sample(volts, x)
    }

    /// The sample at a solution that was just evaluated.
    fn sample(&mut self, volts: f64, x: Vec<f64>) -> Result<Sample, SolveError> {
        self.last = volts;
        let mut tangent = self.system.zeros();
        let system = &mut self.system;
        system.lu.factor(&system.jacobian).map_err(|place| SolveError::Singular { place: system.name(place) })?;
        self.right_side.fill(0.0);
        if let Some(own) = self.right_side.get_mut(self.branch) {
            *own = 1.0;
        }
        self.system.lu.solve(&mut self.right_side, &mut tangent);
        let of = |values: &[f64]| values.get(self.branch).copied().unwrap_or(0.0);
        // The source's own current flows out of the node.
        Ok(Sample { volts, current: -of(&x), slope: -of(&tangent), x, tangent })
    }

    /// The sample at another voltage, reached from one beside it.
    fn follow(&mut self, from: &Sample, volts: f64) -> Result<Sample, SolveError> {
        if let Some(sample) = self.step(from, volts)? {
            return Ok(sample);
        }
        let mut at = from.clone();
        let mut step = 0.5 * (volts - from.volts);
        while at.volts != volts {
            let next = if (volts - at.volts).abs() <= step.abs() { volts } else { at.volts + step };
            if let Some(sample) = self.step(&at, next)? {
                at = sample;
                step *= 2.0;
            } else if step.abs() > NARROWEST_SHARE * at.volts.abs() + NARROWEST {
                step *= 0.5;
            } else {
                // The curve turns back here: what lies beyond is found anew.
                self.jumps += 1;
                self.system.set_level(self.force, volts);
                self.system.adopt(&at.x);
                let x = solve_at_rest(&mut self.system, &at.x)?;
                return self.sample(volts, x);
            }
        }
        Ok(at)
    }

    /// One step along the tangent, and back to the curve.
    fn step(&mut self, from: &Sample, volts: f64) -> Result<Option<Sample>, SolveError> {
        let ahead = volts - from.volts;
        let mut x = from.x.clone();
        x.iter_mut().zip(&from.tangent).for_each(|(own, tangent)| *own += tangent * ahead);
        self.system.set_level(self.force, volts);
        if self.last != from.volts {
            self.system.adopt(&from.x);
        }
        match newton(&mut self.system, &mut x, &Setting::REST, MOST_ITERATIONS) {
            Ok(_) => self.sample(volts, x).map(Some),
            Err(_) => {
                self.last = f64::NAN;
                Ok(None)
            }
        }
    }

    /// The points between two samples.
    fn look_between(
        &mut self,
        before: &Sample,
        after: &Sample,
        circuit: &Circuit,
        points: &mut Vec<OperatingPoint>,
    ) -> Result<(), SolveError> {
        if !is_suspect(before, after) {
            return Ok(());
        }
        let mut waiting = vec![(before.clone(), after.clone())];
        while let Some((low, high)) = waiting.pop() {
            if has_root(&low, &high) {
                let root = self.root(low, high)?;
                let devices = circuit.devices().len();
                let solution = Solution::new(&self.system, root.x.get(..self.branch).unwrap_or_default(), devices);
                points.push(OperatingPoint { volts: root.volts, slope: root.slope, solution });
            } else if is_suspect(&low, &high) && waiting.len() < MOST_WAITING {
                let middle = self.follow(&low, 0.5 * (low.volts + high.volts))?;
                // The lower half is looked at first, so that points come in order.
                waiting.push((middle.clone(), high));
                waiting.push((low, middle));
            }
        }
        Ok(())
    }

    /// The point between two samples of different sign: Newton's method, kept inside by bisection.
    fn root(&mut self, mut low: Sample, mut high: Sample) -> Result<Sample, SolveError> {
        let mut best = if low.current.abs() < high.current.abs() { low.clone() } else { high.clone() };
        for _ in 0..MOST_ROOT_STEPS {
            if best.current == 0.0 {
                break;
            }
            let asked = best.volts - best.current / best.slope;
            let inside = asked > low.volts && asked < high.volts;
            let next = if inside { asked } else { 0.5 * (low.volts + high.volts) };
            let moved = (next - best.volts).abs();
            let near = if (next - low.volts).abs() < (next - high.volts).abs() { &low } else { &high };
            let sample = self.follow(&near.clone(), next)?;
            let same_as_low = (sample.current > 0.0) == (low.current > 0.0);
            *(if same_as_low { &mut low } else { &mut high }) = sample.clone();
            best = sample;
            if moved <= ROOT_SHARE * best.volts.abs() + ROOT_LEAST {
                break;
            }
        }
        Ok(best)
    }
}

fn has_root(low: &Sample, high: &Sample) -> bool {
    (low.current > 0.0) != (high.current > 0.0)
}

/// Whether there may be points between two samples.
fn is_suspect(low: &Sample, high: &Sample) -> bool {
    if has_root(low, high) {
        return true;
    }
    let width = high.volts - low.volts;
    let narrow = width <= NARROWEST_SHARE * high.volts.abs().max(low.volts.abs()) + NARROWEST;
    // Seen from either end, the tangent comes to the other sign within the interval.
    let turns = |ahead: f64, current: f64| (ahead > 0.0) != (current > 0.0);
    let from_low = turns(low.current + low.slope * width, low.current);
    let from_high = turns(high.current - high.slope * width, high.current);
    !narrow && (from_low || from_high)
}
