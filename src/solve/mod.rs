//! A small nonlinear circuit solver: operating points, dropout, loop gain and its margins, ramps.
//!
//! It takes a plain description of a circuit (nodes, and devices with their parameters), in SI units throughout.

mod bank;
mod circuit;
mod error;
mod from_model;
mod loop_gain;
mod margins;
mod matrix;
mod models;
mod newton;
mod points;
mod ramp;
mod solution;
mod stamps;
mod sweep;
mod system;
mod window;

#[cfg(test)]
mod tests;

pub use bank::{Bank, Network, SeriesRc};
pub use circuit::{Circuit, Device, DeviceId, GROUND, Node};
pub use error::SolveError;
pub use from_model::from_model;
pub use loop_gain::{Frequencies, LoopGain};
pub use margins::{Margins, margins, wrapped};
pub use matrix::LARGEST;
pub use models::{
    Bipolar, Capacitor, CurrentSource, Diode, Inductor, Mosfet, OpAmp, Polarity, ProgrammableShunt, Resistor,
    Transconductance, VoltageSource,
};
pub use points::{OperatingPoint, OperatingPoints, Search, operating_points};
pub use ramp::{Ramp, Trace, ramp};
pub use solution::{Solution, dc, dc_from, dc_near};
pub use stamps::{At, Control, MOST_LOCAL, Stamps, THERMAL_VOLTAGE};
pub use sweep::{DROPOUT_FALL, Dropout, LINE_STEP, dc_sweep, dropout, line_change};
pub use window::{
    Goal, LOAD_SHARES, USUAL_PHASE, Window, WindowKind, esr_grid, esr_scan, window, window_of, worst_margins,
};
