//! Why a circuit cannot be solved.

use thiserror::Error;

use super::LARGEST;

/// Why a circuit cannot be solved.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum SolveError {
    /// The circuit is larger than the solver is made for.
    #[error("the circuit has {count} unknowns, more than {LARGEST}")]
    TooLarge {
        /// How many unknowns it has.
        count: usize,
    },
    /// A device was given another number of nodes than its model has, or a node of another circuit.
    #[error("{device} lies between {wanted} nodes of the circuit and was given {given}")]
    Terminals {
        /// The device.
        device: String,
        /// The nodes that its model has.
        wanted: usize,
        /// The nodes given.
        given: usize,
    },
    /// A model has more unknowns than the solver has room for.
    #[error("the model of {device} has {count} unknowns, more than a device may have")]
    TooManyLocal {
        /// The device.
        device: String,
        /// How many unknowns.
        count: usize,
    },
    /// A parameter of a model cannot be.
    #[error("{device}: {wrong}")]
    Parameter {
        /// The device.
        device: String,
        /// What is wrong.
        wrong: &'static str,
    },
    /// A device of another circuit.
    #[error("the device is none of this circuit's")]
    UnknownDevice,
    /// A node of another circuit, or ground where a node is wanted.
    #[error("the node is none of this circuit's, or ground")]
    UnknownNode,
    /// A device that was taken for an independent source is none.
    #[error("{device} is no independent source")]
    NoSource {
        /// The device.
        device: String,
    },
    /// The equations do not determine an unknown.
    #[error("the circuit does not determine {place}")]
    Singular {
        /// The unknown.
        place: String,
    },
    /// The iteration did not arrive, by any of its ways.
    #[error("no operating point was found: {residual:e} A too much at {place}")]
    NoConvergence {
        /// The node at which the currents add up worst, by their tolerance.
        place: String,
        /// What is left of the currents there, in amperes (volts in the equation of a source).
        residual: f64,
    },
    /// The output does not fall as the input does.
    #[error("the output does not drop out at any input")]
    NoDropout,
    /// A search was given limits that are no numbers, or out of order.
    #[error("the limits of the search are out of order")]
    Limits,
}
